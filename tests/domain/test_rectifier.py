"""Diodes and synchronous rectifiers: data sheet limits, worked table, conservation."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.rectifier import (
    SCHOTTKY,
    SILICON,
    THERMAL_V_27_DEGC,
    Diode,
    SynchronousRectifier,
    diode_v,
)
from kitplanner.domain.stage import Flow


def schottky_v(amps: float) -> float:
    return float(diode_v(amps, SCHOTTKY.saturation_a, SCHOTTKY.ideality, SCHOTTKY.series_ohm))


def test_thermal_voltage_at_27_degc() -> None:
    """kT/q at 300.15 K from the exact constants of the SI: 25.865 mV."""
    assert pytest.approx(0.025865, abs=5e-7) == THERMAL_V_27_DEGC


@pytest.mark.parametrize(("amps", "most_v"), [(1.0, 0.60), (2.0, 0.73), (3.0, 0.90)])
def test_schottky_default_stays_below_the_1n5819_maxima(amps: float, most_v: float) -> None:
    """1N5819 data sheet, greatest forward voltage at 25 degC."""
    assert 0.6 * most_v < schottky_v(amps) < most_v


def test_silicon_default_is_near_the_1n5404_at_3_a() -> None:
    """1N5404 data sheet: 1 V at 3 A; the default is a typical part below 10 % above it."""
    assert float(diode_v(3.0, SILICON.saturation_a, SILICON.ideality, SILICON.series_ohm)) == pytest.approx(
        1.0, rel=0.1
    )


@pytest.mark.parametrize(
    ("stage", "at_300_ma", "at_2_a"),
    [
        (SCHOTTKY, (0.3616, 0.1085), (0.5491, 1.098)),
        (Diode(2), (0.7231, 0.2169), (1.098, 2.196)),
        (SILICON, (0.8100, 0.2430), (0.9834, 1.967)),
        (Diode(2, 11.5e-9, 1.8, 0.05), (1.620, 0.4860), (1.967, 3.933)),
        (SynchronousRectifier(2, 0.010), (0.006, 0.0018), (0.040, 0.080)),
    ],
)
def test_drop_and_heat_table(
    stage: Diode | SynchronousRectifier, at_300_ma: tuple[float, float], at_2_a: tuple[float, float]
) -> None:
    for amps, (drop_v, heat_w) in ((0.3, at_300_ma), (2.0, at_2_a)):
        out_v, out_a = stage.forward(7.0, amps)
        assert 7.0 - float(out_v) == pytest.approx(drop_v, rel=1e-3)
        assert float(stage.loss_w(Flow(7.0, amps, out_v, out_a))) == pytest.approx(heat_w, rel=1e-3)


def test_compact_line_of_the_schottky_between_200_ma_and_2_a() -> None:
    """V0 0.3357 V and r 0.1099 ohm stay within 4.5 % of the law; a least-squares line has those constants."""
    amps = np.linspace(0.2, 2.0, 1801)
    volts = np.asarray(diode_v(amps, SCHOTTKY.saturation_a, SCHOTTKY.ideality, SCHOTTKY.series_ohm))
    assert np.abs((0.3357 + 0.1099 * amps) / volts - 1.0).max() == pytest.approx(0.0443, abs=0.0005)


@given(st.floats(0.0, 3.0), st.floats(1.0, 30.0), st.floats(0.0, 0.02))
def test_watts_in_are_watts_out_and_heat(amps: float, volts: float, quiescent_a: float) -> None:
    for stage in (Diode(2), SynchronousRectifier(2, 0.01, quiescent_a)):
        out_v, out_a = stage.forward(volts, amps)
        heat = float(stage.loss_w(Flow(volts, amps, out_v, out_a)))
        assert volts * amps == pytest.approx(float(out_v * out_a) + heat, abs=1e-12)
        assert heat >= 0.0


def test_a_diode_drops_nothing_without_or_against_current() -> None:
    assert float(diode_v(0.0, 1e-6, 1.0, 0.1)) == 0.0
    assert float(diode_v(-1.0, 1e-6, 1.0, 0.1)) == 0.0
