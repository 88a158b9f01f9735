"""Two plans side by side: one sentence, one table of answers and of every field that differs."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from kitplanner.plan.edits import Path
from kitplanner.plan.records import Plan
from kitplanner.planners.compare import Comparison, Difference, compare
from kitplanner.report.wording import plain, sentence
from kitplanner.report.wording_compare import answer_rows, comparison_sentence, field_rows
from kitplanner.ui.dialogs.jump_dialog import JumpDialog
from kitplanner.ui.dialogs.reading_table import Line


def place_in(plan: Plan, difference: Difference) -> Path:
    """Return the field or record of the open plan that a difference leads to, empty where it has none."""
    if difference.section in ("rota", "log", "pack_items"):
        return ()
    if difference.record and not any(one.id == difference.record for one in getattr(plan, difference.section)):
        return ()
    path = difference.path
    return path[:2] if difference.aspect != "value" else path


class CompareDialog(JumpDialog):
    """The open plan, second, against another, first."""

    def __init__(self, other: Plan, other_name: str, plan: Plan, name: str, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Two plans compared"), self.tr("Answers and differences"), parent)
        found = compare(other, plan)
        headers = (self.tr("What"), self.tr("Field"), plain(other_name), plain(name))
        words = self.tr("First: {first}. Second, the open plan: {second}.")
        self.show_content(
            comparison_sentence(found),
            [words.format(first=plain(other_name), second=plain(name))],
            headers,
            [*self._answers(found), *self._fields(other, plan, found)],
        )

    def _answers(self, found: Comparison) -> list[Line]:
        return [Line((self.tr("Answer"), row[0], row[1], row[2])) for row in answer_rows(found)]

    @staticmethod
    def _fields(other: Plan, plan: Plan, found: Comparison) -> list[Line]:
        lines = []
        for row, one in zip(field_rows(other, plan, found), found.differences, strict=True):
            what = f"{sentence(row[0]).rstrip('.')}: {row[1]}" if row[1] else sentence(row[0]).rstrip(".")
            lines.append(Line((what, *row[2:]), place_in(plan, one)))
        return lines
