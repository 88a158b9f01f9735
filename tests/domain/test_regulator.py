"""Linear regulator against the LM317 data sheet, IEC 60063 and circuit conservation."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.regulator import (
    E24,
    LinearRegulator,
    divider_band_v,
    divider_output_v,
    pick_divider,
)
from kitplanner.domain.stage import Flow
from kitplanner.domain.usb_sink import USB_HIGH_V, WORTHWHILE_A, dummy_load_a

COMMON = LinearRegulator(220.0, 680.0)


def at(regulator: LinearRegulator, in_v: float, out_a: float) -> Flow:
    """Flow in regulation for an output current."""
    in_a = out_a + regulator.reference_v / regulator.r1_ohm + regulator.adjust_a
    out_v, flow_a = regulator.forward(in_v, in_a)
    assert float(flow_a) == pytest.approx(out_a)
    return Flow(in_v, in_a, out_v, flow_a)


def test_output_formula_of_the_lm317_data_sheet() -> None:
    """LM317 data sheet: Vout = 1.25 (1 + R2/R1) + Iadj R2, 50 uA typical, 100 uA greatest."""
    assert divider_output_v(220.0, 680.0) == pytest.approx(5.148, abs=5e-4)
    assert divider_output_v(220.0, 680.0, 1.25, 100e-6) == pytest.approx(5.182, abs=5e-4)


def test_band_by_the_limits_of_the_data_sheet() -> None:
    """LM317 data sheet: reference 1.20 to 1.30 V."""
    assert divider_band_v(220.0, 680.0) == pytest.approx((4.943, 5.386), abs=5e-4)
    assert divider_band_v(220.0, 680.0, 0.01) == pytest.approx((4.869, 5.468), abs=5e-4)
    assert divider_band_v(220.0, 680.0, 0.05) == pytest.approx((4.588, 5.813), abs=5e-4)
    assert LinearRegulator(220.0, 680.0, tolerance_fraction=0.05).band_v() == divider_band_v(220.0, 680.0, 0.05)


def test_common_pair_may_exceed_the_usb_ceiling_and_the_picked_pair_does_not() -> None:
    """USB 2.0 section 7.2.1: 5.25 V at most at the source."""
    assert divider_band_v(220.0, 680.0)[1] > USB_HIGH_V
    assert divider_band_v(120.0, 360.0)[1] < USB_HIGH_V


def test_heat_at_the_least_useful_load_is_about_one_watt() -> None:
    """5 V, about 300 mA, about 15 ohm, 1.25 V and about one watt: common practice, no source."""
    assert pytest.approx(0.300) == WORTHWHILE_A
    assert COMMON.reference_v == 1.25
    assert COMMON.output_v == pytest.approx(5.0, rel=0.05)
    assert dummy_load_a(5.0, 15.0) == pytest.approx(WORTHWHILE_A, rel=0.15)
    assert float(COMMON.die_w(at(COMMON, 8.4, WORTHWHILE_A))) == pytest.approx(1.0, rel=0.05)


def test_worked_heat_at_nine_volts() -> None:
    flow = at(COMMON, 9.0, 0.3)
    assert flow.in_a == pytest.approx(0.3057, abs=5e-5)
    die_w = float(COMMON.die_w(flow))
    assert die_w == pytest.approx(1.178, abs=5e-4)
    assert 5.148 * 0.3 / (9.0 * float(flow.in_a)) == pytest.approx(0.5612, abs=2e-4)
    assert COMMON.junction_degc(die_w) == pytest.approx(83.89, abs=0.05)
    warm = LinearRegulator(220.0, 680.0, theta_c_per_w=70.0, air_degc=40.0)
    assert warm.junction_degc(die_w) == pytest.approx(122.4, abs=0.1)


def test_less_than_one_watt_holds_only_below_8_4_volts() -> None:
    assert float(COMMON.die_w(at(COMMON, 8.417, 0.3))) < 1.0 < float(COMMON.die_w(at(COMMON, 8.419, 0.3)))
    assert float(COMMON.die_w(at(COMMON, 9.0, 0.2537))) < 1.0 < float(COMMON.die_w(at(COMMON, 9.0, 0.2539)))


def test_fifteen_ohm_on_the_output() -> None:
    load_a = float(dummy_load_a(COMMON.output_v, 15.0))
    assert load_a == pytest.approx(0.3432, abs=5e-5)
    die_w = float(COMMON.die_w(at(COMMON, 9.0, load_a)))
    assert die_w == pytest.approx(1.344, abs=5e-4)
    assert COMMON.junction_degc(die_w) == pytest.approx(92.21, abs=0.05)


def test_bare_package_budget_of_the_data_sheet() -> None:
    """LM317 data sheet: TO-220 50 K/W to air, junction 125 degC: 2 W at 25 degC, 1.7 W at 40 degC."""
    warm = LinearRegulator(220.0, 680.0, air_degc=40.0)
    assert warm.junction_degc(1.700) == pytest.approx(125.0)
    hottest = float(warm.hottest_in_v(at(warm, 9.0, 0.3).in_a))
    assert hottest == pytest.approx(10.71, abs=0.005)
    assert float(warm.junction_degc(warm.die_w(at(warm, hottest, 0.3)))) == pytest.approx(125.0, abs=1e-9)


def test_least_input_by_the_typical_dropout() -> None:
    assert float(COMMON.least_in_v(at(COMMON, 9.0, 0.3).in_a)) == pytest.approx(6.855, abs=5e-4)


@pytest.mark.parametrize(
    ("r1", "r2", "volts", "milliamps"),
    [
        (120, 360, 5.018, 10.42),
        (110, 330, 5.017, 11.36),
        (130, 390, 5.020, 9.62),
        (270, 820, 5.087, 4.63),
        (220, 680, 5.148, 5.682),
    ],
)
def test_pairs_of_standard_resistors(r1: float, r2: float, volts: float, milliamps: float) -> None:
    assert divider_output_v(r1, r2) == pytest.approx(volts, abs=5.5e-4)
    assert 1.25 / r1 * 1000.0 == pytest.approx(milliamps, abs=0.006)


def test_e24_is_the_series_of_iec_60063() -> None:
    """IEC 60063: 24 values; 10^(n/24) rounded, but for the eight historical values from 2.7 to 4.7 and 8.2."""
    geometric = np.round(10.0 ** (np.arange(24) / 24.0), 1)
    differing = {value for value, ideal in zip(E24, geometric, strict=True) if value != ideal}
    assert differing == {2.7, 3.0, 3.3, 3.6, 3.9, 4.3, 4.7, 8.2}


def test_divider_pick_is_the_least_current_that_is_enough() -> None:
    assert pick_divider(5.0) == (120.0, 360.0)
    r1, r2 = pick_divider(5.0, load_stays=True)
    assert abs(float(divider_output_v(r1, r2)) - 5.0) <= 0.020
    assert 0.0035 <= 1.25 / r1 < 0.0104
    with pytest.raises(ValueError, match="No pair of E24 resistors"):
        pick_divider(900.0)


@given(st.floats(0.0, 20.0), st.floats(-0.02, 1.5))
def test_watts_in_are_watts_out_and_heat_in_and_out_of_regulation(in_v: float, in_a: float) -> None:
    for regulator in (COMMON, LinearRegulator()):
        out_v, out_a = regulator.forward(in_v, in_a)
        heat = float(regulator.loss_w(Flow(in_v, in_a, out_v, out_a)))
        assert in_v * in_a == pytest.approx(float(out_v * out_a) + heat, abs=1e-11)


@given(st.floats(0.0, 1.0))
def test_output_current_has_no_step_where_dropout_begins(in_a: float) -> None:
    regulator = LinearRegulator()
    edge = float(regulator.least_in_v(in_a))
    around = np.linspace(edge - 2e-3, edge + 3e-3, 501)
    out_v, out_a = regulator.forward(around, np.full_like(around, in_a))
    assert np.abs(np.diff(np.asarray(out_v))).max() < 2e-5
    assert np.abs(np.diff(np.asarray(out_a))).max() < 3e-7


def test_in_dropout_the_divider_draws_by_its_own_resistance() -> None:
    regulator = LinearRegulator()
    out_v, out_a = regulator.forward(6.0, 0.3)
    assert float(out_v) == pytest.approx(6.0 - 1.6 - 0.35 * 0.3)
    assert 0.3 - float(out_a) == pytest.approx(float(out_v) / 480.0, rel=1e-12)
