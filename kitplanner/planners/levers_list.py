"""Every lever of a plan: what it is now, the steps it may take, and the edit each step makes."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np

from kitplanner.plan.edits_levers import LeverChange, hard_cap_min, levers_edit, people_of
from kitplanner.plan.records import Device, Plan, Station
from kitplanner.planners.demand import use_hours_per_day, use_wh_per_day
from kitplanner.planners.levers_cover import Cover, need_wh
from kitplanner.planners.people import person_limits
from kitplanner.planners.supply import station_to_outlet_fraction

# Nothing of priority 1 to 4 goes below a third of its use; comfort (5) may go altogether.
LEAST_KEPT_FRACTION = 1.0 / 3.0
COMFORT_PRIORITY, LIFE_SAFETY_PRIORITY = 5, 1
LEVEL_UNITS = MappingProxyType(
    {"power_hours": "h a day", "wh_per_day": "Wh a day", "percent": "of its battery a day", "times": "times a day"}
)
# Steps in which people change a use; hours go in quarters, minutes and days in ones.
_STEPS = (0.01, 0.05, 0.1, 0.25, 0.5, 1.0, 5.0, 10.0)
_STEPS_IN_A_USE = 12.0
_QUARTER_H, _FRACTION_STEP = 0.25, 0.01
# A station line may double and a store line grow tenfold before the lever says "not enough alone". Judgement.
_MOST_STORES = 10
_LEAST_VOLUNTEERS = 10

Changes = Callable[[float], tuple[LeverChange, ...]]


@dataclass(frozen=True, slots=True)
class Lever:
    """One lever: where it stands, its steps from the mildest to its limit, and the changes of each step."""

    key: str
    now: float
    steps: Sequence[float]
    unit: str
    changes: Changes


def levers_of(plan: Plan, cover: Cover) -> tuple[Lever, ...]:
    """Return every lever of a plan that can move at all, uses first."""
    found = (
        *(lever for device in plan.devices if use_wh_per_day(device) > 0.0 for lever in _device_levers(device)),
        *_people_levers(plan, cover),
        *_supply_levers(plan),
    )
    return tuple(lever for lever in found if lever.steps)


def use_now(device: Device) -> float:
    """Return a line's use a day in the way it is given, per unit."""
    if device.use_by == "power_hours":
        return use_hours_per_day(device)
    if device.use_by == "percent":
        return device.use_battery_fraction_per_day or 0.0
    if device.use_by == "times":
        return device.use_times_per_day or 0.0
    return device.use_wh_per_day or 0.0


def use_step(device: Device) -> float:
    """Return the step in which a line's use is changed, about a twelfth of it.

    Examples
    --------
    >>> use_step(Device(id="p", name="phone", use_wh_per_day=6.0))
    0.5
    """
    now = use_now(device)
    if device.use_by == "power_hours":
        return _QUARTER_H if now > _QUARTER_H else now
    if device.use_by == "percent":
        return _FRACTION_STEP
    if device.use_by == "times":
        return 1.0
    return max((step for step in _STEPS if step <= now / _STEPS_IN_A_USE), default=_STEPS[0])


def least_use(device: Device) -> float:
    """Return how far a line's use may be cut: a third of it, nothing for comfort."""
    return 0.0 if device.priority >= COMFORT_PRIORITY else use_now(device) * LEAST_KEPT_FRACTION


def use_steps(device: Device) -> tuple[float, ...]:
    """Return the values a line's use may be cut to, mildest first.

    Examples
    --------
    >>> use_steps(Device(id="p", name="phone", use_wh_per_day=6.0, priority=3))
    (5.5, 5.0, 4.5, 4.0, 3.5, 3.0, 2.5, 2.0)
    """
    return _down(use_now(device), least_use(device), use_step(device))


def _down(now: float, least: float, step: float) -> tuple[float, ...]:
    """Return whole multiples of a step below a value, down to a least one."""
    first = math.ceil(now / step - 1e-9) - 1
    last = max(0, math.ceil(least / step - 1e-9))
    return tuple(round(index * step, 6) for index in range(first, last - 1, -1))


def is_set_of_lamps(device: Device) -> bool:
    """Tell whether fewer units serve the same place, as with lamps of one hall: fed lamps, used by the hour."""
    return device.kind == "light" and device.count > 1 and not device.battery_wh and device.use_by == "power_hours"


def lamp_steps(device: Device) -> tuple[float, ...]:
    """Return the hours at which half of a set of lamps may burn, mildest first."""
    half = half_of(device)
    least = least_use(device) * device.count / half
    now = use_now(device)
    return tuple(hours for hours in (now, *_down(now, least, _QUARTER_H)) if least - 1e-9 <= hours)


def half_of(device: Device) -> int:
    """Return half of a line's units, the odd one kept."""
    return math.ceil(device.count / 2)


def _device_levers(device: Device) -> Iterator[Lever]:
    key, unit, now = f"use:{device.id}", LEVEL_UNITS[device.use_by], use_now(device)

    def use(to: float) -> tuple[LeverChange, ...]:
        return (LeverChange(lever=key, to=to),)

    # Nothing left of a use is a row of its own below.
    yield Lever(key, now, tuple(step for step in use_steps(device) if step > 0.0), unit, use)
    half_use = max(use_step(device), round(now / 2 / use_step(device)) * use_step(device))
    if least_use(device) <= half_use < now:
        yield Lever(f"half:{device.id}", now, (half_use,), unit, use)
    if is_set_of_lamps(device):
        half = half_of(device)

        def fewer(to: float) -> tuple[LeverChange, ...]:
            return (LeverChange(lever=f"count:{device.id}", to=half), LeverChange(lever=key, to=to / half))

        steps = tuple(hours * half for hours in lamp_steps(device))
        yield Lever(f"fewer:{device.id}", now * device.count, steps, "lamp-hours a day", fewer)
    # Switching off what warns people or calls help is no choice to offer.
    if device.priority > LIFE_SAFETY_PRIORITY and not device.evening:
        yield Lever(f"off:{device.id}", now, (0.0,), unit, use)


def _people_levers(plan: Plan, cover: Cover) -> Iterator[Lever]:
    for target in turning_targets(plan):
        now, limit = caps_of(plan, target)
        steps = range(now + 1, limit + 1)

        def minutes(to: float, key: str = f"minutes:{target}") -> tuple[LeverChange, ...]:
            return (LeverChange(lever=key, to=to),)

        def with_units(to: float, key: str = f"minutes:{target}") -> tuple[LeverChange, ...]:
            return _with_units(plan, cover, LeverChange(lever=key, to=to))

        yield Lever(f"minutes:{target}", now, steps, "min a day", minutes)
        if steps and len(with_units(steps[-1])) > 1:
            yield Lever(f"minutes+units:{target}", now, steps, "min a day, with the stations they need", with_units)
    yield from _volunteer_levers(plan, cover)


def turning_targets(plan: Plan) -> tuple[str, ...]:
    """Return groups in which somebody turns, and people without a group who do."""
    groups = [group.id for group in plan.groups if _turn(plan, group.id)]
    alone = [person.id for person in plan.people if person.group is None and _turn(plan, person.id)]
    return (*groups, *alone)


def _turn(plan: Plan, target: str) -> bool:
    return any(person_limits(plan, person).cap_min > 0 for person in people_of(plan, target))


def caps_of(plan: Plan, target: str) -> tuple[int, int]:
    """Return the least cap among those who turn and the most their ages allow [min]."""
    members = people_of(plan, target)
    now = min(person_limits(plan, person).cap_min for person in members)
    return now, max(hard_cap_min(person) for person in members)


def _volunteer_levers(plan: Plan, cover: Cover) -> Iterator[Lever]:
    most = max(_LEAST_VOLUNTEERS, len(plan.people))
    for station in working_stations(plan):

        def more(to: float, key: str = f"volunteers:{station.id}") -> tuple[LeverChange, ...]:
            return (LeverChange(lever=key, to=to),)

        def with_units(to: float, key: str = f"volunteers:{station.id}") -> tuple[LeverChange, ...]:
            return _with_units(plan, cover, LeverChange(lever=key, to=to))

        steps = range(1, most + 1)
        yield Lever(f"volunteers:{station.id}", 0.0, steps, "more people", more)
        if len(with_units(most)) > 1:
            unit = "more people, with the stations they need"
            yield Lever(f"volunteers+units:{station.id}", 0.0, steps, unit, with_units)


def working_stations(plan: Plan) -> tuple[Station, ...]:
    """Return the station lines at which people may turn."""
    return tuple(station for station in plan.stations if station.in_service and station.guarded)


def _with_units(plan: Plan, cover: Cover, change: LeverChange) -> tuple[LeverChange, ...]:
    """Return a change with as many more units of each station line as it takes to cut nobody's minutes."""
    made = cover.supply(levers_edit((change,))(plan))
    added = []
    for station, row in zip(plan.stations, made.stations, strict=True):
        each = row.available_min / station.count if station.count else 0.0
        if each <= 0.0:
            continue
        units = math.ceil(row.offered_min / each - 1e-9)
        if units > station.count:
            added.append(LeverChange(lever=f"units:{station.id}", to=units))
    return (change, *added)


def _supply_levers(plan: Plan) -> Iterator[Lever]:
    def one(key: str) -> Changes:
        return lambda to: (LeverChange(lever=key, to=to),)

    for station in working_stations(plan):
        key = f"units:{station.id}"
        yield Lever(key, station.count, range(station.count + 1, 2 * station.count + 1), "units", one(key))
    now = sum(source.wh_per_day for source in plan.other_sources)
    most = need_wh(plan) / plan.days / station_to_outlet_fraction(plan.stores)
    yield Lever("source", now, _up_whole(now, now + most), "Wh a day", one("source"))
    yield Lever("days", plan.days, range(plan.days - 1, 0, -1), "days", one("days"))
    for store in plan.stores:
        key = f"start:{store.id}"
        first = math.floor(store.start_fraction * 100.0 + 1e-9) + 1
        steps = tuple(percent / 100.0 for percent in range(first, 101))
        yield Lever(key, store.start_fraction, steps, "of its charge at the start", one(key))
        key = f"stores:{store.id}"
        steps_up = range(store.count + 1, _MOST_STORES * store.count + 1)
        yield Lever(key, store.count, steps_up, "stores, charged as these are", one(key))


def _up_whole(now: float, most: float) -> Sequence[float]:
    first = math.floor(now + 1e-9) + 1
    return [float(value) for value in np.arange(first, math.ceil(most) + 1)]
