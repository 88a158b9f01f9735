"""Switching converter: efficiency table, data-sheet figures of the LM2596, the inverse of the loss law."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar

from kitplanner.domain.converter import SwitchingConverter, best_output_a, converter_eta, converter_loss_w
from kitplanner.domain.stage import Flow

SYNC = SwitchingConverter()
CURRENTS = np.array([0.05, 0.1, 0.3, 0.5, 1.0, 2.0, 3.0])


@pytest.mark.parametrize(
    ("in_v", "percent"),
    [
        (7.0, (86.16, 91.37, 95.02, 95.61, 95.68, 94.92, 93.97)),
        (12.0, (82.81, 89.13, 93.74, 94.55, 94.80, 94.13, 93.22)),
        (18.0, (79.11, 86.59, 92.25, 93.30, 93.75, 93.20, 92.35)),
        (24.0, (75.72, 84.19, 90.80, 92.09, 92.73, 92.29, 91.49)),
    ],
)
def test_efficiency_table_of_the_default(in_v: float, percent: tuple[float, ...]) -> None:
    assert 100.0 * np.asarray(converter_eta(SYNC, in_v, CURRENTS)) == pytest.approx(np.array(percent), abs=0.0051)


def lm2596_loss_w(in_v: float, amps: np.ndarray) -> np.ndarray:
    """Loss of an LM2596-5.0 from data-sheet parts.

    Saturation 0.9 + 0.0867 I (1.16 V at 3 A), quiescent 5 mA and 150 kHz of the data sheet; a 0.5 V diode, a
    50 mohm coil and 100 ns edges beside it.
    """
    saturation = 0.9 + 0.0867 * amps
    duty = (5.0 + 0.5 + 0.05 * amps) / (in_v - saturation + 0.5)
    conduction = saturation * amps * duty + 0.5 * amps * (1.0 - duty) + 0.05 * amps**2
    return conduction + in_v * amps * 100e-9 * 150e3 + in_v * 0.005


def test_loss_law_fits_the_lm2596_of_its_data_sheet() -> None:
    """LM2596 data sheet: 80 % at 12 V, 3 A, 5 V, hence 3.75 W; the quadratic law is fitted to its parts."""
    amps = np.linspace(0.05, 3.0, 60)
    c, b, a = np.polyfit(amps, lm2596_loss_w(12.0, amps), 2)
    assert (a, b, c) == pytest.approx((0.06085, 0.8658, 0.09754), rel=5e-3)
    module = SwitchingConverter(5.0, float(a), 0.0, float(b), 0.0, float(c), 1.5, 7.0)
    assert float(converter_loss_w(module, 12.0, 3.0)) == pytest.approx(3.537, rel=1e-3)
    sheet_w = 15.0 / 0.80 - 15.0
    assert float(converter_loss_w(module, 12.0, 3.0)) == pytest.approx(sheet_w, rel=0.06)
    assert np.abs(np.asarray(converter_loss_w(module, 12.0, amps)) - lm2596_loss_w(12.0, amps)).max() < 1e-3
    assert converter_eta(module, 12.0, 1.0) == pytest.approx(0.8299, rel=1e-3)
    assert converter_eta(module, 12.0, 0.3) == pytest.approx(0.8199, rel=2e-3)


def test_boost_from_a_cell() -> None:
    """bq24195 data sheet: 94 % at 5.1 V, 1 A from the cell: 0.3255 W lost, 1.466 A from 3.7 V."""
    loss = 5.1 * (1.0 / 0.94 - 1.0)
    assert loss == pytest.approx(0.3255, abs=1e-4)
    boost = SwitchingConverter(5.1, loss, 0.0, 0.0, 0.0, 0.0, -2.0, 2.5)
    assert boost.least_in_v == pytest.approx(3.1)
    out_v, out_a = boost.forward(np.array(3.7), np.array(1.466))
    assert (float(out_v), float(out_a)) == pytest.approx((5.1, 1.0), rel=1e-3)


def test_best_output_current_agrees_with_a_search() -> None:
    best = minimize_scalar(
        lambda i: -float(converter_eta(SYNC, 12.0, i)), bounds=(0.01, 3.0), method="bounded", options={"xatol": 1e-10}
    )
    assert float(best_output_a(SYNC, 12.0)) == pytest.approx(best.x, rel=1e-5)


@given(st.floats(5.6, 40.0), st.floats(0.0, 4.0))
def test_march_forward_is_the_inverse_of_the_loss_law(in_v: float, out_a: float) -> None:
    in_w = SYNC.output_v * out_a + float(converter_loss_w(SYNC, in_v, out_a))
    out_v, found = SYNC.forward(np.array(in_v), np.array(in_w / in_v))
    assert float(out_v) == 5.10
    assert float(found) == pytest.approx(out_a, abs=1e-13, rel=1e-12)
    heat = float(SYNC.loss_w(Flow(in_v, in_w / in_v, out_v, found)))
    assert in_w == pytest.approx(float(out_v * found) + heat, rel=1e-12)


def test_a_law_without_square_term_is_no_special_case() -> None:
    linear = SwitchingConverter(5.0, 0.1, 0.0, 0.2, 0.0, 0.0)
    _, out_a = linear.forward(np.array(10.0), np.array(1.0))
    assert float(out_a) == pytest.approx((10.0 - 0.1) / 5.2)


def test_least_input_is_the_greater_of_lockout_and_output_with_headroom() -> None:
    """LM2596 data sheet: the 5 V part works from 7 V."""
    assert SwitchingConverter(5.0, lockout_v=7.0).least_in_v == 7.0
    assert SwitchingConverter(13.8, headroom_needed_v=1.0, lockout_v=10.0).least_in_v == 14.8
