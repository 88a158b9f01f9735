"""What turning costs the body: oxygen, food and drinking water.

Oxygen uptake comes from the ACSM equations; food counts 5 kcal per litre of oxygen, heat 20.1 kJ per litre.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
import numpy.typing as npt

from kitplanner.domain.units import hours_from_minutes

FloatArray = npt.NDArray[np.float64]
Limb = Literal["legs", "arms"]

KCAL_PER_L_O2 = 5.0
HEAT_J_PER_L_O2 = 20100.0
ML_PER_L = 1000.0
REST_UPTAKE = 3.5  # mL/kg/min, one MET

# Litres per hour of turning above normal drinking, by air temperature, for legs; arms 0.7 of it. Judgement, above what
# sweat needs at these powers on purpose. The cap is NIOSH 2017-126: never above 48 oz in an hour.
_WATER_EDGES_DEGC = np.array([20.0, 27.0, 32.0])
_WATER_L_PER_H = np.array([0.3, 0.5, 0.75, 1.0])
ARM_WATER_FACTOR = 0.7
WATER_CAP_L_PER_H = 1.4


def vo2_legs(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike) -> FloatArray:
    """Oxygen uptake of pedalling.

    V = 7 + 10.8 P/M

    Parameters
    ----------
    power_w : array_like
        Power at the pedal [W].
    mass_kg : array_like
        Body mass [kg].

    Returns
    -------
    ndarray
        Uptake [mL/kg/min].

    References
    ----------
    ACSM Guidelines for Exercise Testing and Prescription, 10th ed., Table 6.3, restated by Bushman B. A., ACSM's
    Health & Fitness Journal 24 (2020) 5-8. Domain 50-200 W; below it is extrapolated.

    Examples
    --------
    >>> round(float(vo2_legs(75.0, 75.0)), 2)
    17.8
    """
    return np.asarray(7.0 + 10.8 * np.asarray(power_w, dtype=float) / np.asarray(mass_kg, dtype=float))


def vo2_arms(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike) -> FloatArray:
    """Oxygen uptake of two-handed cranking.

    V = 3.5 + 18.36 P/M

    Parameters
    ----------
    power_w : array_like
        Power at the handle [W].
    mass_kg : array_like
        Body mass [kg].

    Returns
    -------
    ndarray
        Uptake [mL/kg/min].

    References
    ----------
    ACSM, as `vo2_legs`; domain 25-125 W.

    Examples
    --------
    >>> round(float(vo2_arms(25.0, 75.0)), 2)
    9.62
    """
    return np.asarray(3.5 + 18.36 * np.asarray(power_w, dtype=float) / np.asarray(mass_kg, dtype=float))


def vo2_work(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike, limb: Limb) -> FloatArray:
    """Oxygen uptake of turning with legs or arms.

    Parameters
    ----------
    power_w : array_like
        Power at the handle or pedal [W].
    mass_kg : array_like
        Body mass [kg].
    limb : str
        "legs" or "arms".

    Returns
    -------
    ndarray
        Uptake [mL/kg/min].

    References
    ----------
    `vo2_legs`, `vo2_arms`.

    Examples
    --------
    >>> round(float(vo2_work(25.0, 75.0, "arms")), 2)
    9.62
    """
    return vo2_legs(power_w, mass_kg) if limb == "legs" else vo2_arms(power_w, mass_kg)


def child_vo2_ml_min(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike) -> FloatArray:
    """Oxygen uptake of a pedalling child.

    V = 12 P + 5 M, in mL/min

    Parameters
    ----------
    power_w : array_like
        Power at the pedal [W].
    mass_kg : array_like
        Body mass [kg].

    Returns
    -------
    ndarray
        Uptake [mL/min].

    References
    ----------
    Hansen H. S. et al., Odense School Child Study, European Journal of Applied Physiology 1989 (9-11 years).

    Examples
    --------
    >>> float(child_vo2_ml_min(80.0, 48.0))
    1200.0
    """
    return np.asarray(12.0 * np.asarray(power_w, dtype=float) + 5.0 * np.asarray(mass_kg, dtype=float))


def kcal_per_min(uptake: npt.ArrayLike, mass_kg: npt.ArrayLike) -> FloatArray:
    """Energy turned over by the body at an oxygen uptake, rest included.

    E = 5 V M/1000

    Parameters
    ----------
    uptake : array_like
        Oxygen uptake [mL/kg/min].
    mass_kg : array_like
        Body mass [kg].

    Returns
    -------
    ndarray
        Energy rate [kcal/min].

    References
    ----------
    1 L of oxygen is about 5 kcal (ACSM Guidelines, 10th ed.).

    Examples
    --------
    >>> round(float(kcal_per_min(17.80, 75.0)), 3)
    6.675
    """
    litres = np.asarray(uptake, dtype=float) * np.asarray(mass_kg, dtype=float) / ML_PER_L
    return np.asarray(KCAL_PER_L_O2 * litres)


def metabolic_w(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike, limb: Limb) -> FloatArray:
    """Metabolic rate of turning for heat limits, in watts of the whole body (never per square metre).

    M = 20.1 kJ/L V M_body/1000/60

    Parameters
    ----------
    power_w : array_like
        Power at the handle or pedal [W].
    mass_kg : array_like
        Body mass [kg].
    limb : str
        "legs" or "arms".

    Returns
    -------
    ndarray
        Metabolic rate [W].

    References
    ----------
    ACSM equations; 20.1 kJ per litre of oxygen, fat-leaning work.

    Examples
    --------
    >>> round(float(metabolic_w(75.0, 75.0, "legs")), 1), round(float(metabolic_w(25.0, 75.0, "arms")), 1)
    (447.2, 241.7)
    """
    litres_per_s = vo2_work(power_w, mass_kg, limb) * np.asarray(mass_kg, dtype=float) / ML_PER_L / 60.0
    return np.asarray(HEAT_J_PER_L_O2 * litres_per_s)


def gross_efficiency(power_w: npt.ArrayLike, mass_kg: npt.ArrayLike, limb: Limb) -> FloatArray:
    """Mechanical power over metabolic rate; low at charging powers, where rest and unloaded limbs dominate.

    GE = P/M

    Parameters
    ----------
    power_w : array_like
        Power at the handle or pedal [W].
    mass_kg : array_like
        Body mass [kg].
    limb : str
        "legs" or "arms".

    Returns
    -------
    ndarray
        Efficiency [-].

    References
    ----------
    `metabolic_w`; compare Moseley L., Jeukendrup A. E., Medicine & Science in Sports & Exercise 33 (2001) 621-627.

    Examples
    --------
    >>> round(float(gross_efficiency(75.0, 75.0, "legs")), 4)
    0.1677
    """
    return np.asarray(np.asarray(power_w, dtype=float) / metabolic_w(power_w, mass_kg, limb))


def kcal_extra(power_w: npt.ArrayLike, time_min: npt.ArrayLike, mass_kg: npt.ArrayLike, limb: Limb) -> FloatArray:
    """Food energy above rest for a time of turning.

    legs t (3.240 P + 1.050 M), arms t 5.508 P, t in hours

    Parameters
    ----------
    power_w : array_like
        Power at the handle or pedal [W].
    time_min : array_like
        Turning time [min].
    mass_kg : array_like
        Body mass [kg].
    limb : str
        "legs" or "arms".

    Returns
    -------
    ndarray
        Food energy [kcal].

    References
    ----------
    ACSM equations less one MET, 5 kcal per litre of oxygen.

    Examples
    --------
    >>> round(float(kcal_extra(75.0, 60.0, 75.0, "legs")), 1), round(float(kcal_extra(25.0, 60.0, 75.0, "arms")), 1)
    (321.8, 137.7)
    """
    above_rest = vo2_work(power_w, mass_kg, limb) - REST_UPTAKE
    return np.asarray(kcal_per_min(above_rest, mass_kg) * np.asarray(time_min, dtype=float))


def resting_kcal_per_day(mass_kg: float, height_cm: float, age: float, sex_code: float = 1.5) -> float:
    """Resting energy need of a day.

    10 M + 6.25 H - 5 A + 5 (man) or - 161 (woman), in between where sex is not asked

    Parameters
    ----------
    mass_kg : float
        Body mass [kg].
    height_cm : float
        Body height [cm].
    age : float
        Age [years].
    sex_code : float
        1 man, 2 woman, 1.5 not asked [-].

    Returns
    -------
    float
        Energy [kcal].

    References
    ----------
    Mifflin M. D. et al., American Journal of Clinical Nutrition 51 (1990) 241-247.

    Examples
    --------
    >>> round(resting_kcal_per_day(75.0, 175.0, 40, 1)), round(resting_kcal_per_day(65.0, 165.0, 40, 2))
    (1649, 1320)
    """
    return 10.0 * mass_kg + 6.25 * height_cm - 5.0 * age + 5.0 - 166.0 * (sex_code - 1.0)


def water_l(time_min: npt.ArrayLike, air_degc: npt.ArrayLike, limb: Limb) -> FloatArray:
    """Drinking water above normal drinking for a time of turning in the shade in light clothes.

    0.3, 0.5, 0.75, 1.0 L/h below 20, 27, 32 degC and above; arms 0.7 of it

    Parameters
    ----------
    time_min : array_like
        Turning time [min].
    air_degc : array_like
        Air temperature [degC].
    limb : str
        "legs" or "arms".

    Returns
    -------
    ndarray
        Water [L].

    References
    ----------
    Judgement within NIOSH 2017-126 (a cup each 15-20 min in heat; never above 1.4 L in an hour).

    Examples
    --------
    >>> round(float(water_l(60.0, 22.0, "legs")), 2), round(float(water_l(30.0, 35.0, "arms")), 2)
    (0.5, 0.35)
    """
    step = np.searchsorted(_WATER_EDGES_DEGC, np.asarray(air_degc, dtype=float), "right")
    rate = np.take(_WATER_L_PER_H, step) * (1.0 if limb == "legs" else ARM_WATER_FACTOR)
    return np.asarray(np.minimum(rate, WATER_CAP_L_PER_H) * hours_from_minutes(np.asarray(time_min, dtype=float)))
