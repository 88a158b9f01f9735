"""Edits share what they do not touch, keep references whole, and can be undone."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.edits import (
    EditError,
    add_record,
    chain,
    get_value,
    move_record,
    new_id,
    remove_record,
    replace_record,
    set_value,
)
from kitplanner.plan.fields import FIELDS, SECTION_KINDS, kind_of
from kitplanner.plan.records import (
    SECTIONS,
    Block,
    CableStage,
    ChargingPoint,
    Group,
    LossStage,
    Machine,
    Note,
    Person,
    Plan,
    Station,
    Store,
    Window,
)
from kitplanner.plan.shipped import demo
from tests.strategies import plans, records, values

BENCH, CAMP, SHELTER = (decode(demo(name).read_bytes()) for name in ("bench", "camp", "shelter"))


def shared_sections(before: Plan, after: Plan) -> set[str]:
    return {name for name in Plan.__struct_fields__ if getattr(before, name) is getattr(after, name)}


def test_get_value_walks_names_and_ids():
    assert get_value(BENCH, ("stations", "A", "stages", "s2", "r1_ohm")) == 120
    assert get_value(CAMP, ("conditions", "temperatures", "B-T2", "air_degc")) == 24
    assert get_value(CAMP, ()) is CAMP
    assert get_value(CAMP, ("people", "L1", "notes")) == {}


def test_set_value_changes_only_what_lies_on_the_path():
    after = set_value(("stations", "A", "stages", "s3", "loop_ohm"), 0.5)(BENCH)
    assert get_value(after, ("stations", "A", "stages", "s3", "loop_ohm")) == 0.5
    assert shared_sections(BENCH, after) == set(Plan.__struct_fields__) - {"stations"}
    assert all(new is old for new, old in zip(after.stations[1:], BENCH.stations[1:], strict=True))
    assert after.stations[0].stages[:2] == BENCH.stations[0].stages[:2]
    assert after.stations[0].machine is BENCH.stations[0].machine


def test_an_edit_marks_the_value_as_the_users_own_where_the_usual_mark_differs():
    after = set_value(("stores", "B-B1", "eta_in"), 0.8)(CAMP)
    assert after.stores[0].notes == {"eta_in": Note(mark="own")}
    measured = set_value(("stations", "B-S1", "output_w"), 38)(CAMP).stations[0]
    assert measured.notes["output_w"] == Note(mark="own")
    assert measured.notes["eta_fraction"].mark == "demo"
    assert type(measured.output_w) is float
    named = set_value(("stores", "B-B1", "name"), "Box")(CAMP).stores[0]
    assert named.notes == {}, "a name is the user's own anyway"


def test_setting_an_equal_value_returns_the_same_plan():
    assert set_value(("days",), 3)(CAMP) is CAMP
    assert set_value(("stations", "B-S1", "output_w"), 40)(CAMP) is CAMP
    assert set_value(("people", "L1", "stations"), ["B-S1"])(CAMP) is CAMP
    assert replace_record(("people", "L1"), structs.replace(CAMP.people[0]))(CAMP) is CAMP
    assert move_record(("people", "L2"), 1)(CAMP) is CAMP


def test_notes_can_be_set_and_dropped():
    path = ("people", "L1", "notes", "age")
    noted = set_value(path, Note(mark="measured", source="asked"))(CAMP)
    assert noted.people[0].notes["age"].source == "asked"
    assert set_value(path, None)(noted) == CAMP
    assert set_value(path, None)(CAMP) is CAMP


@pytest.mark.parametrize(
    ("path", "value", "words"),
    [
        (("days",), "x", "key days: a whole number is expected, not text"),
        (("days",), 2.5, "whole number"),
        (("days",), None, "whole number"),
        (("start",), 3, "date"),
        (("margin_fraction",), float("nan"), "nan is not a number a plan can use"),
        (("margin_fraction",), float("-inf"), "-inf is not a number"),
        (("title",), "\ud800", "half a character pair"),
        (("id",), "x", "cannot be changed"),
        (("version",), 2, "cannot be changed"),
        (("people", "L1", "id"), "x", "people, record L1, key id: this key cannot be changed"),
        (("people", "nobody", "age"), 3, "nothing at this place"),
        (("people", "L1", "colour"), 3, "nothing at this place"),
        (("people", "L1", "level"), "weak", "is not known here"),
        (("people", "L1", "hours"), (Window(start="8", end="9"),), "is not a clock time"),
        (("people", "L1", "hours"), "08:00-09:00", "list"),
        (("people", "L1"), 3, "nothing at this place|no such key"),
        (("people", "L1", "notes", "colour"), Note(), "not a note"),
        (("people", "L1", "notes", "age"), "measured", "not a note"),
        (("stations", "B-S1", "machine"), CAMP.people[0], "unknown|missing"),
        ((), 3, "cannot be changed"),
    ],
)
def test_values_no_file_could_hold_are_refused_in_one_sentence(path, value, words):
    with pytest.raises(EditError, match=words) as caught:
        set_value(path, value)(CAMP)
    assert str(caught.value).endswith(".")
    assert "\n" not in str(caught.value)


def test_records_are_added_moved_replaced_and_removed():
    store = Store(id="B-B9", name="Spare")
    added = add_record(("stores",), store, 1)(CAMP)
    assert [one.id for one in added.stores] == ["B-B1", "B-B9", "B-B2", "B-B3"]
    assert added.stores[1] is store
    assert added.people is CAMP.people
    moved = move_record(("stores", "B-B9"), 3)(added)
    assert [one.id for one in moved.stores] == ["B-B1", "B-B2", "B-B3", "B-B9"]
    assert remove_record(("stores", "B-B9"))(moved) == CAMP
    changed = replace_record(("stores", "B-B1"), structs.replace(CAMP.stores[0], count=2))(CAMP)
    assert changed.stores[0].count == 2
    assert changed.stores[1] is CAMP.stores[1]


def test_stages_are_records_too():
    lead = CableStage(id="s9", name="Lead", awg=18)
    added = add_record(("stations", "A", "stages"), lead)(BENCH)
    assert added.stations[0].stages[3] is lead
    assert remove_record(("stations", "A", "stages", "s9"))(added) == BENCH
    assert move_record(("stations", "A", "stages", "s3"), 0)(BENCH).stations[0].stages[0].id == "s3"
    swapped = replace_record(("stations", "A", "stages", "s2"), LossStage(id="s2", name="Loss"))(BENCH)
    assert isinstance(swapped.stations[0].stages[1], LossStage)


def test_single_parts_of_a_station_come_and_go():
    path = ("stations", "B-S1", "machine")
    machine = Machine(ke_v_s=0.05, ra_ohm=1.0)
    fitted = replace_record(path, machine)(CAMP)
    assert fitted.stations[0].machine is machine
    assert remove_record(path)(fitted) == CAMP
    assert set_value((*path, "ra_ohm"), 2)(fitted).stations[0].machine.ra_ohm == 2.0


@pytest.mark.parametrize(
    ("edit", "words"),
    [
        (add_record(("stores",), Store(id="B-B1", name="x")), "already taken"),
        (add_record(("stores",), Store(id="", name="x")), "empty"),
        (add_record(("stores",), Store(id="n", name="x"), 9), "no place 9"),
        (add_record(("stores",), Person(id="n", name="x")), "does not belong here"),
        (add_record(("days",), Store(id="n", name="x")), "not a list"),
        (add_record(("stores",), Store(id="n", name="x", eta_in=float("nan"))), "not a number"),
        (add_record(("stores",), Store(id="n", name="x", count="3")), "whole number"),
        (remove_record(("stores", "n")), "nothing at this place"),
        (remove_record(("days",)), "no record to remove"),
        (move_record(("stores", "B-B1"), 3), "no place 3"),
        (move_record(("stores", "B-B1"), -1), "no place -1"),
        (replace_record(("stores", "B-B1"), Store(id="n", name="x")), "another id"),
        (replace_record(("stores", "B-B1"), Person(id="B-B1", name="x")), "does not belong here"),
        (replace_record(("days",), Store(id="n", name="x")), "no record to replace"),
    ],
)
def test_impossible_changes_are_refused_in_one_sentence(edit, words):
    with pytest.raises(EditError, match=words) as caught:
        edit(CAMP)
    assert str(caught.value).endswith(".")
    assert "\n" not in str(caught.value)


def test_removing_a_record_takes_its_references_along():
    plan = Plan(
        blocks=(
            Block(id="Q1", name="Lessons", groups=("G1",)),
            Block(id="Q2", name="Prayer", groups=("G1", "G2")),
            Block(id="Q3", name="Quiet"),
        ),
        groups=(Group(id="G1", name="a"), Group(id="G2", name="b")),
        people=(
            Person(id="P1", name="p", group="G1", stations=("S1",)),
            Person(id="P2", name="q", group="G2", stations=("S1", "S2")),
            Person(id="P3", name="r"),
        ),
        stations=(
            Station(id="S1", name="s", output_w=6.0, feeds=("B1", "B2")),
            Station(id="S2", name="t", output_w=6.0),
        ),
        stores=(Store(id="B1", name="b"), Store(id="B2", name="c")),
        charging_points=(ChargingPoint(id="C1", name="c", attendant="P1"),),
    )
    without_group = remove_record(("groups", "G1"))(plan)
    assert [one.id for one in without_group.blocks] == ["Q2", "Q3"], "a block for nobody must not become one for all"
    assert without_group.blocks[0].groups == ("G2",)
    assert without_group.people[0].group is None
    assert without_group.people[1] is plan.people[1]
    assert without_group.stations is plan.stations

    without_station = remove_record(("stations", "S1"))(plan)
    assert (without_station.people[0].stations, without_station.people[0].cap_min) == ((), 0)
    assert (without_station.people[1].stations, without_station.people[1].cap_min) == (("S2",), None)
    assert without_station.people[2] is plan.people[2]

    assert remove_record(("stores", "B1"))(plan).stations[0].feeds == ("B2",)
    assert remove_record(("people", "P1"))(plan).charging_points[0].attendant is None


def test_new_ids_follow_the_manner_of_the_section():
    assert new_id(CAMP, "people") == "Y21"
    assert new_id(CAMP, "stores") == "B-B4"
    assert new_id(SHELTER, "people") == "R61"
    assert new_id(BENCH, "stations") == "S1"
    assert new_id(BENCH, ("stations", "A", "stages")) == "s4"
    assert new_id(Plan(), "devices") == "D1"
    taken = Plan(stores=(Store(id="D1", name="x"),))
    assert new_id(taken, "devices") == "D2"
    assert new_id(Plan(people=(Person(id="R07", name="x"),)), "people") == "R08"


def test_chained_edits_run_one_after_the_other():
    both = chain(set_value(("days",), 5), set_value(("title",), "Hut"))(CAMP)
    assert (both.days, both.title) == (5, "Hut")
    assert chain()(CAMP) is CAMP


@st.composite
def plan_and_edit(draw):
    """A sound plan, an edit on it, and the edit that takes it back."""
    plan = draw(plans())
    section = draw(st.sampled_from(SECTIONS))
    kind = SECTION_KINDS[section]
    held = getattr(plan, section)
    ids = {name: [one.id for one in getattr(plan, name)] for name in SECTIONS}
    choice = draw(st.sampled_from(["set", "add", "move", "replace"] if held else ["add"]))
    if choice == "add":
        own_id = new_id(plan, section)
        added = draw(records(kind, own_id, ids))
        return plan, add_record((section,), added, draw(st.integers(0, len(held)))), remove_record((section, own_id))
    index = draw(st.integers(0, len(held) - 1))
    record, path = held[index], (section, held[index].id)
    back = replace_record(path, record)
    if choice == "move":
        return plan, move_record(path, draw(st.integers(0, len(held) - 1))), move_record(path, index)
    if choice == "replace":
        return plan, replace_record(path, draw(records(kind, record.id, ids))), back
    spec = draw(st.sampled_from(FIELDS[kind_of(record)]))
    return plan, set_value((*path, spec.key), draw(values(kind, spec, ids))), back


@given(plan_and_edit())
@settings(max_examples=150, deadline=None)
def test_every_edit_has_an_inverse_shares_the_rest_and_can_be_saved(case):
    plan, edit, inverse = case
    before = encode(plan)
    after = edit(plan)
    assert encode(plan) == before, "the old plan is untouched"
    assert decode(encode(after)) == after
    assert after == plan or inverse(after) == plan
    assert edit(plan) == after
    touched = set(Plan.__struct_fields__) - shared_sections(plan, after)
    assert len(touched) <= 1, "one edit touches one section"
    for name in touched:
        old = {one.id: one for one in getattr(plan, name)}
        assert sum(old.get(one.id) is not one for one in getattr(after, name)) <= 1


@given(plans(), st.data())
@settings(max_examples=80, deadline=None)
def test_removing_anything_never_leaves_a_broken_reference(plan, data):
    assert not has_errors(check(plan))
    while any(getattr(plan, section) for section in SECTIONS):
        section = data.draw(st.sampled_from([name for name in SECTIONS if getattr(plan, name)]))
        gone = data.draw(st.sampled_from(getattr(plan, section)))
        plan = remove_record((section, gone.id))(plan)
        assert not has_errors(check(plan))
        assert decode(encode(plan)) == plan


@given(plans())
@settings(max_examples=40, deadline=None)
def test_setting_every_value_to_itself_changes_nothing(plan):
    for section, kind in SECTION_KINDS.items():
        for record in getattr(plan, section):
            for spec in FIELDS[kind]:
                assert set_value((section, record.id, spec.key), getattr(record, spec.key))(plan) is plan
