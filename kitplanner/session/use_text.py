"""A device's use of a day said in every way it can be given, so that the ways are seen to agree."""

from __future__ import annotations

from kitplanner.plan.edits_use import use_in_ways
from kitplanner.plan.fields import field
from kitplanner.plan.records import Device
from kitplanner.session.field_text import number_text, translate, unit_of


def same_use_text(device: Device) -> str:
    """Return one sentence with the use in all ways that can hold it; empty where no use is given.

    Examples
    --------
    >>> same_use_text(Device(id="p", name="Phone", battery_wh=15.0, use_wh_per_day=6.0))
    'The same use: 6 Wh/day; 40 % of its battery a day; 0.25 W for 24 h.'
    """
    ways = use_in_ways(device)
    if ways.wh_per_day is None:
        return ""
    parts = [_amount("use_wh_per_day", ways.wh_per_day)]
    if ways.battery_fraction_per_day is not None:
        share = _amount("use_battery_fraction_per_day", ways.battery_fraction_per_day)
        parts.append(translate("UseText", "{share} of its battery a day").format(share=share))
    if ways.use_w is not None and ways.h_per_day is not None:
        watts, hours = _amount("use_w", ways.use_w), _amount("use_h_per_day", ways.h_per_day)
        parts.append(translate("UseText", "{watts} for {hours}").format(watts=watts, hours=hours))
    return translate("UseText", "The same use: {ways}.").format(ways="; ".join(parts))


def _amount(key: str, value: float) -> str:
    spec = field("device", key)
    unit = unit_of(spec).removesuffix("/day") if key != "use_wh_per_day" else unit_of(spec)
    return f"{number_text(spec, value, exact=False)} {unit}".strip()
