"""The energy line: what goes in comes out, level by level."""

from __future__ import annotations

import doctest

import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, OtherSource, Person, Plan, Station, Store
from kitplanner.plan.shipped import demo
from kitplanner.planners import flow
from kitplanner.planners.balance import balance
from kitplanner.planners.demand import device_needs
from kitplanner.planners.flow import energy_flow, two_letter_codes


def total(bands):
    return sum(band.wh_per_day for band in bands)


def assert_conserved(plan):
    line = energy_flow(plan, balance(plan))
    lost = {(loss.level_from, loss.level_to): loss.wh_per_day for loss in line.losses}
    at_outlet = sum(need.day_o_wh for need in device_needs(plan))
    close = {"rel": 1e-9, "abs": 1e-6}
    assert total(line.people_m) - lost["M", "S"] == pytest.approx(total(line.stations_s), **close)
    assert total(line.stations_s) + total(line.sources_s) - lost["S", "B"] == pytest.approx(line.b_wh, **close)
    assert line.b_wh - lost["B", "O"] == pytest.approx(line.o_wh, **close)
    assert line.o_wh + line.start_o_wh + line.missing_o_wh == pytest.approx(
        at_outlet + line.margin_o_wh + line.spare_o_wh, **close
    )
    assert at_outlet - lost["O", "D"] == pytest.approx(total(line.devices_d), **close)
    assert all(wh >= -1e-9 for wh in lost.values())
    assert line.missing_o_wh * line.spare_o_wh == 0.0
    return line


def test_doctests():
    assert doctest.testmod(flow).failed == 0


@pytest.mark.parametrize("name", ["household", "camp", "shelter", "bench"])
def test_sites_are_conserved(name):
    assert_conserved(read_plan(demo(name)))


def test_shelter_figures():
    line = assert_conserved(read_plan(demo("shelter")))
    assert {band.key: round(band.wh_per_day, 1) for band in line.stations_s} == {"pedal": 549.3, "crank": 7.8}
    assert {band.key: round(band.wh_per_day, 1) for band in line.people_m} == {"pedal": 915.6, "crank": 15.6}
    assert line.o_wh == pytest.approx(426.2, abs=0.05)
    assert line.missing_o_wh == pytest.approx(525, abs=0.5)
    assert total(line.devices_d) == pytest.approx(832.0)
    assert len({band.code for band in line.devices_d}) == len(line.devices_d)
    assert sorted(key for band in line.devices_d for key in band.ids) == sorted(
        device.id for device in read_plan(demo("shelter")).devices
    )


def test_devices_without_a_kind_go_by_priority():
    devices = tuple(Device(id=f"d{n}", name="x", use_wh_per_day=float(n), priority=1 + n % 2) for n in range(1, 5))
    plan = Plan(devices=devices)
    line = energy_flow(plan, balance(plan))
    assert [(band.label, band.code, band.wh_per_day) for band in line.devices_d] == [
        ("Priority 1", "P1", 6.0),
        ("Priority 2", "P2", 4.0),
    ]


def test_more_categories_than_fills_share_the_last():
    devices = tuple(Device(id=f"d{n}", name="x", kind=f"kind {n}", use_wh_per_day=float(n)) for n in range(1, 10))
    plan = Plan(devices=devices)
    line = energy_flow(plan, balance(plan))
    assert len(line.devices_d) == flow.MOST_CATEGORIES
    assert line.devices_d[-1].ids == ("d4", "d3", "d2", "d1")
    assert total(line.devices_d) == pytest.approx(45.0)


def test_empty_plan_has_no_bands():
    line = energy_flow(Plan(), balance(Plan()))
    assert (line.people_m, line.stations_s, line.sources_s, line.devices_d) == ((), (), (), ())
    assert all(loss.wh_per_day == 0.0 for loss in line.losses)


@given(st.lists(st.text(max_size=8), max_size=6))
def test_codes_are_two_signs_and_differ(labels):
    codes = two_letter_codes(labels)
    assert len(set(codes)) == len(labels)
    assert all(len(code) >= 2 for code in codes)


energies = st.floats(0.0, 200.0)
parts = st.floats(0.1, 1.0)


@given(
    watts=st.floats(0.5, 80.0),
    eta=parts,
    caps=st.lists(st.integers(0, 60), max_size=4),
    etas=st.tuples(parts, parts),
    source=energies,
    use=energies,
    battery=st.none() | st.floats(1.0, 50.0),
    start=st.floats(0.0, 1.0),
    days=st.integers(1, 14),
    stores=st.integers(0, 2),
)
def test_energy_is_conserved(watts, eta, caps, etas, source, use, battery, start, days, stores):
    store = Store(id="b", name="b", nominal_wh=50.0, start_fraction=start, eta_in=etas[0], eta_out=etas[1])
    plan = Plan(
        days=days,
        people=tuple(
            Person(id=f"p{n}", name="p", age=30, watts_by="share", share_legs_fraction=0.8, cap_min=cap)
            for n, cap in enumerate(caps)
        ),
        stations=(Station(id="s", name="s", kind="pedal", output_w=watts, eta_fraction=eta, daily_min=90),),
        stores=tuple(replace(store, id=f"b{n}") for n in range(stores)),
        other_sources=(OtherSource(id="o", name="o", wh_per_day=source),),
        devices=(Device(id="d", name="d", battery_wh=battery, use_wh_per_day=use, start_fraction=start),),
    )
    assert_conserved(plan)
