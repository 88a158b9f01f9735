"""The one undo command: references to frozen plans, merging, and steps that erase themselves."""

import itertools

from msgspec.structs import replace
from PySide6.QtGui import QUndoStack

from kitplanner.plan.records import Plan
from kitplanner.session.commands import PlanCommand


def push(stack, seen, before, after, key=None):
    stack.push(PlanCommand(before, after, "Change days", seen.append, key))


def test_undo_restores_the_identical_plan(qapp):
    stack, seen, before = QUndoStack(), [], Plan(days=3)
    after = replace(before, days=4)
    push(stack, seen, before, after)
    stack.undo()
    assert seen == [after, before]
    assert seen[-1] is before


def test_steps_of_one_intention_become_one(qapp):
    stack, seen = QUndoStack(), []
    plans = [Plan(days=days) for days in (3, 4, 5, 6)]
    for before, after in itertools.pairwise(plans):
        push(stack, seen, before, after, "days")
    assert stack.count() == 1
    stack.undo()
    assert seen[-1] is plans[0]
    stack.redo()
    assert seen[-1] is plans[-1]


def test_a_step_back_to_the_start_erases_itself(qapp):
    stack, seen, before = QUndoStack(), [], Plan(days=3)
    after = replace(before, days=4)
    push(stack, seen, before, after, "days")
    push(stack, seen, after, replace(after, days=3), "days")
    assert stack.count() == 0


def test_other_intentions_stay_apart(qapp):
    stack, seen, plan = QUndoStack(), [], Plan()
    push(stack, seen, plan, replace(plan, days=4), "days")
    push(stack, seen, replace(plan, days=4), replace(plan, days=4, title="x"), "title")
    push(stack, seen, replace(plan, days=4, title="x"), replace(plan, days=5, title="x"))
    push(stack, seen, replace(plan, days=5, title="x"), replace(plan, days=6, title="x"))
    assert stack.count() == 4
