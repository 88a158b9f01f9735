"""Traces of the bench: every number of a point, of one of its steps and of a sweep.

A bench point is asked for on its own, so it is handed in; a formula is the key with "bench_" in front.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType

from msgspec import Struct

from kitplanner.plan.fields import kind_of
from kitplanner.plan.records import Plan, Station, TestLoad
from kitplanner.planners.results import BenchPoint, BenchStage, Trace, TraceStep
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure

_MACHINE = ("ke_v_s", "ra_ohm", "vb_v", "tc_nm", "b_nm_s")
_GEAR = ("ratio", "eta", "drag_nm")
_BAND = ("comfort_low_rpm", "comfort_high_rpm")
_DC_MACHINE = "Equations of the permanent-magnet DC machine; each stage by its own law, see its fields"
_REGULATOR = "LM317 data sheet: dropout, junction limit of 125 degC and rating"
_BALANCE = "Conservation of energy: losses plus stored watts are the human watts"


class _Law(Struct, frozen=True):
    """How one number of the bench is worked out: formula, words, source, unit, and which fields go in."""

    formula: str
    words: str
    source: str
    unit: str
    machine: tuple[str, ...] = ()
    gear: tuple[str, ...] = ()
    station: tuple[str, ...] = ()
    load: tuple[str, ...] = ()
    others: tuple[str, ...] = ()


_LAWS: Mapping[str, _Law] = MappingProxyType(
    {
        "rpm": _Law(
            "cadence given, or the one in the comfort band with most of the human watts in the battery",
            "Among cadences without a failure state the one at which least is lost.",
            _DC_MACHINE,
            "rpm",
            station=_BAND,
        ),
        "human_w": _Law(
            "human watts = torque at the handle * turning speed",
            "What the person does at this cadence: everything downstream follows from one current, solved for it.",
            _DC_MACHINE,
            "W",
            machine=_MACHINE,
            gear=_GEAR,
            others=("torque_nm", "rpm"),
        ),
        "torque_nm": _Law(
            "torque = gear ratio * (ke * I + friction + drag * speed) / gear efficiency + idle torque",
            "The turning force at the handle against generator current, friction and the gear itself.",
            _DC_MACHINE,
            "N·m",
            machine=_MACHINE,
            gear=_GEAR,
            station=("torque_max_nm",),
        ),
        "stored_w": _Law(
            "stored = plug volts * plug amps * charger efficiency * cell efficiency; 0 where nothing charges",
            "What stays in the test load's cell.",
            _BALANCE,
            "W",
            load=("charger_eta", "cell_eta", "least_a", "cell_degc"),
            others=("plug_v", "plug_a"),
        ),
        "crank_to_usb_fraction": _Law(
            "share = plug volts * plug amps / human watts",
            "How much of the work at the handle reaches the plug.",
            _BALANCE,
            "",
            others=("plug_v", "plug_a", "human_w"),
        ),
        "crank_to_battery_fraction": _Law(
            "share = stored watts / human watts",
            "How much of the work at the handle stays in the battery.",
            _BALANCE,
            "",
            others=("stored_w", "human_w"),
        ),
        "regulator_degc": _Law(
            "junction = air + thermal resistance * heat in the regulator",
            "How hot the linear regulator's junction becomes in the end; none without one.",
            _REGULATOR,
            "°C",
            others=("plug_a",),
        ),
        "meter_low_v": _Law(
            "least volts = output + dropout at this current",
            "Below it the regulator no longer holds its output.",
            _REGULATOR,
            "V",
            others=("plug_a",),
        ),
        "meter_high_v": _Law(
            "most volts = least of: junction at 125 °C in its air, the part's rating, the highest comfortable cadence",
            "Above it something becomes too hot, exceeds its rating, or the handle turns too fast.",
            _REGULATOR,
            "V",
            station=_BAND,
            others=("plug_a",),
        ),
        "plug_v": _Law(
            "plug volts = volts behind the last stage; the device draws current until they sag to its hold voltage",
            "Where generator, stages and device agree.",
            _DC_MACHINE,
            "V",
            load=("hold_v", "limit_a"),
        ),
        "plug_a": _Law(
            "plug amps = the one current at which generator, stages and device agree, not above the device's limit",
            "Given on request; else the device takes what keeps its input volts.",
            _DC_MACHINE,
            "A",
            load=("hold_v", "limit_a", "least_a"),
        ),
        "meter_v": _Law(
            "volts before the first stage that sets a voltage = ke * speed - brush drop - I * R - drops before it",
            "What a panel meter shows there.",
            _DC_MACHINE,
            "V",
            machine=_MACHINE,
            gear=("ratio",),
        ),
        "regulator_w": _Law(
            "heat = (volts in - volts out) * current in a linear regulator",
            "What the regulator has to get rid of.",
            _REGULATOR,
            "W",
        ),
    }
)
_STAGE_WORDS: Mapping[str, str] = MappingProxyType(
    {
        "in_w": "watts into this step = watts out of the step before",
        "out_w": "watts out = watts in - loss",
        "in_v": "volts into this step = volts out of the step before",
        "in_a": "amps into this step = amps out of the step before",
        "out_v": "volts out = volts in - drop, or the voltage the step sets",
        "out_a": "amps out = amps in, or watts out over volts out where the step sets a voltage",
        "loss_w": "loss = watts in - watts out",
    }
)
BENCH_FORMULAS = tuple(f"bench_{key}" for key in _LAWS)
STAGE_FORMULAS = tuple(f"bench_stage_{key}" for key in _STAGE_WORDS)


def trace_bench(plan: Plan, point: BenchPoint, formula_id: str, ids: Sequence[str] = ()) -> Trace:
    """Return where a number of the bench comes from.

    Parameters
    ----------
    plan : Plan
        The plan
    point : BenchPoint
        The point on the screen
    formula_id : str
        One of `BENCH_FORMULAS`, or of `STAGE_FORMULAS` with the place of the step (from 0) as only id
    ids : sequence of str
        Empty, or the place of a step

    Returns
    -------
    Trace
        Formula, words, source, value and steps

    Raises
    ------
    TraceError
        For an unknown formula, station or step
    """
    station = next((one for one in plan.stations if one.id == point.station), None)
    if station is None:
        raise TraceError(f'There is no station "{point.station}" in the plan.')
    if formula_id in STAGE_FORMULAS:
        return _stage(station, point, formula_id.removeprefix("bench_stage_"), ids)
    key = formula_id.removeprefix("bench_")
    law = _LAWS.get(key)
    if law is None or formula_id not in BENCH_FORMULAS:
        raise TraceError(f'There is no trace for "{formula_id}".')
    shown = getattr(point, key, None)
    digits = 4 if key.endswith("fraction") else 3
    return Trace(
        formula=law.formula,
        words=law.words,
        source=law.source,
        value=f"{figure(shown, digits)} {law.unit}".strip() if hasattr(point, key) else "along the curve",
        steps=(
            *(
                computed(_LAWS[one].formula.partition(" = ")[0], getattr(point, one), _LAWS[one].unit)
                for one in law.others
            ),
            *_inputs(station, law),
        ),
    )


def _name(key: str) -> str:
    """Return what a number is called: the left side of its formula."""
    return "cadence" if key == "rpm" else _LAWS[key].formula.partition(" = ")[0]


def _inputs(station: Station, law: _Law) -> tuple[TraceStep, ...]:
    """Return the fields that go into a law, those of the stages wherever the current passes."""
    load = station.test_load or TestLoad()
    found = [
        *(field_steps("machine", station.machine, law.machine) if station.machine is not None else ()),
        *(field_steps("gear", station.gear, law.gear) if station.gear is not None else ()),
        *field_steps("station", station, law.station),
        *field_steps("test_load", load, law.load),
    ]
    if law.source != _BALANCE:
        found += _stage_inputs(station)
    return tuple(found)


_STAGE_KEYS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "diode": ("series", "saturation_a", "ideality", "series_ohm"),
        "synchronous": ("series", "on_ohm"),
        "linear": ("r1_ohm", "r2_ohm", "reference_v", "dropout_v", "dropout_ohm", "theta_c_per_w", "air_degc"),
        "converter": ("output_v", "a0_w", "b0_v", "c_ohm", "headroom_v", "lockout_v"),
        "cable": ("loop_ohm", "awg", "area_mm2", "length_m", "contacts", "contact_ohm"),
        "loss": ("eta",),
    }
)


def _stage_inputs(station: Station) -> list[TraceStep]:
    found = []
    for stage in station.stages:
        kind = kind_of(stage)
        known = [key for key in _STAGE_KEYS[kind] if getattr(stage, key) is not None]
        found += [field_step(kind, stage, key) for key in known]
    return found


def _stage(station: Station, point: BenchPoint, key: str, ids: Sequence[str]) -> Trace:
    place = int(ids[0]) if ids and ids[0].isdigit() else -1
    if not 0 <= place < len(point.stages):
        raise TraceError("Name the place of the step on the bench, from 0.")
    row: BenchStage = point.stages[place]
    unit = key[-1].upper()
    return Trace(
        formula=_STAGE_WORDS[key],
        words=f"{row.name[:1].upper()}{row.name[1:]}, step {place + 1} of {len(point.stages)}.",
        source=_BALANCE if key.endswith("_w") else _DC_MACHINE,
        value="-" if getattr(row, key) is None else f"{figure(getattr(row, key), 3)} {unit}",
        steps=(
            computed("watts in", row.in_w, "W", 3),
            computed("watts out", row.out_w, "W", 3),
            *_inputs_of_step(station, place),
        ),
    )


def _inputs_of_step(station: Station, place: int) -> tuple[TraceStep, ...]:
    """Return the fields of one step: gear, friction, copper, the station's stages, charger, cell."""
    own = 3
    if place == 0 and station.gear is not None:
        return field_steps("gear", station.gear, _GEAR)
    if place < own and station.machine is not None:
        return field_steps("machine", station.machine, ("tc_nm", "b_nm_s") if place == 1 else ("ra_ohm", "vb_v"))
    if own <= place < own + len(station.stages):
        stage = station.stages[place - own]
        kind = kind_of(stage)
        return tuple(field_step(kind, stage, key) for key in _STAGE_KEYS[kind] if getattr(stage, key) is not None)
    key = "charger_eta" if place == own + len(station.stages) else "cell_eta"
    return field_steps("test_load", station.test_load or TestLoad(), (key,))
