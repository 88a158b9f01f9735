"""How far a person's watts may lie from the estimate: percentiles, spread, and what a self-test teaches."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
_MINUTES = np.log10(np.array([5.0, 15.0, 30.0, 60.0, 240.0]))
# Shares of the median at those minutes, pedalling average adult; from a Monte Carlo run over the uncertainty of
# capacity (18 %, FRIEND's SEE), kept-up share (12 %), slope (8 %) and intercept (10 %), the last three judgements.
_P20 = np.array([0.737, 0.716, 0.699, 0.665, 0.548])
_P10 = np.array([0.62, 0.59, 0.56, 0.52, 0.33])
_P90 = np.array([1.51, 1.55, 1.59, 1.64, 1.88])
_SPREAD = np.array([0.35, 0.35, 0.40, 0.45, 0.60])
EXTRA_SPREAD = 0.10
EXTRA_SPREAD_UNDER_AGE, EXTRA_SPREAD_FROM_AGE = 16, 65

SELF_TEST_MIN = 15.0
SELF_TEST_SPREAD = 0.12
SELF_TEST_PRIOR_SPREAD = 0.37
SELF_TEST_LOW, SELF_TEST_HIGH = 0.4, 1.8
# A person's own sustained watts, or a self-test carried to other durations: the test's 0.12, and the day, meal and
# sleep on top. Judgement, no source.
MEASURED_SPREAD = 0.15


def _at_minutes(t_min: npt.ArrayLike, values: FloatArray) -> FloatArray:
    """Value at a duration on the logarithm's straight lines, held at the ends."""
    log_t = np.log10(np.maximum(np.asarray(t_min, dtype=float), 1e-9))
    return np.asarray(np.interp(log_t, _MINUTES, values))


def dependable_fraction(t_min: npt.ArrayLike) -> FloatArray:
    """Share of the typical watts that four of five such people reach (P20 over P50).

    Parameters
    ----------
    t_min : array_like
        Effective duration, held at 5 and 240 min [min].

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    Monte Carlo run over the inputs' uncertainty, n 40 000, see the module's constants.

    Examples
    --------
    >>> round(float(dependable_fraction(60.0)), 3)
    0.665
    """
    return _at_minutes(t_min, _P20)


def p10_fraction(t_min: npt.ArrayLike) -> FloatArray:
    """Share of the typical watts that nine of ten such people reach (P10 over P50).

    Parameters
    ----------
    t_min : array_like
        Effective duration, held at 5 and 240 min [min].

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    As `dependable_fraction`; used for every level until measured.

    Examples
    --------
    >>> float(p10_fraction(30.0))
    0.56
    """
    return _at_minutes(t_min, _P10)


def p90_fraction(t_min: npt.ArrayLike) -> FloatArray:
    """Share of the typical watts that one of ten such people reaches (P90 over P50).

    Parameters
    ----------
    t_min : array_like
        Effective duration, held at 5 and 240 min [min].

    Returns
    -------
    ndarray
        Share, above 1 [-].

    References
    ----------
    As `dependable_fraction`; used for every level until measured.

    Examples
    --------
    >>> float(p90_fraction(30.0))
    1.59
    """
    return _at_minutes(t_min, _P90)


def estimate_spread(t_min: npt.ArrayLike, age: float) -> FloatArray:
    """Relative spread of the watts of one person known by age and effort level only.

    0.35 to 15 min, 0.40 at 30, 0.45 at 60, 0.60 at 240 min; 0.10 more under 16 and from 65 years

    Parameters
    ----------
    t_min : array_like
        Effective duration [min].
    age : float
        Age [years].

    Returns
    -------
    ndarray
        Relative standard deviation [-].

    References
    ----------
    As `dependable_fraction`, rounded; the extra is a judgement.

    Examples
    --------
    >>> round(float(estimate_spread(30.0, 40)), 3), round(float(estimate_spread(10.0, 70)), 3)
    (0.4, 0.45)
    """
    unusual = age < EXTRA_SPREAD_UNDER_AGE or age >= EXTRA_SPREAD_FROM_AGE
    return np.asarray(_at_minutes(t_min, _SPREAD) + (EXTRA_SPREAD if unusual else 0.0))


def self_test_weight(prior_spread: float = SELF_TEST_PRIOR_SPREAD, test_spread: float = SELF_TEST_SPREAD) -> float:
    """Weight of a self-test against the estimate.

    w = cv_prior^2/(cv_prior^2 + cv_test^2)

    Parameters
    ----------
    prior_spread : float
        Relative spread of the estimate [-].
    test_spread : float
        Relative spread of the test [-].

    Returns
    -------
    float
        Weight [-].

    References
    ----------
    Normal prior and normal likelihood on the logarithm (Gelman A. et al., Bayesian Data Analysis, 2.5).

    Examples
    --------
    >>> round(self_test_weight(), 4)
    0.9048
    """
    return prior_spread**2 / (prior_spread**2 + test_spread**2)


def self_test_factor(test_w: npt.ArrayLike, model_w: npt.ArrayLike, weight: float | None = None) -> FloatArray:
    """Factor on a person's estimated watts after a 15-minute self-test.

    ln k = w (ln P_test - ln P_model), k kept between 0.4 and 1.8

    Parameters
    ----------
    test_w : array_like
        Mean power of the test at a pace at which talking is comfortable [W].
    model_w : array_like
        Estimate for 15 minutes, above 0 [W].
    weight : float, optional
        Weight of the test; None takes `self_test_weight()` [-].

    Returns
    -------
    ndarray
        Factor [-].

    References
    ----------
    As `self_test_weight`; the limits are a judgement.

    Examples
    --------
    >>> round(28.9 * float(self_test_factor(20.0, 28.9)), 2)
    20.71
    """
    w = self_test_weight() if weight is None else weight
    ratio = np.maximum(np.asarray(test_w, dtype=float), 1e-9) / np.asarray(model_w, dtype=float)
    return np.asarray(np.clip(ratio**w, SELF_TEST_LOW, SELF_TEST_HIGH))
