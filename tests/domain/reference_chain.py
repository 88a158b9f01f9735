"""The same laws once more, written backwards for one point with `math` and solved with scipy's brentq.

Independent of the code under test in direction (from the load to the crank), in unknowns and in solver; it
shares with it only the constants of a chain "diodes, regulator or converter, cable".
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from scipy.optimize import brentq, minimize_scalar

from kitplanner.domain.chain import Cable, Chain, Diode, LinearRegulator, SwitchingConverter

VT = 1.380649e-23 * 300.15 / 1.602176634e-19


@dataclass(frozen=True)
class Reference:
    """One solved point."""

    generator_a: float
    in_v: float
    plug_v: float
    plug_a: float
    torque_nm: float
    human_w: float


def diode_v(diode: Diode, amps: float) -> float:
    """Forward voltage of all diodes."""
    amps = max(amps, 0.0)
    return diode.series * (diode.ideality * VT * math.log1p(amps / diode.saturation_a) + diode.series_ohm * amps)


def emf_v(chain: Chain, rpm: float) -> float:
    """Volts behind the brushes."""
    return chain.machine.ke_v_s * chain.gear.ratio * rpm * math.pi / 30.0 - chain.machine.vb_v


def effort(chain: Chain, rpm: float, amps: float) -> tuple[float, float]:
    """Torque at the crank and human watts for a generator current."""
    crank = rpm * math.pi / 30.0
    machine, gear = chain.machine, chain.gear
    torque = gear.ratio * (machine.ke_v_s * amps + machine.tc_nm + machine.b_nm_s * gear.ratio * crank) / gear.eta
    return torque + gear.drag_nm, (torque + gear.drag_nm) * crank


def parts(chain: Chain) -> tuple[Diode, LinearRegulator | SwitchingConverter, float]:
    """Diode, regulating stage and cable resistance of a chain of these three."""
    diode, regulator, cable = chain.stages
    assert isinstance(diode, Diode)
    assert isinstance(regulator, LinearRegulator | SwitchingConverter)
    assert isinstance(cable, Cable)
    return diode, regulator, cable.loop_ohm


def converter_in_w(converter: SwitchingConverter, in_v: float, amps: float) -> float:
    """Input watts of a converter for an output current."""
    loss = converter.a0_w + converter.a1_w_per_v * in_v
    loss += (converter.b0_v + converter.b1_v_per_v * in_v) * amps + converter.c_ohm * amps * amps
    return converter.output_v * amps + loss


def with_converter(chain: Chain, rpm: float, amps: float, top_a: float | None = None) -> Reference | None:
    """Fixed plug current behind a converter; None where the load collapses the chain.

    `top_a` replaces the search for the current of greatest power, when the caller knows a bound.
    """
    diode, converter, cable_ohm = parts(chain)
    assert isinstance(converter, SwitchingConverter)
    emf, resistance = emf_v(chain, rpm), chain.machine.ra_ohm

    def volts(current: float) -> float:
        return emf - resistance * current - diode_v(diode, current)

    def surplus(current: float) -> float:
        in_v = volts(current)
        return current * in_v - converter_in_w(converter, in_v, amps)

    if top_a is None:
        peak = minimize_scalar(lambda i: -surplus(i), bounds=(0.0, emf / resistance), method="bounded")
        top_a = float(peak.x)
    if surplus(top_a) < 0.0:
        return None
    current = float(brentq(surplus, 0.0, top_a, xtol=1e-15, rtol=8.9e-16))
    torque, human = effort(chain, rpm, current)
    return Reference(current, volts(current), converter.output_v - cable_ohm * amps, amps, torque, human)


def with_regulator(chain: Chain, rpm: float, amps: float) -> Reference:
    """Fixed plug current behind a linear regulator, in or out of regulation."""
    diode, regulator, cable_ohm = parts(chain)
    assert isinstance(regulator, LinearRegulator)
    emf, resistance = emf_v(chain, rpm), chain.machine.ra_ohm
    current = amps + regulator.reference_v / regulator.r1_ohm + regulator.adjust_a
    in_v = emf - resistance * current - diode_v(diode, current)
    set_v = regulator.reference_v * (1.0 + regulator.r2_ohm / regulator.r1_ohm) + regulator.adjust_a * regulator.r2_ohm
    out_v = set_v
    if in_v - set_v < regulator.dropout_v + regulator.dropout_ohm * current:
        divider_ohm = regulator.r1_ohm + regulator.r2_ohm

        def excess(out: float) -> float:
            drawn = amps + out / divider_ohm
            before = emf - resistance * drawn - diode_v(diode, drawn)
            return before - regulator.dropout_v - regulator.dropout_ohm * drawn - out

        out_v = float(brentq(excess, -100.0, set_v, xtol=1e-15, rtol=8.9e-16))
        current = amps + out_v / divider_ohm
        in_v = emf - resistance * current - diode_v(diode, current)
    torque, human = effort(chain, rpm, current)
    return Reference(current, in_v, out_v - cable_ohm * amps, amps, torque, human)


def held(chain: Chain, rpm: float, hold_v: float, limit_a: float) -> Reference:
    """A device behind a linear regulator that cuts its current to hold its input voltage."""
    if with_regulator(chain, rpm, limit_a).plug_v >= hold_v:
        return with_regulator(chain, rpm, limit_a)
    amps = float(
        brentq(lambda i: with_regulator(chain, rpm, i).plug_v - hold_v, 0.0, limit_a, xtol=1e-15, rtol=8.9e-16)
    )
    return with_regulator(chain, rpm, amps)
