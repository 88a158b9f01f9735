"""The march, the affine cost of the crank, and what a part's rating sees."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from kitplanner.domain.chain import Cable, Chain, Diode, GearBox, LinearRegulator, SwitchingConverter
from kitplanner.domain.chain_model import flows, human_cost, march, overvolted, regulating_stage, source_v
from kitplanner.domain.gear import crank_torque_nm
from kitplanner.domain.machine import shaft_torque_nm
from tests.domain.chain_sets import C_5V, LARGE, SMALL, SMALL_GEAR, A, B

CURRENT = np.linspace(0.0, 3.0, 31)


@pytest.mark.parametrize("chain", [A, B, C_5V])
def test_the_march_ends_where_the_last_step_ends(chain: Chain) -> None:
    net = np.full_like(CURRENT, 12.0)
    plug_v, plug_a = march(chain, net, CURRENT)
    steps = flows(chain, net, CURRENT)
    assert steps[-1].out_v == pytest.approx(plug_v)
    assert steps[-1].out_a == pytest.approx(plug_a)
    for before, after in pairwise(steps):
        assert after.in_v is before.out_v
        assert after.in_a is before.out_a


def test_cost_lines_agree_with_machine_and_gear() -> None:
    rpm = np.array([30.0, 60.0, 90.0])
    p0, p1, t1, t0 = human_cost(B, rpm)
    crank = rpm * np.pi / 30.0
    torque = np.asarray(crank_torque_nm(B.gear, shaft_torque_nm(B.machine, crank * B.gear.ratio, 0.7)))
    assert t0 + t1 * 0.7 == pytest.approx(torque, rel=1e-12)
    assert p0 + p1 * 0.7 == pytest.approx(torque * crank, rel=1e-12)


def test_brush_drop_counts_against_the_source() -> None:
    """19.00 V of the pedal stand at 60 rpm less 0.6 V of the brushes."""
    assert source_v(C_5V, np.array([60.0]))[0] == pytest.approx(19.00 - 0.6, abs=5e-3)


def test_the_meter_hangs_before_the_first_regulating_stage() -> None:
    assert regulating_stage(A) == 1
    assert regulating_stage(Chain(LARGE, GearBox(40.0), (Cable(0.1),))) is None
    two = Chain(LARGE, GearBox(40.0), (Diode(), Cable(0.1), SwitchingConverter(), LinearRegulator()))
    assert regulating_stage(two) == 2


def test_a_part_behind_a_converter_sees_the_converter_and_not_the_generator() -> None:
    guarded = Chain(SMALL, SMALL_GEAR, (SwitchingConverter(9.0), LinearRegulator(rating_v=10.0)))
    bare = Chain(SMALL, SMALL_GEAR, (LinearRegulator(rating_v=10.0),))
    assert overvolted(guarded, np.array([30.0])).tolist() == [False]
    assert overvolted(bare, np.array([30.0])).tolist() == [True]


@pytest.mark.parametrize(
    ("output_v", "over"), [(5.10, False), (5.25, False), (5.30, True), (9.0, False), (13.8, False)]
)
def test_only_outputs_of_the_5_volt_class_meet_the_usb_ceiling(output_v: float, over: bool) -> None:
    """USB 2.0: 5.25 V at most; a 12 V socket is no USB port."""
    chain = Chain(LARGE, GearBox(40.0), (SwitchingConverter(output_v),))
    assert overvolted(chain, np.array([20.0])).tolist() == [over]
