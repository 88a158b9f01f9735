"""Heat: how much of an hour may be worked, by wet-bulb globe temperature or by air temperature.

Healthy adults fit for work only; children, pregnancy and illness need stricter rules than any table here, and local
rules come first. Metabolic rates are watts of the whole body, never watts per square metre.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
WorkClass = Literal["light", "moderate", "heavy"]

REST_W = 115.0
HOUR_MIN = 60
# Whole-body rate at rest is 115 W for 70 kg; a smaller rate of work is a value per square metre given by mistake.
LEAST_PLAUSIBLE_W = 100.0
_LIMIT = {True: (56.7, 11.5), False: (59.9, 14.1)}
# Middles between the classes of ISO 8996: light 180, moderate 300, high 415 W.
_CLASS_EDGES_W = np.array([240.0, 357.5])
_CLASSES: tuple[WorkClass, ...] = ("light", "moderate", "heavy")

# NIOSH sample table, minutes of work in an hour by air temperature: upper end of each row, then each class.
_NIOSH_UPPER_DEGC = np.array(
    [34.4, 35.6, 36.1, 37.2, 37.8, 38.3, 38.9, 40.0, 40.6, 41.1, 41.7, 42.2, 42.8, 43.3],
)
_NIOSH_ON_MIN = {
    "light": np.array([60, 60, 60, 60, 60, 60, 60, 60, 60, 45, 40, 35, 30, 15, 0]),
    "moderate": np.array([60, 60, 60, 60, 45, 40, 35, 30, 25, 20, 15, 0, 0, 0, 0]),
    "heavy": np.array([60, 45, 40, 35, 30, 30, 25, 20, 15, 0, 0, 0, 0, 0, 0]),
}

RAMP_UP_PER_DAY = 0.20


@dataclass(frozen=True, slots=True)
class HeatRule:
    """Longest bout and least rest in the heat.

    Attributes
    ----------
    on_min, off_min : int
        Longest bout and least rest after it [min]; 0 and 60 where nobody should turn.
    essential_only : bool
        True where turning is left for the most important devices only.
    """

    on_min: int
    off_min: int
    essential_only: bool = False


# For mixed volunteers, stricter than any table for workers: judgement, to be reviewed by occupational health.
_VOLUNTEER_EDGES_DEGC = np.array([26.0, 29.0, 32.0])
_VOLUNTEER_STEPS = (HeatRule(20, 40), HeatRule(15, 45), HeatRule(10, 50), HeatRule(0, 60, essential_only=True))
_HOT_CRANKING = HeatRule(10, 50, essential_only=True)


def _checked_w(metabolic_w: npt.ArrayLike) -> FloatArray:
    """Metabolic watts, refused where they look like watts per square metre."""
    rate = np.asarray(metabolic_w, dtype=float)
    if np.any(rate < LEAST_PLAUSIBLE_W):
        raise ValueError(
            "metabolic rate below 100 W: heat limits take watts of the whole body, not watts per square metre; "
            "multiply by the body surface (about 1.8 m2)"
        )
    return rate


def wbgt_limit_degc(metabolic_w: npt.ArrayLike, *, acclimatised: bool = False) -> FloatArray:
    """Wet-bulb globe temperature up to which an hour may be worked through.

    56.7 - 11.5 log10(M) acclimatised (REL), 59.9 - 14.1 log10(M) not (RAL)

    Parameters
    ----------
    metabolic_w : array_like
        One-hour mean metabolic rate of the whole body [W].
    acclimatised : bool
        True after one to two weeks in the heat.

    Returns
    -------
    ndarray
        Limit [degC].

    References
    ----------
    NIOSH, Criteria for a Recommended Standard: Occupational Exposure to Heat, 2016-106, 8.1; ISO 7243:2017.

    Examples
    --------
    >>> round(float(wbgt_limit_degc(447.0, acclimatised=True)), 2), round(float(wbgt_limit_degc(447.0)), 2)
    (26.22, 22.53)
    """
    a, b = _LIMIT[acclimatised]
    return np.asarray(a - b * np.log10(_checked_w(metabolic_w)))


def heat_fraction(metabolic_w: npt.ArrayLike, wbgt_degc: npt.ArrayLike, *, acclimatised: bool = False) -> FloatArray:
    """Share of an hour that may be worked so that the hour's mean rate meets the limit.

    (M_allow - 115)/(M - 115), M_allow = 10^((a - WBGT)/b), kept between 0 and 1

    Parameters
    ----------
    metabolic_w : array_like
        Metabolic rate while turning, whole body [W].
    wbgt_degc : array_like
        Wet-bulb globe temperature [degC].
    acclimatised : bool
        True after one to two weeks in the heat.

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    As `wbgt_limit_degc`; rest at 115 W (ISO 8996).

    Examples
    --------
    >>> round(float(heat_fraction(447.0, 29.0)), 4), round(float(heat_fraction(447.0, 29.0, acclimatised=True)), 4)
    (0.1217, 0.4255)
    """
    a, b = _LIMIT[acclimatised]
    rate = _checked_w(metabolic_w)
    allowed = 10.0 ** ((a - np.asarray(wbgt_degc, dtype=float)) / b)
    above_rest = np.maximum(rate - REST_W, 1e-9)
    return np.asarray(np.clip((allowed - REST_W) / above_rest, 0.0, 1.0))


def work_class(metabolic_w: float) -> WorkClass:
    """Class of work nearest to a metabolic rate: light 180, moderate 300, heavy 415 W.

    Parameters
    ----------
    metabolic_w : float
        Metabolic rate, whole body [W].

    Returns
    -------
    str
        "light", "moderate" or "heavy".

    References
    ----------
    ISO 8996, ISO 7243 (reference body 70 kg, 1.8 m2).

    Examples
    --------
    >>> work_class(241.7), work_class(430.0)
    ('moderate', 'heavy')
    """
    return _CLASSES[int(np.searchsorted(_CLASS_EDGES_W, float(_checked_w(metabolic_w)), "right"))]


def niosh_work_min(air_degc: npt.ArrayLike, work: WorkClass) -> FloatArray:
    """Minutes of work in an hour by air temperature; 60 normal, 0 great caution.

    Parameters
    ----------
    air_degc : array_like
        Air temperature [degC].
    work : str
        Class of work.

    Returns
    -------
    ndarray
        Work in each hour [min].

    References
    ----------
    NIOSH 2017-127, sample work/rest schedule: normal clothes, fit, rested, under 40, 30 % humidity, moving air. For
    humid, sunny or unused people take a column heavier.

    Examples
    --------
    >>> [int(m) for m in niosh_work_min([34.0, 37.8, 44.0], "heavy")]
    [60, 30, 0]
    """
    row = np.searchsorted(_NIOSH_UPPER_DEGC, np.asarray(air_degc, dtype=float), "left")
    return np.asarray(np.take(_NIOSH_ON_MIN[work], row), dtype=float)


def volunteer_rule(air_degc: float, *, arms: bool = False, sun_or_humid: bool = False) -> HeatRule:
    """Bout and rest of mixed volunteers by air temperature, stricter than tables for workers.

    20/40 min below 26 degC, 15/45 to 29, 10/50 to 32, then no pedalling and cranking for the essential only

    Parameters
    ----------
    air_degc : float
        Air temperature [degC].
    arms : bool
        True at a hand crank.
    sun_or_humid : bool
        True takes the next stricter step.

    Returns
    -------
    HeatRule
        Longest bout and least rest.

    References
    ----------
    Judgement.

    Examples
    --------
    >>> volunteer_rule(27.0).on_min, volunteer_rule(33.0).on_min, volunteer_rule(33.0, arms=True).on_min
    (15, 0, 10)
    """
    step = int(np.searchsorted(_VOLUNTEER_EDGES_DEGC, air_degc, "right")) + int(sun_or_humid)
    last = len(_VOLUNTEER_STEPS) - 1
    if arms and step == last:
        return _HOT_CRANKING
    return _VOLUNTEER_STEPS[min(step, last)]


def heat_rule(
    metabolic_w: float,
    air_degc: float,
    wbgt_degc: float | None = None,
    *,
    arms: bool = False,
    sun_or_humid: bool = False,
) -> HeatRule:
    """Bout and rest in the heat: the volunteers' rule, and the globe temperature's limit where it is stricter.

    Parameters
    ----------
    metabolic_w : float
        Metabolic rate while turning, whole body [W].
    air_degc : float
        Air temperature [degC].
    wbgt_degc : float, optional
        Wet-bulb globe temperature where known [degC].
    arms : bool
        True at a hand crank.
    sun_or_humid : bool
        True takes the next stricter step of the volunteers' rule.

    Returns
    -------
    HeatRule
        Longest bout and least rest; volunteers count as not acclimatised.

    References
    ----------
    `volunteer_rule`, `heat_fraction`.

    Examples
    --------
    >>> heat_rule(430.0, 27.0, 29.0)
    HeatRule(on_min=7, off_min=53, essential_only=False)
    """
    rule = volunteer_rule(air_degc, arms=arms, sun_or_humid=sun_or_humid)
    if wbgt_degc is None:
        return rule
    on_min = int(HOUR_MIN * float(heat_fraction(metabolic_w, wbgt_degc)))
    if on_min >= rule.on_min:
        return rule
    return HeatRule(on_min, HOUR_MIN - on_min, rule.essential_only)


def ramp_up_fraction(day: npt.ArrayLike) -> FloatArray:
    """Share of full effort on the first days in the heat: 20 % on day 1 and 20 % more each day.

    Parameters
    ----------
    day : array_like
        Day in the heat, 1 is the first.

    Returns
    -------
    ndarray
        Share [-].

    References
    ----------
    NIOSH 2016-106, acclimatisation of new workers.

    Examples
    --------
    >>> [round(float(f), 1) for f in ramp_up_fraction([1, 3, 5, 9])]
    [0.2, 0.6, 1.0, 1.0]
    """
    return np.asarray(np.clip(RAMP_UP_PER_DAY * np.asarray(day, dtype=float), 0.0, 1.0))
