"""A station's chain of parts, and the march through it.

At a given cadence everything behind the generator is an explicit function of the generator's current: the
march takes volts and amps from stage to stage up to the plug. So every question about a chain is one root
in that current (`chain_solver`), whatever the stages and their order.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.gear import GearBox
from kitplanner.domain.machine import DcMachine, drag_torque_nm
from kitplanner.domain.regulator import LinearRegulator, divider_band_v
from kitplanner.domain.roots import BoolArray, FloatArray
from kitplanner.domain.stage import Flow, Stage
from kitplanner.domain.units import rad_s_from_rpm
from kitplanner.domain.usb_sink import USB_HIGH_V

# Outputs between these are meant for USB; vSafe5V ends at 5.5 V (USB Power Delivery specification, from memory).
_FIVE_VOLT_CLASS_V = (4.4, 5.5)


@dataclass(frozen=True)
class Comfort:
    """Cadence band [rpm] and greatest crank torque [N.m] that the person keeps up."""

    low_rpm: float = 0.0
    high_rpm: float = math.inf
    torque_max_nm: float = math.inf


@dataclass(frozen=True)
class Chain:
    """Machine, gear and stages of one station in the order of the current, with the comfort of its drive."""

    machine: DcMachine
    gear: GearBox
    stages: tuple[Stage, ...] = ()
    comfort: Comfort = Comfort()

    @property
    def stage_names(self) -> tuple[str, ...]:
        """Names of all steps: gear, friction, copper, then the stages."""
        return ("gear", "friction", "copper", *(stage.name for stage in self.stages))

    @property
    def has_converter(self) -> bool:
        """Whether a load can collapse the chain, because a switching converter draws constant power."""
        return any(isinstance(stage, SwitchingConverter) for stage in self.stages)


def source_v(chain: Chain, rpm: FloatArray) -> FloatArray:
    """Open-circuit volts of the generator behind its brushes at a crank cadence: Ke N w - Vb.

    Parameters
    ----------
    chain : Chain
        The chain.
    rpm : array
        Cadence of the crank [rpm].

    Returns
    -------
    array
        Open-circuit voltage [V].

    Examples
    --------
    >>> chain = Chain(DcMachine(0.0215, 4.0), GearBox(30.0))
    >>> source_v(chain, np.array([135.0])).round(3).tolist()
    [9.118]
    """
    machine = chain.machine
    return np.asarray(rad_s_from_rpm(rpm), np.float64) * (machine.ke_v_s * chain.gear.ratio) - machine.vb_v


def human_cost(chain: Chain, rpm: FloatArray) -> tuple[FloatArray, FloatArray, float, FloatArray]:
    """Crank power and torque are affine in the generator's current: P = p0 + p1 I, T = t0 + t1 I.

    Parameters
    ----------
    chain : Chain
        The chain.
    rpm : array
        Cadence of the crank [rpm].

    Returns
    -------
    p0, p1, t1, t0 : arrays and float
        Power without current [W] and per ampere [W/A], torque per ampere [N.m/A] and without current [N.m].

    Examples
    --------
    >>> chain = Chain(DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6), GearBox(40.0, 0.80, 0.08))
    >>> p0, p1, t1, t0 = human_cost(chain, np.array([60.0]))
    >>> round(float(p0[0] + p1[0] * 0.5298), 3)
    9.487
    """
    crank_rad_s = np.asarray(rad_s_from_rpm(rpm), np.float64)
    gear = chain.gear
    drag_nm = np.asarray(drag_torque_nm(chain.machine, gear.ratio * crank_rad_s), np.float64)
    t0 = (gear.ratio / gear.eta) * drag_nm + gear.drag_nm
    t1 = gear.ratio * chain.machine.ke_v_s / gear.eta
    return t0 * crank_rad_s, t1 * crank_rad_s, t1, t0


def march(chain: Chain, emf_v: FloatArray, current_a: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Volts and amps at the plug for a generator current, by the laws of the stages one after the other.

    Parameters
    ----------
    chain : Chain
        The chain.
    emf_v : array
        Open-circuit voltage behind the brushes, see `source_v` [V].
    current_a : array
        Current of the generator [A].

    Returns
    -------
    plug_v, plug_a : arrays
        Voltage [V] and current [A] at the plug.

    Examples
    --------
    >>> from kitplanner.domain.cable import Cable
    >>> chain = Chain(DcMachine(0.02, 4.0), GearBox(30.0), (Cable(0.5),))
    >>> [round(float(value[0]), 3) for value in march(chain, np.array([8.0]), np.array([0.2]))]
    [7.1, 0.2]
    """
    volts = emf_v - chain.machine.ra_ohm * current_a
    amps = current_a
    for stage in chain.stages:
        volts, amps = stage.forward(volts, amps)  # type: ignore[assignment]
    return volts, amps


def flows(chain: Chain, emf_v: FloatArray, current_a: FloatArray) -> tuple[Flow, ...]:
    """Volts and amps before and behind every stage for a generator current.

    Parameters
    ----------
    chain : Chain
        The chain.
    emf_v : array
        Open-circuit voltage behind the brushes [V].
    current_a : array
        Current of the generator [A].

    Returns
    -------
    tuple of Flow
        One per stage, in order.

    Examples
    --------
    >>> from kitplanner.domain.cable import Cable
    >>> chain = Chain(DcMachine(0.02, 4.0), GearBox(30.0), (Cable(0.5), Cable(1.0)))
    >>> float(flows(chain, np.array([8.0]), np.array([0.2]))[1].out_v[0])
    6.9
    """
    volts = emf_v - chain.machine.ra_ohm * current_a
    amps = current_a
    out: list[Flow] = []
    for stage in chain.stages:
        next_v, next_a = stage.forward(volts, amps)
        out.append(Flow(volts, amps, next_v, next_a))
        volts, amps = next_v, next_a  # type: ignore[assignment]
    return tuple(out)


def regulating_stage(chain: Chain) -> int | None:
    """Index of the first stage that sets a voltage, before which a panel meter hangs; None without one.

    Parameters
    ----------
    chain : Chain
        The chain.

    Returns
    -------
    int or None
        Index into the stages.

    Examples
    --------
    >>> from kitplanner.domain.cable import Cable
    >>> regulating_stage(Chain(DcMachine(0.02, 4.0), GearBox(30.0), (Cable(0.5), LinearRegulator())))
    1
    """
    for index, stage in enumerate(chain.stages):
        if isinstance(stage, LinearRegulator | SwitchingConverter):
            return index
    return None


def overvolted(chain: Chain, emf_v: FloatArray) -> BoolArray:
    """Whether the open circuit exceeds a part's rating, or the last output may exceed the USB ceiling.

    The output counts by the limits of the part alone, for outputs of the 5 V class; what the resistors'
    tolerance adds is told by `LinearRegulator.band_v`.

    Parameters
    ----------
    chain : Chain
        The chain.
    emf_v : array
        Open-circuit voltage behind the brushes [V].

    Returns
    -------
    array of bool
        True where something stands too many volts.

    References
    ----------
    USB 2.0 specification, section 7.2.1: 4.75 to 5.25 V at the source.

    Examples
    --------
    >>> overvolted(Chain(DcMachine(0.02, 4.0), GearBox(30.0), (LinearRegulator(),)), np.array([12.0, 45.0])).tolist()
    [False, True]
    """
    over: BoolArray = np.zeros(np.shape(emf_v), np.bool_)
    open_v = emf_v
    output_v = highest_v = 0.0
    for stage in chain.stages:
        if isinstance(stage, LinearRegulator):
            output_v, highest_v = stage.output_v, divider_band_v(stage.r1_ohm, stage.r2_ohm, 0.0, stage.reference_v)[1]
        elif isinstance(stage, SwitchingConverter):
            output_v = highest_v = stage.output_v
        else:
            continue
        over = over | (open_v > stage.rating_v)
        open_v = np.full_like(emf_v, output_v)
    low, high = _FIVE_VOLT_CLASS_V
    return over | (low <= output_v <= high and highest_v > USB_HIGH_V)
