"""What matters most in words: names, units, marks, choices and missing answers."""

from __future__ import annotations

from typing import get_args

import pytest
from msgspec import structs

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.balance import balance
from kitplanner.planners.effort import effort
from kitplanner.planners.sensitivity import coverage_sensitivity, joined_people
from kitplanner.planners.sensitivity_minutes import minutes_sensitivity
from kitplanner.planners.sensitivity_records import InputName, Sensitivity, Variation
from kitplanner.report.wording_sensitivity import (
    HEADER,
    answer_words,
    bar_fractions,
    input_words,
    row_sentence,
    sensitivity_sentence,
    share_words,
    table_rows,
    value_words,
)


@pytest.fixture(scope="module")
def household() -> tuple[Plan, Sensitivity]:
    plan = read_plan(demo("household"))
    return plan, coverage_sensitivity(plan)


def test_sentence_names_the_first_three_uncertain_inputs(household: tuple[Plan, Sensitivity]) -> None:
    plan, result = household
    text = sensitivity_sentence(plan, result)
    first = [row for row in result.rows if not row.variation.is_choice][:3]
    assert all(input_words(plan, row.variation) in text for row in first)
    assert text.startswith("The coverage (106 %) depends most on use of")
    assert "margin" not in text


def test_minutes_sentence() -> None:
    plan = read_plan(demo("household"))
    row = effort(plan).rows[0]
    assert "minutes" in sensitivity_sentence(plan, minutes_sensitivity(plan, row))


def test_people_in_one_row_name_nobody() -> None:
    plan = read_plan(demo("shelter"))
    result = joined_people(coverage_sensitivity(plan))
    words = "\n".join(" ".join(cells) for cells in table_rows(plan, result))
    count = len({row.person for row in balance(plan).people})
    assert f"Each of {count} people alone" in words
    assert not any(f"{person.name} " in words for person in plan.people)


@pytest.mark.parametrize("name", DEMOS)
def test_table_twin_has_every_row_and_no_empty_cell(name: str) -> None:
    plan = read_plan(demo(name))
    result = coverage_sensitivity(plan)
    rows = table_rows(plan, result)
    assert len(rows) == len(result.rows)
    assert all(len(cells) == len(HEADER) and all(cells) for cells in rows)
    assert all(row_sentence(plan, result, row).endswith(".") for row in result.rows)


def test_bars_span_the_scale_and_agree_with_the_answers(household: tuple[Plan, Sensitivity]) -> None:
    _, result = household
    bars = bar_fractions(result)
    ends = [end for bar in bars for end in bar]
    assert (min(ends), max(ends)) == (0.0, 1.0)
    lengths = [abs(high - low) for low, high in bars]
    assert lengths == sorted(lengths, reverse=True)


def test_a_choice_has_no_share(household: tuple[Plan, Sensitivity]) -> None:
    _, result = household
    margin = next(row for row in result.rows if row.variation.name == "margin")
    assert share_words(margin) == "a choice"


def test_missing_answers_say_why(household: tuple[Plan, Sensitivity]) -> None:
    _, result = household
    assert answer_words(result, None) == "nothing needed"
    assert answer_words(structs.replace(result, question="minutes"), None) == "no charge"


def test_every_input_has_words() -> None:
    names = get_args(InputName)
    words = {input_words(Plan(), a_variation(name)) for name in names}
    assert len(words) == len(names)


def a_variation(name: InputName) -> Variation:
    return Variation(
        name=name,
        record="x",
        kind="device",
        key="eta",
        central=0.85,
        low=0.8,
        high=0.9,
        unit="%",
        mark="own",
        source="",
    )


def test_values_carry_their_unit() -> None:
    assert value_words(a_variation("device_losses"), 0.8) == "80 %"
    degrees = structs.replace(a_variation("temperature"), kind="conditions", key="air_degc", unit="°C")
    assert value_words(degrees, -3.0).endswith("°C")
    assert value_words(structs.replace(a_variation("people_shared"), unit=""), 0.776) == "0.78 times the estimate"


def test_no_rows_say_so() -> None:
    empty = Sensitivity(question="coverage", answer=None, rows=())
    assert "no answer" in sensitivity_sentence(Plan(), empty)
    assert bar_fractions(empty) == ()
