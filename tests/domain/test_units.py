"""Conversions against exact definitions (SI brochure, NIST Special Publication 811)."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain import units


def test_exact_factors_of_nist_sp_811() -> None:
    assert units.kg_from_lb(1.0) == 0.45359237
    assert units.in_from_cm(2.54) == 1.0
    assert units.M_PER_FT == 0.3048
    assert units.j_from_wh(1.0) == 3600.0
    assert units.J_PER_KCAL == 4184.0
    assert units.kelvin_from_degc(0.0) == 273.15


def test_phone_battery_of_4000_mah_at_nominal_volts() -> None:
    """4000 mAh x 3.85 V = 15.40 Wh, arithmetic on a phone's label."""
    assert units.wh_from_mah(4000.0, 3.85) == pytest.approx(15.40)


def test_one_turn_a_second_is_two_pi() -> None:
    assert units.rad_s_from_rpm(60.0) == pytest.approx(2.0 * math.pi, rel=1e-15)


def test_arrays_convert_element_by_element() -> None:
    rpm = np.array([0.0, 60.0, 120.0])
    assert np.asarray(units.rpm_from_rad_s(units.rad_s_from_rpm(rpm))) == pytest.approx(rpm)


@given(st.floats(1e-6, 1e6))
def test_pairs_of_conversions_undo_each_other(value: float) -> None:
    assert units.lb_from_kg(units.kg_from_lb(value)) == pytest.approx(value)
    assert units.wh_from_j(units.j_from_wh(value)) == pytest.approx(value)
    assert units.hours_from_minutes(units.minutes_from_hours(value)) == pytest.approx(value)
    assert units.mah_from_wh(units.wh_from_mah(value, 3.7), 3.7) == pytest.approx(value)
    assert units.minutes_per_wh(value) * value == pytest.approx(60.0)


@given(st.integers(0, 1440))
def test_clock_times_undo_each_other(minutes: int) -> None:
    assert units.minutes_of_day(units.clock(minutes)) == minutes


@pytest.mark.parametrize("text", ["24:01", "7:30", "07:60", "0730", "-1:30", "07:3a", "", "\u0661\u0662:30"])
def test_what_is_no_clock_time_is_refused(text: str) -> None:
    with pytest.raises(ValueError, match="is not a clock time; write it as HH:MM"):
        units.minutes_of_day(text)


@pytest.mark.parametrize("minutes", [-1.0, 1441.0])
def test_minutes_outside_the_day_are_refused(minutes: float) -> None:
    with pytest.raises(ValueError, match="outside the day"):
        units.clock(minutes)
