"""The ways of giving a device's use, kept in step: changing the way converts the numbers, the energy a day stays."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from msgspec import Struct, structs

from kitplanner.domain.units import hours_from_minutes, minutes_from_hours
from kitplanner.plan.device_use import device_use_wh_per_day, hours_of_use
from kitplanner.plan.edits import Edit, EditError, get_value, replace_record, set_value
from kitplanner.plan.records import Device, Note, Plan, UseBy

WAY_KEYS: Mapping[UseBy, tuple[str, ...]] = MappingProxyType(
    {
        "wh_per_day": ("use_wh_per_day",),
        "power_hours": ("use_w", "use_h_per_day"),
        "percent": ("use_battery_fraction_per_day",),
        "times": ("use_w", "use_times_per_day", "use_min_each"),
    }
)
_HOURS_A_DAY = 24.0
_MOST_BATTERIES = 10.0
_MOST_W = 1e4


class UseInWays(Struct, frozen=True, kw_only=True):
    """One device's use of a day in every way that can hold it; None where a way cannot."""

    wh_per_day: float | None = None
    battery_fraction_per_day: float | None = None
    use_w: float | None = None
    h_per_day: float | None = None
    times_per_day: float | None = None
    min_each: float | None = None


def use_in_ways(device: Device) -> UseInWays:
    """Return the use of a device in every way, for showing the others beside the one that is given.

    Examples
    --------
    >>> use_in_ways(Device(id="p", name="Phone", battery_wh=15.0, use_wh_per_day=6.0)).battery_fraction_per_day
    0.4
    """
    energy = device_use_wh_per_day(device)
    if energy is None:
        return UseInWays()
    hours = _values(device, "power_hours", energy)
    times = _values(device, "times", energy)
    return UseInWays(
        wh_per_day=energy,
        battery_fraction_per_day=energy / device.battery_wh if device.battery_wh else None,
        use_w=hours["use_w"],
        h_per_day=hours["use_h_per_day"],
        times_per_day=times["use_times_per_day"],
        min_each=times["use_min_each"],
    )


def change_use_way(device_id: str, way: UseBy) -> Edit:
    """Return the edit that gives a device's use in another way without changing the energy it uses in a day.

    Numbers of the new way keep the mark and source of the old one. A use that is not given yet stays so.

    Raises
    ------
    EditError
        The way cannot hold this use: percent of a battery that is not there or too small.
    """

    def edit(plan: Plan) -> Plan:
        path = ("devices", device_id)
        device: Device = get_value(plan, path)
        if way not in WAY_KEYS:
            raise EditError(
                (*path, "use_by"), "there is no such way of giving use", f"use one of {', '.join(WAY_KEYS)}"
            )
        if way == device.use_by:
            return plan
        energy = device_use_wh_per_day(device)
        changes = {} if energy is None else _values(device, way, energy)
        if way == "percent" and energy is not None:
            _require_percent(path, device, energy)
        notes = {
            key: note
            for key, note in device.notes.items()
            if key not in changes or getattr(device, key) == changes[key]
        }
        origin = _origin(device)
        for key in changes:
            if origin is not None and key not in notes:
                notes[key] = origin
        return replace_record(path, structs.replace(device, use_by=way, notes=notes, **changes))(plan)

    return edit


def set_use(device_id: str, key: str, value: float) -> Edit:
    """Return the edit that sets one number of a device's use and makes its way the one that counts.

    Setting a number of another way first converts what is there, so that the other numbers of that way fit.

    Examples
    --------
    >>> phone = Device(id="p", name="Phone", battery_wh=15.0, use_wh_per_day=6.0)
    >>> changed = set_use("p", "use_battery_fraction_per_day", 0.2)(Plan(devices=(phone,))).devices[0]
    >>> changed.use_by, changed.use_battery_fraction_per_day
    ('percent', 0.2)
    """

    def edit(plan: Plan) -> Plan:
        device: Device = get_value(plan, ("devices", device_id))
        ways = [way for way, keys in WAY_KEYS.items() if key in keys]
        if not ways:
            raise EditError(("devices", device_id, key), "this is no number of its use", "choose one of its use")
        if device.use_by not in ways:
            plan = change_use_way(device_id, ways[0])(plan)
        return set_value(("devices", device_id, key), value)(plan)

    return edit


def _values(device: Device, way: UseBy, energy: float) -> dict[str, float]:
    """Return the numbers of a way that come to this energy, keeping what the record already holds of them."""
    match way:
        case "wh_per_day":
            return {"use_wh_per_day": energy}
        case "percent":
            return {"use_battery_fraction_per_day": energy / device.battery_wh} if device.battery_wh else {}
        case "power_hours":
            power, hours = _power_and_hours(device, energy)
            return {"use_w": power, "use_h_per_day": hours}
        case _:
            power, hours = _power_and_hours(device, energy)
            times = device.use_times_per_day or 1.0
            return {
                "use_w": power,
                "use_times_per_day": times,
                "use_min_each": float(minutes_from_hours(hours)) / times,
            }


def _power_and_hours(device: Device, energy: float) -> tuple[float, float]:
    """Return watts and hours that come to an energy: known watts first, else known hours, else the whole day."""
    if device.use_w and energy / device.use_w <= _HOURS_A_DAY:
        return device.use_w, energy / device.use_w
    hours = _known_hours(device)
    if 0 < hours <= _HOURS_A_DAY and energy / hours <= _MOST_W:
        return energy / hours, hours
    return energy / _HOURS_A_DAY, _HOURS_A_DAY


def _known_hours(device: Device) -> float:
    if device.use_by == "times" and device.use_times_per_day and device.use_min_each:
        return float(hours_from_minutes(device.use_times_per_day * device.use_min_each))
    return hours_of_use(device)


def _origin(device: Device) -> Note | None:
    """Return the note of the number the use was given by, so that a guess stays a guess."""
    notes = [device.notes[key] for key in WAY_KEYS[device.use_by] if key in device.notes]
    return min(notes, key=lambda note: note.mark != "guess") if notes else Note(mark="own")


def _require_percent(path: tuple[str, ...], device: Device, energy: float) -> None:
    place = (*path, "use_by")
    if not device.battery_wh:
        raise EditError(place, "percent needs a battery and none is given", "enter its Wh or choose another way")
    if energy / device.battery_wh > _MOST_BATTERIES:
        reason = f"{energy:g} Wh a day are more than {_MOST_BATTERIES:g} times its battery"
        raise EditError(place, reason, "give the use in Wh a day")
