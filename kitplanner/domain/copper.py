"""Copper: its resistivity and how its resistance grows with temperature."""

from __future__ import annotations

from kitplanner.domain.units import Values

# IEC 60028: 100 % IACS copper at 20 degC [ohm.m].
COPPER_OHM_M = 1.7241e-8
# IEC 60028 (1925): temperature coefficient of annealed copper at 20 degC, per kelvin.
COPPER_PER_K = 0.00393


def copper_ohm(ohm_20: Values, copper_degc: Values) -> Values:
    """Resistance of copper at a temperature: R = R20 (1 + 0.00393 (T - 20)).

    Parameters
    ----------
    ohm_20 : float or array
        Resistance at 20 degC [ohm].
    copper_degc : float or array
        Temperature of the copper [degC].

    Returns
    -------
    float or array
        Resistance at that temperature [ohm].

    References
    ----------
    IEC 60028, International standard of resistance for copper, 1925.

    Examples
    --------
    >>> round(copper_ohm(1.5, 80.0), 3)
    1.854
    """
    return ohm_20 * (1.0 + COPPER_PER_K * (copper_degc - 20.0))
