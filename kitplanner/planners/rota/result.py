"""Frozen records of a rota: bouts, objectives with their proven bounds, broken rules, the whole answer.

Levels: S at the station's output, O at the outlet. Times are minutes of a day, 0 to 1440; nothing crosses midnight.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
import numpy.typing as npt
from msgspec import Struct

from kitplanner.planners.rota.check import Violation

FloatArray = npt.NDArray[np.float64]

__all__ = [
    "ObjectiveName",
    "RotaAnswer",
    "RotaBout",
    "RotaCharge",
    "RotaObjective",
    "RotaProgress",
    "RotaSolution",
    "StoreLevels",
    "UnmetUse",
    "Violation",
]

ObjectiveName = Literal["unmet", "margin", "excess", "greatest_load", "spread", "unpopular", "handovers", "change"]


class RotaBout(Struct, frozen=True, kw_only=True):
    """One unbroken stretch of turning by one person on one unit of a station; energy at S."""

    day: int
    start_min: int
    end_min: int
    station: str
    unit: int
    person: str
    watcher: str | None = None
    output_wh: float = 0.0
    locked: bool = False


class RotaCharge(Struct, frozen=True, kw_only=True):
    """`count` units of a device line on charge, tickets from `first_ticket`; energy at O."""

    day: int
    start_min: int
    end_min: int
    device: str
    count: int
    first_ticket: int
    energy_wh: float
    at_station: bool = False


class UnmetUse(Struct, frozen=True, kw_only=True):
    """Use that cannot be served: which device, from when, how much at O, and why."""

    device: str
    priority: int
    day: int
    start_min: int
    wh: float
    why: str


class RotaObjective(Struct, frozen=True, kw_only=True):
    """One level of the order of aims with its proven bound.

    `relaxed`: the bound leaves out watchers and changeover. `gap` is value less bound in the same unit.
    """

    name: ObjectiveName
    value: float
    unit: str
    bound: float
    gap: float
    proved: bool
    relaxed: bool
    words: str


class RotaSolution(Struct, frozen=True, kw_only=True):
    """What the solver found: bouts, aims, and how the search went; energy made at S."""

    slot_min: int
    bouts: tuple[RotaBout, ...]
    objectives: tuple[RotaObjective, ...]
    made_wh: float
    made_bound_wh: float
    steps: int
    seconds: float
    cut_off: bool


class RotaProgress(Struct, frozen=True, kw_only=True):
    """A moment of the search: seconds and steps so far, the value and bound of the level at work."""

    seconds: float
    steps: int
    stage: str
    value: float
    bound: float


class StoreLevels(Struct, frozen=True, kw_only=True):
    """Levels over the horizon on the rota's grid, entry t at the start of slot t; arrays of shape (slots + 1,).

    `stores_wh` and `devices_wh` map ids to energy above the floor: at O for stores, at D for device lines.
    `pooled_wh` is the sum of the stores, `due_wh` what must still have come out of them by then, at O.
    """

    slot_min: int
    stores_wh: dict[str, FloatArray]
    devices_wh: dict[str, FloatArray]
    pooled_wh: FloatArray
    due_wh: FloatArray


class RotaAnswer(Struct, frozen=True, kw_only=True):
    """A whole rota: bouts, charging table, what stays unmet and why, levels, and the judge's findings.

    `evening` are the evenings at whose lights-out no phone or radio, or no lamp, is ready (rule "evening");
    `wasted_wh` is energy made at S that found every store full. Without `has_charging` the search was stopped before
    the table was made: unmet use and margin are then the search's own figures, not yet told by device.
    """

    solution: RotaSolution
    charging: tuple[RotaCharge, ...]
    unmet: tuple[UnmetUse, ...]
    unmet_wh: float
    unmet_margin_wh: float
    levels: StoreLevels
    violations: tuple[Violation, ...]
    evening: tuple[Violation, ...] = ()
    wasted_wh: float = 0.0
    has_charging: bool = True
