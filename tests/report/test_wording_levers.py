"""Levers and combinations in words."""

from __future__ import annotations

import pytest

from kitplanner.plan.files import read_plan
from kitplanner.plan.shipped import demo
from kitplanner.planners.levers import levers
from kitplanner.planners.levers_records import ChangeRow, Combination
from kitplanner.report.wording_levers import (
    change_words,
    combination_sentence,
    lever_name,
    row_sentence,
    verdict_sentence,
)


@pytest.fixture(scope="module")
def shelter():
    return read_plan(demo("shelter"))


@pytest.fixture(scope="module")
def answer(shelter):
    return levers(shelter)


def test_rows_say_from_what_to_what_and_whether_it_is_enough(shelter, answer):
    rows = {row.lever: row for row in answer.singles}
    assert (
        row_sentence(shelter, rows["half:C-D1"])
        == "Resident phone, one top-up a day, half the use: from 6 to 3 Wh a day is not enough alone, 63 % covered."
    )
    assert row_sentence(shelter, rows["source"]).endswith("from 0 to 687 Wh a day is enough, 100 % covered.")
    assert "to 60 min a day, with 3 of Pedal stand, enclosed is not" in row_sentence(
        shelter, rows["minutes+units:C-G5"]
    )
    assert "90 % to 100 % of its charge" in row_sentence(shelter, rows["start:C-B1"])
    assert row_sentence(shelter, rows["days"]) == "Days to get through: from 7 to 1 day is enough, 143 % covered."


def test_every_lever_has_a_name_of_its_own(shelter, answer):
    for row in answer.singles:
        assert ":" not in lever_name(shelter, row.lever)


@pytest.mark.parametrize(
    ("lever", "before", "to", "unit", "words"),
    [
        ("use:C-D8", 2.0, 0.0, "h a day", "Children's tablet off"),
        ("count:C-D2", 8, 4, "units", "4 of 8 Hall light"),
        ("use:C-D1", 6.0, 2.5, "Wh a day", "Resident phone, one top-up a day 2.5 Wh a day instead of 6"),
        ("minutes:C-G5", 40, 60, "min a day", "Adults up to 60 instead of 40 min a day"),
        ("units:C-S1", 2, 3, "units", "3 instead of 2 of Pedal stand, enclosed"),
    ],
)
def test_changes_in_words(shelter, lever, before, to, unit, words):
    assert change_words(shelter, ChangeRow(lever=lever, from_value=before, to=to, unit=unit)) == words


def test_a_combination_tells_what_it_costs_and_what_a_rota_leaves(shelter):
    row = Combination(
        character="cuts_only",
        changes=(ChangeRow(lever="use:C-D8", from_value=2.0, to=0.0, unit="h a day"),),
        coverage_fraction=1.06,
        chance_fraction=None,
        cost=24.0,
        given_up_wh_per_day=24.0,
        more_min_per_day=90.0,
        rota_unmet_wh=12.0,
    )
    assert combination_sentence(shelter, row) == (
        "Without more minutes: with Children's tablet off it fits with 6 % to spare; 24.0 Wh at the device (D) a day "
        "given up and 1 h 30 min more turning a day; a rota of it still leaves 12.0 Wh at the outlet (O) unmet."
    )


def test_verdicts(answer):
    assert verdict_sentence(answer) == "As given 51 % are covered; no cut alone is enough."
    fits = levers(read_plan(demo("camp")))
    assert verdict_sentence(fits) == "It fits already, 103 % covered; nothing has to change."


def test_rows_of_one_device_are_told_apart_and_none_stands_twice(shelter, answer):
    names = [lever_name(shelter, row.lever) for row in answer.singles if row.lever.partition(":")[2] == "C-D8"]
    assert names == ["Children's tablet, less use", "Children's tablet, half the use", "Children's tablet, left out"]
    ends = [row.to for row in answer.singles if row.lever.partition(":")[2] == "C-D8"]
    assert len(set(ends)) == len(ends)
