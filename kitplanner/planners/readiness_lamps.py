"""Lamps against dark hours: what burns in daylight, and which dark hours have no lamp."""

from __future__ import annotations

from collections.abc import Sequence

from msgspec import Struct

from kitplanner.plan.records import Device, Plan
from kitplanner.planners.balance_windows import WHOLE_DAY, Part, day_parts, merged, outside, quiet_parts, total_min


class LampHours(Struct, frozen=True, kw_only=True):
    """A line of lamps against the dark: minutes of use in the dark and in daylight; None without use windows."""

    device: str
    dark_min: int | None
    daylight_min: int | None


class DarkHours(Struct, frozen=True, kw_only=True):
    """Lamps against the dark: `bare_awake` and `bare_asleep` are dark parts in which no lamp is planned.

    `asleep` is quiet hours. `unplanned` are lamps without use windows: when they burn is not known. `is_known` is False
    where the plan states no dark hours.
    """

    is_known: bool
    dark_min: int
    lamps: tuple[LampHours, ...]
    unplanned: tuple[str, ...]
    bare_awake: tuple[Part, ...]
    bare_asleep: tuple[Part, ...]


def dark_hours(plan: Plan) -> DarkHours:
    """Return lamps against dark hours: what burns in daylight, and which dark hours have no lamp.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    DarkHours
        Minutes in a day; dark parts without any lamp, awake and in quiet hours
    """
    dark = merged(day_parts(plan.conditions.dark))
    lamps = [device for device in plan.devices if device.kind == "light" and device.count]
    planned = [lamp for lamp in lamps if lamp.use_windows]
    lit = merged(part for lamp in planned for part in day_parts(lamp.use_windows))
    bare = _minus(dark, lit)
    quiet = merged(quiet_parts(plan.blocks))
    return DarkHours(
        is_known=bool(dark),
        dark_min=total_min(dark),
        lamps=tuple(_lamp_hours(lamp, dark) for lamp in lamps),
        unplanned=tuple(lamp.id for lamp in lamps if not lamp.use_windows),
        bare_awake=_minus(bare, quiet),
        bare_asleep=_common(bare, quiet),
    )


def _lamp_hours(lamp: Device, dark: Sequence[Part]) -> LampHours:
    if not lamp.use_windows:
        return LampHours(device=lamp.id, dark_min=None, daylight_min=None)
    use = merged(day_parts(lamp.use_windows))
    in_dark = total_min(_common(use, dark))
    return LampHours(device=lamp.id, dark_min=in_dark, daylight_min=total_min(use) - in_dark if dark else None)


def _common(first: Sequence[Part], second: Sequence[Part]) -> tuple[Part, ...]:
    both = [(max(a, c), min(b, d)) for a, b in first for c, d in second]
    return merged(part for part in both if part[0] < part[1])


def _minus(parts: Sequence[Part], taken: Sequence[Part]) -> tuple[Part, ...]:
    return _common(parts, outside(taken) if taken else WHOLE_DAY)
