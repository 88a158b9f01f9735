"""Ranges from a fixed sample: evenly spread points instead of random ones, so that an answer never flickers.

A spread is a relative standard deviation (0.35 = 35 %). Factors around a central value are lognormal with
median 1: watts and energies are never negative, and the central run is the middle of the sample.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
DEFAULT_POINTS = 256
_PRIMES = (2, 3, 5, 7, 11, 13, 17, 19)
P10_P50_P90 = (0.10, 0.50, 0.90)


def quasi_uniform(n: int, dims: int) -> FloatArray:
    """Points that fill the unit cube evenly (Halton sequence).

    The number of a point, written in base b, mirrored at the point: 1, 2, 3, ... -> 1/2, 1/4, 3/4, ... for b = 2

    Parameters
    ----------
    n : int
        Number of points [-].
    dims : int
        Number of dimensions, at most 8: one prime base each [-].

    Returns
    -------
    ndarray
        Points strictly inside (0, 1), shape (n, dims) [-].

    References
    ----------
    Halton J. H., Numerische Mathematik 2 (1960) 84-90. At 256 points in 4 dimensions the greatest correlation between
    two coordinates is 0.03; additive recurrences reach 0.07 (square roots of primes) and 0.22 (powers of one number).

    Examples
    --------
    >>> quasi_uniform(4, 2).round(4).tolist()
    [[0.5, 0.3333], [0.25, 0.6667], [0.75, 0.1111], [0.125, 0.4444]]
    """
    if not 1 <= dims <= len(_PRIMES):
        raise ValueError(f"a sample has 1 to {len(_PRIMES)} dimensions, not {dims}")
    return np.stack([_mirrored(n, base) for base in _PRIMES[:dims]], axis=1)


def _mirrored(n: int, base: int) -> FloatArray:
    """First n numbers with their digits in a base mirrored at the point."""
    left = np.arange(1, n + 1)
    result, weight = np.zeros(n), 1.0
    while np.any(left > 0):
        weight /= base
        result += weight * (left % base)
        left //= base
    return result


@lru_cache(maxsize=32)
def quasi_normal(n: int = DEFAULT_POINTS, dims: int = 1) -> FloatArray:
    """Fixed standard-normal points, each dimension its own; read-only, the same at every call.

    z = Phi^-1(u), u from `quasi_uniform`

    Parameters
    ----------
    n : int
        Number of points [-].
    dims : int
        Number of dimensions [-].

    Returns
    -------
    ndarray
        Points, shape (n, dims) [-].

    References
    ----------
    Inverse normal distribution: Wichura M. J., Algorithm AS 241, Applied Statistics 37 (1988) 477-484.

    Examples
    --------
    >>> points = quasi_normal(256, 2)
    >>> bool(abs(points.mean()) < 0.05), bool(abs(points.std() - 1.0) < 0.05)
    (True, True)
    """
    # Loads late: it brings decimals and fractions along, and nothing at the start of the window samples.
    from statistics import NormalDist

    normal = NormalDist()
    flat = [normal.inv_cdf(float(u)) for u in quasi_uniform(n, dims).ravel()]
    points = np.array(flat).reshape(n, dims)
    points.setflags(write=False)
    return points


def lognormal_factors(spread_fraction: npt.ArrayLike, normals: npt.ArrayLike) -> FloatArray:
    """Factors with median 1 and a given relative standard deviation.

    k = exp(sigma z), sigma^2 = ln(1 + cv^2)

    Parameters
    ----------
    spread_fraction : array_like
        Relative standard deviation, cv [-].
    normals : array_like
        Standard-normal points; broadcasts with `spread_fraction` [-].

    Returns
    -------
    ndarray
        Factors above 0 [-].

    References
    ----------
    Lognormal distribution, any statistics handbook (cv^2 = exp(sigma^2) - 1).

    Examples
    --------
    >>> lognormal_factors(0.4, [-1.2816, 0.0, 1.2816]).round(3).tolist()
    [0.61, 1.0, 1.638]
    """
    cv = np.asarray(spread_fraction, dtype=float)
    return np.asarray(np.exp(np.sqrt(np.log1p(cv * cv)) * np.asarray(normals, dtype=float)))


def percentiles(samples: npt.ArrayLike, axis: int = -1) -> tuple[FloatArray, FloatArray, FloatArray]:
    """10th, 50th and 90th percentile along one axis; infinite samples sort to the end.

    Parameters
    ----------
    samples : array_like
        Values of the sample.
    axis : int
        The axis that runs over the sample.

    Returns
    -------
    tuple of ndarray
        P10, P50 and P90, in the samples' unit.

    References
    ----------
    Hyndman R. J., Fan Y., The American Statistician 50 (1996) 361-365, definition 1 (no blending of neighbours,
    which would be undefined beside an infinite sample).

    Examples
    --------
    >>> [float(p) for p in percentiles([1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0, float("inf")])]
    [1.0, 5.0, 9.0]
    """
    cut = np.quantile(np.asarray(samples, dtype=float), P10_P50_P90, axis=axis, method="inverted_cdf")
    return np.asarray(cut[0]), np.asarray(cut[1]), np.asarray(cut[2])


def combined_spread(*spread_fractions: float) -> float:
    """Spread of a product of independent factors.

    cv = sqrt(sum cv_i^2)

    Parameters
    ----------
    *spread_fractions : float
        Relative standard deviations [-].

    Returns
    -------
    float
        Relative standard deviation of the product [-].

    References
    ----------
    Root sum of squares: JCGM 100:2008 (GUM), 5.1.

    Examples
    --------
    >>> combined_spread(0.3, 0.4)
    0.5
    """
    return float(np.sqrt(np.sum(np.square(spread_fractions))))


def group_spread(spread_fractions: npt.ArrayLike, means: npt.ArrayLike) -> float:
    """Relative spread of the sum of independent amounts: single people's errors average out.

    cv = sqrt(sum (cv_i m_i)^2)/sum m_i

    Parameters
    ----------
    spread_fractions : array_like
        Relative standard deviation of each amount [-].
    means : array_like
        The amounts, at least one above 0.

    Returns
    -------
    float
        Relative standard deviation of the sum [-].

    References
    ----------
    Sum of independent variances: JCGM 100:2008 (GUM), 5.1.

    Examples
    --------
    >>> round(group_spread([0.4] * 16, [1.0] * 16), 3)
    0.1
    """
    m = np.asarray(means, dtype=float)
    total = float(np.sum(m))
    if total <= 0.0:
        return 0.0
    return float(np.sqrt(np.sum(np.square(np.asarray(spread_fractions, dtype=float) * m))) / total)
