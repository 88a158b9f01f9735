"""Which rows an effort table has: who may turn where, for which charge of which device, on which way.

A row without meaning is left out: a device without its own battery, a charge with nothing to fill, a person
with no minutes or not allowed at the station, a station out of service or without its guard.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import TypeVar

from msgspec import Struct

from kitplanner.plan.records import Device, Person, Plan, Record, Station
from kitplanner.planners.demand import use_wh_per_day
from kitplanner.planners.people import allowed_stations, person_limits
from kitplanner.planners.results import Charge, Route
from kitplanner.planners.supply import fed_stores

# The state of charge at which a day's use is put back: full enough for the next day, below the slow last part.
DAY_END_FRACTION = 0.80
CHARGES: tuple[Charge, ...] = ("full", "plan", "day")

AnyRecord = TypeVar("AnyRecord", bound=Record)


class EffortError(ValueError):
    """The question cannot be answered as asked; the text says why and what helps."""


class Span(Struct, frozen=True, kw_only=True):
    """From and to which state of charge, and how many such charges make up the row."""

    soc_from: float
    soc_to: float
    charges: float = 1.0


class Case(Struct, frozen=True, kw_only=True):
    """One row before its numbers."""

    device: Device
    station: Station
    person: Person
    route: Route
    charge: Charge
    span: Span


class Chosen(Struct, frozen=True, kw_only=True):
    """Which station, device and person to answer for; None: all."""

    station: str | None = None
    device: str | None = None
    person: str | None = None


def charge_span(device: Device, charge: Charge) -> Span | None:
    """Return what one charge of a device fills, None if there is nothing to fill.

    full: 0 to 1; plan: start to target; day: one day's use at D, ending at 0.80. A day's use above that is
    several charges from empty to 0.80.

    Parameters
    ----------
    device : Device
        One device line, values per unit
    charge : str
        "full", "plan" or "day"

    Returns
    -------
    Span or None
        States of charge [-] and the number of charges [-]

    Examples
    --------
    >>> phone = Device(id="p", name="phone", battery_wh=15.0, use_wh_per_day=6.0, start_fraction=0.8)
    >>> span = charge_span(phone, "day")
    >>> round(span.soc_from, 6), span.soc_to, span.charges
    (0.4, 0.8, 1.0)
    """
    if device.battery_wh is None or device.battery_wh <= 0.0:
        return None
    if charge == "full":
        return Span(soc_from=0.0, soc_to=1.0)
    if charge == "plan":
        if device.start_fraction >= device.target_fraction:
            return None
        return Span(soc_from=device.start_fraction, soc_to=device.target_fraction)
    used_fraction = use_wh_per_day(device) / device.battery_wh
    if used_fraction <= 0.0:
        return None
    filled = min(used_fraction, DAY_END_FRACTION)
    return Span(soc_from=DAY_END_FRACTION - filled, soc_to=DAY_END_FRACTION, charges=used_fraction / filled)


def cases(plan: Plan, chosen: Chosen) -> tuple[Case, ...]:
    """Return the rows of a plan in its order: device, station, person, route, charge.

    Parameters
    ----------
    plan : Plan
        The plan
    chosen : Chosen
        Restriction to one station, device or person

    Returns
    -------
    tuple of Case
        Rows before their numbers

    Raises
    ------
    EffortError
        When a chosen id is not in the plan
    """
    stations = _picked(plan.stations, chosen.station, "station")
    devices = _picked(plan.devices, chosen.device, "device")
    people = _picked(plan.people, chosen.person, "person")
    turners = {station.id: _turners(plan, station, people) for station in stations}
    ways = {station.id: _routes(plan, station) for station in stations}
    found: list[Case] = []
    for device in devices:
        spans = [(charge, span) for charge in CHARGES if (span := charge_span(device, charge)) is not None]
        found += [
            Case(device=device, station=station, person=person, route=route, charge=charge, span=span)
            for station in stations
            for person in turners[station.id]
            for route in ways[station.id]
            for charge, span in spans
        ]
    return tuple(found)


def _picked(records: tuple[AnyRecord, ...], wanted: str | None, kind: str) -> tuple[AnyRecord, ...]:
    """Return all records, or the one with the wanted id."""
    if wanted is None:
        return records
    found = tuple(record for record in records if _id_of(record) == wanted)
    if not found:
        raise EffortError(f"The plan has no {kind} '{wanted}'; choose one of: {_listed(records)}.")
    return found


def _id_of(record: Record) -> str:
    return str(getattr(record, "id", ""))


def _listed(records: Iterable[Record], most: int = 12) -> str:
    """Return the ids as text, the first few of a long list."""
    ids = [_id_of(record) for record in records]
    shown = ", ".join(ids[:most]) or "none"
    return f"{shown} and {len(ids) - most} more" if len(ids) > most else shown


def _turners(plan: Plan, station: Station, people: Iterable[Person]) -> tuple[Person, ...]:
    """Return who may turn at a station."""
    return tuple(
        person
        for person in people
        if _has_minutes(plan, person) and any(free.id == station.id for free in allowed_stations(plan, person))
    )


def _has_minutes(plan: Plan, person: Person) -> bool:
    limits = person_limits(plan, person)
    return limits.cap_min > 0 and limits.bout_min > 0


def _routes(plan: Plan, station: Station) -> tuple[Route, ...]:
    """Return the ways from a station into a device: through a store only if it feeds one."""
    return ("direct", "store") if fed_stores(plan, station) else ("direct",)
