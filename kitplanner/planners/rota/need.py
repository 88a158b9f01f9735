"""What must have come out of the stores by when, so that every use is served: cumulative curves at the outlet.

A device with its own battery first uses what it holds above its floor; what it draws after that must reach it in the
last slot in which it may be charged. All energy is counted through the store, also where a device hangs at the
station itself: the cautious side. With M(t) what has come in at O by slot t, the use missed of a set of devices is

    max over t of (R(t) - S0 - M(t)), not below 0

because a use once missed is not made up for later.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.plan.records import Device, OtherSource, Plan
from kitplanner.planners.balance_windows import DAY_MIN, Part, day_parts, merged
from kitplanner.planners.demand import device_need, outlet_to_device_fraction, use_wh_per_day
from kitplanner.planners.rota.grid import BoolArray, day_mask, touched_mask
from kitplanner.planners.supply import station_to_outlet_fraction, store_wh

FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class NeedCurves:
    """Cumulative needs at O; every curve has shape (slots + 1,), its entry t the amount due before slot t starts.

    Attributes
    ----------
    priorities : tuple of int
        Classes in order; one entry for all where the cut is shared.
    plain : ndarray, shape (classes, slots + 1)
        Due for classes up to and with this one, without margin [Wh].
    with_margin : ndarray, shape (slots + 1,)
        Due for all classes with margin [Wh].
    supply : ndarray, shape (slots + 1,)
        Stores at the start and other sources so far [Wh].
    room : ndarray, shape (slots + 1,)
        Most that can have come in from stations without running over [Wh].
    """

    priorities: tuple[int, ...]
    plain: FloatArray
    with_margin: FloatArray
    supply: FloatArray
    room: FloatArray


def need_curves(plan: Plan, slot_min: int) -> NeedCurves:
    """Return the cumulative needs of a plan.

    Parameters
    ----------
    plan : Plan
        The plan; its `cut` decides whether classes are served in order or all alike.
    slot_min : int
        Length of a slot [min].

    Returns
    -------
    NeedCurves
        Needs, supply from stores and other sources, and room for more, at O [Wh].
    """
    slots = plan.days * (DAY_MIN // slot_min)
    due = {device.id: device_due(plan, device, slot_min, 1.0) for device in plan.devices}
    whole = sum(
        (device_due(plan, device, slot_min, 1.0 + plan.margin_fraction) for device in plan.devices),
        start=np.zeros(slots + 1),
    )
    classes = tuple(sorted({device.priority for device in plan.devices})) or (1,)
    if plan.cut == "shared":
        classes = classes[-1:]
    plain = np.array(
        [
            sum((due[device.id] for device in plan.devices if device.priority <= each), start=np.zeros(slots + 1))
            for each in classes
        ]
    )
    stored = sum(store_wh(store, store.start_fraction) for store in plan.stores)
    other = sum((_source_in(plan, source, slot_min) for source in plan.other_sources), start=np.zeros(slots + 1))
    return NeedCurves(
        priorities=classes,
        plain=plain,
        with_margin=whole,
        supply=stored + other,
        room=_room(plan, slot_min) - other,
    )


def use_curve(plan: Plan, device: Device, slot_min: int) -> FloatArray:
    """Return the cumulative use of a device line at D, spread evenly over its windows, shape (slots + 1,) [Wh]."""
    per_day = DAY_MIN // slot_min
    # Minutes of use in each slot, so that windows off the grid keep their energy.
    minutes = _minutes_in_slots(plan_windows(device), slot_min)
    share = minutes / minutes.sum() if minutes.sum() > 0.0 else np.full(per_day, 1.0 / per_day)
    day = device.count * use_wh_per_day(device) * share
    return np.concatenate(([0.0], np.cumsum(np.tile(day, plan.days))))


def plan_windows(device: Device) -> tuple[tuple[int, int], ...]:
    """Return when a device is used; no window means the whole day."""
    return merged(day_parts(device.use_windows)) or ((0, DAY_MIN),)


def _minutes_in_slots(parts: tuple[tuple[int, int], ...], slot_min: int) -> FloatArray:
    edges = np.arange(0, DAY_MIN + slot_min, slot_min, dtype=float)
    minutes = np.zeros(len(edges) - 1)
    for start, end in parts:
        minutes += np.clip(np.minimum(edges[1:], end) - np.maximum(edges[:-1], start), 0.0, None)
    return minutes


def charging_mask(plan: Plan, device: Device, slot_min: int) -> BoolArray:
    """Return the slots of the horizon in which a device line may be charged, shape (slots,).

    Its own windows within attended hours of the charging points; without such hours outside quiet hours.
    """
    per_day = DAY_MIN // slot_min
    own = (
        day_mask(merged(day_parts(device.charge_windows)), slot_min)
        if device.charge_windows
        else np.ones(per_day, bool)
    )
    attended = [part for point in plan.charging_points for part in day_parts(point.hours)]
    if attended:
        return np.tile(own & day_mask(merged(attended), slot_min), plan.days)
    days = [own & ~touched_mask(quiet_on(plan, day), slot_min) for day in range(1, plan.days + 1)]
    return np.concatenate(days)


def quiet_on(plan: Plan, day: int) -> tuple[Part, ...]:
    """Return the quiet hours of the whole place on a day from 1."""
    return merged(
        part
        for block in plan.blocks
        if block.kind == "quiet" and not block.groups and (not block.days or day in block.days)
        for part in day_parts(block.windows)
    )


def device_due(plan: Plan, device: Device, slot_min: int, factor: float) -> FloatArray:
    """Return what a device line must have drawn by each slot, at O, its use times `factor`.

    Without own battery: its use. With one: what it used beyond its start charge, brought forward to the last slot in
    which it may be charged.
    """
    use = use_curve(plan, device, slot_min) * factor
    if not device.battery_wh:
        return use
    need = device_need(plan, device)
    credit_o = need.credit_wh if factor > 1.0 else need.credit_plain_wh
    due = np.maximum(0.0, use / outlet_to_device_fraction(device) - credit_o)
    chargeable = charging_mask(plan, device, slot_min)
    if not chargeable.any():
        return due
    # The need of a gap falls on the end of the last slot before it; a gap at the very start cannot be helped.
    return _brought_forward(due, chargeable)


def _brought_forward(due: FloatArray, chargeable: BoolArray) -> FloatArray:
    slots = len(chargeable)
    following = np.full(slots + 1, slots)
    index = np.flatnonzero(chargeable)
    # For the end of slot t: the start of the next chargeable slot at or after it, else the horizon's end.
    place = np.searchsorted(index, np.arange(slots + 1))
    has = place < len(index)
    following[has] = index[place[has]]
    return np.asarray(due[following])


def _source_in(plan: Plan, source: OtherSource, slot_min: int) -> FloatArray:
    minutes = _minutes_in_slots(merged(day_parts(source.windows)) or ((0, DAY_MIN),), slot_min)
    day = source.wh_per_day * station_to_outlet_fraction(plan.stores) * minutes / minutes.sum()
    return np.concatenate(([0.0], np.cumsum(np.tile(day, plan.days))))


def _room(plan: Plan, slot_min: int) -> FloatArray:
    """Return the room in stores and devices by each slot, devices filled as early as they may."""
    slots = plan.days * (DAY_MIN // slot_min)
    free = sum(store_wh(store, 1.0) - store_wh(store, store.start_fraction) for store in plan.stores)
    room = np.full(slots + 1, float(free))
    for device in plan.devices:
        use = use_curve(plan, device, slot_min)
        if not device.battery_wh:
            room += use
            continue
        gap = device.count * device.battery_wh * max(0.0, device.target_fraction - device.start_fraction)
        chargeable = charging_mask(plan, device, slot_min)
        filled = (use + gap) / outlet_to_device_fraction(device)
        room += _held_back(filled, chargeable)
    return room


def _held_back(filled: FloatArray, chargeable: BoolArray) -> FloatArray:
    """Return a cumulative amount as far as charging slots have let it come."""
    slots = len(chargeable)
    last = np.full(slots + 1, -1)
    index = np.flatnonzero(chargeable)
    place = np.searchsorted(index, np.arange(slots + 1), side="left")
    has = place > 0
    last[has] = index[place[has] - 1] + 1
    return np.asarray(np.where(last >= 0, filled[np.maximum(last, 0)], 0.0))
