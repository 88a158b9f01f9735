"""The rest of a rota made afresh, for the case that holding on to posted turns would leave use unserved.

Begun and locked turns stay; everything after them is found as a first rota is, by bounds, a walk and passes.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Rota
from kitplanner.planners.rota.bounds import bounds, slots_at
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.improve_energy import EnergyPasses
from kitplanner.planners.rota.improve_shape import ShapePasses
from kitplanner.planners.rota.problem import RotaProblem
from kitplanner.planners.rota.replan_now import spared_heat
from kitplanner.planners.rota.replan_posted import Posted, place_posted
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.start import Walk
from kitplanner.planners.rota.value import excess_step_wh


def still_to_find(draft: Draft) -> RotaProblem:
    """Return the problem left beside the turns already in a draft: their energy, minutes and units taken off."""
    problem = draft.problem
    made = np.concatenate(([0.0], np.cumsum(draft.made)))
    cap = np.maximum(problem.cap - draft.day_load, 0)
    units = problem.units.copy()
    for station, busy in enumerate(draft.unit_busy):
        units[station] -= busy.sum(axis=0)
    return replace(
        problem,
        may_turn=problem.may_turn & ~draft.held & ~draft.watching,
        cap=cap,
        allowance=cap.sum(axis=1),
        units=np.maximum(units, 0),
        need=replace(problem.need, supply=problem.need.supply + made, room=problem.need.room - made),
    )


def remade(problem: RotaProblem, rota: Rota, now: Now, search: Search) -> tuple[Posted, Search]:
    """Return the rest of a rota made afresh.

    Parameters
    ----------
    problem : RotaProblem
        The problem from now on, with what has happened.
    rota : Rota
        The adopted rota: its begun and locked bouts stay.
    now : Now
        The moment.
    search : Search
        The search so far; the new one may spend as many steps and takes what is left of its time.

    Returns
    -------
    Posted, Search
        The draft with what became of the adopted bouts, and the search that made it.
    """
    tried = _walked(problem, rota, now)
    searches = [_search(posted, search) for posted in tried]
    place = 0 if searches[0].value <= searches[1].value else 1
    again = searches[place]
    improver = EnergyPasses(again, float(again.draft.relative_load().max(initial=0.0)))
    # Evening out whole weeks takes long and is for the rota of a new day; here people wait at the board.
    for stage in (improver.fill, improver.trim, ShapePasses(again).join):
        again.run(stage)
    return tried[place], again


def _walked(problem: RotaProblem, rota: Rota, now: Now) -> tuple[Posted, Posted]:
    """Return two walks beside what stands: one that leaves units idle for the changeover, one that does not."""
    packed, spaced = (place_posted(problem, rota, now, locked_only=True) for _ in range(2))
    for posted in (packed, spaced):
        posted.draft.problem = spared_heat(posted.draft.problem, now)
    left = still_to_find(packed.draft)
    limits = bounds(left)
    budget = packed.draft.load + slots_at(left, limits.greatest_load)
    # The walk counts all that has been started and shares of the whole horizon, what stands already included.
    part = left.allowance / np.maximum(problem.allowance, 1)
    target = limits.target_wh + packed.draft.total_wh()
    coarse = replace(limits, target_wh=target, share=limits.share * part[:, None])
    for posted in (packed, spaced):
        Walk(posted.draft, coarse, budget, spaced=posted is spaced).run(int(left.bout.max(initial=1)))
        posted.draft.forget()
    return packed, spaced


def _search(posted: Posted, before: Search) -> Search:
    return Search(
        posted.draft,
        excess_step_wh(posted.draft.problem),
        before.work,
        before.seconds,
        before.cancelled,
        before.progress,
        lambda draft: len(posted.lost) + len(draft.bouts) - len(posted.kept),
        began=before.began,
    )
