"""References are found from the field table alone."""

from __future__ import annotations

import typing

from hypothesis import given, settings

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.fields import FIELDS, SECTION_KINDS
from kitplanner.plan.records import SECTIONS, Person, Plan, Station
from kitplanner.plan.references import references, without_references
from tests.strategies import plans


def test_references_of_a_small_plan():
    plan = Plan(
        people=(Person(id="P", name="p", group="G", stations=("S", "T")),),
        stations=(Station(id="S", name="s", feeds=("B",)),),
    )
    assert set(references(plan)) == {
        (("people", "P", "group"), "groups", "G"),
        (("people", "P", "stations"), "stations", "S"),
        (("people", "P", "stations"), "stations", "T"),
        (("stations", "S", "feeds"), "stores", "B"),
    }


def test_every_field_that_points_somewhere_points_into_a_section():
    pointing = {(kind, spec.key): spec.refs_to for kind, specs in FIELDS.items() for spec in specs if spec.refs_to}
    assert pointing == {
        ("block", "groups"): "groups",
        ("person", "group"): "groups",
        ("person", "stations"): "stations",
        ("station", "feeds"): "stores",
        ("charging_point", "attendant"): "people",
    }
    assert set(pointing.values()) <= set(SECTIONS) == set(typing.cast("dict[str, str]", SECTION_KINDS))


def test_a_record_nobody_names_leaves_the_very_same_plan():
    camp = new_plan("camp")
    assert without_references(camp, "stores", "B-B1") is camp
    assert without_references(camp, "devices", "B-D1") is camp


@given(plans())
@settings(max_examples=50, deadline=None)
def test_nothing_names_a_record_after_it_was_freed(plan):
    for section in SECTIONS:
        for record in getattr(plan, section):
            freed = without_references(plan, section, record.id)
            assert not [one for one in references(freed) if one[1:] == (section, record.id)]
