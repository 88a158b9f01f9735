"""Cadence, handle force and hand activity against their published values."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.hand_load import (
    ARM_BEST_RPM,
    ARM_PACE_LOSS,
    DEFAULT_RADIUS_M,
    OLDER_LEG_BEST_RPM,
    Pace,
    cadence_factor,
    hand_activity_level,
    handle_torque_nm,
    p_crank_cap_w,
    pace_of,
    peak_force_limits,
)


def test_cadence_of_the_legs():
    """Gross efficiency 22.8 % at 80 and 21.3 % at 100 rpm (J Sports Sci Med 13, 2014, 114): the ratio to 1 %."""
    assert cadence_factor([40.0, 60.0, 80.0, 100.0]) == pytest.approx([0.9789, 1.0, 0.9789, 0.9156], rel=1e-3)
    assert float(cadence_factor(100.0) / cadence_factor(80.0)) == pytest.approx(21.3 / 22.8, rel=0.01)


@given(rpm=st.floats(0.0, 300.0), best=st.sampled_from([60.0, OLDER_LEG_BEST_RPM, ARM_BEST_RPM]))
def test_cadence_never_helps_or_turns_negative(rpm, best):
    assert 0.0 <= float(cadence_factor(rpm, best, ARM_PACE_LOSS)) <= 1.0


def test_cadence_is_held_outside_its_domain():
    assert cadence_factor(10.0) == cadence_factor(25.0)
    assert cadence_factor(200.0) == cadence_factor(110.0)


def test_force_cap():
    """P = 2 pi r F n/60 with 30 N: 0.10 m at 60 rpm, 0.06 m at 90 rpm, 0.15 m at 60 rpm."""
    assert p_crank_cap_w(0.10, 60.0) == pytest.approx(18.85, rel=1e-3)
    assert p_crank_cap_w(0.06, 90.0) == pytest.approx(16.96, rel=1e-3)
    assert p_crank_cap_w(DEFAULT_RADIUS_M, 60.0) == pytest.approx(28.3, rel=1e-3)


def test_crank_identity():
    """r 0.10 m, 32 N, 60 rpm -> 20.11 W; 18.85 W at r 0.06 m and 100 rpm needs 30 N."""
    assert p_crank_cap_w(0.10, 60.0, 32.0) == pytest.approx(20.11, rel=1e-3)
    assert p_crank_cap_w(0.06, 100.0) == pytest.approx(18.85, rel=1e-3)


@given(radius=st.floats(0.03, 0.3), rpm=st.floats(20.0, 150.0), force=st.floats(5.0, 60.0))
def test_torque_times_speed_is_the_cap(radius, rpm, force):
    speed = 2.0 * np.pi * rpm / 60.0
    assert float(p_crank_cap_w(radius, rpm, force)) == pytest.approx(float(handle_torque_nm(radius, force)) * speed)


def test_hand_activity():
    """Radwin et al. 2015: one exertion a second at 80 % duty; 45 rpm at 60 %; with the ACGIH lines."""
    assert hand_activity_level(1.0, 80.0) == pytest.approx(6.877, rel=1e-3)
    assert hand_activity_level(0.75, 60.0) == pytest.approx(5.791, rel=1e-3)
    assert peak_force_limits(6.877) == pytest.approx((1.749, 2.436), rel=1e-3)
    assert peak_force_limits(5.791) == pytest.approx((2.357, 3.283), rel=1e-3)


def test_hand_activity_at_its_ends():
    assert hand_activity_level(0.0, 80.0) == 0.0
    assert hand_activity_level(1.0, 0.0) == 0.0
    assert peak_force_limits(12.0) == (0.0, 0.0)


def test_pace_of_limbs_and_ages() -> None:
    """Sacchetti et al. 2010: older riders are most efficient nearer 50 rpm; from 65 years here."""
    assert [pace_of("legs", age).best_rpm for age in (40, 64, 65)] == [60.0, 60.0, 50.0]
    assert pace_of("arms", 70) == Pace(55.0, 0.20)
    assert float(cadence_factor(110.0, *dataclasses.astuple(Pace()))) == 1.0
