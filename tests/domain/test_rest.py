"""Rest after work against Murrell's equation and a direct balance."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.capacity import v_peak_ml_kg_min
from kitplanner.domain.rest import (
    acceptable_kcal_min,
    murrell_rest_after_bout_min,
    murrell_rest_min,
    oxygen_day_min,
)


def test_murrell_worked_values():
    """Murrell 1965, 60 min at rest rate 1.5: K 6 and 10 with S 4; 75 W pedalling with S 5; an average adult."""
    assert murrell_rest_min(60.0, [6.0, 10.0], 4.0) == pytest.approx([26.67, 42.35], rel=1e-3)
    assert murrell_rest_min(60.0, 6.675, 5.0) == pytest.approx(19.42, rel=1e-3)
    assert murrell_rest_min(60.0, 6.151, 3.643) == pytest.approx(32.35, rel=1e-3)


def test_variant_of_teaching_notes():
    """S 5.33, rest 1.33, K 7: 29.45 % of the whole time."""
    assert murrell_rest_min(100.0, 7.0, 5.33, 1.33) == pytest.approx(29.45, rel=1e-3)


@given(work=st.floats(1.6, 20.0), acceptable=st.floats(1.6, 6.0), total=st.floats(1.0, 480.0))
def test_the_mean_over_work_and_rest_is_acceptable(work, acceptable, total):
    rest = float(murrell_rest_min(total, work, acceptable))
    mean = (work * (total - rest) + 1.5 * rest) / total
    assert mean == pytest.approx(min(work, acceptable))


@given(work=st.floats(1.6, 20.0), acceptable=st.floats(1.6, 6.0), bout=st.floats(1.0, 120.0))
def test_rest_after_a_bout_is_the_same_balance(work, acceptable, bout):
    rest = float(murrell_rest_after_bout_min(bout, work, acceptable))
    assert float(murrell_rest_min(bout + rest, work, acceptable)) == pytest.approx(rest, rel=1e-6, abs=1e-6)


def test_easy_work_needs_no_rest():
    assert murrell_rest_min(60.0, 4.0, 4.0) == 0.0
    assert murrell_rest_min(60.0, 1.0, 4.0) == 0.0
    # Work at the rate of rest: no division by zero.
    assert murrell_rest_min(60.0, 1.5, 1.0) == 0.0
    assert murrell_rest_after_bout_min(20.0, 3.0, 4.0) == 0.0


def test_rest_never_exceeds_the_time():
    assert murrell_rest_min(60.0, 10.0, 0.5) == 60.0
    assert np.isinf(murrell_rest_after_bout_min(20.0, 6.0, 1.5))


@pytest.mark.parametrize(
    ("age", "level", "mass", "expected"),
    [
        (13, "usual", 48.0, 3.168),
        (40, "light", 75.0, 2.915),
        (40, "usual", 75.0, 3.644),
        (40, "strong", 75.0, 4.544),
        (70, "usual", 72.0, 2.457),
        (45, "usual", 75.0, 3.460),
    ],
)
def test_personal_acceptable_rate(age, level, mass, expected):
    """A third of capacity (NIOSH, Waters et al. 1993), at most Murrell's 5 kcal/min."""
    assert acceptable_kcal_min(v_peak_ml_kg_min(age, level), mass) == pytest.approx(expected, rel=1e-3)
    assert acceptable_kcal_min(60.0, 90.0) == 5.0


def test_oxygen_over_a_day():
    """Average adult: 192.2 min on legs at 65.3 W; arms at 24.9 W are not bound by oxygen within 8 h."""
    assert oxygen_day_min(29.44, 16.40) == pytest.approx(192.2, rel=1e-3)
    assert oxygen_day_min(29.44, 9.596) == 480.0
    assert oxygen_day_min(12.0, 16.0) == 0.0
