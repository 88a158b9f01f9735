"""Limits by age: every row, its boundaries, and the yardsticks they must stay below."""

from __future__ import annotations

import pytest

from kitplanner.domain.age_limits import limits_for_age


@pytest.mark.parametrize(
    ("ages", "bout", "rest", "cap", "pedal", "crank", "hours"),
    [
        ((0, 11), 0, 0, 0, False, False, (8.0, 19.0)),
        ((12, 12), 5, 60, 10, False, True, (8.0, 19.0)),
        ((13, 15), 15, 45, 30, True, True, (8.0, 19.0)),
        ((16, 17), 20, 40, 40, True, True, (7.0, 21.0)),
        ((18, 49), 20, 40, 60, True, True, (0.0, 24.0)),
        ((50, 59), 20, 40, 40, True, True, (0.0, 24.0)),
        ((60, 64), 15, 45, 30, True, True, (0.0, 24.0)),
        ((65, 79), 10, 60, 20, True, True, (0.0, 24.0)),
        ((80, 110), 0, 0, 0, False, False, (0.0, 24.0)),
    ],
)
def test_rows(ages, bout, rest, cap, pedal, crank, hours):
    for age in ages:
        limits = limits_for_age(age)
        assert (limits.bout_min, limits.rest_min, limits.cap_min) == (bout, rest, cap)
        assert (limits.may_pedal, limits.may_crank, limits.hours) == (pedal, crank, hours)


def test_minors_are_supervised():
    assert all(limits_for_age(age).supervised for age in range(18))
    assert not any(limits_for_age(age).supervised for age in range(18, 100))


@pytest.mark.parametrize("age", range(111))
def test_light_effort_halves_the_caps_and_nothing_else(age):
    full, light = limits_for_age(age), limits_for_age(age, light=True)
    assert light.bout_min == full.bout_min // 2
    assert light.cap_min == full.cap_min // 2
    assert (light.rest_min, light.may_pedal, light.may_crank, light.hours) == (
        full.rest_min,
        full.may_pedal,
        full.may_crank,
        full.hours,
    )


@pytest.mark.parametrize("age", range(111))
def test_below_every_yardstick(age):
    """NIOSH 50 % of capacity: at most 1 h a day; EU 94/33/EC: no child's work 20:00-06:00, light work at most 2 h."""
    limits = limits_for_age(age)
    assert limits.bout_min <= limits.cap_min <= 60
    assert limits.rest_min >= 2 * limits.bout_min
    if age < 18:
        assert limits.cap_min <= 120
        assert limits.hours[0] >= 6.0
        assert limits.hours[1] <= (20.0 if age < 16 else 22.0)


def test_a_child_just_under_twelve_is_not_counted():
    assert limits_for_age(11.99).cap_min == 0
    assert limits_for_age(79.9).cap_min == 20
