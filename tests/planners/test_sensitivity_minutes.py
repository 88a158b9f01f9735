"""What matters most for the minutes of one charge: by hand through a store, ends, edited inputs, demos."""

from __future__ import annotations

import pytest

from kitplanner.plan.edits import set_value
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Conditions, Device, Note, Person, Plan, Station, Store
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.effort import EffortError, effort
from kitplanner.planners.results import EffortRow
from kitplanner.planners.sensitivity_minutes import minutes_sensitivity
from kitplanner.planners.sensitivity_records import Sensitivity, SensitivityRow


def small_plan(**device: object) -> Plan:
    settings: dict[str, object] = {"battery_wh": 10.0, "use_wh_per_day": 4.0, "start_fraction": 0.2, **device}
    return Plan(
        conditions=Conditions(air_degc=22.0),
        people=(Person(id="P", name="Walker", watts_by="share", share_arms_fraction=0.8),),
        stations=(Station(id="S", name="Crank", output_w=6.0, notes={"output_w": Note(spread_fraction=0.10)}),),
        stores=(Store(id="B", name="Bank"),),
        devices=(Device(id="D", name="Phone", **settings),),  # type: ignore[arg-type]
    )


def one_row(plan: Plan, route: str = "store", charge: str = "full") -> EffortRow:
    return next(row for row in effort(plan).rows if (row.route, row.charge) == (route, charge))


def of(result: Sensitivity, name: str) -> SensitivityRow:
    return next(row for row in result.rows if row.variation.name == name)


def test_through_a_store_minutes_go_inversely_with_every_input() -> None:
    """Through a store the minutes are energy only: battery over (output * ways), so each end follows by hand."""
    plan = small_plan()
    result = minutes_sensitivity(plan, one_row(plan))
    central = 10.0 / (6.0 * 0.8 * 0.765 * 0.85) * 60.0
    assert result.answer == pytest.approx(central)
    for name, power in (("station", -1), ("device_losses", -1), ("store_round_trip", -1), ("device_capacity", 1)):
        row = of(result, name)
        for value, answer in ((row.variation.low, row.answer_low), (row.variation.high, row.answer_high)):
            assert answer == pytest.approx(central * (value / row.variation.central) ** power)
    assert sum(row.variance_fraction for row in result.rows) == pytest.approx(1.0)


def test_rated_output_ends_a_persons_gain() -> None:
    plan = small_plan()
    row = of(minutes_sensitivity(plan, one_row(plan)), "person")
    assert row.answer_high == pytest.approx(10.0 / (6.0 * 0.765 * 0.85) * 60.0)


def test_start_acts_on_the_plans_charge_only() -> None:
    plan = small_plan()
    for charge, names in (("plan", {"device_start"}), ("day", {"device_use"}), ("full", set())):
        rows = minutes_sensitivity(plan, one_row(plan, charge=charge)).rows
        assert {row.variation.name for row in rows} & {"device_start", "device_use"} == names


def test_edited_inputs_equal_the_effort_table() -> None:
    plan = small_plan()
    for charge, name, key in (("plan", "device_start", "start_fraction"), ("day", "device_use", "use_wh_per_day")):
        row = of(minutes_sensitivity(plan, one_row(plan, "direct", charge)), name)
        for value, answer in ((row.variation.low, row.answer_low), (row.variation.high, row.answer_high)):
            changed = set_value(("devices", "D", key), value)(plan)
            assert one_row(changed, "direct", charge).minutes_p50 == pytest.approx(answer)


def test_temperature_acts_in_the_cold_only() -> None:
    warm = small_plan()
    cold = set_value(("conditions", "air_degc"), 3.0)(warm)
    assert not any(
        row.variation.name == "temperature" for row in minutes_sensitivity(warm, one_row(warm, "direct")).rows
    )
    row = of(minutes_sensitivity(cold, one_row(cold, "direct")), "temperature")
    # 3.8 degrees colder lies below freezing, where nothing may be charged.
    assert row.answer_low is None
    assert row.answer_high is not None


def test_too_little_current_is_said_at_the_low_end() -> None:
    plan = small_plan(input_least_a=0.9)
    row = of(minutes_sensitivity(plan, one_row(plan, "direct")), "station")
    assert row.answer_low is None
    assert row.variance_fraction > 0.0


def test_connectors_that_do_not_fit_have_no_rows() -> None:
    plan = set_value(("stations", "S", "connector"), "round")(small_plan(connector="flat"))
    result = minutes_sensitivity(plan, one_row(plan, "direct"))
    assert (result.answer, result.rows) == (None, ())


def test_a_row_that_is_gone_is_refused() -> None:
    plan = small_plan()
    row = one_row(plan)
    with pytest.raises(EffortError, match="any more"):
        minutes_sensitivity(set_value(("devices", "D", "battery_wh"), None)(plan), row)


@pytest.mark.parametrize("name", DEMOS)
def test_middle_of_demo_rows_is_the_effort_table(name: str) -> None:
    plan = read_plan(demo(name))
    rows = effort(plan).rows
    for row in rows[:: max(1, len(rows) // 6)]:
        result = minutes_sensitivity(plan, row)
        assert result.answer == (None if row.minutes_p50 is None else pytest.approx(row.minutes_p50))
        swings = [one.swing for one in result.rows]
        assert swings == sorted(swings, reverse=True)
        for one in result.rows:
            assert one.variation.low <= one.variation.central <= one.variation.high


def test_one_input_alone_stays_near_the_tables_range() -> None:
    """With one spread only, its ends are the table's own 10 and 90 % minutes."""
    notes = {key: Note(spread_fraction=0.0) for key in ("battery_wh", "charge_rate_per_h", "eta")}
    plan = small_plan(notes=notes)
    alone = set_value(("people", "P", "watts_by"), "own")(plan)
    alone = set_value(("people", "P", "own_arms_w"), 500.0)(alone)
    alone = set_value(("stations", "S", "notes", "output_w"), Note(spread_fraction=0.30))(alone)
    row = one_row(alone, "direct")
    station = of(minutes_sensitivity(alone, row), "station")
    assert station.answer_low == pytest.approx(row.minutes_p90, rel=0.02)
    assert station.answer_high == pytest.approx(row.minutes_p10, rel=0.02)
