"""Cadence searches and meter band against exhaustive rows and worked values."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from kitplanner.domain.chain import (
    Cable,
    Chain,
    Diode,
    FixedLoss,
    GearBox,
    LinearRegulator,
    PacedWatts,
    UsbSink,
    best_cadence,
    best_fraction_cadence,
    charging_point,
    meter_band,
    operating_point,
    regulating_rpm,
)
from kitplanner.domain.hand_load import cadence_factor
from tests.domain.chain_sets import A_BUCK, C_5V, C_12V, SMALL, A, B


def test_meter_band_of_the_small_crank() -> None:
    """Hold 6.73 to 8.16 V at 0.3 A: dropout of the LM317 below, fastest comfortable turning above."""
    low, high = meter_band(A, 0.3, (80.0, 150.0))
    assert (round(low, 2), round(high, 2)) == (6.73, 8.16)
    at_low = operating_point(A, regulating_rpm(A, 0.3, 150.0) + 1e-9, 0.3)
    assert float(at_low.regulator_in_v) == pytest.approx(low, abs=1e-5)


def test_meter_band_ends_where_the_junction_is_too_hot() -> None:
    """With a 300 rpm band the LM317's 125 degC comes first; hotter air lowers the end."""
    _, high = meter_band(A, 0.3, (80.0, 300.0))
    hot = operating_point(A, 198.75, 0.3)
    assert high == pytest.approx(float(hot.regulator_in_v), abs=0.02)
    _, in_40 = meter_band(A, 0.3, (80.0, 300.0), air_degc=40.0)
    warm = dataclasses.replace(A, stages=(A.stages[0], LinearRegulator(air_degc=40.0), A.stages[2]))
    assert in_40 == pytest.approx(meter_band(warm, 0.3, (80.0, 300.0))[1], rel=1e-12)
    assert in_40 < high


def test_meter_band_ends_at_the_rating() -> None:
    fragile = dataclasses.replace(A, stages=(A.stages[0], LinearRegulator(rating_v=7.5), A.stages[2]))
    assert meter_band(fragile, 0.3, (80.0, 150.0))[1] == 7.5


def test_meter_band_of_a_converter_and_of_none() -> None:
    low, high = meter_band(B, 1.0, (40.0, 80.0))
    assert low == 6.0
    assert high == pytest.approx(float(operating_point(B, 80.0, 1.0).regulator_in_v))
    assert meter_band(C_12V, 4.0, (45.0, 80.0))[0] == 14.8
    assert all(math.isnan(end) for end in meter_band(Chain(SMALL, GearBox(30.0), (Cable(0.1),)), 0.3, (80.0, 150.0)))


def test_meter_band_sees_what_hangs_behind_the_regulator() -> None:
    """A loss behind the regulator means more current through it, so more dropout."""
    lossy = dataclasses.replace(A, stages=(*A.stages, FixedLoss(0.5)))
    assert meter_band(lossy, 0.3, (80.0, 150.0))[0] == pytest.approx(
        5.018 + 1.6 + 0.35 * (0.6 + 1.25 / 120 + 5e-5), abs=1e-6
    )


@pytest.mark.parametrize(
    ("chain", "amps", "rpm"),
    [
        (A, 0.3, 128.7),
        (dataclasses.replace(A, stages=(Diode(1), *A.stages[1:])), 0.3, 123.4),
        (dataclasses.replace(A, gear=GearBox(20.0, 0.75, 0.02)), 0.3, 193.1),
        (dataclasses.replace(A, gear=GearBox(50.0, 0.75, 0.02)), 0.3, 77.2),
        (B, 1.0, 41.21),
        (B, 2.0, 48.87),
    ],
)
def test_least_regulating_cadence(chain: Chain, amps: float, rpm: float) -> None:
    digits = 0.0051 if chain is B else 0.051
    assert regulating_rpm(chain, amps, 300.0) == pytest.approx(rpm, abs=digits)


def test_no_cadence_regulates_a_load_too_heavy() -> None:
    assert math.isnan(regulating_rpm(A, 3.0, 150.0))


@pytest.mark.parametrize(("chain", "limit_a"), [(A, 0.5), (A_BUCK, 0.5), (B, 2.0), (C_5V, 2.0), (C_12V, 3.0)])
def test_best_cadence_is_not_beaten_by_any_of_a_thousand(chain: Chain, limit_a: float) -> None:
    band = (chain.comfort.low_rpm, chain.comfort.high_rpm)
    sink = UsbSink(limit_a=limit_a)
    persons = np.array([4.0, 8.0, 15.0, 30.0, 60.0, 120.0])
    torque = chain.comfort.torque_max_nm
    best = best_cadence(chain, band, sink, human_w=persons, torque_max_nm=torque)
    row = np.linspace(*band, 1001)
    every = charging_point(chain, row[:, None], sink, human_w=persons, torque_max_nm=torque)
    watts = np.where(every.charges, every.plug_w, 0.0)
    for i in range(persons.size):
        delivered = float(best.plug_w[i]) if best.charges[i] else 0.0
        assert delivered >= watts[:, i].max() * (1.0 - 2e-4)
        equal = watts[:, i] >= delivered * (1.0 - 1e-9)
        if best.charges[i] and equal.any():
            assert float(best.human_w[i]) <= every.human_w[equal, i].min() * (1.0 + 2e-4)


def test_among_equals_the_lightest_turning_is_taken() -> None:
    """A device at its limit gets the same everywhere; the linear regulator is then best just above dropout."""
    best = best_cadence(A, (80.0, 150.0), UsbSink(limit_a=0.3))
    assert float(best.plug_a) == pytest.approx(0.3, rel=1e-9)
    assert float(best.rpm) == pytest.approx(128.7, abs=0.1)
    assert best.states_at() == ()


def test_best_cadence_broadcasts_over_persons_and_acceptance() -> None:
    persons = np.array([5.0, 8.0, 20.0])[:, None]
    accepted = np.array([0.5, 2.0, np.inf, 1.0])
    block = best_cadence(B, (40.0, 80.0), UsbSink(limit_a=2.0), human_w=persons, plug_w=accepted)
    assert block.plug_w.shape == (3, 4)
    assert (block.plug_w <= accepted * (1 + 1e-9)).all()
    for i, j in np.ndindex(3, 4):
        one = best_cadence(
            B, (40.0, 80.0), UsbSink(limit_a=2.0), human_w=float(persons[i, 0]), plug_w=float(accepted[j])
        )
        assert block.plug_w[i, j] == pytest.approx(float(one.plug_w), rel=1e-12)
        assert block.rpm[i, j] == pytest.approx(float(one.rpm), rel=1e-12)


def test_a_person_too_weak_everywhere_gets_a_point_with_its_state() -> None:
    best = best_cadence(C_5V, (45.0, 80.0), UsbSink(limit_a=1.0), human_w=10.0)
    assert best.states_at() == ("no_output",)
    assert not best.charges


def test_best_share_without_failure_state() -> None:
    for chain, amps in ((A, 0.3), (B, 1.0), (C_5V, 3.0)):
        band = (chain.comfort.low_rpm, chain.comfort.high_rpm)
        best = best_fraction_cadence(chain, band, UsbSink(), amps=amps)
        row = operating_point(chain, np.linspace(*band, 2001), amps)
        shares = np.where(row.has_state, 0.0, row.crank_to_plug_fraction)
        assert best.states_at() == ()
        assert float(best.crank_to_plug_fraction) == pytest.approx(shares.max(), rel=5e-4)


def test_best_share_where_every_cadence_has_a_state_prefers_a_following_regulator() -> None:
    """A phone that holds 4.40 V keeps the small crank in dropout at every comfortable cadence."""
    best = best_fraction_cadence(A, (80.0, 150.0), UsbSink(limit_a=1.0))
    assert best.states_at() == ("dropout",)
    row = charging_point(A, np.linspace(80.0, 150.0, 2001), UsbSink(limit_a=1.0))
    assert float(best.crank_to_plug_fraction) == pytest.approx(row.crank_to_plug_fraction.max(), rel=1e-4)


def test_best_cadence_passes_by_what_would_overheat_the_regulator() -> None:
    """Turned as fast as the band allows, the bare regulator would give more and pass 125 degC."""
    poor = dataclasses.replace(A, stages=(A.stages[0], LinearRegulator(theta_c_per_w=110.0), A.stages[2]))
    hottest = charging_point(poor, 300.0, UsbSink(limit_a=0.5))
    assert bool(hottest.flags["overtemp"])
    found = best_cadence(poor, (80.0, 300.0), UsbSink(limit_a=0.5))
    assert bool(found.charges)
    assert not bool(found.flags["overtemp"])


@pytest.mark.parametrize(("best_rpm", "loss"), [(55.0, 0.20), (50.0, 0.19), (70.0, 0.0)])
def test_a_person_loses_watts_away_from_the_pace_of_least_effort(best_rpm: float, loss: float) -> None:
    """Against a dense row of cadences, each with the watts left at that pace."""
    watts = 12.0
    found = best_cadence(B, (40.0, 80.0), UsbSink(), human_w=PacedWatts(watts, best_rpm, loss))
    row = np.linspace(40.0, 80.0, 4001)
    dense = charging_point(B, row, UsbSink(), human_w=watts * cadence_factor(row, best_rpm, loss))
    assert float(found.plug_w) == pytest.approx(float(np.nanmax(dense.plug_w)), rel=1e-6)
    assert float(found.human_w) <= watts * float(cadence_factor(found.rpm, best_rpm, loss)) * (1.0 + 1e-9)


def test_people_with_paces_of_their_own_are_solved_as_if_alone() -> None:
    watts, best, loss = np.array([8.0, 8.0, 20.0]), np.array([50.0, 60.0, 55.0]), np.array([0.19, 0.19, 0.20])
    together = best_cadence(B, (40.0, 80.0), UsbSink(), human_w=PacedWatts(watts, best, loss))
    for i in range(3):
        alone = best_cadence(B, (40.0, 80.0), UsbSink(), human_w=PacedWatts(watts[i], best[i], loss[i]))
        assert together.plug_w[i] == pytest.approx(float(alone.plug_w), rel=1e-9)


def test_nobody_is_too_strong_for_a_weak_chain() -> None:
    """More watts than the chain carries are not given: from the greatest load on it stays, it never falls to none."""
    watts = np.geomspace(2.0, 200.0, 25)
    found = best_cadence(A_BUCK, (80.0, 150.0), UsbSink(), human_w=watts)
    assert not found.failed.any()
    assert np.all(np.diff(found.plug_w) > -1e-4 * found.plug_w[:-1])
    assert np.all(found.human_w <= watts * (1.0 + 1e-9))
    # The greatest load: the converter at its least input, at the highest cadence; dense row of fixed currents.
    fixed = operating_point(A_BUCK, 150.0, np.linspace(0.5, 2.0, 15_001))
    assert found.plug_w[-1] == pytest.approx(float(np.nanmax(fixed.plug_w)), rel=1e-3)
    assert found.binding_at((24,)) == "nothing"
