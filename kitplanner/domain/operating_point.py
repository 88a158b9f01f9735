"""What a chain does at a solved generator current: every stage's watts, the failure states, the totals."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from kitplanner.domain.chain_model import Chain, flows, human_cost, overvolted, regulating_stage, source_v
from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.machine import drag_torque_nm
from kitplanner.domain.regulator import JUNCTION_LIMIT_DEGC, LinearRegulator
from kitplanner.domain.roots import BoolArray, FloatArray, IntArray
from kitplanner.domain.stage import Flow
from kitplanner.domain.units import rad_s_from_rpm
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
    copper, then the stages in order), volts and amps NaN where mechanical. The losses and `plug_w` sum to
    `human_w`. `regulator_*` belong to the first stage that sets a voltage; `junction_degc` is NaN without a
    linear one and the hottest of several. `binding` indexes `BINDINGS`. `charges` is False where the current
    is too small to charge or the point has failed: then the charge counts as none. `greatest_plug_w` are the
    watts at which a collapsed point gives up, NaN elsewhere.
    """

    rpm: FloatArray
    human_w: FloatArray
    torque_nm: FloatArray
    generator_a: FloatArray
    emf_v: FloatArray
    plug_v: FloatArray
    plug_a: FloatArray
    plug_w: FloatArray
    stage_names: tuple[str, ...]
    stage_in_w: tuple[FloatArray, ...]
    stage_out_w: tuple[FloatArray, ...]
    stage_in_v: tuple[FloatArray, ...]
    stage_in_a: tuple[FloatArray, ...]
    stage_out_v: tuple[FloatArray, ...]
    stage_out_a: tuple[FloatArray, ...]
    stage_loss_w: tuple[FloatArray, ...]
    regulator_in_v: FloatArray
    regulator_w: FloatArray
    junction_degc: FloatArray
    binding: IntArray
    charges: BoolArray
    greatest_plug_w: FloatArray
    flags: Mapping[str, BoolArray]

    @property
    def failed(self) -> BoolArray:
        """Where the point has no numbers."""
        return self.flags["no_output"] | self.flags["vin_low"] | self.flags["collapse"]

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

    def states_at(self, index: tuple[int, ...] = ()) -> tuple[str, ...]:
        """Names of the states of one point."""
        return tuple(state for state in STATES if bool(self.flags[state][index]))

    def binding_at(self, index: tuple[int, ...] = ()) -> str:
        """Name of what binds one point."""
        return BINDINGS[int(self.binding[index])]


def describe(chain: Chain, solution: Solution, sink: UsbSink) -> OperatingPoint:
    """Operating point of a solved generator current, with every loss from its own law.

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
    crank_rad_s = np.asarray(rad_s_from_rpm(rpm), np.float64)
    shaft_rad_s = crank_rad_s * chain.gear.ratio
    emf = chain.machine.ke_v_s * shaft_rad_s
    drag_nm = np.asarray(drag_torque_nm(chain.machine, shaft_rad_s), np.float64)
    shaft_nm = drag_nm + chain.machine.ke_v_s * current
    _, _, t1, t0 = human_cost(chain, rpm)
    torque = t0 + t1 * current
    steps = flows(chain, net_v, current)
    copper = Flow(emf, current, net_v - chain.machine.ra_ohm * current, current)
    plug_v, plug_a = (copper, *steps)[-1][2:]
    # A device that takes nothing is solved to a current of about 1e-17 A of either sign.
    plug_a = np.where(np.abs(plug_a) < _NO_CURRENT_A, 0.0, plug_a)
    steps = (*steps[:-1], steps[-1]._replace(out_a=plug_a)) if steps else ()
    plug = (np.asarray(plug_v, np.float64), plug_a)

    shaft_w = shaft_nm * shaft_rad_s
    armature_w = emf * current
    terminal_w = copper.out_v * current
    mechanical = (
        (torque * crank_rad_s, shaft_w, shaft_w * (1.0 / chain.gear.eta - 1.0) + chain.gear.drag_nm * crank_rad_s),
        (shaft_w, armature_w, drag_nm * shaft_rad_s),
        (armature_w, terminal_w, chain.machine.ra_ohm * current * current + chain.machine.vb_v * current),
    )
    flags = _flags(chain, solution, sink, steps, (*plug, torque, net_v))
    failed = flags["no_output"] | flags["vin_low"] | flags["collapse"]

    def shown(values: object) -> FloatArray:
        return np.where(failed, np.nan, np.asarray(values, np.float64))

    none = np.full(rpm.shape, np.nan)
    electric = [(none,) * 4, (none,) * 4, *(tuple(shown(v) for v in flow) for flow in (copper, *steps))]
    watts = [tuple(shown(v) for v in step) for step in mechanical]
    for stage, flow in zip(chain.stages, steps, strict=True):
        watts.append((shown(flow.in_v * flow.in_a), shown(flow.out_v * flow.out_a), shown(stage.loss_w(flow))))
    meter_v, regulator_w, junction = _regulator(chain, steps, none)
    return OperatingPoint(
        rpm=rpm,
        human_w=shown(torque * crank_rad_s),
        torque_nm=shown(torque),
        generator_a=shown(current),
        emf_v=shown(emf),
        plug_v=shown(plug[0]),
        plug_a=shown(plug[1]),
        plug_w=shown(plug[0] * plug[1]),
        stage_names=chain.stage_names,
        stage_in_w=tuple(step[0] for step in watts),
        stage_out_w=tuple(step[1] for step in watts),
        stage_in_v=tuple(step[0] for step in electric),
        stage_in_a=tuple(step[1] for step in electric),
        stage_out_v=tuple(step[2] for step in electric),
        stage_out_a=tuple(step[3] for step in electric),
        stage_loss_w=tuple(step[2] for step in watts),
        regulator_in_v=shown(meter_v),
        regulator_w=shown(regulator_w),
        junction_degc=shown(junction),
        binding=solution.binding,
        charges=~(failed | flags["not_charging"]),
        greatest_plug_w=np.where(flags["collapse"], plug[0] * plug[1], np.nan),
        flags=flags,
    )


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
