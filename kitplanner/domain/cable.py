"""Cables and contacts: resistance from wire size, length, temperature and the contacts in the loop."""

from __future__ import annotations

import math
from dataclasses import dataclass

from kitplanner.domain.copper import COPPER_OHM_M, copper_ohm
from kitplanner.domain.stage import Flow
from kitplanner.domain.units import M2_PER_MM2, M_PER_MM, Values

# Contacts of a USB loop and the resistance of each (from memory).
USB_CONTACTS = 4
CONTACT_OHM = 0.030
# USB Type-C cable assemblies (IEC 62680-1-3): at most 500 mV on VBUS and 250 mV on ground at 3 A, contacts included.
TYPE_C_LOOP_OHM = (0.500 + 0.250) / 3.0
# IEC 60228:2004 table 3, class 5, plain wires: greatest resistance at 20 degC [ohm/m] by area [mm2].
IEC_60228_CLASS_5_OHM_PER_M = ((0.5, 39.0e-3), (0.75, 26.0e-3), (1.0, 19.5e-3), (1.5, 13.3e-3), (2.5, 7.98e-3))


@dataclass(frozen=True)
class Cable:
    """A resistance in the current's whole way there and back [ohm]."""

    loop_ohm: float
    name: str = "cable"

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps at the far end for volts and amps at the near end."""
        return in_v - self.loop_ohm * in_a, in_a

    def loss_w(self, at: Flow) -> Values:
        """Heat of the cable [W]: R I^2."""
        return self.loop_ohm * at.in_a * at.in_a


def awg_diameter_mm(awg: float) -> float:
    """Diameter of a solid wire by its AWG number: d = 0.127 mm * 92^((36 - n) / 39).

    Parameters
    ----------
    awg : float
        AWG number; 0, -1, -2, -3 stand for 1/0 to 4/0 [-].

    Returns
    -------
    float
        Diameter [mm].

    References
    ----------
    ASTM B258-02, Standard specification for standard nominal diameters of AWG sizes of solid round wires.

    Examples
    --------
    >>> round(awg_diameter_mm(24), 4)
    0.5106
    """
    return float(0.127 * 92.0 ** ((36.0 - awg) / 39.0))


def awg_area_mm2(awg: float) -> float:
    """Cross-section of a solid wire by its AWG number.

    Parameters
    ----------
    awg : float
        AWG number [-].

    Returns
    -------
    float
        Cross-section [mm2].

    Examples
    --------
    >>> round(awg_area_mm2(24), 4)
    0.2047
    """
    return math.pi * awg_diameter_mm(awg) ** 2 / 4.0


def conductor_ohm_per_m(area_mm2: float, copper_degc: float = 20.0) -> float:
    """Resistance of one copper conductor per metre: R' = rho / A, warmed.

    Parameters
    ----------
    area_mm2 : float
        Cross-section [mm2].
    copper_degc : float
        Temperature of the copper [degC].

    Returns
    -------
    float
        Resistance per metre [ohm/m].

    References
    ----------
    IEC 60028 (100 % IACS); stranded wire runs some percent higher, see IEC 60228 class 5.

    Examples
    --------
    >>> round(conductor_ohm_per_m(awg_area_mm2(24)), 5)
    0.08421
    """
    cold_ohm = COPPER_OHM_M / (area_mm2 * M2_PER_MM2)
    return float(copper_ohm(cold_ohm, copper_degc))


def loop_ohm(
    ohm_per_m: float, length_m: float, contacts: int = USB_CONTACTS, contact_ohm: float = CONTACT_OHM
) -> float:
    """Resistance there and back with contacts: R = 2 L R' + nc Rc.

    Parameters
    ----------
    ohm_per_m : float
        Resistance of one conductor per metre [ohm/m].
    length_m : float
        Length of the cable [m].
    contacts : int
        Contacts in the loop [-].
    contact_ohm : float
        Resistance of one contact [ohm].

    Returns
    -------
    float
        Loop resistance [ohm].

    Examples
    --------
    >>> round(loop_ohm(conductor_ohm_per_m(awg_area_mm2(28)), 1.0), 4)
    0.5458
    """
    return 2.0 * length_m * ohm_per_m + contacts * contact_ohm


def wire_diameter_mm(area_mm2: float) -> float:
    """Diameter of a round conductor of a cross-section.

    Parameters
    ----------
    area_mm2 : float
        Cross-section [mm2].

    Returns
    -------
    float
        Diameter [mm].

    Examples
    --------
    >>> round(wire_diameter_mm(0.5), 4)
    0.7979
    """
    return 2.0 * math.sqrt(area_mm2 * M2_PER_MM2 / math.pi) / M_PER_MM
