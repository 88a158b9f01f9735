"""Two plans compared in words: labels, units, names, defaults, one sentence."""

from __future__ import annotations

from hypothesis import HealthCheck, Phase, given, settings
from msgspec import structs

from kitplanner.plan.edits import chain, remove_record, set_value
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan, Spell
from kitplanner.plan.shipped import demo
from kitplanner.planners.compare import Comparison, compare, differences
from kitplanner.report.wording_compare import (
    ANSWER_HEADER,
    FIELD_HEADER,
    SAME,
    answer_rows,
    comparison_sentence,
    field_rows,
)
from tests.strategies import plans


def rows_of(left: Plan, right: Plan) -> tuple[tuple[str, ...], ...]:
    return field_rows(left, right, compare(left, right))


def test_a_value_with_label_name_and_unit() -> None:
    plan = read_plan(demo("household"))
    changed = set_value(("stores", "A-B1", "start_fraction"), 0.1)(plan)
    rows = rows_of(plan, changed)
    assert ("stores", plan.stores[0].name, "Charge at the start", "100 %", "10 %") in rows


def test_references_are_named_and_defaults_marked() -> None:
    plan = read_plan(demo("household"))
    edit = chain(set_value(("people", "M1", "stations"), ()), set_value(("people", "M1", "age"), None))
    words = {(row[2], row[3], row[4]) for row in rows_of(plan, edit(plan))}
    assert ("Age", "41 years", "40 years (default)") in words
    assert any(row[1:] == (plan.stations[0].name, "all") for row in words), words


def test_absent_records_and_spells() -> None:
    plan = read_plan(demo("household"))
    gone = remove_record(("people", "M4"))(plan)
    assert ("people", "Grenoo", "in the plan", "Grenoo", "not there") in rows_of(plan, gone)
    away = structs.replace(plan, people=(structs.replace(plan.people[0], absences=(Spell(day=2),)), *plan.people[1:]))
    assert ("people", "Oruun", "Absences", "none", "day 2 00:00-24:00") in rows_of(plan, away)


def test_sentence_of_the_forgotten_banks() -> None:
    plan = read_plan(demo("household"))
    changed = set_value(("stores", "A-B1", "start_fraction"), 0.1)(plan)
    text = comparison_sentence(compare(plan, changed))
    assert text.startswith("1 difference in 1 record (stores); coverage 106 % in the first, 26 % in the second")
    assert "first day that ends empty never in the first, day 3 in the second" in text
    assert "minutes for a full phone" in text


def test_equal_plans() -> None:
    plan = read_plan(demo("camp"))
    assert comparison_sentence(compare(plan, plan)) == SAME


def test_answers_of_a_plan_with_errors_are_dashes() -> None:
    broken = structs.replace(read_plan(demo("household")), days=0)
    rows = answer_rows(compare(broken, read_plan(demo("household"))))
    assert {row[1] for row in rows} == {"–"}
    assert all(len(row) == len(ANSWER_HEADER) for row in rows)


@given(plans(2), plans(2))
@settings(
    max_examples=25,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow],
    phases=[Phase.explicit, Phase.reuse, Phase.generate],
)
def test_every_difference_reads_differently_on_both_sides(left: Plan, right: Plan) -> None:
    comparison = Comparison(differences=tuple(differences(left, right)), answers=())
    for one, row in zip(comparison.differences, field_rows(left, right, comparison), strict=True):
        assert len(row) == len(FIELD_HEADER)
        assert row[2]
        if one.kind and isinstance(one.left, (int, float)) and isinstance(one.right, (int, float)):
            assert row[3] != row[4], one
