"""A plan and its bouts as arrays for the dispatch of charging: stores, what reaches them, devices, times, outlets.

Levels: S at the station's socket, B in store, O at the outlet, D at the device. Arrays over devices keep the plan's
order; a device line counts as one battery that holds what all its units hold.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.domain.battery import charge_ceiling_rate_per_h
from kitplanner.plan.records import Device, Plan, Store
from kitplanner.planners.balance_windows import DAY_MIN, day_parts, merged, outside
from kitplanner.planners.demand import outlet_to_device_fraction
from kitplanner.planners.effort_source import BUS_V
from kitplanner.planners.effort_timing import COLD_BELOW_DEGC, cell_degc
from kitplanner.planners.rota.grid import BoolArray, day_mask
from kitplanner.planners.rota.need import charging_mask, quiet_on, use_curve
from kitplanner.planners.rota.result import RotaBout
from kitplanner.planners.supply import fed_stores, station_to_outlet_fraction

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.int64]

# Charge kept back in the line of the evening guarantee, as a share of one unit's battery: judgement.
EVENING_RESERVE_FRACTION = 0.05
CALLING_KINDS, LAMP_KINDS = ("phone", "radio"), ("light",)


@dataclass(frozen=True, slots=True)
class Lines:
    """Device lines, arrays of shape (devices,) unless said otherwise; energies at D [Wh].

    Attributes
    ----------
    count : ndarray of int
        Units of each line.
    whole_wh, start_wh, floor_wh, target_wh : ndarray
        Capacity, and levels counted from empty; all 0 without own battery.
    eta : ndarray
        Step from O to D [-].
    rate_per_h, end_per_h, tau_h : ndarray
        Acceptance of one unit, the plug's own limit and the cold in it.
    rank : ndarray of int
        Class in the order of service, 0 first.
    use_wh : ndarray, shape (devices, slots)
        Use in each slot.
    chargeable : ndarray of bool, shape (devices, slots)
        Slots in which a line may be charged; every slot for lines without a battery.
    fits : ndarray of bool, shape (devices, stores)
        Stores whose connector fits.
    reserve_wh : ndarray
        Kept above the floor for the evening guarantee.
    """

    count: IntArray
    whole_wh: FloatArray
    start_wh: FloatArray
    floor_wh: FloatArray
    target_wh: FloatArray
    eta: FloatArray
    rate_per_h: FloatArray
    end_per_h: FloatArray
    tau_h: FloatArray
    rank: IntArray
    use_wh: FloatArray
    chargeable: BoolArray
    fits: BoolArray
    reserve_wh: FloatArray

    @property
    def has_battery(self) -> BoolArray:
        """Lines with a battery of their own."""
        return np.asarray(self.whole_wh > 0.0)


@dataclass(frozen=True, slots=True)
class Feed:
    """What reaches one set of stores: places of the stores, and energy at S in each slot [Wh]."""

    stores: tuple[int, ...]
    socket_wh: FloatArray


@dataclass(frozen=True, slots=True)
class ChargingInputs:
    """Everything the dispatch needs.

    Attributes
    ----------
    slot_min, slots : int
        Length and number of slots.
    lines : Lines
        Devices.
    start_wh, full_wh : ndarray, shape (stores,)
        Energy above the floor, in the cells [Wh at B].
    eta_in, eta_out, limit_wh : ndarray, shape (stores,)
        Steps in and out [-]; most that may go in in one slot [Wh at S].
    feeds : tuple of Feed
        Stations and other sources by the stores they reach; a feed without stores serves devices directly.
    coming_wh : ndarray, shape (slots + 1,)
        Cumulative energy of all feeds as it would arrive at O [Wh].
    outlets : ndarray of int, shape (slots,)
        Devices that may be on charge at once.
    lights_out : tuple of int
        Slot at whose start lights go out, one for each day that has quiet hours.
    calling, lamp : int
        Lines of the evening guarantee, -1 where no device is marked.
    """

    slot_min: int
    slots: int
    lines: Lines
    start_wh: FloatArray
    full_wh: FloatArray
    eta_in: FloatArray
    eta_out: FloatArray
    limit_wh: FloatArray
    feeds: tuple[Feed, ...]
    coming_wh: FloatArray
    outlets: IntArray
    lights_out: tuple[int, ...]
    calling: int
    lamp: int

    @property
    def per_day(self) -> int:
        """Slots in a day."""
        return DAY_MIN // self.slot_min


def charging_inputs(plan: Plan, bouts: Sequence[RotaBout], slot_min: int, factor: float) -> ChargingInputs:
    """Return the arrays of a plan and its bouts.

    Parameters
    ----------
    plan : Plan
        The plan.
    bouts : sequence of RotaBout
        Bouts with their energy at S.
    slot_min : int
        Length of a slot [min].
    factor : float
        Use counts this many times: 1, or 1 and the margin [-].

    Returns
    -------
    ChargingInputs
        Arrays over slots from day 1, 00:00.
    """
    slots = plan.days * (DAY_MIN // slot_min)
    capacity = np.array([each.count * each.nominal_wh * each.health_fraction for each in plan.stores])
    floor = np.array([each.floor_fraction for each in plan.stores])
    start = np.array([each.start_fraction for each in plan.stores])
    hours = slot_min / 60.0
    feeds, coming = _feeds(plan, bouts, slot_min)
    calling, lamp = (_guarantee_line(plan, kinds) for kinds in (CALLING_KINDS, LAMP_KINDS))
    return ChargingInputs(
        slot_min=slot_min,
        slots=slots,
        # The reserve is for what really comes; a margin is a reserve itself.
        lines=_lines(plan, slot_min, factor, {calling, lamp} if factor <= 1.0 else set()),
        start_wh=capacity * np.maximum(0.0, start - floor),
        full_wh=capacity * np.maximum(np.maximum(0.0, start - floor), 1.0 - floor),
        eta_in=np.array([each.eta_in for each in plan.stores]),
        eta_out=np.array([each.eta_out for each in plan.stores]),
        limit_wh=np.array(
            [
                np.inf if each.charge_limit_w is None else each.count * each.charge_limit_w * hours
                for each in plan.stores
            ]
        ),
        feeds=feeds,
        coming_wh=coming,
        outlets=_outlets(plan, slot_min),
        lights_out=_lights_out(plan, slot_min),
        calling=calling,
        lamp=lamp,
    )


def _lines(plan: Plan, slot_min: int, factor: float, guaranteed: set[int]) -> Lines:
    devices = plan.devices
    slots = plan.days * (DAY_MIN // slot_min)
    whole = np.array([each.count * (each.battery_wh or 0.0) for each in devices])
    start = np.array([each.start_fraction for each in devices])
    classes = sorted({each.priority for each in devices}) if plan.cut == "strict" else []
    reserve = [
        EVENING_RESERVE_FRACTION * (each.battery_wh or 0.0) if place in guaranteed else 0.0
        for place, each in enumerate(devices)
    ]
    degc = cell_degc(plan)
    curves = [np.diff(use_curve(plan, each, slot_min)) * factor for each in devices]
    masks = [_may_charge(plan, each, slot_min) for each in devices]
    return Lines(
        count=np.array([each.count for each in devices], dtype=np.int64),
        whole_wh=whole,
        start_wh=whole * start,
        # A line that starts below its floor is held where it starts: the balance gives it no credit and no debt.
        floor_wh=whole * np.minimum(start, [each.floor_fraction for each in devices]),
        target_wh=whole * np.array([each.target_fraction for each in devices]),
        eta=np.array([outlet_to_device_fraction(each) for each in devices]),
        rate_per_h=np.array([_rate_per_h(each, degc) for each in devices]),
        end_per_h=np.array([each.taper_end_per_h for each in devices]),
        tau_h=np.array([each.taper_tau_h for each in devices]),
        rank=np.array([classes.index(each.priority) if classes else 0 for each in devices], dtype=np.int64),
        use_wh=np.array(curves).reshape(len(devices), slots),
        chargeable=np.array(masks, dtype=bool).reshape(len(devices), slots),
        fits=np.array([[connectors_fit(each, store) for store in plan.stores] for each in devices], dtype=bool).reshape(
            len(devices), len(plan.stores)
        ),
        reserve_wh=np.array(reserve),
    )


def _rate_per_h(device: Device, degc: float) -> float:
    """Return the greatest rate into one unit: its own, its plug's and the cold's, as in the effort table."""
    if not device.battery_wh:
        return 0.0
    rate = device.charge_rate_per_h if device.charge_w is None else device.charge_w / device.battery_wh
    if degc < COLD_BELOW_DEGC:
        rate = min(rate, float(charge_ceiling_rate_per_h(degc, "li_ion")))
    if device.input_limit_a is not None:
        rate = min(rate, device.input_limit_a * BUS_V * device.eta / device.battery_wh)
    return rate


def connectors_fit(device: Device, store: Store) -> bool:
    """Return False where both name a connector and the names differ; an empty one fits everything.

    Examples
    --------
    >>> connectors_fit(Device(id="d", name="d", connector="USB-C"), Store(id="s", name="s", connector="usb-c "))
    True
    """
    plug, socket = (" ".join(each.connector.casefold().split()) for each in (device, store))
    return not plug or not socket or plug == socket


def _may_charge(plan: Plan, device: Device, slot_min: int) -> BoolArray:
    """Return the slots of the horizon in which a line may be charged, quiet hours of single days included."""
    if not device.battery_wh:
        return np.ones(plan.days * (DAY_MIN // slot_min), dtype=bool)
    return charging_mask(plan, device, slot_min)


def _outlets(plan: Plan, slot_min: int) -> IntArray:
    """Return how many devices may be on charge in each slot: at the points then attended, else at the stores."""
    per_day = DAY_MIN // slot_min
    outlets = np.zeros(plan.days * per_day, dtype=np.int64)
    if not plan.charging_points:
        # Without stores a device hangs at the station itself: one at each unit.
        stored = sum(store.count * store.outlets for store in plan.stores)
        return outlets + (stored if plan.stores else sum(station.count for station in plan.stations))
    for day in range(plan.days):
        waking = outside(quiet_on(plan, day + 1))
        for point in plan.charging_points:
            attended = merged(day_parts(point.hours)) or waking
            outlets[day * per_day : (day + 1) * per_day] += point.outlets * day_mask(attended, slot_min)
    return outlets


def _lights_out(plan: Plan, slot_min: int) -> tuple[int, ...]:
    """Return the slot at whose start lights go out on each day: the latest start of that day's quiet windows."""
    found = []
    for day in range(1, plan.days + 1):
        starts = [part[0] for part in quiet_on(plan, day) if part[0] > 0]
        if starts:
            found.append((day - 1) * (DAY_MIN // slot_min) + max(starts) // slot_min)
    return tuple(found)


def _guarantee_line(plan: Plan, kinds: tuple[str, ...]) -> int:
    """Return the marked line that costs least to keep ready, lines with a battery first; -1 where none is marked."""
    marked = [place for place, each in enumerate(plan.devices) if each.evening and each.kind in kinds and each.count]
    if not marked:
        return -1
    return min(
        marked,
        key=lambda place: (
            not plan.devices[place].battery_wh,
            plan.devices[place].count * (plan.devices[place].battery_wh or 0.0),
            plan.devices[place].priority,
        ),
    )


def _feeds(plan: Plan, bouts: Sequence[RotaBout], slot_min: int) -> tuple[tuple[Feed, ...], FloatArray]:
    """Return what reaches each set of stores, and the cumulative sum of it at O."""
    slots = plan.days * (DAY_MIN // slot_min)
    place = {store.id: index for index, store in enumerate(plan.stores)}
    by_stores: dict[tuple[int, ...], FloatArray] = {}
    of_station = {
        station.id: tuple(place[store.id] for store in fed_stores(plan, station)) for station in plan.stations
    }
    for bout, since in zip(bouts, turning_since(plan, bouts), strict=True):
        key = of_station[bout.station]
        row = by_stores.setdefault(key, np.zeros(slots))
        _spread(row, since, (bout.day - 1) * DAY_MIN + bout.end_min, bout.output_wh, slot_min)
    for source in plan.other_sources:
        row = by_stores.setdefault(tuple(range(len(plan.stores))), np.zeros(slots))
        parts = merged(day_parts(source.windows)) or ((0, DAY_MIN),)
        minutes = sum(end - start for start, end in parts)
        for day in range(plan.days):
            for start, end in parts:
                energy = source.wh_per_day * (end - start) / minutes
                _spread(row, day * DAY_MIN + start, day * DAY_MIN + end, energy, slot_min)
    total = np.zeros(slots)
    for key, row in by_stores.items():
        total += row * station_to_outlet_fraction([plan.stores[index] for index in key])
    feeds = tuple(Feed(key, row) for key, row in by_stores.items())
    return feeds, np.concatenate(([0.0], np.cumsum(total)))


def turning_since(plan: Plan, bouts: Sequence[RotaBout]) -> list[int]:
    """Return from which minute since day 1, 00:00 each bout gives energy: after what is left of the changeover."""
    changeover = {station.id: station.changeover_min for station in plan.stations}
    order = sorted(range(len(bouts)), key=lambda index: (bouts[index].day, bouts[index].start_min))
    since = [0] * len(bouts)
    last: dict[tuple[str, int], tuple[str, int]] = {}
    for index in order:
        bout = bouts[index]
        begin, end = ((bout.day - 1) * DAY_MIN + minute for minute in (bout.start_min, bout.end_min))
        before = last.get((bout.station, bout.unit))
        last[bout.station, bout.unit] = (bout.person, end)
        since[index] = begin
        if before is not None and before[0] != bout.person:
            since[index] = min(max(begin, before[1] + changeover[bout.station]), end)
    return since


def _spread(row: FloatArray, since: int, until: int, energy_wh: float, slot_min: int) -> None:
    """Add an energy evenly over its minutes to the slots they touch."""
    if until <= since:
        return
    first, last = since // slot_min, -(-until // slot_min)
    edges = np.arange(first, last + 1) * slot_min
    minutes = np.minimum(edges[1:], until) - np.maximum(edges[:-1], since)
    row[first:last] += energy_wh * minutes / (until - since)
