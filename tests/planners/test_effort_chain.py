"""Effort at stations by parts, against an independent integrator and a worked table.

Integrator: scipy's solve_ivp, which knows nothing of the closed form; it asks the chain for its best point at every
state of charge. Worked table: three stations of invented parts computed by hand-checked script (crank B at 60 rpm and
1 A: 9.487 W at the handle, 220 min for 15.4 Wh without the tail; pedal stand at 60 rpm and 3 A: 42.35 W).
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.domain.battery import acceptance_rate_per_h
from kitplanner.domain.chain import UsbSink, best_cadence, charging_point
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, Person, Plan, Station, Store
from kitplanner.planners.effort import charge_curve, effort
from kitplanner.planners.effort_chain import chain_sources, work_curve
from kitplanner.planners.effort_spread import draws
from kitplanner.planners.people import person_output
from kitplanner.planners.results import EffortRow
from kitplanner.planners.stations import chain_of

BENCH = read_plan(Path(__file__).parents[2] / "demo_profiles" / "bench.kitplan")
STATIONS = {station.id: station for station in BENCH.stations}
PHONE = Device(id="D", name="Phone", battery_wh=15.4, use_wh_per_day=1.54, eta=0.873, connector="5 V USB")


def turner(watts: float) -> Person:
    return Person(id="P", name="any", age=40, watts_by="own", own_arms_w=watts, own_legs_w=watts)


def a_row(station: Station, watts: float, charge: str = "full", **parts: object) -> EffortRow:
    base = Plan(people=(turner(watts),), stations=(station,), devices=(PHONE,))
    found = {(row.route, row.charge): row for row in effort(replace(base, **parts)).rows}
    return found["direct", charge]


def integrated(station: Station, watts: float) -> tuple[float, float]:
    """Minutes and human watt-hours from 0 to 1 by an integrator that knows no closed form."""
    from scipy.integrate import solve_ivp

    chain = chain_of(station)
    output = person_output(Plan(), turner(watts), station)
    torque = min(chain.comfort.torque_max_nm, np.inf if output.torque_cap_nm is None else output.torque_cap_nm)
    band = (chain.comfort.low_rpm, chain.comfort.high_rpm)

    def slope(_hours: float, state: np.ndarray) -> list[float]:
        taken_w = float(acceptance_rate_per_h(min(state[0], 1.0))) * 15.4 / 0.873
        point = best_cadence(
            chain,
            band,
            UsbSink(least_a=0.0),
            human_w=np.array([output.person_power_w]),
            torque_max_nm=torque,
            plug_w=np.array([taken_w]),
        )
        return [float(point.plug_w[0]) * 0.873 / 15.4, float(point.human_w[0])]

    def full(_hours: float, state: np.ndarray) -> float:
        return float(state[0] - 1.0)

    full.terminal = True
    run = solve_ivp(slope, (0.0, 60.0), [0.0, 0.0], events=full, rtol=1e-6, atol=1e-8, max_step=0.5)
    assert run.t_events[0].size == 1
    return 60.0 * float(run.t_events[0][0]), float(run.y_events[0][0][1])


@pytest.mark.parametrize(("key", "watts"), [("B", 9.487), ("B", 14.0), ("A", 6.0), ("C-5V", 30.0)])
def test_closed_form_agrees_with_an_independent_integrator(key: str, watts: float) -> None:
    minutes, work_wh = integrated(STATIONS[key], watts)
    row = a_row(STATIONS[key], watts)
    assert row.minutes_p50 == pytest.approx(minutes, rel=1e-3)
    assert row.person_power_w * row.minutes_p50 / 60.0 == pytest.approx(work_wh, rel=5e-3)
    assert row.chain_fraction == pytest.approx(15.4 / work_wh, rel=5e-3)


def test_crank_b_does_a_little_better_than_its_worked_point() -> None:
    """At 9.487 W the worked point (60 rpm, 1 A) fills a tenth in 22.00 min; the best cadence is no slower."""
    minutes = a_row(STATIONS["B"], 9.487, "day").minutes_p50
    assert 0.93 * 22.0 < minutes <= 22.0 * 1.001


def test_pedal_stand_meets_its_worked_point() -> None:
    """At 3 A it stores 12.02 W, a tenth of a phone in 7.686 min, if the phone takes that much near 0.8."""
    quick = replace(PHONE, charge_rate_per_h=2.0, taper_tau_h=0.1, input_limit_a=3.0)
    row = a_row(STATIONS["C-5V"], 42.35, "day", devices=(quick,))
    assert row.minutes_p50 == pytest.approx(7.686, rel=2e-3)


def test_energies_of_a_row_agree_at_every_level() -> None:
    for charge in ("full", "day"):
        row = a_row(STATIONS["B"], 12.0, charge)
        stored_wh = 15.4 if charge == "full" else 1.54
        hours = row.minutes_p50 / 60.0
        assert row.chain_from == "M"
        assert row.station_output_w * hours * 0.873 == pytest.approx(stored_wh, rel=1e-9)
        assert row.person_power_w * hours * row.chain_fraction == pytest.approx(stored_wh, rel=1e-9)


def test_the_tail_asks_for_less_work_than_the_start() -> None:
    assert a_row(STATIONS["B"], 40.0, "full").person_power_w < a_row(STATIONS["B"], 40.0, "day").person_power_w


@pytest.mark.parametrize(
    ("station", "watts", "limit"),
    [
        (STATIONS["B"], 9.487, "person"),
        (STATIONS["A"], 60.0, "machine"),
        (replace(STATIONS["A"], torque_max_nm=5.0), 60.0, "regulator"),
        (STATIONS["C-5V"], 60.0, "acceptance"),
        (STATIONS["A"], 1.2, "too_little_current"),
        (STATIONS["C-12V"], 60.0, "connector"),
    ],
)
def test_the_reason_names_what_binds(station: Station, watts: float, limit: str) -> None:
    row = a_row(station, watts)
    assert row.limit == limit
    assert (row.minutes_p50 is None) == (limit in ("too_little_current", "connector"))


def test_a_phones_input_current_limits_it() -> None:
    free = a_row(STATIONS["B"], 30.0, "day")
    bound = a_row(STATIONS["B"], 30.0, "day", devices=(replace(PHONE, input_limit_a=0.5),))
    assert bound.limit == "acceptance"
    assert bound.station_output_w == pytest.approx(0.5 * (5.10 - 0.5 * 0.28843), rel=1e-3)
    assert bound.minutes_p50 > free.minutes_p50


def test_a_greater_least_current_refuses_a_weak_source() -> None:
    picky = replace(PHONE, input_least_a=1.5)
    assert a_row(STATIONS["B"], 9.487, devices=(picky,)).limit == "too_little_current"
    # A nearly full phone draws less than that of its own accord and still counts as charging.
    assert a_row(STATIONS["B"], 40.0, devices=(picky,)).minutes_p50 is not None


def test_through_a_store_the_chain_feeds_the_stores_charger() -> None:
    bank = Store(id="X", name="bank")
    plan = Plan(people=(turner(9.487),), stations=(STATIONS["B"],), devices=(PHONE,), stores=(bank,))
    row = next(row for row in effort(plan).rows if (row.route, row.charge) == ("store", "full"))
    assert row.chain_fraction == pytest.approx(0.873 * 0.765 * row.station_output_w / row.person_power_w, rel=1e-9)
    assert row.minutes_p50 == pytest.approx(60.0 * 15.4 / 0.873 / 0.765 / row.station_output_w, rel=1e-9)


def test_a_long_day_at_a_crank_is_held_by_the_hand() -> None:
    """30 N at 0.05 m is 1.5 N.m however many watts somebody has; up to half an hour a day it does not count."""
    short_arm = replace(STATIONS["B"], crank_radius_m=0.05)
    long_day = a_row(short_arm, 60.0, "day")
    short_day = a_row(short_arm, 60.0, "day", people=(replace(turner(60.0), cap_min=30),))
    assert long_day.limit in {"machine", "person"}
    assert long_day.station_output_w < short_day.station_output_w


def test_work_curve_is_the_chain_itself() -> None:
    chain = chain_of(STATIONS["B"])
    work = work_curve(chain, UsbSink(), None)
    assert np.all(np.diff(work.plug_w) > 0.0)
    assert np.all(np.diff(work.human_w) >= 0.0)
    for plug_w in (1.0, 3.3, 7.7):
        dense = charging_point(chain, np.linspace(40.0, 80.0, 2001), UsbSink(least_a=0.0), plug_w=plug_w)
        reached = np.isfinite(dense.plug_w) & (dense.plug_w > plug_w * (1.0 - 1e-6))
        assert float(work.human_at(np.array(plug_w))) == pytest.approx(float(dense.human_w[reached].min()), rel=2e-3)


def test_people_are_solved_together_as_if_alone() -> None:
    station, sample, sink = STATIONS["B"], draws(16), UsbSink()
    outputs = [person_output(Plan(), turner(watts), station) for watts in (6.0, 9.0, 9.0, 25.0)]
    tries = [np.ones(16)] * 4
    together = chain_sources(station, sink, outputs, tries, sample)
    alone = [chain_sources(station, sink, [output], [tries[0]], sample)[0] for output in outputs]
    assert [one.output_w for one in together] == pytest.approx([one.output_w for one in alone], rel=1e-9)
    assert together[1] is together[2]


def test_sample_of_a_sure_person_lies_around_the_solved_point() -> None:
    station, sample = STATIONS["B"], draws()
    output = person_output(Plan(), turner(9.487), station)
    (source,) = chain_sources(station, UsbSink(), [output], [np.ones(sample.person.size)], sample)
    assert float(np.median(source.sample_w)) == pytest.approx(source.output_w, rel=5e-3)
    assert 0.03 < float(np.std(source.sample_w)) / source.output_w < 0.2


def test_curve_at_a_station_by_parts_ends_full() -> None:
    plan = Plan(people=(turner(9.487),), stations=(STATIONS["B"],), devices=(PHONE,))
    row = effort(plan).rows[0]
    curve = charge_curve(plan, row)
    assert curve.soc_p50_fraction[-1] == pytest.approx(1.0)
    assert curve.minutes[-1] == pytest.approx(row.minutes_p50)
    assert np.all(curve.soc_p10_fraction <= curve.soc_p90_fraction)


@settings(max_examples=12, deadline=None)
@given(st.sampled_from(["A", "A-buck", "B", "C-5V"]), st.floats(1.0, 60.0), st.floats(1.0, 2.0))
def test_a_stronger_person_never_takes_more_minutes(key: str, watts: float, more: float) -> None:
    weak, strong = a_row(STATIONS[key], watts), a_row(STATIONS[key], watts * more)
    if weak.minutes_p50 is not None:
        assert strong.minutes_p50 <= weak.minutes_p50 * (1.0 + 1e-6)
        assert weak.minutes_p10 <= weak.minutes_p50
        assert weak.minutes_p90 is None or weak.minutes_p50 <= weak.minutes_p90


@settings(max_examples=10, deadline=None)
@given(st.floats(5.0, 30.0), st.floats(0.5, 0.9), st.floats(0.0, 0.1))
def test_a_better_gear_never_takes_more_minutes(watts: float, eta: float, gain: float) -> None:
    base = STATIONS["B"]
    worse, better = (replace(base, gear=replace(base.gear, eta=value)) for value in (eta, eta + gain))
    slow, quick = a_row(worse, watts, "day"), a_row(better, watts, "day")
    if slow.minutes_p50 is not None:
        assert quick.minutes_p50 <= slow.minutes_p50 * (1.0 + 1e-6)


def test_a_weak_day_below_the_least_current_counts_as_never_full() -> None:
    """At 10.4 W the phone just gets its ampere; a good tenth of days give less, and then it takes none."""
    picky = replace(PHONE, input_least_a=1.0)
    row = a_row(STATIONS["B"], 10.4, "day", devices=(picky,))
    assert row.minutes_p50 is not None
    assert row.minutes_p90 is None
    assert a_row(STATIONS["B"], 10.4, "day").minutes_p90 is not None


def test_an_estimate_loses_watts_at_a_crank_that_wants_fast_turning() -> None:
    """Arms are best near 55 turns a minute; set A charges from about 97 on, so the same watts bring less there."""
    estimated = person_output(Plan(), Person(id="P", name="any", age=40), STATIONS["A"])
    outputs = [replace(estimated, person_power_w=7.0), person_output(Plan(), turner(7.0), STATIONS["A"])]
    sample = draws()
    sure = [np.ones(sample.person.size)] * 2
    paced, steady = chain_sources(STATIONS["A"], UsbSink(), outputs, sure, sample)
    assert steady.human_w == pytest.approx(7.0, rel=1e-3)
    assert paced.human_w <= 0.90 * 7.0
    assert paced.output_w < 0.90 * steady.output_w
    # The sample lies around the solved point, with the watts that are left at its pace.
    assert float(np.median(paced.sample_w)) == pytest.approx(paced.output_w, rel=0.02)


@pytest.mark.parametrize("watts", [15.0, 60.0])
def test_a_person_stronger_than_the_chain_charges_as_fast_as_it_carries(watts: float) -> None:
    """Set A-buck behind a pedal: nothing but the chain binds, and no torque limit hides it."""
    weak = replace(STATIONS["A-buck"], kind="pedal", torque_max_nm=16.0)
    row = a_row(weak, watts)
    assert row.limit == "machine"
    assert row.minutes_p50 == pytest.approx(a_row(weak, 14.0).minutes_p50, rel=2e-2)
    assert 0.0 < row.chain_fraction < 0.5
