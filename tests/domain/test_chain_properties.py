"""Conservation, monotonicity and scaling of chains of any shape."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from kitplanner.domain.chain import (
    Cable,
    Chain,
    DcMachine,
    Diode,
    FixedLoss,
    GearBox,
    LinearRegulator,
    Stage,
    SwitchingConverter,
    SynchronousRectifier,
    UsbSink,
    charging_point,
    operating_point,
)
from tests.domain.chain_sets import C_5V, C_12V, A, B

CHAINS = st.sampled_from([A, B, C_5V, C_12V])
STAGES = st.one_of(
    st.builds(Cable, st.floats(0.0, 0.5)),
    st.builds(FixedLoss, st.floats(0.5, 1.0)),
    st.builds(Diode, st.integers(1, 2), st.floats(1e-9, 1e-5), st.floats(1.0, 2.0), st.floats(0.0, 0.1)),
    st.builds(SynchronousRectifier, st.integers(1, 2), st.floats(0.0, 0.05), st.floats(0.0, 0.005)),
    st.builds(LinearRegulator, st.floats(100.0, 240.0), st.floats(300.0, 700.0)),
    st.builds(SwitchingConverter, st.floats(4.0, 14.0), lockout_v=st.floats(0.0, 6.0), c_ohm=st.floats(0.0, 0.2)),
)
MACHINES = st.builds(
    DcMachine,
    st.floats(0.01, 0.1),
    st.floats(0.1, 6.0),
    st.floats(0.0, 1.0),
    st.floats(0.0, 0.05),
    st.floats(0.0, 1e-4),
)
GEARS = st.builds(GearBox, st.floats(5.0, 60.0), st.floats(0.5, 1.0), st.floats(0.0, 0.5))


@given(MACHINES, GEARS, st.lists(STAGES, max_size=8), st.floats(0.0, 200.0), st.floats(0.0, 3.0))
def test_losses_and_plug_watts_sum_to_human_watts(
    machine: DcMachine, gear: GearBox, stages: list[Stage], rpm: float, amps: float
) -> None:
    point = operating_point(Chain(machine, gear, tuple(stages)), rpm, amps)
    if point.failed:
        assert np.isnan(point.human_w)
        assert point.states_at()
        return
    total = float(sum(point.stage_loss_w)) + float(point.plug_w)
    assert total == pytest.approx(float(point.human_w), abs=1e-9 * max(1.0, float(point.human_w)))
    assert float(point.plug_a) == pytest.approx(amps, rel=1e-9, abs=1e-9)


@given(MACHINES, GEARS, st.lists(STAGES, max_size=8), st.floats(0.0, 200.0), st.floats(0.0, 100.0))
def test_no_limit_is_exceeded_and_the_binding_one_is_met(
    machine: DcMachine, gear: GearBox, stages: list[Stage], rpm: float, human_w: float
) -> None:
    sink = UsbSink(limit_a=1.0, hold_v=4.40)
    chain = Chain(machine, gear, tuple(stages))
    point = charging_point(chain, rpm, sink, human_w=human_w, torque_max_nm=10.0, plug_w=4.6)
    if point.failed:
        return
    slack = 1e-9
    assert point.plug_a <= 1.0 + slack
    assert point.human_w <= human_w * (1 + slack) + slack
    assert point.torque_nm <= 10.0 + slack
    assert point.plug_w <= 4.6 + slack
    assert point.plug_a == 0.0 or point.plug_v >= 4.40 - slack
    met = {"current": point.plug_a - 1.0, "hold": point.plug_v - 4.40, "acceptance": point.plug_w - 4.6,
           "human": point.human_w - human_w, "torque": point.torque_nm - 10.0}  # fmt: skip
    assert point.plug_a == 0.0 or float(met[point.binding_at()]) == pytest.approx(0.0, abs=1e-7)


@given(st.floats(95.0, 149.0), st.floats(0.2, 20.0))
def test_a_held_device_takes_more_when_turned_faster(rpm: float, faster: float) -> None:
    slow, fast = (charging_point(A, n, UsbSink(limit_a=5.0)) for n in (rpm, rpm + faster))
    assert fast.plug_a >= slow.plug_a
    assert fast.human_w > slow.human_w


@given(CHAINS, st.floats(0.0, 1.0), st.floats(0.001, 0.5))
def test_more_plug_current_costs_more_human_watts(chain: Chain, amps: float, more: float) -> None:
    light, heavy = (operating_point(chain, 78.0 if chain is not A else 150.0, load) for load in (amps, amps + more))
    assume(not (light.failed or heavy.failed))
    assert heavy.human_w > light.human_w
    assert heavy.generator_a > light.generator_a


@given(CHAINS, st.floats(30.0, 90.0), st.floats(0.1, 30.0))
def test_more_human_watts_never_give_less(chain: Chain, human_w: float, more: float) -> None:
    rpm = 140.0 if chain is A else 60.0
    sink = UsbSink(limit_a=2.0)
    weak, strong = (charging_point(chain, rpm, sink, human_w=watts / 3.0) for watts in (human_w, human_w + more))
    assume(not (weak.failed or strong.failed))
    assert strong.plug_w >= weak.plug_w * (1.0 - 1e-12)


@given(CHAINS, st.floats(0.5, 0.95), st.floats(0.01, 0.05))
def test_a_better_gear_never_costs_more(chain: Chain, eta: float, better: float) -> None:
    rpm, amps = (140.0, 0.3) if chain is A else (70.0, 0.5)
    gears = [dataclasses.replace(chain.gear, eta=value) for value in (eta, eta + better)]
    poor, good = (operating_point(dataclasses.replace(chain, gear=gear), rpm, amps) for gear in gears)
    assert good.human_w < poor.human_w
    assert good.plug_w == poor.plug_w


@given(CHAINS, st.floats(0.01, 2.0))
def test_a_longer_cable_never_helps(chain: Chain, more_ohm: float) -> None:
    sink = UsbSink(limit_a=1.0)
    rpm = 140.0 if chain is A else 70.0
    longer = dataclasses.replace(chain, stages=(*chain.stages, Cable(more_ohm)))
    assert charging_point(longer, rpm, sink).plug_w <= charging_point(chain, rpm, sink).plug_w


@given(st.floats(0.2, 5.0), st.floats(40.0, 150.0), st.floats(0.01, 0.6))
def test_scaling_gear_ratio_against_cadence_keeps_the_electrics(factor: float, rpm: float, amps: float) -> None:
    """Twice the ratio at half the cadence turns the machine alike: same volts and amps, twice the gear's torque."""
    gear = GearBox(30.0, 0.75, 0.0)
    scaled = GearBox(30.0 * factor, 0.75, 0.0)
    one = operating_point(dataclasses.replace(A, gear=gear), rpm, amps)
    other = operating_point(dataclasses.replace(A, gear=scaled), rpm / factor, amps)
    assume(not (one.failed or other.failed))
    assert other.plug_v == pytest.approx(float(one.plug_v), rel=1e-9)
    assert other.human_w == pytest.approx(float(one.human_w), rel=1e-9)
    assert other.torque_nm == pytest.approx(float(one.torque_nm) * factor, rel=1e-9)


@given(st.floats(0.2, 5.0))
def test_machines_in_parallel_share_the_current(count: float) -> None:
    """k times the torque and drag at 1/k of the resistance, k times the load: k times the watts, the same volts."""
    bare = Chain(DcMachine(0.045, 1.5, 0.2, 0.004, 5e-6), GearBox(40.0, 0.8), (Cable(0.3),))
    many = Chain(
        DcMachine(0.045, 1.5 / count, 0.2, 0.004 * count, 5e-6 * count), GearBox(40.0, 0.8), (Cable(0.3 / count),)
    )
    one, all_of_them = operating_point(bare, 60.0, 0.5), operating_point(many, 60.0, 0.5 * count)
    assert all_of_them.plug_v == pytest.approx(float(one.plug_v), rel=1e-9)
    assert all_of_them.human_w == pytest.approx(float(one.human_w) * count, rel=1e-9)
