"""Sweat of people at work in the shade in light clothes: what the body must shed, what the air can take."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]

SKIN_DEGC = 35.0
LEWIS_K_PER_KPA = 16.5
# Film coefficient of moving air, share that light clothes let through, and dry heat exchange: judgements.
CONVECTION_W_M2_K, CLOTHING_FACTOR, DRY_W_M2_K = 5.0, 0.5, 5.2


def body_area_m2(mass_kg: npt.ArrayLike, height_cm: npt.ArrayLike) -> FloatArray:
    """Body surface.

    A = 0.007184 M^0.425 H^0.725

    Parameters
    ----------
    mass_kg : array_like
        Body mass [kg].
    height_cm : array_like
        Body height [cm].

    Returns
    -------
    ndarray
        Surface [m2].

    References
    ----------
    Du Bois D., Du Bois E. F., Archives of Internal Medicine 17 (1916) 863-871.

    Examples
    --------
    >>> round(float(body_area_m2(75.0, 172.0)), 3)
    1.879
    """
    mass, height = np.asarray(mass_kg, dtype=float), np.asarray(height_cm, dtype=float)
    return np.asarray(0.007184 * mass**0.425 * height**0.725)


def vapour_pressure_kpa(degc: npt.ArrayLike, humidity_fraction: npt.ArrayLike = 1.0) -> FloatArray:
    """Pressure of water vapour in air.

    p = phi 0.61094 exp(17.625 T/(T + 243.04))

    Parameters
    ----------
    degc : array_like
        Air temperature [degC].
    humidity_fraction : array_like
        Relative humidity [-].

    Returns
    -------
    ndarray
        Pressure [kPa].

    References
    ----------
    Magnus form, coefficients of Alduchov O. A., Eskridge R. E., Journal of Applied Meteorology 35 (1996) 601-609.

    Examples
    --------
    >>> round(float(vapour_pressure_kpa(20.0)), 2)
    2.33
    """
    t = np.asarray(degc, dtype=float)
    return np.asarray(np.asarray(humidity_fraction, dtype=float) * 0.61094 * np.exp(17.625 * t / (t + 243.04)))


def required_evaporation_w_m2(
    metabolic_w: npt.ArrayLike, power_w: npt.ArrayLike, area_m2: npt.ArrayLike, air_degc: npt.ArrayLike
) -> FloatArray:
    """Heat that sweat must carry off.

    E_req = (M - P)/A - h_dry (35 - T)

    Parameters
    ----------
    metabolic_w : array_like
        Metabolic rate, whole body [W].
    power_w : array_like
        Mechanical power [W].
    area_m2 : array_like
        Body surface [m2].
    air_degc : array_like
        Air temperature [degC].

    Returns
    -------
    ndarray
        Heat flow, not below 0 [W/m2].

    References
    ----------
    Heat balance of the body with skin at 35 degC; coefficients: see the module's constants.

    Examples
    --------
    >>> round(float(required_evaporation_w_m2(447.2, 75.0, 1.879, 30.0)), 1)
    172.1
    """
    made = (np.asarray(metabolic_w, dtype=float) - np.asarray(power_w, dtype=float)) / np.asarray(area_m2, dtype=float)
    return np.asarray(np.maximum(0.0, made - DRY_W_M2_K * (SKIN_DEGC - np.asarray(air_degc, dtype=float))))


def greatest_evaporation_w_m2(air_degc: npt.ArrayLike, humidity_fraction: npt.ArrayLike) -> FloatArray:
    """Heat that the air can take up as sweat.

    E_max = 16.5 h_c F (p_skin - p_air)

    Parameters
    ----------
    air_degc : array_like
        Air temperature [degC].
    humidity_fraction : array_like
        Relative humidity [-].

    Returns
    -------
    ndarray
        Heat flow, not below 0 [W/m2].

    References
    ----------
    Lewis relation (16.5 K/kPa, from memory); coefficients: see the module's constants.

    Examples
    --------
    >>> round(float(greatest_evaporation_w_m2(30.0, 0.6)), 0)
    127.0
    """
    difference = vapour_pressure_kpa(SKIN_DEGC) - vapour_pressure_kpa(air_degc, humidity_fraction)
    return np.asarray(np.maximum(0.0, LEWIS_K_PER_KPA * CONVECTION_W_M2_K * CLOTHING_FACTOR * difference))


def sweat_g_m2_h(required_w_m2: npt.ArrayLike, greatest_w_m2: npt.ArrayLike) -> FloatArray:
    """Sweat rate by the piece-wise equation.

    m = 147 + 1.527 E_req - 0.87 E_max, not below 0

    Parameters
    ----------
    required_w_m2 : array_like
        Evaporation required [W/m2].
    greatest_w_m2 : array_like
        Greatest evaporation [W/m2].

    Returns
    -------
    ndarray
        Sweat rate [g/m2/h].

    References
    ----------
    Gonzalez R. R. et al., Journal of Applied Physiology 107 (2009) 379-388; 15-46 degC, up to 450 W/m2, SEE below 100.

    Examples
    --------
    >>> round(float(sweat_g_m2_h(172.1, 126.9)), 1)
    299.4
    """
    rate = 147.0 + 1.527 * np.asarray(required_w_m2, dtype=float) - 0.87 * np.asarray(greatest_w_m2, dtype=float)
    return np.asarray(np.maximum(0.0, rate))


def sweat_shapiro_g_m2_h(required_w_m2: npt.ArrayLike, greatest_w_m2: npt.ArrayLike) -> FloatArray:
    """Sweat rate by Shapiro's equation, which predicts too much; kept for comparison.

    m = 27.9 E_req E_max^-0.455

    Parameters
    ----------
    required_w_m2 : array_like
        Evaporation required [W/m2].
    greatest_w_m2 : array_like
        Greatest evaporation, above 0 [W/m2].

    Returns
    -------
    ndarray
        Sweat rate [g/m2/h].

    References
    ----------
    Shapiro's equation as given by Gonzalez et al. 2009.

    Examples
    --------
    >>> round(float(sweat_shapiro_g_m2_h(172.1, 126.9)), 1)
    530.0
    """
    return np.asarray(27.9 * np.asarray(required_w_m2, dtype=float) * np.asarray(greatest_w_m2, dtype=float) ** -0.455)


def sweat_corrected_g_m2_h(required_w_m2: npt.ArrayLike, greatest_w_m2: npt.ArrayLike) -> FloatArray:
    """Sweat rate by Shapiro's equation with its correction.

    m = 147 exp(0.0012 m_Shapiro)

    Parameters
    ----------
    required_w_m2 : array_like
        Evaporation required [W/m2].
    greatest_w_m2 : array_like
        Greatest evaporation, above 0 [W/m2].

    Returns
    -------
    ndarray
        Sweat rate [g/m2/h].

    References
    ----------
    Gonzalez et al. 2009.

    Examples
    --------
    >>> round(float(sweat_corrected_g_m2_h(172.1, 126.9)), 1)
    277.7
    """
    return np.asarray(147.0 * np.exp(0.0012 * sweat_shapiro_g_m2_h(required_w_m2, greatest_w_m2)))
