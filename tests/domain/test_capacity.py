"""Aerobic capacity against the FRIEND registry's regression and its uses."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.capacity import (
    arm_ratio,
    default_height_cm,
    default_mass_kg,
    friend_bike_ml_kg_min,
    v_peak_ml_kg_min,
)


@pytest.mark.parametrize(
    ("age", "sex_code", "mass_kg", "height_cm", "expected"),
    # FRIEND, de Souza e Silva et al. 2018: worked by hand from the published coefficients.
    [(45, 1, 80.0, 178.0, 38.83), (45, 2, 68.0, 164.0, 28.15)],
)
def test_friend_on_a_cycle(age, sex_code, mass_kg, height_cm, expected):
    assert friend_bike_ml_kg_min(age, sex_code, mass_kg, height_cm) == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize(
    ("age", "level", "expected"),
    [(40, "light", 23.56), (40, "usual", 29.44), (40, "strong", 36.72), (70, "usual", 20.68), (45, "usual", 27.96)],
)
def test_classes(age, level, expected):
    assert v_peak_ml_kg_min(age, level) == pytest.approx(expected, rel=1e-3)


def test_man_and_woman_where_sex_is_known():
    assert v_peak_ml_kg_min(40, "usual", 82.0, 177.0, 1) == pytest.approx(33.70, rel=1e-3)
    assert v_peak_ml_kg_min(40, "usual", 68.0, 163.0, 2) == pytest.approx(25.19, rel=1e-3)


def test_handbook_man():
    assert v_peak_ml_kg_min(35, "strong", 75.0, 175.0, 1) == pytest.approx(45.77, rel=1e-3)


def test_friend_falls_with_age_as_published():
    """70 over 40 years at 75 kg, 170 cm: 0.6969."""
    ratio = friend_bike_ml_kg_min(70, 1.5, 75.0, 170.0) / friend_bike_ml_kg_min(40, 1.5, 75.0, 170.0)
    assert ratio == pytest.approx(0.6969, rel=1e-3)


def test_young_people():
    assert v_peak_ml_kg_min(12, "strong") == v_peak_ml_kg_min(15.9, "light") == 40.0
    assert v_peak_ml_kg_min(17, "strong") == v_peak_ml_kg_min(17, "light")
    assert v_peak_ml_kg_min(17) == pytest.approx(0.68 * float(friend_bike_ml_kg_min(17, 1.5, 75.0, 170.0)))


def test_defaults_of_the_age_classes():
    assert (default_mass_kg(15), default_mass_kg(16), default_mass_kg(65)) == (48.0, 75.0, 72.0)
    assert (default_height_cm(15), default_height_cm(16), default_height_cm(65)) == (158.0, 170.0, 167.0)


def test_arms_reach_about_two_thirds():
    """Larsen et al. 2016: mean 0.70 of the legs; 0.65 x 29.44 is near the 18.1 mean of Balady et al. 1990."""
    assert arm_ratio(59) == 0.65
    assert arm_ratio(60) == 0.70
    assert arm_ratio(40) * v_peak_ml_kg_min(40) == pytest.approx(18.1, rel=0.06)


@given(age=st.integers(18, 84), mass=st.floats(45.0, 110.0), level=st.sampled_from(["light", "usual", "strong"]))
def test_capacity_never_rises_with_age(age, mass, level):
    assert v_peak_ml_kg_min(age + 1, level, mass, 170.0) <= v_peak_ml_kg_min(age, level, mass, 170.0)


def test_ages_beyond_the_regression_are_held():
    assert np.array_equal(
        friend_bike_ml_kg_min([85, 90, 100], 1.5, 75.0, 170.0), np.full(3, friend_bike_ml_kg_min(85, 1.5, 75.0, 170.0))
    )
