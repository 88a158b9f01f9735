"""Plans to begin with: a new plan of a kind is a copy of the demo of that kind, ready to be changed."""

from __future__ import annotations

from typing import Literal, get_args

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import read_plan
from kitplanner.plan.places import short
from kitplanner.plan.records import Plan
from kitplanner.plan.shipped import demo

PlanKind = Literal["household", "camp", "shelter", "bench"]
PLAN_KINDS: tuple[PlanKind, ...] = get_args(PlanKind)


def new_plan(kind: str) -> Plan:
    """Return a new plan of a kind.

    Raises
    ------
    PlanFileError
        If there is no such kind.

    Examples
    --------
    >>> new_plan("household").days
    5
    """
    if kind not in PLAN_KINDS:
        raise PlanFileError(
            f"Kind {short(kind)}", "there is no such kind of plan", f"use one of {', '.join(PLAN_KINDS)}"
        )
    return read_plan(demo(kind))
