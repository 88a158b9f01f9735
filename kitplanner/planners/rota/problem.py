"""A plan as arrays for the rota: who may turn and watch in which slot, where, how strongly, and what is needed.

Slots are numbered over the whole horizon; people, station lines and slots keep the plan's order. Everything here is
a hard rule or a number; what is preferred stands in the solver.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.domain.age_limits import limits_for_age
from kitplanner.domain.capacity import ADULT_AGE
from kitplanner.domain.heat import HeatRule
from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.records import Person, Plan, Spell, Station
from kitplanner.planners.balance_output import output_table
from kitplanner.planners.balance_windows import DAY_MIN, Part, day_parts, merged, outside
from kitplanner.planners.people import age_of, allowed_stations, heat_rule_at, limb_of, person_limits
from kitplanner.planners.rota.grid import BoolArray, day_mask, grid_min, touched_mask
from kitplanner.planners.rota.need import NeedCurves, need_curves
from kitplanner.planners.supply import fed_stores, open_parts, station_to_outlet_fraction

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class RotaProblem:
    """One rota to be found.

    Attributes
    ----------
    slot_min, days : int
        Length of a slot [min], days of the horizon; `per_day` slots make a day.
    people, stations : tuple of str
        Ids in the plan's order.
    may_turn, may_watch : ndarray of bool, shape (people, slots)
        Slots in which a person may turn or watch.
    bout, rest, cap : ndarray of int, shape (people, days)
        Longest bout, least rest after it, turning time of the day [slots].
    allowance : ndarray of int, shape (people,)
        Turning time over the horizon, 0 for a person who does not turn [slots].
    output_w, outlet_fraction : ndarray, shapes (people, stations) and (stations,)
        Watts at S, 0 where not allowed [W]; energy at O over energy at S [-].
    needs_watcher : ndarray of bool, shape (people, stations)
        Bouts that need an adult beside the operator.
    units : ndarray of int, shape (stations, slots)
        Units that may be used.
    changeover_min, daily : ndarray of int, shape (stations,)
        Pause between two operators [min]; turning time of one unit in a day [slots], -1 without limit.
    unpopular : ndarray of bool, shape (slots,)
        Early, late and hot slots that should go round.
    need : NeedCurves
        What must have been made when, at O.
    """

    slot_min: int
    days: int
    people: tuple[str, ...]
    stations: tuple[str, ...]
    may_turn: BoolArray
    may_watch: BoolArray
    bout: IntArray
    rest: IntArray
    cap: IntArray
    allowance: IntArray
    output_w: FloatArray
    outlet_fraction: FloatArray
    needs_watcher: BoolArray
    units: IntArray
    changeover_min: IntArray
    daily: IntArray
    unpopular: BoolArray
    need: NeedCurves

    @property
    def per_day(self) -> int:
        """Slots in a day."""
        return DAY_MIN // self.slot_min

    @property
    def slots(self) -> int:
        """Slots of the whole horizon."""
        return self.days * self.per_day

    def slot_wh(self, person: int, station: int) -> float:
        """Energy one person makes at a station in one slot, at O [Wh]."""
        return float(self.output_w[person, station] * self.outlet_fraction[station] * self.slot_min / 60.0)


# Before 8 and from 20 o'clock, and from 26 degrees on: the slots nobody asks for. Judgement.
EARLY_MIN, LATE_MIN, HOT_DEGC = 480, 1200, 26.0


def build(plan: Plan) -> RotaProblem:
    """Return the rota problem of a plan.

    Parameters
    ----------
    plan : Plan
        A plan without errors.

    Returns
    -------
    RotaProblem
        Arrays of people, stations and needs.
    """
    slot_min = grid_min(plan)
    limits = [_PersonDays.of(plan, person, slot_min) for person in plan.people]
    cap = np.array([each.cap for each in limits], dtype=np.int64).reshape(len(limits), plan.days)
    watts, _ = output_table(plan)
    able = (watts > 0.0).any(axis=1) if plan.stations else np.zeros(len(limits), dtype=bool)
    cap[~able] = 0
    slots = plan.days * (DAY_MIN // slot_min)
    return RotaProblem(
        slot_min=slot_min,
        days=plan.days,
        people=tuple(person.id for person in plan.people),
        stations=tuple(station.id for station in plan.stations),
        may_turn=_stack([_turning_mask(plan, each, slot_min) for each in limits], slots),
        may_watch=_stack([_watching_mask(plan, person, slot_min) for person in plan.people], slots),
        bout=np.array([each.bout for each in limits], dtype=np.int64).reshape(cap.shape),
        rest=np.array([each.rest for each in limits], dtype=np.int64).reshape(cap.shape),
        cap=cap,
        allowance=cap.sum(axis=1),
        output_w=watts,
        outlet_fraction=np.array([station_to_outlet_fraction(fed_stores(plan, each)) for each in plan.stations]),
        needs_watcher=_needs_watcher(plan),
        units=_units(plan, slot_min),
        changeover_min=np.array([each.changeover_min for each in plan.stations], dtype=np.int64),
        daily=np.array(
            [-1 if each.daily_min is None else each.daily_min // slot_min for each in plan.stations], dtype=np.int64
        ),
        unpopular=_unpopular(plan, slot_min),
        need=need_curves(plan, slot_min),
    )


@dataclass(frozen=True, slots=True)
class _PersonDays:
    """Bout, rest and cap of one person on each day [slots], and the parts of a day in which heat stops them."""

    person: Person
    bout: tuple[int, ...]
    rest: tuple[int, ...]
    cap: tuple[int, ...]
    stopped: tuple[tuple[Part, ...], ...]

    @classmethod
    def of(cls, plan: Plan, person: Person, slot_min: int) -> _PersonDays:
        bouts, rests, caps, stops = [], [], [], []
        for day in range(1, plan.days + 1):
            base = person_limits(plan, person, day=day)
            bout, rest, stopped = base.bout_min, base.rest_min, []
            for part, rule in _heat_rules(plan, person, day, (base.bout_min, base.cap_min)):
                if rule.on_min < slot_min:
                    stopped.append(part)
                else:
                    # One rule a day keeps bouts legal at every hour of it; the cool hours lose a little.
                    bout, rest = min(bout, rule.on_min), max(rest, rule.off_min)
            away = day in person.days_off
            bouts.append(bout // slot_min)
            rests.append(-(-rest // slot_min))
            caps.append(0 if away or bout < slot_min else base.cap_min // slot_min)
            stops.append(tuple(stopped))
        return cls(person, tuple(bouts), tuple(rests), tuple(caps), tuple(stops))


def _heat_rules(
    plan: Plan, person: Person, day: int, bout_and_day_min: tuple[int, int]
) -> Iterator[tuple[Part, HeatRule]]:
    """Yield the strictest heat rule of each part of a day with a temperature of its own."""
    if not plan.conditions.heat_limits or bout_and_day_min[0] <= 0:
        return
    limbs = {limb_of(station.kind) for station in allowed_stations(plan, person)}
    for each in plan.conditions.temperatures:
        if each.day not in (0, day):
            continue
        air = plan.conditions.air_degc if each.air_degc is None else each.air_degc
        part = (int(minutes_of_day(each.start)), int(minutes_of_day(each.end)))
        for limb in limbs:
            duration = (float(bout_and_day_min[0]), float(bout_and_day_min[1]))
            yield part, heat_rule_at(person, limb, air, each.wbgt_degc, duration)


def _stack(rows: list[BoolArray], slots: int) -> BoolArray:
    return np.array(rows, dtype=bool).reshape(len(rows), slots)


def _turning_mask(plan: Plan, days: _PersonDays, slot_min: int) -> BoolArray:
    """Return the slots in which a person may turn."""
    hours = day_mask(person_limits(plan, days.person).hours, slot_min)
    per_day = [
        hours & ~touched_mask(days.stopped[day - 1], slot_min) & _unblocked(plan, days.person, day, slot_min)
        if days.cap[day - 1] > 0
        else np.zeros_like(hours)
        for day in range(1, plan.days + 1)
    ]
    return np.concatenate(per_day) if per_day else np.zeros(0, dtype=bool)


def may_watch(person: Person) -> bool:
    """Return whether a person may watch: as they chose, else every adult, also at 0 min."""
    if age_of(person) < ADULT_AGE:
        return False
    return True if person.may_watch is None else person.may_watch


def _watching_mask(plan: Plan, person: Person, slot_min: int) -> BoolArray:
    """Return the slots in which a person may watch."""
    per_day = DAY_MIN // slot_min
    if not may_watch(person):
        return np.zeros(plan.days * per_day, dtype=bool)
    windows = person.watch_hours or person.hours
    hours = day_mask(merged(day_parts(windows)), slot_min) if windows else np.ones(per_day, dtype=bool)
    return np.concatenate(
        [
            hours & _unblocked(plan, person, day, slot_min) & (day not in person.days_off)
            for day in range(1, plan.days + 1)
        ]
    )


def _unblocked(plan: Plan, person: Person, day: int, slot_min: int) -> BoolArray:
    """Return the slots of a day outside the blocks that hold for a person, and before they left."""
    parts = [
        part
        for block in plan.blocks
        if (not block.groups or person.group in block.groups) and (not block.days or day in block.days)
        for part in day_parts(block.windows)
    ]
    return ~touched_mask([*parts, *spell_parts(person.absences, day)], slot_min)


def spell_parts(spells: Iterable[Spell], day: int) -> tuple[Part, ...]:
    """Return the parts of one day that spells of absence or outage take."""
    return tuple(
        (int(minutes_of_day(spell.start)), int(minutes_of_day(spell.end))) for spell in spells if spell.day == day
    )


def _needs_watcher(plan: Plan) -> BoolArray:
    young = np.array([limits_for_age(age_of(person)).supervised for person in plan.people], dtype=bool)
    watched = np.array([station.needs_watcher for station in plan.stations], dtype=bool)
    return np.asarray(young[:, None] | watched[None, :])


def _units(plan: Plan, slot_min: int) -> IntArray:
    """Return the units of each station line in service in each slot."""
    per_day = DAY_MIN // slot_min
    units = np.zeros((len(plan.stations), plan.days * per_day), dtype=np.int64)
    quiet = [block for block in plan.blocks if block.kind == "quiet" and not block.groups]
    for row, station in enumerate(plan.stations):
        if not (station.in_service and station.guarded):
            continue
        for day in range(1, plan.days + 1):
            open_ = day_mask(merged(open_parts(plan, station)), slot_min)
            here_quiet = (block for block in quiet if not block.days or day in block.days)
            silent = [part for block in here_quiet for part in day_parts(block.windows)]
            open_ &= day_mask(outside(silent), slot_min)
            here = slice((day - 1) * per_day, day * per_day)
            units[row, here] = np.where(open_, station.count - _out_units(station, day, slot_min), 0)
    return np.maximum(units, 0)


def _out_units(station: Station, day: int, slot_min: int) -> IntArray:
    """Return how many units of a line are out in each slot of a day."""
    out = np.zeros(DAY_MIN // slot_min, dtype=np.int64)
    for spell in station.outages:
        if spell.day == day:
            out[touched_mask(spell_parts((spell,), day), slot_min)] += spell.count
    return out


def _unpopular(plan: Plan, slot_min: int) -> BoolArray:
    parts = [(0, EARLY_MIN), (LATE_MIN, DAY_MIN)]
    per_day = []
    for day in range(1, plan.days + 1):
        hot = [
            (int(minutes_of_day(each.start)), int(minutes_of_day(each.end)))
            for each in plan.conditions.temperatures
            if each.day in (0, day) and (each.air_degc or 0.0) >= HOT_DEGC
        ]
        per_day.append(touched_mask([*parts, *hot], slot_min))
    return np.concatenate(per_day) if per_day else np.zeros(0, dtype=bool)
