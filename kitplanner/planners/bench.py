"""The bench: a station by parts at one cadence, every stage's watts, states, and the volts to hold on a meter.

The bench hangs its own test load on the station: a charger that holds its input voltage, and a cell.
"""

from __future__ import annotations

import math

import numpy as np

from kitplanner.domain.battery import LI_ION_COLDEST_DEGC
from kitplanner.domain.cadence import best_fraction_cadence
from kitplanner.domain.chain import STATES, Chain, OperatingPoint, charging_point, meter_band, operating_point
from kitplanner.plan.records import Plan, Station, TestLoad
from kitplanner.planners.bench_stages import bench_stages, charges_cell, known, stored_w
from kitplanner.planners.results import BenchPoint, BenchState, BenchSweep, FloatArray
from kitplanner.planners.station_error import StationError
from kitplanner.planners.stations import chain_of, sink_of_test_load

SWEEP_POINTS = 141
# How far the chart looks below and above the comfort band, as shares of its ends.
SWEEP_LOW_FRACTION, SWEEP_HIGH_FRACTION = 0.60, 1.25
_STATE_NAMES: tuple[BenchState, ...] = (
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
)
if STATES != _STATE_NAMES:
    raise AssertionError("the bench and the chain tell different failure states")


class BenchError(ValueError):
    """The bench cannot answer as asked; the text says why and what helps."""


def bench_point(plan: Plan, station_id: str, rpm: float | None = None, amps: float | None = None) -> BenchPoint:
    """Return a station on the bench at one cadence.

    Parameters
    ----------
    plan : Plan
        The plan
    station_id : str
        A station described by its parts
    rpm : float, optional
        Cadence of the crank; None takes the one in the comfort band with the greatest share of the human watts in
        the battery and no failure state [rpm]
    amps : float, optional
        Current at the device's plug; None lets the test load hold its input voltage [A]

    Returns
    -------
    BenchPoint
        Losses and stored watts that sum to the human watts; null numbers where the point failed

    Raises
    ------
    BenchError
        When the station has no parts or a value makes no sense
    """
    station, chain, load = _on_the_bench(plan, station_id)
    _check_number(rpm, "the cadence", "turns a minute", "60")
    _check_number(amps, "the current", "amperes", "0.3")
    sink = sink_of_test_load(load)
    band = (chain.comfort.low_rpm, chain.comfort.high_rpm)
    if rpm is None:
        point = best_fraction_cadence(chain, band, sink, amps=amps)
    elif amps is None:
        point = charging_point(chain, rpm, sink)
    else:
        point = operating_point(chain, rpm, amps, sink)
    plug_a = float(point.plug_a) if amps is None else amps
    low_v, high_v = meter_band(chain, plug_a, band) if math.isfinite(plug_a) else (math.nan, math.nan)
    human_w, into_cell_w = float(point.human_w), float(stored_w(point, load))
    return BenchPoint(
        station=station.id,
        rpm=float(point.rpm),
        human_w=known(human_w),
        torque_nm=known(point.torque_nm),
        stages=bench_stages(point, load),
        stored_w=known(into_cell_w),
        crank_to_usb_fraction=known(_share(float(point.plug_w), human_w)),
        crank_to_battery_fraction=known(_share(into_cell_w, human_w)),
        regulator_degc=known(point.junction_degc),
        meter_low_v=known(low_v),
        meter_high_v=known(high_v),
        plug_v=known(point.plug_v),
        plug_a=known(point.plug_a),
        states=_states(point, load),
    )


def bench_sweep(plan: Plan, station_id: str, amps: float | None = None) -> BenchSweep:
    """Return a station on the bench over cadence, a little beyond its comfort band on both sides.

    Parameters
    ----------
    plan : Plan
        The plan
    station_id : str
        A station described by its parts
    amps : float, optional
        Current at the device's plug; None lets the test load hold its input voltage [A]

    Returns
    -------
    BenchSweep
        Arrays over cadence, NaN where a point failed

    Raises
    ------
    BenchError
        When the station has no parts or the current makes no sense
    """
    station, chain, load = _on_the_bench(plan, station_id)
    _check_number(amps, "the current", "amperes", "0.3")
    sink = sink_of_test_load(load)
    rpm = np.linspace(
        SWEEP_LOW_FRACTION * chain.comfort.low_rpm, SWEEP_HIGH_FRACTION * chain.comfort.high_rpm, SWEEP_POINTS
    )
    point = charging_point(chain, rpm, sink) if amps is None else operating_point(chain, rpm, amps, sink)
    return BenchSweep(
        station=station.id,
        rpm=_fixed(rpm),
        human_w=_fixed(point.human_w),
        stored_w=_fixed(stored_w(point, load)),
        torque_nm=_fixed(point.torque_nm),
        plug_v=_fixed(point.plug_v),
        plug_a=_fixed(point.plug_a),
        meter_v=_fixed(point.regulator_in_v),
        regulator_w=_fixed(point.regulator_w),
        regulator_degc=_fixed(point.junction_degc),
        states=tuple(_states(point, load, (place,)) for place in range(rpm.size)),
    )


def _on_the_bench(plan: Plan, station_id: str) -> tuple[Station, Chain, TestLoad]:
    """Return the station, its chain and its test load, or say why there is none."""
    station = next((station for station in plan.stations if station.id == station_id), None)
    if station is None:
        known = ", ".join(each.id for each in plan.stations) or "none"
        raise BenchError(f'The plan has no station "{station_id}"; its stations are: {known}.')
    if station.described_by != "parts":
        how = "a measurement" if station.described_by == "measured" else "its label"
        raise BenchError(
            f'Station "{station.name}" ({station.id}) is described by {how} and has no parts; '
            "describe it by machine, gear and stages to put it on the bench."
        )
    try:
        chain = chain_of(station)
    except StationError as error:
        raise BenchError(str(error)) from error
    return station, chain, station.test_load or TestLoad()


def _check_number(value: float | None, what: str, unit: str, example: str) -> None:
    if value is not None and not (math.isfinite(value) and value > 0.0):
        raise BenchError(f"{value:g} is no value for {what}: give {unit} above 0, such as {example}.")


def _states(point: OperatingPoint, load: TestLoad, place: tuple[int, ...] = ()) -> tuple[BenchState, ...]:
    """Return the failure states of one point, the cell's last."""
    found = tuple(name for name in _STATE_NAMES if bool(point.flags[name][place]))
    if charges_cell(load):
        return found
    if load.cell_degc < LI_ION_COLDEST_DEGC:
        return (*found, "cold")
    # Too hot a cell is left alone by its charger.
    return found if "not_charging" in found else (*found, "not_charging")


def _share(part_w: float, whole_w: float) -> float:
    return part_w / whole_w if whole_w > 0.0 else math.nan


def _fixed(values: FloatArray) -> FloatArray:
    """Return a read-only copy, because answers cross threads."""
    own: FloatArray = np.array(values, dtype=float)
    own.setflags(write=False)
    return own
