"""Many records in one edit: numbered copies, one field of many, another order."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.checks import check
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_many import add_like, set_many, sort_section
from kitplanner.plan.records import Device, Group, Person, Plan, Window


def people(*names):
    return Plan(people=tuple(Person(id=f"P{place}", name=name) for place, name in enumerate(names, start=1)))


def names(plan):
    return [one.name for one in plan.people]


@pytest.mark.parametrize(
    ("before", "model", "count", "after"),
    [
        (["Ada"], "P1", 2, ["Ada", "Ada 2", "Ada 3"]),
        (["R01", "R02"], "P2", 2, ["R01", "R02", "R03", "R04"]),
        (["R01", "R02"], "P1", 1, ["R01", "R03", "R02"]),
        (["Team 9"], "P1", 2, ["Team 9", "Team 10", "Team 11"]),
        (["R99"], "P1", 1, ["R99", "R100"]),
        (["Ada", "Ada 2"], "P1", 1, ["Ada", "Ada 3", "Ada 2"]),
        ([""], "P1", 1, ["", "2"]),
    ],
)
def test_copies_stand_behind_their_model_with_numbered_names(before, model, count, after):
    assert names(add_like(("people", model), count)(people(*before))) == after


def test_seventeen_like_this_have_ids_of_their_own_and_the_same_values():
    plan = new_plan("shelter")
    model = plan.people[30]
    after = add_like(("people", model.id), 17)(plan)
    copies = after.people[31:48]
    assert len(after.people) == len(plan.people) + 17
    assert len({one.id for section in (after.people, after.devices, after.stations) for one in section}) == len(
        after.people
    ) + len(after.devices) + len(after.stations)
    assert all((one.age, one.stations, one.cap_min) == (model.age, model.stations, model.cap_min) for one in copies)
    assert not [problem for problem in check(after) if problem.severity == "error"]


def test_copies_that_cannot_be_made_are_refused():
    for path, count in ((("people", "P1"), 0), (("people", "P1"), 1001), (("people", "P9"), 1), (("people",), 1)):
        with pytest.raises(EditError):
            add_like(path, count)(people("Ada"))


def test_one_field_of_many_records_with_its_mark():
    after = set_many("people", ["P1", "P3", "P1"], "cap_min", 20)(people("A", "B", "C"))
    assert [one.cap_min for one in after.people] == [20, None, 20]
    assert after.people[0].notes["cap_min"].mark == "own"
    with pytest.raises(EditError, match="no record is chosen"):
        set_many("people", [], "cap_min", 20)
    with pytest.raises(EditError):
        set_many("people", ["P1"], "cap_min", "many")(people("A"))


def test_order_by_name_number_choice_windows_and_reference():
    assert names(sort_section("people", "name")(people("b 10", "B 9", "a"))) == ["a", "B 9", "b 10"]
    plan = Plan(
        groups=(Group(id="G1", name="Zebra"), Group(id="G2", name="Ape")),
        people=(
            Person(id="1", name="x", age=40, level="strong", group="G1", hours=(Window(start="09:00", end="10:00"),)),
            Person(id="2", name="y", level="light"),
            Person(id="3", name="z", age=9, group="G2", hours=(Window(start="08:00", end="10:00"),)),
        ),
    )

    def order(key, **more):
        return "".join(one.id for one in sort_section("people", key, **more)(plan).people)

    assert order("age") == "312"
    assert order("age", descending=True) == "132"
    assert order("level") == "231"
    assert order("group") == "312"
    assert order("hours") == "312"
    with pytest.raises(EditError, match="no such column"):
        order("shoe")


@given(st.lists(st.integers(1, 5), max_size=8), st.booleans())
def test_sorting_keeps_every_record_and_the_order_of_equal_ones(priorities, descending):
    plan = Plan(devices=tuple(Device(id=f"D{i}", name="", priority=one) for i, one in enumerate(priorities)))
    after = sort_section("devices", "priority", descending=descending)(plan)
    assert sorted(one.id for one in after.devices) == sorted(one.id for one in plan.devices)
    pairs = [(one.priority, int(one.id[1:])) for one in after.devices]
    assert pairs == sorted(pairs, key=lambda pair: (-pair[0] if descending else pair[0], pair[1]))
    assert sort_section("devices", "priority", descending=descending)(after) is after
