"""Every kind of bad plan gets its sentence with place, reason and remedy; good plans get none."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.checks import Problem, check, has_errors
from kitplanner.plan.codec import decode
from kitplanner.plan.edits import add_record, chain, get_value, remove_record, set_value
from kitplanner.plan.fields import FIELDS, RECORD_TYPES, SECTION_KINDS
from kitplanner.plan.records import (
    Block,
    CableStage,
    ChargingPoint,
    Conditions,
    Device,
    LinearStage,
    MedicalNeed,
    Note,
    Person,
    Plan,
    Station,
    Store,
    TemperaturePart,
    Window,
)
from kitplanner.plan.shipped import DEMOS, demo
from tests.strategies import plans

PLANS = {name: decode(demo(name).read_bytes()) for name in DEMOS}
CAMP, BENCH, SHELTER = PLANS["camp"], PLANS["bench"], PLANS["shelter"]


def put(plan: Plan, path: tuple[str, ...], value: object) -> Plan:
    """Put any value into a plan, past the edits, as a careless script might."""
    if not path:
        return value
    child = getattr(plan, path[0]) if not isinstance(plan, tuple) else None
    if isinstance(plan, tuple):
        return tuple(put(one, path[1:], value) if one.id == path[0] else one for one in plan)
    return structs.replace(plan, **{path[0]: put(child, path[1:], value)})


def found(plan: Plan, place: tuple[str, ...]) -> list[Problem]:
    problems = check(plan)
    for problem in problems:
        assert problem.text
        assert problem.remedy
        assert "\n" not in problem.sentence
        assert problem.sentence.endswith(".")
        assert not problem.text.endswith(".")
        assert not problem.remedy.endswith(".")
    return [problem for problem in problems if problem.place == place]


@pytest.mark.parametrize("name", DEMOS)
def test_the_demos_have_neither_errors_nor_warnings(name):
    assert {problem.severity for problem in check(PLANS[name])} <= {"note"}


def test_the_notes_of_the_demos_are_these():
    assert check(PLANS["household"]) == check(CAMP) == ()
    assert [problem.place for problem in check(SHELTER)] == [("medical_needs",)]
    assert [problem.place for problem in check(BENCH)] == [("days",), ("devices",)]


NAN, INF = float("nan"), float("inf")
OUT_OF_RANGE = [
    (CAMP, ("days",), 0),
    (CAMP, ("days",), 367),
    (CAMP, ("days",), -3),
    (CAMP, ("margin_fraction",), NAN),
    (CAMP, ("margin_fraction",), -0.1),
    (CAMP, ("conditions", "air_degc"), INF),
    (CAMP, ("conditions", "temperatures", "B-T1", "air_degc"), 900.0),
    (CAMP, ("people", "L1", "age"), -1),
    (CAMP, ("people", "L1", "share_legs_fraction"), -0.5),
    (CAMP, ("people", "L1", "bout_min"), 0),
    (CAMP, ("stations", "B-S1", "output_w"), 0.0),
    (CAMP, ("stations", "B-S1", "output_w"), -40.0),
    (CAMP, ("stations", "B-S1", "eta_fraction"), 1.01),
    (CAMP, ("stations", "B-S1", "count"), 0),
    (CAMP, ("stores", "B-B1", "nominal_wh"), -256.0),
    (CAMP, ("stores", "B-B1", "nominal_wh"), 0.0),
    (CAMP, ("stores", "B-B1", "eta_in"), 1.2),
    (CAMP, ("stores", "B-B1", "eta_out"), 0.0),
    (CAMP, ("stores", "B-B1", "start_fraction"), 1.1),
    (CAMP, ("stores", "B-B1", "floor_fraction"), 1.0),
    (CAMP, ("devices", "B-D1", "battery_wh"), -11.1),
    (CAMP, ("devices", "B-D1", "battery_wh"), NAN),
    (CAMP, ("devices", "B-D1", "eta"), 0.0),
    (CAMP, ("devices", "B-D1", "priority"), 0),
    (CAMP, ("devices", "B-D1", "priority"), 6),
    (CAMP, ("devices", "B-D5", "use_h_per_day"), 25.0),
    (CAMP, ("devices", "B-D1", "use_wh_per_day"), -INF),
    (SHELTER, ("medical_needs", "C-M1", "power_w"), -40.0),
    (BENCH, ("stations", "A", "gear", "ratio"), 0.0),
    (BENCH, ("stations", "A", "gear", "eta"), 1.5),
    (BENCH, ("stations", "A", "machine", "ke_v_s"), 0.0),
    (BENCH, ("stations", "A", "machine", "ra_ohm"), NAN),
    (BENCH, ("stations", "A", "stages", "s2", "r1_ohm"), 0.0),
    (BENCH, ("stations", "A", "stages", "s3", "loop_ohm"), -1.0),
    (BENCH, ("stations", "A", "test_load", "cell_eta"), 1.1),
]


@pytest.mark.parametrize(
    ("plan", "path", "value"), OUT_OF_RANGE, ids=lambda one: str(one)[:40] if not isinstance(one, Plan) else ""
)
def test_values_out_of_range_are_errors_at_their_key(plan, path, value):
    (problem,) = found(put(plan, path, value), path)
    assert problem.severity == "error"
    assert problem.remedy.startswith("enter a value")
    # Setting the old value again is the remedy.
    assert not has_errors(check(put(put(plan, path, value), path, get_value(plan, path))))


def test_ranges_are_told_at_display_scale():
    (problem,) = found(put(CAMP, ("stores", "B-B1", "eta_in"), 1.2), ("stores", "B-B1", "eta_in"))
    assert problem.sentence == (
        "stores, record B-B1, key eta_in: Charging efficiency is 120 %; enter a value of at least 1 and at most 100 %."
    )


@pytest.mark.parametrize(("section", "kind"), SECTION_KINDS.items())
def test_the_range_check_covers_every_number_of_every_section(section, kind):
    made = RECORD_TYPES[kind](id="N", name="New")
    plan = structs.replace(SHELTER, **{section: (*getattr(SHELTER, section), made)})
    for spec in FIELDS[kind]:
        if spec.kind in ("number", "integer"):
            path = (section, "N", spec.key)
            too_high = spec.high + 1 if spec.kind == "integer" else spec.high * 2
            assert any(one.severity == "error" for one in found(put(plan, path, too_high), path)), spec.key
            assert any(one.severity == "error" for one in found(put(plan, path, NAN), path)), spec.key


def test_ten_thousand_people_are_one_sentence():
    crowd = tuple(Person(id=f"P{number}", name="x") for number in range(10_000))
    (problem,) = check(Plan(people=crowd))
    assert problem.sentence == (
        "people: 10000 records are more than a plan can have (1000); "
        "split the plan by building or group, or enter alike ones once with their number."
    )


def test_ids_stand_once():
    twice = structs.replace(CAMP, stores=(*CAMP.stores, CAMP.stores[0]))
    (problem,) = found(twice, ("stores", "B-B1"))
    assert problem.text == "the first and the fourth record have the same id 'B-B1'"
    across = structs.replace(CAMP, stores=(*CAMP.stores, Store(id="L1", name="x")))
    assert found(across, ("stores", "L1"))[0].text == "the id 'L1' also stands in people"
    empty = structs.replace(CAMP, stores=(Store(id="", name="x"),))
    assert "empty id" in found(empty, ("stores",))[0].text
    stages = BENCH.stations[0].stages
    doubled = put(BENCH, ("stations", "A", "stages"), (*stages, stages[0]))
    assert found(doubled, ("stations", "A", "stages", "s1"))[0].severity == "error"
    parts = (TemperaturePart(id="T", air_degc=1.0), TemperaturePart(id="T", air_degc=2.0))
    assert found(Plan(conditions=Conditions(temperatures=parts)), ("conditions", "temperatures", "T"))


@pytest.mark.parametrize(
    ("path", "value"),
    [
        (("people", "L1", "group"), "nobody"),
        (("people", "L1", "stations"), ("B-S1", "nowhere")),
        (("stations", "B-S1", "feeds"), ("B-B9",)),
        (("blocks", "B-Q1", "groups"), ("B-G9",)),
        (("charging_points", "B-C1", "attendant"), "L9"),
    ],
)
def test_references_point_to_something(path, value):
    (problem,) = found(put(CAMP, path, value), path)
    assert problem.severity == "error"
    assert problem.text.startswith("there is no '")


@pytest.mark.parametrize(
    ("window", "words"),
    [
        (Window(start="08:00", end="08:00"), "has no length"),
        (Window(start="24:00", end="02:00"), "has no length"),
        (Window(start="8", end="09:00"), "'8' is not a clock time"),
        (Window(start="08:00", end="25:00"), "'25:00' is not a clock time"),
    ],
)
def test_windows_are_clock_times_with_a_length(window, words):
    path = ("blocks", "B-Q1", "windows")
    assert words in found(put(CAMP, path, (window,)), path)[0].text


def test_an_end_before_the_start_crosses_midnight_and_is_only_noted_where_people_act():
    late = (Window(start="22:00", end="02:00"),)
    assert check(put(CAMP, ("conditions", "dark"), late)) == ()
    for path in (("people", "L1", "hours"), ("stations", "B-S1", "hours"), ("charging_points", "B-C1", "hours")):
        assert [problem.severity for problem in found(put(CAMP, path, late), path)] == ["note"]
    part = ("conditions", "temperatures", "B-T3")
    backwards = put(put(CAMP, (*part, "start"), "18:00"), (*part, "end"), "12:00")
    assert [problem.severity for problem in found(backwards, (*part, "end"))] == ["error"]


@pytest.mark.parametrize(
    ("described_by", "missing"), [("measured", {"output_w"}), ("label", {"label_w"}), ("parts", {"machine", "gear"})]
)
def test_a_station_needs_what_its_description_needs(described_by, missing):
    plan = structs.replace(CAMP, stations=(*CAMP.stations, Station(id="N", name="New", described_by=described_by)))
    errors = {problem.place[-1] for problem in check(plan) if problem.severity == "error"}
    assert errors == missing


@pytest.mark.parametrize(
    ("use_by", "missing"),
    [
        ("power_hours", {"use_w", "use_h_per_day"}),
        ("wh_per_day", {"use_wh_per_day"}),
        ("percent", {"use_battery_fraction_per_day", "battery_wh"}),
        ("times", {"use_w", "use_times_per_day", "use_min_each"}),
    ],
)
def test_a_device_needs_what_its_kind_of_use_needs(use_by, missing):
    plan = structs.replace(CAMP, devices=(Device(id="N", name="New", use_by=use_by),))
    assert {problem.place[-1] for problem in check(plan) if problem.severity == "error"} == missing


def device(**more: object) -> Device:
    return Device(**{"id": "N", "name": "New", "battery_wh": 10.0, "use_wh_per_day": 1.0, **more})


def station(**more: object) -> Station:
    return Station(**{"id": "N", "name": "New", "output_w": 6.0, **more})


def person(**more: object) -> Person:
    return Person(**{"id": "N", "name": "New", "age": 40, **more})


JUDGED = [
    ("devices", device(floor_fraction=0.5, target_fraction=0.4), "target_fraction", "error"),
    ("devices", device(floor_fraction=0.4, target_fraction=0.4), "target_fraction", "error"),
    ("devices", device(start_fraction=0.05), "start_fraction", "warning"),
    ("devices", device(use_by="times", use_w=1.0, use_times_per_day=100.0, use_min_each=20.0), "use_by", "error"),
    (
        "devices",
        device(use_by="power_hours", use_w=1.0, use_h_per_day=3.0, use_windows=(Window(start="23:00", end="01:00"),)),
        "use_windows",
        "warning",
    ),
    ("stores", Store(id="N", name="New", start_fraction=0.05), "start_fraction", "warning"),
    ("stores", Store(id="N", name="New", chemistry="alkaline"), "chemistry", "warning"),
    ("stations", station(comfort_low_rpm=80.0, comfort_high_rpm=50.0), "comfort_high_rpm", "error"),
    ("stations", station(guarded=False), "guarded", "warning"),
    ("stations", station(in_service=False), "in_service", "note"),
    ("stations", station(off_min=5), "on_min", "note"),
    ("people", person(bout_min=30), "bout_min", "note"),
    ("people", person(cap_min=90), "cap_min", "note"),
    ("people", person(rest_min=10), "rest_min", "note"),
    ("people", person(bout_min=20, cap_min=10), "bout_min", "note"),
    ("people", person(age=None), "age", "note"),
    ("people", person(age=70, watts_by="self_test", test_arms_w=20.0), "watts_by", "error"),
    ("people", person(age=17, watts_by="self_test", test_arms_w=20.0), "watts_by", "error"),
    ("people", person(watts_by="share"), "share_legs_fraction", "warning"),
    ("people", person(watts_by="own"), "own_legs_w", "warning"),
    ("people", person(age=15, may_watch=True), "may_watch", "warning"),
    ("people", person(age=14, hours=(Window(start="07:00", end="12:00"),)), "hours", "note"),
    ("people", person(age=12, stations=("B-S1",)), "stations", "note"),
    ("charging_points", ChargingPoint(id="N", name="New"), "hours", "warning"),
    ("blocks", Block(id="N", name="New"), "windows", "note"),
    ("blocks", Block(id="N", name="New", days=(2, 9), windows=(Window(start="10:00", end="11:00"),)), "days", "note"),
]


@pytest.mark.parametrize(("section", "record", "key", "severity"), JUDGED, ids=range(len(JUDGED)))
def test_judgements_stand_at_their_key_with_their_weight(section, record, key, severity):
    plan = structs.replace(CAMP, **{section: (*getattr(CAMP, section), record)})
    problems = found(plan, (section, "N", key))
    assert [problem.severity for problem in problems] == [severity]


def test_people_too_young_or_too_old_are_not_counted_and_it_is_said():
    for age in (11, 80):
        plan = structs.replace(CAMP, people=(*CAMP.people, person(age=age, cap_min=10)))
        assert "nobody is counted" in found(plan, ("people", "N"))[0].text
    assert check(structs.replace(CAMP, people=(*CAMP.people, person(age=11, cap_min=0)))) == ()


def test_light_effort_halves_the_limits():
    usual, light = (
        found(structs.replace(CAMP, people=(*CAMP.people, person(cap_min=45, level=level))), ("people", "N", "cap_min"))
        for level in ("usual", "light")
    )
    assert usual == []
    assert "age limit of 30 min" in light[0].text


def test_somebody_must_turn_and_somebody_must_watch():
    children = tuple(one for one in CAMP.people if one.age < 18)
    assert any("no adult may watch" in one.text for one in found(structs.replace(CAMP, people=children), ("people",)))
    watched = set_value(("stations", "B-S1", "needs_watcher"), True)(structs.replace(CAMP, people=children))
    assert found(watched, ("stations", "B-S1", "needs_watcher"))
    assert any("nobody gives any minutes" in one.text for one in found(structs.replace(CAMP, people=()), ("people",)))
    cranks_only = chain(*(set_value(("people", one.id, "stations"), ("B-S2",)) for one in CAMP.people))(CAMP)
    assert "nobody who gives minutes" in found(cranks_only, ("stations", "B-S1"))[0].text
    closed = chain(*(set_value(("stations", one.id, "in_service"), False) for one in CAMP.stations))(CAMP)
    assert "no station is in service" in found(closed, ("stations",))[0].text


def test_the_plan_as_a_whole():
    assert "72" in found(set_value(("days",), 2)(CAMP), ("days",))[0].text
    dark = chain(*(set_value(("devices", one.id, "evening"), False) for one in CAMP.devices))(CAMP)
    assert "a phone or radio for calling help and a lamp" in found(dark, ("devices",))[0].text
    hot = set_value(("conditions", "air_degc"), 31)(CAMP)
    assert "heat limits are off" in found(hot, ("conditions", "heat_limits"))[0].text
    assert found(set_value(("conditions", "heat_limits"), True)(hot), ("conditions", "heat_limits")) == []
    assert found(set_value(("conditions", "air_degc"), -5)(CAMP), ("conditions",))[0].severity == "warning"
    late = set_value(("conditions", "temperatures", "B-T1", "day"), 9)(CAMP)
    assert "after the last day" in found(late, ("conditions", "temperatures", "B-T1", "day"))[0].text
    bare = set_value(("conditions", "temperatures", "B-T1", "air_degc"), None)(CAMP)
    assert "no temperature" in found(bare, ("conditions", "temperatures", "B-T1"))[0].text


def test_medical_equipment_is_always_said_to_be_outside():
    need = MedicalNeed(id="N", name="Pump", power_w=20.0, hours_per_day=24.0)
    (problem,) = found(add_record(("medical_needs",), need)(CAMP), ("medical_needs",))
    assert "outside the balance" in problem.text
    assert "separate secured supply" in problem.remedy


def test_chains_by_parts():
    unknown = add_record(("stations", "A", "stages"), CableStage(id="n", name="Lead"))(BENCH)
    assert found(unknown, ("stations", "A", "stages", "n", "loop_ohm"))[0].severity == "note"
    sized = add_record(("stations", "A", "stages"), CableStage(id="n", name="Lead", awg=20))(BENCH)
    assert not has_errors(check(sized))
    open_way = remove_record(("stations", "A", "stages", "s1"))(BENCH)
    assert "flowing back" in found(open_way, ("stations", "A", "stages"))[0].text
    # 220/680 gives 5.148 V (common practice, no source), inside USB's 5.25 V; 220/820 does not.
    path = ("stations", "A", "stages", "s2")
    for r2_ohm, words in ((680.0, None), (820.0, "5.95 V")):
        stage = LinearStage(id="s2", name="Regulator", r1_ohm=220.0, r2_ohm=r2_ohm)
        problems = found(put(BENCH, path, stage), (*path, "r2_ohm"))
        assert (words is None and problems == []) or words in problems[0].text


def test_a_connector_nobody_has_is_told():
    path = ("devices", "D1", "connector")
    assert found(set_value(path, "barrel 5.5 mm")(BENCH), path)[0].severity == "warning"


def test_notes_are_about_keys_of_their_record():
    path = ("stores", "B-B1", "notes", "colour")
    assert found(put(CAMP, path[:3], {"colour": Note()}), path)[0].severity == "warning"
    path = ("stores", "B-B1", "notes", "eta_in")
    for spread in (NAN, -0.1, 3.0):
        assert found(put(CAMP, path[:3], {"eta_in": Note(spread_fraction=spread)}), path)[0].severity == "error"


def test_errors_come_first():
    plan = chain(set_value(("days",), 1), set_value(("people", "L1", "cap_min"), 120))(CAMP)
    plan = put(plan, ("devices", "B-D1", "use_wh_per_day"), None)
    severities = [problem.severity for problem in check(plan)]
    assert severities == sorted(severities, key=("error", "warning", "note").index)
    assert severities[0] == "error"


@given(plans())
@settings(max_examples=80, deadline=None)
def test_sound_plans_have_no_errors_and_every_sentence_is_one_line(plan):
    for problem in check(plan):
        assert problem.severity != "error", problem.sentence
        assert "\n" not in problem.sentence


@given(plans(), st.data())
@settings(max_examples=80, deadline=None)
def test_one_value_out_of_range_is_always_found(plan, data):
    held = [(section, kind, one) for section, kind in SECTION_KINDS.items() for one in getattr(plan, section)]
    numbers = [
        ((section, one.id, spec.key), spec)
        for section, kind, one in held
        for spec in FIELDS[kind]
        if spec.kind in ("number", "integer")
    ]
    if not numbers:
        return
    path, spec = data.draw(st.sampled_from(numbers))
    value = data.draw(st.sampled_from([NAN, INF, -INF, spec.high * 2 + 1, spec.low - 1]))
    assert any(problem.place == path and problem.severity == "error" for problem in check(put(plan, path, value)))


def test_a_grid_that_does_not_divide_a_day_is_refused():
    problems = check(Plan(grid_min=7))
    assert any(problem.place == ("grid_min",) and "7 min" in problem.text for problem in problems)
    assert not any(problem.place == ("grid_min",) for problem in check(Plan(grid_min=15)))
