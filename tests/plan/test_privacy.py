"""What is stored about a person: every value, every place, and which papers show it."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from hypothesis import HealthCheck, Phase, given, settings
from msgspec import structs

from kitplanner.plan.edits import get_value
from kitplanner.plan.files import read_plan
from kitplanner.plan.privacy import persons_on_paper, stored_about
from kitplanner.plan.records import Bout, ChargingPoint, Device, Note, Person, Plan, Rota, Spell
from kitplanner.plan.shipped import demo
from kitplanner.planners.effort import effort
from kitplanner.planners.rota.result import RotaBout
from kitplanner.report.content import Paper
from kitplanner.report.papers.effort import effort_paper
from kitplanner.report.papers.rota import WallRota, printed_now, rota_paper
from kitplanner.report.twins import plain_text
from tests.strategies import plans


def full_person() -> Person:
    return Person(
        id="p",
        name="Oruun",
        age=41,
        watts_by="own",
        own_legs_w=60.0,
        cap_min=30,
        role="keeps the log",
        absences=(Spell(day=2),),
        notes={"own_legs_w": Note(mark="measured", source="test in May")},
    )


def full_plan() -> Plan:
    return Plan(
        people=(full_person(), Person(id="q", name="Sefwe")),
        devices=(Device(id="D", name="Phone of Oruun"),),
        charging_points=(ChargingPoint(id="C", name="Table", attendant="p"),),
        rota=Rota(
            id="r",
            bouts=(
                Bout(id="b1", day=1, start="08:00", end="08:20", station="S", person="p"),
                Bout(id="b2", day=1, start="09:00", end="09:20", station="S", person="q", watcher="p"),
            ),
        ),
    )


def test_every_place_is_named() -> None:
    items = stored_about(full_plan(), "p")
    found = {(item.role, item.path[-1]) for item in items}
    assert {
        ("value", "name"),
        ("value", "age"),
        ("value", "own_legs_w"),
        ("value", "cap_min"),
        ("value", "role"),
        ("value", "absences"),
        ("note", "own_legs_w"),
        ("turn", "bouts"),
        ("watch", "bouts"),
        ("attendant", "attendant"),
        ("mention", "name"),
    } <= found
    assert not any(item.value in (None, "", ()) for item in items)


def test_nothing_of_others_is_told() -> None:
    items = stored_about(full_plan(), "q")
    assert {item.role for item in items} == {"value", "turn"}
    assert not any("Oruun" in str(item.value) for item in items if item.role == "value")


@given(plans(3))
@settings(
    max_examples=30,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow],
    phases=[Phase.explicit, Phase.reuse, Phase.generate],
)
def test_every_value_that_is_set_is_told(plan: Plan) -> None:
    for person in plan.people:
        items = {item.path: item.value for item in stored_about(plan, person.id)}
        for key in person.__struct_fields__:
            value = getattr(person, key)
            if key not in ("id", "notes") and value not in (None, "", ()):
                assert items[("people", person.id, key)] == value
        for path, value in items.items():
            if path[:2] == ("people", person.id):
                assert get_value(plan, path) == value


def test_papers_that_do_not_exist_are_left_out() -> None:
    name = next(item for item in stored_about(full_plan(), "p", papers=("rota",)) if item.path[-1] == "name")
    assert name.papers == ("rota",)


def test_an_unknown_person_is_refused() -> None:
    with pytest.raises(KeyError):
        stored_about(Plan(), "x")


def marked(plan: Plan) -> Plan:
    """The plan with words in every private field that would be seen on a paper."""
    people = tuple(
        structs.replace(
            one, name=f"Shown{i}", role="HiddenRole", notes={"age": Note(source="HiddenSource")}, age=one.age
        )
        for i, one in enumerate(plan.people)
    )
    return structs.replace(plan, people=people)


def wall(plan: Plan) -> Paper:
    first, second = plan.people[0].id, plan.people[1].id
    bout = RotaBout(
        day=1, start_min=480, end_min=500, station=plan.stations[0].id, unit=1, person=first, watcher=second
    )
    return rota_paper(plan, WallRota(bouts=(bout,)), printed_now("0"))


def effort_sheet(plan: Plan) -> Paper:
    return effort_paper(plan, effort(plan), printed_now("0"))


@pytest.mark.parametrize(("paper", "make"), [("rota", wall), ("effort", effort_sheet)])
def test_papers_show_what_is_told_and_no_more(paper: str, make: Callable[[Plan], Paper]) -> None:
    plan = marked(read_plan(demo("household")))
    text = plain_text(make(plan))
    assert ("Shown0" in text) == bool(persons_on_paper(paper))
    assert "Hidden" not in text
