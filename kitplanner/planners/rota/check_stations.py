"""The judge on stations: service, hours, quiet, units and outages, two bouts on one unit, a unit's minutes a day.

Part of the judge (`check.py`): imports plan and domain only.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from itertools import pairwise

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.records import Plan, Station
from kitplanner.planners.rota.check_finding import (
    Turn,
    Violation,
    is_inside,
    named,
    overlap_min,
    parts_of,
    quiet_parts,
    steps_of,
    words,
)


def check_stations(plan: Plan, turns: Iterable[Turn]) -> Iterator[Violation]:
    """Yield every rule about stations that a rota breaks.

    Parameters
    ----------
    plan : Plan
        The plan.
    turns : iterable of Turn
        Bouts by time.
    """
    by_station: dict[str, list[Turn]] = {}
    for turn in turns:
        by_station.setdefault(turn.station.id, []).append(turn)
    for own in by_station.values():
        station = own[0].station
        for turn in own:
            yield from _check_service(turn)
            yield from _check_open(plan, turn)
            if not 1 <= turn.unit <= station.count:
                text = f"{named(turn.person)} turns at unit {turn.unit} of {named(station)} {turn.when}; there are "
                yield turn.broken("units", text + f"{station.count}.")
        yield from _check_outages(station, own)
        yield from _check_units(station, own)


def _check_service(turn: Turn) -> Iterator[Violation]:
    station = turn.station
    if not station.in_service:
        text = f"{named(turn.person)} turns at {named(station)} {turn.when}, which is out of service."
        yield turn.broken("service", text)
    if not station.guarded:
        text = f"{named(turn.person)} turns at {named(station)} {turn.when}, whose guard is missing."
        yield turn.broken("guard", text)


def _check_open(plan: Plan, turn: Turn) -> Iterator[Violation]:
    hours = parts_of(turn.station.hours)
    if hours and not is_inside(turn.start, turn.end, hours):
        beyond = turn.length - overlap_min(turn.start, turn.end, hours)
        text = f"{named(turn.station)} is used {turn.when}, {beyond} min outside its hours ({words(hours)})."
        yield turn.broken("station_hours", text)
    silent = quiet_parts(plan, turn.day)
    clash = overlap_min(turn.start, turn.end, silent)
    if clash:
        text = f"{named(turn.station)} is used {turn.when}, {clash} min in the quiet hours ({words(silent)})."
        yield turn.broken("quiet", text)


def _check_outages(station: Station, turns: list[Turn]) -> Iterator[Violation]:
    """Yield moments at which more units turn than are in service, once a day."""
    for day in sorted({turn.day for turn in turns}):
        here = [turn for turn in turns if turn.day == day]
        out = [
            (minutes_of_day(spell.start), minutes_of_day(spell.end), spell.count)
            for spell in station.outages
            if spell.day == day
        ]
        edges = {turn.start for turn in here} | {turn.end for turn in here}
        edges |= {edge for start, end, _ in out for edge in (start, end)}
        for start, end in steps_of(edges):
            busy = [turn for turn in here if turn.start <= start and end <= turn.end]
            left = max(0, station.count - sum(count for first, last, count in out if first <= start and end <= last))
            if len(busy) > left:
                text = (
                    f"{len(busy)} units of {named(station)} turn on day {day} at {clock(start)}; {left} are in "
                    f"service, {len(busy) - left} too many."
                )
                yield busy[-1].broken("outage" if left < station.count else "units", text)
                break


def _check_units(station: Station, turns: list[Turn]) -> Iterator[Violation]:
    """Yield bouts that overlap on a unit, and units that turn too long a day."""
    by_unit: dict[int, list[Turn]] = {}
    for turn in turns:
        by_unit.setdefault(turn.unit, []).append(turn)
    for unit, own in by_unit.items():
        for before, after in pairwise(own):
            if after.since < before.until:
                text = (
                    f"{named(after.person)} starts at unit {unit} of {named(station)} {after.when}, "
                    f"{before.until - after.since} min before {named(before.person)} ends."
                )
                yield after.broken("overlap", text)
        if station.daily_min is None:
            continue
        for day in sorted({turn.day for turn in own}):
            total = sum(turn.length for turn in own if turn.day == day)
            if total > station.daily_min:
                text = (
                    f"Unit {unit} of {named(station)} turns {total} min on day {day}; at most {station.daily_min} min, "
                    f"{total - station.daily_min} min too many."
                )
                yield Violation(rule="daily", text=text, day=day, station=station.id)
