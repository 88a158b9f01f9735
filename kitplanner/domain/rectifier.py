"""Rectifiers and blocking diodes: what they drop and what they heat.

A DC machine turned one way needs one blocking diode; a bridge only buys either direction. The diode is
mandatory before any battery or large capacitor: without it the battery drives the crank.
Valid from 10 mA to the rated current at 27 degC.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from kitplanner.domain.stage import Flow
from kitplanner.domain.units import Values

# CODATA 2018 exact constants (BIPM SI brochure, 9th edition): k = 1.380649e-23 J/K, e = 1.602176634e-19 C.
THERMAL_V_27_DEGC = 1.380649e-23 * 300.15 / 1.602176634e-19


def diode_v(current_a: Values, saturation_a: float, ideality: float, series_ohm: float) -> Values:
    """Forward voltage of one diode: Vf = n Vt ln(1 + I / Is) + rs I; zero for a reversed current.

    Parameters
    ----------
    current_a : float or array
        Forward current [A].
    saturation_a : float
        Saturation current [A].
    ideality : float
        Ideality factor [-].
    series_ohm : float
        Series resistance [ohm].

    Returns
    -------
    float or array
        Forward voltage at 27 degC [V].

    References
    ----------
    Shockley, The theory of p-n junctions in semiconductors, Bell System Technical Journal 28 (1949) 435-489.

    Examples
    --------
    >>> round(float(diode_v(0.3, 1.2e-6, 1.05, 0.08)), 4)
    0.3616
    """
    amps = np.maximum(current_a, 0.0)
    volts: Values = (ideality * THERMAL_V_27_DEGC) * np.log1p(amps * (1.0 / saturation_a)) + series_ohm * amps
    return volts


@dataclass(frozen=True)
class Diode:
    """`series` equal diodes in series with the current: 1 blocking diode, 2 a bridge.

    The default is a 1 A Schottky diode of the 1N5819 class (shape from memory; data sheet maximum 0.60 V at 1 A).
    """

    series: int = 1
    saturation_a: float = 1.2e-6
    ideality: float = 1.05
    series_ohm: float = 0.08
    name: str = "diode"

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the diodes for volts and amps before them."""
        drop = diode_v(in_a, self.saturation_a, self.ideality, self.series_ohm)
        return in_v - self.series * drop, in_a

    def loss_w(self, at: Flow) -> Values:
        """Heat of all diodes [W]: k Vf I."""
        return self.series * diode_v(at.in_a, self.saturation_a, self.ideality, self.series_ohm) * at.in_a


@dataclass(frozen=True)
class SynchronousRectifier:
    """Transistors instead of diodes: `series` on-resistances in the current path and a quiescent current."""

    series: int = 2
    on_ohm: float = 0.010
    quiescent_a: float = 0.0
    name: str = "synchronous rectifier"

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the transistors for volts and amps before them."""
        out_a = in_a - self.quiescent_a
        return in_v - self.series * self.on_ohm * out_a, out_a

    def loss_w(self, at: Flow) -> Values:
        """Heat of the transistors and their control [W]: k Rds I^2 + Vin Iq."""
        return self.series * self.on_ohm * at.out_a * at.out_a + at.in_v * self.quiescent_a


# Typical constants (shape from memory): one 1N5819-class Schottky and one 1N5404-class silicon diode.
SCHOTTKY = Diode(1, 1.2e-6, 1.05, 0.08, "Schottky diode")
SILICON = Diode(1, 11.5e-9, 1.8, 0.05, "silicon diode")
