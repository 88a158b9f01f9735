"""The Effort page: minutes of turning per charge, the charge curve of the chosen pair, one charge without a plan."""

from __future__ import annotations

import math

import numpy as np
from PySide6.QtCore import QTimer, Slot
from PySide6.QtWidgets import QComboBox, QLabel, QVBoxLayout, QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.effort import charge_curve
from kitplanner.planners.results import Charge, ChargeCurve, EffortResult, EffortRow, Route
from kitplanner.report.papers.effort import typical_row
from kitplanner.report.wording import minutes, percent, plain
from kitplanner.report.wording_effort import curve_sentence, effort_limit_words, effort_sentence, matrix_sentence
from kitplanner.ui.charts.chart_data import Axis, Band, ChartData, Line, Mark, minutes_axis, thinned
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.chart_frame import ChartFrame, plain_label
from kitplanner.ui.pages.columns import Columns
from kitplanner.ui.pages.effort_matrix import EffortMatrix, Matrix
from kitplanner.ui.pages.one_charge_box import OneChargeBox
from kitplanner.ui.pages.plain_table import TableData
from kitplanner.ui.widgets.editors import LEAST_TARGET_PX

TYPICAL = ""
CURVE_DELAY_MS = 30
RowKey = tuple[str, str, str, Route, Charge]


def rows_by_key(result: EffortResult | None) -> dict[RowKey, EffortRow]:
    """Return the rows of an effort answer by device, station, person, route and charge."""
    rows = result.rows if result is not None else ()
    return {(row.device, row.station, row.person, row.route, row.charge): row for row in rows}


def build_matrix(plan: Plan, rows: dict[RowKey, EffortRow], person: str, route: Route, charge: Charge) -> Matrix:
    """Return the table of one person (or the typical one) for one way and one charge; empty lines left out."""
    found: dict[tuple[str, str], list[EffortRow]] = {}
    for (device, station, who, way, what), row in rows.items():
        if way == route and what == charge and person in (TYPICAL, who):
            found.setdefault((device, station), []).append(row)
    devices = [device for device in plan.devices if any(key[0] == device.id for key in found)]
    stations = [station for station in plan.stations if any(key[1] == station.id for key in found)]
    return Matrix(
        tuple(plain(device.name) or device.id for device in devices),
        tuple(plain(station.name) or station.id for station in stations),
        tuple(tuple(typical_row(found.get((d.id, s.id), [])) for s in stations) for d in devices),
    )


def curve_chart(direct: ChargeCurve | None, store: ChargeCurve | None, names: tuple[str, str, str]) -> ChartData | None:
    """Return state of charge over minutes: direct with its range, through a store dashed."""
    curves = [curve for curve in (direct, store) if curve is not None and len(curve.minutes) > 1]
    if not curves:
        return None
    most = max(float(curve.minutes[-1]) for curve in curves)
    lines, bands, marks = [], [], []
    for curve, name, colour, dash in ((direct, names[0], "line", "solid"), (store, names[1], "second", "dashed")):
        if curve is None or len(curve.minutes) < 2:
            continue
        time = thinned(curve.minutes)
        lines.append(Line(time, thinned(curve.soc_p50_fraction), "", colour, dash))  # type: ignore[arg-type]
        if curve is curves[0]:
            bands.append(Band(time, thinned(curve.soc_p10_fraction), thinned(curve.soc_p90_fraction), colour))
        marks.append(Mark(float(curve.minutes[-1]), f"{name} {minutes(float(curve.minutes[-1]))}", colour, foot=True))
    ticks = tuple((value, percent(value)) for value in (0.0, 0.25, 0.5, 0.75, 1.0))
    y = Axis(names[2], 0.0, 1.0, ticks)
    return ChartData(minutes_axis(most * 1.02, ""), y, tuple(lines), tuple(bands), marks=tuple(marks))


class EffortPage(AnswerPage):
    """Minutes of turning for each device and station."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Effort"), parent)
        self._rows: dict[RowKey, EffortRow] = {}
        self._rows_of: EffortResult | None = None
        self._of_plan: Plan | None = None
        self.person = QComboBox()
        self.route = QComboBox()
        self.charge = QComboBox()
        self.route.addItem(self.tr("straight from the station"), "direct")
        self.route.addItem(self.tr("through a store"), "store")
        self.charge.addItem(self.tr("one full charge"), "full")
        self.charge.addItem(self.tr("from start to target"), "plan")
        self.charge.addItem(self.tr("one day's use"), "day")
        self.summary = plain_label()
        self.matrix = EffortMatrix(self.tr("Minutes of turning, devices by stations"))
        self.chosen = plain_label(size="text", bold=True)
        self.curve = ChartFrame(self.tr("State of charge while turning"), height_lines=14)
        self.one_charge = OneChargeBox()
        self._build()
        self._curve_timer = QTimer(self)
        self._curve_timer.setSingleShot(True)
        self._curve_timer.setInterval(CURVE_DELAY_MS)
        self._curve_timer.timeout.connect(self._draw_curve)
        for box in (self.person, self.route, self.charge):
            box.currentIndexChanged.connect(self._on_choice)
        self.matrix.row_chosen.connect(self._on_row_chosen)

    def _build(self) -> None:
        choices = []
        for words, box in (
            (self.tr("&Who"), self.person),
            (self.tr("W&ay"), self.route),
            (self.tr("&Charge"), self.charge),
        ):
            holder = QWidget()
            column = QVBoxLayout(holder)
            column.setContentsMargins(0, 0, 0, 0)
            column.setSpacing(2)
            label = QLabel(words)
            label.setBuddy(box)
            box.setAccessibleName(words.replace("&", ""))
            box.setMinimumContentsLength(8)
            box.setMinimumHeight(LEAST_TARGET_PX)
            box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
            column.addWidget(label)
            column.addWidget(box)
            choices.append(holder)
        self.column.addWidget(Columns(choices, 145))
        self.column.addWidget(self.summary)
        self.column.addWidget(self.matrix)
        self.column.addWidget(self.chosen)
        self.column.addWidget(Columns([self.curve, self.one_charge], 320, first=2))
        self.column.addStretch(1)

    def refresh(self) -> None:
        """Draw the table for the present choices."""
        plan, results = self.plan, self.results
        assert plan is not None
        effort = results.effort if results is not None else None
        if effort is not self._rows_of:
            self._rows_of, self._rows = effort, rows_by_key(effort)
        # Minutes arrive a moment after an edit: until then table, names and curve stay those of the plan they are for.
        self._of_plan = results.effort_plan if results is not None and results.effort_plan is not None else plan
        self._fill_people(self._of_plan)
        self._show_matrix()

    def _fill_people(self, plan: Plan) -> None:
        wanted = [(self.tr("typical (middle of all)"), TYPICAL)]
        wanted += [(plain(person.name) or person.id, person.id) for person in plan.people]
        now = [(self.person.itemText(n), self.person.itemData(n)) for n in range(self.person.count())]
        if wanted == now:
            return
        kept = self.person.currentData()
        self.person.blockSignals(True)
        self.person.clear()
        for text, key in wanted:
            self.person.addItem(text, key)
        self.person.setCurrentIndex(max(0, self.person.findData(kept)))
        self.person.blockSignals(False)

    @Slot()
    def _on_choice(self) -> None:
        if self._of_plan is not None:
            self._show_matrix()

    def _show_matrix(self) -> None:
        assert self._of_plan is not None
        person, route, charge = (
            self.person.currentData() or TYPICAL,
            self.route.currentData(),
            self.charge.currentData(),
        )
        matrix = build_matrix(self._of_plan, self._rows, person, route, charge)
        rows = [row for line in matrix.cells for row in line if row is not None]
        self.matrix.setVisible(bool(rows))
        self.summary.setText(self._summary_words(self._of_plan, rows) if rows else self._why_empty())
        self.matrix.set_matrix(matrix)
        self.chosen.setVisible(bool(rows))
        self.curve.setVisible(bool(rows))

    def _summary_words(self, plan: Plan, rows: list[EffortRow]) -> str:
        """Say shortest and longest, and what the shade of the cells means where they differ."""
        shades = self.tr("The darker a cell, the longer the turning.") if len(rows) > 1 else ""
        return " ".join(words for words in (matrix_sentence(plan, rows), shades) if words) + self._why_old()

    def _why_old(self) -> str:
        if self.results is None or self.results.is_effort_current:
            return ""
        return " " + self.tr("The last change is being worked out.")

    def _why_empty(self) -> str:
        if self.results is not None and self.results.has_errors:
            return self.tr("The plan has problems that stop the calculation; they are listed with the plan.")
        if self.results is None or self.results.effort is None:
            return self.tr("The minutes are being worked out.")
        return self.tr("No row for this choice: no battery to charge here, no minutes for this person, or no store.")

    @Slot(object)
    def _on_row_chosen(self, row: EffortRow | None) -> None:
        if row is None or self._of_plan is None:
            self.chosen.setText(self.tr("Choose a cell to see its charge curve."))
        else:
            self.chosen.setText(effort_sentence(self._of_plan, row))
        self._curve_timer.start()

    @Slot()
    def _draw_curve(self) -> None:
        row, plan = self.matrix.chosen_row(), self._of_plan
        if not self.isVisible():
            self._is_stale = True
            return
        if row is None or plan is None:
            self.curve.set_content(None, "", TableData((), ()))
            return
        pair = (self._sibling(row, "direct"), self._sibling(row, "store"))
        direct, store = (charge_curve(plan, one) if one is not None and one.minutes_p50 else None for one in pair)
        names = (self.tr("direct"), self.tr("through a store"), self.tr("state of charge"))
        chart = curve_chart(direct, store, names)
        self.curve.set_content(chart, self._curve_words(row, direct, store), curve_table(direct, store, names))

    def _sibling(self, row: EffortRow, route: Route) -> EffortRow | None:
        return self._rows.get((row.device, row.station, row.person, route, row.charge))

    def _curve_words(self, row: EffortRow, direct: ChargeCurve | None, store: ChargeCurve | None) -> str:
        main = direct if row.route == "direct" else store
        if main is None:
            return self.tr("No curve: {reason}.").format(reason=effort_limit_words(row.limit))
        words = curve_sentence(main)
        if direct is not None and store is not None:
            more = float(store.minutes[-1] - direct.minutes[-1])
            words += " " + (
                self.tr("Through a store it takes {more} more.").format(more=minutes(more))
                if more >= 0
                else self.tr("Through a store it takes {less} less.").format(less=minutes(-more))
            )
        return words


def curve_table(direct: ChargeCurve | None, store: ChargeCurve | None, words: tuple[str, str, str]) -> TableData:
    """Return the curves as a table: minutes to reach each tenth of charge."""
    headers = [words[2]]
    columns = []
    for curve, name in ((direct, words[0]), (store, words[1])):
        if curve is not None and len(curve.minutes) > 1:
            headers.append(name)
            columns.append(curve)
    if not columns:
        return TableData((), ())
    low = min(float(curve.soc_p50_fraction[0]) for curve in columns)
    high = max(float(curve.soc_p50_fraction[-1]) for curve in columns)
    rows = []
    for level in np.arange(math.ceil(low * 10 - 1e-9), math.floor(high * 10 + 1e-9) + 1) / 10:
        cells = [percent(float(level))]
        for curve in columns:
            soc = curve.soc_p50_fraction
            reached = level <= soc[-1] + 1e-9
            cells.append(minutes(float(np.interp(level, soc, curve.minutes))) if reached else "–")
        rows.append(tuple(cells))
    return TableData(tuple(headers), tuple(rows))
