"""Pace and force at the handle: what cadence costs, and what a hand should hold over a long day."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from kitplanner.domain.capacity import OLDER_AGE
from kitplanner.domain.units import rad_s_from_rpm

FloatArray = npt.NDArray[np.float64]

# Mean handle force for more than half an hour a day: half of the force at which a power grip counts as forceful
# (Rempel D., Occupational and Environmental Medicine 75, 2018, Suppl 2:A258: 45 N), rounded up. Judgement.
HANDLE_FORCE_N = 30.0
LONG_DAY_MIN = 30.0
DEFAULT_RADIUS_M, POCKET_RADIUS_M = 0.15, 0.06
DEFAULT_CRANK_RPM, POCKET_CRANK_RPM = 60.0, 90.0

# Pace of least oxygen cost and the loss away from it. Legs: 22.8 % at 80 and 21.3 % at 100 rpm (Journal of Sports
# Science and Medicine 13, 2014, 114) fit k = 0.19; older riders peak near 50 rpm (Sacchetti et al. 2010);
# arms: judgement.
LEG_BEST_RPM, OLDER_LEG_BEST_RPM, ARM_BEST_RPM = 60.0, 50.0, 55.0
LEG_PACE_LOSS, ARM_PACE_LOSS = 0.19, 0.20
LEAST_RPM, MOST_RPM = 25.0, 110.0


@dataclass(frozen=True)
class Pace:
    """Cadence at which somebody turns with least effort [rpm], and the loss away from it [-]; 0: any pace alike."""

    best_rpm: float = LEG_BEST_RPM
    loss: float = 0.0


def pace_of(limb: Literal["legs", "arms"], age: float) -> Pace:
    """Pace of least effort of a limb at an age.

    Parameters
    ----------
    limb : str
        "legs" or "arms".
    age : float
        Age [years].

    Returns
    -------
    Pace
        Best cadence [rpm] and loss away from it [-].

    References
    ----------
    See the module's constants.

    Examples
    --------
    >>> pace_of("legs", 40), pace_of("legs", 70).best_rpm
    (Pace(best_rpm=60.0, loss=0.19), 50.0)
    """
    if limb == "arms":
        return Pace(ARM_BEST_RPM, ARM_PACE_LOSS)
    return Pace(OLDER_LEG_BEST_RPM if age >= OLDER_AGE else LEG_BEST_RPM, LEG_PACE_LOSS)


def cadence_factor(
    rpm: npt.ArrayLike, best_rpm: npt.ArrayLike = LEG_BEST_RPM, loss: npt.ArrayLike = LEG_PACE_LOSS
) -> FloatArray:
    """Share of the watts left away from the pace of least effort.

    eta_n = 1 - k ((n - n0)/n0)^2, n kept between 25 and 110 rpm, never below 0

    Parameters
    ----------
    rpm : array_like
        Cadence [rpm].
    best_rpm : array_like
        Pace of least effort [rpm].
    loss : array_like
        k [-].

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    See the module's constants.

    Examples
    --------
    >>> [round(float(x), 4) for x in cadence_factor([60.0, 100.0])]
    [1.0, 0.9156]
    """
    n = np.clip(np.asarray(rpm, dtype=float), LEAST_RPM, MOST_RPM)
    n0 = np.asarray(best_rpm, dtype=float)
    return np.asarray(np.maximum(0.0, 1.0 - np.asarray(loss, dtype=float) * np.square((n - n0) / n0)))


def handle_torque_nm(radius_m: npt.ArrayLike, force_n: npt.ArrayLike = HANDLE_FORCE_N) -> FloatArray:
    """Mean torque at a crank of this arm under a handle force; the same at every cadence.

    T = F r

    Parameters
    ----------
    radius_m : array_like
        Length of the crank's arm [m].
    force_n : array_like
        Mean handle force [N].

    Returns
    -------
    ndarray
        Torque [N m].

    References
    ----------
    Mechanics; force: see HANDLE_FORCE_N.

    Examples
    --------
    >>> float(handle_torque_nm(0.15))
    4.5
    """
    return np.asarray(np.asarray(force_n, dtype=float) * np.asarray(radius_m, dtype=float))


def p_crank_cap_w(radius_m: npt.ArrayLike, rpm: npt.ArrayLike, force_n: npt.ArrayLike = HANDLE_FORCE_N) -> FloatArray:
    """Watts at which a hand crank reaches the handle force for a long day.

    P = 2 pi r F n/60

    Parameters
    ----------
    radius_m : array_like
        Length of the crank's arm [m].
    rpm : array_like
        Cadence [rpm].
    force_n : array_like
        Mean handle force [N].

    Returns
    -------
    ndarray
        Power at the handle [W].

    References
    ----------
    Mechanics; force: see HANDLE_FORCE_N. Applied when a day's turning exceeds 30 min.

    Examples
    --------
    >>> round(float(p_crank_cap_w(0.10, 60.0)), 2), round(float(p_crank_cap_w(0.06, 90.0)), 2)
    (18.85, 16.96)
    """
    return np.asarray(handle_torque_nm(radius_m, force_n) * rad_s_from_rpm(np.asarray(rpm, dtype=float)))


def hand_activity_level(exertions_per_s: npt.ArrayLike, duty_percent: npt.ArrayLike) -> FloatArray:
    """Hand activity level of repeated exertions, 0 to 10.

    HAL = 6.56 ln(D) F^1.31/(1 + 3.18 F^1.31)

    Parameters
    ----------
    exertions_per_s : array_like
        Exertions per second [1/s].
    duty_percent : array_like
        Share of the cycle under force, as the published equation takes it, 1 to 100.

    Returns
    -------
    ndarray
        Level [-].

    References
    ----------
    Radwin R. G. et al., Ergonomics 58 (2015) 173-183.

    Examples
    --------
    >>> round(float(hand_activity_level(1.0, 80.0)), 3)
    6.877
    """
    f = np.asarray(exertions_per_s, dtype=float) ** 1.31
    return np.asarray(6.56 * np.log(np.maximum(np.asarray(duty_percent, dtype=float), 1.0)) * f / (1.0 + 3.18 * f))


def peak_force_limits(hal: npt.ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Peak hand force of single-task hand work of four hours or more a day: action level and limit.

    NPF = 0.56 (10 - HAL) and 0.78 (10 - HAL), in tenths of greatest strength

    Parameters
    ----------
    hal : array_like
        Hand activity level [-].

    Returns
    -------
    tuple of ndarray
        Normalised peak force, action level and limit, 0 to 10 [-].

    References
    ----------
    ACGIH TLV for hand activity, 2001-02 form; its action level was later judged not protective and lowered.

    Examples
    --------
    >>> [round(float(x), 3) for x in peak_force_limits(6.877)]
    [1.749, 2.436]
    """
    room = np.clip(10.0 - np.asarray(hal, dtype=float), 0.0, 10.0)
    return np.asarray(0.56 * room), np.asarray(0.78 * room)
