"""Tiny plans: every aim of the solver's rota equals the best of all rotas, and no bound lies above it."""

from __future__ import annotations

import functools
import importlib.util
from pathlib import Path

import pytest

from kitplanner.planners.rota.bounds import bounds
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.exact import Enumeration, candidates
from kitplanner.planners.rota.problem import build
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from kitplanner.planners.rota.value import excess_step_wh

_SPEC = importlib.util.spec_from_file_location("brute_force", Path(__file__).with_name("brute_force.py"))
brute = importlib.util.module_from_spec(_SPEC)
_SPEC.loader.exec_module(brute)


SEEDS = [*range(24), *(pytest.param(seed, marks=pytest.mark.long) for seed in range(24, 150))]


@functools.cache
def best_score(seed):
    plan = brute.tiny_plan(seed)
    step = excess_step_wh(build(plan))
    return min(brute.score(plan, chosen, step) for chosen in brute.rotas(plan))


def turns_of(plan, bouts):
    row = {person.id: place for place, person in enumerate(plan.people)}
    column = {station.id: place for place, station in enumerate(plan.stations)}
    return tuple(
        brute.Turn(
            (bout.day - 1) * 1440 + bout.start_min,
            (bout.day - 1) * 1440 + bout.end_min,
            row[bout.person],
            column[bout.station],
            bout.unit - 1,
            None if bout.watcher is None else row[bout.watcher],
        )
        for bout in bouts
    )


@pytest.mark.parametrize("seed", SEEDS)
def test_every_aim_equals_the_best_of_all_rotas(seed):
    plan = brute.tiny_plan(seed)
    best = best_score(seed)
    solution = WalkAndImprove().solve(plan, Effort())
    chosen = turns_of(plan, solution.bouts)
    placed = ()
    for turn in sorted(chosen):
        assert brute.fits(plan, placed, turn)
        placed = (*placed, turn)
    found = brute.score(plan, chosen, excess_step_wh(build(plan)))
    for name, one, other in zip(best._fields, found, best, strict=True):
        assert one == pytest.approx(other, abs=1.1 if name in ("unmet", "margin") else 1e-9), name


@pytest.mark.parametrize("seed", SEEDS)
def test_no_bound_lies_above_the_best_rota(seed):
    plan = brute.tiny_plan(seed)
    best = best_score(seed)
    limits = bounds(build(plan))
    assert all(low * 1000 <= value + 1.1 for low, value in zip(limits.unmet_wh, best.unmet, strict=True))
    if all(low * 1000 >= value - 1.1 for low, value in zip(limits.unmet_wh, best.unmet, strict=True)):
        assert limits.margin_wh * 1000 <= best.margin + 1.1
        if limits.margin_wh * 1000 >= best.margin - 1.1:
            assert limits.greatest_load <= best.greatest + 1e-9


def test_a_plan_with_too_many_rotas_is_left_alone():
    plan = brute.tiny_plan(3)
    plan = type(plan)(**{**{key: getattr(plan, key) for key in plan.__struct_fields__}, "grid_min": 5, "days": 3})
    problem = build(plan)
    search = Search(Draft(problem), excess_step_wh(problem), 100)
    assert len(candidates(problem)) > 48
    assert not Enumeration(search).run()
    assert not search.draft.bouts
