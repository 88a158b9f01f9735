"""Axes hold their figures on round ends with few ticks; curves are thinned."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.ui.charts.chart_data import MOST_POINTS, axis_over, clock_axis, minutes_axis, nice_step, thinned

numbers = st.floats(-1e6, 1e6, allow_nan=False)


@given(st.lists(numbers, min_size=1, max_size=40), st.booleans())
def test_axis_holds_every_value_with_few_ticks(values, from_zero):
    axis = axis_over(np.array(values), "Wh", from_zero=from_zero)
    slack = 1e-6 * max(1.0, axis.high - axis.low)
    assert axis.low <= min(values) + slack
    assert axis.high >= max(values) - slack
    assert 2 <= len(axis.ticks) <= 9
    places = [value for value, _text in axis.ticks]
    assert all(after > before for before, after in itertools.pairwise(places))


def test_axis_leaves_out_failed_points():
    axis = axis_over(np.array([np.nan, 2.0, np.inf, 4.0]), "W")
    assert (axis.low, axis.high) == (0.0, 4.0)


def test_axis_of_nothing_is_still_an_axis():
    axis = axis_over(np.array([np.nan]), "W")
    assert axis.high > axis.low


@given(st.floats(1e-6, 1e9), st.integers(1, 8))
def test_step_is_one_two_or_five(span, parts):
    step = nice_step(span, parts)
    lead = step / 10.0 ** np.floor(np.log10(step) + 1e-9)
    assert min(abs(lead - good) for good in (1.0, 2.0, 5.0, 10.0)) < 1e-6
    assert span / step <= parts * 1.01


@pytest.mark.parametrize(
    ("most", "first"), [(12.0, "2 min"), (90.0, "15 min"), (145.0, "0.5 h"), (600.0, "2 h"), (0.0, "1 min")]
)
def test_turning_time_reads_as_minutes_then_hours(most, first):
    axis = minutes_axis(most, "")
    assert axis.ticks[0] == (0.0, "0")
    assert axis.ticks[1][1] == first
    assert axis.ticks[-1][0] <= axis.high + 1e-9
    assert len(axis.ticks) <= 9


def test_clock_runs_over_the_whole_day():
    assert clock_axis("").ticks[-1] == (24.0, "24:00")


@given(st.integers(1, 5000))
def test_thinned_keeps_ends_and_order(count):
    values = np.arange(count, dtype=float)
    kept = thinned(values)
    assert len(kept) <= MOST_POINTS
    assert (kept[0], kept[-1]) == (values[0], values[-1])
    assert (np.diff(kept) > 0).all()
