"""A changed plan tried on a rota: what use could still not be served."""

from __future__ import annotations

from collections.abc import Callable

from kitplanner.plan.records import Plan
from kitplanner.planners.rota.solver import Effort, WalkAndImprove

# Enough to place what the balance says is there, margin included; more only shares it out better.
WORK = 300


def never() -> bool:
    """Return that nobody asked to stop."""
    return False


def rota_unmet_wh(plan: Plan, work: int = WORK, cancelled: Callable[[], bool] = never) -> float:
    """Return the use without margin that a rota of a plan cannot serve, at O.

    Parameters
    ----------
    plan : Plan
        A plan without errors.
    work : int
        Steps of the search.
    cancelled : callable
        Asked between steps.

    Returns
    -------
    float
        Use that stays unmet [Wh].
    """
    solution = WalkAndImprove().solve(plan, Effort(work=work, cancelled=cancelled))
    return next(row.value for row in solution.objectives if row.name == "unmet")
