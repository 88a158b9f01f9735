"""Reasons of the record builder are told in words for people."""

from __future__ import annotations

import msgspec
import pytest

from kitplanner.plan.places import place_in_file
from kitplanner.plan.records import CableStage, Person, Plan
from kitplanner.plan.refusal import allowed_values, explain_refusal, record_type


def told(raw: dict) -> tuple[str, str, str]:
    with pytest.raises(msgspec.ValidationError) as caught:
        msgspec.convert(raw, Plan, strict=True)
    parts, reason, remedy = explain_refusal(str(caught.value), raw)
    return place_in_file(raw, parts), reason, remedy


@pytest.mark.parametrize(
    ("raw", "place", "reason"),
    [
        ({"people": {}}, "key people", "a list in brackets is expected, not a group of keys in braces"),
        ({"people": [3]}, "people, first entry", "a group of keys in braces is expected, not a whole number"),
        ({"conditions": []}, "key conditions", "a group of keys in braces is expected, not a list in brackets"),
        ({"conditions": {"ramp_up": "yes"}}, "conditions, key ramp_up", "true or false is expected, not text"),
        ({"margin_fraction": "a"}, "key margin_fraction", "a number is expected, not text"),
        ({"notes": {"a": {"mark": "own"}, "x": {"mark": "?"}}}, "notes, x, key mark", "'?' is not known here"),
        ({"notes": {"x": {"colour": 1}}}, "notes, x, key colour", "this key is unknown"),
    ],
)
def test_types_have_plain_names(raw, place, reason):
    assert told(raw)[:2] == (place, reason)


def test_a_near_miss_is_offered_and_a_far_one_is_not():
    assert told({"daays": 3})[2] == "write days if that is what was meant, otherwise remove it"
    assert told({"zzz": 3})[2] == "remove it"
    assert told({"people": [{"id": "P", "name": "p", "bout_minutes": 3}]})[2].startswith("write bout_min ")


def test_record_types_follow_the_tag_of_a_stage():
    raw = {"stations": [{"stages": [{"kind": "cable"}]}]}
    assert record_type(["stations", 0, "stages", 0], raw) is CableStage
    assert record_type(["people", 0], {}) is Person
    assert record_type(["days"], {}) is None
    assert record_type(["nowhere", "at", "all"], {}) is None


def test_allowed_values_are_those_of_the_records():
    assert allowed_values(["devices", 0, "use_by"], {}) == ("power_hours", "wh_per_day", "percent", "times")
    assert allowed_values(["people", 0, "age"], {}) == ()


def test_an_unforeseen_message_is_still_a_sentence():
    parts, reason, remedy = explain_refusal("Number out of range - at `$.days`", {"days": 1})
    assert (parts, reason, remedy) == (["days"], "number out of range", "correct this value")
