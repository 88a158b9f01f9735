"""Make a legal rota better, aim by aim: meet what is missed, drop what is too much, share what is left fairly."""

from __future__ import annotations

from kitplanner.planners.rota.improve_energy import EnergyPasses
from kitplanner.planners.rota.improve_loads import LoadPasses
from kitplanner.planners.rota.improve_shape import ShapePasses
from kitplanner.planners.rota.search import Search


def improve(search: Search, least_load: float) -> None:
    """Run all passes in the order of aims; each keeps a change only if it improves the whole order.

    Parameters
    ----------
    search : Search
        The search whose draft is made better.
    least_load : float
        Proven least greatest share of one's own minutes [-].
    """
    energy, loads, shape = EnergyPasses(search, least_load), LoadPasses(search, least_load), ShapePasses(search)
    for aim, stage in (
        ("unmet", energy.fill),
        ("excess", energy.trim),
        ("greatest_load", loads.level),
        ("spread", loads.even),
        ("unpopular", shape.turn_round),
        ("handovers", shape.join),
    ):
        search.begin(aim)
        search.run(stage)
