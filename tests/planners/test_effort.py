"""Minutes per charge: check values, rules for rows, reasons, and laws that must hold for every plan.

Check values: 15.4 Wh behind 0.85 on 6 W is 181.2 min by energy alone (15.4 / 0.85 / 6 h) and 199.9 min with the
falling tail of a Li-ion charge; through a store of 0.90 x 0.85 it is 236.8 min (hand calculation).
"""

from __future__ import annotations

import math
from concurrent.futures import CancelledError
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Conditions, Device, Person, Plan, Station, Store, TemperaturePart
from kitplanner.planners.effort import EffortError, charge_curve, effort, one_charge, one_charge_curve
from kitplanner.planners.results import EffortRow

PHONE = Device(id="D", name="Phone", battery_wh=15.4, use_wh_per_day=6.0, start_fraction=0.2)
CRANK = Station(id="S", name="Crank", output_w=6.0)
ADULT = Person(id="P", name="Oruun", age=41, watts_by="share", share_arms_fraction=1.0, share_legs_fraction=1.0)
BANK = Store(id="B", name="Bank")


def a_plan(**parts: object) -> Plan:
    base = Plan(people=(ADULT,), stations=(CRANK,), devices=(PHONE,))
    return replace(base, **parts)


def rows(plan: Plan, **choice: str) -> dict[tuple[str, str], EffortRow]:
    """Rows of a plan with one device, station and person, by route and charge."""
    return {(row.route, row.charge): row for row in effort(plan, **choice).rows}


DEMOS = Path(__file__).parents[2] / "demo_profiles"


def demo_plan(name: str) -> Plan:
    return read_plan(DEMOS / f"{name}.kitplan")


@pytest.fixture(scope="module")
def household() -> Plan:
    return demo_plan("household")


def test_household_phone_by_its_crank_takes_the_check_values(household: Plan) -> None:
    found = rows(household, device="A-D1", station="A-S1", person="M1")
    direct, store = found["direct", "full"], found["store", "full"]
    assert direct.minutes_p50 == pytest.approx(199.9, rel=1e-3)
    assert store.minutes_p50 == pytest.approx(236.8, rel=1e-3)
    assert direct.station_output_w == pytest.approx(6.0)
    assert direct.person_power_w == pytest.approx(12.0)
    assert direct.chain_from == "S"
    assert direct.chain_fraction == pytest.approx(0.85)
    assert store.chain_fraction == pytest.approx(0.85 * 0.90 * 0.85)
    assert direct.limit == "person"


def test_one_charge_without_a_plan() -> None:
    (row,) = one_charge(15.4, 6.0).rows
    assert row.minutes_p50 == pytest.approx(199.9, rel=1e-3)
    assert (row.device, row.station, row.person) == ("", "", "")
    assert row.minutes_p10 < row.minutes_p50 < row.minutes_p90


def test_a_charge_below_the_tail_is_energy_alone() -> None:
    row = rows(a_plan(devices=(replace(PHONE, start_fraction=0.0, target_fraction=0.8),)))["direct", "plan"]
    assert row.minutes_p50 == pytest.approx(60.0 * 0.8 * 15.4 / 0.85 / 6.0, rel=1e-9)


@pytest.mark.parametrize("value", [0.0, -1.0, math.nan, math.inf])
def test_one_charge_refuses_impossible_values(value: float) -> None:
    with pytest.raises(EffortError, match="give a number above 0"):
        one_charge(value, 6.0)
    with pytest.raises(EffortError, match="give a number above 0"):
        one_charge_curve(15.4, value)


# --- which rows there are


def test_rows_come_in_the_plans_order(household: Plan) -> None:
    keys = [(row.device, row.station, row.person, row.route, row.charge) for row in effort(household).rows]
    order = [device.id for device in household.devices]
    assert len(set(keys)) == len(keys)
    assert keys == sorted(keys, key=lambda key: order.index(key[0]))
    assert [key[3:] for key in keys[:6]] == [(r, c) for r in ("direct", "store") for c in ("full", "plan", "day")]


def test_household_leaves_out_who_does_not_turn(household: Plan) -> None:
    assert {row.person for row in effort(household).rows} == {"M1", "M3", "M4"}


@pytest.mark.parametrize(
    "parts",
    [
        {"devices": (replace(PHONE, battery_wh=None),)},
        {"people": (replace(ADULT, cap_min=0),)},
        {"people": (replace(ADULT, bout_min=0),)},
        {"people": (replace(ADULT, stations=("elsewhere",)),)},
        {"people": (replace(ADULT, age=9),)},
        {"stations": (replace(CRANK, in_service=False),)},
        {"stations": (replace(CRANK, guarded=False),)},
        {"people": ()},
        {"stations": ()},
        {"devices": ()},
    ],
)
def test_rows_without_meaning_are_left_out(parts: dict[str, object]) -> None:
    assert effort(a_plan(**parts)).rows == ()


def test_a_device_at_its_target_has_no_planned_charge() -> None:
    found = rows(a_plan(devices=(replace(PHONE, start_fraction=1.0, target_fraction=1.0),)))
    assert ("direct", "plan") not in found
    assert ("direct", "full") in found


def test_a_device_without_use_has_no_day_charge() -> None:
    assert ("direct", "day") not in rows(a_plan(devices=(replace(PHONE, use_wh_per_day=0.0),)))


def test_store_route_only_where_the_station_feeds_one() -> None:
    assert {route for route, _ in rows(a_plan())} == {"direct"}
    assert {route for route, _ in rows(a_plan(stores=(BANK,)))} == {"direct", "store"}
    lone = a_plan(stores=(BANK,), stations=(replace(CRANK, feeds=("gone",)),))
    assert {route for route, _ in rows(lone)} == {"direct"}


def test_unknown_ids_are_named_with_the_known_ones() -> None:
    for kind, known in (("station", "S"), ("device", "D"), ("person", "P")):
        with pytest.raises(EffortError, match=f"no {kind} 'x'; choose one of: {known}"):
            effort(a_plan(), **{kind: "x"})


def test_a_cancelled_run_ends_without_an_answer() -> None:
    with pytest.raises(CancelledError):
        effort(a_plan(), cancelled=lambda: True)


# --- charges and routes


def test_day_charge_ends_at_four_fifths() -> None:
    row = rows(a_plan())["direct", "day"]
    assert row.minutes_p50 == pytest.approx(60.0 * 6.0 / 0.85 / 6.0, rel=1e-9)


def test_a_days_use_above_the_battery_is_several_charges() -> None:
    laptop = replace(PHONE, battery_wh=50.0, use_wh_per_day=90.0)
    strong = replace(CRANK, output_w=20.0)
    row = rows(a_plan(devices=(laptop,), stations=(strong,)))["direct", "day"]
    assert row.minutes_p50 == pytest.approx(60.0 * 90.0 / 0.85 / 20.0, rel=1e-6)


def test_several_stores_weigh_by_their_usable_capacity() -> None:
    small = Store(id="B1", name="small", nominal_wh=10.0, floor_fraction=0.0, eta_in=0.5, eta_out=0.5)
    large = Store(id="B2", name="large", nominal_wh=30.0, floor_fraction=0.0, eta_in=1.0, eta_out=1.0)
    found = rows(a_plan(stores=(small, large)))["store", "full"]
    assert found.chain_fraction == pytest.approx(0.85 * (10.0 * 0.25 + 30.0 * 1.0) / 40.0)
    only = rows(a_plan(stores=(small, large), stations=(replace(CRANK, feeds=("B2",)),)))["store", "full"]
    assert only.chain_fraction == pytest.approx(0.85)


def test_both_routes_agree_where_a_store_loses_nothing_and_no_tail_is_reached() -> None:
    ideal = Store(id="B", name="ideal", eta_in=1.0, eta_out=1.0)
    found = rows(a_plan(stores=(ideal,)))
    assert found["store", "day"].minutes_p50 == pytest.approx(found["direct", "day"].minutes_p50)


# --- reasons


def test_a_strong_station_is_held_back_by_the_device() -> None:
    row = rows(a_plan(stations=(replace(CRANK, output_w=60.0),)))["direct", "full"]
    assert row.limit == "acceptance"
    # 0.5 C with the default tail, hand calculation: s_x 0.865, 1.73 h + 0.30 h ln 10.
    assert row.minutes_p50 == pytest.approx(60.0 * (1.73 + 0.3 * math.log(10.0)), rel=1e-9)


def test_charging_power_and_input_current_limit_a_device() -> None:
    strong = (replace(CRANK, output_w=60.0),)
    by_power = rows(a_plan(stations=strong, devices=(replace(PHONE, charge_w=3.08),)))["direct", "day"]
    assert by_power.minutes_p50 == pytest.approx(60.0 * 6.0 / 3.08, rel=1e-9)
    by_current = rows(a_plan(stations=strong, devices=(replace(PHONE, input_limit_a=0.5),)))["direct", "day"]
    assert by_current.minutes_p50 == pytest.approx(60.0 * 6.0 / (0.85 * 2.5), rel=1e-9)
    assert by_power.limit == by_current.limit == "acceptance"


def test_a_person_above_the_rating_is_limited_by_the_machine() -> None:
    fit = Person(id="P", name="Quorin", age=25, watts_by="own", own_arms_w=200.0, own_legs_w=200.0)
    row = rows(a_plan(people=(fit,)))["direct", "day"]
    assert row.limit == "machine"
    assert row.station_output_w == pytest.approx(6.0)


def test_too_little_current_has_no_minutes() -> None:
    row = rows(a_plan(stations=(replace(CRANK, output_w=0.4),)))["direct", "full"]
    assert (row.minutes_p10, row.minutes_p50, row.minutes_p90) == (None, None, None)
    assert row.limit == "too_little_current"
    assert row.chain_fraction is None


def test_connectors_must_fit_where_both_are_named() -> None:
    usb, plug = replace(CRANK, connector="5 V USB"), replace(PHONE, connector="12 V socket")
    row = rows(a_plan(stations=(usb,), devices=(plug,)))["direct", "full"]
    assert row.minutes_p50 is None
    assert row.limit == "connector"
    assert rows(a_plan(stations=(usb,), devices=(replace(plug, connector=" 5 v usb"),)))["direct", "full"].minutes_p50
    assert rows(a_plan(stations=(usb,)))["direct", "full"].minutes_p50
    through = rows(a_plan(stations=(usb,), devices=(plug,), stores=(BANK, replace(BANK, id="B2", connector="x"))))
    assert through["store", "full"].minutes_p50 is not None
    wrong = rows(a_plan(devices=(plug,), stores=(replace(BANK, connector="x"),)))
    assert wrong["store", "full"].limit == "connector"
    assert wrong["direct", "full"].minutes_p50 is not None


def test_cold_slows_and_frost_stops_the_charge() -> None:
    """Pack data sheets: no charge below 0, 0.1 C to 5, 0.2 C to 15 degC."""
    strong = (replace(CRANK, output_w=60.0),)

    def day(degc: float) -> EffortRow:
        return rows(a_plan(stations=strong, conditions=Conditions(air_degc=degc)))["direct", "day"]

    assert day(20.0).minutes_p50 == pytest.approx(60.0 * 6.0 / 15.4 / 0.5)
    assert day(10.0).minutes_p50 == pytest.approx(60.0 * 6.0 / 15.4 / 0.2)
    assert day(2.0).minutes_p50 == pytest.approx(60.0 * 6.0 / 15.4 / 0.1)
    assert (day(-1.0).minutes_p50, day(-1.0).limit) == (None, "acceptance")
    # Nor above 55 degC.
    assert day(54.0).minutes_p50 == day(20.0).minutes_p50
    assert (day(56.0).minutes_p50, day(56.0).limit) == (None, "acceptance")


def test_temperature_of_day_parts_replaces_the_plans_air() -> None:
    part = TemperaturePart(id="T", start="00:00", end="24:00", air_degc=-5.0)
    frost = Conditions(air_degc=20.0, temperatures=(part,))
    assert rows(a_plan(conditions=frost))["direct", "full"].minutes_p50 is None


# --- ranges and curves


def test_the_answer_never_flickers(household: Plan) -> None:
    assert effort(household) == effort(household)


def test_a_person_known_less_well_has_the_wider_range() -> None:
    by_age = Person(id="P", name="Y", age=40)
    by_test = Person(id="P", name="Y", age=40, watts_by="own", own_arms_w=20.0)
    wide, narrow = (rows(a_plan(people=(person,)))["direct", "day"] for person in (by_age, by_test))
    assert wide.minutes_p90 / wide.minutes_p50 > narrow.minutes_p90 / narrow.minutes_p50


def test_own_spread_never_lifts_a_person_above_the_rating() -> None:
    row = rows(a_plan())["direct", "day"]
    rating_alone = one_charge(15.4, 6.0).rows[0]
    assert row.minutes_p50 / row.minutes_p10 <= 1.05 * rating_alone.minutes_p50 / rating_alone.minutes_p10


@pytest.mark.parametrize("name", ["household", "camp", "shelter", "bench"])
def test_ranges_hold_the_central_run_in_every_demo(name: str) -> None:
    found = effort(demo_plan(name)).rows
    assert found
    for row in found:
        if row.minutes_p50 is None:
            assert row.limit in ("too_little_current", "connector", "acceptance")
            continue
        assert 0.0 < row.minutes_p10 <= row.minutes_p50
        assert row.minutes_p90 is None or row.minutes_p90 >= row.minutes_p50
        assert 0.0 < row.chain_fraction < 1.0


def test_curve_runs_from_start_to_target_inside_its_range() -> None:
    plan = a_plan(stores=(BANK,))
    for row in effort(plan).rows:
        curve = charge_curve(plan, row)
        assert curve.minutes[-1] == pytest.approx(row.minutes_p50)
        start, end = {"full": (0.0, 1.0), "plan": (0.2, 1.0), "day": (0.8 - 6.0 / 15.4, 0.8)}[row.charge]
        assert curve.soc_p50_fraction[0] == pytest.approx(start)
        assert curve.soc_p50_fraction[-1] == pytest.approx(end)
        assert np.all(curve.soc_p10_fraction <= curve.soc_p50_fraction)
        assert np.all(curve.soc_p50_fraction <= curve.soc_p90_fraction)
        assert np.all(np.diff(curve.soc_p50_fraction) >= 0.0)
        stored_wh = np.trapezoid(curve.power_w, curve.minutes) / 60.0
        assert stored_wh == pytest.approx(15.4 * (end - start), rel=1e-3)


def test_curve_through_a_store_is_a_straight_line() -> None:
    plan = a_plan(stores=(BANK,))
    curve = charge_curve(plan, rows(plan)["store", "full"])
    assert np.allclose(np.diff(curve.soc_p50_fraction, 2), 0.0, atol=1e-12)


def test_curve_of_a_row_without_minutes_is_empty() -> None:
    plan = a_plan(stations=(replace(CRANK, output_w=0.4),))
    assert charge_curve(plan, rows(plan)["direct", "full"]).minutes.size == 0


def test_curve_of_a_vanished_row_says_so() -> None:
    row = rows(a_plan())["direct", "full"]
    with pytest.raises(EffortError, match="no device 'D'"):
        charge_curve(a_plan(devices=()), row)
    with pytest.raises(EffortError, match="any more"):
        charge_curve(a_plan(devices=(replace(PHONE, battery_wh=None),)), row)


# --- laws

watts = st.floats(0.6, 200.0)
energies = st.floats(0.5, 500.0)
shares = st.floats(0.05, 1.0)


@settings(max_examples=40)
@given(energies, watts, st.floats(1.0, 5.0))
def test_more_watts_never_take_more_minutes(wh: float, station_w: float, more: float) -> None:
    assert one_charge(wh, station_w * more).rows[0].minutes_p50 <= one_charge(wh, station_w).rows[0].minutes_p50 + 1e-9


@settings(max_examples=40)
@given(st.floats(5.0, 100.0), st.floats(1.0, 100.0), st.floats(1.0, 8.0))
def test_scaling_all_energies_leaves_the_minutes(wh: float, station_w: float, factor: float) -> None:
    small, large = one_charge(wh, station_w).rows[0], one_charge(wh * factor, station_w * factor).rows[0]
    assert large.minutes_p50 == pytest.approx(small.minutes_p50, rel=1e-9)
    assert large.minutes_p90 == pytest.approx(small.minutes_p90, rel=1e-9)


@settings(max_examples=40)
@given(shares, st.floats(0.0, 0.5), watts, st.floats(0.3, 0.9))
def test_better_efficiency_never_takes_more_minutes(share: float, gain: float, station_w: float, eta: float) -> None:
    better = min(1.0, eta * (1.0 + gain))
    person = replace(ADULT, share_arms_fraction=share)
    base = a_plan(people=(person,), stations=(replace(CRANK, output_w=station_w),), stores=(BANK,))
    slow = rows(replace(base, devices=(replace(PHONE, eta=eta),)))
    quick = rows(replace(base, devices=(replace(PHONE, eta=better),)))
    for key, row in slow.items():
        if row.minutes_p50 is not None:
            assert quick[key].minutes_p50 <= row.minutes_p50 + 1e-9


@settings(max_examples=60)
@given(
    st.builds(
        Device,
        id=st.just("D"),
        name=st.just("any"),
        battery_wh=energies,
        use_wh_per_day=st.just(0.0) | st.floats(0.01, 600.0),
        start_fraction=st.floats(0.0, 1.0),
        target_fraction=st.floats(0.05, 1.0),
        eta=st.floats(0.05, 1.0),
        charge_rate_per_h=st.floats(0.05, 3.0),
        taper_end_per_h=st.floats(0.001, 0.5),
        taper_tau_h=st.floats(0.01, 2.0),
        charge_w=st.none() | st.floats(0.5, 100.0),
        input_limit_a=st.none() | st.floats(0.1, 5.0),
    ),
    st.builds(
        Person,
        id=st.just("P"),
        name=st.just("any"),
        age=st.integers(12, 79),
        level=st.sampled_from(["light", "usual", "strong"]),
    ),
    st.builds(Station, id=st.just("S"), name=st.just("any"), output_w=watts),
)
def test_ranges_are_ordered_for_any_device_person_and_station(device: Device, person: Person, station: Station) -> None:
    plan = Plan(people=(person,), stations=(station,), devices=(device,), stores=(BANK,))
    for row in effort(plan).rows:
        if row.minutes_p50 is None:
            continue
        assert row.minutes_p10 <= row.minutes_p50
        assert row.minutes_p90 is None or row.minutes_p50 <= row.minutes_p90
        assert math.isfinite(row.minutes_p50)
        floor_min = 60.0 * _filled_wh(device, row.charge) / row.chain_fraction / row.station_output_w
        assert row.minutes_p50 >= floor_min * (1.0 - 1e-6)


def _filled_wh(device: Device, charge: str) -> float:
    """Energy of a charge into the battery."""
    if charge == "day":
        return device.use_wh_per_day
    return device.battery_wh * (1.0 if charge == "full" else device.target_fraction - device.start_fraction)
