"""What the Balance page's charts and tables show."""

from __future__ import annotations

import numpy as np

from kitplanner.plan.records import Plan
from kitplanner.planners.results import BalanceResult
from kitplanner.report.wording import number, percent, plain
from kitplanner.ui.charts.chart_data import Axis, Bars, ChartData, Line, Mark, Shade, axis_over, clock_axis, thinned
from kitplanner.ui.pages.plain_table import TableData


def hours_chart(result: BalanceResult, words: tuple[str, str, str]) -> ChartData | None:
    """Return made (filled) against used (hollow) for each hour; words: made, used, axis."""
    if not result.hours:
        return None
    hour = np.array([row.hour + 0.5 for row in result.hours])
    made = np.array([row.made_wh for row in result.hours])
    used = np.array([row.use_wh for row in result.hours])
    bars = (
        Bars(hour - 0.22, made, 0.4, words[0], "flow"),
        Bars(hour + 0.22, used, 0.4, words[1], "second", hollow=True),
    )
    return ChartData(clock_axis(""), axis_over(np.concatenate([made, used]), words[2]), bars=bars)


def hours_table(result: BalanceResult, headers: tuple[str, ...]) -> TableData:
    """Return the hours as a table."""
    rows = tuple(
        (f"{row.hour:02d}:00–{row.hour + 1:02d}:00", number(row.made_wh), number(row.use_wh)) for row in result.hours
    )
    return TableData(headers, rows)


def days_chart(plan: Plan, result: BalanceResult, words: tuple[str, str, str]) -> ChartData | None:
    """Return the pooled store at the end of each day; words: axis, "empty", "day"."""
    if not result.days:
        return None
    start = sum(row.usable_wh for row in result.stores) + sum(row.credit_wh for row in result.devices)
    end = np.array([row.end_wh for row in result.days])
    x = np.array([0.0, *(float(row.day) for row in result.days)])
    y = np.array([start, *end])
    step = max(1, round(plan.days / 8))
    ticks = tuple(
        (float(day), f"{words[2]} {day}" if day == step else str(day)) for day in range(step, plan.days + 1, step)
    )
    marks, shades = [Mark(0.0, words[1], "warning" if float(end.min()) < 0 else "muted", level=True)], []
    if result.first_empty_day is not None:
        first = float(result.first_empty_day)
        shades.append(Shade(first - 1, first, f"{words[1]}: {words[2]} {result.first_empty_day}", hatched=True))
    x_axis = Axis("", -0.03 * plan.days, 1.03 * plan.days, ticks)
    line = Line(thinned(x), thinned(y), "", "line", dots=len(x) <= 16)
    return ChartData(x_axis, axis_over(y, words[0]), (line,), marks=tuple(marks), shades=tuple(shades))


def days_table(result: BalanceResult, headers: tuple[str, ...]) -> TableData:
    """Return the days as a table."""
    rows = tuple((str(row.day), number(row.use_wh), number(row.made_wh), number(row.end_wh)) for row in result.days)
    return TableData(headers, rows)


def cuts_chart(result: BalanceResult, words: tuple[str, str, str, str]) -> ChartData | None:
    """Return strict (filled) against shared (hollow) cut; words: strict, shared, axis, "priority"."""
    strict, shared = result.cuts.strict, result.cuts.shared
    if not strict:
        return None
    at = np.arange(len(strict), dtype=float)
    one = np.array([row.covered_fraction for row in strict])
    other = np.array([row.covered_fraction for row in shared])
    bars = (
        Bars(at - 0.2, one, 0.36, words[0], "flow", texts=tuple(percent(row.covered_fraction) for row in strict)),
        Bars(
            at + 0.2,
            other,
            0.36,
            words[1],
            "second",
            hollow=True,
            texts=tuple(percent(r.covered_fraction) for r in shared),
        ),
    )
    ticks = tuple((float(n), f"{words[3]} {row.priority}") for n, row in enumerate(strict))
    y = Axis(words[2], 0.0, 1.18, tuple((value, percent(value)) for value in (0.0, 0.5, 1.0)))
    return ChartData(Axis("", -0.6, len(strict) - 0.4, ticks), y, bars=bars)


def cuts_table(result: BalanceResult, headers: tuple[str, ...]) -> TableData:
    """Return both cuts side by side."""
    rows = tuple(
        (
            str(strict.priority),
            number(strict.need_wh),
            number(strict.have_wh),
            percent(strict.covered_fraction),
            number(shared.have_wh),
            percent(shared.covered_fraction),
        )
        for strict, shared in zip(result.cuts.strict, result.cuts.shared, strict=True)
    )
    return TableData(headers, rows)


def devices_table(plan: Plan, result: BalanceResult, headers: tuple[str, ...]) -> TableData:
    """Return use, start credit and what a shared cut leaves, for each device."""
    devices = {device.id: device for device in plan.devices}
    rows = []
    for row in result.devices:
        device = devices.get(row.device)
        if device is None:
            continue
        rows.append(
            (
                plain(device.name) or device.id,
                str(device.count),
                str(device.priority),
                number(row.use_wh),
                number(row.credit_wh),
                percent(row.covered_fraction),
            )
        )
    return TableData(headers, tuple(rows))


def stations_table(plan: Plan, result: BalanceResult, headers: tuple[str, ...]) -> TableData:
    """Return minutes and energy of each station."""
    names = {station.id: plain(station.name) or station.id for station in plan.stations}
    rows = tuple(
        (
            names.get(row.station, row.station),
            number(row.available_min, 0),
            number(row.offered_min, 0),
            number(row.used_min, 0),
            number(row.made_wh_per_day),
        )
        for row in result.stations
    )
    return TableData(headers, rows)
