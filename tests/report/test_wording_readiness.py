"""Readiness lists in words: names, times, cautions, papers that exist."""

from __future__ import annotations

from typing import get_args

import pytest

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Conditions, Device, Plan, Store
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.readiness import recharge_list, warning_list
from kitplanner.planners.readiness_closing import CloseDownTask, Fate, close_down_list, saving_tips
from kitplanner.planners.readiness_lamps import dark_hours
from kitplanner.report.wording_readiness import (
    CHARGE_HEADER,
    CLOSE_HEADER,
    cautions_of_list,
    charge_list_sentence,
    charge_rows,
    close_rows,
    close_sentence,
    dark_sentences,
    fate_words,
    print_sentence,
    task_reason_words,
    tip_sentence,
)


@pytest.mark.parametrize("name", DEMOS)
def test_tables_have_all_their_columns(name: str) -> None:
    plan = read_plan(demo(name))
    for result in (warning_list(plan), recharge_list(plan)):
        rows = charge_rows(plan, result)
        assert len(rows) == len(result.tasks)
        assert all(len(row) == len(CHARGE_HEADER) and all(row) for row in rows)
        assert all(task_reason_words(task) for task in result.tasks)
        assert charge_list_sentence(plan, result).endswith(".")
    tasks = close_down_list(plan)
    assert all(len(row) == len(CLOSE_HEADER) and all(row) for row in close_rows(plan, tasks))


def test_warning_names_the_first_and_the_time() -> None:
    plan = Plan(devices=(Device(id="p", name="Phone", battery_wh=20.0, start_fraction=0.0),))
    text = charge_list_sentence(plan, warning_list(plan))
    assert text == "Charge now Phone first; with 4 sockets all is full after 2 h 25 min."


def test_nothing_to_charge_and_nothing_possible() -> None:
    full = Plan(stores=(Store(id="b", name="Bank"),))
    assert charge_list_sentence(full, warning_list(full)) == "Everything is full; nothing has to be charged."
    frozen = Plan(
        conditions=Conditions(air_degc=-9.0),
        devices=(Device(id="p", name="Phone", battery_wh=9.0, start_fraction=0.1),),
    )
    assert "nothing can be charged now" in charge_list_sentence(frozen, warning_list(frozen)).lower()


def test_only_papers_that_exist_are_named() -> None:
    plan = Plan(days=3, devices=(Device(id="c", name="Laptop", planning_computer=True),))
    assert print_sentence(plan, ["effort", "rota"]) == (
        "Print now, for 3 days: minutes per charge and rota for the wall; do it before Laptop runs empty."
    )
    assert print_sentence(plan, []).startswith("No paper")


def test_cautions_stand_at_their_lists() -> None:
    assert "C3" in [caution.id for caution in cautions_of_list("power_back")]
    assert "C2" in [caution.id for caution in cautions_of_list("close_down")]
    assert "C10" in [caution.id for caution in cautions_of_list("dark")]
    with pytest.raises(KeyError):
        cautions_of_list("nowhere")


def test_dark_hours_in_words() -> None:
    plan = read_plan(demo("household"))
    text = " ".join(dark_sentences(plan, dark_hours(plan)))
    assert "Dark without any lamp while people are up: 07:00 to 07:30, 16:30 to 17:00 and 21:00 to 22:00." in text
    assert dark_sentences(Plan(), dark_hours(Plan()))[0].startswith("The plan states no dark hours")


def test_closing_down_looks_for_damage_first() -> None:
    plan = Plan(stores=(Store(id="b", name="Old bank", health_fraction=0.5),))
    text = close_sentence(plan, close_down_list(plan))
    assert "Old bank" in text
    assert "never in a bin" in text


@pytest.mark.parametrize("fate", get_args(Fate))
def test_every_fate_has_words(fate: Fate) -> None:
    task = CloseDownTask(section="stores", record="b", count=1, fate=fate, charge_fraction=0.75, health_fraction=0.5)
    assert fate_words(task)


def test_tips_name_their_devices() -> None:
    plan = read_plan(demo("shelter"))
    for tip in saving_tips(plan):
        assert tip_sentence(plan, tip).endswith(".")
