"""The five questions of a new plan: days with what authorities ask for, and how many of each kind."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import Any, cast

from msgspec import Struct
from PySide6.QtCore import QDate, Qt, Slot
from PySide6.QtWidgets import (
    QButtonGroup,
    QDateEdit,
    QFormLayout,
    QGridLayout,
    QLabel,
    QPushButton,
    QSpinBox,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.catalogue_kinds import CatalogueSection, kinds
from kitplanner.plan.edits_start import AGE_BANDS, MOST_DAYS, MOST_PEOPLE, MOST_UNITS, AgeBand, Chosen, InBand
from kitplanner.plan.horizons import HORIZONS
from kitplanner.session.field_text import translate
from kitplanner.ui.widgets.plain import colour_label, plain_label

_LEAST_PX = 24
_WIDE_DATE = "yyyy-MM-dd"
Made = Callable[[str, int], Any]


class DaysQuestion(QWidget):
    """How many days, from when; presets with the guidance behind them."""

    def __init__(self, today: dt.date, days: int, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._presets = QButtonGroup(self)
        self._days = QSpinBox(self)
        self._days.setRange(1, MOST_DAYS)
        self._days.setValue(days)
        self._days.setMinimumHeight(_LEAST_PX)
        self._start = QDateEdit(QDate(today.year, today.month, today.day), self)
        self._start.setDisplayFormat(_WIDE_DATE)
        self._start.setMinimumHeight(_LEAST_PX)
        self.guidance = plain_label(wrap=True)
        colour_label(self.guidance, "muted")
        self._build()
        self._days.valueChanged.connect(self._on_days)
        self._presets.idClicked.connect(self._on_preset)
        self._on_days(days)

    def begin(self) -> None:
        """Put the keyboard into the number of days."""
        self._days.setFocus(Qt.FocusReason.OtherFocusReason)
        self._days.selectAll()

    def days(self) -> int:
        """Days to plan."""
        return self._days.value()

    def set_days(self, days: int) -> None:
        """Set the days to plan."""
        self._days.setValue(days)

    def start(self) -> dt.date:
        """First day."""
        day = self._start.date()
        return dt.date(day.year(), day.month(), day.day())

    def _build(self) -> None:
        layout = QVBoxLayout(self)
        layout.addWidget(plain_label(self.tr("How many days must it last?"), size="title", bold=True))
        form = QFormLayout()
        form.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.FieldsStayAtSizeHint)
        form.addRow(self.tr("&Days"), self._days)
        form.addRow(self.tr("&First day"), self._start)
        layout.addLayout(form)
        grid = QGridLayout()
        for place, horizon in enumerate(HORIZONS):
            button = QPushButton(translate("Horizons", horizon.label), self)
            button.setAccessibleDescription("; ".join(horizon.sentences))
            button.setCheckable(True)
            button.setAutoDefault(False)
            button.setMinimumHeight(_LEAST_PX)
            self._presets.addButton(button, horizon.days)
            grid.addWidget(button, place // 2, place % 2)
        layout.addLayout(grid)
        layout.addWidget(self.guidance)
        note = self.tr("Told from reports about the guidance; look at your own authority's page before you rely on it.")
        self._note = plain_label(note, wrap=True)
        colour_label(self._note, "muted")
        layout.addWidget(self._note)
        layout.addStretch(1)

    @Slot(int)
    def _on_preset(self, days: int) -> None:
        self._days.setValue(days)

    @Slot(int)
    def _on_days(self, days: int) -> None:
        found = next((horizon for horizon in HORIZONS if horizon.days == days), None)
        self._presets.setExclusive(False)
        for button in self._presets.buttons():
            button.setChecked(self._presets.id(button) == days)
        self._presets.setExclusive(True)
        self.guidance.setText("\n".join(found.sentences) if found else self.tr("No guidance is known for this number."))


class Line(Struct, frozen=True):
    """One kind that can be counted: key, label, one line of help, number to begin with."""

    key: str
    label: str
    help: str
    count: int


class HowManyQuestion(QWidget):
    """A number for each of several kinds."""

    def __init__(
        self, title: str, hint: str, lines: tuple[Line, ...], made: Callable[[str, int], Any], most: int
    ) -> None:
        super().__init__()
        self._made = made
        self._boxes: dict[str, QSpinBox] = {}
        self._total = plain_label()
        layout = QVBoxLayout(self)
        layout.addWidget(plain_label(title, size="title", bold=True, wrap=True))
        layout.addWidget(plain_label(hint, wrap=True))
        grid = QGridLayout()
        grid.setHorizontalSpacing(16)
        grid.setColumnStretch(2, 1)
        for row, line in enumerate(lines):
            box = QSpinBox(self)
            box.setRange(0, most)
            box.setValue(line.count)
            box.setMinimumHeight(_LEAST_PX)
            box.setAccessibleName(line.label)
            box.setAccessibleDescription(line.help)
            box.valueChanged.connect(self._show_total)
            label = QLabel(line.label.replace("&", "&&"))
            label.setTextFormat(Qt.TextFormat.PlainText)
            label.setBuddy(box)
            grid.addWidget(label, row, 0)
            grid.addWidget(box, row, 1)
            grid.addWidget(plain_label(line.help, wrap=True), row, 2)
            self._boxes[line.key] = box
        layout.addLayout(grid)
        layout.addWidget(self._total)
        layout.addStretch(1)
        self._show_total()

    def begin(self) -> None:
        """Put the keyboard into the first number that is not zero, else into the first."""
        box = next((box for box in self._boxes.values() if box.value()), next(iter(self._boxes.values())))
        box.setFocus(Qt.FocusReason.OtherFocusReason)
        box.selectAll()

    def box(self, key: str) -> QSpinBox:
        """The number of a kind."""
        return self._boxes[key]

    def chosen(self) -> tuple[Any, ...]:
        """Return every kind with a number of at least one."""
        return tuple(self._made(key, box.value()) for key, box in self._boxes.items() if box.value())

    @Slot()
    def _show_total(self) -> None:
        total = sum(box.value() for box in self._boxes.values())
        self._total.setText(self.tr("{count} in all").format(count=total) if total else self.tr("none"))


def people_question(suggested: tuple[InBand, ...]) -> HowManyQuestion:
    """Return the question who takes part, by age groups."""
    counts = {group.band: group.count for group in suggested}
    lines = tuple(
        Line(band, translate("Start", "aged {band}").format(band=translate("Start", label)), "", counts.get(band, 0))
        for band, (label, _) in AGE_BANDS.items()
    )
    title = translate("Start", "Who may turn?")
    hint = translate("Start", "Only those who want to. Ages set how long and how hard; change single people later.")
    return HowManyQuestion(title, hint, lines, _in_band, MOST_PEOPLE)


def question_of_kinds(section: CatalogueSection, title: str, suggested: tuple[Chosen, ...]) -> HowManyQuestion:
    """Return the question how many of each kind of the catalogue."""
    counts = {one.key: one.count for one in suggested}
    lines = tuple(
        Line(
            kind.key,
            translate("Catalogue", kind.name),
            translate("Catalogue", kind.help),
            counts.get(kind.key, 0),
        )
        for kind in kinds(section)
    )
    hint = translate("Start", "Usual figures are filled in and marked; own ones can replace them at any time.")
    return HowManyQuestion(title, hint, lines, Chosen, MOST_UNITS)


def _in_band(band: str, count: int) -> InBand:
    return InBand(cast(AgeBand, band), count)
