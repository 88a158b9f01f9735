"""What a chain does at a solved generator current: every stage's watts, the failure states, the totals."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from kitplanner.domain.chain_model import Chain, flows, human_cost, overvolted, regulating_stage, source_v
from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.machine import drag_torque_nm, shaft_torque_nm
from kitplanner.domain.regulator import JUNCTION_LIMIT_DEGC, LinearRegulator
from kitplanner.domain.roots import BoolArray, FloatArray, IntArray
from kitplanner.domain.stage import Flow
from kitplanner.domain.units import Values, rad_s_from_rpm
from kitplanner.domain.usb_sink import ENTRY_TEST_V, HOLD_TOLERANCE_V, UsbSink

# Failure states of a chain, in the order in which they are told; `cold` belongs to the device's cell.
STATES = (
    "no_output",
    "dropout",
    "vin_low",
    "collapse",
    "vbus_low",
    "not_charging",
    "overtemp",
    "overvolt",
    "cadence_high",
    "torque_high",
)
# States in which the point has no numbers.
FAILED_STATES = ("no_output", "vin_low", "collapse")
# What keeps the current from being greater.
BINDINGS = ("current", "hold", "acceptance", "human", "torque", "nothing")
# Rounding of a root, relative to the limit it meets.
_ROUNDING = 1e-9
_NO_CURRENT_A = 1e-12


@dataclass(frozen=True)
class Solution:
    """Generator current per point (n,), what binds it, and the two ways of having none.

    Where the point has collapsed the current is that of the greatest plug current.
    """

    rpm: FloatArray
    current_a: FloatArray
    binding: IntArray
    collapsed: BoolArray
    no_output: BoolArray
    fails_entry: BoolArray


@dataclass(frozen=True)
class OperatingPoint:
    """A chain at one cadence or many; every array has the shape of the broadcast question.

    Failed points hold NaN and their states. `stage_*` are tuples with one array per step (gear, friction,
    copper, then the stages in order), volts and amps NaN where mechanical; they are worked out when first
    asked for. The losses and `plug_w` sum to `human_w`. `regulator_*` belong to the first stage that sets a
    voltage; `junction_degc` is NaN without a linear one and the hottest of several. `binding` indexes
    `BINDINGS`. `charges` is False where the current is too small to charge or the point has failed: then the
    charge counts as none. `greatest_plug_w` are the watts at which a collapsed point gives up, NaN elsewhere.
    """

    rpm: FloatArray
    human_w: FloatArray
    torque_nm: FloatArray
    generator_a: FloatArray
    emf_v: FloatArray
    plug_v: FloatArray
    plug_a: FloatArray
    plug_w: FloatArray
    binding: IntArray
    failed: BoolArray
    charges: BoolArray
    greatest_plug_w: FloatArray
    flags: Mapping[str, BoolArray]
    chain: Chain
    electric: tuple[Flow, ...]

    @property
    def has_state(self) -> BoolArray:
        """Where at least one failure state stands."""
        some: BoolArray = np.logical_or.reduce([self.flags[state] for state in STATES])
        return some

    @property
    def crank_to_plug_fraction(self) -> FloatArray:
        """Share of the human watts that arrives at the plug; 0 where nothing charges [-]."""
        share = np.where(self.charges, self.plug_w, 0.0)
        cost = np.where(self.charges, self.human_w, 1.0)
        return share / cost

    @property
    def stage_names(self) -> tuple[str, ...]:
        """Names of all steps."""
        return self.chain.stage_names

    @cached_property
    def _regulator(self) -> tuple[FloatArray, FloatArray, FloatArray]:
        return _regulator(self.chain, self.electric[1:], np.full(self.rpm.shape, np.nan))

    @property
    def regulator_in_v(self) -> FloatArray:
        """Volts into the first stage that sets a voltage [V]."""
        return self._regulator[0]

    @property
    def regulator_w(self) -> FloatArray:
        """Heat of that stage; of the die alone where it is linear [W]."""
        return self._regulator[1]

    @property
    def junction_degc(self) -> FloatArray:
        """Junction temperature of the hottest linear regulator [degC]."""
        return self._regulator[2]

    @cached_property
    def _watts(self) -> tuple[tuple[FloatArray, FloatArray, FloatArray], ...]:
        """Watts in, out and lost of every step, the losses by their own laws and not as differences."""
        machine, gear = self.chain.machine, self.chain.gear
        crank_rad_s = np.asarray(rad_s_from_rpm(self.rpm), np.float64)
        shaft_rad_s = crank_rad_s * gear.ratio
        drag_nm = np.asarray(drag_torque_nm(machine, shaft_rad_s), np.float64)
        amps = self.generator_a
        shaft_w = np.asarray(shaft_torque_nm(machine, shaft_rad_s, amps), np.float64) * shaft_rad_s
        gear_w = shaft_w * (1.0 / gear.eta - 1.0) + gear.drag_nm * crank_rad_s
        friction_w = np.where(self.failed, np.nan, drag_nm * shaft_rad_s)
        armature_w = self.emf_v * amps
        copper = self.electric[0]
        rows = [
            (self.human_w, shaft_w, gear_w),
            (shaft_w, armature_w, friction_w),
            (armature_w, _array(copper.out_v * amps), machine.ra_ohm * amps * amps + machine.vb_v * amps),
        ]
        for stage, flow in zip(self.chain.stages, self.electric[1:], strict=True):
            rows.append((_array(flow.in_v * flow.in_a), _array(flow.out_v * flow.out_a), _array(stage.loss_w(flow))))
        return tuple(rows)

    @property
    def stage_in_w(self) -> tuple[FloatArray, ...]:
        """Watts into every step [W]."""
        return tuple(step[0] for step in self._watts)

    @property
    def stage_out_w(self) -> tuple[FloatArray, ...]:
        """Watts out of every step [W]."""
        return tuple(step[1] for step in self._watts)

    @property
    def stage_loss_w(self) -> tuple[FloatArray, ...]:
        """Heat of every step [W]."""
        return tuple(step[2] for step in self._watts)

    @property
    def stage_in_v(self) -> tuple[FloatArray, ...]:
        """Volts into every step [V]."""
        return self._electric(0)

    @property
    def stage_in_a(self) -> tuple[FloatArray, ...]:
        """Amps into every step [A]."""
        return self._electric(1)

    @property
    def stage_out_v(self) -> tuple[FloatArray, ...]:
        """Volts out of every step [V]."""
        return self._electric(2)

    @property
    def stage_out_a(self) -> tuple[FloatArray, ...]:
        """Amps out of every step [A]."""
        return self._electric(3)

    def _electric(self, which: int) -> tuple[FloatArray, ...]:
        mechanical = np.full(self.rpm.shape, np.nan)
        return (mechanical, mechanical, *(_array(flow[which]) for flow in self.electric))

    def states_at(self, index: tuple[int, ...] = ()) -> tuple[str, ...]:
        """Names of the states of one point."""
        return tuple(state for state in STATES if bool(self.flags[state][index]))

    def binding_at(self, index: tuple[int, ...] = ()) -> str:
        """Name of what binds one point."""
        return BINDINGS[int(self.binding[index])]


def describe(chain: Chain, solution: Solution, sink: UsbSink) -> OperatingPoint:
    """Operating point of a solved generator current.

    Parameters
    ----------
    chain : Chain
        The chain.
    solution : Solution
        Generator currents and what the solver already knows about them.
    sink : UsbSink
        The device's held voltage and least current, for the states; scalars or arrays of the points' shape.

    Returns
    -------
    OperatingPoint
        All numbers and states.

    References
    ----------
    Stage laws in the modules of the stages; the sum of losses is checked in the tests.
    """
    rpm, current = solution.rpm, solution.current_a
    net_v = source_v(chain, rpm)
    p0, p1, t1, t0 = human_cost(chain, rpm)
    torque = t0 + t1 * current
    emf = net_v + chain.machine.vb_v
    electric = _electric(chain, net_v, emf, current)
    plug_v, plug_a = _array(electric[-1].out_v), _array(electric[-1].out_a)
    flags = _flags(chain, solution, sink, electric[1:], (plug_v, plug_a, torque, net_v))
    failed: BoolArray = np.logical_or.reduce([flags[state] for state in FAILED_STATES])
    plug_w = plug_v * plug_a
    greatest_w = np.where(flags["collapse"], plug_w, np.nan)
    if failed.any():
        hidden = np.where(failed, np.nan, 0.0)
        electric = tuple(Flow(*(_array(values) + hidden for values in flow)) for flow in electric)
        torque, plug_w = torque + hidden, plug_w + hidden
        p1 = p1 + hidden
    return OperatingPoint(
        rpm=rpm,
        human_w=p0 + p1 * current,
        torque_nm=torque,
        generator_a=_array(electric[0].in_a),
        emf_v=_array(electric[0].in_v),
        plug_v=_array(electric[-1].out_v),
        plug_a=_array(electric[-1].out_a),
        plug_w=plug_w,
        binding=solution.binding,
        failed=failed,
        charges=~(failed | flags["not_charging"]),
        greatest_plug_w=greatest_w,
        flags=flags,
        chain=chain,
        electric=electric,
    )


def _array(values: Values) -> FloatArray:
    return np.asarray(values, np.float64)


def _electric(chain: Chain, net_v: FloatArray, emf_v: FloatArray, current_a: FloatArray) -> tuple[Flow, ...]:
    """Volts and amps of the winding and of every stage."""
    copper = Flow(emf_v, current_a, net_v - chain.machine.ra_ohm * current_a, current_a)
    steps = [copper, *flows(chain, net_v, current_a)]
    # A device that takes nothing is solved to a current of about 1e-17 A of either sign.
    plug_a = _array(steps[-1].out_a)
    steps[-1] = steps[-1]._replace(out_a=np.where(np.abs(plug_a) < _NO_CURRENT_A, 0.0, plug_a))
    return tuple(steps)


def _regulator(chain: Chain, steps: tuple[Flow, ...], none: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Volts into the first regulating stage, its heat, and the hottest junction."""
    meter_v, heat_w, junction = none, none, none
    first = regulating_stage(chain)
    for index, (stage, flow) in enumerate(zip(chain.stages, steps, strict=True)):
        die_w = stage.die_w(flow) if isinstance(stage, LinearRegulator) else stage.loss_w(flow)
        if index == first:
            meter_v, heat_w = np.asarray(flow.in_v, np.float64), np.asarray(die_w, np.float64)
        if isinstance(stage, LinearRegulator):
            junction = np.fmax(junction, np.asarray(stage.junction_degc(die_w), np.float64))
    return meter_v, heat_w, junction


def _flags(
    chain: Chain,
    solution: Solution,
    sink: UsbSink,
    steps: tuple[Flow, ...],
    at: tuple[FloatArray, FloatArray, FloatArray, FloatArray],
) -> dict[str, BoolArray]:
    """Every state at every point: the failed ones first, the others only where the point has numbers."""
    plug_v, plug_a, torque, net_v = at
    shape = solution.rpm.shape
    off: BoolArray = np.zeros(shape, np.bool_)
    dropout = hot = off
    vin_low = off
    for stage, flow in zip(chain.stages, steps, strict=True):
        if isinstance(stage, SwitchingConverter):
            vin_low = vin_low | (np.asarray(stage.headroom_v(flow)) < -_ROUNDING)
        elif isinstance(stage, LinearRegulator):
            dropout = dropout | (np.asarray(stage.headroom_v(flow)) < -_ROUNDING)
            hot = hot | (np.asarray(stage.junction_degc(stage.die_w(flow))) > JUNCTION_LIMIT_DEGC)
    collapse = solution.collapsed & ~solution.no_output
    vin_low = vin_low & ~collapse & ~solution.no_output
    has_numbers = ~(collapse | vin_low | solution.no_output)
    too_little = plug_a < sink.least_a * (1.0 - _ROUNDING)
    comfort = chain.comfort
    return {
        "no_output": solution.no_output,
        "dropout": dropout & (has_numbers | solution.no_output),
        "vin_low": vin_low,
        "collapse": collapse,
        "vbus_low": (plug_v < sink.hold_v - HOLD_TOLERANCE_V) & has_numbers,
        "not_charging": (too_little | solution.fails_entry) & has_numbers,
        "overtemp": hot & has_numbers,
        "overvolt": overvolted(chain, net_v),
        "cadence_high": solution.rpm > comfort.high_rpm * (1.0 + _ROUNDING),
        "torque_high": (torque > comfort.torque_max_nm * (1.0 + _ROUNDING)) & has_numbers,
    }


def entry_suspects(plug_v: FloatArray) -> BoolArray:
    """Points whose loaded voltage is so low that the device's entry test has to be looked at."""
    return plug_v < ENTRY_TEST_V
