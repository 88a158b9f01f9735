"""Whole chains: operating points computed by hand from the laws, failure states, sagging device."""

from __future__ import annotations

import numpy as np
import pytest

from kitplanner.domain.chain import (
    STATES,
    Cable,
    Chain,
    Comfort,
    Diode,
    FixedLoss,
    GearBox,
    LinearRegulator,
    SwitchingConverter,
    SynchronousRectifier,
    UsbSink,
    charging_point,
    operating_point,
)
from tests.domain.chain_sets import A_BUCK, C_5V, C_12V, LARGE, SMALL, SMALL_GEAR, A, B

# Watts by stage worked out apart from this code for six points. Each row: rpm, plug amps, charger and cell efficiency,
# generator rpm, EMF, generator amps, volts into the regulator, torque, human watts; losses of gear, friction and iron,
# copper and brush, rectifier, regulator, cable, charger, cell; stored watts, plug volts, crank-to-plug and
# crank-to-battery percent, minutes per stored watt-hour.
COLUMNS = {
    "A": (A, 135, 0.3, 0.88, 0.97, 4050, 9.118, 0.3105, 7.150, 0.3592, 5.079, 1.482, 0.7659, 0.3856, 0.2256, 0.7144,
          0.0300, 0.1771, 0.0390, 1.259, 4.918, 29.05, 24.80, 47.64),
    "A-buck": (A_BUCK, 115, 0.3, 0.88, 0.97, 3450, 7.768, 0.2507, 6.412, 0.3031, 3.650, 1.093, 0.6093, 0.2514, 0.0884,
               0.0776, 0.0300, 0.1800, 0.0396, 1.280, 5.000, 41.10, 35.08, 46.86),
    "B": (B, 60, 1.0, 0.90, 0.97, 2400, 11.31, 0.5298, 10.12, 1.510, 9.487, 2.299, 1.195, 0.4210, 0.2095, 0.2612,
          0.2884, 0.4812, 0.1299, 4.201, 4.812, 50.72, 44.28, 14.28),
    "B 2 A": (B, 70, 2.0, 0.90, 0.97, 2800, 13.19, 0.9566, 11.31, 2.481, 18.18, 4.106, 1.456, 1.373, 0.4263, 0.6237,
              1.154, 0.9046, 0.2442, 7.897, 4.523, 49.75, 43.43, 7.597),
    "C 5 V": (C_5V, 60, 3.0, 0.90, 0.97, 2520, 19.00, 0.9326, 17.74, 6.741, 42.35, 7.955, 16.68, 0.8640, 0.3072, 1.099,
              1.680, 1.377, 0.3718, 12.02, 4.590, 32.51, 28.38, 4.991),
    "C 12 V": (C_12V, 60, 4.0, 1.0, 0.80, 2520, 19.00, 3.375, 16.81, 15.43, 96.94, 16.14, 16.68, 6.011, 1.395, 1.518,
               0.9600, 0.0, 10.85, 43.39, 13.56, 55.95, 44.76, 1.383),
}  # fmt: skip


@pytest.mark.parametrize("name", COLUMNS)
def test_watts_by_stage(name: str) -> None:
    chain, rpm, amps, charger_eta, cell_eta, *numbers = COLUMNS[name]
    point = operating_point(chain, rpm, amps)
    plug_w = float(point.plug_w)
    stored_w = plug_w * charger_eta * cell_eta
    found = [
        rpm * chain.gear.ratio,
        float(point.emf_v),
        float(point.generator_a),
        float(point.regulator_in_v),
        float(point.torque_nm),
        float(point.human_w),
        *(float(loss) for loss in point.stage_loss_w),
        plug_w * (1.0 - charger_eta),
        plug_w * charger_eta * (1.0 - cell_eta),
        stored_w,
        float(point.plug_v),
        100.0 * float(point.crank_to_plug_fraction),
        100.0 * stored_w / float(point.human_w),
        60.0 / stored_w,
    ]
    # To 0.1 %, or to the last printed digit of the smallest numbers.
    assert found == pytest.approx(numbers, rel=1e-3, abs=5.1e-5)
    assert point.states_at() == ()
    assert float(sum(point.stage_loss_w)) + plug_w == pytest.approx(float(point.human_w), abs=1e-9)


@pytest.mark.parametrize("name", COLUMNS)
def test_stage_table_joins_from_step_to_step(name: str) -> None:
    chain, rpm, amps, *_ = COLUMNS[name]
    point = operating_point(chain, rpm, amps)
    for step in range(len(point.stage_names) - 1):
        assert point.stage_out_w[step] == pytest.approx(point.stage_in_w[step + 1], rel=1e-12)
    for step in range(len(point.stage_names)):
        assert point.stage_in_w[step] - point.stage_out_w[step] == pytest.approx(
            float(point.stage_loss_w[step]), abs=1e-9
        )
    for step in range(2, len(point.stage_names)):
        assert point.stage_in_w[step] == pytest.approx(float(point.stage_in_v[step] * point.stage_in_a[step]))
        assert point.stage_out_w[step] == pytest.approx(float(point.stage_out_v[step] * point.stage_out_a[step]))
    assert np.isnan(point.stage_in_v[0])
    assert point.stage_in_w[0] == point.human_w
    assert point.stage_out_w[-1] == point.plug_w


def test_sagging_phone_behind_a_linear_regulator() -> None:
    """A device that holds 4.40 V with a limit of 1 A: the regulator lives in dropout and effort follows speed."""
    rpm = np.array([90.0, 100.0, 105.0, 110.0, 120.0, 130.0, 140.0, 150.0])
    point = charging_point(A, rpm, UsbSink(limit_a=1.0))
    assert point.plug_a == pytest.approx([0, 0.0305, 0.0899, 0.1540, 0.2867, 0.4219, 0.5582, 0.6952], abs=5.1e-5)
    assert point.human_w == pytest.approx([0.835, 1.236, 1.873, 2.612, 4.314, 6.290, 8.528, 11.03], rel=1e-3)
    share = 100.0 * point.plug_w / point.human_w
    assert share == pytest.approx([0, 10.86, 21.12, 25.95, 29.24, 29.51, 28.80, 27.74], rel=1e-3)
    assert point.plug_v[1:] == pytest.approx(4.40, abs=1e-12)
    assert [point.states_at((i,)) for i in range(4)] == [
        ("dropout", "vbus_low", "not_charging"),
        ("dropout", "not_charging"),
        ("dropout", "not_charging"),
        ("dropout",),
    ]
    assert point.charges.tolist() == [False, False, False, True, True, True, True, True]
    assert point.crank_to_plug_fraction[:3].tolist() == [0.0, 0.0, 0.0]


def test_constant_current_does_not_get_heavier_with_speed_and_a_converter_gets_lighter() -> None:
    rpm = np.array([135.0, 150.0, 180.0])
    linear = operating_point(A, rpm, 0.3)
    drag = SMALL_GEAR.ratio * SMALL.b_nm_s * SMALL_GEAR.ratio * (rpm - rpm[0]) * np.pi / 30.0 / SMALL_GEAR.eta
    assert linear.torque_nm - drag == pytest.approx(float(linear.torque_nm[0]), rel=1e-12)
    assert (np.diff(operating_point(A_BUCK, rpm, 0.3).torque_nm) < 0.0).all()


@pytest.mark.parametrize(("amps", "rpm", "torque_nm"), [(1.0, 32.72, 4.398), (2.0, 45.72, 6.157)])
def test_collapse_where_a_constant_power_load_asks_for_too_much(amps: float, rpm: float, torque_nm: float) -> None:
    """The least cadence without lock-out: below it no generator current carries the load."""
    free = SwitchingConverter(headroom_needed_v=-5.1, lockout_v=0.0)
    unlocked = Chain(B.machine, B.gear, (Diode(), free, B.stages[2]))
    row = np.linspace(rpm - 0.02, rpm + 0.02, 4001)
    points = operating_point(unlocked, row, amps)
    first = int(np.flatnonzero(~points.failed)[0])
    assert row[first] == pytest.approx(rpm, abs=0.0055)
    assert points.flags["collapse"].tolist() == [True] * first + [False] * (row.size - first)
    # The torque climbs into the limit with a vertical tangent, so the last digit printed needs the last 1e-5 rpm.
    assert float(points.torque_nm[first]) == pytest.approx(torque_nm, rel=3e-3)
    assert np.nanmax(points.torque_nm) == points.torque_nm[first]


def test_a_collapsed_point_has_no_numbers_but_its_greatest_power() -> None:
    point = operating_point(B, np.array([30.0, 60.0]), 1.0)
    assert point.states_at((0,)) == ("collapse",)
    assert point.binding_at((0,)) == "nothing"
    for values in (point.human_w, point.torque_nm, point.plug_v, point.plug_w, *point.stage_loss_w, *point.stage_in_w):
        assert np.isnan(values[0])
        assert np.isfinite(values[1])
    assert 0.0 < float(point.greatest_plug_w[0]) < 4.812
    assert not point.charges[0]


def test_below_the_lockout_the_converter_is_off() -> None:
    point = operating_point(B, np.array([41.20, 41.22]), 1.0)
    assert [point.states_at((i,)) for i in range(2)] == [("vin_low",), ()]
    assert np.isnan(point.human_w[0])


def test_dropout_has_numbers_and_follows_the_crank() -> None:
    point = operating_point(A, np.array([128.6, 128.8, 115.0]), 0.3)
    assert point.states_at((0,)) == ("dropout",)
    assert point.states_at((1,)) == ()
    assert point.states_at((2,)) == ("dropout", "vbus_low")
    assert np.isfinite(point.human_w).all()


def test_a_linear_chain_that_cannot_carry_the_current_has_no_output() -> None:
    point = operating_point(A, 40.0, 1.5)
    assert point.states_at() == ("no_output", "dropout")
    assert np.isnan(point.human_w)


def test_standing_still_gives_no_output() -> None:
    for chain in (A, B, C_12V):
        assert "no_output" in operating_point(chain, 0.0, 0.1).states_at()
        assert "no_output" in charging_point(chain, 0.0, UsbSink()).states_at()


def test_a_person_too_weak_for_the_empty_machine_gets_no_output() -> None:
    """The pedal stand takes about 22 W at 60 rpm before the first milliampere."""
    point = charging_point(C_5V, 60.0, UsbSink(limit_a=1.0), human_w=np.array([20.0, 21.0, 25.0]))
    assert [point.states_at((i,)) for i in range(2)] == [("no_output",)] * 2
    assert point.charges.tolist() == [False, False, True]
    assert point.binding_at((2,)) == "human"


def test_junction_above_its_limit() -> None:
    """LM317 data sheet: 125 degC; in 25 degC air reached at 198.8 rpm with 0.3 A and 174.2 rpm with 0.5 A."""
    for amps, rpm in ((0.3, 198.8), (0.5, 174.2)):
        point = operating_point(A, np.array([rpm - 0.1, rpm + 0.1]), amps)
        assert point.flags["overtemp"].tolist() == [False, True]
        assert point.junction_degc == pytest.approx(125.0, abs=0.3)
    assert np.isnan(operating_point(B, 60.0, 1.0).junction_degc)


def test_open_circuit_above_a_rating_is_overvolt() -> None:
    fragile = Chain(SMALL, SMALL_GEAR, (Diode(2), LinearRegulator(rating_v=10.0), Cable(0.3)))
    point = operating_point(fragile, np.array([140.0, 150.0]), 0.3)
    assert point.flags["overvolt"].tolist() == [False, True]


def test_a_divider_that_may_exceed_the_usb_ceiling_is_overvolt() -> None:
    """USB 2.0: 5.25 V; a 220/680 ohm pair may give 5.386 V with a part at its limits."""
    common = Chain(SMALL, SMALL_GEAR, (Diode(2), LinearRegulator(220.0, 680.0), Cable(0.3)))
    assert operating_point(common, 140.0, 0.3).states_at() == ("overvolt",)
    assert operating_point(A, 140.0, 0.3).states_at() == ()
    assert operating_point(C_12V, 60.0, 4.0).states_at() == ()


def test_comfort_limits_are_states() -> None:
    tight = Chain(B.machine, B.gear, B.stages, Comfort(40.0, 65.0, 2.0))
    assert operating_point(tight, 60.0, 1.0).states_at() == ()
    assert operating_point(tight, 70.0, 2.0).states_at() == ("cadence_high", "torque_high")


def test_entry_test_at_30_milliampere() -> None:
    """A device that sees less than 3.8 V with 30 mA drawn ignores the source; one whose cable only sags does not."""
    weak = operating_point(A, 85.0, 0.15)
    assert float(weak.plug_v) < 3.8
    assert weak.states_at() == ("dropout", "vbus_low", "not_charging")
    sagging = Chain(B.machine, B.gear, (Diode(), SwitchingConverter(), Cable(1.5)))
    assert operating_point(sagging, 70.0, 1.0).states_at() == ("vbus_low",)


@pytest.mark.parametrize(
    ("limits", "binding", "amps"),
    [
        ({}, "current", 2.0),
        ({"plug_w": 4.0}, "acceptance", None),
        ({"human_w": 9.0}, "human", None),
        ({"torque_max_nm": 1.5}, "torque", None),
        ({"human_w": 9.0, "plug_w": 1.0}, "acceptance", None),
        ({"human_w": 9.0, "torque_max_nm": 0.9}, "torque", None),
    ],
)
def test_what_binds_first_is_named(limits: dict[str, float], binding: str, amps: float | None) -> None:
    point = charging_point(B, 70.0, UsbSink(limit_a=2.0), **limits)
    assert point.binding_at() == binding
    if amps is not None:
        assert float(point.plug_a) == pytest.approx(amps, rel=1e-12)
    if binding == "acceptance":
        assert float(point.plug_w) == pytest.approx(limits["plug_w"], rel=1e-12)
    if binding == "human":
        assert float(point.human_w) == pytest.approx(limits["human_w"], rel=1e-12)
    if binding == "torque":
        assert float(point.torque_nm) == pytest.approx(limits["torque_max_nm"], rel=1e-12)


def test_a_device_that_accepts_nothing_leaves_the_idle_effort() -> None:
    idle = charging_point(B, 60.0, UsbSink(), plug_w=0.0)
    assert float(idle.plug_w) == pytest.approx(0.0, abs=1e-12)
    assert float(idle.human_w) == pytest.approx(float(operating_point(B, 60.0, 0.0).human_w), rel=1e-12)
    assert idle.states_at() == ("not_charging",)


def test_questions_broadcast_over_persons_cadence_and_state_of_charge() -> None:
    rpm = np.linspace(50.0, 70.0, 3)[:, None, None]
    human_w = np.array([6.0, 9.0, 12.0, 20.0])[:, None]
    plug_w = np.array([1.0, 3.0, np.inf, 2.0, 8.0])
    block = charging_point(B, rpm, UsbSink(limit_a=2.0), human_w=human_w, plug_w=plug_w)
    assert block.human_w.shape == (3, 4, 5)
    for i, j, k in np.ndindex(3, 4, 5):
        single = charging_point(
            B, float(rpm[i, 0, 0]), UsbSink(limit_a=2.0), human_w=float(human_w[j, 0]), plug_w=float(plug_w[k])
        )
        assert single.plug_w == pytest.approx(float(block.plug_w[i, j, k]), rel=1e-12)
        assert single.binding_at() == block.binding_at((i, j, k))


def test_an_empty_question_has_an_empty_answer() -> None:
    point = operating_point(B, np.array([]), 1.0)
    assert point.human_w.shape == (0,)
    assert all(loss.shape == (0,) for loss in point.stage_loss_w)


def test_stages_in_any_order_and_number() -> None:
    stages = (
        Cable(0.05), SynchronousRectifier(2, 0.01, 0.002), FixedLoss(0.99), Cable(0.02), Diode(),
        SwitchingConverter(9.0, lockout_v=6.0, headroom_needed_v=0.5), Cable(0.1), LinearRegulator(),
        Cable(0.1), FixedLoss(0.98),
    )  # fmt: skip
    point = operating_point(Chain(LARGE, GearBox(60.0, 0.80, 0.08), stages), np.array([55.0, 60.0, 70.0]), 0.3)
    assert [point.states_at((i,)) for i in range(3)] == [()] * 3
    assert sum(point.stage_loss_w) + point.plug_w == pytest.approx(point.human_w, abs=1e-9)
    assert point.plug_a == pytest.approx(0.3, rel=1e-12)
    assert point.plug_v == pytest.approx(5.018 - 0.1 * 0.3 / 0.98, abs=1e-9)


def test_a_chain_without_stages_is_the_bare_machine() -> None:
    point = operating_point(Chain(LARGE, GearBox(40.0)), 60.0, 0.5)
    assert float(point.plug_v) == pytest.approx(11.3097 - 0.75, abs=1e-4)
    assert point.stage_names == ("gear", "friction", "copper")


def test_states_are_told_in_a_fixed_order() -> None:
    assert STATES.index("no_output") == 0
    assert set(operating_point(A, 135.0, 0.3).flags) == set(STATES)


@pytest.mark.parametrize(("ratio", "rpm", "torque_nm", "human_w"), [
    (20.0, 193.1, 0.245, 4.957), (30.0, 128.7, 0.358, 4.823), (40.0, 96.5, 0.470, 4.755), (50.0, 77.2, 0.583, 4.715),
])  # fmt: skip
def test_gearing_trades_cadence_for_force_hardly_watts(
    ratio: float, rpm: float, torque_nm: float, human_w: float
) -> None:
    chain = Chain(SMALL, GearBox(ratio, 0.75, 0.02), A.stages)
    point = operating_point(chain, rpm + 0.05, 0.3)
    assert point.states_at() == ()
    assert float(point.torque_nm) == pytest.approx(torque_nm, abs=6e-4)
    assert float(point.human_w) == pytest.approx(human_w, rel=1e-3)
