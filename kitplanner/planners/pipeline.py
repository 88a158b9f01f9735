"""All answers of a plan in one frozen record; a stage runs again only when one of its inputs changed.

Records are shared between versions of a plan, so "changed" is a question of identity, not of content.
"""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import CancelledError

from msgspec import Struct
from msgspec.structs import replace

from kitplanner.plan.checks import Problem, check, has_errors
from kitplanner.plan.records import Plan
from kitplanner.planners.balance import balance
from kitplanner.planners.flow import energy_flow
from kitplanner.planners.results import BalanceResult, EffortResult, EnergyFlow
from kitplanner.planners.station_error import StationError

Cancelled = Callable[[], bool]

# What each stage reads; scalars are compared by value, everything else by identity.
BALANCE_INPUTS = (
    "days",
    "margin_fraction",
    "conditions",
    "blocks",
    "people",
    "stations",
    "stores",
    "devices",
    "other_sources",
)
EFFORT_INPUTS = ("margin_fraction", "conditions", "people", "stations", "stores", "devices", "seed")


class Results(Struct, frozen=True, kw_only=True):
    """Answers of one plan; None where problems stop the calculation or a slow stage has not run yet.

    `plan` is the plan of the quick answers, `effort_plan` the one the effort was computed for: effort is up
    to date when its inputs in both are the same (`is_effort_current`).
    """

    plan: Plan
    problems: tuple[Problem, ...]
    balance: BalanceResult | None = None
    flow: EnergyFlow | None = None
    effort: EffortResult | None = None
    effort_plan: Plan | None = None

    @property
    def has_errors(self) -> bool:
        """True if problems stop the calculation."""
        return has_errors(self.problems)

    @property
    def is_effort_current(self) -> bool:
        """True if the effort belongs to the plan as it is now."""
        return self.effort_plan is not None and same_inputs(self.effort_plan, self.plan, EFFORT_INPUTS)


def same_inputs(before: Plan, after: Plan, names: tuple[str, ...]) -> bool:
    """Return True if the named parts of two plans are the same objects (scalars: the same value).

    Examples
    --------
    >>> first = Plan(title="one")
    >>> same_inputs(first, replace(first, title="two"), BALANCE_INPUTS)
    True
    >>> same_inputs(first, replace(first, days=9), BALANCE_INPUTS)
    False
    """
    return all(_same(getattr(before, name), getattr(after, name)) for name in names)


def _same(before: object, after: object) -> bool:
    return before is after or (isinstance(before, (int, float)) and before == after)


def run_quick(plan: Plan, before: Results | None) -> Results:
    """Return checks, balance and energy flow of a plan; the earlier effort stays until the slow run.

    Parameters
    ----------
    plan : Plan
        The plan as it is now
    before : Results or None
        Earlier results, whose answers are kept where nothing they read has changed

    Returns
    -------
    Results
        Answers without the slow ones
    """
    problems = before.problems if before is not None and before.plan is plan else check(plan)
    if has_errors(problems):
        return Results(plan=plan, problems=problems)
    keep = before is not None and before.balance is not None and same_inputs(before.plan, plan, BALANCE_INPUTS)
    if keep and before is not None:
        answers, flow = before.balance, before.flow
    else:
        try:
            answers = balance(plan)
        except StationError as error:
            return Results(plan=plan, problems=(*problems, _unsolvable(error)))
        flow = energy_flow(plan, answers)
    return Results(
        plan=plan,
        problems=problems,
        balance=answers,
        flow=flow,
        effort=before.effort if before is not None else None,
        effort_plan=before.effort_plan if before is not None else None,
    )


def _unsolvable(error: StationError) -> Problem:
    """Return a station whose chain the law refuses as a problem of the plan."""
    text = str(error).rstrip(".")
    return Problem(place=("stations",), severity="error", text=text, remedy="correct the station's parts")


def run_slow(plan: Plan, before: Results | None, cancelled: Cancelled | None = None) -> Results:
    """Return all answers of a plan; a cancelled run gives back the quick ones alone.

    Parameters
    ----------
    plan : Plan
        The plan as it is now
    before : Results or None
        Earlier results, usually those of `run_quick` for the same plan
    cancelled : callable or None
        Asked between steps; True stops the work

    Returns
    -------
    Results
        Quick and slow answers
    """
    quick = run_quick(plan, before)
    if quick.has_errors or quick.is_effort_current or (cancelled is not None and cancelled()):
        return quick
    from kitplanner.planners.effort import effort  # much code, first needed after the window's first picture

    try:
        rows = effort(plan, cancelled=cancelled)
    except CancelledError:
        return quick
    return replace(quick, effort=rows, effort_plan=plan)
