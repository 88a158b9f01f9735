"""What a rota cannot help is said by name."""

from __future__ import annotations

import pytest
from msgspec.structs import replace

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.records import Block, Plan, Window
from kitplanner.planners.rota.remarks import remarks
from kitplanner.planners.rota.solver import Effort, WalkAndImprove


@pytest.fixture(scope="module")
def household() -> Plan:
    return new_plan("household")


def kinds(plan: Plan) -> list[str]:
    return [remark.kind for remark in remarks(plan)]


def everyone(plan: Plan, **changed) -> Plan:
    return replace(plan, people=tuple(replace(one, **changed) for one in plan.people))


def test_a_sound_plan_has_none(household: Plan) -> None:
    assert kinds(household) == []


@pytest.mark.parametrize(
    ("kind", "change"),
    [
        ("no_people", lambda plan: replace(plan, people=())),
        ("no_stations", lambda plan: replace(plan, stations=())),
        ("nobody_turns", lambda plan: everyone(plan, cap_min=0)),
        ("nobody_turns", lambda plan: everyone(plan, days_off=tuple(range(1, plan.days + 1)))),
        (
            "stations_shut",
            lambda plan: replace(plan, stations=tuple(replace(one, in_service=False) for one in plan.stations)),
        ),
        (
            "blocked",
            lambda plan: replace(
                plan,
                blocks=(Block(id="Q1", name="Away", windows=(Window(start="00:00", end="24:00"),)),),
            ),
        ),
        ("blocked", lambda plan: everyone(plan, hours=(Window(start="22:30", end="23:00"),))),
    ],
)
def test_nothing_can_be_turned(household: Plan, kind: str, change) -> None:
    plan = change(household)
    assert kinds(plan) == [kind]
    assert WalkAndImprove().solve(plan, Effort(work=0)).bouts == ()


def test_a_child_without_any_adult_to_watch(household: Plan) -> None:
    child = next(one for one in household.people if one.id == "M3")
    assert kinds(replace(household, people=(child,))) == ["no_watcher", "one_person"]
    adult = replace(household.people[0], cap_min=0)
    assert kinds(replace(household, people=(child, adult))) == ["one_person"]
    asleep = replace(adult, watch_hours=(Window(start="02:00", end="03:00"),))
    assert kinds(replace(household, people=(child, asleep))) == ["no_watcher", "one_person"]


def test_one_adult_alone(household: Plan) -> None:
    (remark,) = remarks(replace(household, people=household.people[:1]))
    assert (remark.kind, remark.people) == ("one_person", ("M1",))


def test_a_station_that_needs_a_watcher_leaves_nobody_alone(household: Plan) -> None:
    watched = tuple(replace(one, needs_watcher=True) for one in household.stations)
    assert kinds(replace(household, stations=watched)) == []
    (remark, _) = remarks(replace(household, stations=watched, people=household.people[:1]))
    assert (remark.kind, remark.people) == ("no_watcher", ("M1",))


def test_stores_smaller_than_a_bout(household: Plan) -> None:
    # 20 min at 6 W make 2 Wh at the station; into the store 0.90 and out of it 0.85 leave 1.53 Wh.
    full = {"count": 1, "nominal_wh": 1.0, "health_fraction": 1.0, "floor_fraction": 0.0}
    tiny = replace(household.stores[0], eta_in=0.90, eta_out=0.85, **full)
    (remark,) = remarks(replace(household, stores=(tiny,)))
    assert remark.kind == "small_store"
    assert remark.bout_wh == pytest.approx(1.53)
    assert remark.room_wh == pytest.approx(0.85)
