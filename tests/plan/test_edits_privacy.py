"""Deleting people: nothing of them stays in the plan's bytes, totals do, everybody else is untouched."""

from __future__ import annotations

import json

import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_privacy import delete_all_people, delete_people, names_of, totals_of
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Bout, ChargingPoint, Device, Group, Note, Person, Plan, Rota, Station
from kitplanner.plan.shipped import DEMOS, demo
from tests.strategies import plans

QUICK = settings(
    max_examples=40,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow],
    phases=[Phase.explicit, Phase.reuse, Phase.generate],
)
# Letters no key, choice or id of a plan has in this order.
NAMES = st.text(st.sampled_from("qxzjvQXZJVäßøŽ漢字ðþ"), min_size=5, max_size=9)


def byte_forms(name: str) -> list[bytes]:
    escaped = json.dumps(name)[1:-1]
    return [
        name.encode(),
        name.encode("utf-16-le"),
        name.encode("utf-16-be"),
        escaped.encode(),
        escaped.upper().replace("\\U", "\\u").encode(),
    ]


def with_names(plan: Plan, names: list[str]) -> Plan:
    """The plan with distinctive names, which also stand in texts all over it."""
    people = tuple(
        structs.replace(one, name=name, role=f"friend of {names[0]}", notes={"age": Note(source=f"told by {name}")})
        for one, name in zip(plan.people, names, strict=False)
    )
    devices = tuple(structs.replace(one, name=f"{names[0]}'s phone") for one in plan.devices)
    stations = tuple(structs.replace(one, place=f"beside {names[-1]}") for one in plan.stations)
    return structs.replace(plan, people=people, devices=devices, stations=stations, title=f"Home of {names[0]}")


@given(plans(3), st.lists(NAMES, min_size=3, max_size=3, unique=True))
@QUICK
def test_no_name_is_left_in_the_bytes(plan: Plan, names: list[str]) -> None:
    named = with_names(plan, names)
    data = encode(delete_all_people()(named))
    gone = names[: len(named.people)]
    assert not [name for name in gone for form in byte_forms(name) if form in data]
    assert decode(data).people == ()
    assert not has_errors(check(decode(data)))


@pytest.mark.parametrize("name", DEMOS)
def test_demos_lose_names_and_limits(name: str) -> None:
    plan = read_plan(demo(name))
    data = encode(delete_all_people()(plan))
    text = data.decode()
    assert not any(f'"{person.name}"' in text for person in plan.people)
    for key in ("cap_min", "bout_min", "watts_by", "may_watch"):
        assert key not in text
    assert not has_errors(check(decode(data)))


def small_plan() -> Plan:
    people = (
        Person(id="p1", name="Oruun", group="G"),
        Person(id="p2", name="Sefwe", group="G"),
        Person(id="p3", name="Pimtavi"),
    )
    bouts = (
        Bout(id="b1", day=1, start="08:00", end="08:20", station="S", person="p1", watcher="p2"),
        Bout(id="b2", day=1, start="09:00", end="09:10", station="S", person="p2", watcher="p1"),
    )
    return Plan(
        title="Hut",
        people=people,
        groups=(Group(id="G", name="Leaders"),),
        stations=(Station(id="S", name="Crank"),),
        devices=(Device(id="D", name="Phone of Oruun"), Device(id="E", name="Lamp")),
        charging_points=(ChargingPoint(id="C", name="Table", attendant="p1"),),
        rota=Rota(id="r", bouts=bouts),
    )


def test_totals_stay() -> None:
    plan = small_plan()
    totals = totals_of(plan)
    assert (totals.people, totals.turned, totals.turned_min, totals.by_group) == (3, 2, 30.0, {"G": 2})
    after = delete_all_people("12 Wh made")(plan)
    assert (
        after.notes["title"].source
        == "3 people took part, 2 of them turned 30 min in the rota; persons deleted. 12 Wh made"
    )
    assert after.groups[0].notes["name"].source == "2 people"
    assert (after.rota, after.charging_points[0].attendant) == (None, None)


def test_one_person_goes_everywhere_and_others_stay() -> None:
    plan = small_plan()
    after = delete_people(["p1"])(plan)
    assert [one.name for one in after.people] == ["Sefwe", "Pimtavi"]
    assert after.rota is not None
    assert [(bout.person, bout.watcher) for bout in after.rota.bouts] == [("p2", None)]
    assert after.charging_points[0].attendant is None
    assert after.devices[0].name == "Phone of ***"
    assert after.devices[1] is plan.devices[1]
    assert after.people[0] is plan.people[1]


def test_a_namesake_who_stays_keeps_the_name() -> None:
    plan = Plan(people=(Person(id="a", name="Oruun"), Person(id="b", name="Oruun")))
    assert [one.name for one in delete_people(["a"])(plan).people] == ["Oruun"]


def test_deleting_nobody_changes_nothing() -> None:
    plan = Plan(title="Hut")
    assert delete_all_people()(plan) is plan
    assert delete_people([])(plan) is plan


def test_an_unknown_person_is_refused() -> None:
    with pytest.raises(EditError, match="no such person"):
        delete_people(["x"])(small_plan())


def test_names_to_search_for() -> None:
    assert names_of(small_plan(), ["p2"]) == ("Sefwe",)
    assert len(names_of(small_plan())) == 3
