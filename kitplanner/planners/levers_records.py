"""Frozen records of what would make a plan fit; keys are those of the command line's JSON.

Coverage is the balance's, at the outlet with margin. Cost is energy given up at the device, weighted by priority,
plus minutes turned more.
"""

from __future__ import annotations

from typing import Literal

from msgspec import Struct

from kitplanner.plan.edits_levers import LeverChange
from kitplanner.planners.results import Cuts

Character = Literal["mildest", "cuts_only", "alike", "more_turning", "spares_one", "fewest"]


class LeverRow(Struct, frozen=True, kw_only=True, rename={"from_value": "from"}):
    """One lever alone: the smallest value that makes the plan fit, or its limit where it is not enough alone.

    `limit` is how far the lever may go; `changes` make the plan edit that sets it to `to`.
    """

    lever: str
    from_value: float
    to: float
    unit: str
    enough: bool
    coverage_fraction: float | None
    limit: float
    limit_coverage_fraction: float | None
    changes: tuple[LeverChange, ...]


class ChangeRow(Struct, frozen=True, kw_only=True, rename={"from_value": "from"}):
    """One change of a combination."""

    lever: str
    from_value: float
    to: float
    unit: str


class Combination(Struct, frozen=True, kw_only=True):
    """Several levers together that make the plan fit, the mildest of their character.

    `chance_fraction` is None until days ahead are computed; `rota_unmet_wh` is use without margin that a rota cannot
    serve, at O, None where none was solved.
    """

    character: Character
    changes: tuple[ChangeRow, ...]
    coverage_fraction: float | None
    chance_fraction: float | None
    cost: float
    given_up_wh_per_day: float
    more_min_per_day: float
    rota_unmet_wh: float | None

    def lever_changes(self) -> tuple[LeverChange, ...]:
        """Return the changes as the edit takes them."""
        return tuple(LeverChange(lever=row.lever, to=row.to) for row in self.changes)


class LeversResult(Struct, frozen=True, kw_only=True):
    """Every lever alone, the mildest combinations, and the cuts by priority side by side."""

    coverage_fraction: float | None
    fits: bool
    singles: tuple[LeverRow, ...]
    combinations: tuple[Combination, ...]
    cuts: Cuts
