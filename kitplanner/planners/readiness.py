"""What to charge in which order from the mains: when a warning has come, and when power is back.

Charge times are those of the devices' own acceptance at a mains socket, which gives whatever they take. Both lists
put what matters more first, then what is done sooner.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import Literal

from msgspec import Struct, structs

from kitplanner.domain.battery import Acceptance, charge_ceiling_rate_per_h, minutes_to_charge
from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.plan.records import Chemistry, Device, Plan, Store
from kitplanner.planners.effort_source import BUS_V
from kitplanner.planners.effort_timing import cell_degc

ListName = Literal["warning", "power_back"]
Why = Literal["planning_computer", "evening", "priority", "store"]

# Sockets in reach where the plan names no charging point.
DEFAULT_SOCKETS = 4
# Stores serve everything, so they stand between priority 2 (operation) and 3.
_STORE_RANK = 2.5
# Charge rates of stores without a stated limit: lithium as a phone's, NiMH 16 h at 0.1 C (IEC 61951-2), lead-acid
# 0.2 C (common practice, no source), a supercapacitor in minutes (own judgement); primary cells are not charged.
_STORE_RATE_PER_H: Mapping[Chemistry, float] = MappingProxyType(
    {"li_ion": 0.5, "lfp": 0.5, "nimh": 0.1, "lead_acid": 0.2, "supercapacitor": 10.0, "alkaline": 0.0}
)
_NIMH_HOURS_FULL = 16.0


class ChargeTask(Struct, frozen=True, kw_only=True):
    """One line to be charged from the mains: `minutes_each` per unit, `ready_min` when its last unit is full.

    `minutes_each` is None where no charge is possible (too cold, no rate); it then stands last and has no time.
    """

    section: Literal["devices", "stores"]
    record: str
    count: int
    why: Why
    priority: int | None
    from_fraction: float
    to_fraction: float
    minutes_each: float | None
    ready_min: float | None


class ChargeList(Struct, frozen=True, kw_only=True):
    """What to charge in which order through a number of sockets; `total_min` until all is full."""

    name: ListName
    sockets: int
    tasks: tuple[ChargeTask, ...]
    total_min: float


def warning_list(plan: Plan, sockets: int | None = None) -> ChargeList:
    """Return what to charge now that a warning has come, from the states of charge in the plan to full.

    Parameters
    ----------
    plan : Plan
        The plan
    sockets : int, optional
        Mains sockets; None: as many as the charging points have outlets, else 4

    Returns
    -------
    ChargeList
        The planning computer first, because the papers are printed with it, then what the evening guarantee needs, then
        by priority, stores between 2 and 3; among equals the quicker first

    References
    ----------
    Charging everything on a warning: advice of civil-protection authorities; order: planning value of this program.
    """
    return _charge_list(plan, "warning", {}, sockets)


def recharge_list(plan: Plan, fractions: Mapping[str, float] | None = None, sockets: int | None = None) -> ChargeList:
    """Return what to charge in which order when power returns, up to full.

    Parameters
    ----------
    plan : Plan
        The plan
    fractions : mapping of id to fraction, optional
        States of charge read at devices and stores; what is not given stands at its floor, the cautious case [-]
    sockets : int, optional
        Mains sockets; None: as many as the charging points have outlets, else 4

    Returns
    -------
    ChargeList
        By priority, stores between 2 and 3, then time
    """
    return _charge_list(plan, "power_back", fractions or {}, sockets)


def _charge_list(plan: Plan, name: ListName, read: Mapping[str, float], sockets: int | None) -> ChargeList:
    ways = sockets if sockets is not None else sum(point.outlets for point in plan.charging_points) or DEFAULT_SOCKETS
    ways = max(1, ways)
    tasks = [
        *(_device_task(plan, device, name, read) for device in plan.devices if device.battery_wh and device.count),
        *(_store_task(plan, store, name, read) for store in plan.stores if store.count and store.nominal_wh > 0.0),
    ]
    waiting = sorted((task for task in tasks if task.from_fraction < task.to_fraction), key=lambda t: _order(t, name))
    free = [0.0] * ways
    done = tuple(_scheduled(task, free) for task in waiting)
    return ChargeList(name=name, sockets=ways, tasks=done, total_min=max(free))


def _scheduled(task: ChargeTask, free: list[float]) -> ChargeTask:
    """Put every unit of a line on the socket that is free first; `free` is changed."""
    if task.minutes_each is None:
        return task
    ready = 0.0
    for _ in range(task.count):
        place = free.index(min(free))
        free[place] += task.minutes_each
        ready = max(ready, free[place])
    return structs.replace(task, ready_min=ready)


def _order(task: ChargeTask, name: ListName) -> tuple[int, float, float, str]:
    first = {"planning_computer": 0, "evening": 1}.get(task.why, 2) if name == "warning" else 2
    rank = _STORE_RANK if task.priority is None else float(task.priority)
    minutes = math.inf if task.minutes_each is None else task.minutes_each
    return (3 if task.minutes_each is None else first, rank, minutes, task.record)


def _device_task(plan: Plan, device: Device, name: ListName, read: Mapping[str, float]) -> ChargeTask:
    start = device.start_fraction if name == "warning" else device.floor_fraction
    start = read.get(device.id, start)
    why: Why = "planning_computer" if device.planning_computer else "evening" if device.evening else "priority"
    return ChargeTask(
        section="devices",
        record=device.id,
        count=device.count,
        why=why,
        priority=device.priority,
        from_fraction=start,
        to_fraction=1.0,
        minutes_each=device_minutes(plan, device, start, 1.0),
        ready_min=None,
    )


def device_minutes(plan: Plan, device: Device, from_fraction: float, to_fraction: float) -> float | None:
    """Return how long one unit charges at a mains socket, None where it cannot [min].

    integral of ds / min(own rate, input limit, taper), with no rate in the cold that the charging rule forbids

    Parameters
    ----------
    plan : Plan
        For the temperature
    device : Device
        One device line with its own battery
    from_fraction, to_fraction : float
        States of charge [-]

    Returns
    -------
    float or None
        Minutes [min]

    Examples
    --------
    >>> phone = Device(id="p", name="phone", battery_wh=15.4)
    >>> round(device_minutes(Plan(), phone, 0.0, 1.0), 1)
    145.2
    """
    battery_wh = device.battery_wh or 0.0
    if battery_wh <= 0.0:
        return None
    rate = device.charge_rate_per_h if device.charge_w is None else device.charge_w / battery_wh
    rate = min(rate, float(charge_ceiling_rate_per_h(cell_degc(plan), "li_ion"))) if _is_cold(plan) else rate
    limit_a = device.input_limit_a
    source = math.inf if limit_a is None else device.eta * limit_a * BUS_V / battery_wh
    return _finite(
        minutes_to_charge(
            from_fraction,
            to_fraction,
            source,
            Acceptance(rate_per_h=rate, taper_end_per_h=device.taper_end_per_h, taper_tau_h=device.taper_tau_h),
        )
    )


def _is_cold(plan: Plan) -> bool:
    degc = cell_degc(plan)
    return degc < 15.0 or float(charge_ceiling_rate_per_h(degc, "li_ion")) <= 0.0


def _finite(minutes: object) -> float | None:
    value = float(minutes)  # type: ignore[arg-type]
    return value if math.isfinite(value) else None


def _store_task(plan: Plan, store: Store, name: ListName, read: Mapping[str, float]) -> ChargeTask:
    start = read.get(store.id, store.start_fraction if name == "warning" else store.floor_fraction)
    return ChargeTask(
        section="stores",
        record=store.id,
        count=store.count,
        why="store",
        priority=None,
        from_fraction=start,
        to_fraction=1.0,
        minutes_each=store_minutes(plan, store, start, 1.0),
        ready_min=None,
    )


def store_minutes(plan: Plan, store: Store, from_fraction: float, to_fraction: float) -> float | None:
    """Return how long one unit of a store charges at a mains socket, None where it cannot [min].

    With a charge limit in watts that is the source; else the usual rate of its chemistry. NiMH by its standard charge,
    16 h for a full one.

    Parameters
    ----------
    plan : Plan
        For the temperature
    store : Store
        One store line
    from_fraction, to_fraction : float
        States of charge [-]

    Returns
    -------
    float or None
        Minutes [min]

    Examples
    --------
    >>> bank = Store(id="b", name="bank", nominal_wh=74.0, charge_limit_w=10.0)
    >>> round(store_minutes(Plan(), bank, 0.1, 1.0) / 60.0, 1)
    7.5
    """
    capacity_wh = store.nominal_wh * store.health_fraction
    rate = _STORE_RATE_PER_H[store.chemistry]
    if rate <= 0.0 or capacity_wh <= 0.0:
        return None
    limit_w = store.charge_limit_w
    source = math.inf if limit_w is None else limit_w * store.eta_in / capacity_wh
    if store.chemistry in ("li_ion", "lfp"):
        if _is_cold(plan):
            rate = min(rate, float(charge_ceiling_rate_per_h(cell_degc(plan), "li_ion")))
        return _finite(minutes_to_charge(from_fraction, to_fraction, source, Acceptance(rate_per_h=rate)))
    hours_full = _NIMH_HOURS_FULL if store.chemistry == "nimh" else 1.0 / rate
    return (to_fraction - from_fraction) * max(hours_full, 1.0 / source) * MINUTES_PER_HOUR
