"""The whole solver on the demos: figures of the contract, order of aims, locks, stopping, and the same rota twice."""

from __future__ import annotations

import itertools

import pytest
from msgspec import structs

from kitplanner.plan.codec import decode
from kitplanner.plan.records import Bout, Plan, Rota
from kitplanner.plan.shipped import demo
from kitplanner.planners.rota.solver import Effort, WalkAndImprove

SOLVER = WalkAndImprove()


@pytest.fixture(scope="module")
def plans():
    return {name: decode(demo(name).read_bytes()) for name in ("household", "camp", "shelter")}


def aims_of(solution):
    return {objective.name: objective for objective in solution.objectives}


def test_household_makes_about_33_wh_and_misses_nothing(plans):
    solution = SOLVER.solve(plans["household"], Effort())
    aims = aims_of(solution)
    assert aims["unmet"].value == 0.0
    assert aims["margin"].value == pytest.approx(0.0, abs=2e-3)
    assert solution.made_wh == pytest.approx(33.0, abs=1.0)
    # By hand: (127.3 - 101.9) Wh at the outlet through 0.765.
    assert solution.made_bound_wh == pytest.approx(33.2, abs=0.1)
    assert aims["greatest_load"].proved


def test_camp_and_shelter(plans):
    camp = aims_of(SOLVER.solve(plans["camp"], Effort()))
    assert camp["unmet"].value == 0.0
    assert camp["margin"].value == pytest.approx(0.0, abs=0.2)
    shelter = aims_of(SOLVER.solve(plans["shelter"], Effort()))
    assert shelter["unmet"].value > 0.0
    assert shelter["unmet"].gap < 0.005 * shelter["unmet"].value
    assert all(aim.value >= aim.bound - 2e-3 for aim in shelter.values())


def test_same_plan_and_work_give_the_same_rota(plans):
    first = SOLVER.solve(plans["camp"], Effort(work=150))
    second = SOLVER.solve(plans["camp"], Effort(work=150))
    assert first.bouts == second.bouts
    assert first.steps == second.steps <= 150


def test_more_work_is_never_worse(plans):
    def value(work):
        aims = aims_of(SOLVER.solve(plans["camp"], Effort(work=work)))
        return [round(aims[name].value, 3) for name in ("unmet", "margin")]

    assert value(20_000) <= value(100) <= value(0)


def test_a_locked_bout_stays(plans):
    locked = Bout(id="x", day=2, start="17:00", end="17:20", station="B-S1", person="L4", locked=True)
    plan = structs.replace(plans["camp"], rota=Rota(id="r", bouts=(locked,)))
    solution = SOLVER.solve(plan, Effort())
    (kept,) = [bout for bout in solution.bouts if bout.locked]
    assert (kept.person, kept.day, kept.start_min, kept.end_min, kept.unit) == ("L4", 2, 1020, 1040, 1)
    assert aims_of(solution)["unmet"].value == 0.0


def test_a_stopped_search_says_so_and_is_legal(plans):
    solution = SOLVER.solve(plans["shelter"], Effort(cancelled=lambda: True))
    assert solution.cut_off
    late = SOLVER.solve(plans["shelter"], Effort(seconds=0.0))
    assert late.cut_off


def test_progress_is_told(plans):
    heard = []
    SOLVER.solve(plans["camp"], Effort(progress=heard.append))
    assert heard[0].stage == "bounds"
    assert all(one.seconds <= other.seconds for one, other in itertools.pairwise(heard))


def test_nothing_to_turn_is_an_empty_rota():
    solution = SOLVER.solve(Plan(), Effort())
    assert solution.bouts == ()
    assert solution.made_wh == 0.0
