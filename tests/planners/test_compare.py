"""Two plans side by side: against a plain walk over both files, symmetric, empty for equal and reordered plans."""

from __future__ import annotations

import json
from typing import Any

import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.codec import encode
from kitplanner.plan.edits import remove_record, set_value
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Bout, Device, LossStage, Person, Plan, Rota, Spell, Station
from kitplanner.plan.shipped import DEMOS, demo
from kitplanner.planners.balance import balance
from kitplanner.planners.compare import Difference, compare, differences, phone_minutes, rota_load
from tests.strategies import plans

# Whole plans shrink slowly; a failing one is read as it is.
QUICK = settings(
    max_examples=40,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow],
    phases=[Phase.explicit, Phase.reuse, Phase.generate],
)


def flat(raw: Any, path: tuple[str, ...] = ()) -> dict[tuple[str, ...], Any]:
    """Every leaf of a plan file under a path of keys and record ids; lists without ids stay whole."""
    if isinstance(raw, dict):
        found = {(*path, "{}"): True} if not raw and path else {}
        for key, value in raw.items():
            if key not in ("id", "notes"):
                found |= flat(value, (*path, key))
        return found
    if isinstance(raw, list) and raw and all(isinstance(item, dict) and "id" in item for item in raw):
        found = {}
        for item in raw:
            found[(*path, item["id"], "()")] = item.get("kind") if path[-1] == "stages" else True
            found |= flat(item, (*path, item["id"]))
        return found
    return {path: raw}


def paths_by_files(left: Plan, right: Plan) -> set[tuple[str, ...]]:
    """Paths that differ by the two files alone; what stands inside an absent record counts as that record."""
    one, other = flat(json.loads(encode(left))), flat(json.loads(encode(right)))
    differing = {path for path in one.keys() | other.keys() if one.get(path) != other.get(path)}
    gone = {path[:-1] for path in differing if path[-1] == "()"}
    absent = {path for path in gone if not any(path[: len(top)] == top for top in gone if top != path)}
    kept = {path for path in differing if not any(path[: len(top)] == top for top in absent)}
    return kept | absent


def paths_found(found: list[Difference]) -> set[tuple[str, ...]]:
    return {one.path for one in found if one.aspect in ("value", "presence")}


NOT_BY_FILE = ("machine", "gear", "test_load", "rota", "absences", "outages")


def shortened(paths: set[tuple[str, ...]]) -> set[tuple[str, ...]]:
    """Paths up to a nested single record or list of spells, which a file may leave out as a whole."""
    return {next((path[: place + 1] for place, part in enumerate(path) if part in NOT_BY_FILE), path) for path in paths}


@given(plans(2), plans(2))
@QUICK
def test_equals_the_comparison_of_two_files(left: Plan, right: Plan) -> None:
    assert shortened(paths_found(list(differences(left, right)))) == shortened(paths_by_files(left, right))


@given(plans(3))
@QUICK
def test_equal_plans_have_no_difference(plan: Plan) -> None:
    copy = structs.replace(plan, title=plan.title)
    assert list(differences(plan, copy)) == []
    assert list(differences(plan, structs.replace(plan, people=plan.people[::-1], devices=plan.devices[::-1]))) == []


@given(plans(2), plans(2))
@QUICK
def test_symmetric(left: Plan, right: Plan) -> None:
    def mirrored(found: Difference) -> Difference:
        return structs.replace(found, left=found.right, right=found.left)

    there = sorted(map(repr, (mirrored(one) for one in differences(left, right))))
    assert there == sorted(map(repr, differences(right, left)))


@pytest.mark.parametrize("name", DEMOS)
def test_one_edit_is_one_difference(name: str) -> None:
    plan = read_plan(demo(name))
    device = plan.devices[0]
    changed = set_value(("devices", device.id, "count"), device.count + 3)(plan)
    found = [one for one in differences(plan, changed) if one.aspect == "value"]
    assert [(one.record, one.key, one.left, one.right) for one in found] == [
        (device.id, "count", device.count, device.count + 3)
    ]


def test_marks_that_change_are_told_apart_from_values() -> None:
    plan = Plan(devices=(Device(id="D", name="Lamp", use_wh_per_day=2.0),))
    changed = set_value(("devices", "D", "use_wh_per_day"), 3.0)(plan)
    assert [one.aspect for one in differences(plan, changed)] == ["value", "note"]


def test_a_removed_record_is_absent_once() -> None:
    plan = read_plan(demo("camp"))
    gone = plan.people[3].id
    found = list(differences(plan, remove_record(("people", gone))(plan)))
    assert [(one.aspect, one.record, one.right) for one in found] == [("presence", gone, None)]


def test_order_of_stages_is_a_difference() -> None:
    stages = (LossStage(id="a", name="Belt"), LossStage(id="b", name="Lead"))
    left = Plan(stations=(Station(id="S", name="Stand", stages=stages),))
    right = Plan(stations=(Station(id="S", name="Stand", stages=stages[::-1]),))
    assert [(one.aspect, one.left) for one in differences(left, right)] == [("order", ("a", "b"))]


def test_absences_in_another_order_are_the_same() -> None:
    spells = (Spell(day=1), Spell(day=2, start="08:00"))
    left = Plan(people=(Person(id="P", name="Oruun", absences=spells),))
    right = Plan(people=(Person(id="P", name="Oruun", absences=spells[::-1]),))
    assert list(differences(left, right)) == []
    more = Plan(people=(Person(id="P", name="Oruun", absences=spells[:1]),))
    assert [one.key for one in differences(left, more)] == ["absences"]


def test_yes_is_not_one() -> None:
    left = Plan(stations=(Station(id="S", name="Stand", guarded=True),))
    right = Plan(stations=(Station(id="S", name="Stand", guarded=False),))
    assert [one.key for one in differences(left, right)] == ["guarded"]


def test_answers_are_the_plans_own() -> None:
    left, right = read_plan(demo("household")), read_plan(demo("shelter"))
    answers = {pair.name: pair for pair in compare(left, right).answers}
    assert answers["coverage"].left == balance(left).coverage_fraction
    assert answers["short_per_day"].right == balance(right).short_wh_per_day
    assert (answers["first_empty_day"].left, answers["first_empty_day"].right) == (None, 3.0)
    assert answers["phone_minutes"].left == phone_minutes(left)
    assert answers["rota_turned"].left is None


def test_a_plan_with_errors_has_no_answers() -> None:
    broken = Plan(devices=(Device(id="D", name="Lamp", use_by="power_hours"),), days=0)
    assert all(pair.left is None for pair in compare(broken, Plan()).answers)


def test_phone_minutes_are_the_middle_of_those_who_can() -> None:
    plan = Plan(
        people=tuple(
            Person(id=f"P{i}", name="Walker", watts_by="share", share_arms_fraction=share)
            for i, share in enumerate((1.0, 0.5, 0.25))
        ),
        stations=(Station(id="S", name="Crank", output_w=6.0),),
        devices=(Device(id="D", name="Phone", kind="phone", battery_wh=15.4),),
    )
    one = structs.replace(plan, people=plan.people[1:2])
    assert phone_minutes(plan) == pytest.approx(phone_minutes(one))
    assert phone_minutes(Plan()) is None


def test_a_turn_that_moved() -> None:
    turn = Bout(id="b1", day=1, start="08:00", end="08:20", station="S", person="P")
    left = Plan(rota=Rota(id="r", bouts=(turn,)))
    right = Plan(rota=Rota(id="r", bouts=(structs.replace(turn, start="09:00", end="09:20"),)))
    assert [(one.section, one.key, one.left, one.right) for one in differences(left, right)] == [
        ("rota", "start", "08:00", "09:00"),
        ("rota", "end", "08:20", "09:20"),
    ]


@given(st.integers(1, 6))
def test_load_of_an_adopted_rota(turns: int) -> None:
    bouts = tuple(
        Bout(id=f"b{i}", day=1, start=f"{8 + i:02d}:00", end=f"{8 + i:02d}:10", station="S", person="P")
        for i in range(turns)
    )
    rota = Rota(id="r", bouts=bouts)
    plan = Plan(days=2, people=(Person(id="P", name="Oruun", age=40, cap_min=60),), rota=rota)
    assert rota_load(plan, rota) == (pytest.approx(5.0 * turns), pytest.approx(10.0 * turns / 120.0))
