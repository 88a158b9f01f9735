"""Bracketed roots and peaks of many one-dimensional functions at once.

Every step works on whole arrays; a root never leaves its bracket, so kinks (a regulator entering dropout,
one limit taking over from another) slow it down but cannot lead it astray.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
BoolArray = npt.NDArray[np.bool_]
IntArray = npt.NDArray[np.intp]
# The function of the points with the given indices; None stands for all of them.
IndexedFunction = Callable[[FloatArray, IntArray | None], FloatArray]

_EPS = float(np.finfo(np.float64).eps)
_FIRST_PASS = 4
# Function values this small are rounding of quantities of about one.
_SMALLEST = 1e-15
_MOST_STEPS = 120
_GOLDEN = (5.0**0.5 - 1.0) / 2.0


def bracketed_roots(
    function: IndexedFunction, low: FloatArray, high: FloatArray, f_low: FloatArray, f_high: FloatArray
) -> FloatArray:
    """Roots between `low` and `high`, where the function changes sign (Chandrupatla's method).

    Inverse quadratic interpolation where the last three points allow it, bisection elsewhere, after a first
    straight line. After a few steps only the points that are not done yet are evaluated again.

    Parameters
    ----------
    function : callable
        Function of positions (n,) and indices of the points they belong to.
    low, high : array
        Brackets, shape (n,).
    f_low, f_high : array
        Function at the brackets; their signs differ or one is zero.

    Returns
    -------
    array
        Roots, shape (n,).

    References
    ----------
    Chandrupatla, A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear function without
    using derivatives, Advances in Engineering Software 28 (1997) 145-149.

    Examples
    --------
    >>> two, three = np.array([2.0, 3.0]), np.array([3.0, 3.0])
    >>> roots = bracketed_roots(lambda x, at: x * x - (two if at is None else two[at]), 0 * two, three, -two, 9 - two)
    >>> roots.round(12).tolist()
    [1.414213562373, 1.732050807569]
    """
    found = np.empty_like(low)
    points: IntArray | None = None
    x1, x2, f1, f2 = high, low, f_high, f_low
    x3, f3 = x1, f1
    # The first look is where a straight line through the bracket's ends crosses zero.
    t = np.clip(f_high / np.where(f_high == f_low, np.inf, f_high - f_low), 0.01, 0.99)
    for step in range(_MOST_STEPS):
        x = x1 + t * (x2 - x1)
        f = function(x, points)
        same = np.signbit(f) == np.signbit(f1)
        x3, f3 = np.where(same, x1, x2), np.where(same, f1, f2)
        x2, f2 = np.where(same, x2, x1), np.where(same, f2, f1)
        x1, f1 = x, f
        better = np.abs(f1) < np.abs(f2)
        best = np.where(better, x1, x2)
        width = np.abs(x2 - x1)
        tolerance = 2.0 * _EPS * np.abs(best) + 1e-300
        done = (width <= 2.0 * tolerance) | (np.abs(f1) <= _SMALLEST)
        if done.all() or step == _MOST_STEPS - 1:
            _store(found, points, best)
            break
        if step >= _FIRST_PASS and done.any():
            _store(found, points, best)
            keep = np.flatnonzero(~done)
            points = keep if points is None else points[keep]
            x1, x2, x3, f1, f2, f3, width, tolerance = (
                values[keep] for values in (x1, x2, x3, f1, f2, f3, width, tolerance)
            )
        t = _next_fraction((x1, x2, x3), (f1, f2, f3), tolerance / np.maximum(width, 1e-300))
    return found


def _store(found: FloatArray, points: IntArray | None, values: FloatArray) -> None:
    if points is None:
        found[:] = values
    else:
        found[points] = values


def _next_fraction(
    x: tuple[FloatArray, FloatArray, FloatArray], f: tuple[FloatArray, FloatArray, FloatArray], least: FloatArray
) -> FloatArray:
    """Where in the bracket to look next, as a fraction of it from the newest point."""
    (x1, x2, x3), (f1, f2, f3) = x, f
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        xi = (x1 - x2) / (x3 - x2)
        f32, f21, f31 = f3 - f2, f2 - f1, f3 - f1
        phi = -f21 / f32
        smooth = (phi * phi < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
        inner = f1 / f21 * (f3 / -f32) + (x3 - x1) / (x2 - x1) * (f1 / f31) * (f2 / f32)
    t = np.where(smooth, inner, 0.5)
    bound = np.minimum(least, 0.5)
    return np.minimum(np.maximum(t, bound), 1.0 - bound)


def peaks(
    function: Callable[[FloatArray], FloatArray], low: FloatArray, high: FloatArray, steps: int = 48
) -> FloatArray:
    """Position of the one peak between `low` and `high` (golden section).

    Parameters
    ----------
    function : callable
        Function of positions (n,), with one peak in each bracket.
    low, high : array
        Brackets, shape (n,).
    steps : int
        Steps; each shrinks the brackets to 0.618 of their width.

    Returns
    -------
    array
        Positions of the peaks, shape (n,).

    References
    ----------
    Kiefer, Sequential minimax search for a maximum, Proceedings of the AMS 4 (1953) 502-506.

    Examples
    --------
    >>> peaks(lambda x: 3.0 - (x - 0.7) ** 2, np.array([0.0]), np.array([2.0])).round(6).tolist()
    [0.7]
    """
    left, right = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
    f_left, f_right = function(left), function(right)
    for _ in range(steps):
        go_left = f_left >= f_right
        low, high = np.where(go_left, low, left), np.where(go_left, right, high)
        x = np.where(go_left, high - _GOLDEN * (high - low), low + _GOLDEN * (high - low))
        f = function(x)
        left, right = np.where(go_left, x, right), np.where(go_left, left, x)
        f_left, f_right = np.where(go_left, f, f_right), np.where(go_left, f_left, f)
    return np.where(f_left >= f_right, left, right)
