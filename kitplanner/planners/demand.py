"""What devices need: energy a day, start credit, and the step from the outlet to the device.

Levels: D at the device (from its own battery, or at its input if it has none), O at the outlet.
"""

from __future__ import annotations

from msgspec import Struct

from kitplanner.domain.demand import wh_from_battery_fraction, wh_from_power, wh_from_times
from kitplanner.plan.records import Device, Plan
from kitplanner.planners.balance_windows import MINUTES_PER_HOUR, day_parts, merged, total_min


class DeviceNeed(Struct, frozen=True, kw_only=True):
    """Energy of one device line over the horizon, at O: use with and without margin, and start credit."""

    device: str
    priority: int
    day_d_wh: float
    day_o_wh: float
    use_wh: float
    credit_wh: float
    credit_plain_wh: float
    full_plain_wh: float


def use_hours_per_day(device: Device) -> float:
    """Return hours of use a day: the value given, or the length of the use windows.

    Parameters
    ----------
    device : Device
        One device line

    Returns
    -------
    float
        Hours of use [h]
    """
    if device.use_h_per_day is not None:
        return device.use_h_per_day
    return total_min(merged(day_parts(device.use_windows))) / MINUTES_PER_HOUR


def use_wh_per_day(device: Device) -> float:
    """Return the energy one unit uses in a day, at D.

    D = power * hours, or energy a day, or capacity * share a day, or power * times * minutes / 60

    Parameters
    ----------
    device : Device
        One device line; values are per unit

    Returns
    -------
    float
        Energy at the device [Wh]

    Examples
    --------
    >>> use_wh_per_day(Device(id="r", name="radio", use_by="times", use_w=0.5, use_times_per_day=16, use_min_each=5))
    0.6666666666666666
    >>> use_wh_per_day(Device(id="r", name="radio", use_by="power_hours", use_w=0.54, use_h_per_day=12))
    6.48
    """
    if device.use_by == "power_hours":
        return float(wh_from_power(device.use_w or 0.0, use_hours_per_day(device)))
    if device.use_by == "percent":
        return float(wh_from_battery_fraction(device.use_battery_fraction_per_day or 0.0, device.battery_wh or 0.0))
    if device.use_by == "times":
        return float(wh_from_times(device.use_w or 0.0, device.use_times_per_day or 0.0, device.use_min_each or 0.0))
    return device.use_wh_per_day or 0.0


def outlet_to_device_fraction(device: Device) -> float:
    """Return the share of outlet energy that a device can use: its efficiency, 1 without own battery [-].

    Examples
    --------
    >>> outlet_to_device_fraction(Device(id="l", name="lamp"))
    1.0
    """
    return device.eta if device.battery_wh else 1.0


def start_credit_wh(device: Device, horizon_d_wh: float) -> float:
    """Return what a line's own start charge saves at the outlet, never more than its own need.

    credit = min(n * capacity * (start - floor), need at D) / efficiency, not below 0

    Parameters
    ----------
    device : Device
        One device line
    horizon_d_wh : float
        What all its units need at D over the horizon [Wh]

    Returns
    -------
    float
        Credit at O [Wh]

    Examples
    --------
    >>> phone = Device(id="p", name="phone", battery_wh=10.0, start_fraction=0.8, floor_fraction=0.2, eta=0.8)
    >>> round(start_credit_wh(phone, 100.0), 6), start_credit_wh(phone, 4.0)
    (7.5, 5.0)
    """
    return _stock_wh(device, device.start_fraction, horizon_d_wh)


def _stock_wh(device: Device, charge_fraction: float, horizon_d_wh: float) -> float:
    """Return the useful energy in a line's own batteries at one state of charge, at O."""
    if not device.battery_wh:
        return 0.0
    stock = device.count * device.battery_wh * (charge_fraction - device.floor_fraction)
    return max(0.0, min(stock, horizon_d_wh)) / device.eta


def device_need(plan: Plan, device: Device) -> DeviceNeed:
    """Return need and credit of one device line over the plan's horizon.

    use = n * D / efficiency * days * (1 + margin)

    Parameters
    ----------
    plan : Plan
        Horizon and margin
    device : Device
        One device line of the plan

    Returns
    -------
    DeviceNeed
        Energy a day at D and O without margin, over the horizon at O with margin, credits [Wh]
    """
    day_d = device.count * use_wh_per_day(device)
    day_o = day_d / outlet_to_device_fraction(device)
    with_margin = plan.days * (1.0 + plan.margin_fraction)
    full_fraction = max(device.start_fraction, device.target_fraction)
    return DeviceNeed(
        device=device.id,
        priority=device.priority,
        day_d_wh=day_d,
        day_o_wh=day_o,
        use_wh=day_o * with_margin,
        credit_wh=start_credit_wh(device, day_d * with_margin),
        credit_plain_wh=start_credit_wh(device, day_d * plan.days),
        full_plain_wh=_stock_wh(device, full_fraction, day_d * plan.days),
    )


def device_needs(plan: Plan) -> tuple[DeviceNeed, ...]:
    """Return need and credit of every device line, in the plan's order."""
    return tuple(device_need(plan, device) for device in plan.devices)
