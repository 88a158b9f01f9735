"""The charge time under a changing source against the closed form and scipy's quad."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from kitplanner.domain.battery import Acceptance, charge_rate_per_h, minutes_to_charge
from kitplanner.domain.charge_integral import charge_trajectory, charge_trajectory_varying, minutes_to_charge_varying


def test_constant_sources_give_the_closed_form():
    rates = np.linspace(0.02, 2.5, 173)
    for acceptance in (Acceptance(), Acceptance(2.0), Acceptance(0.7, 0.02, 0.1), Acceptance(tail_factor=1.15)):
        integral = minutes_to_charge_varying(
            np.full(rates.size, 0.05), 1.0, lambda soc, charge: rates[charge] + 0.0 * soc, acceptance
        )
        assert integral == pytest.approx(minutes_to_charge(0.05, 1.0, rates, acceptance), rel=1e-6)


@settings(max_examples=40)
@given(
    base=st.floats(0.05, 1.0),
    fall=st.floats(0.0, 0.9),
    kink=st.floats(0.05, 0.95),
    drop=st.floats(0.5, 1.0),
    s0=st.floats(0.0, 0.9),
)
def test_quad_agrees_on_sources_that_fall_and_bend(base, fall, kink, drop, s0):
    def source(soc):
        return base * (1.0 - fall * soc**2) * (1.0 - (1.0 - drop) * np.maximum(0.0, soc - kink) / (1.0 - kink))

    acceptance = Acceptance(0.8)
    grid = np.linspace(s0, 1.0, 20001)
    limited = charge_rate_per_h(grid, source(grid), acceptance) < np.minimum(source(grid), 0.8) - 1e-12
    crossings = grid[1:][np.diff(limited.astype(int)) != 0]
    hours = quad(
        lambda s: 1.0 / float(charge_rate_per_h(s, source(s), acceptance)),
        s0,
        1.0,
        points=sorted({kink, *crossings.tolist()}),
        limit=400,
        epsrel=1e-10,
    )[0]
    minutes = minutes_to_charge_varying(s0, 1.0, lambda soc, _charge: source(soc), acceptance)
    assert float(minutes) == pytest.approx(60.0 * hours, rel=2e-6)


def test_every_charge_keeps_its_own_source_and_acceptance():
    rates = np.array([[0.1, 0.2, 0.4], [0.3, 0.6, 1.2]])
    acceptance = Acceptance(np.array([[0.5], [1.0]]), taper_tau_h=np.array([0.2, 0.3, 0.4]))
    flat = rates.ravel()
    integral = minutes_to_charge_varying(
        np.zeros(rates.shape), 0.99, lambda soc, charge: flat[charge] + 0.0 * soc, acceptance
    )
    assert integral.shape == (2, 3)
    assert integral == pytest.approx(minutes_to_charge(0.0, 0.99, rates, acceptance), rel=1e-6)


def test_source_that_fails_on_the_way_never_arrives():
    minutes = minutes_to_charge_varying(
        np.array([0.0, 0.0]), np.array([0.5, 1.0]), lambda soc, _charge: np.where(soc < 0.6, 0.3, 0.0)
    )
    assert minutes[0] == pytest.approx(100.0, rel=1e-6)
    assert np.isinf(minutes[1])


def test_no_way_to_go_takes_no_time():
    assert minutes_to_charge_varying(0.7, 0.3, lambda soc, _charge: 0.3 + 0.0 * soc) == 0.0
    assert minutes_to_charge_varying(0.7, 0.7, lambda soc, _charge: 0.0 * soc) == 0.0


def test_trajectories_agree_on_a_constant_source():
    even = charge_trajectory(0.1, 1.0, 0.33, 15.4, points=2001)
    varying = charge_trajectory_varying(0.1, 1.0, lambda soc, _charge: 0.33 + 0.0 * soc, 15.4)
    assert varying.minutes[-1] == pytest.approx(even.minutes[-1], rel=1e-6)
    assert np.interp(varying.minutes, even.minutes, even.soc) == pytest.approx(varying.soc, abs=1e-5)
    assert varying.power_w[0] == pytest.approx(even.power_w[0])
    assert varying.power_w[-1] == pytest.approx(even.power_w[-1])


def test_trajectory_ends_full_and_holds_its_energy():
    run = charge_trajectory(0.2, 1.0, 0.33, 15.4, points=4001)
    assert run.minutes[-1] == pytest.approx(float(minutes_to_charge(0.2, 1.0, 0.33)))
    assert run.soc[0] == 0.2
    assert run.soc[-1] == pytest.approx(1.0)
    assert np.all(np.diff(run.soc) > 0.0)
    assert np.trapezoid(run.power_w, run.minutes) / 60.0 == pytest.approx(0.8 * 15.4, rel=1e-6)
    with pytest.raises(ValueError, match="never charges"):
        charge_trajectory(0.0, 1.0, 0.0, 15.4)
