"""The cautions stand where their hazard is, and nowhere can a place be mistyped."""

from __future__ import annotations

import pytest
from msgspec import structs

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.cautions import AT_PERSON_LIMITS, CAUTIONS, PLACES, cautions_for, cautions_on_paper
from kitplanner.plan.edits import set_value
from kitplanner.plan.records import SECTIONS, MedicalNeed, Person, Plan, Station

HOUSEHOLD, CAMP, SHELTER, BENCH = (new_plan(kind) for kind in ("household", "camp", "shelter", "bench"))


def ids(plan: Plan, place: str, how: str | None = None) -> set[str]:
    return {shown.caution.id for shown in cautions_for(plan, place) if how in (None, shown.how)}


def test_there_are_fourteen_in_full_sentences():
    assert list(CAUTIONS) == [f"C{number}" for number in range(1, 15)]
    assert all(one.text.endswith(".") and one.text[0].isupper() and one.hazard for one in CAUTIONS.values())


def test_every_caution_but_the_printed_ones_stands_somewhere():
    hot_and_cold = set_value(("conditions", "air_degc"), 40)(CAMP)
    hot_and_cold = set_value(("conditions", "temperatures", "B-T1", "air_degc"), -5)(hot_and_cold)
    plan = structs.replace(
        hot_and_cold,
        stations=(*CAMP.stations, *BENCH.stations),
        medical_needs=(MedicalNeed(id="M", name="m"),),
    )
    shown = {one for place in PLACES for one in ids(plan, place)}
    assert shown == set(CAUTIONS)


def test_gates_stand_where_the_hazard_is_created():
    assert ids(HOUSEHOLD, "people", "gate") == {"C1", "C6"}
    assert ids(HOUSEHOLD, "devices", "gate") == {"C1"}
    assert ids(SHELTER, "medical_needs", "gate") == {"C1"}
    assert ids(HOUSEHOLD, "stations", "gate") == set(), "a table crank has no open chain"
    assert ids(CAMP, "stations", "gate") == {"C4"}
    assert ids(HOUSEHOLD, "charging_points", "gate") == set()
    assert ids(CAMP, "charging_points", "gate") == {"C3", "C12"}
    assert ids(BENCH, "bench", "gate") == {"C8"}


def test_young_people_only_count_while_they_turn():
    assert "C6" not in ids(BENCH, "people")
    child = Plan(people=(Person(id="P", name="p", age=17),))
    assert "C6" in ids(child, "people")
    assert "C6" not in ids(set_value(("people", "P", "cap_min"), 0)(child), "people")


@pytest.mark.parametrize(("degc", "shown"), [(4.9, {"C9"}), (5.0, set()), (21.0, set()), (21.1, {"C7"})])
def test_heat_and_cold_stand_at_their_temperatures(degc, shown):
    assert ids(set_value(("conditions", "air_degc"), degc)(Plan()), "conditions") == shown
    assert ids(set_value(("conditions", "air_degc"), degc)(Plan()), "effort") - {"C5"} == shown


def test_one_hot_part_of_one_day_is_enough():
    warm = set_value(("conditions", "temperatures", "B-T3", "air_degc"), 33)(CAMP)
    assert "C7" in ids(warm, "conditions")
    assert "C7" in ids(CAMP, "conditions"), "22 and 24 degrees are above 21"


def test_beside_limits_the_words_speak_to_the_planner():
    (shown,) = [one for one in cautions_for(HOUSEHOLD, "people") if one.caution.id == "C5"]
    assert shown.text == AT_PERSON_LIMITS
    assert shown.how == "inline"
    (at_test,) = cautions_for(HOUSEHOLD, "self_test")
    assert at_test.text == CAUTIONS["C5"].text
    assert at_test.how == "gate"


def test_every_section_has_its_place_and_a_mistyped_one_is_an_error():
    assert set(SECTIONS) | {"plan", "conditions", "effort", "balance", "bench", "rota", "about"} <= set(PLACES)
    for place in PLACES:
        assert isinstance(cautions_for(Plan(), place), tuple)
    with pytest.raises(KeyError):
        cautions_for(Plan(), "peple")


def test_papers_carry_theirs():
    assert [one.id for one in cautions_on_paper("sign")] == ["C2", "C3", "C12"]
    assert [one.id for one in cautions_on_paper("benchsheet")] == ["C8"]
    assert [one.id for one in cautions_on_paper("slips")] == ["C5", "C6"]


def test_foot_driven_stations_of_any_kind_have_moving_parts():
    for kind in ("pedal", "treadle", "rocker"):
        assert "C4" in ids(Plan(stations=(Station(id="S", name="s", kind=kind),)), "stations", "gate")
