"""What would make a plan fit: every lever alone, then the mildest combinations, each tried on the balance.

A lever's smallest sufficient value is found by bisection over its steps: more of a lever never lowers the coverage.
"""

from __future__ import annotations

from collections.abc import Callable

from kitplanner.plan.edits_levers import levers_edit
from kitplanner.plan.records import Plan
from kitplanner.planners.balance_cuts import cuts
from kitplanner.planners.demand import device_needs
from kitplanner.planners.levers_cover import Cover, enough
from kitplanner.planners.levers_list import Lever, levers_of
from kitplanner.planners.levers_mix import combinations
from kitplanner.planners.levers_records import LeverRow, LeversResult

__all__ = ["levers", "single"]

UnmetWh = Callable[[Plan], float]


def levers(plan: Plan, unmet_wh: UnmetWh | None = None) -> LeversResult:
    """Return every lever alone and the mildest combinations.

    Parameters
    ----------
    plan : Plan
        A plan without errors.
    unmet_wh : callable, optional
        Use without margin that a rota of a plan cannot serve, at O [Wh]; None leaves the rota out.

    Returns
    -------
    LeversResult
        Singles in the plan's order, combinations in order of cost, cuts by priority.

    Examples
    --------
    >>> from kitplanner.plan.records import Device, Store
    >>> plan = Plan(
    ...     days=4,
    ...     margin_fraction=0.0,
    ...     stores=(Store(id="b", name="bank", nominal_wh=40.0, floor_fraction=0.0, eta_out=1.0),),
    ...     devices=(Device(id="l", name="lamp", use_wh_per_day=15.0, priority=3),),
    ... )
    >>> {row.lever: row.to for row in levers(plan).singles if row.enough}["use:l"]
    10.0
    """
    cover = Cover()
    now = cover.fraction(plan)
    singles = tuple(single(plan, lever, cover) for lever in levers_of(plan, cover))
    fits = enough(now)
    return LeversResult(
        coverage_fraction=now,
        fits=fits,
        singles=singles,
        combinations=() if fits else combinations(plan, cover, unmet_wh),
        cuts=cuts(device_needs(plan), cover.have_wh(plan)),
    )


def single(plan: Plan, lever: Lever, cover: Cover) -> LeverRow:
    """Return one lever at the smallest step that makes the plan fit, at its limit where none does."""

    def fraction(place: int) -> float | None:
        return cover.fraction(levers_edit(lever.changes(lever.steps[place]))(plan))

    last = len(lever.steps) - 1
    at_limit = fraction(last)
    now = cover.fraction(plan)
    if enough(now):
        place, reached = None, now
    elif not enough(at_limit):
        place, reached = last, at_limit
    else:
        place = _first(lambda index: enough(fraction(index)), last)
        reached = fraction(place)
    to = lever.now if place is None else float(lever.steps[place])
    return LeverRow(
        lever=lever.key,
        from_value=lever.now,
        to=to,
        unit=lever.unit,
        enough=enough(reached),
        coverage_fraction=reached,
        limit=float(lever.steps[last]),
        limit_coverage_fraction=at_limit,
        changes=() if place is None else lever.changes(to),
    )


def _first(holds: Callable[[int], bool], last: int) -> int:
    """Return the first index at which something holds, given that it holds at the last and never stops holding."""
    low, high = 0, last
    while low < high:
        middle = (low + high) // 2
        if holds(middle):
            high = middle
        else:
            low = middle + 1
    return low
