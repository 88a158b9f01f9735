"""Stores, station time and the sharing of minutes, by hand calculation and invariants."""

from __future__ import annotations

import doctest

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Block, Person, Plan, Station, Store, Window
from kitplanner.plan.shipped import demo
from kitplanner.planners import balance_offers, supply
from kitplanner.planners.balance_offers import kept_fraction, share_out
from kitplanner.planners.balance_output import reference_output_w, station_outputs

STAND = Station(
    id="s",
    name="stand",
    kind="pedal",
    count=2,
    slot_min=20,
    changeover_min=2,
    hours=(Window(start="08:00", end="12:00"), Window(start="13:30", end="17:30"), Window(start="18:30", end="20:30")),
)


@pytest.mark.parametrize("module", [supply, balance_offers])
def test_doctests(module):
    assert doctest.testmod(module).failed == 0


def test_slots_with_changeover():
    # 240 min hold 11 slots of 20 + 2 (the last needs no pause), 120 min hold 5: 27 slots of 20 min per stand.
    assert supply.station_minutes(Plan(), STAND) == 2 * 27 * 20
    assert supply.station_minutes(Plan(), replace(STAND, changeover_min=0)) == 2 * (12 + 12 + 6) * 20


def test_daily_minutes_win_over_windows():
    assert supply.station_minutes(Plan(), replace(STAND, daily_min=60)) == 120


def test_window_across_midnight_counts_in_two_parts():
    late = replace(STAND, count=1, hours=(Window(start="23:30", end="00:30"),), changeover_min=0)
    assert supply.station_minutes(Plan(), late) == 2 * 20


def test_window_shorter_than_a_slot_gives_nothing():
    assert supply.station_minutes(Plan(), replace(STAND, hours=(Window(start="08:00", end="08:19"),))) == 0


def test_quiet_hours_of_one_group_do_not_close_a_station():
    quiet = Block(id="q", name="q", kind="quiet", groups=("g",), windows=(Window(start="22:00", end="07:00"),))
    open_all_day = replace(STAND, hours=(), changeover_min=0, count=1)
    assert supply.station_minutes(Plan(blocks=(quiet,)), open_all_day) == 24 * 60


def test_store_below_its_floor_gives_nothing():
    assert supply.store_wh(Store(id="b", name="b", floor_fraction=0.2), 0.1) == 0.0


def test_factor_is_weighted_by_capacity_above_the_floor():
    large = Store(id="a", name="a", nominal_wh=300.0, floor_fraction=0.0, eta_in=1.0, eta_out=1.0)
    small = Store(id="b", name="b", nominal_wh=200.0, floor_fraction=0.5, eta_in=0.5, eta_out=0.8)
    assert supply.station_to_outlet_fraction((large, small)) == pytest.approx((300 * 1.0 + 100 * 0.4) / 400)
    assert supply.station_to_store_fraction((large, small)) == pytest.approx((300 * 1.0 + 100 * 0.5) / 400)
    assert supply.station_to_outlet_fraction((replace(large, count=0),)) == 1.0


def test_cut_in_proportion_and_the_rest_goes_on():
    # Both prefer the first station (60 min); what is cut there goes to the second (60 min), which one more uses.
    cap = np.array([100.0, 50.0, 30.0])
    offered = share_out(cap, ((0, 1), (0, 1), (1,)), np.array([60.0, 60.0]))
    assert offered[:, 0] == pytest.approx([100, 50, 0])
    assert offered[:, 1] == pytest.approx([60, 30, 30])
    kept = kept_fraction(offered, np.array([60.0, 60.0]))
    assert kept == pytest.approx([0.4, 0.5])


def test_mutual_preferences_settle():
    cap = np.array([100.0, 100.0])
    available = np.array([50.0, 120.0])
    offered = share_out(cap, ((0, 1), (1, 0)), available)
    used = offered * kept_fraction(offered, available)
    assert used.sum() == pytest.approx(170.0)
    assert (used.sum(axis=1) <= cap + 1e-9).all()


@given(
    st.lists(st.tuples(st.floats(0, 300), st.permutations(range(3)), st.integers(0, 3)), max_size=8),
    st.lists(st.floats(0, 400), min_size=3, max_size=3),
)
def test_nobody_and_no_station_gets_too_much(people, available):
    cap = np.array([minutes for minutes, _, _ in people])
    choices = tuple(tuple(order[:length]) for _, order, length in people)
    room = np.array(available)
    offered = share_out(cap, choices, room)
    used = offered * kept_fraction(offered, room)
    assert (used.sum(axis=1) <= cap + 1e-6).all()
    assert (used.sum(axis=0) <= room + 1e-6).all()
    for row, stations in enumerate(choices):
        # Somebody with minutes left has found every station of theirs full.
        if stations and used[row].sum() < cap[row] - 1e-3:
            assert all(used[:, column].sum() == pytest.approx(room[column], abs=1e-3) for column in stations)


def test_share_of_the_reference_adult():
    crank = Station(id="s", name="crank", output_w=6.0)
    people = [
        Person(id=str(share), name="p", age=40, watts_by="share", share_arms_fraction=share)
        for share in (1.0, 0.7, 0.5)
    ]
    output_w, human_w = station_outputs(Plan(), crank, people)
    assert output_w == pytest.approx([6.0, 4.2, 3.0])
    assert human_w == pytest.approx([12.0, 8.4, 6.0])
    assert reference_output_w(Plan(), crank) == pytest.approx(6.0)


def test_stations_by_parts_are_solved_and_stronger_people_give_more():
    plan = read_plan(demo("bench"))
    weak = Person(id="w", name="w", age=40, watts_by="own", own_arms_w=8.0, own_legs_w=8.0)
    strong = Person(id="x", name="x", age=40, watts_by="own", own_arms_w=20.0, own_legs_w=20.0)
    for station in plan.stations:
        output_w, human_w = station_outputs(plan, station, [weak, strong, weak])
        assert output_w[0] == output_w[2]
        assert output_w[0] <= output_w[1] * (1 + 1e-6)
        assert (output_w <= human_w + 1e-12).all()
        assert (human_w <= np.array([8.0, 20.0, 8.0]) * (1 + 1e-9)).all()
