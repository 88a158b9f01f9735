"""Switching converter (buck or boost) by its loss law.

P_loss = (a0 + a1 Vin) + (b0 + b1 Vin) I + c I^2 with I the output current: control, gate and core losses;
diode share and switching edges; conduction. Valid in continuous conduction at one output voltage; refit the
constants for a module from three readings. Trap: a converter is a constant-power load, so one load has two
generator currents of which only the smaller is stable; `chain` stays on that branch.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from kitplanner.domain.stage import Flow
from kitplanner.domain.units import Values

_LEAST_DENOMINATOR_V = 1e-9


@dataclass(frozen=True)
class SwitchingConverter:
    """Output [V], loss law a0 [W], a1 [W/V], b0 [V], b1 [V/V], c [ohm], headroom, lock-out and rating [V]."""

    output_v: float = 5.10
    a0_w: float = 0.02
    a1_w_per_v: float = 0.002
    b0_v: float = 0.08
    b1_v_per_v: float = 0.008
    c_ohm: float = 0.06
    headroom_needed_v: float = 0.5
    lockout_v: float = 6.0
    rating_v: float = 40.0
    name: str = "converter"

    @property
    def least_in_v(self) -> float:
        """Least input at which the converter runs [V]: max(lock-out, Vo + headroom)."""
        return max(self.lockout_v, self.output_v + self.headroom_needed_v)

    def headroom_v(self, at: Flow) -> Values:
        """Volts above the least input; negative when the converter is off [V]."""
        return at.in_v - self.least_in_v

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the converter: the positive root of c I^2 + (b + Vo) I + a = Vin Iin.

        Written with the root in the denominator, so that it also holds for c = 0 and loses no digits.
        Below the least input the law goes on unchanged; the caller tests `headroom_v`.
        """
        linear = self.b1_v_per_v * in_v + (self.b0_v + self.output_v)
        surplus_w = in_v * in_a - (self.a1_w_per_v * in_v + self.a0_w)
        radicand = linear * linear + (4.0 * self.c_ohm) * surplus_w
        # Far below zero volts, where only a search looks, the denominator would vanish.
        out_a = 2.0 * surplus_w / np.maximum(linear + np.sqrt(np.maximum(radicand, 0.0)), _LEAST_DENOMINATOR_V)
        return np.full_like(out_a, self.output_v), out_a

    def loss_w(self, at: Flow) -> Values:
        """Heat of the converter [W]."""
        return converter_loss_w(self, at.in_v, at.out_a)


def converter_loss_w(converter: SwitchingConverter, in_v: Values, out_a: Values) -> Values:
    """Loss of a converter: (a0 + a1 Vin) + (b0 + b1 Vin) I + c I^2.

    Parameters
    ----------
    converter : SwitchingConverter
        Constants of the loss law.
    in_v : float or array
        Input voltage [V].
    out_a : float or array
        Output current [A].

    Returns
    -------
    float or array
        Heat of the converter [W].

    References
    ----------
    Erickson, Maksimovic, Fundamentals of Power Electronics, 2nd edition, 2001, chapters 3 and 4 (loss families, from
    memory); the quadratic form is the usual compaction.

    Examples
    --------
    >>> round(converter_loss_w(SwitchingConverter(), 10.12, 1.0), 4)
    0.2612
    """
    constant_w = converter.a0_w + converter.a1_w_per_v * in_v
    linear_v = converter.b0_v + converter.b1_v_per_v * in_v
    return constant_w + linear_v * out_a + converter.c_ohm * out_a * out_a


def converter_eta(converter: SwitchingConverter, in_v: Values, out_a: Values) -> Values:
    """Efficiency of a converter: Vo I / (Vo I + P_loss).

    Parameters
    ----------
    converter : SwitchingConverter
        Constants of the loss law.
    in_v : float or array
        Input voltage [V].
    out_a : float or array
        Output current, above zero [A].

    Returns
    -------
    float or array
        Power out over power in [-].

    Examples
    --------
    >>> round(converter_eta(SwitchingConverter(), 12.0, 1.0), 4)
    0.948
    """
    out_w = converter.output_v * out_a
    return out_w / (out_w + converter_loss_w(converter, in_v, out_a))


def best_output_a(converter: SwitchingConverter, in_v: Values) -> Values:
    """Output current at which a converter is most efficient: sqrt(a / c).

    Parameters
    ----------
    converter : SwitchingConverter
        Constants of the loss law; c above zero.
    in_v : float or array
        Input voltage [V].

    Returns
    -------
    float or array
        Most efficient output current [A].

    References
    ----------
    Derived here: the loss per ampere a / I + b + c I is least where its slope vanishes.

    Examples
    --------
    >>> round(float(best_output_a(SwitchingConverter(), 12.0)), 3)
    0.856
    """
    amps: Values = np.sqrt((converter.a0_w + converter.a1_w_per_v * in_v) / converter.c_ohm)
    return amps
