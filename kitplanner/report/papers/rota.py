"""The rota for the wall: one day a page, time down, stations across, who turns and who watches.

It shows names as people chose them and what to do, never age, limits or reasons. Quiet hours and meals stand as
blocks between the rows; words carry everything, so a copy of a copy still reads.
"""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Iterable, Iterator, Sequence

from msgspec import Struct

from kitplanner.domain.units import clock
from kitplanner.plan.cautions import CAUTIONS, cautions_for
from kitplanner.plan.records import Block as PlanBlock
from kitplanner.plan.records import Plan, Station
from kitplanner.planners.balance_windows import DAY_MIN, day_parts
from kitplanner.planners.rota.result import RotaBout
from kitplanner.report.content import Block, Cell, Heading, PageBreak, Paper, Paragraph, Table, cell, check_tables
from kitplanner.report.papers.effort import Printed
from kitplanner.report.wording import plain
from kitplanner.report.wording_rota import day_date, day_words, display_names

PAPER_KEY = "rota"
# As many stations as leave room for times and names on an upright sheet.
UNITS_ACROSS = 5
# Up to here every start and end has a row of its own; more would not leave room for the rest of the page.
ROWS_DOWN = 17
# With so few stations the watcher stands in the same line, which brings most days onto one sheet.
ONE_LINE_UNITS = 3
WATCH_NOTE = "Name + who watches."
_HOUR_MIN = 60
_BLOCK_SHADE = 0.5

STOP_TEXT = (
    "Stop when you want. Stop at once and tell someone: pain in chest, arm, jaw or joint, dizzy, sick, odd heartbeat, "
    "breathless."
)
MISSING_TEXT = "Somebody missing? Tell the supervisor. Nobody turns longer for somebody else, nobody turns unwatched."


class WallRota(Struct, frozen=True, kw_only=True):
    """What the wall shows: bouts, edition (None for a proposal nobody adopted), last valid day."""

    bouts: tuple[RotaBout, ...]
    edition: int | None = None
    posted: bool = False
    valid_until_day: int | None = None


def rota_paper(plan: Plan, wall: WallRota, printed: Printed) -> Paper:
    """Return the rota of a plan as a paper, one day a page."""
    names = display_names(plan)
    blocks: list[Block] = []
    for day in range(1, plan.days + 1):
        if blocks:
            blocks.append(PageBreak())
        blocks += _day(plan, wall, day, names)
    paper = Paper(
        key=PAPER_KEY,
        title="Who turns when",
        subtitle=" · ".join(text for text in (plain(plan.title), plain(plan.place), edition_words(wall)) if text),
        blocks=tuple(blocks),
        foot=_foot(plan, wall, printed),
    )
    check_tables(paper)
    return paper


def edition_words(wall: WallRota) -> str:
    """Return which rota this is."""
    if wall.edition is None:
        return "proposal, not adopted"
    return f"version {wall.edition}" if wall.posted else f"version {wall.edition}, draft"


def _foot(plan: Plan, wall: WallRota, printed: Printed) -> str:
    until = day_date(plan, min(wall.valid_until_day or plan.days, plan.days))
    return (
        f"{plain(plan.title)} · {edition_words(wall)} · printed {printed.date.isoformat()} · valid "
        f"{plan.start.isoformat()} to {until.isoformat()} · program {printed.version}"
    )


def _day(plan: Plan, wall: WallRota, day: int, names: dict[str, str]) -> Iterator[Block]:
    """Yield one day: heading, stop rule, tables, what to do, cautions."""
    bouts = [bout for bout in wall.bouts if bout.day == day]
    yield Heading(text=day_words(plan, day))
    yield Paragraph(text="Supervisor: ______________________    Spare volunteers: ______________________")
    yield Paragraph(label="C5", text=STOP_TEXT, style="caution")
    columns = _columns(plan, bouts)
    if not bouts:
        yield Paragraph(text="Nobody turns on this day.", style="lead")
    for first in range(0, len(columns), UNITS_ACROSS):
        yield _table(plan, day, bouts, columns[first : first + UNITS_ACROSS], names)
    yield Paragraph(text=MISSING_TEXT)
    notes = _group_notes(plan, day)
    if notes:
        yield Paragraph(text=notes, style="note")
    shown = {one.caution.id: one.text for one in cautions_for(plan, PAPER_KEY)} | {"C12": CAUTIONS["C12"].text}
    for key in sorted(shown, key=lambda label: int(label[1:])):
        yield Paragraph(label=key, text=shown[key], style="caution")


_Column = tuple[Station, int]


def _columns(plan: Plan, bouts: Sequence[RotaBout]) -> list[_Column]:
    """Return the units that anybody turns on this day, in the plan's order."""
    used = {(bout.station, bout.unit) for bout in bouts}
    stations = {station.id: station for station in plan.stations}
    order = {station.id: place for place, station in enumerate(plan.stations)}
    known = [key for key in used if key[0] in stations]
    return [(stations[key], unit) for key, unit in sorted(known, key=lambda each: (order[each[0]], each[1]))]


def _table(plan: Plan, day: int, bouts: Sequence[RotaBout], columns: Sequence[_Column], names: dict[str, str]) -> Table:
    header = (
        cell("Time", strong=True),
        *(cell(*_unit_lines(station, unit), strong=True) for station, unit in columns),
    )
    by_unit = [[bout for bout in bouts if (bout.station, bout.unit) == (each.id, unit)] for each, unit in columns]
    one_line = len(columns) <= ONE_LINE_UNITS
    rows: list[tuple[Cell, ...]] = []
    for start, end, block in _slots(plan, day, [bout for line in by_unit for bout in line]):
        time = f"{clock(start)}–{clock(end)}"
        if block is not None:
            shaded = Cell(lines=(block,), align="centre", shade_fraction=_BLOCK_SHADE, span=len(columns))
            rows.append((cell(time, shade_fraction=_BLOCK_SHADE), shaded))
            continue
        cells = [_unit_cells(line, (start, end), names, one_line) for line in by_unit]
        # Several bouts of one unit in a row of an hour stand below each other, each with its own times.
        for place in range(max(1, *(len(column) for column in cells))):
            beside = (column[place] if place < len(column) else cell("" if place else "–") for column in cells)
            rows.append((cell("" if place else time), *beside))
    watched = any(bout.watcher for line in by_unit for bout in line)
    return Table(
        title="",
        header=(header,),
        rows=tuple(rows),
        widths=(0.8, *(1.5 for _ in columns)),
        footnotes=(WATCH_NOTE,) if one_line and watched else (),
    )


def _unit_lines(station: Station, unit: int) -> tuple[str, ...]:
    name = plain(station.name) or plain(station.id)
    return (name, f"unit {unit}") if station.count > 1 else (name,)


def _unit_cells(line: Sequence[RotaBout], row: tuple[int, int], names: dict[str, str], one_line: bool) -> list[Cell]:
    """Return the bouts that start on one unit in one row; if none does, who is still turning."""
    start, end = row
    cells = []
    for bout in sorted(line, key=lambda each: each.start_min):
        name = names.get(bout.person, plain(bout.person))
        if start <= bout.start_min < end:
            exact = (bout.start_min, bout.end_min) == row
            first = name if exact else f"{clock(bout.start_min)}–{clock(bout.end_min)} {name}"
            watcher = names.get(bout.watcher, plain(bout.watcher)) if bout.watcher else ""
            if not watcher:
                cells.append(cell(first))
            elif one_line:
                cells.append(cell(f"{first} + {watcher}"))
            else:
                cells.append(cell(first, f"{watcher} watches"))
    if not cells:
        on = [bout for bout in line if bout.start_min < start < bout.end_min]
        cells += [cell(f"({names.get(bout.person, plain(bout.person))} to {clock(bout.end_min)})") for bout in on]
    return cells


def _slots(plan: Plan, day: int, bouts: Sequence[RotaBout]) -> list[tuple[int, int, str | None]]:
    """Return the rows of a day: start, end, and the name of the block where one stands and nobody turns."""
    common = [
        (part, _block_words(block))
        for block in plan.blocks
        if not block.groups and block.kind in ("quiet", "meal") and (not block.days or day in block.days)
        for part in day_parts(block.windows)
    ]
    edges = _edges(bouts, [edge for part, _ in common for edge in part])
    rows: list[tuple[int, int, str | None]] = []
    idle: list[bool] = []
    for start, end in itertools.pairwise(edges):
        turned = any(bout.start_min < end and bout.end_min > start for bout in bouts)
        names = [name for part, name in common if part[0] <= start and end <= part[1]]
        block = ", ".join(dict.fromkeys(names)) if names and not turned else None
        if rows and idle[-1] and not turned and rows[-1][2] == block:
            rows[-1] = (rows[-1][0], end, block)
            continue
        rows.append((start, end, block))
        idle.append(not turned)
    return rows


def _edges(bouts: Sequence[RotaBout], block_edges: Iterable[int]) -> list[int]:
    """Return where rows begin and end: at every start and end, or at whole hours where these are too many."""
    edges = {0, DAY_MIN, *block_edges}
    exact = {bout.start_min for bout in bouts} | {bout.end_min for bout in bouts}
    if len(exact) <= ROWS_DOWN:
        return sorted(edges | exact)
    first = min(exact) // _HOUR_MIN * _HOUR_MIN
    last = min(DAY_MIN, -(-max(exact) // _HOUR_MIN) * _HOUR_MIN)
    return sorted(edges | set(range(first, last + 1, _HOUR_MIN)))


def _block_words(block: PlanBlock) -> str:
    name = plain(block.name)
    return name or ("Quiet hours" if block.kind == "quiet" else "Meal")


def _group_notes(plan: Plan, day: int) -> str:
    """Return the other times kept free, in one line: for which group, when."""
    groups = {group.id: plain(group.name) or plain(group.id) for group in plan.groups}
    notes = []
    for block in plan.blocks:
        if (block.days and day not in block.days) or not block.windows:
            continue
        if not block.groups and block.kind in ("quiet", "meal"):
            continue
        when = ", ".join(f"{clock(start)}–{clock(end)}" for start, end in day_parts(block.windows))
        whom = ", ".join(groups.get(group, plain(group)) for group in block.groups) or "all"
        notes.append(f"{plain(block.name) or block.kind} ({whom}) {when}")
    return f"Kept free: {'; '.join(notes)}." if notes else ""


def printed_now(version: str) -> Printed:
    """Return today's date with the program's version."""
    return Printed(date=dt.datetime.now().astimezone().date(), version=version)
