"""Charge acceptance against data sheets' and measured charges, and against independent integrators."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad, solve_ivp

from kitplanner.domain.battery import (
    DEFAULT_ACCEPTANCE,
    Acceptance,
    acceptance_rate_per_h,
    charge_ceiling_rate_per_h,
    charge_rate_per_h,
    crossover_soc,
    minutes_by_energy,
    minutes_to_charge,
    soc_after,
)

PHONE_WH, PHONE_ETA, CRANK_W = 15.4, 0.85, 6.0
PHONE_SOURCE_PER_H = CRANK_W * PHONE_ETA / PHONE_WH

rates = st.floats(0.01, 2.0)
socs = st.floats(0.0, 1.0)
acceptances = st.builds(
    Acceptance,
    rate_per_h=st.floats(0.06, 2.0),
    taper_end_per_h=st.floats(0.01, 0.05),
    taper_tau_h=st.floats(0.05, 0.5),
    tail_factor=st.floats(1.0, 1.2),
)


def test_phone_on_a_six_watt_crank():
    assert minutes_to_charge(0.0, 1.0, PHONE_SOURCE_PER_H) == pytest.approx(199.9, abs=0.05)
    assert minutes_by_energy(PHONE_WH, CRANK_W, PHONE_ETA) == pytest.approx(181.2, abs=0.05)
    assert minutes_by_energy(PHONE_WH, CRANK_W, PHONE_ETA * 0.765) == pytest.approx(236.8, abs=0.05)


@pytest.mark.parametrize(
    ("rate", "tau_h", "q", "model_min", "tolerance"),
    [
        # PyBaMM's DFN model, parameter sets Chen et al. 2020 and Ai et al. 2020, charges that end at C/20; q is the
        # model's capacity over its label.
        (0.1, 0.29, 1.015, 612.4, 0.001),
        (0.2, 0.29, 1.015, 315.5, 0.001),
        (0.5, 0.29, 1.015, 146.8, 0.005),
        (1.0, 0.29, 1.015, 100.6, 0.042),
        (0.1, 0.165, 1.074, 646.4, 0.001),
        (0.5, 0.165, 1.074, 142.3, 0.005),
        (1.0, 0.165, 1.074, 85.70, 0.013),
    ],
)
def test_physics_model_of_a_cell(rate, tau_h, q, model_min, tolerance):
    acceptance = Acceptance(rate / q, 0.05 / q, tau_h)
    assert minutes_to_charge(0.0, 1.0, math.inf, acceptance) == pytest.approx(model_min, rel=tolerance)


def test_charge_that_starts_past_the_crossover():
    assert minutes_to_charge(0.93, 1.0, 0.5) == pytest.approx(31.2, abs=0.05)


def test_slow_human_charge_has_hardly_a_tail():
    """0.3 A into 4 Ah (0.075 per hour) crosses over at 0.9925; 0.5 C at 0.865 and takes 2.421 h."""
    assert crossover_soc(0.075) == pytest.approx(0.9925, abs=5e-5)
    assert crossover_soc(0.5) == pytest.approx(0.865)
    assert minutes_to_charge(0.0, 1.0, 0.5) / 60.0 == pytest.approx(2.421, abs=5e-4)


# NASA Prognostics Center of Excellence battery data set (US-government origin), cell B0025, second charge at 24 degC:
# 1.51 A to 4.2 V, then falling current. Columns: minutes, amps, volts, Ah.
B0025 = np.array(
    [
        [1.0, 1.509, 3.625, 0.021],
        [10.0, 1.510, 3.935, 0.248],
        [30.0, 1.510, 4.046, 0.752],
        [50.0, 1.511, 4.187, 1.255],
        [53.0, 1.452, 4.205, 1.330],
        [60.0, 1.057, 4.207, 1.477],
        [70.0, 0.612, 4.203, 1.614],
        [80.0, 0.415, 4.205, 1.698],
        [100.0, 0.206, 4.206, 1.796],
        [120.0, 0.118, 4.207, 1.847],
    ]
)
# Fitted to the cell's own falling current: crossover 0.7167, time constant 22.28 min, end at 0.1 A.
B0025_TAU_H, B0025_A, B0025_END_A, B0025_CROSSOVER = 22.28 / 60.0, 1.51, 0.1, 0.7167
B0025_AH = B0025_TAU_H * (B0025_A - B0025_END_A) / (1.0 - B0025_CROSSOVER)


def _b0025(tail_factor: float) -> Acceptance:
    return Acceptance(B0025_A / B0025_AH, B0025_END_A / B0025_AH, B0025_TAU_H, tail_factor)


def test_measured_charge_is_four_to_eight_percent_longer_than_the_law():
    minutes = minutes_to_charge(0.0, B0025[:, 3] / B0025_AH, math.inf, _b0025(1.0))
    error = minutes / B0025[:, 0] - 1.0
    # The first reading, logged before the current settled, is 0.17 min off; then the steady part.
    assert np.abs(minutes[0] - B0025[0, 0]) < 0.2
    assert np.all(np.abs(error[1:7]) < 0.02)
    assert -0.08 < error[-1] < -0.04
    assert -0.08 < error[-2] < -0.04
    # Totals of three cells, measured to the law at tail factor 1: B0025, B0026 at 24 degC, B0029 at 43 degC.
    for crossover, tau_min, total_min in ((0.7167, 22.28, 121.9), (0.6945, 23.71, 124.9), (0.8022, 15.69, 106.6)):
        ah = tau_min / 60.0 * (B0025_A - B0025_END_A) / (1.0 - crossover)
        law = minutes_to_charge(0.0, 1.0, math.inf, Acceptance(B0025_A / ah, B0025_END_A / ah, tau_min / 60.0))
        assert -0.085 < law / total_min - 1.0 < -0.04


def test_measured_tail_with_the_tail_factor():
    minutes = minutes_to_charge(0.0, B0025[-1, 3] / B0025_AH, math.inf, _b0025(1.15))
    assert minutes == pytest.approx(B0025[-1, 0], rel=0.02)


def test_measured_current_follows_the_law():
    """Amps at the measured charge: within 3 % to half of the tail, within 0.05 A to its end."""
    amps = acceptance_rate_per_h(B0025[:, 3] / B0025_AH, _b0025(1.0)) * B0025_AH
    assert amps[:4] == pytest.approx(B0025[:4, 1], rel=0.005)
    assert amps[4:6] == pytest.approx(B0025[4:6, 1], rel=0.05)
    assert np.all(np.abs(amps[6:] - B0025[6:, 1]) < 0.13)


@given(s0=st.floats(0.0, 0.95), rate=rates, acceptance=acceptances)
def test_quad_agrees(s0, rate, acceptance):
    kink = float(np.clip(crossover_soc(rate, acceptance), s0, 1.0))
    hours = sum(
        quad(lambda s: 1.0 / float(charge_rate_per_h(s, rate, acceptance)), a, b, epsabs=1e-13, epsrel=1e-12)[0]
        for a, b in ((s0, kink), (kink, 1.0))
        if b > a
    )
    assert float(minutes_to_charge(s0, 1.0, rate, acceptance)) == pytest.approx(60.0 * hours, rel=1e-8)


@pytest.mark.parametrize("rate", [0.1, PHONE_SOURCE_PER_H, 0.5])
def test_solve_ivp_agrees(rate):
    """The ordinary differential equation ds/dt = c(s) reaches the target when the closed form says."""

    def reached(_hours, soc):
        return soc[0] - 0.999

    reached.terminal = True
    run = solve_ivp(
        lambda _hours, soc: [float(charge_rate_per_h(soc[0], rate))],
        (0.0, 30.0),
        [0.1],
        events=reached,
        rtol=1e-10,
        atol=1e-12,
        max_step=0.02,
    )
    assert 60.0 * run.t_events[0][0] == pytest.approx(float(minutes_to_charge(0.1, 0.999, rate)), rel=1e-6)


@given(a=socs, b=socs, c=socs, rate=rates, acceptance=acceptances)
def test_minutes_add_up(a, b, c, rate, acceptance):
    low, middle, high = sorted((a, b, c))
    whole = float(minutes_to_charge(low, high, rate, acceptance))
    parts = float(minutes_to_charge(low, middle, rate, acceptance) + minutes_to_charge(middle, high, rate, acceptance))
    assert parts == pytest.approx(whole, rel=1e-9, abs=1e-9)


@given(s0=socs, s1=socs, rate=rates, more=st.floats(1.0, 3.0), acceptance=acceptances)
def test_more_power_never_takes_longer(s0, s1, rate, more, acceptance):
    slow, fast = minutes_to_charge(s0, s1, np.array([rate, rate * more]), acceptance)
    assert fast <= slow + 1e-9


@given(rate=rates, acceptance=acceptances, s0=st.floats(0.0, 0.99), share=st.floats(0.0, 1.0))
def test_soc_after_inverts_the_minutes(rate, acceptance, s0, share):
    target = s0 + share * (1.0 - s0)
    minutes = minutes_to_charge(s0, target, rate, acceptance)
    assert float(soc_after(minutes, s0, rate, acceptance)) == pytest.approx(target, abs=1e-9)


@given(scale=st.floats(0.1, 10.0), energy=st.floats(0.1, 100.0), power=st.floats(0.5, 100.0))
def test_energy_and_power_scale_together(scale, energy, power):
    plain = minutes_by_energy(energy, power, 0.8)
    assert float(minutes_by_energy(scale * energy, scale * power, 0.8)) == pytest.approx(float(plain), rel=1e-12)


def test_energy_alone_is_a_lower_bound_and_exact_without_a_tail():
    assert minutes_to_charge(0.0, 1.0, 0.3) > minutes_by_energy(1.0, 0.3)
    assert minutes_to_charge(0.0, 0.8, 0.3) == pytest.approx(float(minutes_by_energy(0.8, 0.3)))
    assert minutes_to_charge(0.0, 1.0, 0.04) == pytest.approx(float(minutes_by_energy(1.0, 0.04)))


def test_no_power_and_no_way_to_go():
    assert np.isinf(minutes_to_charge(0.0, 1.0, 0.0))
    assert minutes_to_charge(0.5, 0.5, 0.0) == 0.0
    assert minutes_to_charge(0.8, 0.2, 0.3) == 0.0
    assert np.isinf(minutes_by_energy(1.0, 0.0))
    assert soc_after(1e9, 0.0, 0.0) == 0.0
    assert soc_after(1e9, 0.0, 0.3) == 1.0


def test_arrays_broadcast_over_starts_sources_and_acceptances():
    acceptance = Acceptance(np.array([0.3, 0.5, 1.0])[:, None, None])
    minutes = minutes_to_charge(np.array([0.0, 0.5])[:, None], 1.0, np.array([0.1, 0.2, 0.4, 0.8]), acceptance)
    assert minutes.shape == (3, 2, 4)
    assert minutes[1, 1, 2] == pytest.approx(float(minutes_to_charge(0.5, 1.0, 0.4)))


def test_ceilings_of_a_pack_data_sheet():
    """One maker's pack sheet: no charge below 0 degC, 0.1 C to 5, 0.2 C to 15, 0.5 C to 55 degC."""
    degc = [-0.1, 0.0, 4.9, 5.0, 14.9, 15.0, 54.9, 55.0]
    assert charge_ceiling_rate_per_h(degc).tolist() == [0.0, 0.1, 0.1, 0.2, 0.2, 0.5, 0.5, 0.0]
    assert charge_ceiling_rate_per_h(20.0, "nimh") == 2.0 * charge_ceiling_rate_per_h(45.0, "nimh")
    assert np.all(charge_ceiling_rate_per_h([-10.0, 20.0, 50.0], "alkaline") == 0.0)
    assert charge_ceiling_rate_per_h(-10.0, "lead_acid") > 0.0
    assert np.isinf(charge_ceiling_rate_per_h(20.0, "supercapacitor"))


def test_acceptance_never_exceeds_either_part():
    soc = np.linspace(0.0, 1.0, 101)
    rate = acceptance_rate_per_h(soc)
    assert np.all(rate <= DEFAULT_ACCEPTANCE.rate_per_h)
    assert rate[-1] == pytest.approx(0.05)
    assert np.all(np.diff(rate) <= 0.0)
