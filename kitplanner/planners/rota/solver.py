"""From a plan to a rota: bounds, a first legal rota at once, then better ones until work or time is used up."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.records import Plan
from kitplanner.planners.rota.bounds import Bounds, bounds, never
from kitplanner.planners.rota.draft import Draft, Placed
from kitplanner.planners.rota.exact import Enumeration
from kitplanner.planners.rota.improve import improve
from kitplanner.planners.rota.objectives import objectives_of
from kitplanner.planners.rota.problem import RotaProblem, build
from kitplanner.planners.rota.result import RotaBout, RotaProgress, RotaSolution
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.start import first_rota
from kitplanner.planners.rota.value import excess_step_wh, value_of

# Enough for every pass on 60 people and a week; the search ends by itself when nothing is left to improve.
DEFAULT_WORK = 20_000


def _never() -> bool:
    return False


def _silent(_: RotaProgress) -> None:
    return None


@dataclass(frozen=True, slots=True)
class Effort:
    """How much may be spent, and whom to ask and tell: steps, seconds, a stop question, a listener."""

    work: int = DEFAULT_WORK
    seconds: float = float("inf")
    cancelled: Callable[[], bool] = _never
    progress: Callable[[RotaProgress], None] = _silent


class RotaSolver(Protocol):
    """Anything that finds a rota."""

    def solve(self, plan: Plan, effort: Effort) -> RotaSolution:
        """Return the best rota found; legal in every case, empty where nothing can be turned."""
        ...


class WalkAndImprove:
    """The solver: coarse linear rota for bounds and fair shares, a walk for names, passes for the rest."""

    def solve(self, plan: Plan, effort: Effort) -> RotaSolution:
        """Return the best rota found."""
        began = time.monotonic()

        def over() -> bool:
            return effort.cancelled() or time.monotonic() - began > effort.seconds

        def tell(stage: str) -> None:
            seconds = time.monotonic() - began
            effort.progress(RotaProgress(seconds=seconds, steps=0, stage=stage, value=0.0, bound=0.0))

        tell("bounds")
        problem = build(plan)
        limits = bounds(problem, over)
        tell("first_rota")
        locked = locked_bouts(problem, plan)
        draft = best_start(problem, limits, locked, over)
        search = Search(
            draft,
            excess_step_wh(problem),
            effort.work,
            effort.seconds,
            effort.cancelled,
            effort.progress,
            began=began,
            bounds={
                "unmet": float(limits.unmet_wh[-1]) if len(limits.unmet_wh) else 0.0,
                "margin": limits.margin_wh,
                "greatest_load": limits.greatest_load,
            },
        )
        search.cut_off = over()
        if not search.cut_off and not _solved_exactly(problem, search, locked):
            improve(search, limits.greatest_load)
        return solution_of(problem, limits, search, time.monotonic() - began)


def locked_bouts(problem: RotaProblem, plan: Plan) -> tuple[Placed, ...]:
    """Return the locked bouts of the adopted rota as they stand on the grid, widened to whole slots."""
    person = {each: place for place, each in enumerate(problem.people)}
    station = {each: place for place, each in enumerate(problem.stations)}
    found = []
    for bout in plan.rota.bouts if plan.rota is not None else ():
        if not bout.locked or bout.day > problem.days:
            continue
        first = (bout.day - 1) * problem.per_day + int(minutes_of_day(bout.start)) // problem.slot_min
        last = (bout.day - 1) * problem.per_day - (-int(minutes_of_day(bout.end)) // problem.slot_min)
        watcher = -1 if bout.watcher is None else person[bout.watcher]
        found.append(
            Placed(first, last - first, station[bout.station], bout.unit - 1, person[bout.person], watcher, locked=True)
        )
    return tuple(found)


def _with(problem: RotaProblem, locked: tuple[Placed, ...]) -> Draft:
    draft = Draft(problem)
    for bout in locked:
        draft.put(bout)
    draft.forget()
    return draft


def _solved_exactly(problem: RotaProblem, search: Search, locked: tuple[Placed, ...]) -> bool:
    """Put the optimum of a tiny problem into the search; False where there are too many rotas to look at."""
    alone = Search(_with(problem, locked), search.step_wh, search.work, changed=search.changed)
    enumeration = Enumeration(alone)
    if search.work <= 0 or not enumeration.run():
        return False
    search.draft, search.value = alone.draft, alone.value
    search.steps = enumeration.looked_at
    return True


def best_start(
    problem: RotaProblem, limits: Bounds, locked: tuple[Placed, ...] = (), over: Callable[[], bool] = never
) -> Draft:
    """Return the best of a few walks that start energy earlier or later before it is due."""
    longest = int(problem.bout.max(initial=1))
    step = excess_step_wh(problem)
    ways = (False, True) if problem.changeover_min.any() else (False,)
    walks = [
        first_rota(problem, limits, longest, spaced=spaced, fixed=_with(problem, locked), over=over) for spaced in ways
    ]
    return min(walks, key=lambda draft: value_of(draft, step))


def solution_of(problem: RotaProblem, limits: Bounds, search: Search, seconds: float) -> RotaSolution:
    """Return a finished search as frozen records."""
    draft = search.draft
    outlet = problem.outlet_fraction
    made_s = sum(draft.bout_wh(key) / float(outlet[bout.station]) for key, bout in draft.bouts.items())
    return RotaSolution(
        slot_min=problem.slot_min,
        bouts=bouts_of(draft),
        objectives=objectives_of(problem, limits, search),
        made_wh=made_s,
        made_bound_wh=limits.made_wh / float(outlet.max()) if len(outlet) else 0.0,
        steps=search.steps,
        seconds=seconds,
        cut_off=search.cut_off,
    )


def bouts_of(draft: Draft) -> tuple[RotaBout, ...]:
    """Return the bouts of a draft by day, time, station and unit."""
    problem = draft.problem
    rows = []
    for key, bout in draft.bouts.items():
        day, first = divmod(bout.start, problem.per_day)
        rows.append(
            RotaBout(
                day=day + 1,
                start_min=first * problem.slot_min,
                end_min=(first + bout.length) * problem.slot_min,
                station=problem.stations[bout.station],
                unit=bout.unit + 1,
                person=problem.people[bout.person],
                watcher=problem.people[bout.watcher] if bout.watcher >= 0 else None,
                output_wh=draft.bout_wh(key) / float(problem.outlet_fraction[bout.station]),
                locked=bout.locked,
            )
        )
    rows.sort(key=lambda row: (row.day, row.start_min, problem.stations.index(row.station), row.unit))
    return tuple(rows)
