"""DC machine: worked values, the optimum by search, the energy balance."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar

from kitplanner.domain.gear import GearBox
from kitplanner.domain.machine import (
    DcMachine,
    best_current_a,
    best_eta,
    emf_v,
    eta_at,
    greatest_power_w,
    ke_from_kv,
    regulating_speed_rpm,
    shaft_torque_nm,
    short_circuit_a,
    terminal_v,
)
from kitplanner.domain.units import rad_s_from_rpm

MACHINE = DcMachine(0.045, 1.5, 0.0, 0.004)
SPEED = float(rad_s_from_rpm(2400.0))


def test_voltage_constant_from_an_open_circuit_reading_and_from_kv() -> None:
    """5.20 V at 2400 rpm: Ke = 5.20 / 251.3; the same machine is sold as 461.5 rpm/V."""
    assert pytest.approx(0.02069, rel=1e-3) == 5.20 / SPEED
    assert ke_from_kv(2400.0 / 5.20) == pytest.approx(5.20 / SPEED)


@pytest.mark.parametrize(("amps", "torque_nm"), [(0.0, 0.004), (0.2, 0.013), (0.6, 0.031), (1.2, 0.058)])
def test_torque_follows_current_and_not_speed(amps: float, torque_nm: float) -> None:
    for speed in (0.0, SPEED):
        assert shaft_torque_nm(MACHINE, speed, amps) == pytest.approx(torque_nm)


def test_short_circuit_is_86_times_heavier_than_idling() -> None:
    shorted = shaft_torque_nm(MACHINE, SPEED, short_circuit_a(MACHINE, SPEED))
    assert shorted == pytest.approx(0.3433, rel=1e-3)
    assert shorted / shaft_torque_nm(MACHINE, SPEED, 0.0) == pytest.approx(85.82, rel=1e-3)


def test_best_current_and_greatest_power_agree_with_a_search() -> None:
    """Independent: scipy's bounded search over the efficiency and over the power."""
    top = float(short_circuit_a(MACHINE, SPEED))
    best = minimize_scalar(
        lambda i: -eta_at(MACHINE, SPEED, i), bounds=(1e-6, top), method="bounded", options={"xatol": 1e-10}
    )
    assert best_current_a(MACHINE, SPEED) == pytest.approx(best.x, rel=1e-5)
    assert best_eta(MACHINE, SPEED) == pytest.approx(-best.fun, rel=1e-10)
    power = minimize_scalar(lambda i: -i * terminal_v(MACHINE, SPEED, i), bounds=(0.0, top), method="bounded")
    assert greatest_power_w(MACHINE, SPEED) == pytest.approx(-power.fun, rel=1e-9)
    assert eta_at(MACHINE, SPEED, top / 2.0) == pytest.approx(0.4885, rel=1e-3)


def test_worked_optimum_at_2400_rpm() -> None:
    assert emf_v(0.045, SPEED) == pytest.approx(11.31, rel=1e-3)
    assert best_current_a(MACHINE, SPEED) == pytest.approx(0.7346, rel=1e-3)
    assert best_eta(MACHINE, SPEED) == pytest.approx(0.8051, rel=1e-4)
    assert greatest_power_w(MACHINE, SPEED) == pytest.approx(21.32, rel=1e-3)


def test_efficiency_map() -> None:
    table = {
        1200.0: (0.5154, 0.6556, 0.7314, 0.7090, 0.5453),
        2400.0: (0.5224, 0.6739, 0.7748, 0.8045, 0.7463),
        3600.0: (0.5247, 0.6801, 0.7892, 0.8363, 0.8133),
    }
    amps = np.array([0.1, 0.2, 0.4, 0.8, 1.6])
    for rpm, row in table.items():
        assert np.asarray(eta_at(MACHINE, rad_s_from_rpm(rpm), amps)) == pytest.approx(np.array(row), abs=6e-5)


@given(st.floats(0.0, 2.0), st.floats(10.0, 500.0))
def test_mechanical_watts_are_electrical_watts_and_losses(amps: float, speed: float) -> None:
    machine = DcMachine(0.05, 0.7, 0.4, 0.002, 1e-6)
    heat = machine.ra_ohm * amps**2 + machine.vb_v * amps + (machine.tc_nm + machine.b_nm_s * speed) * speed
    out = terminal_v(machine, speed, amps) * amps
    assert shaft_torque_nm(machine, speed, amps) * speed == pytest.approx(out + heat, rel=1e-12, abs=1e-12)


@given(st.floats(20.0, 200.0), st.floats(0.0, 1.0))
def test_regulating_speed_is_the_inverse_of_the_terminal_volts(rpm: float, amps: float) -> None:
    gear = GearBox(30.0)
    volts = terminal_v(MACHINE, rad_s_from_rpm(rpm * gear.ratio), amps)
    assert regulating_speed_rpm(MACHINE, gear, volts, amps) == pytest.approx(rpm)


@pytest.mark.parametrize(
    "constants", [(0.0, 1.0), (0.05, 0.0), (float("nan"), 1.0), (0.05, 1.0, -0.1), (0.05, 1.0, 0.0, -1.0)]
)
def test_machines_without_meaning_are_refused(constants: tuple[float, ...]) -> None:
    with pytest.raises(ValueError, match="machine"):
        DcMachine(*constants)
