"""The pipeline: what changed runs again, what did not is kept as the same object."""

from __future__ import annotations

import doctest

import pytest
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device
from kitplanner.plan.shipped import demo
from kitplanner.planners import pipeline
from kitplanner.planners.balance import balance
from kitplanner.planners.effort import effort
from kitplanner.planners.flow import energy_flow
from kitplanner.planners.pipeline import run_quick, run_slow


@pytest.fixture
def plan():
    return read_plan(demo("household"))


def test_doctests():
    assert doctest.testmod(pipeline).failed == 0


def test_first_run_answers_everything(plan):
    quick = run_quick(plan, None)
    assert quick.plan is plan
    assert not quick.has_errors
    assert quick.balance == balance(plan)
    assert quick.flow == energy_flow(plan, balance(plan))
    assert quick.effort is None
    assert not quick.is_effort_current
    slow = run_slow(plan, quick)
    assert slow.effort == effort(plan)
    assert slow.is_effort_current
    assert slow.balance is quick.balance


def test_unchanged_inputs_keep_the_same_answers(plan):
    first = run_slow(plan, None)
    renamed = replace(plan, title="another title")
    second = run_quick(renamed, first)
    assert second.plan is renamed
    assert second.balance is first.balance
    assert second.flow is first.flow
    assert second.is_effort_current
    assert run_slow(renamed, second).effort is first.effort


def test_changed_inputs_run_again(plan):
    first = run_slow(plan, None)
    fewer = replace(plan, devices=plan.devices[1:])
    second = run_quick(fewer, first)
    assert second.balance == balance(fewer)
    assert second.effort is first.effort
    assert not second.is_effort_current
    third = run_slow(fewer, second)
    assert third.effort == effort(fewer)
    assert third.is_effort_current


def test_horizon_concerns_the_balance_only(plan):
    first = run_slow(plan, None)
    longer = replace(plan, days=8)
    second = run_slow(longer, run_quick(longer, first))
    assert second.balance is not first.balance
    assert second.balance.verdict == "short"
    assert second.effort is first.effort


def test_back_to_an_earlier_plan_needs_no_effort_again(plan):
    first = run_slow(plan, None)
    fewer = replace(plan, devices=plan.devices[1:])
    back = run_quick(plan, run_quick(fewer, first))
    assert back.is_effort_current
    assert back.balance == first.balance


def test_problems_stop_the_calculation(plan):
    first = run_slow(plan, None)
    broken = replace(plan, devices=(Device(id="x", name="x", battery_wh=-1.0),))
    result = run_slow(broken, run_quick(broken, first))
    assert result.has_errors
    assert (result.balance, result.flow, result.effort) == (None, None, None)
    mended = run_slow(plan, run_quick(plan, result))
    assert mended.balance == first.balance
    assert mended.effort == first.effort


def test_cancelled_run_keeps_what_was_there(plan):
    asked = []

    def cancelled():
        asked.append(True)
        return len(asked) > 1

    result = run_slow(plan, None, cancelled)
    assert len(asked) > 1
    assert result.balance is not None
    assert result.effort is None
    assert not result.is_effort_current
