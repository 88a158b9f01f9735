"""What the Bench page's charts and tables show, over cadence."""

from __future__ import annotations

import numpy as np
from msgspec import Struct

from kitplanner.planners.results import BenchPoint, BenchState, BenchSweep
from kitplanner.report.wording import number
from kitplanner.report.wording_bench import state_words
from kitplanner.ui.charts.chart_data import (
    Axis,
    ChartData,
    FloatArray,
    Line,
    Mark,
    Shade,
    axis_over,
    nice_step,
    thinned,
)
from kitplanner.ui.pages.plain_table import TableData


class BenchLook(Struct, frozen=True):
    """What frames every chart of the bench: comfort band with its words, volts to hold, torque limit."""

    comfort: tuple[float, float]
    comfort_text: str
    meter: tuple[float | None, float | None] = (None, None)
    torque_max_nm: float | None = None


class Curve(Struct, frozen=True):
    """One curve of a small chart: values, name, colour, dash."""

    y: FloatArray
    name: str = ""
    colour: str = "line"
    dash: str = "solid"


def cadence_axis(sweep: BenchSweep) -> Axis:
    """Return the shared x axis."""
    low, high = float(sweep.rpm[0]), float(sweep.rpm[-1])
    step = nice_step(high - low, 5)
    first = np.ceil(low / step - 1e-9) * step
    ticks = tuple((float(value), f"{value:.0f}") for value in np.arange(first, high + step * 0.01, step))
    return Axis("", low, high, ticks)


def failure_spans(sweep: BenchSweep) -> tuple[tuple[float, float, tuple[BenchState, ...]], ...]:
    """Return the stretches of cadence that share the same failure states."""
    spans: list[tuple[float, float, tuple[BenchState, ...]]] = []
    rpm = sweep.rpm
    edges = np.concatenate([rpm[:1], (rpm[1:] + rpm[:-1]) / 2, rpm[-1:]])
    for place, states in enumerate(sweep.states):
        low, high = float(edges[place]), float(edges[place + 1])
        if spans and spans[-1][2] == states:
            spans[-1] = (spans[-1][0], high, states)
        else:
            spans.append((low, high, states))
    return tuple(span for span in spans if span[2])


def small_chart(
    sweep: BenchSweep, curves: tuple[Curve, ...], label: str, look: BenchLook, *, marks: tuple[Mark, ...] = ()
) -> ChartData:
    """Return one small chart over cadence, comfort band and failing stretches shaded."""
    rpm = thinned(sweep.rpm)
    lines = tuple(
        Line(rpm, thinned(curve.y), curve.name, curve.colour, curve.dash)  # type: ignore[arg-type]
        for curve in curves
    )
    values = np.concatenate([curve.y for curve in curves] + [np.array([mark.at for mark in marks if mark.level])])
    shades = [Shade(look.comfort[0], look.comfort[1], look.comfort_text)]
    shades += [Shade(low, high, "", "rule", hatched=True) for low, high, _states in failure_spans(sweep)]
    return ChartData(cadence_axis(sweep), axis_over(values, label, parts=3), lines, marks=marks, shades=tuple(shades))


def states_lines(sweep: BenchSweep, pattern: str) -> tuple[str, ...]:
    """Return the failing stretches in words; `pattern` has {low}, {high} and {states}."""
    return tuple(
        pattern.format(low=number(low, 0), high=number(high, 0), states="; ".join(state_words(one) for one in states))
        for low, high, states in failure_spans(sweep)
    )


def stages_table(point: BenchPoint, headers: tuple[str, ...], stored: str) -> TableData:
    """Return each stage's watts, volts and amps, and what is stored."""
    rows = [
        (
            stage.name,
            number(stage.in_w, 2),
            number(stage.loss_w, 2),
            number(stage.out_w, 2),
            number(stage.in_v, 2),
            number(stage.in_a, 3),
            number(stage.out_v, 2),
            number(stage.out_a, 3),
        )
        for stage in point.stages
    ]
    rows.append((stored, number(point.stored_w, 2), "", "", "", "", "", ""))
    return TableData(headers, tuple(rows))


def sweep_table(sweep: BenchSweep, headers: tuple[str, ...], most: int = 25) -> TableData:
    """Return the bench over cadence as a table of at most `most` cadences."""
    places = np.linspace(0, len(sweep.rpm) - 1, min(most, len(sweep.rpm))).round().astype(int)
    columns = (
        (sweep.rpm, 0),
        (sweep.human_w, 2),
        (sweep.stored_w, 2),
        (sweep.torque_nm, 2),
        (sweep.plug_v, 2),
        (sweep.plug_a, 3),
        (sweep.meter_v, 2),
        (sweep.regulator_w, 2),
    )
    rows = []
    for place in places:
        figures = tuple(number(float(values[place]), decimals) for values, decimals in columns)
        rows.append((*figures, "; ".join(state_words(one) for one in sweep.states[place]) or "–"))
    return TableData(headers, tuple(rows))
