"""Levers as edits: one value each, one edit for many, nobody asked above their limit."""

from __future__ import annotations

import doctest

import pytest

from kitplanner.plan import edits_levers
from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.edits import EditError, get_value
from kitplanner.plan.edits_levers import LeverChange, lever_edit, levers_edit, volunteer_min
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, OtherSource, Person, Plan
from kitplanner.plan.shipped import demo


@pytest.fixture(scope="module")
def shelter():
    return read_plan(demo("shelter"))


def test_doctests():
    assert doctest.testmod(edits_levers).failed == 0


@pytest.mark.parametrize(
    ("lever", "to", "path"),
    [
        ("use:C-D2", 4.0, ("devices", "C-D2", "use_h_per_day")),
        ("use:C-D1", 2.5, ("devices", "C-D1", "use_wh_per_day")),
        ("count:C-D2", 4, ("devices", "C-D2", "count")),
        ("units:C-S1", 3, ("stations", "C-S1", "count")),
        ("start:C-B1", 1.0, ("stores", "C-B1", "start_fraction")),
        ("stores:C-B2", 6, ("stores", "C-B2", "count")),
        ("days", 3, ("days",)),
        ("minutes:C-G5", 60, ("people", "R23", "cap_min")),
    ],
)
def test_a_lever_sets_one_value_and_notes_it_as_own(shelter, lever, to, path):
    edited = lever_edit(LeverChange(lever=lever, to=to))(shelter)
    assert get_value(edited, path) == to
    assert not has_errors(check(edited))
    assert lever_edit(LeverChange(lever=lever, to=to))(edited) == edited


def test_uses_are_set_in_the_way_they_are_given():
    phone = Device(id="p", name="phone", battery_wh=10.0, use_by="percent", use_battery_fraction_per_day=0.4)
    radio = Device(id="r", name="radio", use_by="times", use_w=0.5, use_times_per_day=16, use_min_each=5)
    plan = Plan(devices=(phone, radio))
    changes = (LeverChange(lever="use:p", to=0.1), LeverChange(lever="use:r", to=4))
    edited = levers_edit(changes)(plan)
    assert edited.devices[0].use_battery_fraction_per_day == 0.1
    assert edited.devices[1].use_times_per_day == 4


def test_minutes_stop_at_each_age_limit_and_leave_people_at_zero_alone(shelter):
    edited = lever_edit(LeverChange(lever="minutes:C-G6", to=60))(shelter)
    caps = {person.id: person.cap_min for person in edited.people if person.group == "C-G6"}
    # 48 years: 60 min; 51, 54 and 57: 40 min.
    assert caps == {"R40": 60, "R41": 40, "R42": 40, "R43": 40}
    old = lever_edit(LeverChange(lever="minutes:C-G9", to=60))(shelter)
    assert [person.cap_min for person in old.people if person.group == "C-G9"] == [30, 0, 30, 20, 0, 0, 0]
    with pytest.raises(EditError, match="nobody who turns"):
        lever_edit(LeverChange(lever="minutes:C-G7", to=30))(shelter)


def test_more_minutes_never_take_any_away():
    plan = Plan(people=(Person(id="p", name="P", age=30, cap_min=40),))
    assert lever_edit(LeverChange(lever="minutes:p", to=20))(plan) is plan


def test_volunteers_are_adults_with_the_minutes_usual_there(shelter):
    edited = lever_edit(LeverChange(lever="volunteers:C-S1", to=3))(shelter)
    added = edited.people[len(shelter.people) :]
    assert [person.cap_min for person in added] == [40, 40, 40]
    assert len({person.id for person in edited.people}) == len(edited.people)
    assert all(person.stations == ("C-S1",) for person in added)
    assert volunteer_min(Plan(), "s") == 40


def test_the_source_is_a_total_over_all_sources():
    one = lever_edit(LeverChange(lever="source", to=100))(Plan())
    assert [source.wh_per_day for source in one.other_sources] == [100]
    two = Plan(
        other_sources=(OtherSource(id="a", name="A", wh_per_day=30), OtherSource(id="b", name="B", wh_per_day=5))
    )
    more = lever_edit(LeverChange(lever="source", to=100))(two)
    assert [source.wh_per_day for source in more.other_sources] == [95, 5]


def test_many_levers_are_one_edit(shelter):
    changes = (LeverChange(lever="use:C-D8", to=0), LeverChange(lever="units:C-S1", to=3))
    edited = levers_edit(changes)(shelter)
    assert get_value(edited, ("devices", "C-D8", "use_h_per_day")) == 0
    assert get_value(edited, ("stations", "C-S1", "count")) == 3
    assert edited.stores is shelter.stores


@pytest.mark.parametrize("lever", ["", "use", "days:3", "wish:C-D1", "use:nobody", "units:C-D1"])
def test_unknown_levers_are_refused_in_a_sentence(shelter, lever):
    with pytest.raises(EditError, match=r"; .*\.$"):
        lever_edit(LeverChange(lever=lever, to=1))(shelter)


@pytest.mark.parametrize("lever", ["days", "units:C-S1", "minutes:C-G5", "volunteers:C-S1"])
def test_halves_of_whole_things_are_refused(shelter, lever):
    with pytest.raises(EditError, match="whole number"):
        lever_edit(LeverChange(lever=lever, to=45.5))(shelter)
