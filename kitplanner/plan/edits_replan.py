"""What has happened by now, as one edit of the plan: who left, which stations are out, how hot it is.

The rota is then made again from that moment on (`planners/rota/replan.py`); actual store levels are read there and are
no part of the plan.
"""

from __future__ import annotations

import math

from msgspec import field, structs

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits import Edit, EditError, chain, get_value, new_id, set_value
from kitplanner.plan.records import Person, Plan, Record, Rota, Spell, Station, TemperaturePart

DAY_MIN = 1440


class StationOut(Record, frozen=True):
    """Units of a station line that are out from now on, to the end of `last_day` (None: of today).

    The line's last units are meant: of two stands, one out leaves the first.
    """

    station: str
    units: int = 1
    last_day: int | None = None


class Now(Record, frozen=True):
    """A moment of the plan and what has changed by then.

    `absent` are away for the rest of today, `gone` to the end of the plan; `store_fractions` are the states of charge
    read at the stores, `air_degc` the temperature for the rest of today.
    """

    day: int
    minute: int
    absent: tuple[str, ...] = ()
    gone: tuple[str, ...] = ()
    stations_out: tuple[StationOut, ...] = ()
    store_fractions: dict[str, float] = field(default_factory=dict)
    air_degc: float | None = None


def grid_of(rota: Rota) -> int:
    """Return the grid on which every bout of a rota stands: its own, finer where bouts were moved by hand [min].

    Examples
    --------
    >>> from kitplanner.plan.records import Bout
    >>> moved = Bout(id="b", day=1, start="09:02", end="09:22", station="s", person="p")
    >>> grid_of(Rota(id="r", slot_min=10, bouts=(moved,)))
    2
    """
    edges = (int(minutes_of_day(edge)) for bout in rota.bouts for edge in (bout.start, bout.end))
    return math.gcd(rota.slot_min, DAY_MIN, *edges)


def events_edit(now: Now) -> Edit:
    """Return the edit that enters what has happened: absences, outages, and heat with its limits switched on.

    All of it holds from the end of the rota's slot that has begun by now: that slot is past, and who turned in it did.

    Raises
    ------
    EditError
        The moment lies outside the plan, or a person, station or store is not in it.

    Examples
    --------
    >>> plan = Plan(people=(Person(id="p", name="Oruun"),))
    >>> [spell.start for spell in events_edit(Now(day=2, minute=720, absent=("p",)))(plan).people[0].absences]
    ['12:00']
    """

    def edit(plan: Plan) -> Plan:
        _require_inside(plan, now)
        since = _slot_end(plan.rota, now)
        edits = [_away(person, since, now.day) for person in now.absent if person not in now.gone]
        edits += [_away(person, since, plan.days) for person in now.gone]
        edits += [_out(out, since) for out in now.stations_out]
        if now.air_degc is not None:
            edits.append(_heat(since, now.air_degc))
        return chain(*edits)(plan)

    return edit


def put_rota(rota: Rota) -> Edit:
    """Return the edit that puts a rota in the place of the plan's."""
    return lambda plan: plan if plan.rota == rota else structs.replace(plan, rota=rota)


def _require_inside(plan: Plan, now: Now) -> None:
    if not 1 <= now.day <= plan.days:
        raise EditError(("days",), f"day {now.day} is not one of the plan's {plan.days} days", "choose one of them")
    if not 0 <= now.minute < DAY_MIN:
        raise EditError(("days",), f"minute {now.minute} is not in a day", "choose a time from 00:00 to 23:59")
    for store, fraction in now.store_fractions.items():
        get_value(plan, ("stores", store))
        if not 0.0 <= fraction <= 1.0:
            raise EditError(
                ("stores", store, "start_fraction"), f"{fraction:g} is not a state of charge", "enter 0 to 100 %"
            )


def _slot_end(rota: Rota | None, now: Now) -> Now:
    """Return the moment at which the slot that has begun by now ends; now itself without a rota."""
    slot_min = grid_of(rota) if rota is not None else 1
    return structs.replace(now, minute=-(-now.minute // slot_min) * slot_min)


def _spells(since: Now, last_day: int, count: int = 1) -> tuple[Spell, ...]:
    """Return the rest of today, where any is left, and the whole of each later day up to a last one."""
    whole = (Spell(day=day, start="00:00", end="24:00", count=count) for day in range(since.day + 1, last_day + 1))
    if since.minute >= DAY_MIN:
        return tuple(whole)
    return (Spell(day=since.day, start=clock(since.minute), end="24:00", count=count), *whole)


def _away(person_id: str, since: Now, last_day: int) -> Edit:
    def edit(plan: Plan) -> Plan:
        person: Person = get_value(plan, ("people", person_id))
        absences = (*person.absences, *_spells(since, last_day))
        return set_value(("people", person_id, "absences"), absences)(plan)

    return edit


def _out(out: StationOut, since: Now) -> Edit:
    def edit(plan: Plan) -> Plan:
        station: Station = get_value(plan, ("stations", out.station))
        if not 1 <= out.units <= station.count:
            raise EditError(
                ("stations", out.station, "outages"),
                f"{out.units} units cannot be out of {station.count}",
                "enter how many are out",
            )
        last = since.day if out.last_day is None else min(out.last_day, plan.days)
        outages = (*station.outages, *_spells(since, last, out.units))
        return set_value(("stations", out.station, "outages"), outages)(plan)

    return edit


def _heat(since: Now, air_degc: float) -> Edit:
    def edit(plan: Plan) -> Plan:
        if since.minute >= DAY_MIN:
            return plan
        part = TemperaturePart(
            id=new_id(plan, ("conditions", "temperatures")),
            name=f"Day {since.day} from {clock(since.minute)}",
            day=since.day,
            start=clock(since.minute),
            end="24:00",
            air_degc=float(air_degc),
        )
        parts = (*plan.conditions.temperatures, part)
        plan = set_value(("conditions", "temperatures"), parts)(plan)
        return set_value(("conditions", "heat_limits"), True)(plan)

    return edit
