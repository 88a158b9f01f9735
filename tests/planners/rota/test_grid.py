"""The grid divides the day, and masks never claim a slot that time does not cover."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.records import Person, Plan, Station, Window
from kitplanner.planners.rota.grid import GRID_STEPS_MIN, day_mask, grid_min, touched_mask

PARTS = st.lists(
    st.tuples(st.integers(0, 1439), st.integers(1, 600)).map(lambda p: (p[0], min(1440, p[0] + p[1]))), max_size=3
)


def plan_with(bouts, hours=()):
    people = tuple(Person(id=f"p{i}", name="P", age=30, bout_min=bout) for i, bout in enumerate(bouts))
    return Plan(people=people, stations=(Station(id="s", name="S", output_w=5.0, hours=hours),))


@pytest.mark.parametrize(
    ("bouts", "hours", "expected"),
    [
        ((20,), (), 20),
        ((20, 10), (), 10),
        ((15,), (Window(start="08:00", end="09:00"),), 15),
        ((20,), (Window(start="08:30", end="10:00"),), 10),
        ((7,), (), 5),
        ((), (), 5),
    ],
)
def test_grid_is_the_greatest_step_that_fits(bouts, hours, expected):
    assert grid_min(plan_with(bouts, hours)) == expected


def test_an_own_grid_wins():
    plan = plan_with((20,))
    assert grid_min(type(plan)(people=plan.people, stations=plan.stations, grid_min=30)) == 30


@given(PARTS, st.sampled_from(GRID_STEPS_MIN))
def test_masks_against_minutes(parts, step):
    minutes = np.zeros(1440, dtype=bool)
    for start, end in parts:
        minutes[start:end] = True
    touched = minutes.reshape(-1, step).any(axis=1)
    assert (touched_mask(parts, step) == touched).all()
    inside = day_mask(parts, step)
    # A slot is open only if one part covers it whole; touching parts are merged by the callers.
    assert not (inside & ~minutes.reshape(-1, step).all(axis=1)).any()
    for start, end in parts:
        whole = [slot for slot in range(1440 // step) if start <= slot * step and (slot + 1) * step <= end]
        assert inside[whole].all()
