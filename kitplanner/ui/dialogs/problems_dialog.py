"""Every problem of the plan in one list, errors first, each leading to its field."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtWidgets import QWidget

from kitplanner.plan.edits import Path
from kitplanner.plan.problem import Problem
from kitplanner.plan.records import SECTIONS as COLLECTIONS
from kitplanner.plan.records import Plan
from kitplanner.report.wording import counted, plain, sentence
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs.jump_dialog import JumpDialog
from kitplanner.ui.dialogs.reading_table import Line
from kitplanner.ui.panels.problem_list import sentence_of
from kitplanner.ui.panels.sections import PLAN_SECTION, SECTIONS, section_of

_ORDER = {"error": 0, "warning": 1, "note": 2}


class ProblemsDialog(JumpDialog):
    """All problems of a plan."""

    def __init__(self, plan: Plan, problems: Sequence[Problem], parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Problems of the plan"), self.tr("Problems"), parent)
        words = {"error": self.tr("stops the answers"), "warning": self.tr("to look at"), "note": self.tr("note")}
        ordered = sorted(problems, key=lambda one: _ORDER.get(one.severity, 3))
        lines = [
            Line((words[one.severity], _place_words(plan, one.place), plain(sentence_of(one))), one.place)
            for one in ordered
        ]
        stopping = sum(one.severity == "error" for one in problems)
        said = self.tr("Nothing is wrong with this plan.")
        if problems:
            said = sentence(
                self.tr("{stopping}, {others} to look at").format(
                    stopping=counted(stopping, "problem stops the answers", "problems stop the answers"),
                    others=len(problems) - stopping,
                )
            )
        headers = (self.tr("Kind"), self.tr("Where"), self.tr("What and what to do")) if lines else ()
        self.show_content(said, (), headers, lines)


def _place_words(plan: Plan, place: Path) -> str:
    """Return section and record of a problem."""
    key = place[0] if place and place[0] in COLLECTIONS else PLAN_SECTION
    known = any(section.key == key for section in SECTIONS)
    title = translate("Sections", section_of(key).title) if known else plain(key.replace("_", " "))
    if key == PLAN_SECTION or len(place) < 2:
        return title
    found = (one for one in getattr(plan, key) if one.id == place[1])
    name = next((plain(one.name) for one in found if one.name), plain(place[1]))
    return f"{title}: {name}"
