"""A lever as an edit of the plan: one named change to one value, the same for the window, the command and tests.

A lever's key is its kind and the record it works on, such as `use:C-D1` or `units:C-S1`; two kinds need no record.
Choosing several levers is one edit too (`levers_edit`), so that it is one step to undo.

| key | value it sets |
|---|---|
| `use:DEVICE` | a unit's use a day in the line's own way: hours, Wh, share of its battery, or times; 0 is off |
| `count:DEVICE` | units of a device line |
| `minutes:GROUP` or `minutes:PERSON` | day's minutes of everybody there who turns, never above their age's limit |
| `units:STATION` | units of a station line |
| `volunteers:STATION` | more adults of usual effort at a station |
| `source` | Wh a day from other sources in all |
| `days` | whole days |
| `start:STORE` | state of charge at the start |
| `stores:STORE` | units of a store line |
"""

from __future__ import annotations

import statistics
from collections.abc import Callable, Iterable
from types import MappingProxyType

from msgspec import structs

from kitplanner.domain.age_limits import limits_for_age
from kitplanner.plan.edits import Edit, EditError, add_record, chain, get_value, new_id, set_value
from kitplanner.plan.records import Device, OtherSource, Person, Plan, Record

# Key that holds the use of a device line, by the way it is given.
USE_KEYS = MappingProxyType(
    {
        "power_hours": "use_h_per_day",
        "wh_per_day": "use_wh_per_day",
        "percent": "use_battery_fraction_per_day",
        "times": "use_times_per_day",
    }
)
# Somebody without an age counts as this old everywhere (`planners/people.py`).
USUAL_AGE = 40
# Minutes a day asked of a new volunteer where nobody turns there yet. Judgement: two bouts of 20 min.
VOLUNTEER_MIN = 40


class LeverChange(Record, frozen=True):
    """One lever and the value it is set to."""

    lever: str
    to: float


def lever_edit(change: LeverChange) -> Edit:
    """Return the edit that sets one lever.

    Raises
    ------
    EditError
        The lever is unknown, its record is not in the plan, or the value does not fit.

    Examples
    --------
    >>> lever_edit(LeverChange(lever="days", to=2))(Plan(days=5)).days
    2
    """
    kind, _, target = change.lever.partition(":")
    maker = _MAKERS.get(kind)
    if maker is None or (kind in _WITHOUT_RECORD) != (not target):
        known = ", ".join(sorted(_MAKERS))
        raise EditError(("levers", change.lever), "there is no such lever", f"choose one of {known}")
    return maker(target, change.to)


def levers_edit(changes: Iterable[LeverChange]) -> Edit:
    """Return one edit that sets several levers, in their order."""
    return chain(*(lever_edit(change) for change in changes))


def hard_cap_min(person: Person) -> int:
    """Return the most minutes a day a person of this age may be asked for, light effort half of it [min].

    Examples
    --------
    >>> hard_cap_min(Person(id="p", name="P", age=30)), hard_cap_min(Person(id="p", name="P", age=66))
    (60, 20)
    """
    light = person.watts_by == "level" and person.level == "light"
    return limits_for_age(USUAL_AGE if person.age is None else person.age, light=light).cap_min


def turning_now(person: Person) -> bool:
    """Tell whether a person turns at all: nobody who chose 0 minutes is ever asked for more."""
    return hard_cap_min(person) > 0 and person.cap_min != 0


def people_of(plan: Plan, target: str) -> tuple[Person, ...]:
    """Return those who turn among a group's people, or the one person named."""
    if any(group.id == target for group in plan.groups):
        return tuple(person for person in plan.people if person.group == target and turning_now(person))
    return tuple(person for person in plan.people if person.id == target and turning_now(person))


def volunteer_min(plan: Plan, station: str) -> int:
    """Return the minutes a day asked of a new adult: the middle of what adults with an own cap there turn [min]."""
    caps = [
        person.cap_min
        for person in plan.people
        if person.cap_min and hard_cap_min(person) >= VOLUNTEER_MIN and station in (person.stations or (station,))
    ]
    return int(statistics.median_low(caps)) if caps else VOLUNTEER_MIN


def _use(device_id: str, to: float) -> Edit:
    def edit(plan: Plan) -> Plan:
        device: Device = get_value(plan, ("devices", device_id))
        return set_value(("devices", device_id, USE_KEYS[device.use_by]), float(to))(plan)

    return edit


def _count(section: str) -> Callable[[str, float], Edit]:
    def make(target: str, to: float) -> Edit:
        return set_value((section, target, "count"), _whole(section, target, to))

    return make


def _minutes(target: str, to: float) -> Edit:
    def edit(plan: Plan) -> Plan:
        members = people_of(plan, target)
        if not members:
            raise EditError(("people", target), "nobody who turns is found here", "choose a group or person who turns")
        wanted = _whole("people", target, to)
        for person in members:
            raised = min(wanted, hard_cap_min(person))
            # A lever for more minutes never takes any away.
            if person.cap_min is not None and raised > person.cap_min:
                plan = set_value(("people", person.id, "cap_min"), raised)(plan)
        return plan

    return edit


def _volunteers(station: str, to: float) -> Edit:
    def edit(plan: Plan) -> Plan:
        get_value(plan, ("stations", station))
        minutes = volunteer_min(plan, station)
        for number in range(1, _whole("people", station, to) + 1):
            person = Person(
                id=new_id(plan, "people"),
                name=f"Volunteer {number}",
                age=USUAL_AGE,
                cap_min=minutes,
                stations=(station,),
            )
            plan = structs.replace(plan, people=(*plan.people, person))
        return plan

    return edit


def _source(_: str, to: float) -> Edit:
    def edit(plan: Plan) -> Plan:
        more = float(to) - sum(source.wh_per_day for source in plan.other_sources)
        if plan.other_sources:
            first = plan.other_sources[0]
            return set_value(("other_sources", first.id, "wh_per_day"), first.wh_per_day + more)(plan)
        record = OtherSource(id=new_id(plan, "other_sources"), name="Another source", wh_per_day=more)
        return add_record(("other_sources",), record)(plan)

    return edit


def _days(_: str, to: float) -> Edit:
    return set_value(("days",), _whole("days", "", to))


def _start(store: str, to: float) -> Edit:
    return set_value(("stores", store, "start_fraction"), float(to))


def _whole(section: str, target: str, value: float) -> int:
    if value != int(value):
        raise EditError((section, target), f"{value:g} is not a whole number", "choose a whole number")
    return int(value)


_WITHOUT_RECORD = frozenset({"source", "days"})
_MAKERS = MappingProxyType(
    {
        "use": _use,
        "count": _count("devices"),
        "minutes": _minutes,
        "units": _count("stations"),
        "volunteers": _volunteers,
        "source": _source,
        "days": _days,
        "start": _start,
        "stores": _count("stores"),
    }
)
