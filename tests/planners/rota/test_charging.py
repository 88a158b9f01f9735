"""The charging table: nothing lost or made up, rules kept, the better served first, reasons told."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Block, ChargingPoint, Device, OtherSource, Plan, Station, Store, Window
from kitplanner.planners.rota.charging import ChargingResult, StoresRead, charging_table
from kitplanner.planners.rota.charging_dispatch import ChargingStoppedError, Dispatch, dispatch
from kitplanner.planners.rota.charging_inputs import charging_inputs
from kitplanner.planners.rota.check import judge
from kitplanner.planners.rota.need import need_curves
from kitplanner.planners.rota.result import RotaBout
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from tests.planners.rota.charging_by_hand import simulate
from tests.planners.rota.rota_plans import as_rota, rota_plans

SLOW = settings(max_examples=20, deadline=None, suppress_health_check=list(HealthCheck))


def window(start: str, end: str) -> tuple[Window, ...]:
    return (Window(start=start, end=end),)


def bank(usable_wh: float, **more: Any) -> Store:
    """A store that gives some Wh at the outlet at the start, no losses."""
    chosen: dict[str, Any] = {"floor_fraction": 0.0, "eta_in": 1.0, "eta_out": 1.0, "outlets": 9, "nominal_wh": 1000.0}
    chosen |= more
    capacity = chosen["nominal_wh"] * chosen["eta_out"] * chosen.get("count", 1)
    return Store(id="bank", name="Bank", start_fraction=usable_wh / capacity, **chosen)


def phone(name: str = "phone", **more: Any) -> Device:
    """A phone of 10 Wh at half charge that uses 2.4 Wh a day, no losses."""
    chosen: dict[str, Any] = {
        "battery_wh": 10.0,
        "start_fraction": 0.5,
        "floor_fraction": 0.0,
        "use_wh_per_day": 2.4,
        "eta": 1.0,
    }
    return Device(id=name, name=name, **(chosen | more))


def plan_of(*devices: Device, store: Store | None = None, **more: Any) -> Plan:
    chosen: dict[str, Any] = {"days": 2, "margin_fraction": 0.0, "stations": (STATION,)} | more
    return Plan(devices=devices, stores=() if store is None else (store,), **chosen)


STATION = Station(id="s", name="Stand", kind="pedal", output_w=40.0)


def turned(day: int, start_min: int, end_min: int, wh: float, **more: Any) -> RotaBout:
    chosen: dict[str, Any] = {"station": "s", "unit": 1, "person": "p"} | more
    return RotaBout(day=day, start_min=start_min, end_min=end_min, output_wh=wh, **chosen)


def reasons(result: ChargingResult) -> dict[str, float]:
    found: dict[str, float] = {}
    for use in result.unmet:
        found[use.why] = found.get(use.why, 0.0) + use.wh
    return found


def test_lamp_without_battery_goes_out_when_the_store_is_empty() -> None:
    """1 W from 18 to 22 on a store of 5 Wh: full on day 1, out after one hour on day 2."""
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0, use_windows=window("18:00", "22:00"), priority=2)
    result = charging_table(plan_of(lamp, store=bank(5.0)), (), 5)
    (use,) = result.unmet
    assert (use.device, use.day, use.start_min, use.why, use.priority) == ("lamp", 2, 19 * 60, "store empty", 2)
    assert use.wh == pytest.approx(3.0)
    assert result.unmet_wh == pytest.approx(3.0)
    assert sum(row.energy_wh for row in result.charging) == pytest.approx(5.0)


def test_phone_that_is_never_attended_runs_down() -> None:
    """5 Wh of start charge last 50 h; of three days 22 h at 0.1 W are missing."""
    point = ChargingPoint(id="d", name="Desk", hours=window("08:00", "09:00"))
    never = phone(charge_windows=window("20:00", "21:00"))
    result = charging_table(plan_of(never, store=bank(100.0), days=3, charging_points=(point,)), (), 5)
    assert reasons(result) == pytest.approx({"not attended in time": 2.2})
    assert result.unmet[0].day == 3
    assert result.unmet[0].start_min == 120
    assert not result.charging


def test_too_slow_a_charger_is_told_as_acceptance() -> None:
    slow = phone(start_fraction=0.0, charge_w=0.05)
    result = charging_table(plan_of(slow, store=bank(100.0)), (), 5)
    assert set(reasons(result)) == {"acceptance"}
    assert result.unmet_wh == pytest.approx(4.8 - 0.05 * 48.0, rel=1e-6)


def test_cold_batteries_take_no_charge() -> None:
    """Li-ion is not charged below 0 degC (data sheet steps of `charge_ceiling_rate_per_h`)."""
    plan = plan_of(phone(start_fraction=0.0), store=bank(100.0))
    plan = structs.replace(plan, conditions=structs.replace(plan.conditions, air_degc=-5.0))
    result = charging_table(plan, (), 5)
    assert reasons(result) == pytest.approx({"acceptance": 4.8})


def test_one_outlet_for_two_hungry_lines_is_told() -> None:
    point = ChargingPoint(id="d", name="Desk", hours=window("08:00", "09:00"), outlets=1)
    both = [phone(name, start_fraction=0.0, use_wh_per_day=5.0) for name in ("a", "b")]
    result = charging_table(plan_of(*both, store=bank(100.0), charging_points=(point,)), (), 5)
    assert "outlets busy" in reasons(result)
    assert judge(plan_of(*both, store=bank(100.0), charging_points=(point,)), as_rota((), result.charging)) == ()


def test_connector_that_fits_no_store() -> None:
    odd = phone(start_fraction=0.0, connector="barrel")
    result = charging_table(plan_of(odd, store=bank(100.0, connector="USB-C")), (), 5)
    assert reasons(result) == pytest.approx({"no connector": 4.8})
    fits = structs.replace(odd, connector=" usb-c")
    assert charging_table(plan_of(fits, store=bank(100.0, connector="USB-C")), (), 5).unmet_wh == 0.0


def test_strict_cut_keeps_the_store_for_the_radio_of_tomorrow() -> None:
    """6 Wh for a radio of 2.5 Wh each evening and a lamp of priority 4 each morning: the lamp gets 1 Wh."""
    radio = Device(id="radio", name="Radio", use_wh_per_day=2.5, use_windows=window("20:00", "21:00"), priority=1)
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0, use_windows=window("06:00", "08:00"), priority=4)
    result = charging_table(plan_of(lamp, radio, store=bank(6.0)), (), 5)
    missed = {use.device for use in result.unmet}
    assert missed == {"lamp"}
    assert result.unmet_wh == pytest.approx(7.0)
    lamp_wh = sum(row.energy_wh for row in result.charging if row.device == "lamp")
    assert lamp_wh == pytest.approx(1.0)


def test_strict_cut_counts_what_still_comes_in() -> None:
    """The same with 20 Wh turned on day 2 before the radio: the lamp need not wait."""
    radio = Device(id="radio", name="Radio", use_wh_per_day=2.5, use_windows=window("20:00", "21:00"), priority=1)
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0, use_windows=window("06:00", "08:00"), priority=4)
    made = (turned(1, 600, 620, 3.0), turned(2, 600, 620, 20.0))
    result = charging_table(plan_of(lamp, radio, store=bank(6.0)), made, 5)
    assert result.unmet_wh == pytest.approx(4.0 + 2.5 + 4.0 - 9.0)
    assert {use.device for use in result.unmet} == {"lamp"}


def test_shared_cut_gives_all_the_same_fraction() -> None:
    radio = Device(id="radio", name="Radio", use_wh_per_day=2.5, use_windows=window("20:00", "21:00"), priority=1)
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0, use_windows=window("06:00", "08:00"), priority=4)
    result = charging_table(plan_of(lamp, radio, store=bank(6.5), cut="shared"), (), 5)
    got = {name: sum(row.energy_wh for row in result.charging if row.device == name) for name in ("lamp", "radio")}
    assert got["lamp"] / 8.0 == pytest.approx(0.5, rel=1e-6)
    assert got["radio"] / 5.0 == pytest.approx(0.5, rel=1e-6)
    assert result.unmet_wh == pytest.approx(6.5)


def test_shared_cut_leaves_a_line_its_own_charge() -> None:
    rich = phone(start_fraction=1.0)
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0, priority=4)
    result = charging_table(plan_of(rich, lamp, store=bank(2.0), cut="shared"), (), 5)
    assert {use.device for use in result.unmet} == {"lamp"}
    assert result.unmet_wh == pytest.approx(6.0)


def test_margin_is_what_is_missing_beyond_plain_use() -> None:
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=4.0)
    result = charging_table(plan_of(lamp, store=bank(8.0), margin_fraction=0.25), (), 5)
    assert result.unmet_wh == 0.0
    assert result.unmet_margin_wh == pytest.approx(2.0)


def test_energy_goes_to_the_lowest_store_and_comes_from_the_fullest() -> None:
    stores = (
        structs.replace(bank(10.0, nominal_wh=20.0), id="low"),
        structs.replace(bank(18.0, nominal_wh=20.0), id="high"),
    )
    plan = Plan(days=1, margin_fraction=0.0, stores=stores, stations=(STATION,))
    levels = charging_table(plan, (turned(1, 600, 605, 3.0),), 5).levels
    assert levels.stores_wh["low"][-1] == pytest.approx(13.0)
    assert levels.stores_wh["high"][-1] == pytest.approx(18.0)
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=2.0, use_windows=window("20:00", "20:05"))
    levels = charging_table(structs.replace(plan, devices=(lamp,)), (), 5).levels
    assert levels.stores_wh["high"][-1] == pytest.approx(16.0)
    assert levels.stores_wh["low"][-1] == pytest.approx(10.0)


def test_a_full_store_and_a_charge_limit_waste_what_does_not_fit() -> None:
    full = plan_of(store=bank(1000.0))
    assert charging_table(full, (turned(1, 600, 620, 12.0),), 5).wasted_wh == pytest.approx(12.0)
    limited = plan_of(store=bank(0.0, charge_limit_w=30.0))
    result = charging_table(limited, (turned(1, 600, 660, 40.0),), 5)
    assert result.wasted_wh == pytest.approx(10.0)
    assert result.levels.pooled_wh[-1] == pytest.approx(30.0)


def test_station_feeds_only_its_stores() -> None:
    stores = (structs.replace(bank(0.0), id="a"), structs.replace(bank(0.0), id="b"))
    plan = Plan(days=1, margin_fraction=0.0, stores=stores, stations=(structs.replace(STATION, feeds=("b",)),))
    levels = charging_table(plan, (turned(1, 600, 620, 12.0),), 5).levels
    assert levels.stores_wh["a"][-1] == 0.0
    assert levels.stores_wh["b"][-1] == pytest.approx(12.0)


def test_without_stores_devices_hang_at_the_station() -> None:
    plan = plan_of(phone(start_fraction=0.0, use_wh_per_day=4.8, charge_w=12.0), days=1)
    result = charging_table(plan, (turned(1, 0, 60, 6.0),), 5)
    assert all(row.at_station for row in result.charging)
    assert sum(row.energy_wh for row in result.charging) == pytest.approx(6.0), "kept, for nothing else can keep it"
    assert result.unmet_wh == 0.0
    assert judge(plan, as_rota((), result.charging))[0].rule == "energy", "nobody turns in this rota"


def test_other_source_fills_in_its_hours() -> None:
    source = OtherSource(id="o", name="Roof", wh_per_day=12.0, windows=window("10:00", "12:00"))
    levels = charging_table(plan_of(store=bank(0.0), days=1, other_sources=(source,)), (), 5).levels
    assert levels.pooled_wh[10 * 12] == 0.0
    assert levels.pooled_wh[11 * 12] == pytest.approx(6.0)
    assert levels.pooled_wh[-1] == pytest.approx(12.0)


def test_changeover_shortens_the_second_bout_at_its_start() -> None:
    plan = plan_of(store=bank(0.0), days=1, stations=(structs.replace(STATION, changeover_min=5),))
    made = (turned(1, 600, 610, 5.0), turned(1, 610, 620, 5.0, person="q"))
    levels = charging_table(plan, made, 5).levels
    assert levels.pooled_wh[620 // 5 - 1] == pytest.approx(5.0)
    assert levels.pooled_wh[620 // 5] == pytest.approx(10.0)


def test_units_of_a_batch_take_turns() -> None:
    """Four phones at one outlet: tickets 1 to 4 in turn, each for at most an hour, none twice at once."""
    point = ChargingPoint(id="d", name="Desk", hours=window("08:00", "18:00"), outlets=1)
    batch = phone(count=4, start_fraction=0.1, use_wh_per_day=1.0)
    plan = plan_of(batch, store=bank(200.0), charging_points=(point,), days=1)
    result = charging_table(plan, (), 5)
    tickets = [row.first_ticket for row in result.charging]
    assert tickets == [1 + place % 4 for place in range(len(tickets))]
    assert len(tickets) >= 8
    assert all(row.end_min - row.start_min <= 60 and row.count == 1 for row in result.charging)
    assert judge(plan, as_rota((), result.charging)) == ()


def test_rows_end_at_midnight_and_stay_in_the_day() -> None:
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=6.0, use_windows=window("22:00", "02:00"))
    result = charging_table(plan_of(lamp, store=bank(50.0)), (), 5)
    spans = [(row.day, row.start_min, row.end_min) for row in result.charging]
    assert spans == [(1, 0, 120), (1, 1320, 1440), (2, 0, 120), (2, 1320, 1440)]


QUIET = (Block(id="q", name="Quiet", kind="quiet", windows=window("22:00", "07:00")),)


def evening_plan(stored_wh: float) -> Plan:
    call = phone("call", kind="phone", evening=True, priority=5, start_fraction=0.0, use_wh_per_day=0.5)
    lamp = phone("lamp", kind="light", evening=True, priority=5, start_fraction=0.0, use_wh_per_day=0.5)
    radio = Device(id="radio", name="Radio", use_wh_per_day=20.0, use_windows=window("08:00", "20:00"), priority=1)
    return plan_of(call, lamp, radio, store=bank(stored_wh), blocks=QUIET)


def test_evening_guarantee_comes_before_every_class() -> None:
    result = charging_table(evening_plan(8.0), (), 5)
    assert result.evening == ()
    assert {"radio"} <= {use.device for use in result.unmet}
    for name in ("call", "lamp"):
        assert result.levels.devices_wh[name][22 * 12] > 0.0
        assert result.levels.devices_wh[name][288 + 22 * 12] > 0.0


def test_evening_without_energy_is_told_first() -> None:
    result = charging_table(evening_plan(0.0), (), 5)
    assert [(miss.day, miss.start_min) for miss in result.evening] == [(1, 1320)] * 2 + [(2, 1320)] * 2
    assert result.evening[0].text == "On day 1 no phone or radio for calling help is ready at lights-out, 22:00."


def test_no_marked_device_means_no_guarantee() -> None:
    assert charging_table(plan_of(phone(), store=bank(0.0), blocks=QUIET), (), 5).evening == ()


def test_plan_without_devices_or_stores() -> None:
    result = charging_table(Plan(days=1, stations=(STATION,)), (turned(1, 600, 620, 12.0),), 5)
    assert (result.charging, result.unmet, result.unmet_wh) == ((), (), 0.0)
    assert result.wasted_wh == pytest.approx(12.0)


@pytest.mark.parametrize("name", ["household", "camp"])
def test_demos_that_fit_miss_nothing(name: str) -> None:
    plan, result, _ = solved(name)
    assert result.unmet_wh == 0.0
    assert result.unmet_margin_wh <= 0.005 * sum(device_day_wh(plan))
    assert result.evening == ()


def test_shelter_misses_what_the_pooled_bound_says() -> None:
    """Pooled: max over time of what is due less what has come in; the dispatch adds connectors, outlets and times."""
    plan, result, bouts = solved("shelter")
    need = need_curves(plan, 5)
    come_in = need.supply + charging_inputs(plan, bouts, 5, 1.0).coming_wh
    pooled = float(np.maximum(0.0, (need.plain - come_in).max(axis=1))[-1])
    assert result.unmet_wh == pytest.approx(pooled, rel=0.02)
    assert result.unmet_wh >= pooled - 1e-6
    assert {use.priority for use in result.unmet} == {3, 5}


def solved(name: str) -> tuple[Plan, ChargingResult, tuple[RotaBout, ...]]:
    plan = read_plan(f"demo_profiles/{name}.kitplan")
    solution = WalkAndImprove().solve(plan, Effort(work=1500))
    result = charging_table(plan, solution.bouts, solution.slot_min)
    assert judge(plan, as_rota(solution.bouts, result.charging, solution.slot_min)) == ()
    return plan, result, solution.bouts


def device_day_wh(plan: Plan) -> list[float]:
    return [
        float(np.diff(need_curves(structs.replace(plan, devices=(each,)), 60).plain[-1]).sum()) for each in plan.devices
    ]


@st.composite
def simple_plans(draw: st.DrawFn) -> tuple[Plan, tuple[RotaBout, ...]]:
    """One store, one charging point, up to three lines, a few bouts on the grid."""
    devices = tuple(
        phone(
            f"d{place}",
            count=draw(st.integers(1, 3)),
            battery_wh=draw(st.sampled_from((None, 4.0, 12.0))),
            start_fraction=draw(st.floats(0.0, 1.0)),
            floor_fraction=draw(st.sampled_from((0.0, 0.2))),
            target_fraction=draw(st.sampled_from((0.8, 1.0))),
            eta=draw(st.sampled_from((1.0, 0.8))),
            use_wh_per_day=draw(st.floats(0.5, 12.0)),
            use_windows=draw(st.sampled_from(((), window("08:00", "12:00"), window("17:00", "21:30")))),
            charge_w=draw(st.sampled_from((None, 3.0))),
            priority=draw(st.integers(1, 3)),
        )
        for place in range(draw(st.integers(1, 3)))
    )
    store = bank(
        draw(st.floats(0.0, 25.0)),
        nominal_wh=draw(st.sampled_from((30.0, 200.0))),
        eta_in=draw(st.sampled_from((1.0, 0.9))),
        eta_out=draw(st.sampled_from((1.0, 0.85))),
    )
    point = ChargingPoint(id="d", name="Desk", hours=window("07:00", "20:00"), outlets=draw(st.integers(1, 4)))
    starts = draw(st.lists(st.integers(0, 2 * 48 - 1), unique=True, max_size=4))
    bouts = tuple(
        turned(start // 48 + 1, start % 48 * 30, start % 48 * 30 + 30, draw(st.floats(0.5, 15.0)))
        for start in sorted(starts)
    )
    return plan_of(*devices, store=store, charging_points=(point,)), bouts


@settings(max_examples=60, deadline=None, suppress_health_check=list(HealthCheck))
@given(simple_plans())
def test_dispatch_equals_the_scalar_steps(drawn: tuple[Plan, tuple[RotaBout, ...]]) -> None:
    plan, bouts = drawn
    done = dispatch(charging_inputs(plan, bouts, 30, 1.0), is_shared=False)
    for place, line in enumerate(simulate(plan, bouts, 30)):
        np.testing.assert_allclose(done.given_wh[place], line.given, atol=1e-6)
        np.testing.assert_allclose(done.unmet_wh[place], line.unmet, atol=1e-6)


def check_conservation(plan: Plan, bouts: tuple[RotaBout, ...], slot_min: int) -> None:
    inputs = charging_inputs(plan, bouts, slot_min, 1.0)
    done = dispatch(inputs, is_shared=plan.cut == "shared")
    lines = inputs.lines
    battery = lines.has_battery[:, None]
    scale = 1.0 + float(np.abs(lines.whole_wh).max(initial=0.0)) + float(inputs.full_wh.max(initial=0.0))
    # Devices: what came less what was used is the change of level; without a battery what came is what was used.
    used = lines.use_wh - done.unmet_wh * lines.eta[:, None]
    left = np.diff(done.device_wh, axis=1) - done.given_wh * lines.eta[:, None] + used
    assert np.abs(np.where(battery, left, used - done.given_wh)).max(initial=0.0) < 1e-6 * scale
    # Stores: never below the floor, never above full, and nothing from nowhere.
    full_o = (inputs.full_wh * inputs.eta_out)[:, None]
    assert (done.store_wh >= -1e-9 * scale).all()
    assert (done.store_wh <= full_o + 1e-6 * scale).all()
    check_stores(inputs.feeds, done, inputs.eta_in, inputs.eta_out, scale)


def check_stores(feeds: Any, done: Dispatch, eta_in: Any, eta_out: Any, scale: float) -> None:
    """In each slot the stores lose at most what was given and gain at most what came in, at the best efficiency."""
    best = float((eta_in * eta_out).max(initial=0.0))
    direct = sum((feed.socket_wh for feed in feeds if not feed.stores), start=np.zeros(done.given_wh.shape[1]))
    made = sum((feed.socket_wh for feed in feeds if feed.stores), start=np.zeros(done.given_wh.shape[1]))
    change = np.diff(done.store_wh.sum(axis=0))
    given_wh = done.given_wh.sum(axis=0)
    assert (change <= made * best - given_wh + direct + 1e-6 * scale).all()
    assert (change >= -given_wh - 1e-6 * scale).all()


@SLOW
@given(rota_plans(days=2), st.data())
def test_energy_is_conserved_in_every_step(plan: Plan, data: st.DataObject) -> None:
    slot_min = 15
    bouts = []
    for day in range(1, plan.days + 1):
        start = data.draw(st.integers(0, 90)) * slot_min
        bouts.append(turned(day, start, start + slot_min, data.draw(st.floats(0.0, 30.0)), station="stations-0"))
    check_conservation(plan, tuple(bouts), slot_min)


@settings(max_examples=60, deadline=None, suppress_health_check=list(HealthCheck))
@given(simple_plans())
def test_one_store_balances_exactly(drawn: tuple[Plan, tuple[RotaBout, ...]]) -> None:
    """start + in - lost - out - end = 0 over the horizon, and in each slot in which nothing is wasted."""
    plan, bouts = drawn
    inputs = charging_inputs(plan, bouts, 30, 1.0)
    done = dispatch(inputs, is_shared=False)
    factor = float(inputs.eta_in[0] * inputs.eta_out[0])
    made = sum(bout.output_wh for bout in bouts) - done.wasted_wh
    assert done.store_wh[0, -1] - done.store_wh[0, 0] == pytest.approx(
        made * factor - float(done.given_wh.sum()), abs=1e-6
    )
    if done.wasted_wh == 0.0:
        per_slot = np.diff(inputs.coming_wh) - done.given_wh.sum(axis=0)
        np.testing.assert_allclose(np.diff(done.store_wh[0]), per_slot, atol=1e-6)


@settings(max_examples=40, deadline=None, suppress_health_check=list(HealthCheck))
@given(simple_plans(), st.floats(0.5, 20.0))
def test_all_energies_scale_together(drawn: tuple[Plan, tuple[RotaBout, ...]], factor: float) -> None:
    plan, bouts = drawn
    larger = structs.replace(
        plan,
        stores=tuple(structs.replace(each, nominal_wh=each.nominal_wh * factor) for each in plan.stores),
        devices=tuple(
            structs.replace(
                each,
                battery_wh=None if each.battery_wh is None else each.battery_wh * factor,
                charge_w=None if each.charge_w is None else each.charge_w * factor,
                use_wh_per_day=(each.use_wh_per_day or 0.0) * factor,
            )
            for each in plan.devices
        ),
    )
    more = tuple(structs.replace(bout, output_wh=bout.output_wh * factor) for bout in bouts)
    small = charging_table(plan, bouts, 30).unmet_wh
    assert charging_table(larger, more, 30).unmet_wh == pytest.approx(small * factor, rel=1e-4, abs=1e-3 * factor)


@SLOW
@given(rota_plans())
def test_judge_finds_nothing_in_solved_plans(plan: Plan) -> None:
    check_solved(plan)


@pytest.mark.long
@pytest.mark.timeout(3600)
@settings(max_examples=1000, deadline=None, suppress_health_check=list(HealthCheck))
@given(rota_plans())
def test_judge_finds_nothing_in_a_thousand_solved_plans(plan: Plan) -> None:
    check_solved(plan)


def check_solved(plan: Plan) -> None:
    solution = WalkAndImprove().solve(plan, Effort(work=200))
    result = charging_table(plan, solution.bouts, solution.slot_min)
    assert judge(plan, as_rota(solution.bouts, result.charging, solution.slot_min)) == ()


def test_the_table_goes_on_from_the_level_that_was_read() -> None:
    """3 W from 18 to 19 on 10 Wh: 7 Wh after day 1; read at a tenth of it all, 1 Wh, day 2 lacks 2 Wh after 20 min."""
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=3.0, use_windows=window("18:00", "19:00"), priority=2)
    plan = plan_of(lamp, store=bank(10.0, nominal_wh=10.0), days=2)
    assert charging_table(plan, (), 5).unmet_wh == 0.0
    store = plan.stores[0].id
    result = charging_table(plan, (), 5, read=StoresRead(minute=1440 + 600, fractions={store: 0.1}))
    assert result.unmet_wh == pytest.approx(2.0)
    assert [(use.day, use.start_min, use.why) for use in result.unmet] == [(2, 1100, "store empty")]
    assert result.levels.stores_wh[store][(1440 + 600) // 5] == pytest.approx(1.0)
    more = charging_table(plan, (), 5, read=StoresRead(minute=1440 + 600, fractions={store: 1.0}))
    assert more.levels.stores_wh[store][-1] == pytest.approx(4.0)


def test_nobody_waits_for_a_table_that_was_stopped() -> None:
    lamp = Device(id="lamp", name="Lamp", use_wh_per_day=3.0, use_windows=window("18:00", "19:00"))
    with pytest.raises(ChargingStoppedError):
        charging_table(plan_of(lamp, store=bank(10.0)), (), 5, cancelled=lambda: True)
