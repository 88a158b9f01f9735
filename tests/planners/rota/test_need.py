"""Need curves by hand: what must have come out of the stores by when."""

from __future__ import annotations

import numpy as np
import pytest

from kitplanner.plan.records import Block, ChargingPoint, Device, OtherSource, Plan, Store, Window
from kitplanner.planners.rota.need import charging_mask, device_due, need_curves, use_curve

LAMP = Device(id="L", name="Lamp", priority=1, use_wh_per_day=4.0, use_windows=(Window(start="18:00", end="20:00"),))
PHONE = Device(
    id="F",
    name="Phone",
    priority=3,
    battery_wh=10.0,
    eta=0.8,
    start_fraction=0.5,
    floor_fraction=0.2,
    use_wh_per_day=6.0,
)
STORE = Store(id="B", name="Store", nominal_wh=20.0, start_fraction=0.6, floor_fraction=0.1, eta_out=0.9)


def test_use_lies_in_its_windows():
    curve = use_curve(Plan(days=2), LAMP, 60)
    assert curve[18] == 0.0
    assert curve[19] == pytest.approx(2.0)
    assert curve[24] == pytest.approx(4.0)
    assert curve[48] == pytest.approx(8.0)


def test_a_lamp_is_due_as_it_burns():
    assert device_due(Plan(days=1), LAMP, 60, 1.5) == pytest.approx(use_curve(Plan(days=1), LAMP, 60) * 1.5)


def test_a_phone_uses_its_charge_first_and_is_due_before_the_last_hour_it_may_be_charged():
    point = ChargingPoint(id="C", name="Desk", hours=(Window(start="08:00", end="10:00"),))
    plan = Plan(days=2, devices=(PHONE,), charging_points=(point,))
    due = device_due(plan, PHONE, 60, 1.0)
    # 0.25 Wh an hour at D, 3 Wh in its battery at the start: 3.75 Wh of credit at O.
    at = {hour: max(0.0, hour * 0.25 / 0.8 - 3.75) for hour in range(49)}
    assert due[8] == pytest.approx(at[8])
    assert due[9] == pytest.approx(at[9])
    # After 10:00 nothing is charged until 8:00 on day 2.
    assert due[10] == pytest.approx(at[32])
    assert due[31] == pytest.approx(at[32])
    assert due[34] == pytest.approx(at[48])


def test_quiet_hours_of_one_day_hold_on_that_day_only():
    block = Block(id="Q", name="Quiet", kind="quiet", days=(2,), windows=(Window(start="00:00", end="12:00"),))
    mask = charging_mask(Plan(days=2, blocks=(block,)), PHONE, 60)
    assert mask[:24].all()
    assert not mask[24:36].any()
    assert mask[36:].all()


def test_strict_classes_add_up_and_the_shared_cut_knows_one():
    plan = Plan(days=1, margin_fraction=0.2, devices=(LAMP, PHONE), stores=(STORE,))
    need = need_curves(plan, 60)
    assert need.priorities == (1, 3)
    assert need.plain[0, -1] == pytest.approx(4.0)
    assert need.plain[1, -1] == pytest.approx(4.0 + 6.0 / 0.8 - 3.75)
    assert need.with_margin[-1] == pytest.approx(4.8 + 7.2 / 0.8 - 3.75)
    assert need.supply == pytest.approx(np.full(25, 20.0 * 0.5 * 0.9))
    shared = need_curves(Plan(days=1, cut="shared", devices=(LAMP, PHONE), stores=(STORE,)), 60)
    assert shared.plain.shape == (1, 25)
    assert shared.plain[0] == pytest.approx(need.plain[1])


def test_other_sources_come_in_over_their_windows_and_take_room():
    sun = OtherSource(id="S", name="Panel", wh_per_day=10.0, windows=(Window(start="10:00", end="14:00"),))
    plan = Plan(days=1, stores=(STORE,), other_sources=(sun,))
    need = need_curves(plan, 60)
    through = 0.9 * 0.9
    assert need.supply[14] - need.supply[0] == pytest.approx(10.0 * through)
    assert need.supply[12] - need.supply[0] == pytest.approx(5.0 * through)
    assert need.room[0] == pytest.approx(20.0 * 0.4 * 0.9)
    assert need.room[14] == pytest.approx(20.0 * 0.4 * 0.9 - 10.0 * through)
