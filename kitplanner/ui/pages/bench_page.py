"""The Bench page: a station by parts over cadence, its stages in watts, the band of volts on the meter."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QTimer, Signal, Slot
from PySide6.QtWidgets import QVBoxLayout, QWidget

from kitplanner.plan.records import Plan, Station
from kitplanner.planners.bench import BenchError, bench_point, bench_sweep
from kitplanner.planners.results import BenchPoint, BenchSweep
from kitplanner.planners.station_error import StationError
from kitplanner.planners.stations import comfort_of
from kitplanner.report.wording import number
from kitplanner.report.wording_bench import meter_sentence, point_sentence, sweep_sentence
from kitplanner.ui.charts.chart_data import Mark
from kitplanner.ui.meter_gauge import MeterGauge
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.bench_charts import (
    BenchLook,
    Curve,
    small_chart,
    stages_table,
    states_lines,
    sweep_table,
)
from kitplanner.ui.pages.bench_controls import BenchControls
from kitplanner.ui.pages.chart_frame import ChartFrame, plain_label
from kitplanner.ui.pages.columns import Columns
from kitplanner.ui.pages.plain_table import PlainTable

_SMALL_LINES = 9.0


class BenchPage(AnswerPage):
    """One station on the bench.

    Signals
    -------
    point_changed(point: BenchPoint | None, name: str)
        The operating point in sight, for the energy line.
    """

    point_changed = Signal(object, str)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Bench"), parent)
        self.controls = BenchControls()
        self.answer = plain_label(bold=True)
        self.meter_words = plain_label()
        self.gauge = MeterGauge()
        self.states = plain_label(size="small")
        self.stages = PlainTable(self.tr("Stages of the chain"), most_rows=14)
        self.watts = self._frame(self.tr("Watts"))
        self.volts = self._frame(self.tr("Volts at the plug"))
        self.amps = self._frame(self.tr("Current at the plug"))
        self.torque = self._frame(self.tr("Torque at the crank (M)"))
        self.meter = self._frame(self.tr("Volts into the regulator"))
        self.heat = self._frame(self.tr("Heat in the regulator"))
        self._sweep: BenchSweep | None = None
        self._swept: tuple[Station | None, float | None] = (None, None)
        self.point: BenchPoint | None = None
        self._answers = QWidget()
        self._build()
        self._ask_timer = QTimer(self)
        self._ask_timer.setSingleShot(True)
        self._ask_timer.setInterval(16)
        self._ask_timer.timeout.connect(self._work_out)
        self.controls.asked.connect(self._ask_timer.start)
        self.controls.station_chosen.connect(self._ask_timer.start)

    @staticmethod
    def _frame(title: str) -> ChartFrame:
        return ChartFrame(title, height_lines=_SMALL_LINES)

    def small_frames(self) -> tuple[ChartFrame, ...]:
        """Return the small charts in reading order."""
        return (self.watts, self.volts, self.amps, self.torque, self.meter, self.heat)

    def _build(self) -> None:
        self.column.addWidget(self.controls)
        self.column.addWidget(self.answer)
        layout = QVBoxLayout(self._answers)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(10)
        words = QWidget()
        column = QVBoxLayout(words)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.meter_words)
        column.addWidget(self.states)
        column.addStretch(1)
        layout.addWidget(Columns([self.gauge, words], 290, align_top=True))
        layout.addWidget(plain_label(self.tr("Stage by stage, at this cadence"), bold=True))
        layout.addWidget(self.stages)
        frames = self.small_frames()
        for left, right in zip(frames[::2], frames[1::2], strict=True):
            layout.addWidget(Columns([left, right], 300))
        self.column.addWidget(self._answers)
        self.column.addStretch(1)

    def choose_station(self, station: str) -> None:
        """Put a station on the bench."""
        self.controls.choose(station)

    def refresh(self) -> None:
        """Offer the plan's stations and work the chosen one out."""
        assert self.plan is not None
        self.controls.set_plan(self.plan)
        self._work_out()

    def _station(self, plan: Plan) -> Station | None:
        key = self.controls.station.currentData()
        return next((one for one in plan.stations if one.id == key), None)

    @Slot()
    def _work_out(self) -> None:
        plan = self.plan
        if plan is None or not self.isVisible():
            return
        station = self._station(plan)
        self.controls.setVisible(station is not None)
        if station is None:
            self._say(
                self.tr(
                    "No station of this plan is described by its parts, and the bench needs its machine and stages. "
                    "Choose “its parts” at “Described by” of a station, or look at the example: File, New from, Bench."
                )
            )
            return
        amps = self.controls.asked_amps()
        try:
            if self._sweep is None or self._swept[0] is not station or self._swept[1] != amps:
                self._sweep = bench_sweep(plan, station.id, amps)
                self._swept = (station, amps)
                self._show_sweep(plan, station, self._sweep)
            point = bench_point(plan, station.id, self.controls.asked_rpm(), amps)
        except (BenchError, StationError) as error:
            self._sweep = None
            self._say(str(error))
            return
        self._show_point(station, point, self._sweep)

    def _say(self, words: str) -> None:
        self._answers.hide()
        self.answer.setText(words)
        self.point = None
        self.point_changed.emit(None, "")

    def _look(self, station: Station, point: BenchPoint) -> BenchLook:
        comfort = comfort_of(station)
        return BenchLook(
            (comfort.low_rpm, comfort.high_rpm),
            self.tr("comfort"),
            (point.meter_low_v, point.meter_high_v),
            comfort.torque_max_nm,
        )

    def _show_sweep(self, plan: Plan, station: Station, sweep: BenchSweep) -> None:
        point = bench_point(plan, station.id, None, self.controls.asked_amps())
        look = self._look(station, point)
        self.controls.set_range(float(sweep.rpm[0]), float(sweep.rpm[-1]))
        heads = (
            self.tr("turns a minute"),
            self.tr("turning, W (M)"),
            self.tr("stored, W"),
            self.tr("torque, Nm"),
            self.tr("plug, V"),
            self.tr("plug, A"),
            self.tr("regulator in, V"),
            self.tr("regulator heat, W"),
            self.tr("state"),
        )
        table = sweep_table(sweep, heads)
        plug = tuple(Mark(level, f"{level:g} V", "muted", level=True) for level in (4.75, 5.25))
        meter = tuple(
            Mark(level, f"{number(level, 2)} V", "second", level=True) for level in look.meter if level is not None
        )
        both = (Curve(sweep.human_w, self.tr("turning")), Curve(sweep.stored_w, self.tr("stored"), "second", "dashed"))
        self.watts.set_content(
            small_chart(sweep, both, self.tr("W over turns a minute"), look), sweep_sentence(sweep), table
        )
        for frame, values, unit, marks in (
            (self.volts, sweep.plug_v, self.tr("V over turns a minute"), plug),
            (self.amps, sweep.plug_a, self.tr("A over turns a minute"), ()),
            (self.torque, sweep.torque_nm, self.tr("Nm over turns a minute"), ()),
            (self.meter, sweep.meter_v, self.tr("V over turns a minute"), meter),
            (self.heat, sweep.regulator_w, self.tr("W over turns a minute"), ()),
        ):
            has_values = bool(np.isfinite(values).any())
            frame.setVisible(has_values)
            if has_values:
                frame.set_content(small_chart(sweep, (Curve(values),), unit, look, marks=marks), "", table)
        lines = states_lines(sweep, self.tr("{low} to {high} turns a minute: {states}."))
        self.states.setText("\n".join(lines))

    def _show_point(self, station: Station, point: BenchPoint, sweep: BenchSweep) -> None:
        self._answers.show()
        self.point = point
        self.answer.setText(point_sentence(point, station.name))
        words = meter_sentence(point)
        self.meter_words.setText(words)
        self.meter_words.setVisible(bool(words))
        now = None
        if point.rpm is not None:
            now = float(np.interp(point.rpm, sweep.rpm, sweep.meter_v))
        self.gauge.set_reading(point.meter_low_v, point.meter_high_v, now, words)
        heads = (
            self.tr("stage"),
            self.tr("in, W"),
            self.tr("lost, W"),
            self.tr("on, W"),
            self.tr("in, V"),
            self.tr("in, A"),
            self.tr("out, V"),
            self.tr("out, A"),
        )
        self.stages.set_data(stages_table(point, heads, self.tr("stored in the battery")))
        if self.controls.asked_rpm() is None:
            self.controls.show_rpm(point.rpm)
        for frame in self.small_frames():
            frame.set_cursor(point.rpm)
        self.point_changed.emit(point, station.name)
