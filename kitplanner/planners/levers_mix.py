"""The mildest combinations of levers: an exact search over their steps, once for each character.

    cost = sum over device lines of Wh a day given up at the device * weight(priority) + extra minutes turned a day

with weights 16, 8, 4, 2, 1 for priorities 1 to 5. Uses add up in the need, minutes in what is made, so the search keeps
for each side only the choices that no other beats in both cost and energy, and joins them line by line.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from types import MappingProxyType

import numpy as np

from kitplanner.plan.edits_levers import LeverChange, levers_edit
from kitplanner.plan.records import Device, Plan
from kitplanner.planners.demand import device_need, use_wh_per_day
from kitplanner.planners.levers_cover import Cover, enough, need_wh, turned_min
from kitplanner.planners.levers_list import (
    COMFORT_PRIORITY,
    LEVEL_UNITS,
    LIFE_SAFETY_PRIORITY,
    caps_of,
    half_of,
    is_set_of_lamps,
    lamp_steps,
    turning_targets,
    use_now,
    use_steps,
    working_stations,
)
from kitplanner.planners.levers_records import ChangeRow, Character, Combination

PRIORITY_WEIGHTS = MappingProxyType({1: 16.0, 2: 8.0, 3: 4.0, 4: 2.0, 5: 1.0})
# Groups whose minutes are combined in every way, at three steps each; more would change little and take long.
_MOST_GROUPS, _MINUTE_STEPS = 4, 2
# Equal costs go to whoever changes fewer things; far below a watt-hour.
_PER_CHANGE_COST = 1e-6
# Where few changes count first: far above any cost.
_PER_THING_COST = 1e6
_SHARE_STEPS = 100
_ROUNDING_WH = 1e-9


@dataclass(frozen=True, slots=True)
class Option:
    """One choice for one line or one set of people: what it saves or brings over the horizon, and its cost.

    `kept_fraction` is the share of its use a line keeps.
    """

    changes: tuple[LeverChange, ...]
    wh: float
    cost: float
    kept_fraction: float = 1.0


_NOTHING = Option((), 0.0, 0.0)


def combinations(plan: Plan, cover: Cover, unmet_wh: Callable[[Plan], float] | None) -> tuple[Combination, ...]:
    """Return the mildest combination of each character that makes the plan fit, cheapest first.

    Parameters
    ----------
    plan : Plan
        A plan that does not fit.
    cover : Cover
        Coverage of its variants.
    unmet_wh : callable, optional
        Use a rota of a plan cannot serve, at O [Wh].

    Returns
    -------
    tuple of Combination
        None where even all cuts to a third and all minutes together are not enough.
    """
    missing = need_wh(plan) - cover.have_wh(plan)
    lines = {device.id: line_options(plan, device) for device in plan.devices if use_wh_per_day(device) > 0.0}
    spared = {device.id for device in plan.devices if device.priority <= LIFE_SAFETY_PRIORITY}
    found = _found(plan, cover, {key: each for key, each in lines.items() if key not in spared}, missing)
    # What warns people and calls help is touched only where nothing else is enough.
    found = found or _found(plan, cover, lines, missing)
    rows = [_combination(plan, cover, character, changes, unmet_wh) for character, changes in found]
    return tuple(sorted(rows, key=lambda row: row.cost))


def _found(
    plan: Plan, cover: Cover, lines: Mapping[str, tuple[Option, ...]], missing_wh: float
) -> list[tuple[Character, tuple[LeverChange, ...]]]:
    """Return the combinations of some lines and of minutes, each only once."""
    minutes = _minute_options(plan, cover)
    cuts = tuple(lines.values())
    mildest = cheapest((*cuts, minutes), missing_wh)
    most_cut = _most_cut(lines, mildest)
    others = tuple(options for key, options in lines.items() if key != most_cut)
    tried: tuple[tuple[Character, Option | None], ...] = (
        ("mildest", mildest),
        ("cuts_only", cheapest(cuts, missing_wh)),
        ("alike", _alike(cuts, missing_wh)),
        ("spares_one", cheapest((*others, _with_one_more_unit(plan, cover, minutes)), missing_wh)),
        ("more_turning", _more_turning(plan, cover, cuts, missing_wh)),
        ("fewest", _fewest((*cuts, minutes), missing_wh)),
    )
    found: list[tuple[Character, tuple[LeverChange, ...]]] = []
    for character, option in tried:
        if option is not None and not any(set(option.changes) == set(other) for _, other in found):
            found.append((character, option.changes))
    return found


def line_options(plan: Plan, device: Device) -> tuple[Option, ...]:
    """Return the uses a line may be cut to, from none to a third (nothing for comfort), with what they save.

    A set of lamps is halved before its hours fall below half, so that what stays lit stays lit all evening.
    """
    weight = PRIORITY_WEIGHTS.get(device.priority, PRIORITY_WEIGHTS[COMFORT_PRIORITY])
    before = _net_need_wh(plan, device)
    day = device.count * use_wh_per_day(device)
    options = [_NOTHING]
    for changes in _line_changes(device):
        cut = _changed(plan, changes, device.id)
        kept = cut.count * use_wh_per_day(cut)
        saved = before - _net_need_wh(plan, cut)
        options.append(Option(changes, saved, weight * (day - kept) + _PER_CHANGE_COST * len(changes), kept / day))
    return tuple(options)


def _line_changes(device: Device) -> list[tuple[LeverChange, ...]]:
    key = f"use:{device.id}"
    steps = use_steps(device)
    if device.priority >= COMFORT_PRIORITY and 0.0 not in steps:
        steps = (*steps, 0.0)
    if not is_set_of_lamps(device):
        return [(LeverChange(lever=key, to=step),) for step in steps]
    half = half_of(device)
    halved = LeverChange(lever=f"count:{device.id}", to=half)
    longer = [step for step in steps if step * device.count > use_now(device) * half + 1e-9]
    fewer = [(halved, *((LeverChange(lever=key, to=h),) if h < use_now(device) else ())) for h in lamp_steps(device)]
    return [*((LeverChange(lever=key, to=step),) for step in longer), *fewer]


def _changed(plan: Plan, changes: Sequence[LeverChange], device_id: str) -> Device:
    edited = levers_edit(changes)(plan)
    return next(device for device in edited.devices if device.id == device_id)


def _net_need_wh(plan: Plan, device: Device) -> float:
    need = device_need(plan, device)
    return need.use_wh - need.credit_wh


def cheapest(parts: Sequence[Sequence[Option]], missing_wh: float) -> Option | None:
    """Return the cheapest choice of one option from each part that brings at least what is missing.

    Parameters
    ----------
    parts : sequence of sequences of Option
        Choices of each line and of the people.
    missing_wh : float
        Energy to save or bring over the horizon, at O [Wh].

    Returns
    -------
    Option or None
        All changes together; None where nothing is enough.

    References
    ----------
    Multiple-choice knapsack by lists of undominated states, one part after the other.

    Examples
    --------
    >>> lamp = [Option((), 0.0, 0.0), Option((LeverChange(lever="use:l", to=1.0),), 5.0, 8.0)]
    >>> tablet = [Option((), 0.0, 0.0), Option((LeverChange(lever="use:t", to=0.0),), 6.0, 1.0)]
    >>> [change.lever for change in cheapest((lamp, tablet), 6.0).changes]
    ['use:t']
    """
    tables: list[tuple[np.ndarray, np.ndarray]] = []
    wh, cost = np.zeros(1), np.zeros(1)
    rest = [max(option.wh for option in part) for part in parts]
    for number, part in enumerate(parts):
        gain = np.array([option.wh for option in part])
        price = np.array([option.cost for option in part])
        # Beyond what is missing more energy is worth nothing.
        sums = np.minimum((wh[:, None] + gain[None, :]).ravel(), missing_wh)
        costs = (cost[:, None] + price[None, :]).ravel()
        able = np.flatnonzero(sums + sum(rest[number + 1 :]) >= missing_wh - _ROUNDING_WH)
        if not len(able):
            return None
        order = able[np.lexsort((costs[able], -sums[able]))]
        best = np.concatenate(([np.inf], np.minimum.accumulate(costs[order])[:-1]))
        kept = order[costs[order] < best]
        tables.append((kept // len(part), kept % len(part)))
        wh, cost = sums[kept], costs[kept]
    at, chosen = int(np.argmin(cost)), []
    for part, (before, choice) in zip(reversed(parts), reversed(tables), strict=True):
        chosen.append(part[int(choice[at])])
        at = int(before[at])
    return _together(reversed(chosen))


def _minute_options(plan: Plan, cover: Cover) -> tuple[Option, ...]:
    """Return more minutes of groups in every combination of a few steps, undominated ones only."""
    before, turned = cover.have_wh(plan), turned_min(cover.supply(plan))
    ranked = []
    for target in turning_targets(plan):
        now, limit = caps_of(plan, target)
        if limit > now:
            most = levers_edit((LeverChange(lever=f"minutes:{target}", to=limit),))(plan)
            ranked.append((before - cover.have_wh(most), target, _between(now, limit)))
    choices = [
        (None, *(LeverChange(lever=f"minutes:{target}", to=step) for step in steps))
        for _, target, steps in sorted(ranked)[:_MOST_GROUPS]
    ]
    options = []
    for picked in itertools.product(*choices):
        changes = tuple(change for change in picked if change is not None)
        if changes:
            edited = levers_edit(changes)(plan)
            more = turned_min(cover.supply(edited)) - turned
            cost = max(0.0, more) + _PER_CHANGE_COST * len(changes)
            options.append(Option(changes, cover.have_wh(edited) - before, cost))
    return _undominated((_NOTHING, *options))


def _between(now: int, limit: int) -> tuple[int, ...]:
    """Return a few whole minutes up to a limit, evenly spaced.

    Examples
    --------
    >>> _between(40, 60)
    (50, 60)
    """
    steps = {round(now + (limit - now) * step / _MINUTE_STEPS) for step in range(1, _MINUTE_STEPS + 1)}
    return tuple(sorted(step for step in steps if step > now))


def _undominated(options: Sequence[Option]) -> tuple[Option, ...]:
    kept: list[Option] = []
    for option in sorted(options, key=lambda each: (each.cost, -each.wh)):
        if not kept or option.wh > kept[-1].wh + _ROUNDING_WH:
            kept.append(option)
    return tuple(kept)


def _all_minutes(plan: Plan) -> tuple[LeverChange, ...]:
    """Return everybody's minutes raised to the limit of their age."""
    ranges = ((target, *caps_of(plan, target)) for target in turning_targets(plan))
    return tuple(LeverChange(lever=f"minutes:{target}", to=limit) for target, now, limit in ranges if limit > now)


def _with_one_more_unit(plan: Plan, cover: Cover, minutes: tuple[Option, ...]) -> tuple[Option, ...]:
    """Return the people's choices with and without one more unit of the station that makes most."""
    added = _one_more_unit(plan, cover)
    if added is None:
        return minutes
    larger = levers_edit((added,))(plan)
    brought = cover.have_wh(larger) - cover.have_wh(plan)
    extra = max(0.0, turned_min(cover.supply(larger)) - turned_min(cover.supply(plan)))
    with_unit = [
        Option((*option.changes, added), option.wh + brought, option.cost + extra + _PER_CHANGE_COST)
        for option in _minute_options(larger, cover)
    ]
    return _undominated((*minutes, *with_unit))


def _one_more_unit(plan: Plan, cover: Cover) -> LeverChange | None:
    made = cover.supply(plan).stations
    working = {station.id for station in working_stations(plan)}
    rows = [
        (row.made_wh_per_day, station.id, station.count)
        for station, row in zip(plan.stations, made, strict=True)
        if station.id in working
    ]
    if not rows:
        return None
    _, station_id, count = max(rows)
    return LeverChange(lever=f"units:{station_id}", to=count + 1)


def _more_turning(plan: Plan, cover: Cover, lines: tuple[tuple[Option, ...], ...], missing_wh: float) -> Option | None:
    """Return everybody's minutes at their limit with one more unit, and the mildest cuts that are then needed."""
    minutes, added = _all_minutes(plan), _one_more_unit(plan, cover)
    if not minutes or added is None:
        return None
    edited = levers_edit((*minutes, added))(plan)
    brought = cover.have_wh(edited) - cover.have_wh(plan)
    cut = cheapest(lines, max(0.0, missing_wh - brought))
    if cut is None:
        return None
    return Option((*cut.changes, *minutes, added), cut.wh + brought, cut.cost)


def _alike(lines: Sequence[Sequence[Option]], missing_wh: float) -> Option | None:
    """Return the same share cut from every line, as little as is enough; a line stops at what it must keep."""
    for share in range(1, _SHARE_STEPS + 1):
        kept = 1.0 - share / _SHARE_STEPS
        chosen = [next((each for each in part if each.kept_fraction <= kept + 1e-9), part[-1]) for part in lines]
        if sum(option.wh for option in chosen) >= missing_wh - _ROUNDING_WH:
            return _together(chosen)
    return None


def _together(options: Iterable[Option]) -> Option:
    chosen = [option for option in options if option.changes]
    changes = tuple(change for option in chosen for change in option.changes)
    return Option(changes, sum(option.wh for option in chosen), sum(option.cost for option in chosen))


def _most_cut(lines: Mapping[str, tuple[Option, ...]], option: Option | None) -> str | None:
    """Return the line whose cut costs most in a combination."""
    if option is None:
        return None
    chosen = set(option.changes)
    costs = {
        key: next((each.cost for each in reversed(part) if each.changes and chosen.issuperset(each.changes)), 0.0)
        for key, part in lines.items()
    }
    return max(costs, key=lambda key: costs[key], default=None)


def _fewest(parts: Sequence[Sequence[Option]], missing_wh: float) -> Option | None:
    """Return the cheapest among the combinations that change the fewest things."""
    priced = [[replace(each, cost=each.cost + _PER_THING_COST * len(each.changes)) for each in part] for part in parts]
    return cheapest(priced, missing_wh)


def _combination(
    plan: Plan,
    cover: Cover,
    character: Character,
    changes: tuple[LeverChange, ...],
    unmet_wh: Callable[[Plan], float] | None,
) -> Combination:
    edited = levers_edit(changes)(plan)
    weighted = given = 0.0
    for device, cut in zip(plan.devices, edited.devices, strict=True):
        up = device.count * use_wh_per_day(device) - cut.count * use_wh_per_day(cut)
        given += up
        weighted += PRIORITY_WEIGHTS.get(device.priority, 1.0) * up
    more = max(0.0, turned_min(cover.supply(edited)) - turned_min(cover.supply(plan)))
    fraction = cover.fraction(edited)
    if not enough(fraction):
        raise AssertionError("a combination was kept that does not make the plan fit")
    return Combination(
        character=character,
        changes=tuple(_row(plan, change) for change in changes),
        coverage_fraction=fraction,
        chance_fraction=None,
        cost=weighted + more,
        given_up_wh_per_day=given,
        more_min_per_day=more,
        rota_unmet_wh=None if unmet_wh is None else unmet_wh(edited),
    )


def _row(plan: Plan, change: LeverChange) -> ChangeRow:
    """Return a change with where it starts from."""
    kind, _, target = change.lever.partition(":")
    if kind == "minutes":
        return ChangeRow(lever=change.lever, from_value=caps_of(plan, target)[0], to=change.to, unit="min a day")
    if kind == "units":
        count = next(station.count for station in plan.stations if station.id == target)
        return ChangeRow(lever=change.lever, from_value=count, to=change.to, unit="units")
    device = next(device for device in plan.devices if device.id == target)
    if kind == "count":
        return ChangeRow(lever=change.lever, from_value=device.count, to=change.to, unit="units")
    unit = LEVEL_UNITS[device.use_by]
    return ChangeRow(lever=change.lever, from_value=use_now(device), to=change.to, unit=unit)
