"""The charging table: which device is on charge when, and which use stays unserved, with when and why.

Simulated on the rota's grid from day 1, 00:00. All energy is booked through the stores, also where a device hangs at
the station: the cautious side, and the same as in the balance.
"""

from __future__ import annotations

import functools
from collections.abc import Callable, Mapping, Sequence

import numpy as np
from msgspec import Struct

from kitplanner.domain.units import clock
from kitplanner.plan.records import Device, Plan, Store
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.charging_dispatch import (
    ACCEPTANCE,
    CONNECTOR,
    EMPTY,
    NOT_ATTENDED,
    OUTLETS,
    Dispatch,
    Reading,
    dispatch,
)
from kitplanner.planners.rota.charging_inputs import ChargingInputs, charging_inputs
from kitplanner.planners.rota.charging_rows import rows_of
from kitplanner.planners.rota.need import device_due
from kitplanner.planners.rota.result import FloatArray, RotaBout, RotaCharge, StoreLevels, UnmetUse

REASONS = {
    EMPTY: "store empty",
    NOT_ATTENDED: "not attended in time",
    OUTLETS: "outlets busy",
    ACCEPTANCE: "acceptance",
    CONNECTOR: "no connector",
}
# Less than this is rounding.
_LEAST_WH = 1e-6


class StoresRead(Struct, frozen=True, kw_only=True):
    """States of charge read at stores at a minute since day 1, 00:00; more than planned counts as planned."""

    minute: int
    fractions: Mapping[str, float]


class EveningMiss(Struct, frozen=True, kw_only=True):
    """An evening without a charged phone or radio for calling help, or without a lamp, at lights-out."""

    day: int
    start_min: int
    device: str
    text: str


class ChargingResult(Struct, frozen=True, kw_only=True):
    """The charging table of a rota; energies at O.

    `evening` comes first in every report. `unmet_margin_wh` is what stays unserved of the margin, beyond `unmet_wh`;
    `wasted_wh` is energy made at S that found every store full.
    """

    evening: tuple[EveningMiss, ...]
    charging: tuple[RotaCharge, ...]
    unmet: tuple[UnmetUse, ...]
    unmet_wh: float
    unmet_margin_wh: float
    wasted_wh: float
    levels: StoreLevels


def _nobody_stops() -> bool:
    return False


def charging_table(
    plan: Plan,
    bouts: Sequence[RotaBout],
    slot_min: int,
    *,
    read: StoresRead | None = None,
    cancelled: Callable[[], bool] = _nobody_stops,
) -> ChargingResult:
    """Return the charging table of a plan's bouts.

    Parameters
    ----------
    plan : Plan
        The plan.
    bouts : sequence of RotaBout
        Bouts with their energy at S.
    slot_min : int
        The rota's grid, a divisor of a day [min].
    read : StoresRead, optional
        What stores really held at a moment; the table goes on from there.
    cancelled : callable
        Asked again and again whether anybody waits still.

    Returns
    -------
    ChargingResult
        Rows, unserved use, levels.

    Raises
    ------
    ChargingStoppedError
        Nobody waits any more.
    """
    reading = _reading(plan, read, slot_min) if read is not None else None
    run = functools.partial(dispatch, is_shared=plan.cut == "shared", reading=reading, cancelled=cancelled)
    inputs = charging_inputs(plan, bouts, slot_min, 1.0)
    done = run(inputs)
    unmet_wh = _whole(done)
    unmet_margin_wh = 0.0
    if plan.margin_fraction > 0.0:
        careful = charging_inputs(plan, bouts, slot_min, 1.0 + plan.margin_fraction)
        unmet_margin_wh = max(0.0, _whole(run(careful)) - unmet_wh)
    return ChargingResult(
        evening=_evenings(plan, inputs, done),
        charging=rows_of(plan.devices, done, slot_min, has_stores=bool(plan.stores)),
        unmet=_unmet_uses(plan, inputs, done),
        unmet_wh=unmet_wh,
        unmet_margin_wh=unmet_margin_wh,
        wasted_wh=done.wasted_wh,
        levels=_levels(plan, done, slot_min),
    )


def _reading(plan: Plan, read: StoresRead, slot_min: int) -> Reading:
    """Return levels read as energy above the floor, at the start of the slot of their minute."""

    def above_wh(store: Store) -> float | None:
        if store.id not in read.fractions:
            return None
        capacity = store.count * store.nominal_wh * store.health_fraction
        return capacity * max(0.0, read.fractions[store.id] - store.floor_fraction)

    return Reading(read.minute // slot_min, tuple(above_wh(store) for store in plan.stores))


def _whole(done: Dispatch) -> float:
    whole = float(done.unmet_wh.sum())
    return whole if whole > _LEAST_WH else 0.0


def _unmet_uses(plan: Plan, inputs: ChargingInputs, done: Dispatch) -> tuple[UnmetUse, ...]:
    """Return unserved use by device, day and reason, from when it is missing."""
    uses = []
    for place, device in enumerate(plan.devices):
        for day in range(plan.days):
            here = slice(day * inputs.per_day, (day + 1) * inputs.per_day)
            missed, why = done.unmet_wh[place, here], done.why[place, here]
            for reason in np.unique(why[missed > 0.0]):
                mine = np.where(why == reason, missed, 0.0)
                wh = float(mine.sum())
                if wh > _LEAST_WH:
                    start_min = int(np.flatnonzero(mine)[0]) * inputs.slot_min
                    uses.append(
                        UnmetUse(
                            device=device.id,
                            priority=device.priority,
                            day=day + 1,
                            start_min=start_min,
                            wh=wh,
                            why=REASONS[int(reason)],
                        )
                    )
    uses.sort(key=lambda use: (use.priority, use.day, use.start_min, use.device))
    return tuple(uses)


def _evenings(plan: Plan, inputs: ChargingInputs, done: Dispatch) -> tuple[EveningMiss, ...]:
    """Return evenings at whose lights-out the guarantee does not hold: any marked device of a kind will do."""
    misses = []
    for place, what in ((inputs.calling, "phone or radio for calling help"), (inputs.lamp, "lamp")):
        if place < 0:
            continue
        kind = plan.devices[place].kind
        kinds = ("light",) if kind == "light" else ("phone", "radio")
        marked = [index for index, each in enumerate(plan.devices) if each.evening and each.kind in kinds]
        for slot in inputs.lights_out:
            if not any(_is_ready(plan.devices[index], done, index, slot) for index in marked):
                day, start = slot // inputs.per_day + 1, slot % inputs.per_day * inputs.slot_min
                text = f"On day {day} no {what} is ready at lights-out, {clock(start)}."
                misses.append(EveningMiss(day=day, start_min=start, device=plan.devices[place].id, text=text))
    return tuple(sorted(misses, key=lambda miss: (miss.day, miss.start_min, miss.device)))


def _is_ready(device: Device, done: Dispatch, place: int, slot: int) -> bool:
    """Tell whether a device is above its floor, or can be fed."""
    if device.battery_wh:
        return bool(done.device_wh[place, slot] > _LEAST_WH)
    return bool(done.store_wh[:, slot].sum() > _LEAST_WH)


def _levels(plan: Plan, done: Dispatch, slot_min: int) -> StoreLevels:
    slots = plan.days * (DAY_MIN // slot_min)
    due: FloatArray = np.zeros(slots + 1)
    for device in plan.devices:
        due = due + device_due(plan, device, slot_min, 1.0)
    return StoreLevels(
        slot_min=slot_min,
        stores_wh={store.id: done.store_wh[place] for place, store in enumerate(plan.stores)},
        devices_wh={device.id: done.device_wh[place] for place, device in enumerate(plan.devices)},
        pooled_wh=done.store_wh.sum(axis=0),
        due_wh=due,
    )
