"""All checks of a plan in one call, worst first."""

from __future__ import annotations

from kitplanner.plan.checks_fields import check_fields
from kitplanner.plan.checks_people import check_people
from kitplanner.plan.checks_plan import check_plan
from kitplanner.plan.checks_references import check_ids, check_references, check_sizes
from kitplanner.plan.checks_rota import check_grid, check_rota, check_spells
from kitplanner.plan.checks_supply import check_supply
from kitplanner.plan.checks_use import check_use
from kitplanner.plan.problem import Place, Problem, Severity
from kitplanner.plan.records import Plan

__all__ = ["Place", "Problem", "Severity", "check", "has_errors"]

_ORDER = {"error": 0, "warning": 1, "note": 2}


def check(plan: Plan) -> tuple[Problem, ...]:
    """Return every problem of a plan, errors before warnings before notes, each group in file order.

    A plan far too large is reported by that alone, so that the answer comes at once. Judgements that need
    sound values (limits, windows, missing data) are made only where values and references are sound.

    Parameters
    ----------
    plan : the plan as it stands.

    Returns
    -------
    The problems; an empty tuple if there is nothing to say.

    Examples
    --------
    >>> [problem.place for problem in check(Plan(days=0)) if problem.severity == "error"]
    [('days',)]
    """
    too_large = check_sizes(plan)
    if too_large:
        return too_large
    basic = (*check_fields(plan), *check_ids(plan), *check_references(plan))
    if has_errors(basic):
        return basic
    found = (
        *basic,
        *check_plan(plan),
        *check_people(plan),
        *check_supply(plan),
        *check_use(plan),
        *check_spells(plan),
        *check_grid(plan),
        *check_rota(plan),
    )
    return tuple(sorted(found, key=lambda problem: _ORDER[problem.severity]))


def has_errors(problems: tuple[Problem, ...]) -> bool:
    """Tell whether any of the problems stops the calculation."""
    return any(problem.severity == "error" for problem in problems)
