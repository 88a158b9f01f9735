"""Unit conversions: the only place where a factor between two units stands.

Inside the program energy is Wh, power W, time minutes, temperature degrees Celsius, mass kg; speed of
rotation is rpm in names and rad/s inside the equations of the machine.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

Values = float | npt.NDArray[np.float64]

J_PER_WH = 3600.0
WH_PER_J = 1.0 / J_PER_WH
MINUTES_PER_HOUR = 60.0
MINUTES_PER_DAY = 1440
# International pound, foot and inch, exact by the 1959 agreement (NIST Special Publication 811, appendix B).
KG_PER_LB = 0.45359237
M_PER_FT = 0.3048
CM_PER_IN = 2.54
# Thermochemical calorie, exact (NIST Special Publication 811, appendix B.8).
J_PER_KCAL = 4184.0
RAD_S_PER_RPM = 2.0 * math.pi / 60.0
MA_PER_A = 1000.0
M2_PER_MM2 = 1e-6
M_PER_MM = 1e-3
# Absolute zero on the Celsius scale, exact (BIPM, SI brochure, 9th edition, 2019).
ZERO_DEGC_IN_K = 273.15


def wh_from_mah(charge_mah: Values, volts_v: Values) -> Values:
    """Energy of a charge at a nominal voltage: E = Q V.

    Parameters
    ----------
    charge_mah : float or array
        Charge [mAh].
    volts_v : float or array
        Nominal voltage [V].

    Returns
    -------
    float or array
        Energy [Wh].

    Examples
    --------
    >>> round(wh_from_mah(4000.0, 3.85), 6)
    15.4
    """
    return charge_mah * volts_v / MA_PER_A


def mah_from_wh(energy_wh: Values, volts_v: Values) -> Values:
    """Charge that holds an energy at a nominal voltage: Q = E / V.

    Parameters
    ----------
    energy_wh : float or array
        Energy [Wh].
    volts_v : float or array
        Nominal voltage [V].

    Returns
    -------
    float or array
        Charge [mAh].

    Examples
    --------
    >>> round(mah_from_wh(15.4, 3.85), 6)
    4000.0
    """
    return energy_wh / volts_v * MA_PER_A


def rad_s_from_rpm(rpm: Values) -> Values:
    """Angular speed of a turning speed.

    Parameters
    ----------
    rpm : float or array
        Turning speed [rpm].

    Returns
    -------
    float or array
        Angular speed [rad/s].

    Examples
    --------
    >>> round(rad_s_from_rpm(2400.0), 3)
    251.327
    """
    return rpm * RAD_S_PER_RPM


def rpm_from_rad_s(speed_rad_s: Values) -> Values:
    """Turning speed of an angular speed.

    Parameters
    ----------
    speed_rad_s : float or array
        Angular speed [rad/s].

    Returns
    -------
    float or array
        Turning speed [rpm].

    Examples
    --------
    >>> round(rpm_from_rad_s(rad_s_from_rpm(75.0)), 9)
    75.0
    """
    return speed_rad_s / RAD_S_PER_RPM


def minutes_from_hours(time_h: Values) -> Values:
    """Minutes of a time in hours.

    Parameters
    ----------
    time_h : float or array
        Time [h].

    Returns
    -------
    float or array
        Time [min].

    Examples
    --------
    >>> minutes_from_hours(1.5)
    90.0
    """
    return time_h * MINUTES_PER_HOUR


def hours_from_minutes(time_min: Values) -> Values:
    """Hours of a time in minutes.

    Parameters
    ----------
    time_min : float or array
        Time [min].

    Returns
    -------
    float or array
        Time [h].

    Examples
    --------
    >>> hours_from_minutes(90.0)
    1.5
    """
    return time_min / MINUTES_PER_HOUR


def minutes_per_wh(power_w: Values) -> Values:
    """Minutes that a power needs for one watt-hour.

    Parameters
    ----------
    power_w : float or array
        Power [W].

    Returns
    -------
    float or array
        Time for one watt-hour [min].

    Examples
    --------
    >>> minutes_per_wh(30.0)
    2.0
    """
    return MINUTES_PER_HOUR / power_w


def kg_from_lb(mass_lb: Values) -> Values:
    """Mass in kilograms of a mass in pounds.

    Parameters
    ----------
    mass_lb : float or array
        Mass [lb].

    Returns
    -------
    float or array
        Mass [kg].

    Examples
    --------
    >>> round(kg_from_lb(165.3467), 3)
    75.0
    """
    return mass_lb * KG_PER_LB


def lb_from_kg(mass_kg: Values) -> Values:
    """Mass in pounds of a mass in kilograms.

    Parameters
    ----------
    mass_kg : float or array
        Mass [kg].

    Returns
    -------
    float or array
        Mass [lb].

    Examples
    --------
    >>> round(lb_from_kg(75.0), 4)
    165.3467
    """
    return mass_kg / KG_PER_LB


def in_from_cm(length_cm: Values) -> Values:
    """Length in inches of a length in centimetres.

    Parameters
    ----------
    length_cm : float or array
        Length [cm].

    Returns
    -------
    float or array
        Length [in].

    Examples
    --------
    >>> in_from_cm(127.0)
    50.0
    """
    return length_cm / CM_PER_IN


def j_from_wh(energy_wh: Values) -> Values:
    """Energy in joules of an energy in watt-hours.

    Parameters
    ----------
    energy_wh : float or array
        Energy [Wh].

    Returns
    -------
    float or array
        Energy [J].

    Examples
    --------
    >>> j_from_wh(0.5)
    1800.0
    """
    return energy_wh * J_PER_WH


def wh_from_j(energy_j: Values) -> Values:
    """Energy in watt-hours of an energy in joules.

    Parameters
    ----------
    energy_j : float or array
        Energy [J].

    Returns
    -------
    float or array
        Energy [Wh].

    Examples
    --------
    >>> wh_from_j(1800.0)
    0.5
    """
    return energy_j / J_PER_WH


def kelvin_from_degc(temperature_degc: Values) -> Values:
    """Absolute temperature of a Celsius temperature.

    Parameters
    ----------
    temperature_degc : float or array
        Temperature [degC].

    Returns
    -------
    float or array
        Temperature [K].

    Examples
    --------
    >>> kelvin_from_degc(27.0)
    300.15
    """
    return temperature_degc + ZERO_DEGC_IN_K


def minutes_of_day(clock_time: str) -> int:
    """Minutes since midnight of a clock time "HH:MM" from 00:00 to 24:00.

    Parameters
    ----------
    clock_time : str
        Clock time.

    Returns
    -------
    int
        Minutes since midnight [min].

    Raises
    ------
    ValueError
        When the text is not a clock time.

    Examples
    --------
    >>> minutes_of_day("21:30")
    1290
    """
    hours, colon, minutes = clock_time.partition(":")
    two_digits = len(hours) == 2 and len(minutes) == 2 and (hours + minutes).isascii() and (hours + minutes).isdigit()
    if not colon or not two_digits or int(minutes) > 59 or int(hours) * 60 + int(minutes) > MINUTES_PER_DAY:
        raise ValueError(f'"{clock_time}" is not a clock time; write it as HH:MM from 00:00 to 24:00.')
    return int(hours) * 60 + int(minutes)


def clock(time_min: float) -> str:
    """Clock time "HH:MM" of minutes since midnight, rounded to the minute.

    Parameters
    ----------
    time_min : float
        Minutes since midnight, from 0 to 1440 [min].

    Returns
    -------
    str
        Clock time.

    Raises
    ------
    ValueError
        When the minutes lie outside the day.

    Examples
    --------
    >>> clock(1290), clock(1440)
    ('21:30', '24:00')
    """
    whole = round(time_min)
    if not 0 <= whole <= MINUTES_PER_DAY:
        raise ValueError(f"{time_min} minutes lie outside the day; it runs from 0 to {MINUTES_PER_DAY} minutes.")
    return f"{whole // 60:02d}:{whole % 60:02d}"
