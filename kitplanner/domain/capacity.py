"""Aerobic capacity by age, body and effort level: what the body could do for minutes at its peak."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Literal

import numpy as np
import numpy.typing as npt

from kitplanner.domain.units import CM_PER_IN, lb_from_kg

FloatArray = npt.NDArray[np.float64]
Level = Literal["light", "usual", "strong"]

# Share of the FRIEND regression's capacity: 0.85 brings it to working employees measured on a cycle (2.97 and 1.96
# L/min); 0.8 and 1.25 around it for low and fit people are judgements.
LEVEL_FACTOR: Mapping[Level, float] = MappingProxyType({"light": 0.68, "usual": 0.85, "strong": 1.06})
SEX_UNKNOWN = 1.5
CHILD_V_PEAK = 40.0  # mL/kg/min for 12-15 years; from memory, no source at hand
CHILD_FROM_AGE, CHILD_TO_AGE, ADULT_AGE, OLDER_AGE, OLDER_ARM_AGE = 12, 16, 18, 65, 60
FRIEND_AGE_MAX = 85
# kg and cm of a person who gave none, by age class (child, adult, 65 and over): judgements.
_CLASS_MASS_KG = (48.0, 75.0, 72.0)
_CLASS_HEIGHT_CM = (158.0, 170.0, 167.0)


def _class_index(age: float) -> int:
    """0 child (12-15), 1 adult, 2 sixty-five and over."""
    return 0 if age < CHILD_TO_AGE else 2 if age >= OLDER_AGE else 1


def default_mass_kg(age: float) -> float:
    """Body mass used where none is given: 48 kg under 16, 75 kg, 72 kg from 65.

    Parameters
    ----------
    age : float
        Age [years].

    Returns
    -------
    float
        Body mass [kg].

    References
    ----------
    Judgement; 75 kg is also the reference adult's mass.

    Examples
    --------
    >>> default_mass_kg(13), default_mass_kg(40), default_mass_kg(70)
    (48.0, 75.0, 72.0)
    """
    return _CLASS_MASS_KG[_class_index(age)]


def default_height_cm(age: float) -> float:
    """Body height used where none is given: 158 cm under 16, 170 cm, 167 cm from 65.

    Parameters
    ----------
    age : float
        Age [years].

    Returns
    -------
    float
        Body height [cm].

    References
    ----------
    Judgement.

    Examples
    --------
    >>> default_height_cm(40)
    170.0
    """
    return _CLASS_HEIGHT_CM[_class_index(age)]


def friend_bike_ml_kg_min(age: npt.ArrayLike, sex_code: float, mass_kg: float, height_cm: float) -> FloatArray:
    """Peak oxygen uptake on a cycle by the FRIEND registry's regression.

    V = 45.2 - 0.35 age - 10.9 S - 0.15 lb + 0.68 inch - 0.46 mode, mode 2 for a cycle

    Parameters
    ----------
    age : array_like
        Age, at most 85 used [years].
    sex_code : float
        1 man, 2 woman, 1.5 not asked [-].
    mass_kg : float
        Body mass [kg].
    height_cm : float
        Body height [cm].

    Returns
    -------
    ndarray
        Peak uptake [mL/kg/min].

    References
    ----------
    de Souza e Silva C. G. et al., European Journal of Preventive Cardiology 25 (2018) 742-750; SEE 6.6, 20-85 years.

    Examples
    --------
    >>> round(float(friend_bike_ml_kg_min(45, 1, 80.0, 178.0)), 2)
    38.83
    """
    years = np.minimum(np.asarray(age, dtype=float), FRIEND_AGE_MAX)
    body = -10.9 * sex_code - 0.15 * lb_from_kg(mass_kg) + 0.68 * height_cm / CM_PER_IN - 0.46 * 2
    return np.asarray(45.2 - 0.35 * years + body)


def v_peak_ml_kg_min(
    age: float,
    level: Level = "usual",
    mass_kg: float | None = None,
    height_cm: float | None = None,
    sex_code: float = SEX_UNKNOWN,
) -> float:
    """Peak oxygen uptake for planning.

    V = F V_FRIEND, F = 0.68, 0.85, 1.06 for light, usual, strong; 40 from 12 to 15 years; F = 0.68 at 16 and 17

    Parameters
    ----------
    age : float
        Age, 12 or more [years].
    level : str
        "light", "usual" or "strong".
    mass_kg, height_cm : float, optional
        Body mass [kg] and height [cm]; None takes the age class's.
    sex_code : float
        1 man, 2 woman, 1.5 not asked [-].

    Returns
    -------
    float
        Peak uptake on a cycle [mL/kg/min].

    References
    ----------
    `friend_bike_ml_kg_min`; factors are judgements, see LEVEL_FACTOR.

    Examples
    --------
    >>> round(v_peak_ml_kg_min(40), 2)
    29.44
    """
    if age < CHILD_TO_AGE:
        return CHILD_V_PEAK
    kg = default_mass_kg(age) if mass_kg is None else mass_kg
    cm = default_height_cm(age) if height_cm is None else height_cm
    factor = LEVEL_FACTOR["light"] if age < ADULT_AGE else LEVEL_FACTOR[level]
    return factor * float(friend_bike_ml_kg_min(age, sex_code, kg, cm))


def arm_ratio(age: float) -> float:
    """Peak uptake of the arms over that of the legs: 0.65, from 60 years 0.70.

    Parameters
    ----------
    age : float
        Age [years].

    Returns
    -------
    float
        Ratio [-].

    References
    ----------
    Larsen R. T. et al., International Journal of Sports Physical Therapy 11 (2016) 1006-1039 (mean 0.70, gap smaller
    in older people); 0.65 meets the arm peaks of Balady G. J. et al., JACC 1990.

    Examples
    --------
    >>> arm_ratio(40), arm_ratio(60)
    (0.65, 0.7)
    """
    return 0.70 if age >= OLDER_ARM_AGE else 0.65
