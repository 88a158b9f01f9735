"""Figures of the rota solver on seeded plans of growing size, each against its proven bound.

Two kinds of each plan: plain ones, without minors and changeover, whose bounds are for the very same problem, and
watched ones, whose bounds count watchers and changeover only in sum.
"""

from __future__ import annotations

import math
import resource
import time

from kitplanner.planners.rota.result import RotaObjective, RotaSolution
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from tests.benchmarks.figure import Figure
from tests.benchmarks.rota_instances import SIZES, instance

# Seconds, energy above the bound in per cent, and slots a week above the least greatest load, for plain plans.
FLOORS = {
    "house4": (7.0, None, 2.0),
    "camp24": (15.0, None, 0.0),
    "camp60": (5.0, 1.0, 1.0),
    "shelter200": (6.0, 1.0, 1.0),
    "city500": (30.0, 0.1, 1.0),
}
FIRST_FLOORS = {"camp60": (0.6, 1.0), "city500": (6.0, 6.0)}
ENERGY_AIMS = {"house4": 3.0, "camp60": 0.5, "shelter200": 0.5, "city500": 0.1}
DAYS_A_WEEK = 7.0


def run() -> list[Figure]:
    """Solve every plan once and print seconds and gaps; then growth and memory."""
    figures: list[Figure] = []
    seconds: dict[str, float] = {}
    for name in SIZES:
        for watchers in (False, True):
            label = f"{name}_watched" if watchers else name
            plan = instance(name, watchers=watchers)
            figures.append(_first(name, label, plan.days, watchers=watchers))
            began = time.perf_counter()
            solution = WalkAndImprove().solve(plan, Effort())
            seconds[label] = time.perf_counter() - began
            figures.extend(_gaps(name, label, plan.days, solution, seconds[label], watchers=watchers))
    figures.append(
        Figure(
            name="exponent_people",
            value=_exponent(seconds["camp60"], seconds["shelter200"], 60, 200),
            text="seconds against people, 60 to 200",
        )
    )
    figures.append(_days_exponent())
    memory_mb = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0
    figures.append(Figure(name="memory", value=memory_mb, unit="MB", floor=400.0, aim=200.0))
    return figures


def _first(name: str, label: str, days: int, *, watchers: bool) -> Figure:
    plan = instance(name, watchers=watchers)
    began = time.perf_counter()
    WalkAndImprove().solve(plan, Effort(work=0))
    floor, aim = FIRST_FLOORS.get(name, (None, None))
    return Figure(
        name=f"{label}_first_rota",
        value=time.perf_counter() - began,
        unit="s",
        floor=None if watchers or floor is None else floor,
        aim=aim,
        text=f"bounds and first legal rota, {days} days",
    )


def _gaps(name: str, label: str, days: int, solution: RotaSolution, seconds: float, *, watchers: bool) -> list[Figure]:
    aims = {objective.name: objective for objective in solution.objectives}
    floor_s, floor_percent, floor_slots = (None, None, None) if watchers else FLOORS[name]
    load = aims["greatest_load"]
    return [
        Figure(name=f"{label}_seconds", value=seconds, unit="s", floor=floor_s, text=f"{len(solution.bouts)} bouts"),
        Figure(name=f"{label}_unmet", value=aims["unmet"].gap, unit="Wh", floor=0.01, text="above the bound"),
        Figure(
            name=f"{label}_energy_gap",
            value=100.0 * aims["excess"].gap / max(1e-9, solution.made_bound_wh),
            unit="%",
            floor=floor_percent,
            aim=ENERGY_AIMS.get(name),
        ),
        Figure(
            name=f"{label}_load_gap",
            value=_slots_a_week(load, solution, days),
            unit="slots",
            floor=floor_slots,
            text=f"greatest load {load.value:.4f}, proven least {load.bound:.4f}",
        ),
        Figure(name=f"{label}_spread", value=aims["spread"].value, text="standard deviation of loads"),
    ]


def _slots_a_week(load: RotaObjective, solution: RotaSolution, days: int) -> float:
    """Return how many slots a week the most loaded person with an hour a day is above the proven least."""
    slots = 60.0 / solution.slot_min * days
    return round(load.gap * slots * DAYS_A_WEEK / max(days, DAYS_A_WEEK), 3)


def _exponent(first: float, second: float, small: int, large: int) -> float:
    return math.log(second / first) / math.log(large / small)


def _days_exponent() -> Figure:
    """Solve the 60-person camp over 7 and 14 days."""
    found = []
    for days in (7, 14):
        plan = instance("camp60", watchers=False, days=days)
        began = time.perf_counter()
        WalkAndImprove().solve(plan, Effort())
        found.append(time.perf_counter() - began)
    return Figure(name="exponent_days", value=_exponent(*found, 7, 14), text="seconds against days, 7 to 14")
