"""Rest that turning asks for, and how much of a day it may fill without tiring the whole body.

For arms the hand and shoulder limits bind first (`hand_load`, `age_limits`), not oxygen.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.domain.work_cost import kcal_per_min

FloatArray = npt.NDArray[np.float64]

REST_KCAL_MIN = 1.5
ACCEPTABLE_KCAL_MIN = 5.0
ACCEPTABLE_FRACTION = 0.33
OTHER_ACTIVITY_UPTAKE = 5.25  # mL/kg/min, 1.5 MET between turns
SHIFT_MIN = 480.0


def murrell_rest_min(
    total_min: npt.ArrayLike,
    work_kcal_min: npt.ArrayLike,
    acceptable_kcal_min: npt.ArrayLike,
    rest_kcal_min: float = REST_KCAL_MIN,
) -> FloatArray:
    """Rest within a time so that the mean energy rate stays acceptable.

    R = T (K - S)/(K - E_rest), 0 where K <= S, never above T

    Parameters
    ----------
    total_min : array_like
        Work and rest together [min].
    work_kcal_min : array_like
        Energy rate of the work, K [kcal/min].
    acceptable_kcal_min : array_like
        Acceptable mean, S [kcal/min].
    rest_kcal_min : float
        Energy rate at rest [kcal/min].

    Returns
    -------
    ndarray
        Rest [min].

    References
    ----------
    Murrell K. F. H., Ergonomics: Man in his Working Environment, 1965.

    Examples
    --------
    >>> [round(float(r), 2) for r in murrell_rest_min(60.0, [3.0, 6.0, 10.0], 4.0)]
    [0.0, 26.67, 42.35]
    """
    total, k, s = np.broadcast_arrays(
        np.asarray(total_min, dtype=float),
        np.asarray(work_kcal_min, dtype=float),
        np.asarray(acceptable_kcal_min, dtype=float),
    )
    over = (k > s) & (k > rest_kcal_min)
    share = np.divide(k - s, k - rest_kcal_min, out=np.zeros(k.shape), where=over)
    return np.asarray(np.clip(total * share, 0.0, total))


def murrell_rest_after_bout_min(
    bout_min: npt.ArrayLike, work_kcal_min: float, acceptable_kcal_min: float
) -> FloatArray:
    """Rest after a bout by the same balance; infinite where rest alone exceeds the acceptable mean.

    R = t_bout (K - S)/(S - E_rest)

    Parameters
    ----------
    bout_min : array_like
        Length of the bout [min].
    work_kcal_min : float
        Energy rate of the work, K [kcal/min].
    acceptable_kcal_min : float
        Acceptable mean, S [kcal/min].

    Returns
    -------
    ndarray
        Rest [min].

    References
    ----------
    As `murrell_rest_min`, solved for the work time.

    Examples
    --------
    >>> round(float(murrell_rest_after_bout_min(60.0 - 26.667, 6.0, 4.0)), 2)
    26.67
    """
    bout = np.asarray(bout_min, dtype=float)
    if work_kcal_min <= acceptable_kcal_min:
        return np.zeros_like(bout)
    if acceptable_kcal_min <= REST_KCAL_MIN:
        return np.full_like(bout, np.inf)
    return np.asarray(bout * (work_kcal_min - acceptable_kcal_min) / (acceptable_kcal_min - REST_KCAL_MIN))


def acceptable_kcal_min(v_peak: npt.ArrayLike, mass_kg: npt.ArrayLike) -> FloatArray:
    """Acceptable mean energy rate of one person over a day.

    S = min(5, 0.33 V_peak M 5/1000)

    Parameters
    ----------
    v_peak : array_like
        Peak oxygen uptake [mL/kg/min].
    mass_kg : array_like
        Body mass [kg].

    Returns
    -------
    ndarray
        Energy rate [kcal/min].

    References
    ----------
    A third of capacity over 8 h: Waters T. R. et al., Ergonomics 36 (1993) 749-776; 5 kcal/min: Murrell 1965.

    Examples
    --------
    >>> round(float(acceptable_kcal_min(29.44, 75.0)), 3)
    3.643
    """
    third = ACCEPTABLE_FRACTION * np.asarray(v_peak, dtype=float)
    return np.asarray(np.minimum(ACCEPTABLE_KCAL_MIN, kcal_per_min(third, mass_kg)))


def oxygen_day_min(v_peak: float, work_uptake: npt.ArrayLike) -> FloatArray:
    """Turning time of a day that keeps the 8-hour mean uptake at a third of the peak.

    T = 480 (0.33 V_peak - 5.25)/(V_work - 5.25), 0 to 480

    Parameters
    ----------
    v_peak : float
        Peak oxygen uptake [mL/kg/min].
    work_uptake : array_like
        Uptake while turning [mL/kg/min].

    Returns
    -------
    ndarray
        Time [min].

    References
    ----------
    As `acceptable_kcal_min`.

    Examples
    --------
    >>> round(float(oxygen_day_min(29.44, 16.40)), 1)
    192.2
    """
    above = np.maximum(np.asarray(work_uptake, dtype=float) - OTHER_ACTIVITY_UPTAKE, 1e-9)
    room = max(0.0, ACCEPTABLE_FRACTION * v_peak - OTHER_ACTIVITY_UPTAKE)
    return np.asarray(np.clip(SHIFT_MIN * room / above, 0.0, SHIFT_MIN))
