"""Checks of devices: data missing for the chosen kind of use, states of charge, windows, connectors."""

from __future__ import annotations

from collections.abc import Iterator

from kitplanner.plan.checks_fields import shown
from kitplanner.plan.fields import field
from kitplanner.plan.problem import Place, Problem, error, note, warning
from kitplanner.plan.records import Device, Plan, Window

_NEEDED = {
    "power_hours": ("use_w", "use_h_per_day"),
    "wh_per_day": ("use_wh_per_day",),
    "percent": ("use_battery_fraction_per_day",),
    "times": ("use_w", "use_times_per_day", "use_min_each"),
}
_WORDS = {
    "use_w": "the power in use",
    "use_h_per_day": "the hours a day",
    "use_wh_per_day": "the use a day",
    "use_battery_fraction_per_day": "the percent of the battery a day",
    "use_times_per_day": "the times a day",
    "use_min_each": "the minutes each time",
}
MINUTES_PER_DAY = 1440


def check_use(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of the devices."""
    return tuple(problem for device in plan.devices for problem in _check_device(plan, device))


def _check_device(plan: Plan, device: Device) -> Iterator[Problem]:
    place = ("devices", device.id)
    for key in _NEEDED[device.use_by]:
        if getattr(device, key) is None:
            yield error((*place, key), f"{_WORDS[key]} is missing", "enter it or give the use in another way")
    if device.battery_wh is None:
        if device.use_by == "percent":
            yield error(
                (*place, "battery_wh"),
                "the use is given in percent of a battery, but no battery is given",
                "enter the battery's Wh or give the use in another way",
            )
    else:
        yield from _check_charge_states(place, device)
    yield from _check_use_time(place, device)
    yield from _check_connector(plan, place, device)
    if any(window.end < window.start for window in device.charge_windows):
        yield note(
            (*place, "charge_windows"),
            "the charging times run through midnight",
            "swap start and end if this is not meant",
        )


def _check_charge_states(place: Place, device: Device) -> Iterator[Problem]:
    keys = ("start_fraction", "floor_fraction", "target_fraction")
    start, floor, target = (shown(field("device", key), getattr(device, key)) for key in keys)
    if device.floor_fraction >= device.target_fraction:
        yield error(
            (*place, "target_fraction"),
            f"it is charged up to {target} but must not go below {floor}, so it gives nothing",
            "raise the target or lower the floor",
        )
    elif device.start_fraction < device.floor_fraction:
        yield warning(
            (*place, "start_fraction"),
            f"it starts at {start}, below its floor of {floor}, and brings nothing along",
            "charge it before the start or lower the floor",
        )


def _check_use_time(place: Place, device: Device) -> Iterator[Problem]:
    minutes = _use_minutes(device)
    if minutes > MINUTES_PER_DAY:
        yield error(
            (*place, "use_by"), f"the use comes to {minutes / 60:.4g} hours a day", "enter fewer times or minutes"
        )
    window_minutes = _minutes(device.use_windows)
    if device.use_windows and minutes > window_minutes + 0.5:
        yield warning(
            (*place, "use_windows"),
            f"it is used {minutes / 60:.4g} hours a day, but its times of use have only {window_minutes / 60:.4g}",
            "lengthen the times or shorten the use",
        )


def _use_minutes(device: Device) -> float:
    if device.use_by == "power_hours":
        return (device.use_h_per_day or 0.0) * 60
    if device.use_by == "times":
        return (device.use_times_per_day or 0.0) * (device.use_min_each or 0.0)
    return 0.0


def _minutes(windows: tuple[Window, ...]) -> int:
    """Return the minutes of a day that lie in at least one of the windows."""
    covered: set[int] = set()
    for window in windows:
        start, end = (int(text[:2]) * 60 + int(text[3:]) for text in (window.start, window.end))
        covered |= set(range(start, end)) if start < end else set(range(start, MINUTES_PER_DAY)) | set(range(end))
    return len(covered)


def _check_connector(plan: Plan, place: Place, device: Device) -> Iterator[Problem]:
    sockets = [one.connector for one in plan.stations] + [one.connector for one in plan.stores]
    if device.connector and sockets and "" not in sockets and device.connector not in sockets:
        yield warning(
            (*place, "connector"),
            "no station or store has this connector, so it cannot be charged",
            "add an adapter and write the same connector in both places",
        )
