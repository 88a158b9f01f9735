"""Energy devices use, from what people know about them: watts and hours, percent lost, times and minutes, lumens."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.domain.units import hours_from_minutes, wh_from_mah

FloatArray = npt.NDArray[np.float64]

LAMP_LM_PER_W = 100.0  # at lamp level; 80 for older power LEDs, 120-180 for newer ones
TWO_WAY_DUTY = (0.05, 0.05, 0.90)  # transmit, receive, standby: usual radio duty of data sheets


def wh_from_power(power_w: npt.ArrayLike, hours: npt.ArrayLike) -> FloatArray:
    """Energy of a power over hours.

    E = P t

    Parameters
    ----------
    power_w : array_like
        Power [W].
    hours : array_like
        Time [h].

    Returns
    -------
    ndarray
        Energy [Wh].

    References
    ----------
    Definition of the watt-hour.

    Examples
    --------
    >>> float(wh_from_power(0.5, 9.0))
    4.5
    """
    return np.asarray(np.asarray(power_w, dtype=float) * np.asarray(hours, dtype=float))


def wh_from_battery_fraction(used_fraction: npt.ArrayLike, battery_wh: npt.ArrayLike) -> FloatArray:
    """Energy of a share of a battery.

    E = f E_battery

    Parameters
    ----------
    used_fraction : array_like
        Share of the battery used; above 1 for more than one charge [-].
    battery_wh : array_like
        Capacity of the battery [Wh].

    Returns
    -------
    ndarray
        Energy [Wh].

    References
    ----------
    Definition of the state of charge.

    Examples
    --------
    >>> round(float(wh_from_battery_fraction(0.39, 15.4)), 2)
    6.01
    """
    return np.asarray(np.asarray(used_fraction, dtype=float) * np.asarray(battery_wh, dtype=float))


def wh_from_times(power_w: npt.ArrayLike, times: npt.ArrayLike, minutes_each: npt.ArrayLike) -> FloatArray:
    """Energy of something used several times for some minutes.

    E = P n t/60

    Parameters
    ----------
    power_w : array_like
        Power while in use [W].
    times : array_like
        How often [-].
    minutes_each : array_like
        How long each time [min].

    Returns
    -------
    ndarray
        Energy [Wh].

    References
    ----------
    Definition of the watt-hour.

    Examples
    --------
    >>> round(float(wh_from_times(0.5, 16.0, 5.0)), 3)
    0.667
    """
    minutes = np.asarray(times, dtype=float) * np.asarray(minutes_each, dtype=float)
    return np.asarray(np.asarray(power_w, dtype=float) * hours_from_minutes(minutes))


def power_from_loss_w(lost_fraction: npt.ArrayLike, battery_wh: npt.ArrayLike, hours: npt.ArrayLike) -> FloatArray:
    """Mean power of a device from the share of battery it lost in some hours, for instance overnight.

    P = f E_battery/t

    Parameters
    ----------
    lost_fraction : array_like
        Share of the battery lost [-].
    battery_wh : array_like
        Capacity of the battery [Wh].
    hours : array_like
        Time, above 0 [h].

    Returns
    -------
    ndarray
        Mean power [W].

    References
    ----------
    Definition of the state of charge. Draws differ three to one between phones, so one's own reading beats a table.

    Examples
    --------
    >>> round(float(power_from_loss_w(0.05, 15.4, 8.0)), 4)
    0.0963
    """
    return np.asarray(wh_from_battery_fraction(lost_fraction, battery_wh) / np.asarray(hours, dtype=float))


def duty_power_w(powers_w: npt.ArrayLike, shares: npt.ArrayLike = TWO_WAY_DUTY) -> FloatArray:
    """Mean power of a device that is in different states for shares of the time.

    P = sum P_i f_i

    Parameters
    ----------
    powers_w : array_like
        Power in each state along the last axis; for a two-way radio transmit, receive, standby [W].
    shares : array_like
        Share of the time in each state [-].

    Returns
    -------
    ndarray
        Mean power [W].

    References
    ----------
    Weighted mean; 5-5-90 is the duty of radio data sheets.

    Examples
    --------
    A hand-held radio drawing 1.4, 0.14 and 0.04 A from 7.4 V:

    >>> round(float(duty_power_w([7.4 * 1.4, 7.4 * 0.14, 7.4 * 0.04])), 4)
    0.8362
    """
    return np.asarray(np.sum(np.asarray(powers_w, dtype=float) * np.asarray(shares, dtype=float), axis=-1))


def lamp_power_w(lumens: npt.ArrayLike, lm_per_w: float = LAMP_LM_PER_W, eta_driver: float = 1.0) -> FloatArray:
    """Power of a lamp from its light.

    P = Phi/(eta_lamp eta_driver)

    Parameters
    ----------
    lumens : array_like
        Luminous flux [lm].
    lm_per_w : float
        Luminous efficacy [lm/W].
    eta_driver : float
        Efficiency of the driver, 1 where the efficacy is the whole lamp's [-].

    Returns
    -------
    ndarray
        Power [W].

    References
    ----------
    Definition of luminous efficacy.

    Examples
    --------
    >>> round(float(lamp_power_w(40.0, 80.0, 0.85)), 4)
    0.5882
    """
    return np.asarray(np.asarray(lumens, dtype=float) / (lm_per_w * eta_driver))


def battery_wh_from_label(charge_mah: float, volts_v: float) -> float:
    """Energy of a battery from the charge on its label, at the volts of its cell and never those of a plug.

    E = Q V

    Parameters
    ----------
    charge_mah : float
        Charge on the label [mAh].
    volts_v : float
        Nominal volts of the cell, 3.7 or 3.85 for Li-ion [V].

    Returns
    -------
    float
        Energy [Wh].

    References
    ----------
    Definition of the watt-hour.

    Examples
    --------
    >>> round(battery_wh_from_label(4000.0, 3.85), 2)
    15.4
    """
    return float(wh_from_mah(charge_mah, volts_v))
