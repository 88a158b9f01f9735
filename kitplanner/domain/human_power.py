"""Watts a person can put into a handle or pedal, by age, effort level, limb and duration.

Every watt here is mechanical, at the handle or pedal, at a comfortable pace and in cool air. For planning only;
who should not exert themselves asks a clinician first. The median ("typical") is what half of the people of that
description reach; plan on the "dependable" value. Long bouts, children and people over 65 are the least certain.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Literal

import numpy as np
import numpy.typing as npt

from kitplanner.domain.capacity import (
    CHILD_FROM_AGE,
    CHILD_TO_AGE,
    OLDER_AGE,
    Level,
    arm_ratio,
    default_mass_kg,
    v_peak_ml_kg_min,
)

FloatArray = npt.NDArray[np.float64]
Limb = Literal["legs", "arms"]
Device = Literal["crank", "pocket_crank", "pedal", "treadle", "rocker"]

CHILD_FRACTION_MAX = 0.40
ARM_FATIGUE = 0.90  # a lower share of peak for arms: direction from Aminoff et al. 1998, size a judgement
OLDER_EFFICIENCY = 0.90  # lower gross efficiency of older riders: Sacchetti et al. 2010
# Share of pedal or two-hand power; judgements between Mengin's and Wilson's hand-to-leg ratios.
DEVICE_FACTOR: Mapping[Device, float] = MappingProxyType(
    {"crank": 1.0, "pocket_crank": 0.55, "pedal": 1.0, "treadle": 0.80, "rocker": 0.50}
)
DEVICE_LIMB: Mapping[Device, Limb] = MappingProxyType(
    {"crank": "arms", "pocket_crank": "arms", "pedal": "legs", "treadle": "legs", "rocker": "legs"}
)
LOWEST_T_MIN, LONGEST_T_MIN = 5.0, 480.0


def t_eff_min(bout_min: npt.ArrayLike, day_min: npt.ArrayLike, rest_share: float = 0.5) -> FloatArray:
    """Duration that counts for fatigue when a day's turning comes in bouts.

    t = t_bout + lambda max(0, T_day - t_bout), kept between 5 and 480 min

    Parameters
    ----------
    bout_min : array_like
        Length of one bout [min].
    day_min : array_like
        Turning time of the whole day [min].
    rest_share : float
        lambda: 0.5 with rests at least Murrell's, 1 without [-].

    Returns
    -------
    ndarray
        Effective duration [min].

    References
    ----------
    Judgement.

    Examples
    --------
    >>> float(t_eff_min(20.0, 80.0))
    50.0
    """
    bout = np.asarray(bout_min, dtype=float)
    rest_of_day = np.maximum(0.0, np.asarray(day_min, dtype=float) - bout)
    return np.asarray(np.clip(bout + rest_share * rest_of_day, LOWEST_T_MIN, LONGEST_T_MIN))


def f_steady(t_min: npt.ArrayLike) -> FloatArray:
    """Share of peak uptake that can be kept up comfortably.

    f = 0.835 - 0.188 log10(t), t kept between 5 and 480 min

    Parameters
    ----------
    t_min : array_like
        Effective duration [min].

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    Straight line through NIOSH's 50 % at 1 h and 33 % at 8 h: Waters T. R. et al., Ergonomics 36 (1993) 749-776.

    Examples
    --------
    >>> [round(float(f), 4) for f in f_steady([60.0, 240.0])]
    [0.5007, 0.3875]
    """
    t = np.clip(np.asarray(t_min, dtype=float), LOWEST_T_MIN, LONGEST_T_MIN)
    return np.asarray(0.835 - 0.188 * np.log10(t))


def p_legs_w(v_peak: npt.ArrayLike, mass_kg: float, fraction: npt.ArrayLike, efficiency: float = 1.0) -> FloatArray:
    """Pedal watts from a share of peak uptake.

    P = g max(0, f V - 7) M/10.8

    Parameters
    ----------
    v_peak : array_like
        Peak uptake on a cycle [mL/kg/min].
    mass_kg : float
        Body mass [kg].
    fraction : array_like
        Share of peak uptake kept up [-].
    efficiency : float
        g, 0.90 from 65 years [-].

    Returns
    -------
    ndarray
        Power at the pedal [W].

    References
    ----------
    ACSM leg-cycling equation, Guidelines for Exercise Testing and Prescription, 10th ed., restated by Bushman B. A.,
    ACSM's Health & Fitness Journal 24 (2020) 5-8; below 50 W it is extrapolated.

    Examples
    --------
    >>> round(float(p_legs_w(v_peak_ml_kg_min(40), 75.0, f_steady(60.0))), 2)
    53.77
    """
    uptake = np.asarray(fraction, dtype=float) * np.asarray(v_peak, dtype=float)
    return np.asarray(efficiency * np.maximum(0.0, uptake - 7.0) * mass_kg / 10.8)


def p_arms_w(arm_peak: npt.ArrayLike, mass_kg: float, fraction: npt.ArrayLike, efficiency: float = 1.0) -> FloatArray:
    """Two-hand crank watts from a share of the arms' peak uptake.

    P = g max(0, 0.90 f q V - 3.5) M/18.36

    Parameters
    ----------
    arm_peak : array_like
        Peak uptake of the arms, q V [mL/kg/min].
    mass_kg : float
        Body mass [kg].
    fraction : array_like
        Share of peak uptake kept up [-].
    efficiency : float
        g, 0.90 from 65 years [-].

    Returns
    -------
    ndarray
        Power at the handle [W].

    References
    ----------
    ACSM arm-cranking equation (same guidelines); 0.90: see ARM_FATIGUE.

    Examples
    --------
    >>> round(float(p_arms_w(0.65 * v_peak_ml_kg_min(40), 75.0, f_steady(30.0))), 2)
    24.92
    """
    uptake = ARM_FATIGUE * np.asarray(fraction, dtype=float) * np.asarray(arm_peak, dtype=float)
    return np.asarray(efficiency * np.maximum(0.0, uptake - 3.5) * mass_kg / 18.36)


def p_child_legs_w(v_peak: float, mass_kg: float, fraction: npt.ArrayLike) -> FloatArray:
    """Pedal watts of a child from 12 to 15 years.

    P = max(0, min(f, 0.40) V M - 5 M)/12

    Parameters
    ----------
    v_peak : float
        Peak uptake on a cycle [mL/kg/min].
    mass_kg : float
        Body mass [kg].
    fraction : array_like
        Share of peak uptake kept up [-].

    Returns
    -------
    ndarray
        Power at the pedal [W].

    References
    ----------
    Hansen H. S. et al., Odense School Child Study, European Journal of Applied Physiology 1989 (9-11 years; older
    children are an extrapolation); the cap of 0.40 is a judgement.

    Examples
    --------
    >>> round(float(p_child_legs_w(40.0, 48.0, 0.6)), 2)
    44.0
    """
    kept = np.minimum(np.asarray(fraction, dtype=float), CHILD_FRACTION_MAX)
    return np.asarray(np.maximum(0.0, kept * v_peak * mass_kg - 5.0 * mass_kg) / 12.0)


def p_child_arms_w(v_peak: float, mass_kg: float, fraction: npt.ArrayLike) -> FloatArray:
    """Two-hand crank watts of a child from 12 to 15 years.

    P = max(0, min(f, 0.40) 0.65 V - 3.5) M/18.36

    Parameters
    ----------
    v_peak : float
        Peak uptake on a cycle [mL/kg/min].
    mass_kg : float
        Body mass [kg].
    fraction : array_like
        Share of peak uptake kept up [-].

    Returns
    -------
    ndarray
        Power at the handle [W].

    References
    ----------
    ACSM arm-cranking equation; the cap of 0.40 is a judgement.

    Examples
    --------
    >>> round(float(p_child_arms_w(40.0, 48.0, 0.6)), 2)
    18.04
    """
    kept = np.minimum(np.asarray(fraction, dtype=float), CHILD_FRACTION_MAX)
    return np.asarray(np.maximum(0.0, kept * 0.65 * v_peak - 3.5) * mass_kg / 18.36)


def sustainable_w(
    level: Level,
    age: float,
    limb: Limb,
    bout_min: npt.ArrayLike,
    day_min: npt.ArrayLike,
    mass_kg: float | None = None,
) -> FloatArray:
    """Typical watts of a person at the pedal or two-hand crank, over bouts and days of given lengths.

    Parameters
    ----------
    level : str
        "light", "usual" or "strong"; under 18 it changes nothing.
    age : float
        Age; nobody under 12 is counted (0 W) [years].
    limb : str
        "legs" or "arms".
    bout_min, day_min : array_like
        Length of one bout and turning time of the day [min].
    mass_kg : float, optional
        Body mass; None takes the age class's [kg].

    Returns
    -------
    ndarray
        Median power at the handle or pedal [W].

    References
    ----------
    `v_peak_ml_kg_min`, `f_steady`, `p_legs_w`, `p_arms_w`, `p_child_legs_w`, `p_child_arms_w`.

    Examples
    --------
    >>> round(float(sustainable_w("usual", 40, "legs", 20.0, 80.0)), 2)
    56.81
    """
    fraction = f_steady(t_eff_min(bout_min, day_min))
    if age < CHILD_FROM_AGE:
        return np.zeros_like(fraction)
    kg = default_mass_kg(age) if mass_kg is None else mass_kg
    v_peak = v_peak_ml_kg_min(age, level, mass_kg)
    if age < CHILD_TO_AGE:
        return p_child_legs_w(v_peak, kg, fraction) if limb == "legs" else p_child_arms_w(v_peak, kg, fraction)
    efficiency = OLDER_EFFICIENCY if age >= OLDER_AGE else 1.0
    if limb == "legs":
        return p_legs_w(v_peak, kg, fraction, efficiency)
    return p_arms_w(arm_ratio(age) * v_peak, kg, fraction, efficiency)


def reference_adult_w(limb: Limb, bout_min: npt.ArrayLike, day_min: npt.ArrayLike) -> FloatArray:
    """Typical watts of the reference adult: usual effort, 40 years, 75 kg.

    Parameters
    ----------
    limb : str
        "legs" or "arms".
    bout_min, day_min : array_like
        Length of one bout and turning time of the day [min].

    Returns
    -------
    ndarray
        Median power at the handle or pedal [W].

    References
    ----------
    `sustainable_w`.

    Examples
    --------
    >>> round(float(reference_adult_w("legs", 60.0, 60.0)), 2)
    53.77
    """
    return sustainable_w("usual", 40, limb, bout_min, day_min, 75.0)
