"""Frozen answer records shared by planners, reports and the window.

Each planner module fills its own; they stand together here so that the layers above can name an answer
without importing the code that computes it. Keys are those of the command line's JSON.
Levels: M at the crank or pedal, S at the station's output, B in store, O at the outlet, D at the device.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
import numpy.typing as npt
from msgspec import Struct

FloatArray = npt.NDArray[np.float64]

Route = Literal["direct", "store"]
Charge = Literal["full", "plan", "day"]
EffortLimit = Literal["person", "machine", "regulator", "acceptance", "too_little_current", "connector"]
BalanceLimit = Literal["people-minutes", "station-minutes", "storage"]
Verdict = Literal["fits", "tight", "short"]


class EffortRow(Struct, frozen=True, kw_only=True):
    """Minutes of turning for one charge of one device at one station by one person."""

    device: str
    station: str
    person: str
    route: Route
    charge: Charge
    minutes_p10: float | None
    minutes_p50: float | None
    minutes_p90: float | None
    station_output_w: float | None
    person_power_w: float | None
    chain_fraction: float | None
    chain_from: Literal["M", "S"]
    limit: EffortLimit


class EffortResult(Struct, frozen=True, kw_only=True):
    """All effort rows of a plan (or of one charge without a plan)."""

    rows: tuple[EffortRow, ...]


class ChargeCurve(Struct, frozen=True, kw_only=True):
    """State of charge over minutes for one row, with the 10-90 % range; arrays share one shape (n,).

    `power_w` is the charge power into the device's battery along the central run.
    """

    row: EffortRow
    minutes: FloatArray
    soc_p10_fraction: FloatArray
    soc_p50_fraction: FloatArray
    soc_p90_fraction: FloatArray
    power_w: FloatArray


class BalanceDay(Struct, frozen=True, kw_only=True):
    """One day, all at O and without margin: use, made energy, pooled store at its end."""

    day: int
    use_wh: float
    made_wh: float
    end_wh: float


class BalanceHour(Struct, frozen=True, kw_only=True):
    """One hour of an average day at O without margin, 0 is 00:00-01:00."""

    hour: int
    use_wh: float
    made_wh: float


class BalanceDevice(Struct, frozen=True, kw_only=True):
    """Use over the horizon (with margin) and start credit of one device line, at O.

    `covered_fraction` is what this device gets if the shortage is shared, never above 1.
    """

    device: str
    use_wh: float
    credit_wh: float
    covered_fraction: float


class BalanceStore(Struct, frozen=True, kw_only=True):
    """Usable energy of one store line at the start, at O."""

    store: str
    usable_wh: float


class BalanceStation(Struct, frozen=True, kw_only=True):
    """Minutes and energy of one station line in a day, energy at S, mechanical at M."""

    station: str
    available_min: float
    offered_min: float
    used_min: float
    made_wh_per_day: float
    human_wh_per_day: float


class BalancePerson(Struct, frozen=True, kw_only=True):
    """Minutes one person offers and, after the station's limit, turns in a day, and the watts at S."""

    person: str
    station: str
    cap_min: float
    used_min: float
    output_w: float


class CutClass(Struct, frozen=True, kw_only=True):
    """What one priority class gets of its need under a cut, at O over the horizon."""

    priority: int
    need_wh: float
    have_wh: float
    covered_fraction: float


class Cuts(Struct, frozen=True, kw_only=True):
    """The strict and the shared cut side by side."""

    strict: tuple[CutClass, ...]
    shared: tuple[CutClass, ...]


class BalanceResult(Struct, frozen=True, kw_only=True):
    """The balance of a plan, all at O unless a key says otherwise."""

    coverage_fraction: float | None
    need_wh: float
    have_wh: float
    short_wh_per_day: float
    first_empty_day: int | None
    limit: BalanceLimit | None
    verdict: Verdict
    station_to_outlet_fraction: float
    needed_min_per_day: float | None
    days: tuple[BalanceDay, ...]
    hours: tuple[BalanceHour, ...]
    devices: tuple[BalanceDevice, ...]
    stores: tuple[BalanceStore, ...]
    stations: tuple[BalanceStation, ...]
    people: tuple[BalancePerson, ...]
    cuts: Cuts


class FlowBand(Struct, frozen=True, kw_only=True):
    """One band of the energy line: a station kind, another source or a device category.

    `ids` are the records behind it; `wh_per_day` at the band's own level.
    """

    key: str
    label: str
    code: str
    ids: tuple[str, ...]
    wh_per_day: float


class FlowLoss(Struct, frozen=True, kw_only=True):
    """Energy that peels off between two levels."""

    label: str
    level_from: str
    level_to: str
    wh_per_day: float


class EnergyFlow(Struct, frozen=True, kw_only=True):
    """Wh of an average day from people to devices, for the energy line.

    `people_m` and `stations_s` hold one band per station kind (same keys); `sources_s` other sources;
    `devices_d` one band per device category. `b_wh`, `o_wh` are what human and other sources bring into
    store and out of it, `start_o_wh` what start charges add per day, `missing_o_wh` the gap (0 if none),
    `margin_o_wh` the planned margin and `spare_o_wh` what is left beyond it:
    o_wh + start_o_wh + missing_o_wh = devices at O + margin_o_wh + spare_o_wh.
    """

    people_m: tuple[FlowBand, ...]
    stations_s: tuple[FlowBand, ...]
    sources_s: tuple[FlowBand, ...]
    b_wh: float
    o_wh: float
    start_o_wh: float
    devices_d: tuple[FlowBand, ...]
    losses: tuple[FlowLoss, ...]
    missing_o_wh: float
    margin_o_wh: float = 0.0
    spare_o_wh: float = 0.0


class BenchStage(Struct, frozen=True, kw_only=True):
    """One step of the bench table; volts and amps None where mechanical."""

    name: str
    in_w: float | None
    out_w: float | None
    in_v: float | None
    in_a: float | None
    out_v: float | None
    out_a: float | None
    loss_w: float | None


BenchState = Literal[
    "no_output",
    "dropout",
    "vin_low",
    "collapse",
    "vbus_low",
    "not_charging",
    "overtemp",
    "overvolt",
    "cadence_high",
    "torque_high",
    "cold",
]


class BenchPoint(Struct, frozen=True, kw_only=True):
    """A station on the bench at one cadence: the losses and `stored_w` sum to `human_w`."""

    station: str
    rpm: float | None
    human_w: float | None
    torque_nm: float | None
    stages: tuple[BenchStage, ...]
    stored_w: float | None
    crank_to_usb_fraction: float | None
    crank_to_battery_fraction: float | None
    regulator_degc: float | None
    meter_low_v: float | None
    meter_high_v: float | None
    plug_v: float | None
    plug_a: float | None
    states: tuple[BenchState, ...]


class BenchSweep(Struct, frozen=True, kw_only=True):
    """The bench over cadence; every array has shape (n,), NaN where a point failed.

    `states` has one tuple per cadence; `meter_v` is the voltage into the regulator.
    """

    station: str
    rpm: FloatArray
    human_w: FloatArray
    stored_w: FloatArray
    torque_nm: FloatArray
    plug_v: FloatArray
    plug_a: FloatArray
    meter_v: FloatArray
    regulator_w: FloatArray
    regulator_degc: FloatArray
    states: tuple[tuple[BenchState, ...], ...]


class TraceStep(Struct, frozen=True, kw_only=True):
    """One input or intermediate value of a trace."""

    label: str
    value: str
    unit: str
    mark: str
    source: str
    record: str = ""
    key: str = ""


class Trace(Struct, frozen=True, kw_only=True):
    """Where a number comes from: the formula in words, its inputs, its source."""

    formula: str
    words: str
    source: str
    value: str
    steps: tuple[TraceStep, ...]
