"""Array roots and peaks against scipy, with kinks and steps."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from kitplanner.domain.roots import FloatArray, IntArray, bracketed_roots, peaks

SHIFTS = np.linspace(0.05, 0.95, 400)


def kinked(x: FloatArray, shift: FloatArray) -> FloatArray:
    return np.maximum(np.expm1(3.0 * (x - shift)), np.minimum(20.0 * (x - 0.5), 0.3) - shift)


def test_roots_of_a_kinked_function_agree_with_brentq() -> None:
    """scipy.optimize.brentq as the independent solver."""

    def function(x: FloatArray, points: IntArray | None) -> FloatArray:
        return kinked(x, SHIFTS if points is None else SHIFTS[points])

    low, high = np.zeros_like(SHIFTS), np.full_like(SHIFTS, 2.0)
    found = bracketed_roots(function, low, high, function(low, None), function(high, None))
    for root, shift in zip(found, SHIFTS, strict=True):
        one = brentq(lambda x, s=shift: float(kinked(np.array(x), np.array(s))), 0.0, 2.0, xtol=1e-15, rtol=8.9e-16)
        assert root == pytest.approx(one, rel=1e-13)


@given(st.floats(-50.0, 50.0), st.floats(1e-3, 1e3), st.integers(1, 9))
def test_a_root_never_leaves_its_bracket(centre: float, width: float, power: int) -> None:
    low, high = np.array([centre - width]), np.array([centre + 2.0 * width])

    def function(x: FloatArray, points: IntArray | None) -> FloatArray:
        assert points is None or points.tolist() == [0]
        assert (low <= x).all()
        assert (x <= high).all()
        scaled = (x - centre) / width
        return np.sign(scaled) * np.abs(scaled) ** (1.0 / power)

    root = bracketed_roots(function, low, high, function(low, None), function(high, None))
    assert root[0] == pytest.approx(centre, abs=1e-12 * (width + abs(centre)))


def test_a_step_is_found_to_the_last_digit() -> None:
    def function(x: FloatArray, _: IntArray | None) -> FloatArray:
        return np.where(x < 0.3, -1.0, 1.0)

    low, high = np.array([0.0]), np.array([1.0])
    assert bracketed_roots(function, low, high, -np.ones(1), np.ones(1))[0] == pytest.approx(0.3, rel=1e-15)


def test_ends_of_the_bracket_may_be_the_root() -> None:
    def function(x: FloatArray, _: IntArray | None) -> FloatArray:
        return x * x - 1.0

    roots = bracketed_roots(
        function, np.array([0.0, 1.0]), np.array([1.0, 3.0]), np.array([-1.0, 0.0]), np.array([0.0, 8.0])
    )
    assert roots == pytest.approx(1.0, rel=1e-12)


@given(st.floats(0.1, 9.9))
def test_peaks_of_a_skew_hill(position: float) -> None:
    found = peaks(lambda x: x / position * np.exp(1.0 - x / position), np.array([0.0]), np.array([10.0]))
    assert found[0] == pytest.approx(position, rel=1e-6)
