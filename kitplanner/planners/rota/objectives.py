"""The aims of a finished rota with their bounds and gaps, in units people understand."""

from __future__ import annotations

from kitplanner.planners.rota.bounds import Bounds
from kitplanner.planners.rota.problem import RotaProblem
from kitplanner.planners.rota.result import ObjectiveName, RotaObjective
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.value import excess_wh, missed_wh

_PROVED_WH = 0.0015
_PROVED_FRACTION = 1e-6
DAYS_A_WEEK = 7.0


def objectives_of(problem: RotaProblem, limits: Bounds, search: Search) -> tuple[RotaObjective, ...]:
    """Return the aims in order; a bound from the coarse rota leaves out watchers and changeover."""
    draft, value = search.draft, search.value
    unmet, margin = missed_wh(problem, draft.made)
    best_unmet = float(limits.unmet_wh[-1])
    over = max(0.0, excess_wh(draft, float(unmet[-1]) + margin))
    # The least energy is proven for the least missed; a rota that misses more may make less.
    reached = float(unmet[-1]) <= best_unmet + _PROVED_WH and margin <= limits.margin_wh + _PROVED_WH
    needed = max(0.0, draft.total_wh() - over)
    least_over = max(0.0, limits.made_wh - needed) if reached else 0.0
    rows = [
        _energy("unmet", float(unmet[-1]), best_unmet, "use that cannot be served"),
        _energy("margin", margin, limits.margin_wh, "part of the margin that is missing"),
        _energy("excess", over, least_over, "energy made beyond use and margin"),
    ]
    gap = max(0.0, value.greatest_load - limits.greatest_load)
    longest = float(problem.allowance.max(initial=0))
    slots_a_week = gap * longest / max(1.0, problem.days / DAYS_A_WEEK)
    rows.append(
        RotaObjective(
            name="greatest_load",
            value=value.greatest_load,
            unit="fraction",
            bound=limits.greatest_load,
            gap=gap,
            proved=gap <= _PROVED_FRACTION,
            relaxed=True,
            words=f"{slots_a_week:.1f} slots of {problem.slot_min} min a week above the proven least",
        )
    )
    rows.append(_plain("spread", value.spread, "fraction", "how far shares differ, as a standard deviation"))
    rows.append(_plain("unpopular", float(value.unpopular), "slots", "most early, late or hot slots of one person"))
    rows.append(_plain("handovers", float(value.bouts), "bouts", "number of bouts"))
    rows.append(_plain("change", float(value.changed), "bouts", "bouts that differ from the posted rota"))
    return tuple(rows)


def _energy(name: ObjectiveName, value_wh: float, bound_wh: float, words: str) -> RotaObjective:
    gap = max(0.0, value_wh - bound_wh)
    return RotaObjective(
        name=name,
        value=value_wh,
        unit="Wh",
        bound=bound_wh,
        gap=gap,
        proved=gap <= _PROVED_WH,
        relaxed=True,
        words=words,
    )


def _plain(name: ObjectiveName, value: float, unit: str, words: str) -> RotaObjective:
    """Return an aim without a bound of its own beyond nothing at all."""
    return RotaObjective(
        name=name, value=value, unit=unit, bound=0.0, gap=value, proved=value <= 0.0, relaxed=True, words=words
    )
