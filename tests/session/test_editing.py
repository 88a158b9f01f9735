"""What the window offers, as named undo steps."""

import pytest

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.checks import check
from kitplanner.plan.fields import FIELDS, SECTION_KINDS, STAGE_KINDS, field
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import run_quick
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import MOST_AT_ONCE, Editing
from kitplanner.session.new_records import STAGE_WORDS, new_part, new_record

SECTIONS = (
    "people",
    "stations",
    "stores",
    "devices",
    "charging_points",
    "other_sources",
    "medical_needs",
    "blocks",
    "groups",
)


@pytest.fixture
def camp(qapp):
    document = PlanDocument(new_plan("camp"))
    return document, Editing(document)


@pytest.fixture
def bench(qapp):
    document = PlanDocument(new_plan("bench"))
    return document, Editing(document)


def test_a_value_is_one_named_step_marked_as_the_user_s_own(camp):
    document, editing = camp
    assert editing.enter(("people", "L1", "age"), field("person", "age"), "59") is None
    assert document.plan.people[0].age == 59
    assert document.stack.undoText() == "Change age of Hesmira"


def test_a_wrong_text_is_kept_with_its_reason_and_changes_nothing(camp):
    document, editing = camp
    told, path = [], ("people", "L1", "age")
    editing.draft_changed.connect(told.append)
    problem = editing.enter(path, field("person", "age"), "5B")
    assert problem == editing.drafts.get(path).problem
    assert editing.drafts.get(path).text == "5B"
    assert document.stack.count() == 0
    editing.enter(path, field("person", "age"), "58")
    assert editing.drafts.get(path) is None
    assert told == [path, path]
    assert document.stack.count() == 0


def test_the_same_value_again_is_no_step(camp):
    document, editing = camp
    editing.enter(("devices", "B-D1", "battery_wh"), field("device", "battery_wh"), "11.1")
    assert document.stack.count() == 0


def test_another_plan_forgets_the_drafts(camp):
    document, editing = camp
    editing.enter(("people", "L1", "age"), field("person", "age"), "5B")
    document.new_plan(Plan())
    assert len(editing.drafts) == 0


@pytest.mark.parametrize("section", SECTIONS)
def test_a_new_record_calculates_at_once_and_goes_with_one_undo(camp, section):
    document, editing = camp
    before = document.plan
    (record_id,) = editing.add(section)
    assert getattr(document.plan, section)[-1].id == record_id
    assert [problem for problem in check(document.plan) if problem.severity == "error"] == []
    assert run_quick(document.plan, None).balance is not None
    document.stack.undo()
    assert document.plan is before


def test_several_at_once_are_one_step_with_ids_of_their_own(camp):
    document, editing = camp
    ids = editing.add("people", 12)
    assert len(set(ids)) == 12
    assert document.stack.count() == 1
    assert document.stack.undoText() == "Add 12 × person"
    assert len(editing.add("people", 10_000)) == MOST_AT_ONCE


def test_a_copy_stands_behind_its_model(camp):
    document, editing = camp
    (copy,) = editing.duplicate("people", "L1")
    assert [person.id for person in document.plan.people[:2]] == ["L1", copy]
    assert document.plan.people[1].age == document.plan.people[0].age
    assert document.stack.undoText() == "Add copy of Hesmira"


def test_removing_takes_references_and_drafts_along(camp):
    document, editing = camp
    editing.enter(("stations", "B-S1", "count"), field("station", "count"), "many")
    assert editing.remove("stations", ("B-S1",)) is None
    assert len(editing.drafts) == 0
    assert all("B-S1" not in person.stations for person in document.plan.people)
    assert document.stack.count() == 1
    assert editing.remove("stations", ()) is None


def test_moving_stays_inside_the_list(camp):
    document, editing = camp
    assert editing.move(("people", "L1"), -1) is None
    assert document.stack.count() == 0
    editing.move(("people", "L1"), 2)
    assert [person.id for person in document.plan.people].index("L1") == 2
    assert document.stack.undoText() == "Move Hesmira"


@pytest.mark.parametrize("kind", STAGE_KINDS)
def test_every_kind_of_stage_can_be_added_and_removed(bench, kind):
    document, editing = bench
    before = len(document.plan.stations[0].stages)
    part_id = editing.add_part(("stations", "A", "stages"), kind, 1)
    stages = document.plan.stations[0].stages
    assert stages[1].id == part_id
    assert len(stages) == before + 1
    assert [problem for problem in check(document.plan) if problem.severity == "error"] == []
    assert editing.remove_part(("stations", "A", "stages", part_id)) is None
    assert len(document.plan.stations[0].stages) == before


def test_a_temperature_can_be_added(camp):
    document, editing = camp
    part_id = editing.add_part(("conditions", "temperatures"), "temperature")
    assert document.plan.conditions.temperatures[-1].id == part_id
    assert document.stack.undoText() == "Add temperature to conditions"


@pytest.mark.parametrize("way", ["parts", "label", "measured"])
def test_a_station_described_another_way_gets_what_it_lacks_in_the_same_step(camp, way):
    document, editing = camp
    editing.add("stations")
    station_id = document.plan.stations[-1].id
    editing.enter(("stations", station_id, "described_by"), field("station", "described_by"), way)
    assert [problem for problem in check(document.plan) if problem.severity == "error"] == []
    assert document.stack.count() == (1 if way == "measured" else 2)
    station = document.plan.stations[-1]
    if way == "parts":
        assert station.machine is not None
        assert station.gear is not None
        assert station.machine.notes["ke_v_s"].mark == "guess"
        assert run_quick(document.plan, None).balance is not None


def test_records_are_named_for_people(bench):
    _, editing = bench
    assert editing.name_of(()) == "the plan"
    assert editing.name_of(("stations", "A")) == "Small fast hand crank, linear regulator"
    assert editing.name_of(("stations", "A", "machine")) == "machine of Small fast hand crank, linear regulator"
    assert editing.name_of(("conditions",)) == "conditions"


def test_two_records_of_one_name_are_told_apart(camp):
    _document, editing = camp
    editing.enter(("people", "L2", "name"), field("person", "name"), "Hesmira")
    assert editing.names("people")["L2"] == "Hesmira (L2)"
    assert editing.names("people")["L3"] == "Quorin"


def test_origin_says_default_until_the_user_says_otherwise(bench):
    document, editing = bench
    spec = field("device", "taper_tau_h")
    assert editing.origin_of(spec, document.plan.devices[0]) == "default"
    editing.enter(("devices", document.plan.devices[0].id, "taper_tau_h"), spec, "0.39")
    assert editing.origin_of(spec, document.plan.devices[0]) == ""


def test_every_section_and_part_can_be_made():
    for section, kind in SECTION_KINDS.items():
        if section in SECTIONS:
            assert type(new_record(section, "X1")) is not None, kind
    with pytest.raises(ValueError, match="pack_items"):
        new_record("pack_items", "X1")
    assert set(STAGE_WORDS) == set(STAGE_KINDS)
    for kind in STAGE_KINDS:
        assert new_part(kind, "s1").id == "s1"
        assert FIELDS[kind]


def test_a_text_for_a_record_that_went_is_kept_and_refused_in_a_sentence(camp):
    _, editing = camp
    spec = field("person", "age")
    problem = editing.enter(("people", "nobody", "age"), spec, "41")
    assert problem is not None
    assert "nobody" in problem
