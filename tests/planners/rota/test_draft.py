"""A draft keeps every hard rule, and every change can be undone without a trace."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kitplanner.plan.records import Person, Plan, Station, Store, Window
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.openings import openings
from kitplanner.planners.rota.problem import build

HOURS = (Window(start="08:00", end="11:00"),)


def person(key, age=30, **more):
    return Person(id=key, name=key, age=age, watts_by="share", share_arms_fraction=1.0, **more)


def problem(**station):
    stations = (Station(id="s", name="S", output_w=6.0, hours=HOURS, **station),)
    people = (person("a"), person("b"), person("m", age=14), person("z", cap_min=0))
    return build(Plan(days=2, grid_min=10, people=people, stations=stations, stores=(Store(id="B", name="B"),)))


FIRST = 48  # 08:00 on a 10 min grid


def test_rest_cap_bout_and_hours_are_kept():
    draft = Draft(problem())
    assert draft.place(0, 0, FIRST, 3) is None  # a bout is at most 20 min
    assert draft.place(0, 0, FIRST - 1, 2) is None  # closed
    assert draft.place(0, 0, FIRST, 2) is not None
    assert draft.place(0, 0, FIRST + 5, 2) is None  # 30 min of 40 min rest
    assert draft.place(0, 0, FIRST + 6, 2) is not None
    assert draft.place(0, 0, FIRST + 12, 2) is not None
    assert draft.day_load[0, 0] == 6
    assert draft.place(0, 0, FIRST + 16, 2) is None  # cap of 60 min and rest


def test_one_place_at_a_time_and_a_watcher_beside_a_minor():
    draft = Draft(problem(count=2))
    key = draft.place(2, 0, FIRST, 1)
    assert key is not None
    watcher = draft.bouts[key].watcher
    assert watcher == 3  # who gives no minutes watches first
    assert not draft.may_turn(2, FIRST, 1)
    second = draft.place(0, 0, FIRST, 2)
    assert second is not None
    assert draft.bouts[second].unit != draft.bouts[key].unit
    assert draft.place(1, 0, FIRST, 2) is None  # no third unit


def test_nobody_left_to_watch_means_no_bout():
    draft = Draft(problem(count=4, needs_watcher=True))
    assert draft.place(0, 0, FIRST, 1) is not None
    assert draft.place(2, 0, FIRST, 1) is not None
    # Two turn, two watch.
    assert draft.place(1, 0, FIRST, 1) is None


def test_changeover_takes_from_the_next_persons_bout_only():
    draft = Draft(problem(changeover_min=5))
    draft.place(0, 0, FIRST, 2)
    key = draft.place(1, 0, FIRST + 2, 2)
    later = draft.place(0, 0, FIRST + 6, 2)
    through = draft.problem.outlet_fraction[0]
    assert draft.bout_wh(key) == pytest.approx(6.0 * 15 / 60 * through)
    assert draft.bout_wh(later) == pytest.approx(6.0 * 20 / 60 * through)
    assert draft.made.sum() == pytest.approx(6.0 * 55 / 60 * through)


def state(draft):
    parts = (draft.turning, draft.held, draft.watching, draft.load, draft.day_load, draft.watched, draft.unpopular)
    units = [*draft.unit_busy, *draft.unit_day]
    return [np.array(part) for part in (*parts, *units)], np.array(draft.made), dict(draft.bouts)


@settings(max_examples=60)
@given(st.data())
def test_rollback_leaves_no_trace_and_openings_are_all_the_places(data):
    draft = Draft(problem(count=2, changeover_min=5))
    for _ in range(data.draw(st.integers(0, 4))):
        draft.place(
            data.draw(st.integers(0, 2)), 0, FIRST + data.draw(st.integers(0, 17)), data.draw(st.integers(1, 2))
        )
    before, made, bouts = state(draft)
    mark = draft.mark()
    for _ in range(data.draw(st.integers(1, 5))):
        if draft.bouts and data.draw(st.booleans()):
            draft.remove(data.draw(st.sampled_from(sorted(draft.bouts))))
        else:
            who, start = data.draw(st.integers(0, 2)), FIRST + data.draw(st.integers(0, 17))
            draft.place(who, 0, start, data.draw(st.integers(1, 2)))
    draft.rollback(mark)
    after, made_after, bouts_after = state(draft)
    assert bouts_after == bouts
    assert all((one == other).all() for one, other in zip(before, after, strict=True))
    assert made_after == pytest.approx(made, abs=1e-12)

    who, length = data.draw(st.integers(0, 1)), data.draw(st.integers(1, 2))
    found = set(openings(draft, who, 0, length, 0).tolist())
    for start in range(FIRST - 2, FIRST + 20):
        free = draft.may_turn(who, start, length) and draft.free_unit(0, start, length, who) is not None
        assert (start in found) == free
