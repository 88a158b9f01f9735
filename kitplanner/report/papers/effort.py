"""The effort table on paper: minutes of turning per charge, devices against stations.

It hangs on a wall, so it names devices and stations but no person: the first table gives the typical turner and
the range, the second lets each find their minutes by their own watts at the station.
"""

from __future__ import annotations

import datetime
import statistics
from collections.abc import Sequence

from msgspec import Struct

from kitplanner.plan.cautions import CAUTIONS, cautions_for
from kitplanner.plan.records import Device, Plan, Station
from kitplanner.planners.results import Charge, EffortLimit, EffortResult, EffortRow, Route
from kitplanner.report.content import Block, Cell, Heading, Paper, Paragraph, Table, cell, check_tables
from kitplanner.report.wording import minutes, number, plain
from kitplanner.report.wording_effort import effort_limit_words

PAPER_KEY = "effort"
_CHARGE_TITLES: tuple[tuple[Charge, str], ...] = (
    ("full", "One full charge, 0 to 100 %"),
    ("plan", "From the planned start to the target"),
    ("day", "One day's use, ending at 80 %"),
)
# Marks instead of colours, so that a copy of a copy still tells the reason.
_LIMIT_MARKS: tuple[tuple[EffortLimit, str], ...] = (
    ("person", "p"),
    ("machine", "g"),
    ("regulator", "r"),
    ("acceptance", "d"),
    ("too_little_current", "i"),
    ("connector", "c"),
)


class Printed(Struct, frozen=True, kw_only=True):
    """When and by which version a paper is printed."""

    date: datetime.date
    version: str


def effort_paper(plan: Plan, result: EffortResult, printed: Printed) -> Paper:
    """Return the effort table of a plan as a paper."""
    blocks: list[Block] = [Paragraph(text=_LEAD_TEXT, style="lead")]
    for charge, title in _CHARGE_TITLES:
        rows = [row for row in result.rows if row.charge == charge]
        if rows:
            blocks.append(_typical_table(plan, rows, title))
    full = [row for row in result.rows if row.charge == "full" and row.route == "direct"]
    tables = [table for station in plan.stations if (table := _by_watts_table(plan, station, full)) is not None]
    if tables:
        blocks += [Heading(text="Find your minutes"), Paragraph(text=_BY_WATTS_TEXT), *tables]
    if not result.rows:
        blocks.append(Paragraph(text=_NOTHING_TEXT, style="lead"))
    blocks += _cautions(plan)
    paper = Paper(
        key=PAPER_KEY,
        title="Minutes of turning per charge",
        subtitle=" · ".join(text for text in (plain(plan.title), plain(plan.place)) if text),
        blocks=tuple(blocks),
        foot=_foot(plan, printed),
    )
    check_tables(paper)
    return paper


_LEAD_TEXT = (
    "Minutes somebody turns until the device is charged; rests are not counted, so it takes longer by the clock. "
    "First the typical turner, below it the range in which about eight of ten such charges end. The letter tells why "
    "it is not quicker."
)
_BY_WATTS_TEXT = (
    "Watts as a meter at the station's socket shows them while you turn at a pace at which you can talk. "
    "Minutes for one full charge, the device plugged into the station itself."
)
_NOTHING_TEXT = (
    "With this plan nobody can charge a device: it has no device with its own battery, no station in service, or "
    "nobody with minutes to give."
)


def _cautions(plan: Plan) -> list[Paragraph]:
    """Return what stands at the effort table for this plan, and what the plan is."""
    shown = {one.caution.id: one.text for one in cautions_for(plan, PAPER_KEY)} | {"C14": CAUTIONS["C14"].text}
    return [Paragraph(label=key, text=text, style="caution") for key, text in shown.items()]


def _foot(plan: Plan, printed: Printed) -> str:
    last = plan.start + datetime.timedelta(days=max(plan.days, 1) - 1)
    return (
        f"{plain(plan.title)} · printed {printed.date.isoformat()} · valid {plan.start.isoformat()} to "
        f"{last.isoformat()} · version {printed.version}"
    )


def _typical_table(plan: Plan, rows: Sequence[EffortRow], title: str) -> Table:
    """Return devices against stations, direct and through a store, for the typical turner."""
    ways = [
        (station, route)
        for station in plan.stations
        for route in _ROUTES
        if any(row.station == station.id and row.route == route for row in rows)
    ]
    named = [device for device in plan.devices if any(row.device == device.id for row in rows)]
    header = (cell("Device", strong=True), *(_way_cell(station, route) for station, route in ways))
    body = tuple(
        (cell(_device_name(device)), *(_minutes_cell(_of(rows, device, station, route)) for station, route in ways))
        for device in named
    )
    return Table(
        title=title,
        header=(header,),
        rows=body,
        widths=(2.0, *(1.0 for _ in ways)),
        footnotes=_limit_notes(rows),
    )


_ROUTES: tuple[Route, ...] = ("direct", "store")


def _way_cell(station: Station, route: Route) -> Cell:
    return cell(plain(station.name), "through a store" if route == "store" else "direct", align="right", strong=True)


def _device_name(device: Device) -> str:
    return f"{plain(device.name)} (each of {device.count})" if device.count > 1 else plain(device.name)


def _of(rows: Sequence[EffortRow], device: Device, station: Station, route: Route) -> list[EffortRow]:
    return [row for row in rows if (row.device, row.station, row.route) == (device.id, station.id, route)]


def typical_row(rows: Sequence[EffortRow]) -> EffortRow | None:
    """Return the row of the turner in the middle: as many are quicker as are slower; who cannot comes last."""
    if not rows:
        return None
    ordered = sorted(rows, key=lambda row: (row.minutes_p50 is None, row.minutes_p50 or 0.0, row.person))
    return ordered[(len(ordered) - 1) // 2]


def _minutes_cell(rows: Sequence[EffortRow]) -> Cell:
    """Return the typical minutes, the range over people and estimates, and the mark of what limits."""
    row = typical_row(rows)
    if row is None:
        return cell("–", align="right")
    mark = dict(_LIMIT_MARKS)[row.limit]
    if row.minutes_p50 is None:
        return cell(f"no ({mark})", align="right")
    return cell(f"{minutes(row.minutes_p50)} ({mark})", _range_text(rows), align="right")


def _range_text(rows: Sequence[EffortRow]) -> str:
    """Return the range from the quicker turners' quick end to the slower ones' slow end, both as medians."""
    lows = [row.minutes_p10 for row in rows if row.minutes_p10 is not None]
    highs = [row.minutes_p90 for row in rows if row.minutes_p90 is not None]
    if not lows or not highs:
        return ""
    return f"{minutes(statistics.median(lows))} to {minutes(statistics.median(highs))}"


def _limit_notes(rows: Sequence[EffortRow]) -> tuple[str, ...]:
    """Return what the marks in this table mean."""
    used = {row.limit for row in rows}
    return tuple(f"({mark}) {effort_limit_words(limit)}." for limit, mark in _LIMIT_MARKS if limit in used)


def _by_watts_table(plan: Plan, station: Station, rows: Sequence[EffortRow]) -> Table | None:
    """Return minutes by watts at one measured or labelled station, most watts first; None if watts change nothing."""
    here = [
        row for row in rows if row.station == station.id and row.chain_from == "S" and row.station_output_w is not None
    ]
    devices = [device for device in plan.devices if any(row.device == device.id for row in here)]
    outputs = sorted({round(row.station_output_w or 0.0, 1) for row in here}, reverse=True)
    if len(outputs) < 2:
        return None
    body = []
    for output in outputs:
        same = [row for row in here if round(row.station_output_w or 0.0, 1) == output]
        cells = [_plain_minutes([row for row in same if row.device == device.id]) for device in devices]
        body.append((cell(f"{number(output)} W"), *cells))
    if len({tuple(item.text for item in row[1:]) for row in body}) < 2:
        return None
    header = (cell("Your watts", strong=True), *(cell(plain(d.name), align="right", strong=True) for d in devices))
    return Table(title=plain(station.name), header=(header,), rows=tuple(body))


def _plain_minutes(rows: Sequence[EffortRow]) -> Cell:
    row = typical_row(rows)
    return cell("–" if row is None else minutes(row.minutes_p50), align="right")
