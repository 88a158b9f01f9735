"""The left side: section switch, cautions to acknowledge, problems, and the panel of the section shown."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping

from PySide6.QtCore import QByteArray, Qt, Signal, Slot
from PySide6.QtWidgets import QHBoxLayout, QScrollArea, QSizePolicy, QStackedWidget, QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution, cautions_for
from kitplanner.plan.edits import Path
from kitplanner.plan.problem import Problem
from kitplanner.plan.records import SECTIONS as COLLECTIONS
from kitplanner.plan.records import Plan
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import translate
from kitplanner.session.gates import Gates
from kitplanner.ui.guard import guarded
from kitplanner.ui.panels.problem_list import ProblemList, sentence_of
from kitplanner.ui.panels.section_panel import SectionPanel
from kitplanner.ui.panels.section_switch import SectionSwitch
from kitplanner.ui.panels.sections import PLAN_SECTION, section_of
from kitplanner.ui.widgets.caution_band import CautionBand
from kitplanner.ui.widgets.plain import plain_label

# Sections whose cautions stand at another name.
_PLACE_OF_SECTION = {PLAN_SECTION: "conditions"}
_WITHOUT_CAUTIONS = ("other_sources", "blocks", "groups")


class SectionsPane(QWidget):
    """All sections, one in sight; panels are made when they are first shown.

    Signals
    -------
    section_chosen(key: str)
        Another section is shown.
    record_chosen(section: str, record_id: str)
        The user chose another record.
    """

    section_chosen = Signal(str)
    record_chosen = Signal(str, str)

    def __init__(self, editing: Editing, gates: Gates, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._editing = editing
        self._plan = editing.plan
        self._problems: tuple[Problem, ...] = ()
        self._panels: dict[str, SectionPanel] = {}
        self._is_open = False
        self._split = QByteArray()
        self._last_place: Path | None = None
        self.switch = SectionSwitch(self)
        self.band = CautionBand(gates, self)
        self.problems = ProblemList(self)
        self._title = plain_label(size="title", bold=True)
        self._count = plain_label(size="small")
        self._stack = QStackedWidget(self)
        self._build()
        self.switch.section_chosen.connect(self._on_section_chosen)
        self.problems.field_requested.connect(self.go_to)

    @property
    def current(self) -> str:
        """Key of the section shown."""
        return self.switch.current()

    @property
    def panel(self) -> SectionPanel:
        """Panel of the section shown."""
        return self._panel_of(self.current)

    def show_section(self, key: str) -> None:
        """Show a section."""
        self.switch.choose(key)

    @property
    def split(self) -> QByteArray:
        """Where the user put the bar between table and form; empty while the window chooses."""
        return self._split

    @Slot(object)
    def keep_split(self, state: QByteArray) -> None:
        """Put the bar between table and form at one place in every section."""
        self._split = QByteArray(state)
        for panel in self._panels.values():
            if panel is not self.sender():
                panel.keep_split(self._split)

    def open_details(self) -> None:
        """From now on build forms at once; called after the window's first picture."""
        self._is_open = True
        self.panel.open_details()

    def show_plan(self, plan: Plan) -> None:
        """Show another plan, with the problems known so far."""
        self._plan = plan
        self._show_current()

    def show_problems(self, problems: tuple[Problem, ...]) -> None:
        """Show the problems of the plan."""
        self._problems = problems
        self._show_current()

    @Slot(object)
    def go_to(self, path: Path) -> None:
        """Show the section, record and field at a path."""
        key = _section_key(path)
        self.switch.choose(key)
        self.panel.focus_field(path)

    def go_to_next_problem(self) -> bool:
        """Go to the first problem, or to the one after the field with the keyboard; False without problems."""
        places = [problem.place for problem in self._problems if problem.severity != "note"]
        if not places:
            return False
        last = self._last_place
        place = places[0] if last is None or last not in places else places[(places.index(last) + 1) % len(places)]
        self._last_place = place
        self.go_to(place)
        return True

    def use_wide(self, wide: bool) -> None:
        """Use the side list or the box to switch sections."""
        self.switch.use_list(wide)
        self._title.setVisible(wide)

    def restyle(self) -> None:
        """Follow the theme and the text size."""
        self.switch.fit()
        for panel in self._panels.values():
            panel.recolour()

    def _build(self) -> None:
        for label in (self._title, self._count):
            label.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        head = QHBoxLayout()
        head.setContentsMargins(4, 8, 4, 2)
        head.setSpacing(10)
        head.addWidget(self._title)
        head.addWidget(self.switch.box, 1)
        head.addWidget(self._count)
        head.addStretch(1)
        column = QVBoxLayout()
        column.setContentsMargins(0, 2, 6, 6)
        column.setSpacing(5)
        column.addWidget(self.band)
        column.addWidget(self.problems)
        column.addWidget(self._stack, 1)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(8)
        layout.addWidget(self.switch.list)
        # Which section this is stays in sight when a low window makes the rest scroll.
        side = QVBoxLayout()
        side.setSpacing(0)
        side.addLayout(head)
        side.addWidget(_scrolling(column), 1)
        layout.addLayout(side, 1)

    def _panel_of(self, key: str) -> SectionPanel:
        if key not in self._panels:
            panel = SectionPanel(section_of(key), self._editing, self._stack)
            panel.record_chosen.connect(self.record_chosen)
            panel.split_moved.connect(self.keep_split)
            panel.keep_split(self._split)
            self._stack.addWidget(panel)
            self._panels[key] = panel
        return self._panels[key]

    @Slot(str)
    def _on_section_chosen(self, key: str) -> None:
        self.band.leave()
        self._show_current()
        self._stack.setCurrentWidget(self._panel_of(key))
        if self._is_open:
            self.panel.open_details()
        self.section_chosen.emit(key)

    def _show_current(self) -> None:
        key = self.current
        cautions = self._cautions_of(key)
        self._title.setText(translate("Sections", section_of(key).title))
        self._count.setText(self._count_words(key))
        self.band.show_cautions(tuple(one for one in cautions if one.how == "gate"))
        self.switch.show_counts(self._plan, Counter(_section_key(one.place) for one in self._wrong()))
        here = [problem for problem in self._problems if _section_key(problem.place) == key]
        names = {} if key == PLAN_SECTION else dict(self._editing.names(key))
        self.problems.show_problems(here, names)
        panel = self._panel_of(key)
        panel.show_plan(self._plan, _by_path(self._problems))
        panel.show_cautions(tuple(one for one in cautions if one.how == "inline"))

    def _wrong(self) -> list[Problem]:
        return [problem for problem in self._problems if problem.severity != "note"]

    def _cautions_of(self, key: str) -> tuple[ShownCaution, ...]:
        if key in _WITHOUT_CAUTIONS:
            return ()
        shown = cautions_for(self._plan, _PLACE_OF_SECTION.get(key, key))
        if key == "people" and any(person.watts_by == "self_test" for person in self._plan.people):
            shown = (*cautions_for(self._plan, "self_test"), *shown)
        return shown

    def _count_words(self, key: str) -> str:
        if key == PLAN_SECTION:
            return ""
        records = getattr(self._plan, key)
        if key == "people":
            resting = sum(1 for person in records if person.cap_min == 0)
            if resting:
                return self.tr("{count} people, {resting} at 0 min").format(count=len(records), resting=resting)
        if key in ("stations", "stores", "devices", "medical_needs"):
            return self.tr("{count} in all").format(count=sum(record.count for record in records)) if records else ""
        return str(len(records)) if records else ""


class _Column(QWidget):
    """A column that asks a scroll area for its least height only; its tables and forms scroll by themselves."""

    @guarded(0)
    def heightForWidth(self, width: int) -> int:
        """Return the least height at a width, all texts in full."""
        layout = self.layout()
        return 0 if layout is None else layout.minimumHeightForWidth(width)


def _scrolling(column: QVBoxLayout) -> QScrollArea:
    """Put a column into an area that scrolls when a low window or large text leaves too little room."""
    content = _Column()
    content.setLayout(column)
    area = QScrollArea()
    area.setWidgetResizable(True)
    area.setFrameShape(QScrollArea.Shape.NoFrame)
    area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
    area.setMinimumSize(280, 160)
    area.setWidget(content)
    return area


def _section_key(path: Path) -> str:
    """Tell which section of the window a place of the plan belongs to."""
    return path[0] if path and path[0] in COLLECTIONS else PLAN_SECTION


def _by_path(problems: tuple[Problem, ...]) -> Mapping[Path, str]:
    """Put the sentences of problems under their places; several at one place follow each other."""
    found: dict[Path, str] = {}
    for problem in problems:
        if problem.severity != "note":
            words = sentence_of(problem)
            found[problem.place] = f"{found[problem.place]} {words}" if problem.place in found else words
    return found
