"""The rota problem seen from a moment on: the past closed, needs counted from what the stores really hold."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from msgspec import structs

from kitplanner.domain.heat import volunteer_rule
from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Plan, Rota
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.need import NeedCurves
from kitplanner.planners.rota.problem import RotaProblem, build
from kitplanner.planners.supply import store_wh


def grid_of(rota: Rota) -> int:
    """Return the grid on which every bout of a rota stands: its own, finer where bouts were moved by hand [min].

    Examples
    --------
    >>> from kitplanner.plan.records import Bout
    >>> moved = Bout(id="b", day=1, start="09:02", end="09:22", station="s", person="p")
    >>> grid_of(Rota(id="r", slot_min=10, bouts=(moved,)))
    2
    """
    edges = (int(minutes_of_day(edge)) for bout in rota.bouts for edge in (bout.start, bout.end))
    return math.gcd(rota.slot_min, DAY_MIN, *edges)


def now_slot(now: Now, slot_min: int) -> int:
    """Return the first slot that has not begun before now."""
    return ((now.day - 1) * DAY_MIN + now.minute + slot_min - 1) // slot_min


def problem_from(plan: Plan, now: Now, slot_min: int) -> RotaProblem:
    """Return the problem of a plan in which nobody turns or watches any more before now.

    Parameters
    ----------
    plan : Plan
        The plan with what has happened entered.
    now : Now
        The moment, and the stores' states of charge where they were read.
    slot_min : int
        The rota's grid [min].

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
    return replace(problem, may_turn=may_turn, may_watch=may_watch)


def spared_heat(problem: RotaProblem, now: Now) -> RotaProblem:
    """Return the problem without new turns today where it is so hot that only what is posted and essential goes on."""
    if now.air_degc is None or volunteer_rule(now.air_degc).on_min > 0:
        return problem
    may_turn = problem.may_turn.copy()
    may_turn[:, now_slot(now, problem.slot_min) : now.day * problem.per_day] = False
    return replace(problem, may_turn=may_turn)


def need_from(plan: Plan, need: NeedCurves, now: Now, first: int, made_before_wh: float) -> NeedCurves:
    """Return the needs from now on, counted against what the stores hold now.

    supply(t) = level now + other sources since - made before; due(t) = due(t) - due(now)

    A store that was not read counts as planned: what came in less what was due by now, within empty and full.

    Parameters
    ----------
    plan : Plan
        The plan.
    need : NeedCurves
        Needs of the whole horizon.
    now : Now
        The states of charge that were read; without any the needs stay as they are.
    first : int
        First slot that has not begun before now.
    made_before_wh : float
        Made before now, at O [Wh].

    Returns
    -------
    NeedCurves
        Needs that start at nothing now.
    """
    if not now.store_fractions:
        return need
    at_start = sum(store_wh(store, store.start_fraction) for store in plan.stores)
    full = sum(store_wh(store, 1.0) for store in plan.stores)
    planned = float(need.supply[first]) + made_before_wh - float(need.plain[-1][first])
    share = min(1.0, max(0.0, planned / full)) if full > 0.0 else 0.0
    level = sum(
        store_wh(store, now.store_fractions[store.id])
        if store.id in now.store_fractions
        else share * store_wh(store, 1.0)
        for store in plan.stores
    )
    later = np.arange(len(need.supply)) >= first
    other = need.supply - at_start
    supply = np.where(later, level + other - other[first] - made_before_wh, need.supply)
    return replace(
        need,
        plain=np.where(later, need.plain - need.plain[:, first : first + 1], 0.0),
        with_margin=np.where(later, need.with_margin - need.with_margin[first], 0.0),
        supply=supply,
    )
