"""Traces: every formula id answers, with the value the answer shows and the marks of its inputs."""

from __future__ import annotations

import doctest

import pytest
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Note, OtherSource
from kitplanner.plan.shipped import demo
from kitplanner.planners import trace_fields
from kitplanner.planners.pipeline import Results, run_quick, run_slow
from kitplanner.planners.trace import OF_PLAN, trace
from kitplanner.planners.trace_fields import TraceError


@pytest.fixture(scope="module")
def plan():
    return read_plan(demo("household"))


@pytest.fixture(scope="module")
def results(plan):
    return run_slow(plan, None)


def steps_by_key(found):
    return {step.key: step for step in found.steps if step.key}


def test_doctests():
    assert doctest.testmod(trace_fields).failed == 0


@pytest.mark.parametrize("formula", sorted(OF_PLAN))
@pytest.mark.parametrize("name", ["household", "camp", "shelter", "bench"])
def test_every_result_of_the_plan_has_a_trace(name, formula):
    plan = read_plan(demo(name))
    found = trace(plan, run_quick(plan, None), formula)
    assert found.formula
    assert found.words.endswith(".")
    assert found.source
    assert found.value
    assert found.steps
    assert all(step.label and step.mark for step in found.steps)


def test_coverage_is_traced_to_have_and_need(plan, results):
    found = trace(plan, results, "coverage")
    assert found.value == "1.059"
    assert [step.value for step in found.steps[:2]] == ["134.79", "127.28"]
    assert steps_by_key(found)["margin_fraction"].value == "20"


def test_inputs_of_need_and_have_add_up(plan, results):
    need = trace(plan, results, "need")
    uses = sum(float(step.value) for step in need.steps if step.label.startswith("use of"))
    credits_ = sum(float(step.value) for step in need.steps if step.label.startswith("start charge"))
    assert uses - credits_ == pytest.approx(results.balance.need_wh, abs=0.1)
    sunny = replace(plan, other_sources=(OtherSource(id="o", name="sun", wh_per_day=3.0),))
    have = trace(sunny, run_quick(sunny, None), "have")
    assert steps_by_key(have)["wh_per_day"].value == "3"


def test_device_use_shows_its_inputs(plan, results):
    found = trace(plan, results, "device_use", ["A-D1"])
    assert found.value == "14.12 Wh a day at O"
    steps = steps_by_key(found)
    assert steps["use_wh_per_day"].value == "6"
    assert steps["eta"].value == "85"
    assert steps["eta"].mark == "default"
    assert "use_w" not in steps
    by_hours = steps_by_key(trace(plan, results, "device_use", ["A-D4"]))
    assert {"use_w", "use_h_per_day"} <= set(by_hours)


def test_a_note_wins_over_the_field(plan, results):
    found = trace(plan, results, "station_output", ["M1", "A-S1"])
    step = steps_by_key(found)["output_w"]
    assert (step.mark, step.record) == ("demo", "A-S1")
    assert "6 W" in step.source
    device = replace(plan.devices[3], notes={"eta": Note(mark="measured", source="own reading")})
    other = replace(plan, devices=(device,))
    noted = steps_by_key(trace(other, run_quick(other, None), "device_use", [device.id]))["eta"]
    assert (noted.mark, noted.source) == ("measured", "own reading")


def test_a_value_unlike_the_default_is_the_plans_own(plan, results):
    step = steps_by_key(trace(plan, results, "store_usable", ["A-B1"]))["health_fraction"]
    assert (step.value, step.mark) == ("90", "own")


def test_record_traces_give_the_worked_values(plan, results):
    assert trace(plan, results, "store_usable", ["A-B1"]).value == "101.9 Wh at O"
    assert trace(plan, results, "station_time", ["A-S1"]).value == "240 min a day"
    assert trace(plan, results, "station_made", ["A-S1"]).value == "8.6 Wh a day at S"
    assert trace(plan, results, "station_output", ["M3", "A-S1"]).value == "4.2 W at S"
    assert trace(plan, results, "device_credit", ["A-D7"]).value.endswith("Wh at O")
    minutes = trace(plan, results, "minutes_p50", ["A-D1", "A-S1", "M1", "direct", "full"])
    assert float(minutes.value.split()[0]) == pytest.approx(199.9, rel=0.01)
    through = trace(plan, results, "minutes_p50", ["A-D1", "A-S1", "M1", "store", "full"])
    assert any(step.key == "eta_in" for step in through.steps)
    assert not any(step.key == "eta_in" for step in minutes.steps)


@pytest.mark.parametrize(("person", "station"), [("L1", "B-S1"), ("Y13", "B-S2")])
def test_station_output_of_the_camp(person, station):
    plan = read_plan(demo("camp"))
    results = run_quick(plan, None)
    found = trace(plan, results, "station_output", [person, station])
    shown = next(row.output_w for row in results.balance.people if row.person == person)
    assert float(found.value.split()[0]) == pytest.approx(shown, abs=0.01)


def test_station_output_by_parts():
    plan = read_plan(demo("bench"))
    found = trace(plan, run_quick(plan, None), "station_output", [plan.people[0].id, "A"])
    assert "chain" in found.words


@pytest.mark.parametrize(
    ("formula", "ids"),
    [
        ("nothing", []),
        ("device_use", []),
        ("device_use", ["no such"]),
        ("station_output", ["M1"]),
        ("minutes_p50", ["A-D1", "A-S1", "M1", "direct", "half"]),
    ],
)
def test_what_cannot_be_traced_is_said(plan, results, formula, ids):
    with pytest.raises(TraceError, match="There is no"):
        trace(plan, results, formula, ids)


def test_no_answer_no_trace(plan):
    empty = Results(plan=plan, problems=())
    for formula, ids in (("coverage", []), ("station_made", ["A-S1"])):
        with pytest.raises(TraceError, match="no balance"):
            trace(plan, empty, formula, ids)
    with pytest.raises(TraceError, match="not computed"):
        trace(plan, empty, "minutes_p50", ["A-D1", "A-S1", "M1", "direct", "full"])
