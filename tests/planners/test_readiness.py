"""Lists at the edges of an outage: order, charge times by hand, sockets, lamps against the dark, closing down."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Block, ChargingPoint, Conditions, Device, Plan, Store, Window
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.effort import effort
from kitplanner.planners.readiness import device_minutes, recharge_list, store_minutes, warning_list
from kitplanner.planners.readiness_closing import close_down_list, saving_tips
from kitplanner.planners.readiness_lamps import dark_hours


def device(key: str, **more: object) -> Device:
    settings: dict[str, object] = {"battery_wh": 10.0, "start_fraction": 0.5, "use_wh_per_day": 1.0, **more}
    return Device(id=key, name=key, **settings)  # type: ignore[arg-type]


def test_order_of_a_warning() -> None:
    plan = Plan(
        devices=(
            device("late", priority=3),
            device("slow", priority=2, charge_rate_per_h=0.2),
            device("quick", priority=2),
            device("lamp", priority=2, evening=True),
            device("laptop", priority=5, planning_computer=True),
            device("full", priority=1, start_fraction=1.0),
            device("mains only", priority=1, battery_wh=None),
        ),
        stores=(Store(id="bank", name="Bank", start_fraction=0.4),),
    )
    assert [task.record for task in warning_list(plan).tasks] == ["laptop", "lamp", "quick", "slow", "bank", "late"]
    back = [task.record for task in recharge_list(plan).tasks]
    assert back == ["full", "lamp", "quick", "slow", "bank", "late", "laptop"]


def test_charge_time_in_the_constant_part_by_hand() -> None:
    """Below the taper the rate is constant: 30 % at 0.5 per hour are 36 minutes; 5 W at the plug are slower."""
    phone = device("p", battery_wh=20.0)
    assert device_minutes(Plan(), phone, 0.1, 0.4) == pytest.approx(36.0)
    limited = structs.replace(phone, input_limit_a=1.0)
    assert device_minutes(Plan(), limited, 0.1, 0.4) == pytest.approx(0.3 * 20.0 / (0.85 * 5.0) * 60.0)


def test_agrees_with_the_effort_table_where_the_device_is_the_limit() -> None:
    """At 40 W a pedal stand fills a two-way radio as fast as the mains would."""
    plan = read_plan(demo("shelter"))
    row = next(row for row in effort(plan, device="C-D4", station="C-S1").rows if row.charge == "full")
    radio = next(one for one in plan.devices if one.id == "C-D4")
    assert device_minutes(plan, radio, 0.0, 1.0) == pytest.approx(row.minutes_p50)


def test_stores_by_chemistry() -> None:
    plan = Plan()
    nimh = Store(id="n", name="Cells", chemistry="nimh", nominal_wh=9.6)
    # The standard charge takes 16 hours from empty (IEC 61951-2).
    assert store_minutes(plan, nimh, 0.0, 1.0) == pytest.approx(16 * 60)
    lead = Store(id="l", name="Battery", chemistry="lead_acid", nominal_wh=84.0)
    assert store_minutes(plan, lead, 0.5, 1.0) == pytest.approx(2.5 * 60)
    assert store_minutes(plan, Store(id="a", name="Cells", chemistry="alkaline"), 0.5, 1.0) is None
    slow = Store(id="s", name="Bank", nominal_wh=100.0, charge_limit_w=10.0)
    assert store_minutes(plan, slow, 0.1, 0.5) == pytest.approx(0.4 * 100.0 / (10.0 * 0.9) * 60.0)


def test_frost_forbids_charging_and_stands_last() -> None:
    plan = Plan(
        conditions=Conditions(air_degc=-5.0),
        devices=(device("phone", priority=1),),
        stores=(Store(id="l", name="Battery", chemistry="lead_acid", start_fraction=0.5),),
    )
    tasks = warning_list(plan).tasks
    assert [(task.record, task.minutes_each is None) for task in tasks] == [("l", False), ("phone", True)]
    assert tasks[1].ready_min is None


def test_read_states_of_charge_are_used() -> None:
    plan = Plan(devices=(device("a"),), stores=(Store(id="b", name="Bank"),))
    result = recharge_list(plan, {"a": 0.9, "b": 1.0})
    assert [(task.record, task.from_fraction) for task in result.tasks] == [("a", 0.9)]


@given(st.integers(1, 12), st.integers(1, 30))
def test_sockets_share_the_work(sockets: int, count: int) -> None:
    plan = Plan(devices=(device("phone", count=count),))
    result = warning_list(plan, sockets)
    each = result.tasks[0].minutes_each
    assert each is not None
    assert result.total_min == pytest.approx(each * -(-count // sockets))
    assert result.tasks[0].ready_min == pytest.approx(result.total_min)


def test_more_sockets_never_take_longer() -> None:
    plan = read_plan(demo("shelter"))
    totals = [warning_list(plan, sockets).total_min for sockets in (1, 2, 4, 8, 200)]
    assert totals == sorted(totals, reverse=True)
    longest = max(task.minutes_each or 0.0 for task in warning_list(plan).tasks)
    assert totals[-1] == pytest.approx(longest)


def test_sockets_come_from_the_charging_points() -> None:
    plan = Plan(devices=(device("phone"),))
    assert warning_list(plan).sockets == 4
    pointed = structs.replace(plan, charging_points=(ChargingPoint(id="C", name="Table", outlets=6),))
    assert warning_list(pointed).sockets == 6


@pytest.mark.parametrize("name", DEMOS)
def test_every_line_below_full_stands_on_the_warning_list_once(name: str) -> None:
    plan = read_plan(demo(name))
    listed = [task.record for task in warning_list(plan).tasks]
    wanted = [one.id for one in plan.devices if one.battery_wh and one.start_fraction < 1.0]
    wanted += [one.id for one in plan.stores if one.start_fraction < 1.0]
    assert sorted(listed) == sorted(wanted)


def lit_plan(*windows: Window) -> Plan:
    return Plan(
        conditions=Conditions(dark=(Window(start="18:00", end="07:00"),)),
        blocks=(Block(id="Q", name="Quiet", kind="quiet", windows=(Window(start="22:00", end="06:00"),)),),
        devices=(device("lamp", kind="light", use_windows=windows),),
    )


def test_lamps_against_the_dark() -> None:
    result = dark_hours(lit_plan(Window(start="17:00", end="21:00"), Window(start="23:00", end="05:00")))
    assert result.dark_min == 13 * 60
    assert (result.lamps[0].dark_min, result.lamps[0].daylight_min) == (9 * 60, 60)
    assert result.bare_awake == ((360, 420), (1260, 1320))
    assert result.bare_asleep == ((300, 360), (1320, 1380))


def test_without_dark_hours_or_windows_nothing_is_claimed() -> None:
    unknown = dark_hours(
        Plan(devices=(device("lamp", kind="light", use_windows=(Window(start="08:00", end="09:00"),)),))
    )
    assert (unknown.is_known, unknown.lamps[0].daylight_min) == (False, None)
    assert dark_hours(lit_plan()).unplanned == ("lamp",)


def test_a_lamp_all_night_leaves_nothing_bare() -> None:
    result = dark_hours(lit_plan(Window(start="18:00", end="07:00")))
    assert (result.bare_awake, result.bare_asleep) == ((), ())


def test_household_lantern_against_its_dark() -> None:
    """Dark 16:30 to 07:30, lantern 17 to 21, quiet from 22: bare 16:30-17, 21-22 and 07-07:30 awake."""
    result = dark_hours(read_plan(demo("household")))
    assert result.dark_min == 15 * 60
    assert result.bare_awake == ((420, 450), (990, 1020), (1260, 1320))


def test_closing_down() -> None:
    plan = Plan(
        devices=(device("phone", count=3),),
        stores=(
            Store(id="good", name="Bank", health_fraction=0.9),
            Store(id="worn", name="Bank", health_fraction=0.7),
            Store(id="lead", name="Battery", chemistry="lead_acid"),
            Store(id="cells", name="Cells", chemistry="alkaline"),
        ),
    )
    found = {task.record: (task.fate, task.charge_fraction) for task in close_down_list(plan)}
    assert found == {
        "good": ("store", 0.75),
        "worn": ("replace", None),
        "lead": ("store", 1.0),
        "cells": ("take_out_cells", 1.0),
        "phone": ("return", None),
    }


def test_listening_windows_save_what_is_left_out() -> None:
    radio = device("radio", kind="radio", use_by="power_hours", use_w=0.6, use_h_per_day=10.0)
    tip = next(tip for tip in saving_tips(Plan(devices=(radio,))) if tip.tip == "radio")
    # Five times five minutes at 0.6 W are 0.25 Wh of 6 Wh.
    assert tip.saved_wh_per_day == pytest.approx(5.75)


def test_tips_only_for_what_is_there() -> None:
    assert saving_tips(Plan()) == ()
    assert {tip.tip for tip in saving_tips(read_plan(demo("camp")))} >= {"phone", "radio", "light"}
