"""The vectorised solver against scipy's brentq over the same laws written backwards for one point."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from kitplanner.domain.chain import (
    Chain,
    DcMachine,
    GearBox,
    SynchronousRectifier,
    UsbSink,
    charging_point,
    operating_point,
)
from kitplanner.domain.chain_model import march, source_v
from tests.domain import reference_chain as reference
from tests.domain.chain_sets import A_BUCK, C_5V, C_12V, A, B

RANDOM = np.random.default_rng(20260101)


@pytest.mark.parametrize(("chain", "rpm", "amps"), [
    (A_BUCK, (60.0, 150.0), (0.02, 0.5)), (B, (25.0, 80.0), (0.05, 2.5)),
    (C_5V, (20.0, 80.0), (0.1, 3.0)), (C_12V, (40.0, 80.0), (0.1, 8.0)),
])  # fmt: skip
def test_constant_power_chains(chain: object, rpm: tuple[float, float], amps: tuple[float, float]) -> None:
    """300 points, collapsed ones among them; agreement to 1e-9."""
    cadences, currents = RANDOM.uniform(*rpm, 300), RANDOM.uniform(*amps, 300)
    found = operating_point(chain, cadences, currents)  # type: ignore[arg-type]
    solved = 0
    for i in range(300):
        one = reference.with_converter(chain, float(cadences[i]), float(currents[i]))  # type: ignore[arg-type]
        assert bool(found.flags["collapse"][i]) == (one is None)
        if one is None or found.failed[i]:
            continue
        solved += 1
        assert found.generator_a[i] == pytest.approx(one.generator_a, rel=1e-9)
        assert found.regulator_in_v[i] == pytest.approx(one.in_v, rel=1e-9)
        assert found.plug_v[i] == pytest.approx(one.plug_v, rel=1e-9)
        assert found.torque_nm[i] == pytest.approx(one.torque_nm, rel=1e-9)
        assert found.human_w[i] == pytest.approx(one.human_w, rel=1e-9)
    assert solved > 100


def test_linear_chain_in_and_out_of_regulation() -> None:
    """300 points; within the first millivolt of headroom the two differ by the fading adjustment current."""
    cadences, currents = RANDOM.uniform(90.0, 180.0, 300), RANDOM.uniform(0.01, 0.6, 300)
    found = operating_point(A, cadences, currents)
    states = {True: 0, False: 0}
    for i in range(300):
        if found.failed[i]:
            continue
        one = reference.with_regulator(A, float(cadences[i]), float(currents[i]))
        states[bool(found.flags["dropout"][i])] += 1
        assert found.generator_a[i] == pytest.approx(one.generator_a, rel=1e-9, abs=1e-9)
        assert found.plug_v[i] == pytest.approx(one.plug_v, rel=1e-9)
        assert found.human_w[i] == pytest.approx(one.human_w, rel=1e-9)
    assert min(states.values()) > 50


def test_sagging_device() -> None:
    cadences = np.linspace(98.0, 160.0, 40)
    found = charging_point(A, cadences, UsbSink(limit_a=0.6))
    for i, rpm in enumerate(cadences):
        one = reference.held(A, float(rpm), 4.40, 0.6)
        assert found.plug_a[i] == pytest.approx(one.plug_a, rel=1e-9)
        assert found.human_w[i] == pytest.approx(one.human_w, rel=1e-9)


def test_forward_from_human_watts() -> None:
    """The current that a person's watts buy: brentq over the backward law."""
    for watts in (6.0, 9.0, 14.0):
        found = charging_point(B, 65.0, UsbSink(), human_w=watts)

        def shortfall(amps: float, watts: float = watts) -> float:
            one = reference.with_converter(B, 65.0, amps)
            assert one is not None
            return one.human_w - watts

        amps = float(brentq(shortfall, 1e-3, 2.0, xtol=1e-15))
        assert float(found.plug_a) == pytest.approx(amps, rel=1e-9)


def test_the_other_root_lies_near_the_short_circuit_and_is_not_taken() -> None:
    """Two generator currents carry 1 A at 60 rpm: 0.5298 A, and 6.368 A at 0.8273 V into the converter."""
    diode, converter, _ = reference.parts(B)
    emf = reference.emf_v(B, 60.0)

    def volts(current: float) -> float:
        return emf - B.machine.ra_ohm * current - reference.diode_v(diode, current)

    def surplus(current: float) -> float:
        return current * volts(current) - reference.converter_in_w(converter, volts(current), 1.0)  # type: ignore[arg-type]

    other = float(brentq(surplus, 3.5, emf / B.machine.ra_ohm))
    assert other == pytest.approx(6.368, abs=5e-4)
    assert volts(other) == pytest.approx(0.8273, abs=5e-4)
    assert float(operating_point(B, 60.0, 1.0).generator_a) == pytest.approx(0.5298, abs=5e-5)


def test_a_person_strong_enough_for_the_unstable_branch_still_gets_none_of_it() -> None:
    """Behind the peak more watts would give less current; such a point counts as collapsed."""
    point = charging_point(B, 36.0, UsbSink(), human_w=np.linspace(1.0, 60.0, 200))
    good = ~point.flags["collapse"]
    assert good.any()
    assert (~good).any()
    assert (np.flatnonzero(good).max()) < np.flatnonzero(~good).min()
    # What such a point gives up at is the peak, found here on a dense row of currents.
    net_v = source_v(B, np.array([36.0]))
    plug_v, plug_a = march(B, net_v, np.linspace(0.0, float(net_v[0]) / B.machine.ra_ohm, 20_001))
    assert point.greatest_plug_w[~good] == pytest.approx(float((plug_v * plug_a)[np.argmax(plug_a)]), rel=1e-6)


def test_batches_do_not_show() -> None:
    cadences = np.linspace(50.0, 80.0, 9001)
    whole = operating_point(B, cadences, 1.0)
    for i in (0, 4096, 8191, 8192, 9000):
        assert whole.human_w[i] == pytest.approx(float(operating_point(B, float(cadences[i]), 1.0).human_w), rel=1e-13)


def test_a_standing_draw_that_nothing_can_feed_gives_no_output() -> None:
    """A control circuit of 0.2 A behind a machine that shorts at 0.1 A."""
    hungry = Chain(DcMachine(0.02, 10.0), GearBox(5.0), (SynchronousRectifier(2, 0.01, 0.2),))
    point = charging_point(hungry, 96.0, UsbSink(hold_v=0.5))
    assert float(point.rpm) * np.pi / 30.0 * 5.0 * 0.02 / 10.0 == pytest.approx(0.1, rel=0.01)
    assert point.states_at() == ("no_output",)
