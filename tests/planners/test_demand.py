"""Demand against worked values of three invented sites (one decimal printed, so 1 % is allowed)."""

from __future__ import annotations

import doctest

import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, Plan, Window
from kitplanner.plan.shipped import demo
from kitplanner.planners import balance_windows, demand

PHONE = Device(id="p", name="phone", battery_wh=15.4, use_wh_per_day=6.0, start_fraction=0.8, floor_fraction=0.2)


@pytest.mark.parametrize("module", [demand, balance_windows])
def test_doctests(module):
    assert doctest.testmod(module).failed == 0


@pytest.mark.parametrize(
    ("name", "at_device", "at_outlet", "credit", "plain_credit"),
    [
        ("household", 26.05, 30.65, 56.6, 55.4),
        ("camp", 89.3, 103.47, 72.9, 72.6),
        ("shelter", 832.0, 918.12, 220.1, 220.1),
    ],
)
def test_sums_of_the_sites(name, at_device, at_outlet, credit, plain_credit):
    needs = demand.device_needs(read_plan(demo(name)))
    assert sum(need.day_d_wh for need in needs) == pytest.approx(at_device, rel=0.01)
    assert sum(need.day_o_wh for need in needs) == pytest.approx(at_outlet, rel=0.01)
    assert sum(need.credit_wh for need in needs) == pytest.approx(credit, rel=0.01)
    assert sum(need.credit_plain_wh for need in needs) == pytest.approx(plain_credit, rel=0.01)


@pytest.mark.parametrize(
    ("name", "by_priority"),
    [
        ("household", {1: 2.4, 2: 23.5, 3: 1.2, 4: 3.5}),
        ("shelter", {1: 173.2, 2: 377.9, 3: 338.8, 5: 28.2}),
    ],
)
def test_priorities_of_the_sites(name, by_priority):
    needs = demand.device_needs(read_plan(demo(name)))
    for priority, wh in by_priority.items():
        found = sum(need.day_o_wh for need in needs if need.priority == priority)
        assert found == pytest.approx(wh, rel=0.02), priority


@pytest.mark.parametrize(
    ("device", "wh"),
    [
        (Device(id="a", name="a", use_by="power_hours", use_w=2.0, use_h_per_day=3.0), 6.0),
        (
            Device(
                id="a", name="a", use_by="power_hours", use_w=1.0, use_windows=(Window(start="20:00", end="07:00"),)
            ),
            11,
        ),
        (Device(id="a", name="a", use_by="wh_per_day", use_wh_per_day=6.0), 6.0),
        (Device(id="a", name="a", use_by="percent", battery_wh=15.0, use_battery_fraction_per_day=0.4), 6.0),
        (Device(id="a", name="a", use_by="times", use_w=0.5, use_times_per_day=16, use_min_each=45), 6.0),
        (Device(id="a", name="a"), 0.0),
    ],
)
def test_ways_to_state_use(device, wh):
    assert demand.use_wh_per_day(device) == pytest.approx(wh)


def test_overlapping_use_windows_count_once():
    windows = (Window(start="08:00", end="10:00"), Window(start="09:00", end="11:00"))
    device = Device(id="a", name="a", use_by="power_hours", use_w=1.0, use_windows=windows)
    assert demand.use_wh_per_day(device) == pytest.approx(3.0)


def test_start_below_floor_gives_no_debt():
    low = replace(PHONE, start_fraction=0.05)
    assert demand.start_credit_wh(low, 100.0) == 0.0


def test_device_without_battery_has_no_credit_and_no_loss():
    lamp = Device(id="l", name="lamp", use_by="power_hours", use_w=5.0, use_h_per_day=5.0, eta=0.5)
    need = demand.device_need(Plan(days=2, margin_fraction=0.0, devices=(lamp,)), lamp)
    assert (need.day_o_wh, need.credit_wh, need.full_plain_wh) == (25.0, 0.0, 0.0)


@given(
    start=st.floats(0, 1),
    floor=st.floats(0, 1),
    use=st.floats(0, 100, allow_subnormal=False),
    count=st.integers(0, 50),
    days=st.integers(1, 30),
)
def test_credit_is_between_nothing_and_the_need(start, floor, use, count, days):
    device = replace(PHONE, start_fraction=start, floor_fraction=floor, use_wh_per_day=use, count=count)
    need = demand.device_need(Plan(days=days, devices=(device,)), device)
    assert 0.0 <= need.credit_plain_wh <= need.credit_wh <= need.use_wh * (1 + 1e-12)


@given(st.lists(st.tuples(st.integers(0, 1440), st.integers(0, 1440)), max_size=6))
def test_day_and_its_rest_make_a_day(pieces):
    parts = balance_windows.merged(part for part in pieces if part[0] < part[1])
    rest = balance_windows.outside(parts)
    assert balance_windows.total_min(parts) + balance_windows.total_min(rest) == balance_windows.DAY_MIN


@given(st.integers(0, 1439), st.integers(1, 1440))
def test_shares_by_hour_sum_to_one(start, length):
    parts = ((start, min(1440, start + length)),)
    assert sum(balance_windows.share_by_hour(parts)) == pytest.approx(1.0)
