"""Closing down: what becomes of stores and devices; and ways to save while the outage lasts."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Literal

from msgspec import Struct

from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.plan.records import Chemistry, Device, Plan, Store
from kitplanner.planners.demand import use_wh_per_day

Fate = Literal["return", "store", "take_out_cells", "replace"]
Tip = Literal["phone", "phone_no_network", "radio", "light", "network", "computer"]

# Charge for months on a shelf: lead-acid full, NiMH any, cells out of the device (common practice). Lithium keeps best
# near 40 %, but an emergency store must hold something: 75 %, checked every 3 months, full on a warning (planning value
# of this program).
_SHELF_FRACTION: Mapping[Chemistry, float] = MappingProxyType(
    {"li_ion": 0.75, "lfp": 0.75, "nimh": 0.75, "lead_acid": 1.0, "supercapacitor": 0.0, "alkaline": 1.0}
)
# Below this health a battery is at the end of its planned life: 80 % in IEEE 450 for lead-acid (from memory), used for
# all here.
WORN_HEALTH_FRACTION = 0.80
LISTEN_MIN = 5.0
# 07:00, 10:00, 13:00, 16:00 and 19:00: the sparse listening schedule of emergency radio practice.
LISTEN_TIMES = 5


class CloseDownTask(Struct, frozen=True, kw_only=True):
    """What becomes of one line at the end: `charge_fraction` to store it at, `health_fraction` where known."""

    section: Literal["devices", "stores"]
    record: str
    count: int
    fate: Fate
    charge_fraction: float | None
    health_fraction: float | None


class SavingTip(Struct, frozen=True, kw_only=True):
    """A way to save energy for some devices; `saved_wh_per_day` at D where it follows from the plan, else None."""

    tip: Tip
    devices: tuple[str, ...]
    use_wh_per_day: float
    saved_wh_per_day: float | None


def close_down_list(plan: Plan) -> tuple[CloseDownTask, ...]:
    """Return what becomes of stores and devices at the end, what is worn or to be looked at first.

    Devices go back to their owners; stores go on the shelf at the charge that keeps them, worn ones are replaced. The
    program cannot see damage: every battery is looked at before anything else (caution C2).

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    tuple of CloseDownTask
        Stores, then devices, in the plan's order

    References
    ----------
    Lead-acid stored full, cells taken out of devices: common practice. Lithium at 75 % instead of 40 %: planning value
    of this program for a store that must be ready. End of life at 80 % of rated capacity: IEEE 450 (from memory).
    """
    stores = (_store_fate(store) for store in plan.stores if store.count)
    devices = (
        CloseDownTask(
            section="devices",
            record=device.id,
            count=device.count,
            fate="return",
            charge_fraction=None,
            health_fraction=None,
        )
        for device in plan.devices
        if device.count
    )
    return (*stores, *devices)


def _store_fate(store: Store) -> CloseDownTask:
    fate: Fate = "store"
    if store.chemistry == "alkaline":
        fate = "take_out_cells"
    elif store.health_fraction < WORN_HEALTH_FRACTION:
        fate = "replace"
    return CloseDownTask(
        section="stores",
        record=store.id,
        count=store.count,
        fate=fate,
        charge_fraction=None if fate == "replace" else _SHELF_FRACTION[store.chemistry],
        health_fraction=store.health_fraction,
    )


def saving_tips(plan: Plan) -> tuple[SavingTip, ...]:
    """Return ways to save energy that fit the devices of a plan, what is used most first.

    For radios the saving is what listening five minutes every three hours from 07:00 leaves of their present use.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    tuple of SavingTip
        Use and saving a day at D [Wh]
    """
    tips: list[SavingTip] = []
    for kind, names in _TIPS.items():
        found = [device for device in plan.devices if device.kind == kind and device.count and use_wh_per_day(device)]
        if not found:
            continue
        use = sum(device.count * use_wh_per_day(device) for device in found)
        ids = tuple(device.id for device in found)
        saved = sum(_listening_saved_wh(device) for device in found) if kind == "radio" else None
        tips += [SavingTip(tip=name, devices=ids, use_wh_per_day=use, saved_wh_per_day=saved) for name in names]
    return tuple(sorted(tips, key=lambda tip: -tip.use_wh_per_day))


_TIPS: Mapping[str, tuple[Tip, ...]] = MappingProxyType(
    {
        "phone": ("phone", "phone_no_network"),
        "radio": ("radio",),
        "light": ("light",),
        "network": ("network",),
        "computer": ("computer",),
    }
)


def _listening_saved_wh(device: Device) -> float:
    """Return what sparse listening saves a day for a line of radios given by watts, 0 where nothing is known."""
    if device.use_by not in ("power_hours", "times") or not device.use_w:
        return 0.0
    listening = device.use_w * LISTEN_TIMES * LISTEN_MIN / MINUTES_PER_HOUR
    return device.count * max(0.0, use_wh_per_day(device) - listening)
