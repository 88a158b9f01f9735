"""The page What matters: which few inputs move the verdict and the minutes of one charge most."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QToolButton, QVBoxLayout, QWidget

from kitplanner.plan.edits import Path
from kitplanner.plan.fields import SECTION_KINDS
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import EffortRow
from kitplanner.planners.sensitivity_records import Sensitivity, Variation
from kitplanner.report.papers.effort import typical_row
from kitplanner.report.wording import plain, sentence
from kitplanner.report.wording_sensitivity import (
    HEADER,
    answer_words,
    bar_fractions,
    input_words,
    row_sentence,
    sensitivity_sentence,
    table_rows,
)
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.pages.matters_picture import Bar, BarPicture
from kitplanner.ui.pages.matters_work import Answered, MattersWork, Wanted
from kitplanner.ui.pages.plain_table import PlainTable, TableData
from kitplanner.ui.widgets.editors import LEAST_TARGET_PX

MOST_BARS = 12


def place_of_input(plan: Plan, variation: Variation) -> Path:
    """Return the field an input stands in, empty where it is no single field."""
    if not variation.key:
        return ()
    if not variation.record:
        return ("conditions", variation.key) if variation.kind == "conditions" else (variation.key,)
    for section, kind in SECTION_KINDS.items():
        if kind == variation.kind and any(one.id == variation.record for one in getattr(plan, section)):
            return (section, variation.record, variation.key)
    return ()


def bars_of(plan: Plan, found: Sensitivity) -> tuple[tuple[Bar, ...], float | None]:
    """Return the bars of the picture, and where the answer lies as the plan is now."""
    places = bar_fractions(found)
    bars = tuple(
        Bar(
            name=sentence(input_words(plan, row.variation)).rstrip("."),
            low=answer_words(found, row.answer_low),
            high=answer_words(found, row.answer_high),
            low_at=low_at,
            high_at=high_at,
            sentence=row_sentence(plan, found, row),
            place=place_of_input(plan, row.variation),
            is_choice=row.variation.is_choice,
        )
        for row, (low_at, high_at) in list(zip(found.rows, places, strict=True))[:MOST_BARS]
    )
    return bars, _centre(found)


def _centre(found: Sensitivity) -> float | None:
    known = [value for row in found.rows for value in (row.answer_low, row.answer_high) if value is not None]
    if found.answer is None or not known:
        return None
    low, high = min((*known, found.answer)), max((*known, found.answer))
    return (found.answer - low) / (high - low) if high > low else 1.0


class MattersFrame(QWidget):
    """One question: its sentence, its picture or its table, and the sentence of the chosen bar.

    Signals
    -------
    place_requested(place: Path)
        The user wants to go to the field of an input.
    """

    place_requested = Signal(object)

    def __init__(self, title: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._bars: tuple[Bar, ...] = ()
        self.title = plain_label(title, bold=True)
        self.sentence = plain_label()
        self.sentence.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.picture = BarPicture(title)
        self.table = PlainTable(self.tr("{title}, table").format(title=title), most_rows=MOST_BARS)
        self.chosen = plain_label(size="small")
        self.toggle = QToolButton()
        self.toggle.setText(self.tr("Table"))
        self.toggle.setCheckable(True)
        self.toggle.setMinimumHeight(LEAST_TARGET_PX)
        self.toggle.setAccessibleName(self.tr("{title}: show as table").format(title=title))
        self.toggle.setToolTip(self.tr("Show the same figures as a table"))
        self.toggle.toggled.connect(self._on_toggled)
        self.picture.bar_chosen.connect(self._on_chosen)
        self.picture.place_requested.connect(self.place_requested)
        head = QHBoxLayout()
        head.addWidget(self.title, 1)
        head.addWidget(self.toggle)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        layout.addLayout(head)
        for widget in (self.sentence, self.picture, self.table, self.chosen):
            layout.addWidget(widget)
        for part in (self.toggle, self.picture, self.table, self.chosen):
            part.hide()

    def show_answer(self, plan: Plan, found: Sensitivity | None, why_none: str) -> None:
        """Show an answer, or say why there is none."""
        if found is None or not found.rows:
            self._bars = ()
            self.picture.set_bars((), None)
            self.table.set_data(TableData((), ()))
            self.sentence.setText(why_none)
        else:
            self._bars, centre = bars_of(plan, found)
            self.sentence.setText(sensitivity_sentence(plan, found))
            self.table.set_data(TableData(HEADER, table_rows(plan, found)))
            self.picture.set_bars(self._bars, centre)
        self.setAccessibleDescription(self.sentence.text())
        self.toggle.setVisible(bool(self._bars))
        self._on_toggled(self.toggle.isChecked())

    @Slot(int)
    def _on_chosen(self, index: int) -> None:
        words = self._bars[index].sentence if index < len(self._bars) else ""
        if words and self._bars[index].place:
            words += " " + self.tr("Return goes to its field.")
        self.chosen.setText(words)

    @Slot(bool)
    def _on_toggled(self, as_table: bool) -> None:
        self.toggle.setText(self.tr("Picture") if as_table else self.tr("Table"))
        self.picture.setVisible(not as_table and bool(self._bars))
        self.chosen.setVisible(not as_table and bool(self._bars))
        self.table.setVisible(as_table and bool(self._bars))


class MattersPage(AnswerPage):
    """Coverage, and minutes of one charge, each with its inputs by how far they move it.

    Signals
    -------
    place_requested(place: Path)
        The user wants to go to the field of an input.
    """

    place_requested = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("What matters"), parent)
        self._rows: dict[str, EffortRow] = {}
        self._asked: Wanted | None = None
        self.work = MattersWork(self)
        self.intro = plain_label(
            self.tr(
                "Each input goes alone to the low and the high end of its range: one time in ten it is lower, one in "
                "ten higher. The longest bar is worth measuring first. The dashed line is the answer now."
            ),
            size="small",
        )
        self.coverage = MattersFrame(self.tr("What moves the coverage"))
        self.minutes = MattersFrame(self.tr("What moves the minutes of one full charge"))
        self.device = QComboBox()
        self.device.setAccessibleName(self.tr("Device"))
        self.device.setMinimumHeight(LEAST_TARGET_PX)
        self.device.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.device.setMinimumContentsLength(16)
        label = plain_label(self.tr("Device"))
        label.setBuddy(self.device)
        self._choice = QWidget()
        line = QHBoxLayout(self._choice)
        line.setContentsMargins(0, 0, 0, 0)
        line.addWidget(label)
        line.addWidget(self.device, 1)
        for widget in (self.intro, self.coverage, self._choice, self.minutes):
            self.column.addWidget(widget)
        self.column.addStretch(1)
        for frame in (self.coverage, self.minutes):
            frame.place_requested.connect(self.place_requested)
        self.device.currentIndexChanged.connect(self._on_device)
        self.work.answered.connect(self._on_answered)

    def refresh(self) -> None:
        """Ask anew for the plan as it is now; the old answer stays until then."""
        plan, results = self.plan, self.results
        assert plan is not None
        if results is None or results.balance is None or results.has_errors:
            self._show_none(self._why_none(results))
            return
        self._fill_devices(results.effort_plan or plan, results)
        self._ask()

    def _why_none(self, results: Results | None) -> str:
        if results is not None and results.has_errors:
            return self.tr("The plan has problems that stop the calculation; they are listed with the plan.")
        return self.tr("The answers are being worked out.")

    def _show_none(self, why: str) -> None:
        self._asked = None
        plan = self.plan or Plan()
        self.coverage.show_answer(plan, None, why)
        self.minutes.show_answer(plan, None, "")
        self._choice.hide()

    def _fill_devices(self, plan: Plan, results: Results) -> None:
        """Offer the devices that can be charged, each with its typical row, phones first."""
        found: dict[str, list[EffortRow]] = {}
        for row in results.effort.rows if results.effort is not None else ():
            if row.charge == "full" and row.minutes_p50 is not None:
                found.setdefault(row.device, []).append(row)
        self._rows = {}
        wanted = []
        for device in sorted(plan.devices, key=lambda one: one.kind != "phone"):
            direct = [row for row in found.get(device.id, []) if row.route == "direct"]
            typical = typical_row(direct or found.get(device.id, []))
            if typical is not None:
                self._rows[device.id] = typical
                wanted.append((plain(device.name) or device.id, device.id))
        now = [(self.device.itemText(n), self.device.itemData(n)) for n in range(self.device.count())]
        if wanted != now:
            kept = self.device.currentData()
            self.device.blockSignals(True)
            self.device.clear()
            for text, key in wanted:
                self.device.addItem(text, key)
            self.device.setCurrentIndex(max(0, self.device.findData(kept)) if wanted else -1)
            self.device.blockSignals(False)
        self._choice.setVisible(bool(wanted))

    def _ask(self) -> None:
        plan, results = self.plan, self.results
        if plan is None or results is None or results.balance is None:
            return
        wanted = Wanted(plan, self._rows.get(self.device.currentData()), results.effort_plan)
        if wanted == self._asked:
            return
        self._asked = wanted
        if not self.coverage.sentence.text():
            self.coverage.sentence.setText(self.tr("Being worked out."))
        self.work.ask(wanted)

    @Slot()
    def _on_device(self) -> None:
        self._ask()

    @Slot(object)
    def _on_answered(self, found: Answered) -> None:
        if self._asked is not found.wanted:
            return
        plan = found.wanted.plan
        none = self.tr("Nothing has to be covered, so nothing moves the coverage.")
        self.coverage.show_answer(plan, found.coverage, none)
        no_charge = self.tr("No device of this plan is charged by turning.")
        self.minutes.show_answer(found.wanted.row_plan or plan, found.minutes, no_charge)
