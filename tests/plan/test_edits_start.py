"""Five answers make a plan that calculates; what they do not say is marked."""

import datetime as dt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.catalogue import PLAN_KINDS
from kitplanner.plan.catalogue_kinds import kinds
from kitplanner.plan.checks import check
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_start import (
    AGE_BANDS,
    Chosen,
    InBand,
    StartAnswers,
    restart_from,
    start_plan,
    suggested_answers,
)
from kitplanner.plan.records import Plan
from kitplanner.planners.balance import balance
from kitplanner.planners.effort import effort

DAY = dt.date(2026, 11, 3)


@pytest.mark.parametrize("kind", PLAN_KINDS)
def test_the_suggested_answers_give_a_plan_that_calculates(kind):
    plan = start_plan(suggested_answers(kind, DAY))
    assert not [one for one in check(plan) if one.severity == "error"]
    assert decode(encode(plan)) == plan
    assert balance(plan).verdict in ("fits", "tight", "short")
    assert effort(plan).rows


def chosen(section):
    keys = [one.key for one in kinds(section)]
    return st.lists(st.builds(Chosen, st.sampled_from(keys), st.integers(1, 50)), max_size=4).map(tuple)


ANSWERS = st.builds(
    StartAnswers,
    kind=st.sampled_from(PLAN_KINDS),
    start=st.just(DAY),
    days=st.integers(1, 366),
    people=st.lists(st.builds(InBand, st.sampled_from(list(AGE_BANDS)), st.integers(0, 40)), max_size=4).map(tuple),
    devices=chosen("devices"),
    stations=chosen("stations"),
    stores=chosen("stores"),
)


@given(ANSWERS)
def test_any_answers_give_a_plan_without_errors_whose_assumptions_are_marked(answers):
    plan = start_plan(answers)
    assert not [one for one in check(plan) if one.severity == "error"]
    assert plan.days == answers.days
    assert len(plan.people) == sum(group.count for group in answers.people)
    assert all(person.notes["age"].mark == "guess" for person in plan.people)
    assert plan.conditions.notes["air_degc"].mark == "guess"
    assert all(block.notes["windows"].mark == "guess" for block in plan.blocks)
    assert all(device.notes for device in plan.devices)
    assert balance(plan) is not None


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"days": 0}, "key days: 0 days cannot be planned; enter a number from 1 to 366."),
        ({"days": 400}, "400 days cannot be planned"),
        ({"kind": "castle"}, "no kind of plan 'castle'"),
        ({"people": (InBand("18_49", 501),)}, "501 is not a number that can be planned"),
        ({"people": (InBand("18_49", -1), InBand("12", 3))}, "fewer than 0 people"),
        ({"people": (InBand("old", 1),)}, "no age group 'old'"),
        ({"devices": (Chosen("hand_crank"),)}, "'hand_crank' is no kind of these"),
        ({"devices": (Chosen("windmill"),)}, "no kind 'windmill'"),
        ({"devices": (Chosen("lamp", 0),)}, "0 is not a number that can be planned"),
    ],
)
def test_answers_that_cannot_be_are_refused_with_remedy(change, words):
    given_answers = {"kind": "household", "start": DAY, "days": 3, **change}
    with pytest.raises(EditError) as refusal:
        start_plan(StartAnswers(**given_answers))
    assert words in str(refusal.value)
    assert "; " in str(refusal.value)


def test_ages_stand_inside_their_bands():
    for band, (_, age) in AGE_BANDS.items():
        numbers = [int(part) for part in band.replace("under_12", "0_11").replace("_up", "_120").split("_")]
        assert numbers[0] <= age <= numbers[-1]


def test_starting_over_is_one_edit():
    edit = restart_from(suggested_answers("bench", DAY))
    assert edit(Plan(title="old")).title == "Bench"
