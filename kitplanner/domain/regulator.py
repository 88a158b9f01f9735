"""Adjustable three-terminal linear regulator (LM317 class) with its divider, dropout, heat and tolerance.

R1 lies between output and adjustment pin, R2 between adjustment pin and ground. No pin goes to ground, so
all current but the adjustment current leaves through the output. Valid with an input capacitor fitted and
after some minutes of steady heat.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from kitplanner.domain.stage import Flow
from kitplanner.domain.units import Values

# LM317 data sheet (Texas Instruments SLVS044, STMicroelectronics), maximum ratings and characteristics.
JUNCTION_LIMIT_DEGC = 125.0
REFERENCE_V, REFERENCE_LOW_V, REFERENCE_HIGH_V = 1.25, 1.20, 1.30
ADJUST_TYPICAL_A, ADJUST_HIGH_A = 50e-6, 100e-6
LEAST_LOAD_WORST_A, LEAST_LOAD_TYPICAL_A = 0.010, 0.0035
# Below this headroom beyond dropout the adjustment current fades out, so that the current law has no step.
_EDGE_V = 1e-3

# IEC 60063:2015, series E24 (5 % tolerance), one decade (from memory).
E24 = (
    1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0, 2.2, 2.4, 2.7, 3.0,
    3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1,
)  # fmt: skip


@dataclass(frozen=True)
class LinearRegulator:
    """Divider [ohm], reference [V], adjustment current [A], dropout V0 + r I [V, ohm], thermal path [K/W], air [degC].

    `rating_v` is the greatest voltage the part stands; `tolerance_fraction` that of each resistor.
    """

    r1_ohm: float = 120.0
    r2_ohm: float = 360.0
    reference_v: float = 1.25
    adjust_a: float = ADJUST_TYPICAL_A
    dropout_v: float = 1.6
    dropout_ohm: float = 0.35
    theta_c_per_w: float = 50.0
    air_degc: float = 25.0
    rating_v: float = 40.0
    tolerance_fraction: float = 0.01
    name: str = "linear regulator"

    @property
    def output_v(self) -> float:
        """Set output [V]."""
        return float(divider_output_v(self.r1_ohm, self.r2_ohm, self.reference_v, self.adjust_a))

    def band_v(self) -> tuple[float, float]:
        """Lowest and highest output by the part's own limits and the resistors' tolerance [V]."""
        return divider_band_v(self.r1_ohm, self.r2_ohm, self.tolerance_fraction, self.reference_v)

    def headroom_v(self, at: Flow) -> Values:
        """Volts above what regulation needs: Vin - Vset - (V0 + r Iin); negative in dropout [V]."""
        return at.in_v - self.least_in_v(at.in_a)

    def least_in_v(self, in_a: Values) -> Values:
        """Least input that holds the output at an input current [V]."""
        return self.output_v + self.dropout_v + self.dropout_ohm * in_a

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the regulator; in dropout the divider draws Vo / (R1 + R2)."""
        headroom = in_v - self.least_in_v(in_a)
        out_v = self.output_v + np.minimum(headroom, 0.0)
        return out_v, in_a - self._divider_a(out_v, headroom)

    def _adjust_a(self, headroom_v: Values) -> Values:
        amps: Values = self.adjust_a * np.clip(headroom_v * (1.0 / _EDGE_V), 0.0, 1.0)
        return amps

    def _divider_a(self, out_v: Values, headroom_v: Values) -> Values:
        chain_ohm = self.r1_ohm + self.r2_ohm
        return (out_v + self.r1_ohm * self._adjust_a(headroom_v)) * (1.0 / chain_ohm)

    def die_w(self, at: Flow) -> Values:
        """Heat of the die alone, without the divider [W]."""
        adjust = self._adjust_a(self.headroom_v(at))
        upper_a = (at.out_v - adjust * self.r2_ohm) / (self.r1_ohm + self.r2_ohm)
        drop = at.in_v - at.out_v
        return drop * (at.in_a - adjust) + adjust * (drop + upper_a * self.r1_ohm)

    def divider_w(self, at: Flow) -> Values:
        """Heat of the two resistors [W]."""
        adjust = self._adjust_a(self.headroom_v(at))
        upper_a = (at.out_v - adjust * self.r2_ohm) / (self.r1_ohm + self.r2_ohm)
        return upper_a**2 * self.r1_ohm + (upper_a + adjust) ** 2 * self.r2_ohm

    def loss_w(self, at: Flow) -> Values:
        """Heat of die and divider [W]."""
        return self.die_w(at) + self.divider_w(at)

    def junction_degc(self, die_w: Values) -> Values:
        """Junction temperature [degC]: Ta + theta Pd."""
        return junction_degc(die_w, self.theta_c_per_w, self.air_degc)

    def hottest_in_v(self, in_a: Values) -> Values:
        """Input at which the junction reaches its limit in regulation at an input current [V]."""
        budget_w = (JUNCTION_LIMIT_DEGC - self.air_degc) / self.theta_c_per_w
        return self.output_v + (budget_w - self.adjust_a * self.reference_v) / in_a


def divider_output_v(r1_ohm: Values, r2_ohm: Values, reference_v: Values = 1.25, adjust_a: Values = 50e-6) -> Values:
    """Output set by the divider: Vout = Vref (1 + R2 / R1) + Iadj R2.

    Parameters
    ----------
    r1_ohm, r2_ohm : float or array
        Resistors from output to adjustment pin and from there to ground [ohm].
    reference_v : float or array
        Voltage across R1 [V].
    adjust_a : float or array
        Current out of the adjustment pin [A].

    Returns
    -------
    float or array
        Output voltage [V].

    References
    ----------
    LM317 data sheet (Texas Instruments SLVS044; STMicroelectronics LM217/LM317), application information.

    Examples
    --------
    >>> round(divider_output_v(120.0, 360.0), 3)
    5.018
    """
    return reference_v * (1.0 + r2_ohm / r1_ohm) + adjust_a * r2_ohm


def divider_band_v(
    r1_ohm: float, r2_ohm: float, tolerance_fraction: float = 0.0, reference_v: float = REFERENCE_V
) -> tuple[float, float]:
    """Lowest and highest output that the part's limits and the resistors' tolerance allow.

    Parameters
    ----------
    r1_ohm, r2_ohm : float
        Nominal resistors [ohm].
    tolerance_fraction : float
        Tolerance of each resistor; 0 gives the band of the part alone [-].
    reference_v : float
        Typical reference; its limits are 4 % below and above [V].

    Returns
    -------
    tuple of float
        Lowest and highest output [V].

    References
    ----------
    LM317 data sheet: reference 1.20 to 1.30 V, adjustment current 50 uA typical, 100 uA greatest.

    Examples
    --------
    >>> [round(volts, 3) for volts in divider_band_v(220.0, 680.0, 0.01)]
    [4.869, 5.468]
    """
    down, up = 1.0 - tolerance_fraction, 1.0 + tolerance_fraction
    low_reference = reference_v * REFERENCE_LOW_V / REFERENCE_V
    high_reference = reference_v * REFERENCE_HIGH_V / REFERENCE_V
    low = divider_output_v(r1_ohm * up, r2_ohm * down, low_reference, ADJUST_TYPICAL_A)
    high = divider_output_v(r1_ohm * down, r2_ohm * up, high_reference, ADJUST_HIGH_A)
    return float(low), float(high)


def junction_degc(die_w: Values, theta_c_per_w: float, air_degc: float) -> Values:
    """Junction temperature in steady heat: Tj = Ta + theta Pd.

    Parameters
    ----------
    die_w : float or array
        Heat of the die [W].
    theta_c_per_w : float
        Thermal resistance from junction to air [K/W].
    air_degc : float
        Air temperature [degC].

    Returns
    -------
    float or array
        Junction temperature [degC].

    References
    ----------
    LM317 data sheet: TO-220 without heat sink 50 K/W, junction at most 125 degC.

    Examples
    --------
    >>> round(junction_degc(1.178, 50.0, 25.0), 1)
    83.9
    """
    return air_degc + theta_c_per_w * die_w


def pick_divider(target_v: float, *, load_stays: bool = False, within_v: float = 0.020) -> tuple[float, float]:
    """Standard resistors for a target output: within 20 mV of it, then the least divider current that is enough.

    The divider alone carries the least load of the part: 10 mA at worst, 3.5 mA typical when the load is
    never unplugged.

    Parameters
    ----------
    target_v : float
        Wanted output [V].
    load_stays : bool
        Whether the load is never unplugged.
    within_v : float
        Greatest distance from the target [V].

    Returns
    -------
    tuple of float
        R1 and R2 [ohm].

    Raises
    ------
    ValueError
        When no pair of the series comes near enough.

    References
    ----------
    IEC 60063:2015, series E24; LM317 data sheet, least load current.

    Examples
    --------
    >>> pick_divider(5.0)
    (120.0, 360.0)
    """
    least_a = LEAST_LOAD_TYPICAL_A if load_stays else LEAST_LOAD_WORST_A
    values = np.array([mantissa * 10.0**decade for decade in (1, 2, 3) for mantissa in E24]).round(6)
    r1, r2 = np.meshgrid(values, values, indexing="ij")
    error_v = np.abs(np.asarray(divider_output_v(r1, r2)) - target_v)
    divider_a = REFERENCE_V / r1
    fits = (error_v <= within_v) & (divider_a >= least_a)
    if not fits.any():
        raise ValueError(f"No pair of E24 resistors sets {target_v:g} V within {within_v:g} V; choose another output.")
    order = np.lexsort((error_v[fits], divider_a[fits]))
    return float(r1[fits][order[0]]), float(r2[fits][order[0]])
