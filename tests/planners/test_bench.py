"""The bench against worked operating points of three invented stations, and the laws it must keep.

The points were computed by a separate script from the stage laws and held to ngspice (Debian package 39.3) within
6e-7 of volts and amps; regulator figures follow the LM317 data sheet (Texas Instruments, SLVS044).
"""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan, Station
from kitplanner.planners.bench import BenchError, bench_point, bench_sweep
from kitplanner.planners.results import BenchPoint

BENCH = read_plan(Path(__file__).parents[2] / "demo_profiles" / "bench.kitplan")
KEYS = ("A", "A-buck", "B", "C-5V", "C-12V")

# (station, rpm, plug A), then generator EMF V, its current A, volts into the regulator, crank torque N.m, human W, then
# losses of gear, friction and iron, copper and brush, rectifier, regulator, cable, charger, cell; stored W,
# plug V and the shares crank to plug and crank to battery in percent.
WORKED = (
    (
        ("A", 135, 0.3),
        (9.118, 0.3105, 7.150, 0.3592, 5.079),
        (1.482, 0.7659, 0.3856, 0.2256, 0.7144, 0.0300, 0.1771, 0.0390),
        (1.259, 4.918, 29.05, 24.80),
    ),
    (
        ("A-buck", 115, 0.3),
        (7.768, 0.2507, 6.412, 0.3031, 3.650),
        (1.093, 0.6093, 0.2514, 0.0884, 0.0776, 0.0300, 0.1800, 0.0396),
        (1.280, 5.000, 41.10, 35.08),
    ),
    (
        ("B", 60, 1.0),
        (11.31, 0.5298, 10.12, 1.510, 9.487),
        (2.299, 1.195, 0.4210, 0.2095, 0.2612, 0.2884, 0.4812, 0.1299),
        (4.201, 4.812, 50.72, 44.28),
    ),
    (
        ("B", 70, 2.0),
        (13.19, 0.9566, 11.31, 2.481, 18.18),
        (4.106, 1.456, 1.373, 0.4263, 0.6237, 1.154, 0.9046, 0.2442),
        (7.897, 4.523, 49.75, 43.43),
    ),
    (
        ("C-5V", 60, 3.0),
        (19.00, 0.9326, 17.74, 6.741, 42.35),
        (7.955, 16.68, 0.8640, 0.3072, 1.099, 1.680, 1.377, 0.3718),
        (12.02, 4.590, 32.51, 28.38),
    ),
    (
        ("C-12V", 60, 4.0),
        (19.00, 3.375, 16.81, 15.43, 96.94),
        (16.14, 16.68, 6.011, 1.395, 1.518, 0.9600, 0.0, 10.85),
        (43.39, 13.56, 55.95, 44.76),
    ),
)
Worked = tuple[tuple[str, float, float], tuple[float, ...], tuple[float, ...], tuple[float, ...]]


def figures(point: BenchPoint) -> tuple[float, ...]:
    """Numbers of a point in the order of the worked columns."""
    copper, regulator = point.stages[2], point.stages[4]
    shares = (100.0 * point.crank_to_usb_fraction, 100.0 * point.crank_to_battery_fraction)
    losses = tuple(stage.loss_w for stage in point.stages)
    head = (copper.in_v, copper.in_a, regulator.in_v, point.torque_nm, point.human_w)
    return (*head, *losses, point.stored_w, point.plug_v, *shares)


@pytest.mark.parametrize("worked", WORKED, ids=lambda worked: f"{worked[0][0]} {worked[0][1]} rpm")
def test_worked_points(worked: Worked) -> None:
    (key, rpm, amps), *groups = worked
    point = bench_point(BENCH, key, rpm=rpm, amps=amps)
    wanted_figures = [figure for group in groups for figure in group]
    # A tenth of a percent, and half a unit of the last printed figure where that is coarser.
    for got, wanted in zip(figures(point), wanted_figures, strict=True):
        assert got == pytest.approx(wanted, rel=1e-3, abs=6e-5), (got, wanted)
    assert point.states == ()


def test_small_crank_sagging_phone_over_cadence() -> None:
    """The regulator follows the crank: 90 to 150 rpm, phone A and human W of the worked row."""
    amps = (0.0, 0.0305, 0.0899, 0.1540, 0.2867, 0.4219, 0.5582, 0.6952)
    human = (0.835, 1.236, 1.873, 2.612, 4.314, 6.290, 8.528, 11.03)
    for rpm, plug_a, human_w in zip((90, 100, 105, 110, 120, 130, 140, 150), amps, human, strict=True):
        point = bench_point(BENCH, "A", rpm=rpm)
        assert point.plug_a == pytest.approx(plug_a, rel=1e-3, abs=6e-5)
        assert point.human_w == pytest.approx(human_w, rel=1e-3)
        assert "dropout" in point.states
        assert ("not_charging" in point.states) == (plug_a < 0.1)


def test_meter_band_of_the_small_crank() -> None:
    """6.73 V: 5.018 V and the dropout of 1.6 V + 0.35 ohm x 0.3105 A; 8.16 V: the meter at 150 rpm."""
    point = bench_point(BENCH, "A", amps=0.3)
    assert point.meter_low_v == pytest.approx(5.018 + 1.6 + 0.35 * 0.3104667, abs=5e-4)
    assert point.meter_low_v == pytest.approx(6.73, abs=5e-3)
    assert point.meter_high_v == pytest.approx(8.16, abs=5e-3)
    assert bench_sweep(BENCH, "A", amps=0.3).meter_v[-1] > point.meter_high_v


def test_stage_table_names_every_step() -> None:
    names = [stage.name for stage in bench_point(BENCH, "A", rpm=135, amps=0.3).stages]
    assert names[:3] == ["gear", "friction and iron", "copper and brush"]
    assert names[3:6] == [stage.name for stage in BENCH.stations[0].stages]
    assert names[6:] == ["device charger", "cell"]


def test_mechanical_steps_have_no_volts() -> None:
    gear, friction, copper = bench_point(BENCH, "B", rpm=60, amps=1.0).stages[:3]
    assert (gear.in_v, gear.out_a, friction.in_a) == (None, None, None)
    assert copper.in_v == pytest.approx(11.31, rel=1e-3)


def test_each_stage_hands_on_what_it_does_not_lose() -> None:
    point = bench_point(BENCH, "B", rpm=60, amps=1.0)
    for before, after in zip(point.stages, point.stages[1:], strict=False):
        assert before.out_w == pytest.approx(after.in_w, rel=1e-9)
        assert before.in_w - before.out_w == pytest.approx(before.loss_w, rel=1e-9)
    assert point.stages[0].in_w == point.human_w
    assert point.stages[-1].out_w == point.stored_w


@settings(max_examples=60, deadline=None)
@given(st.sampled_from(KEYS), st.floats(20.0, 220.0), st.none() | st.floats(0.01, 5.0))
def test_losses_and_stored_watts_sum_to_the_human_watts(key: str, rpm: float, amps: float | None) -> None:
    point = bench_point(BENCH, key, rpm=rpm, amps=amps)
    assert len(point.stages) == 8
    if point.human_w is None:
        assert point.states
        assert point.stored_w is point.torque_nm is point.crank_to_usb_fraction is None
        assert all(stage.loss_w is None for stage in point.stages)
        return
    total = sum(stage.loss_w for stage in point.stages) + point.stored_w
    assert total == pytest.approx(point.human_w, rel=1e-9, abs=1e-9)
    assert point.torque_nm * point.rpm * 2.0 * math.pi / 60.0 == pytest.approx(point.human_w, rel=1e-9)
    assert all(stage.loss_w >= -1e-9 for stage in point.stages)


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("amps", [None, 0.3])
def test_default_cadence_has_the_greatest_share_among_the_sound_ones(key: str, amps: float | None) -> None:
    station = next(station for station in BENCH.stations if station.id == key)
    best = bench_point(BENCH, key, amps=amps)
    assert station.comfort_low_rpm <= best.rpm <= station.comfort_high_rpm
    sweep = bench_sweep(BENCH, key, amps=amps)
    inside = (sweep.rpm >= station.comfort_low_rpm) & (sweep.rpm <= station.comfort_high_rpm)
    sound = np.array([not states for states in sweep.states]) & inside
    if sound.any():
        assert best.states == ()
        shares = sweep.stored_w[sound] / sweep.human_w[sound]
        assert best.crank_to_battery_fraction >= shares.max() - 1e-5
    else:
        assert best.states


def test_sweep_is_the_point_at_every_cadence() -> None:
    sweep = bench_sweep(BENCH, "B")
    for place in (0, 40, 70, 100, sweep.rpm.size - 1):
        point = bench_point(BENCH, "B", rpm=float(sweep.rpm[place]))
        assert sweep.states[place] == point.states
        numbers = (sweep.human_w, sweep.stored_w, sweep.torque_nm, sweep.plug_v, sweep.plug_a)
        wanted = (point.human_w, point.stored_w, point.torque_nm, point.plug_v, point.plug_a)
        for array, value in zip(numbers, wanted, strict=True):
            assert array[place] == pytest.approx(math.nan if value is None else value, rel=1e-9, nan_ok=True)


def test_sweep_looks_beyond_the_comfort_band_and_is_read_only() -> None:
    sweep = bench_sweep(BENCH, "A")
    assert sweep.rpm[0] < 80.0
    assert sweep.rpm[-1] > 150.0
    assert "cadence_high" in sweep.states[-1]
    with pytest.raises(ValueError, match="read-only"):
        sweep.rpm[0] = 1.0


@pytest.mark.parametrize(
    ("key", "rpm", "amps", "state"),
    [
        ("A", 100.0, 0.3, "dropout"),
        ("A", 210.0, 0.3, "overtemp"),
        ("A", 160.0, 0.3, "cadence_high"),
        ("A", 90.0, None, "not_charging"),
        ("B", 40.0, 1.0, "vin_low"),
        ("B", 30.0, 1.0, "collapse"),
        ("B", 45.0, 2.0, "collapse"),
        ("C-12V", 60.0, 4.5, "torque_high"),
    ],
)
def test_failure_states(key: str, rpm: float, amps: float | None, state: str) -> None:
    """Crank B collapses below 32.72 rpm at 1 A and 45.72 rpm at 2 A, and its converter starts at 41.21 rpm."""
    assert state in bench_point(BENCH, key, rpm=rpm, amps=amps).states


def test_a_failed_point_has_no_numbers_but_its_states() -> None:
    point = bench_point(BENCH, "B", rpm=30.0, amps=1.0)
    assert point.states[0] == "collapse"
    assert point.human_w is point.stored_w is point.plug_v is point.plug_a is point.regulator_degc is None
    assert point.rpm == 30.0


def test_current_too_small_to_charge_stores_nothing() -> None:
    point = bench_point(BENCH, "A", rpm=100.0)
    assert "not_charging" in point.states
    assert point.stored_w == 0.0
    assert point.crank_to_usb_fraction == pytest.approx(0.1086, rel=1e-3)
    assert point.stages[-2].loss_w == pytest.approx(point.plug_v * point.plug_a)


def test_frost_in_the_cell_is_told_and_stores_nothing() -> None:
    station = BENCH.stations[2]
    cold = replace(station, test_load=replace(station.test_load, cell_degc=-2.0))
    point = bench_point(replace(BENCH, stations=(cold,)), "B", rpm=60.0, amps=1.0)
    assert point.states == ("cold",)
    assert point.stored_w == 0.0
    assert point.human_w == pytest.approx(9.487, rel=1e-3)


def test_junction_only_where_there_is_a_linear_regulator() -> None:
    """0.6640 W in the die at 7.150 V and 0.3 A: 25 degC + 50 K/W."""
    hot = bench_point(BENCH, "A", rpm=135, amps=0.3)
    die_w = (7.150 - 5.018) * 0.3105
    assert hot.regulator_degc == pytest.approx(25.0 + 50.0 * die_w, abs=0.1)
    assert bench_point(BENCH, "B", rpm=60, amps=1.0).regulator_degc is None


@pytest.mark.parametrize("question", [bench_point, bench_sweep])
def test_a_station_without_parts_is_refused_with_the_remedy(question) -> None:
    plan = Plan(
        stations=(
            Station(id="S", name="Crank", output_w=6.0),
            Station(id="L", name="Lamp", described_by="label", label_w=5.0),
            Station(id="X", name="Empty", described_by="parts"),
        )
    )
    with pytest.raises(BenchError, match="by a measurement and has no parts; describe it by machine"):
        question(plan, "S")
    with pytest.raises(BenchError, match="by its label and has no parts"):
        question(plan, "L")
    with pytest.raises(BenchError, match=r"Empty.*has no machine"):
        question(plan, "X")
    with pytest.raises(BenchError, match='no station "none"; its stations are: S, L, X'):
        question(plan, "none")


@pytest.mark.parametrize("value", [0.0, -3.0, math.nan, math.inf])
def test_impossible_numbers_are_refused(value: float) -> None:
    with pytest.raises(BenchError, match="turns a minute above 0"):
        bench_point(BENCH, "A", rpm=value)
    with pytest.raises(BenchError, match="amperes above 0"):
        bench_point(BENCH, "A", amps=value)
    with pytest.raises(BenchError, match="amperes above 0"):
        bench_sweep(BENCH, "A", amps=value)


def test_a_station_without_test_load_gets_the_usual_one() -> None:
    bare = replace(BENCH.stations[2], test_load=None)
    point = bench_point(replace(BENCH, stations=(bare,)), "B", rpm=60.0, amps=1.0)
    assert point.stored_w == pytest.approx(0.90 * 0.97 * point.plug_v * point.plug_a)


def test_a_cell_too_hot_to_charge_stores_nothing_either() -> None:
    """Pack data sheets end at 55 degC."""
    station = BENCH.stations[2]
    hot = replace(station, test_load=replace(station.test_load, cell_degc=60.0))
    point = bench_point(replace(BENCH, stations=(hot,)), "B", rpm=60.0, amps=1.0)
    assert point.states == ("not_charging",)
    assert point.stored_w == 0.0
    assert sum(stage.loss_w for stage in point.stages) == pytest.approx(point.human_w)
