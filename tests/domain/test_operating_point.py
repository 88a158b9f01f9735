"""What a solved point tells: states, heat, junctions, the order of failures."""

from __future__ import annotations

import numpy as np
import pytest

from kitplanner.domain.chain import (
    BINDINGS,
    FAILED_STATES,
    STATES,
    Cable,
    Chain,
    Diode,
    GearBox,
    LinearRegulator,
    UsbSink,
    charging_point,
    operating_point,
)
from tests.domain.chain_sets import SMALL, A, B


def test_failed_states_are_states_and_hide_the_numbers() -> None:
    assert set(FAILED_STATES) < set(STATES)
    points = operating_point(B, np.array([0.0, 30.0, 41.0, 60.0]), 1.0)
    assert [points.states_at((i,)) for i in range(4)] == [("no_output",), ("collapse",), ("vin_low",), ()]
    assert points.failed.tolist() == [True, True, True, False]
    assert np.isnan(points.human_w).tolist() == [True, True, True, False]
    assert points.has_state.tolist() == [True, True, True, False]


def test_a_failed_point_tells_one_failure_only() -> None:
    points = operating_point(B, np.linspace(0.0, 80.0, 801), 1.5)
    assert (sum(points.flags[state].astype(int) for state in FAILED_STATES) <= 1).all()
    assert (points.failed == np.logical_or.reduce([points.flags[state] for state in FAILED_STATES])).all()


def test_a_device_that_holds_its_volts_within_a_millivolt_does_not_sag() -> None:
    point = charging_point(A, 120.0, UsbSink(limit_a=1.0))
    assert not point.flags["vbus_low"]
    short_of = charging_point(A, 120.0, UsbSink(limit_a=0.05)).plug_v
    fixed = operating_point(A, 120.0, 0.05, UsbSink(hold_v=float(short_of) + 0.0009))
    assert not fixed.flags["vbus_low"]
    assert operating_point(A, 120.0, 0.05, UsbSink(hold_v=float(short_of) + 0.0011)).flags["vbus_low"]


def test_below_the_least_current_the_current_is_told_and_the_charge_counts_as_none() -> None:
    point = charging_point(A, 105.0, UsbSink(limit_a=1.0, least_a=0.10))
    assert float(point.plug_a) == pytest.approx(0.0899, abs=5e-5)
    assert point.states_at() == ("dropout", "not_charging")
    assert not point.charges
    assert float(point.crank_to_plug_fraction) == 0.0
    assert charging_point(A, 105.0, UsbSink(limit_a=1.0, least_a=0.08)).charges


@pytest.mark.parametrize(("first_theta", "second_theta"), [(30.0, 5.0), (5.0, 30.0)])
def test_the_hottest_of_several_linear_regulators_is_told(first_theta: float, second_theta: float) -> None:
    first = LinearRegulator(120.0, 820.0, theta_c_per_w=first_theta)
    second = LinearRegulator(theta_c_per_w=second_theta)
    chain = Chain(SMALL, GearBox(50.0, 0.75, 0.02), (Diode(), first, second, Cable(0.1)))
    point = operating_point(chain, 150.0, 0.3)
    assert point.states_at() == ()
    heats = [float(stage.die_w(flow)) for stage, flow in zip((first, second), point.electric[2:4], strict=True)]
    assert float(point.regulator_w) == pytest.approx(heats[0])
    assert float(point.junction_degc) == pytest.approx(25.0 + 30.0 * heats[0 if first_theta == 30.0 else 1])


def test_bindings_have_names() -> None:
    assert len(set(BINDINGS)) == len(BINDINGS)
    assert operating_point(B, 60.0, 1.0).binding_at() == "current"
    assert operating_point(B, 30.0, 1.0).binding_at() == "nothing"
