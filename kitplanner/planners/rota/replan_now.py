"""The rota problem seen from a moment on: the past closed, supply set right by what the stores really hold."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from msgspec import structs

from kitplanner.domain.heat import volunteer_rule
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Plan, Rota
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.answer import rota_bouts
from kitplanner.planners.rota.charging import charging_table
from kitplanner.planners.rota.problem import RotaProblem, build
from kitplanner.planners.supply import store_wh


def now_slot(now: Now, slot_min: int) -> int:
    """Return the first slot that has not begun before now."""
    return ((now.day - 1) * DAY_MIN + now.minute + slot_min - 1) // slot_min


def problem_from(plan: Plan, now: Now, slot_min: int, missing_wh: float = 0.0) -> RotaProblem:
    """Return the problem of a plan in which nobody turns or watches any more before now.

    Parameters
    ----------
    plan : Plan
        The plan with what has happened entered.
    now : Now
        The moment.
    slot_min : int
        The rota's grid [min].
    missing_wh : float
        What the stores hold less than planned, at O [Wh].

    Returns
    -------
    RotaProblem
        The problem; its past can be filled only by entering bouts unasked.
    """
    problem = build(structs.replace(plan, grid_min=slot_min))
    first = now_slot(now, slot_min)
    may_turn, may_watch = problem.may_turn.copy(), problem.may_watch.copy()
    may_turn[:, :first] = False
    may_watch[:, :first] = False
    later = np.arange(problem.slots + 1) >= first
    need = replace(problem.need, supply=problem.need.supply - missing_wh * later)
    return replace(problem, may_turn=may_turn, may_watch=may_watch, need=need)


def spared_heat(problem: RotaProblem, now: Now) -> RotaProblem:
    """Return the problem without new turns today where it is so hot that only what is posted and essential goes on."""
    if now.air_degc is None or volunteer_rule(now.air_degc).on_min > 0:
        return problem
    may_turn = problem.may_turn.copy()
    may_turn[:, now_slot(now, problem.slot_min) : now.day * problem.per_day] = False
    return replace(problem, may_turn=may_turn)


def shortfall_wh(plan: Plan, rota: Rota, now: Now) -> float:
    """Return how much less the stores that were read hold than the adopted rota and its charging would have left there.

    sum over stores read of max(0, planned level - level read), at O; more than planned is a reserve

    Parameters
    ----------
    plan : Plan
        The plan before anything happened.
    rota : Rota
        The adopted rota.
    now : Now
        The moment and the states of charge read.

    Returns
    -------
    float
        Missing energy at O [Wh].
    """
    if not now.store_fractions:
        return 0.0
    levels = charging_table(plan, rota_bouts(plan, rota), rota.slot_min).levels
    slot = ((now.day - 1) * DAY_MIN + now.minute) // levels.slot_min
    return sum(
        max(0.0, float(levels.stores_wh[store.id][slot]) - store_wh(store, now.store_fractions[store.id]))
        for store in plan.stores
        if store.id in now.store_fractions
    )
