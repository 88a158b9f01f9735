"""What one unit of a device uses in a day, read from the way its use is given."""

from __future__ import annotations

from kitplanner.domain.demand import wh_from_battery_fraction, wh_from_power, wh_from_times
from kitplanner.domain.units import MINUTES_PER_DAY, MINUTES_PER_HOUR, minutes_of_day
from kitplanner.plan.records import Device, Window


def window_hours(windows: tuple[Window, ...]) -> float:
    """Return the hours of a day that lie in at least one of the windows [h].

    Examples
    --------
    >>> window_hours((Window(start="22:00", end="06:00"), Window(start="05:00", end="07:00")))
    9.0
    """
    spans: list[tuple[int, int]] = []
    for window in windows:
        start, end = minutes_of_day(window.start), minutes_of_day(window.end)
        spans += [(start, end)] if start < end else [(start, MINUTES_PER_DAY), (0, end)]
    total, reached = 0, 0
    for start, end in sorted(spans):
        total += max(0, end - max(start, reached))
        reached = max(reached, end)
    return total / MINUTES_PER_HOUR


def hours_of_use(device: Device) -> float:
    """Return the hours of use a day: as given, else the length of the times of use [h]."""
    return device.use_h_per_day if device.use_h_per_day is not None else window_hours(device.use_windows)


def device_use_wh_per_day(device: Device) -> float | None:
    """Return the energy one unit uses in a day at D, None where what its way needs is not given.

    D = power * hours, or energy a day, or capacity * share a day, or power * times * minutes / 60

    Parameters
    ----------
    device : Device
        One device line; values are per unit

    Returns
    -------
    float or None
        Energy at the device [Wh]

    Examples
    --------
    >>> device_use_wh_per_day(Device(id="r", name="Radio", use_by="power_hours", use_w=0.5, use_h_per_day=1.5))
    0.75
    """
    match device.use_by:
        case "power_hours":
            hours = hours_of_use(device)
            return None if device.use_w is None else float(wh_from_power(device.use_w, hours))
        case "percent":
            share, battery = device.use_battery_fraction_per_day, device.battery_wh
            return None if share is None or battery is None else float(wh_from_battery_fraction(share, battery))
        case "times":
            parts = (device.use_w, device.use_times_per_day, device.use_min_each)
            given = [part for part in parts if part is not None]
            return float(wh_from_times(*given)) if len(given) == len(parts) else None
        case _:
            return device.use_wh_per_day
