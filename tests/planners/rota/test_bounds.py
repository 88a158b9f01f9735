"""Bounds: closed forms on plain plans, the least load on its steps, and never above what a rota reaches."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from kitplanner.plan.records import Device, Person, Plan, Station, Store, Window
from kitplanner.planners.rota.bounds import bounds, load_steps, slots_at
from kitplanner.planners.rota.classes import classes_of, most_turning
from kitplanner.planners.rota.linear import LinearModel
from kitplanner.planners.rota.problem import build

HOURS = (Window(start="08:00", end="12:00"),)


def plan_with(people, use_wh, *, days=1, margin=0.0, **station):
    return Plan(
        days=days,
        grid_min=10,
        margin_fraction=margin,
        people=people,
        stations=(Station(id="s", name="S", output_w=6.0, hours=HOURS, **station),),
        stores=(Store(id="B", name="B", nominal_wh=100.0, start_fraction=0.1, floor_fraction=0.1),),
        devices=(Device(id="L", name="L", use_wh_per_day=use_wh, use_windows=(Window(start="20:00", end="21:00"),)),),
    )


def adults(count, **more):
    return tuple(
        Person(id=f"p{i}", name="P", age=30, watts_by="share", share_arms_fraction=1.0, **more) for i in range(count)
    )


def test_energy_and_least_load_of_equal_people_by_hand():
    # 3 Wh at O through 0.765 are 3.92 Wh at S, 39.2 min at 6 W: 4 slots among 2 people with 6 slots each.
    limits = bounds(build(plan_with(adults(2), 3.0)))
    assert limits.unmet_wh == pytest.approx([0.0])
    assert limits.made_wh == pytest.approx(3.0, abs=1e-4)
    assert limits.greatest_load == pytest.approx(2 / 6)


def test_what_people_cannot_make_is_missed():
    # 60 min at 6 W through 0.765.
    limits = bounds(build(plan_with(adults(1), 10.0)))
    assert limits.unmet_wh == pytest.approx([10.0 - 6.0 * 0.765])
    assert limits.greatest_load == pytest.approx(1.0)


def test_margin_comes_after_use():
    limits = bounds(build(plan_with(adults(1), 4.0, margin=0.5)))
    assert limits.unmet_wh == pytest.approx([0.0])
    assert limits.margin_wh == pytest.approx(6.0 - 6.0 * 0.765)


def test_changeover_and_watchers_count_in_the_bound():
    free = bounds(build(plan_with(adults(20), 40.0)))
    lossy = bounds(build(plan_with(adults(20), 40.0, changeover_min=5)))
    # Four hours of one unit against four hours and a changeover, each bout of 20 min costing 25.
    assert free.unmet_wh == pytest.approx([40.0 - 240 / 60 * 6.0 * 0.765])
    assert lossy.unmet_wh == pytest.approx([40.0 - 245 / 25 * 20 / 60 * 6.0 * 0.765])
    watched = bounds(build(plan_with(adults(2), 9.0, count=2, needs_watcher=True)))
    assert watched.unmet_wh == pytest.approx([max(0.0, 9.0 - 2.0 * 6.0 * 0.765)], abs=1e-6)


def test_a_plan_without_people_misses_all():
    limits = bounds(build(plan_with((), 3.0)))
    assert limits.unmet_wh == pytest.approx([3.0])
    assert limits.made_wh == 0.0


def test_alike_people_are_one_class():
    problem = build(plan_with((*adults(3), Person(id="q", name="Q", age=70)), 3.0))
    assert sorted(len(who) for who in classes_of(problem).members) == [1, 3]


def test_steps_are_whole_slots_of_somebody():
    problem = build(plan_with((*adults(1), *adults(1, cap_min=40)[:0], Person(id="q", name="Q", age=55)), 3.0))
    assert load_steps(problem) == pytest.approx(sorted({k / 6 for k in range(7)} | {k / 4 for k in range(5)}))
    assert slots_at(problem, 0.5).tolist() == [3, 2]


@given(st.integers(0, 60), st.integers(1, 5), st.integers(0, 12))
def test_most_turning_equals_the_best_pattern(window, bout, rest):
    best = np.zeros(window + 1, dtype=int)
    for size in range(1, window + 1):
        lengths = range(1, min(bout, size) + 1)
        turns = [length + best[max(0, size - length - rest)] for length in lengths]
        best[size] = max([best[size - 1], *turns])
    assert most_turning(np.array([window]), bout, rest)[0] == best[window]


@settings(max_examples=40)
@given(st.integers(0, 10_000))
def test_linear_model_agrees_with_scipy(seed):
    rng = np.random.default_rng(seed)
    rows, columns = rng.integers(1, 5), rng.integers(1, 6)
    matrix, right = rng.uniform(-1, 1, (rows, columns)), rng.uniform(0, 2, rows)
    upper, cost = rng.uniform(0, 3, columns), rng.uniform(-1, 1, columns)
    model = LinearModel()
    places = model.add_columns(upper)
    for row, most in zip(matrix, right, strict=True):
        model.add_row(places, row, -1e30, most)
    model.load()
    found = model.minimise(dict(enumerate(cost)))
    other = linprog(cost, matrix, right, bounds=list(zip(np.zeros(columns), upper, strict=True)))
    assert float(cost @ found) == pytest.approx(other.fun, abs=1e-7)


def test_a_program_without_a_point_has_no_answer():
    model = LinearModel()
    places = model.add_columns([1.0])
    model.add_row(places, [1.0], 2.0, 3.0)
    model.load()
    assert model.minimise({0: 1.0}) is None
