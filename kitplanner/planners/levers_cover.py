"""Coverage of many variants of one plan, each part computed again only where its records changed."""

from __future__ import annotations

from kitplanner.plan.records import Plan
from kitplanner.planners.balance import TIGHT_FROM_FRACTION
from kitplanner.planners.balance_offers import Supply, supply
from kitplanner.planners.demand import device_needs
from kitplanner.planners.supply import store_wh

_ROUNDING = 1e-9
# What decides how much is made; a variant that shares all of these shares its supply.
_SUPPLY_KEYS = ("people", "stations", "stores", "other_sources", "blocks", "groups", "conditions")


class Cover:
    """Coverage of a plan's variants, as the balance finds it."""

    def __init__(self) -> None:
        """Start without any supply known."""
        self._known: dict[tuple[int, ...], tuple[Plan, Supply]] = {}

    def supply(self, plan: Plan) -> Supply:
        """Return what is made, computed once for all variants that share people, stations and stores."""
        key = (plan.days, *(id(getattr(plan, name)) for name in _SUPPLY_KEYS))
        known = self._known.get(key)
        if known is None:
            # The plan is kept beside its supply so that no id is ever used twice.
            known = self._known[key] = (plan, supply(plan))
        return known[1]

    def have_wh(self, plan: Plan) -> float:
        """Return stores and made energy over the horizon, at O [Wh]."""
        stored = sum(store_wh(store, store.start_fraction) for store in plan.stores)
        return stored + sum(self.supply(plan).made_o_wh_by_day)

    def fraction(self, plan: Plan) -> float | None:
        """Return the coverage of a plan, None without need [-]."""
        need = need_wh(plan)
        return self.have_wh(plan) / need if need > _ROUNDING else None


def need_wh(plan: Plan) -> float:
    """Return the need after start credits, with margin, at O [Wh]."""
    return max(0.0, sum(need.use_wh - need.credit_wh for need in device_needs(plan)))


def enough(coverage_fraction: float | None) -> bool:
    """Tell whether a coverage is enough; no need at all is.

    Examples
    --------
    >>> enough(None), enough(1.0), enough(0.99)
    (True, True, False)
    """
    return coverage_fraction is None or coverage_fraction >= TIGHT_FROM_FRACTION - _ROUNDING


def turned_min(made: Supply) -> float:
    """Return the minutes turned by everybody in an average day [min]."""
    return sum(row.used_min for row in made.stations)
