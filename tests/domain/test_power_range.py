"""Percentiles, spread and self-test against the Monte Carlo they were taken from."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.capacity import v_peak_ml_kg_min
from kitplanner.domain.human_power import f_steady
from kitplanner.domain.power_range import (
    SELF_TEST_SPREAD,
    dependable_fraction,
    estimate_spread,
    p10_fraction,
    p90_fraction,
    self_test_factor,
    self_test_weight,
)
from kitplanner.domain.spread import lognormal_factors, quasi_normal

MINUTES = np.array([5.0, 15.0, 30.0, 60.0, 240.0])


def test_percentiles_come_from_the_inputs_uncertainty():
    """The model again: capacity 18 %, share 12 %, slope 8 %, intercept 10 % lognormal, pedalling average adult."""
    z = quasi_normal(4096, 4)
    capacity, share, slope, rest = (lognormal_factors(cv, z[:, i]) for i, cv in enumerate((0.18, 0.12, 0.08, 0.10)))
    for k, minutes in enumerate(MINUTES):
        uptake = v_peak_ml_kg_min(40) * capacity * float(f_steady(minutes)) * share
        watts = np.maximum(0.0, uptake - 7.0 * rest) * 75.0 / (10.8 * slope)
        p10, p20, p50, p90 = np.quantile(watts, (0.1, 0.2, 0.5, 0.9))
        assert float(dependable_fraction(minutes)) == pytest.approx(p20 / p50, abs=0.035), k
        assert float(p10_fraction(minutes)) == pytest.approx(p10 / p50, abs=0.035), k
        assert float(p90_fraction(minutes)) == pytest.approx(p90 / p50, abs=0.07), k
        assert float(estimate_spread(minutes, 40)) == pytest.approx(watts.std() / watts.mean(), abs=0.05), k


def test_values_at_the_marks():
    assert dependable_fraction(MINUTES) == pytest.approx([0.737, 0.716, 0.699, 0.665, 0.548])
    assert p10_fraction(MINUTES) == pytest.approx([0.62, 0.59, 0.56, 0.52, 0.33])
    assert p90_fraction(MINUTES) == pytest.approx([1.51, 1.55, 1.59, 1.64, 1.88])
    assert estimate_spread(MINUTES, 40) == pytest.approx([0.35, 0.35, 0.40, 0.45, 0.60])


@given(t=st.floats(0.0, 1000.0), more=st.floats(0.0, 500.0))
def test_order_and_direction(t, more):
    assert p10_fraction(t) < dependable_fraction(t) < 1.0 < p90_fraction(t)
    assert dependable_fraction(t + more) <= dependable_fraction(t)
    assert estimate_spread(t + more, 40) >= estimate_spread(t, 40)


def test_held_outside_the_marks():
    assert p10_fraction(1.0) == p10_fraction(5.0)
    assert p90_fraction(900.0) == p90_fraction(240.0)
    assert estimate_spread(0.0, 40) == 0.35


def test_children_and_the_old_are_less_certain():
    assert estimate_spread(30.0, 15) == estimate_spread(30.0, 65) == pytest.approx(0.50)
    assert estimate_spread(30.0, 16) == estimate_spread(30.0, 64) == pytest.approx(0.40)


def test_self_test_worked_value():
    """Model 28.9 W, test 20 W, prior spread 0.37, test spread 0.12: weight 0.9048, 20.71 W."""
    assert self_test_weight(0.37, SELF_TEST_SPREAD) == pytest.approx(0.9048, rel=1e-3)
    assert 28.9 * float(self_test_factor(20.0, 28.9, 0.9048)) == pytest.approx(20.71, rel=1e-3)


def test_self_test_is_the_normal_posterior_on_a_grid():
    """Bayes' rule by brute force on the logarithm."""
    grid = np.linspace(-3.0, 3.0, 20001)
    posterior = np.exp(-0.5 * (grid / 0.37) ** 2 - 0.5 * ((np.log(20.0 / 28.9) - grid) / 0.12) ** 2)
    mean = float(np.sum(grid * posterior) / np.sum(posterior))
    assert float(self_test_factor(20.0, 28.9)) == pytest.approx(np.exp(mean), rel=1e-4)


@given(test=st.floats(0.0, 500.0), model=st.floats(1.0, 200.0))
def test_self_test_stays_within_its_limits(test, model):
    factor = float(self_test_factor(test, model))
    assert 0.4 <= factor <= 1.8
    assert (factor - 1.0) * (test - model) >= 0.0


def test_self_test_that_agrees_changes_nothing():
    assert self_test_factor(30.0, 30.0) == pytest.approx(1.0)
