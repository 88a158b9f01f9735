"""What matters most for the verdict: by hand on a linear plan, sums, order, symmetry, monotone spread, demos."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, Note, Person, Plan, Station, Store
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.balance import balance
from kitplanner.planners.sensitivity import (
    ATTENDANCE_LOW_FRACTION,
    coverage_sensitivity,
    joined_people,
    label_of,
)
from kitplanner.planners.sensitivity_cover import cover_of
from kitplanner.planners.sensitivity_records import P90_Z, Sensitivity, SensitivityRow, Variation, ranked, swing_of


def linear_plan(spread: float = 0.20) -> Plan:
    """A store of 100 Wh at the outlet against lamps of 50 Wh: every input acts in proportion or against it."""
    bank = Store(
        id="B",
        name="Bank",
        nominal_wh=200.0,
        start_fraction=0.5,
        floor_fraction=0.0,
        health_fraction=1.0,
        eta_in=1.0,
        eta_out=1.0,
        notes={"start_fraction": Note(spread_fraction=spread)},
    )
    lamp = Device(id="L", name="Lamp", use_wh_per_day=50.0, notes={"use_wh_per_day": Note(spread_fraction=0.30)})
    return Plan(days=1, margin_fraction=0.0, stores=(bank,), devices=(lamp,))


def turning_plan(people: int = 2) -> Plan:
    crew = tuple(
        Person(id=f"P{i}", name=f"Walker {i}", age=40, watts_by="share", share_legs_fraction=0.8, cap_min=40)
        for i in range(people)
    )
    stand = Station(id="S", name="Stand", kind="pedal", output_w=40.0, daily_min=600)
    return Plan(
        days=2,
        margin_fraction=0.1,
        people=crew,
        stations=(stand,),
        stores=(Store(id="B", name="Bank"),),
        devices=(Device(id="L", name="Lamp", use_wh_per_day=60.0),),
    )


def row_of(result: Sensitivity, name: str, record: str = "") -> SensitivityRow:
    return next(row for row in result.rows if (row.variation.name, row.variation.record) == (name, record))


def lognormal_ends(spread: float) -> tuple[float, float]:
    sigma = math.sqrt(math.log(1.0 + spread * spread))
    return math.exp(-P90_Z * sigma), math.exp(P90_Z * sigma)


def test_linear_plan_by_hand() -> None:
    result = coverage_sensitivity(linear_plan())
    assert result.answer == pytest.approx(2.0)
    low, high = lognormal_ends(0.20)
    start = row_of(result, "store_start", "B")
    assert (start.answer_low, start.answer_high) == (pytest.approx(2.0 * low), pytest.approx(2.0 * high))
    low, high = lognormal_ends(0.30)
    use = row_of(result, "device_use", "L")
    assert (use.answer_low, use.answer_high) == (pytest.approx(2.0 / low), pytest.approx(2.0 / high))
    # 45 against 50 Wh with a margin of 5 points: 100 / 52.5.
    assert row_of(result, "margin").answer_high == pytest.approx(100.0 / 52.5)


def test_lognormal_ends_against_scipy() -> None:
    stats = pytest.importorskip("scipy.stats")
    sigma = math.sqrt(math.log1p(0.2**2))
    assert lognormal_ends(0.20) == pytest.approx(stats.lognorm(sigma).ppf([0.1, 0.9]), rel=1e-6)


def test_shares_sum_to_one_and_follow_the_squares() -> None:
    result = coverage_sensitivity(linear_plan())
    assert sum(row.variance_fraction for row in result.rows) == pytest.approx(1.0)
    start, use = row_of(result, "store_start", "B"), row_of(result, "device_use", "L")
    assert use.variance_fraction / start.variance_fraction == pytest.approx((use.swing / start.swing) ** 2)
    assert row_of(result, "margin").variance_fraction == 0.0


@pytest.mark.parametrize("name", DEMOS)
def test_demo_rows_are_sorted_and_the_middle_is_the_balance(name: str) -> None:
    plan = read_plan(demo(name))
    result = coverage_sensitivity(plan)
    assert result.answer == pytest.approx(balance(plan).coverage_fraction, rel=1e-12)
    found = [row.swing for row in result.rows]
    assert found == sorted(found, reverse=True)
    assert min(found) > 0.0
    assert sum(row.variance_fraction for row in result.rows) == pytest.approx(1.0)
    for row in result.rows:
        assert row.variation.low <= row.variation.central <= row.variation.high
        assert row.variation.mark
        assert row.variation.source or row.variation.mark in ("own", "measured", "demo")


def with_value(plan: Plan, section: str, record: str, key: str, value: float) -> Plan:
    changed = tuple(structs.replace(one, **{key: value}) if one.id == record else one for one in getattr(plan, section))
    return structs.replace(plan, **{section: changed})


SECTION_OF = {"device": "devices", "store": "stores", "other_source": "other_sources"}


@pytest.mark.parametrize("name", DEMOS)
def test_quick_sums_equal_whole_balances(name: str) -> None:
    """Each end of a record's value, put into the plan, gives the same coverage by the balance itself."""
    plan = read_plan(demo(name))
    checked = 0
    for row in coverage_sensitivity(plan).rows:
        variation = row.variation
        if variation.kind not in SECTION_OF or not variation.record:
            continue
        for value, answer in ((variation.low, row.answer_low), (variation.high, row.answer_high)):
            changed = with_value(plan, SECTION_OF[variation.kind], variation.record, variation.key, value)
            assert balance(changed).coverage_fraction == pytest.approx(answer, rel=1e-9)
            checked += 1
    assert checked


def test_station_output_and_attendance_equal_whole_balances() -> None:
    plan = turning_plan()
    result = coverage_sensitivity(plan)
    station = row_of(result, "station", "S")
    higher = with_value(plan, "stations", "S", "output_w", station.variation.high)
    assert balance(higher).coverage_fraction == pytest.approx(station.answer_high, rel=1e-6)
    crew = tuple(structs.replace(one, cap_min=round(40 * ATTENDANCE_LOW_FRACTION)) for one in plan.people)
    fewer = structs.replace(plan, people=crew)
    assert balance(fewer).coverage_fraction == pytest.approx(row_of(result, "attendance").answer_low, rel=1e-9)


def test_a_persons_watts_stop_at_the_stations_rating() -> None:
    row = row_of(coverage_sensitivity(turning_plan()), "person", "P0")
    plan = turning_plan()
    best = balance(with_value(plan, "people", "P0", "share_legs_fraction", 1.0)).coverage_fraction
    assert row.answer_high == pytest.approx(best)


@given(st.permutations(range(4)))
@settings(max_examples=10, deadline=None)
def test_order_of_records_decides_nothing(order: list[int]) -> None:
    plan = turning_plan(4)
    mixed = structs.replace(plan, people=tuple(plan.people[place] for place in order))
    left, right = coverage_sensitivity(plan), coverage_sensitivity(mixed)
    assert [row.variation for row in left.rows] == [row.variation for row in right.rows]
    assert [row.swing for row in left.rows] == pytest.approx([row.swing for row in right.rows])


@given(st.floats(0.01, 0.9), st.floats(0.01, 0.9))
@settings(max_examples=30, deadline=None)
def test_more_spread_never_moves_the_answer_less(one: float, other: float) -> None:
    less, more = sorted((one, other))
    swings = [row_of(coverage_sensitivity(linear_plan(spread)), "store_start", "B").swing for spread in (less, more)]
    assert swings[0] <= swings[1] + 1e-12


@pytest.mark.parametrize("name", ["device_use", "device_losses", "store_start", "store_health", "store_out"])
def test_direction_of_each_input(name: str) -> None:
    plan = read_plan(demo("household"))
    rows = [row for row in coverage_sensitivity(plan).rows if row.variation.name == name]
    assert rows
    for row in rows:
        assert row.answer_low is not None
        assert row.answer_high is not None
        assert (row.answer_low >= row.answer_high) == (name == "device_use")


def test_people_joined_by_root_sum_of_squares() -> None:
    result = coverage_sensitivity(turning_plan(4))
    joined = joined_people(result)
    alone = [row for row in result.rows if row.variation.name == "person"]
    one = next(row for row in joined.rows if row.variation.name == "person")
    assert len(alone) == 4
    assert one.variation.record == ""
    assert one.swing == pytest.approx(2.0 * alone[0].swing)
    assert one.variance_fraction == pytest.approx(sum(row.variance_fraction for row in alone))
    assert sum(row.variance_fraction for row in joined.rows) == pytest.approx(1.0)


def test_heat_limits_let_the_temperature_act() -> None:
    plan = turning_plan()
    hot = structs.replace(plan, conditions=structs.replace(plan.conditions, heat_limits=True, air_degc=31.0))
    assert not any(row.variation.name == "temperature" for row in coverage_sensitivity(plan).rows)
    row = row_of(coverage_sensitivity(hot), "temperature")
    assert row.answer_high is not None
    assert row.answer_low is not None
    assert row.answer_low > row.answer_high


def test_ramp_up_is_kept() -> None:
    plan = turning_plan()
    ramped = structs.replace(plan, conditions=structs.replace(plan.conditions, ramp_up=True))
    assert cover_of(ramped).fraction() == pytest.approx(balance(ramped).coverage_fraction, rel=1e-12)


def test_nothing_needed_has_no_rows() -> None:
    assert coverage_sensitivity(Plan(stores=(Store(id="B", name="Bank"),))).answer is None


def test_an_input_that_takes_the_answer_away_leads() -> None:
    def variation(key: str) -> Variation:
        return Variation(
            name="device_use",
            record=key,
            kind="device",
            key="use_wh_per_day",
            central=1.0,
            low=0.5,
            high=2.0,
            unit="Wh",
            mark="own",
            source="",
        )

    rows = ranked([(variation("a"), 1.0, 2.0), (variation("b"), None, 2.0), (variation("c"), 3.0, 3.0)])
    assert [row.variation.record for row in rows] == ["b", "a"]
    assert [row.variance_fraction for row in rows] == [1.0, 0.0]
    assert swing_of(None, None) == 0.0


def test_labels_come_from_the_fields() -> None:
    labels = {label_of(row.variation) for row in coverage_sensitivity(read_plan(demo("household"))).rows}
    assert {"Use a day", "Measured output", "Margin on use"} <= labels
