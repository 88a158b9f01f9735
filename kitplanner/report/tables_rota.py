"""Bouts, charging and aims of a rota as rows: the same rows for terminal, spreadsheet and screen."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence

from msgspec import Struct

from kitplanner.domain.units import clock
from kitplanner.plan.records import Plan
from kitplanner.planners.rota.result import RotaAnswer, RotaBout, RotaCharge
from kitplanner.report.tables import Side
from kitplanner.report.twins import csv_safe
from kitplanner.report.wording import number, plain
from kitplanner.report.wording_rota import aim_words, bound_words, day_date, gap_words, value_words


class Rows(Struct, frozen=True, kw_only=True):
    """A table as text: header, rows, and on which side each column stands."""

    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    sides: tuple[Side, ...]


def ticket_words(first: int, count: int) -> str:
    """Return the tickets of a charging row."""
    return str(first) if count == 1 else f"{first}-{first + count - 1}"


def bout_table(plan: Plan, bouts: Iterable[RotaBout]) -> Rows:
    """Return bouts with ids and names, for the planner's own screen."""
    people = _named(plan.people)
    stations = _named(plan.stations)
    return Rows(
        header=("from", "to", "station", "unit", "turns", "watches", "Wh at S", ""),
        rows=tuple(
            (
                clock(bout.start_min),
                clock(bout.end_min),
                stations.get(bout.station, plain(bout.station)),
                str(bout.unit),
                people.get(bout.person, plain(bout.person)),
                people.get(bout.watcher, plain(bout.watcher)) if bout.watcher else "",
                number(bout.output_wh),
                "locked" if bout.locked else "",
            )
            for bout in bouts
        ),
        sides=("left", "left", "left", "right", "left", "left", "right", "left"),
    )


def charging_rows(plan: Plan, charging: Iterable[RotaCharge]) -> Rows:
    """Return charging rows with ids and names."""
    devices = _named(plan.devices)
    return Rows(
        header=("from", "to", "on charge", "count", "tickets", "Wh at O", ""),
        rows=tuple(
            (
                clock(row.start_min),
                clock(row.end_min),
                devices.get(row.device, plain(row.device)),
                str(row.count),
                ticket_words(row.first_ticket, row.count),
                number(row.energy_wh),
                "at the station" if row.at_station else "",
            )
            for row in charging
        ),
        sides=("left", "left", "left", "right", "right", "right", "left"),
    )


def aim_table(answer: RotaAnswer) -> Rows:
    """Return the aims in their order with value, bound and gap in words."""
    return Rows(
        header=("aim", "reached", "no rota below", "gap"),
        rows=tuple(
            (aim_words(row.name), value_words(row), bound_words(row), gap_words(row))
            for row in answer.solution.objectives
        ),
        sides=("left", "right", "right", "left"),
    )


def _named(records: Sequence[object]) -> dict[str, str]:
    """Return id and name of records by id; a name that only repeats the id stands once."""
    named = {}
    for record in records:
        key, name = str(getattr(record, "id", "")), plain(str(getattr(record, "name", "")))
        named[key] = plain(key) if name in ("", plain(key)) else f"{plain(key)} {name}"
    return named


def bouts_csv(plan: Plan, bouts: Iterable[RotaBout], *, names: bool = False) -> str:
    """Return bouts as CSV (RFC 4180) with ids; names of people only where they are asked for."""
    people = {one.id: plain(one.name) for one in plan.people}
    header = ["day", "date", "start", "end", "station", "unit", "person", "watcher", "output_wh", "locked"]
    rows = [
        [
            str(bout.day),
            day_date(plan, bout.day).isoformat(),
            clock(bout.start_min),
            clock(bout.end_min),
            bout.station,
            str(bout.unit),
            bout.person,
            bout.watcher or "",
            f"{bout.output_wh:.3f}",
            "yes" if bout.locked else "no",
            *([people.get(bout.person, ""), people.get(bout.watcher or "", "")] if names else []),
        ]
        for bout in bouts
    ]
    return _csv([*header, *(["person_name", "watcher_name"] if names else [])], rows)


def charging_csv(plan: Plan, charging: Iterable[RotaCharge]) -> str:
    """Return charging rows as CSV (RFC 4180); energy at the outlet."""
    rows = [
        [
            str(row.day),
            day_date(plan, row.day).isoformat(),
            clock(row.start_min),
            clock(row.end_min),
            row.device,
            str(row.count),
            str(row.first_ticket),
            f"{row.energy_wh:.3f}",
            "yes" if row.at_station else "no",
        ]
        for row in charging
    ]
    header = ["day", "date", "start", "end", "device", "count", "first_ticket", "energy_wh", "at_station"]
    return _csv(header, rows)


def _csv(header: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(header)
    writer.writerows([csv_safe(text) for text in row] for row in rows)
    return out.getvalue()
