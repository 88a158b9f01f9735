"""Older files walk up step by step."""

from __future__ import annotations

from kitplanner.plan import migrations
from kitplanner.plan.migrations import migrate
from kitplanner.plan.records import VERSION


def test_steps_run_in_order_and_only_from_the_files_version_on():
    seen = []

    def step(version):
        def lift(raw):
            seen.append(version)
            return {**raw, "trail": [*raw.get("trail", []), version]}

        return lift

    steps = {version: step(version) for version in (1, 2, 3)}
    assert migrate({"version": 2}, steps, 4) == {"version": 4, "trail": [2, 3]}
    assert seen == [2, 3]


def test_a_version_that_only_added_keys_needs_no_step():
    assert migrate({"version": 1, "title": "x"}, {}, 3) == {"version": 3, "title": "x"}


def test_the_raw_plan_given_is_left_unchanged():
    raw = {"version": 1}
    assert migrate(raw, {1: lambda old: {**old, "new": 1}}, 2) == {"version": 2, "new": 1}
    assert raw == {"version": 1}


def test_a_file_of_the_present_version_is_not_touched():
    assert migrate({"version": VERSION, "days": 2}) == {"version": VERSION, "days": 2}


def test_every_step_starts_from_an_older_version():
    assert all(1 <= version < VERSION for version in migrations.STEPS)
