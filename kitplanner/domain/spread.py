"""Ranges from a fixed sample: evenly spread points instead of random ones, so that an answer never flickers.

A spread is a relative standard deviation (0.35 = 35 %). Factors around a central value are lognormal with
median 1: watts and energies are never negative, and the central run is the middle of the sample.
"""

from __future__ import annotations

from functools import lru_cache
from statistics import NormalDist

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
DEFAULT_POINTS = 256
P10_P50_P90 = (0.10, 0.50, 0.90)


def _growth_number(dims: int) -> float:
    """Positive root of x**(dims + 1) = x + 1 by fixed-point iteration (1: golden, 2: plastic number)."""
    x = 1.5
    for _ in range(80):
        x = float((1.0 + x) ** (1.0 / (dims + 1)))
    return x


def quasi_uniform(n: int, dims: int) -> FloatArray:
    """Points that fill the unit cube evenly (additive recurrence).

    u_ik = frac(1/2 + i g^-k), g the positive root of x^(d+1) = x + 1

    Parameters
    ----------
    n : int
        Number of points [-].
    dims : int
        Number of dimensions [-].

    Returns
    -------
    ndarray
        Points strictly inside (0, 1), shape (n, dims) [-].

    References
    ----------
    Kronecker (Weyl) sequence with the generalised golden ratio: Roberts M., "The unreasonable effectiveness of
    quasirandom sequences", 2018; Niederreiter H., Random Number Generation and Quasi-Monte Carlo Methods, 1992.

    Examples
    --------
    >>> quasi_uniform(3, 1)[:, 0].round(4).tolist()
    [0.118, 0.7361, 0.3541]
    """
    steps = _growth_number(dims) ** -np.arange(1.0, dims + 1.0)
    points = np.mod(0.5 + np.arange(1.0, n + 1.0)[:, None] * steps, 1.0)
    return np.asarray(np.clip(points, 1e-9, 1.0 - 1e-9))


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
    >>> bool(abs(points.mean()) < 0.01), bool(abs(points.std() - 1.0) < 0.02)
    (True, True)
    """
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
