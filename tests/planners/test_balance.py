"""The balance against the worked results of three invented sites, its edge cases and its invariants.

The sites' results were worked out by hand from the formulas of `kitplanner.planners.balance`, apart from this code:
sums within 1 %, coverage within 0.02.
"""

from __future__ import annotations

import doctest
import random

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import (
    Block,
    Conditions,
    Device,
    MedicalNeed,
    OtherSource,
    Person,
    Plan,
    Station,
    Store,
    Window,
)
from kitplanner.plan.shipped import demo
from kitplanner.planners import balance as balance_module
from kitplanner.planners import balance_cuts
from kitplanner.planners.balance import balance
from kitplanner.planners.balance_cuts import shared_fraction
from kitplanner.planners.demand import device_needs
from kitplanner.planners.people import person_output


@pytest.fixture(scope="module")
def sites():
    return {name: read_plan(demo(name)) for name in ("household", "camp", "shelter", "bench")}


def with_device(plan, key, **changes):
    return replace(plan, devices=tuple(replace(d, **changes) if d.id == key else d for d in plan.devices))


def with_station(plan, key, **changes):
    return replace(plan, stations=tuple(replace(s, **changes) if s.id == key else s for s in plan.stations))


def with_person(plan, keys, **changes):
    return replace(plan, people=tuple(replace(p, **changes) if p.id in keys else p for p in plan.people))


def without_device(plan, *keys):
    return replace(plan, devices=tuple(d for d in plan.devices if d.id not in keys))


@pytest.mark.parametrize("module", [balance_module, balance_cuts])
def test_doctests(module):
    assert doctest.testmod(module).failed == 0


@pytest.mark.parametrize(
    ("name", "coverage", "need", "have", "verdict", "limit", "first_empty"),
    [
        ("household", 1.06, 127.3, 134.8, "fits", "people-minutes", None),
        ("camp", 1.03, 284.1, 291.9, "tight", "station-minutes", None),
        ("shelter", 0.51, 7492, 3816, "short", "people-minutes", 3),
    ],
)
def test_sites(sites, name, coverage, need, have, verdict, limit, first_empty):
    result = balance(sites[name])
    assert result.coverage_fraction == pytest.approx(coverage, abs=0.005)
    assert result.need_wh == pytest.approx(need, rel=0.001)
    assert result.have_wh == pytest.approx(have, rel=0.001)
    assert (result.verdict, result.limit, result.first_empty_day) == (verdict, limit, first_empty)
    assert result.station_to_outlet_fraction == pytest.approx(0.765)


@pytest.mark.parametrize(
    ("name", "ends"),
    [
        ("household", [133.3, 109.2, 85.1, 61.0, 37.0]),
        ("camp", [117.9, 85.9, 54.1]),
        ("shelter", [561, 69, -423]),
    ],
)
def test_end_of_day_stores(sites, name, ends):
    found = [day.end_wh for day in balance(sites[name]).days]
    assert found[: len(ends)] == pytest.approx(ends, abs=0.6)


@pytest.mark.parametrize(
    ("name", "usable"),
    [
        ("household", {"A-B1": 101.9}),
        ("camp", {"B-B1": 51.7, "B-B2": 25.5, "B-B3": 0.0}),
        ("shelter", {"C-B1": 685.4, "C-B2": 147.2}),
    ],
)
def test_usable_in_stores(sites, name, usable):
    found = {row.store: row.usable_wh for row in balance(sites[name]).stores}
    assert found == pytest.approx(usable, rel=0.001, abs=0.05)


def test_shelter_shortage_and_cuts(sites):
    result = balance(sites["shelter"])
    assert result.short_wh_per_day == pytest.approx(525, abs=0.5)
    assert [row.priority for row in result.cuts.strict] == [1, 2, 3, 5]
    assert [row.need_wh for row in result.cuts.strict] == pytest.approx([1455, 3174, 2846, 237], rel=0.001)
    assert [round(row.covered_fraction, 2) for row in result.cuts.strict] == [1.00, 0.77, 0.05, 0.08]
    assert [round(row.covered_fraction, 2) for row in result.cuts.shared] == [0.52] * 4
    assert [round(row.covered_fraction, 2) for row in result.devices] == [0.52] * 10


def test_stations_and_people_of_the_sites(sites):
    camp = balance(sites["camp"])
    pedal, crank = camp.stations
    assert (pedal.available_min, pedal.offered_min, pedal.used_min) == (180, 540, pytest.approx(180))
    assert pedal.made_wh_per_day == pytest.approx(91.6, abs=0.05)
    assert crank.made_wh_per_day == pytest.approx(2.0, abs=0.05)
    assert pedal.human_wh_per_day == pytest.approx(91.6 / 0.60, rel=0.001)
    turns = [row for row in camp.people if row.station == "B-S1"]
    # Everybody's minutes shrink alike: a third of the own cap.
    assert [row.used_min / row.cap_min for row in turns] == pytest.approx([1 / 3] * len(turns))
    shelter = balance(sites["shelter"])
    assert [row.made_wh_per_day for row in shelter.stations] == pytest.approx([549.3, 7.8], abs=0.05)
    assert [(row.available_min, row.offered_min) for row in shelter.stations] == [(1080, 880), (480, 120)]


def test_household_with_forgotten_banks(sites):
    plan = sites["household"]
    low = replace(plan, stores=tuple(replace(store, start_fraction=0.10) for store in plan.stores))
    result = balance(low)
    assert result.coverage_fraction == pytest.approx(0.26, abs=0.005)
    assert result.first_empty_day == 3
    assert result.needed_min_per_day / 60 == pytest.approx(5.5, abs=0.05)


def test_household_people_must_supply(sites):
    plan = sites["household"]
    result = balance(plan)
    needed_s = (result.need_wh - 101.9) / plan.days / result.station_to_outlet_fraction
    assert needed_s == pytest.approx(6.6, abs=0.05)
    assert needed_s / 8.6 == pytest.approx(0.77, abs=0.01)


def test_household_events(sites):
    plan = sites["household"]
    result = balance(plan)
    ill = balance(with_person(plan, {"M3"}, cap_min=0))
    lost = (result.have_wh - ill.have_wh) * 4 / 5
    assert lost == pytest.approx(6.4, abs=0.05)
    assert result.have_wh - result.need_wh - lost == pytest.approx(1.1, abs=0.05)
    assert balance(replace(plan, days=8)).verdict == "short"


def test_camp_events(sites):
    plan = sites["camp"]
    result = balance(plan)
    morning = balance(with_station(plan, "B-S1", hours=(Window(start="08:30", end="10:00"),)))
    assert (result.have_wh - morning.have_wh) / plan.days == pytest.approx(38.7, rel=0.01)
    dropped = sum(need.day_o_wh for need in device_needs(plan) if need.priority >= 4)
    assert dropped * 1.15 == pytest.approx(17.6, abs=0.05)
    longer = with_station(plan, "B-S1", hours=(Window(start="08:30", end="10:00"), Window(start="16:30", end="18:52")))
    assert (balance(longer).have_wh - result.have_wh) / plan.days == pytest.approx(8, abs=0.3)
    second = balance(with_station(plan, "B-S1", count=2))
    assert second.stations[0].used_min == pytest.approx(360)
    assert second.limit == "station-minutes"
    watts = {(row.person, row.station): row.output_w for row in result.people}
    early = (watts["L2", "B-S1"] + watts["L4", "B-S1"]) * 20 / 60 * result.station_to_outlet_fraction
    assert early == pytest.approx(19, abs=0.5)


def _cap(plan, minutes):
    return with_person(plan, {f"R{n}" for n in range(23, 40)}, cap_min=minutes)


def _more_people(plan):
    more = tuple(
        Person(
            id=f"V{n}", name=f"V{n}", age=30, watts_by="share", share_legs_fraction=1.0, cap_min=40, stations=("C-S1",)
        )
        for n in range(26)
    )
    return replace(plan, people=plan.people + more)


LEVERS = {
    "phones 3 Wh": (lambda p: with_device(p, "C-D1", use_wh_per_day=3.0), 0.63),
    "phones not charged": (lambda p: without_device(p, "C-D1"), 0.80),
    "hall 4 x 4 h": (lambda p: with_device(p, "C-D2", count=4, use_h_per_day=4.0), 0.59),
    "hall off": (lambda p: without_device(p, "C-D2"), 0.66),
    "laptop 1 h": (lambda p: with_device(p, "C-D6", use_h_per_day=1.0), 0.55),
    "router 4 h": (lambda p: with_device(p, "C-D7", use_h_per_day=4.0), 0.54),
    "tablets off": (lambda p: without_device(p, "C-D8"), 0.52),
    "cap 60 and third stand": (lambda p: with_station(_cap(p, 60), "C-S1", count=3), 0.67),
    "26 more and four stands": (lambda p: with_station(_more_people(p), "C-S1", count=4), 1.00),
    "other source": (
        lambda p: replace(p, other_sources=(OtherSource(id="o", name="sun", wh_per_day=686.0),)),
        1.00,
    ),
    "fuller store": (
        lambda p: replace(
            p,
            stores=(
                *p.stores,
                Store(id="x", name="x", nominal_wh=6900, health_fraction=0.9, start_fraction=0.9, floor_fraction=0.2),
            ),
        ),
        1.00,
    ),
}


@pytest.mark.parametrize("lever", LEVERS)
def test_shelter_levers(sites, lever):
    edit, coverage = LEVERS[lever]
    assert balance(edit(sites["shelter"])).coverage_fraction == pytest.approx(coverage, abs=0.01)


def test_shelter_needs_a_third_stand_for_longer_turns(sites):
    longer = balance(_cap(sites["shelter"], 60))
    assert longer.stations[0].offered_min == pytest.approx(1220)
    assert longer.limit == "station-minutes"


def test_shelter_horizon(sites):
    assert balance(replace(sites["shelter"], days=1)).coverage_fraction > 1.0
    assert balance(replace(sites["shelter"], days=2)).coverage_fraction < 1.0


@pytest.mark.parametrize(
    ("phone_wh", "outlet", "need", "coverage", "people"),
    [
        (4.0, 538.4, 4322, 0.88, 1.17),
        (3.0, 481.9, 3847, 0.99, 1.01),
        (2.5, 453.6, 3610, 1.06, 0.93),
        (2.0, 425.4, 3373, 1.13, 0.85),
    ],
)
def test_shelter_combinations(sites, phone_wh, outlet, need, coverage, people):
    plan = with_device(sites["shelter"], "C-D2", count=4, use_h_per_day=4.0)
    plan = with_device(with_device(plan, "C-D6", use_h_per_day=1.0), "C-D7", use_h_per_day=4.0)
    plan = with_device(without_device(plan, "C-D8"), "C-D1", use_wh_per_day=phone_wh)
    result = balance(plan)
    assert result.days[0].use_wh == pytest.approx(outlet, rel=0.001)
    assert result.need_wh == pytest.approx(need, rel=0.002)
    assert result.coverage_fraction == pytest.approx(coverage, abs=0.01)
    stored = sum(row.usable_wh for row in result.stores)
    assert (result.need_wh - stored) / (result.have_wh - stored) == pytest.approx(people, abs=0.01)


def test_shelter_event_one_stand_breaks(sites):
    result = balance(with_station(sites["shelter"], "C-S1", count=1))
    assert result.stations[0].available_min == 540
    assert result.limit == "station-minutes"


def test_bench_balance_runs_on_stations_by_parts(sites):
    result = balance(sites["bench"])
    assert result.days[0].use_wh == pytest.approx(6.0 / sites["bench"].devices[0].eta)
    assert sum(row.made_wh_per_day for row in result.stations) > 0.0
    # Losses: what people put in is more than what comes out, at every station used.
    assert all(row.human_wh_per_day >= row.made_wh_per_day for row in result.stations)


def test_medical_needs_stay_outside(sites):
    plan = sites["household"]
    need = MedicalNeed(id="m", name="breathing support", power_w=40.0, hours_per_day=8.0)
    assert balance(replace(plan, medical_needs=(need,))) == balance(plan)


def test_hours_sum_to_the_day(sites):
    for name in ("household", "camp", "shelter"):
        result = balance(sites[name])
        assert len(result.hours) == 24
        assert sum(row.use_wh for row in result.hours) == pytest.approx(result.days[0].use_wh)
        assert sum(row.made_wh for row in result.hours) == pytest.approx(result.days[0].made_wh)
    # Nothing is made in quiet hours, hall lights burn from 17 to 22.
    shelter = balance(sites["shelter"]).hours
    assert shelter[3].made_wh == 0.0
    assert shelter[18].use_wh > shelter[16].use_wh


PHONE = Device(id="d", name="phone", battery_wh=15.4, use_wh_per_day=6.0, start_fraction=0.2, floor_fraction=0.2)
CRANK = Station(id="s", name="crank", output_w=6.0, daily_min=240)
ADULT = Person(id="p", name="Oruun", age=40, watts_by="share", share_arms_fraction=1.0, share_legs_fraction=1.0)
BANK = Store(id="b", name="bank")


def test_empty_plan():
    result = balance(Plan())
    assert (result.coverage_fraction, result.limit, result.verdict) == (None, None, "fits")
    assert (result.need_wh, result.have_wh, result.short_wh_per_day) == (0.0, 0.0, 0.0)
    assert result.needed_min_per_day == 0.0
    assert result.cuts.strict == ()
    assert len(result.days) == Plan().days


def test_no_people():
    result = balance(Plan(devices=(PHONE,), stations=(CRANK,), stores=(BANK,)))
    assert result.limit == "people-minutes"
    assert result.people == ()
    assert result.have_wh == pytest.approx(37 * 0.9 * 0.85)
    assert result.needed_min_per_day is not None


def test_no_stores_means_no_store_losses():
    result = balance(Plan(days=1, margin_fraction=0.0, devices=(PHONE,), stations=(CRANK,), people=(ADULT,)))
    assert result.station_to_outlet_fraction == 1.0
    assert result.have_wh == pytest.approx(6.0)
    assert result.coverage_fraction == pytest.approx(6.0 / (6.0 / 0.85))


def test_no_stations():
    result = balance(Plan(days=9, devices=(PHONE,), people=(ADULT,), stores=(BANK,)))
    assert result.limit is None
    assert result.needed_min_per_day is None


def test_zero_use():
    idle = replace(PHONE, use_wh_per_day=0.0)
    result = balance(Plan(devices=(idle,), stations=(CRANK,), people=(ADULT,), stores=(BANK,)))
    assert (result.coverage_fraction, result.limit, result.verdict) == (None, None, "fits")
    assert result.devices[0].covered_fraction == 1.0


def test_own_charge_covers_all_use():
    full = replace(PHONE, start_fraction=1.0, use_wh_per_day=1.0)
    result = balance(Plan(days=2, margin_fraction=0.0, devices=(full,), stations=(CRANK,), people=(ADULT,)))
    assert result.coverage_fraction is None
    assert result.first_empty_day is None


def test_storage_is_the_limit_when_made_energy_overflows():
    lamp = Device(id="l", name="lamp", use_by="power_hours", use_w=0.1, use_h_per_day=1.0)
    result = balance(Plan(devices=(lamp,), stations=(CRANK,), people=(ADULT,), stores=(BANK,)))
    assert result.limit == "storage"
    half_empty = replace(BANK, start_fraction=0.2)
    assert (
        balance(Plan(days=1, devices=(lamp,), stations=(CRANK,), people=(ADULT,), stores=(half_empty,))).limit
        == "people-minutes"
    )


def test_closed_stations_give_no_minutes():
    for change in ({"in_service": False}, {"guarded": False}, {"count": 0}, {"daily_min": 0}):
        result = balance(Plan(devices=(PHONE,), stations=(replace(CRANK, **change),), people=(ADULT,)))
        assert result.have_wh == 0.0, change
        assert result.limit == "station-minutes"


def test_other_source_goes_through_the_stores():
    source = OtherSource(id="o", name="sun", wh_per_day=10.0)
    result = balance(
        Plan(days=2, devices=(PHONE,), stores=(replace(BANK, start_fraction=0.1),), other_sources=(source,))
    )
    assert result.have_wh == pytest.approx(2 * 10.0 * 0.765)


def test_station_feeds_only_its_own_store():
    good = replace(BANK, id="g", start_fraction=0.1, eta_in=1.0, eta_out=1.0)
    poor = replace(BANK, id="w", start_fraction=0.1, eta_in=0.5, eta_out=0.5)
    plan = Plan(days=1, devices=(PHONE,), stores=(good, poor), people=(ADULT,))
    to_good = balance(replace(plan, stations=(replace(CRANK, feeds=("g",)),)))
    to_all = balance(replace(plan, stations=(CRANK,)))
    assert to_good.have_wh == pytest.approx(6.0)
    assert to_all.have_wh == pytest.approx(6.0 * (1.0 + 0.25) / 2)


def test_ramp_up_starts_with_a_fifth_of_the_cap():
    plan = Plan(days=7, devices=(PHONE,), stations=(CRANK,), people=(ADULT,), conditions=Conditions(ramp_up=True))
    made = [day.made_wh for day in balance(plan).days]
    # Caps of 20, 40, 60, 80, 100 % on the first five days (NIOSH 2016-106, ramp-up for new workers).
    assert made == pytest.approx([1.2, 2.4, 3.6, 4.8, 6.0, 6.0, 6.0])
    result = balance(plan)
    assert result.have_wh == pytest.approx(sum(made))
    assert result.stations[0].made_wh_per_day == pytest.approx(sum(made) / 7)


def test_station_without_hours_is_open_outside_quiet_hours():
    quiet = Block(id="q", name="quiet", kind="quiet", windows=(Window(start="22:00", end="07:00"),))
    station = replace(CRANK, daily_min=None, slot_min=20)
    result = balance(Plan(blocks=(quiet,), stations=(station,), devices=(PHONE,), people=(ADULT,)))
    assert result.stations[0].available_min == 15 * 60
    assert result.hours[23].made_wh == 0.0


def test_priority_gaps_and_own_credit_in_a_shared_cut():
    rich = replace(PHONE, id="r", priority=5, start_fraction=1.0)
    poor = replace(PHONE, id="q", priority=1)
    result = balance(Plan(days=3, margin_fraction=0.0, devices=(poor, rich)))
    assert [row.priority for row in result.cuts.strict] == [1, 5]
    assert [row.covered_fraction for row in result.cuts.strict] == pytest.approx([0.0, 15.4 * 0.8 / 18])
    # Nothing can be shared, so the class with charge of its own keeps it.
    assert [row.covered_fraction for row in result.cuts.shared] == pytest.approx([0.0, 15.4 * 0.8 / 18])


def test_shared_fraction_without_need():
    assert shared_fraction([], [], 5.0) == 1.0
    assert shared_fraction([0.0], [0.0], 0.0) == 1.0


# --- invariants ----------------------------------------------------------------------------------------------------

fractions = st.floats(0.05, 1.0)


@st.composite
def plans(draw, same_watts=False):
    share = draw(st.floats(0.1, 1.0))
    people = tuple(
        Person(
            id=f"p{n}",
            name=f"p{n}",
            age=35,
            watts_by="share",
            share_arms_fraction=share if same_watts else draw(st.floats(0.1, 1.0)),
            share_legs_fraction=share if same_watts else draw(st.floats(0.1, 1.0)),
            cap_min=draw(st.integers(0, 60)),
        )
        for n in range(draw(st.integers(0, 5)))
    )
    stations = tuple(
        Station(
            id=f"s{n}",
            name=f"s{n}",
            kind=draw(st.sampled_from(["crank", "pedal"])) if not same_watts else "crank",
            output_w=draw(st.floats(1.0, 60.0)) if not same_watts else 6.0,
            daily_min=draw(st.integers(0, 300)),
        )
        for n in range(draw(st.integers(0, 3)))
    )
    stores = tuple(
        Store(
            id=f"b{n}",
            name=f"b{n}",
            nominal_wh=draw(st.floats(5.0, 500.0)),
            health_fraction=draw(fractions),
            start_fraction=draw(fractions),
            floor_fraction=draw(st.floats(0.0, 0.9)),
            eta_in=draw(fractions),
            eta_out=draw(fractions),
        )
        for n in range(draw(st.integers(0, 3)))
    )
    devices = tuple(
        Device(
            id=f"d{n}",
            name=f"d{n}",
            count=draw(st.integers(1, 5)),
            battery_wh=draw(st.none() | st.floats(1.0, 60.0)),
            use_wh_per_day=draw(st.floats(0.1, 50.0)),
            start_fraction=draw(fractions),
            floor_fraction=draw(st.floats(0.0, 0.9)),
            eta=draw(fractions),
            priority=draw(st.integers(1, 5)),
        )
        for n in range(draw(st.integers(1, 4)))
    )
    days = draw(st.integers(1, 10))
    margin = draw(st.floats(0.0, 0.5))
    return Plan(people=people, stations=stations, stores=stores, devices=devices, days=days, margin_fraction=margin)


def covered(plan):
    coverage = balance(plan).coverage_fraction
    return float("inf") if coverage is None else coverage


def not_worse(better, worse):
    return better >= worse * (1 - 1e-9) - 1e-12


@given(plans(), st.floats(0.0, 1.0), st.sampled_from(["start_fraction", "eta_in", "eta_out"]))
def test_better_stores_never_worsen(plan, step, key):
    raised = replace(
        plan, stores=tuple(replace(s, **{key: getattr(s, key) + step * (1 - getattr(s, key))}) for s in plan.stores)
    )
    assert not_worse(covered(raised), covered(plan))


@given(plans(), st.floats(0.0, 1.0), st.sampled_from(["start_fraction", "eta"]))
def test_better_devices_never_worsen(plan, step, key):
    raised = replace(
        plan, devices=tuple(replace(d, **{key: getattr(d, key) + step * (1 - getattr(d, key))}) for d in plan.devices)
    )
    assert not_worse(covered(raised), covered(plan))


@given(plans(same_watts=True), st.integers(0, 60))
def test_more_people_and_minutes_never_worsen(plan, minutes):
    share = plan.people[0].share_arms_fraction if plan.people else 0.5
    more = Person(id="new", name="new", age=35, watts_by="share", share_arms_fraction=share, cap_min=minutes)
    assert not_worse(covered(replace(plan, people=(*plan.people, more))), covered(plan))
    longer = replace(plan, people=tuple(replace(p, cap_min=60) for p in plan.people))
    assert not_worse(covered(longer), covered(plan))


@given(plans(), st.integers(0, 60))
def test_more_people_never_worsen_where_stations_have_time(plan, minutes):
    roomy = replace(plan, stations=tuple(replace(s, daily_min=1000) for s in plan.stations))
    more = Person(id="new", name="new", age=35, watts_by="share", share_arms_fraction=0.1, cap_min=minutes)
    assert not_worse(covered(replace(roomy, people=(*roomy.people, more))), covered(roomy))


@given(plans(), st.floats(1.0, 3.0), st.integers(0, 5))
def test_more_demand_or_horizon_never_improves(plan, factor, days):
    thirsty = replace(plan, devices=tuple(replace(d, use_wh_per_day=d.use_wh_per_day * factor) for d in plan.devices))
    assert not_worse(covered(plan), covered(thirsty))
    assert not_worse(covered(plan), covered(replace(plan, days=plan.days + days)))


@given(plans(), st.floats(0.1, 10.0))
def test_scaling_energies_scales_results(plan, k):
    scaled = replace(
        plan,
        stations=tuple(replace(s, output_w=s.output_w * k) for s in plan.stations),
        stores=tuple(replace(s, nominal_wh=s.nominal_wh * k) for s in plan.stores),
        devices=tuple(
            replace(
                d,
                use_wh_per_day=d.use_wh_per_day * k,
                battery_wh=None if d.battery_wh is None else d.battery_wh * k,
            )
            for d in plan.devices
        ),
    )
    before, after = balance(plan), balance(scaled)
    assert after.need_wh == pytest.approx(before.need_wh * k, rel=1e-9, abs=1e-9)
    assert after.have_wh == pytest.approx(before.have_wh * k, rel=1e-9, abs=1e-9)
    assert [day.end_wh for day in after.days] == pytest.approx([day.end_wh * k for day in before.days], abs=1e-6)


@given(plans(), st.randoms(use_true_random=False))
def test_order_of_records_changes_nothing(plan, chance: random.Random):
    def mixed(records):
        return tuple(chance.sample(records, len(records)))

    other = replace(
        plan,
        people=mixed(plan.people),
        stations=mixed(plan.stations),
        stores=mixed(plan.stores),
        devices=mixed(plan.devices),
    )
    before, after = balance(plan), balance(other)
    assert after.have_wh == pytest.approx(before.have_wh, rel=1e-9, abs=1e-9)
    assert after.need_wh == pytest.approx(before.need_wh, rel=1e-9, abs=1e-9)
    assert after.limit == before.limit or before.coverage_fraction is None
    made = {row.station: row.made_wh_per_day for row in before.stations}
    assert {row.station: row.made_wh_per_day for row in after.stations} == pytest.approx(made, rel=1e-9, abs=1e-9)


@given(plans())
def test_device_by_device_is_never_better_than_pooled(plan):
    result = balance(plan)
    use = sum(row.use_wh for row in result.devices)
    pooled = min(1.0, (result.have_wh + sum(row.credit_wh for row in result.devices)) / use)
    assert min(row.covered_fraction for row in result.devices) <= pooled + 1e-9


@given(plans())
def test_cuts_give_out_what_there_is(plan):
    result = balance(plan)
    total = result.have_wh + sum(row.credit_wh for row in result.devices)
    need = sum(row.use_wh for row in result.devices)
    for cut in (result.cuts.strict, result.cuts.shared):
        given_out = sum(row.have_wh for row in cut)
        assert given_out == pytest.approx(min(total, need), rel=1e-9, abs=1e-9)
        for row in cut:
            own = sum(
                d.credit_wh
                for d in result.devices
                if next(x.priority for x in plan.devices if x.id == d.device) == row.priority
            )
            assert row.have_wh >= own - 1e-9
    shared = min(row.covered_fraction for row in result.cuts.shared)
    assert result.cuts.strict[0].covered_fraction >= shared - 1e-9


@given(plans())
def test_days_follow_from_made_and_used(plan):
    result = balance(plan)
    assume(len(result.days) > 1)
    for before, after in zip(result.days, result.days[1:], strict=False):
        assert after.end_wh - before.end_wh == pytest.approx(after.made_wh - after.use_wh, abs=1e-6)


def test_a_day_that_ends_nearly_empty_is_not_empty():
    """Two days of 6 Wh at D from a start charge that leaves 0.4 Wh, then one that lacks 0.4 Wh."""
    phone = replace(PHONE, eta=1.0, floor_fraction=0.0, start_fraction=1.0, battery_wh=12.4)
    assert balance(Plan(days=2, margin_fraction=0.0, devices=(phone,))).first_empty_day is None
    assert balance(Plan(days=2, margin_fraction=0.0, devices=(replace(phone, battery_wh=11.6),))).first_empty_day == 2


def test_people_are_the_limit_where_they_offer_just_what_the_station_has():
    busy = replace(CRANK, daily_min=60)
    plan = Plan(devices=(PHONE,), stations=(busy,), people=(replace(ADULT, cap_min=60),))
    found = balance(plan)
    assert found.stations[0].offered_min == found.stations[0].available_min == 60
    assert found.limit == "people-minutes"
    crowd = replace(plan, people=(*plan.people, replace(ADULT, id="q", cap_min=1)))
    assert balance(crowd).limit == "station-minutes"


def test_what_is_cut_at_the_best_station_is_offered_at_the_next():
    """Caps of 60 and 60 min, 60 min of the stronger crank: each keeps half of it and offers the rest at the other."""
    people = (replace(ADULT, cap_min=60), replace(ADULT, id="q", cap_min=60))
    stations = (replace(CRANK, daily_min=60), replace(CRANK, id="t", output_w=3.0, daily_min=240))
    found = balance(Plan(devices=(PHONE,), stations=stations, people=people))
    assert [row.used_min for row in found.stations] == pytest.approx([60.0, 60.0])
    assert found.stations[1].made_wh_per_day == pytest.approx(3.0)


def test_an_estimated_person_loses_watts_at_stations_by_parts_that_want_another_pace(sites):
    """Set A charges from about 97 turns a minute on, arms are best near 55: 0.89 of the watts are left at most."""
    crank = next(station for station in sites["bench"].stations if station.id == "A")
    somebody = Person(id="p", name="Oruun", age=40, watts_by="own", own_arms_w=5.0)
    plan = replace(sites["bench"], stations=(crank,), people=(somebody,))
    stated = balance(plan).people[0].output_w
    tested = replace(somebody, watts_by="self_test", test_arms_w=4.5)
    estimate_w = person_output(plan, tested, crank).person_power_w
    same_watts = replace(somebody, own_arms_w=estimate_w)
    paced, steady = (balance(replace(plan, people=(one,))).people[0].output_w for one in (tested, same_watts))
    assert paced < 0.95 * steady
    assert stated > 0.0
