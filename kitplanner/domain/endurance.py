"""How long an effort can last: power-duration rules, recovery in pauses, and the hard-turn tier.

Critical power and W' describe exhausting efforts of trained people of 2 to 30 minutes. Plans keep every bout below
critical power; the laws here warn about optional short hard turns and check plans against handbook values.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
import numpy.typing as npt

from kitplanner.domain.capacity import OLDER_AGE, Level, arm_ratio
from kitplanner.domain.human_power import LOWEST_T_MIN, OLDER_EFFICIENCY, Limb, p_arms_w, p_legs_w

FloatArray = npt.NDArray[np.float64]
RecoveryForm = Literal["2012", "2015"]

W_PER_HP = 745.7
# Factors of Krendel's rule at 20 and 60 years against 35.
_KRENDEL_AGES, _KRENDEL_FACTORS = np.array([20.0, 35.0, 60.0]), np.array([1.15, 1.0, 0.80])
CP_FRACTION_LEGS, CP_FRACTION_ARMS = 0.70, 0.60
# W' in J by level; 6 kJ from 65 years; arms 0.4 of it. Judgements below Bergstrom et al. 2012 (13.4 +/- 6.3 kJ).
_W_PRIME_J = {"light": 8000.0, "usual": 10000.0, "strong": 13000.0}
OLDER_W_PRIME_J, ARM_W_PRIME_FACTOR = 6000.0, 0.4
HANDBOOK_WARNING_FACTOR = 1.25


def krendel_w(t_min: npt.ArrayLike, age: npt.ArrayLike = 35.0) -> FloatArray:
    """Power of a labourer to exhaustion, the engineering handbooks' rule.

    P = 745.7 (0.35 - 0.092 log10 t), times 1.15 at 20 and 0.80 at 60 years

    Parameters
    ----------
    t_min : array_like
        Duration, 4 to 480 min [min].
    age : array_like
        Age, 20 to 60 years [years].

    Returns
    -------
    ndarray
        Power [W].

    References
    ----------
    Krendel E. S., The mechanical power output of men, Franklin Institute for the Office of Naval Research, 1958;
    also in Marks' Standard Handbook for Mechanical Engineers.

    Examples
    --------
    >>> round(float(krendel_w(60.0)), 1), round(float(krendel_w(240.0)), 2)
    (139.0, 97.7)
    """
    t = np.clip(np.asarray(t_min, dtype=float), 4.0, 480.0)
    factor = np.interp(np.asarray(age, dtype=float), _KRENDEL_AGES, _KRENDEL_FACTORS)
    return np.asarray(W_PER_HP * (0.35 - 0.092 * np.log10(t)) * factor)


def bink_fraction(t_min: npt.ArrayLike) -> FloatArray:
    """Share of peak uptake that can be kept up near the limit.

    f = (log10 5700 - log10 t)/3.1

    Parameters
    ----------
    t_min : array_like
        Duration, 4 to 480 min, shorter held at 5 min [min].

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    Bink B., Ergonomics 5 (1962) 25-28, from memory.

    Examples
    --------
    >>> [round(float(f), 4) for f in bink_fraction([5.0, 60.0, 480.0])]
    [0.9861, 0.638, 0.3467]
    """
    t = np.clip(np.asarray(t_min, dtype=float), LOWEST_T_MIN, 480.0)
    return np.asarray((np.log10(5700.0) - np.log10(t)) / 3.1)


def endurance_s(power_w: npt.ArrayLike, cp_w: npt.ArrayLike, w_prime_j: npt.ArrayLike) -> FloatArray:
    """Time to exhaustion above critical power; infinite at or below it.

    t = W'/(P - CP)

    Parameters
    ----------
    power_w : array_like
        Power [W].
    cp_w : array_like
        Critical power [W].
    w_prime_j : array_like
        Work that can be done above it [J].

    Returns
    -------
    ndarray
        Time [s].

    References
    ----------
    Monod H., Scherrer J., Ergonomics 8 (1965) 329-338; domain 2-30 min.

    Examples
    --------
    >>> [float(t) for t in endurance_s([190.0, 150.0], 150.0, 12000.0)]
    [300.0, inf]
    """
    excess = np.asarray(power_w, dtype=float) - np.asarray(cp_w, dtype=float)
    w_prime = np.broadcast_to(np.asarray(w_prime_j, dtype=float), excess.shape)
    return np.asarray(np.divide(w_prime, excess, out=np.full(excess.shape, np.inf), where=excess > 0.0))


def endurance_morton_s(power_w: npt.ArrayLike, cp_w: float, w_prime_j: float, p_max_w: float) -> FloatArray:
    """Time to exhaustion with a greatest power: 0 at it, infinite at or below critical power.

    t = W'/(P - CP) + W'/(CP - P_max)

    Parameters
    ----------
    power_w : array_like
        Power [W].
    cp_w : float
        Critical power [W].
    w_prime_j : float
        Work that can be done above it [J].
    p_max_w : float
        Greatest instantaneous power [W].

    Returns
    -------
    ndarray
        Time [s].

    References
    ----------
    Morton R. H., Ergonomics 39 (1996) 611-619.

    Examples
    --------
    >>> round(float(endurance_morton_s(190.0, 150.0, 12000.0, 450.0)), 6)
    260.0
    """
    return np.asarray(np.maximum(0.0, endurance_s(power_w, cp_w, w_prime_j) + w_prime_j / (cp_w - p_max_w)))


def recovery_tau_s(below_cp_w: npt.ArrayLike, w_prime_j: float, form: RecoveryForm = "2012") -> FloatArray:
    """Time constant of recovery below critical power; infinite where there is none.

    2012: 546 exp(-0.01 D) + 316; 2015: W'/D

    Parameters
    ----------
    below_cp_w : array_like
        Critical power less the power of the pause, D [W].
    w_prime_j : float
        Work that can be done above critical power [J].
    form : str
        "2012" (slower, for untrained people) or "2015"; the two are never mixed.

    Returns
    -------
    ndarray
        Time constant [s].

    References
    ----------
    Skiba P. F. et al., Medicine & Science in Sports & Exercise 44 (2012) 1526-1532; Skiba P. F. et al., European
    Journal of Applied Physiology 115 (2015) 703-713. Trained young cyclists.

    Examples
    --------
    >>> [round(float(recovery_tau_s(130.0, 12000.0, form)), 2) for form in ("2012", "2015")]
    [464.8, 92.31]
    """
    d = np.asarray(below_cp_w, dtype=float)
    if form == "2012":
        return np.where(d > 0.0, 546.0 * np.exp(-0.01 * d) + 316.0, np.inf)
    return np.asarray(np.divide(w_prime_j, d, out=np.full(d.shape, np.inf), where=d > 0.0))


def w_balance_j(
    start_j: float,
    power_w: float,
    time_s: npt.ArrayLike,
    cp_and_w_prime: tuple[float, float],
    form: RecoveryForm = "2012",
) -> FloatArray:
    """Work left above critical power after a time at constant power, by the exact step.

    above CP: W - (P - CP) t; below: W' - (W' - W) exp(-t/tau); kept between 0 and W'

    Parameters
    ----------
    start_j : float
        Work left at the start [J].
    power_w : float
        Power [W].
    time_s : array_like
        Time [s].
    cp_and_w_prime : tuple of float
        Critical power [W] and W' [J].
    form : str
        Form of the recovery, see `recovery_tau_s`.

    Returns
    -------
    ndarray
        Work left [J].

    References
    ----------
    As `recovery_tau_s`.

    Examples
    --------
    >>> [round(float(w_balance_j(4800.0, 20.0, 300.0, (150.0, 12000.0), form))) for form in ("2012", "2015")]
    [8224, 11721]
    """
    cp_w, w_prime_j = cp_and_w_prime
    t = np.asarray(time_s, dtype=float)
    if power_w >= cp_w:
        left = start_j - (power_w - cp_w) * t
    else:
        left = w_prime_j - (w_prime_j - start_j) * np.exp(-t / recovery_tau_s(cp_w - power_w, w_prime_j, form))
    return np.asarray(np.clip(left, 0.0, w_prime_j))


def w_prime_of(level: Level, age: float, limb: Limb) -> float:
    """Work a person can do above critical power.

    Parameters
    ----------
    level : str
        "light", "usual" or "strong".
    age : float
        Age [years].
    limb : str
        "legs" or "arms".

    Returns
    -------
    float
        W' [J].

    References
    ----------
    Judgement below Bergstrom H. C. et al., Journal of Strength and Conditioning Research 26 (2012) 656-663.

    Examples
    --------
    >>> w_prime_of("usual", 40, "legs"), w_prime_of("usual", 40, "arms")
    (10000.0, 4000.0)
    """
    whole = OLDER_W_PRIME_J if age >= OLDER_AGE else _W_PRIME_J[level]
    return whole * (1.0 if limb == "legs" else ARM_W_PRIME_FACTOR)


def critical_power_w(v_peak: float, age: float, mass_kg: float, limb: Limb) -> float:
    """Critical power from a person's peak uptake.

    legs at 0.70 of V_peak, arms at 0.60 of q V_peak, through the ACSM equations

    Parameters
    ----------
    v_peak : float
        Peak uptake on a cycle [mL/kg/min].
    age : float
        Age [years].
    mass_kg : float
        Body mass [kg].
    limb : str
        "legs" or "arms".

    Returns
    -------
    float
        Critical power [W].

    References
    ----------
    Share of peak uptake at critical power: Poole D. C. et al., Medicine & Science in Sports & Exercise 48 (2016)
    2320-2334, from memory; the lower share for arms is a judgement.

    Examples
    --------
    >>> round(critical_power_w(29.44, 40, 75.0, "legs"), 1), round(critical_power_w(29.44, 40, 75.0, "arms"), 1)
    (94.5, 32.6)
    """
    efficiency = OLDER_EFFICIENCY if age >= OLDER_AGE else 1.0
    if limb == "legs":
        return float(p_legs_w(v_peak, mass_kg, CP_FRACTION_LEGS, efficiency))
    uptake = CP_FRACTION_ARMS * arm_ratio(age) * v_peak
    return efficiency * max(0.0, uptake - 3.5) * mass_kg / 18.36


def push_w(v_peak: float, age: float, mass_kg: float, limb: Limb, t_min: npt.ArrayLike, w_prime_j: float) -> FloatArray:
    """Near-limit watts of one hard turn: only for fit, screened people in the cool, at most once a day.

    P = min(power at Bink's share of peak, CP + W'/t)

    Parameters
    ----------
    v_peak : float
        Peak uptake on a cycle [mL/kg/min].
    age : float
        Age [years].
    mass_kg : float
        Body mass [kg].
    limb : str
        "legs" or "arms".
    t_min : array_like
        Duration [min].
    w_prime_j : float
        Work that can be done above critical power with this limb [J].

    Returns
    -------
    ndarray
        Power [W].

    References
    ----------
    `bink_fraction`, `critical_power_w`, `endurance_s`; the joint ceiling is a judgement.

    Examples
    --------
    >>> round(float(push_w(45.77, 35, 75.0, "legs", 15.0, 13000.0)), 1)
    188.3
    """
    t = np.clip(np.asarray(t_min, dtype=float), LOWEST_T_MIN, 480.0)
    efficiency = OLDER_EFFICIENCY if age >= OLDER_AGE else 1.0
    if limb == "legs":
        near_limit = p_legs_w(v_peak, mass_kg, bink_fraction(t), efficiency)
    else:
        near_limit = p_arms_w(arm_ratio(age) * v_peak, mass_kg, bink_fraction(t), efficiency)
    ceiling = critical_power_w(v_peak, age, mass_kg, limb) + w_prime_j / (60.0 * t)
    return np.asarray(np.minimum(near_limit, ceiling))


def is_beyond_handbook(power_w: npt.ArrayLike, t_min: npt.ArrayLike) -> npt.NDArray[np.bool_]:
    """Tell whether given watts exceed a labourer's by more than a quarter: most likely a slip of the pen.

    P > 1.25 P_Krendel

    Parameters
    ----------
    power_w : array_like
        Power [W].
    t_min : array_like
        Duration [min].

    Returns
    -------
    ndarray of bool
        True where a question is due.

    References
    ----------
    `krendel_w`; the margin is a judgement.

    Examples
    --------
    >>> bool(is_beyond_handbook(300.0, 15.0)), bool(is_beyond_handbook(150.0, 15.0))
    (True, False)
    """
    return np.asarray(np.asarray(power_w, dtype=float) > HANDBOOK_WARNING_FACTOR * krendel_w(t_min))
