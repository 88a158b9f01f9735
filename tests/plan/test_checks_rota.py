"""Absences, outages and adopted rotas: what no calculation could use is told, and references stay whole."""

from __future__ import annotations

import pytest
from msgspec import structs

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.checks import Problem, check, has_errors
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.edits import add_record, get_value, move_record, new_id, remove_record, set_value
from kitplanner.plan.records import Bout, ChargeSpell, Plan, Rota, Spell

HOUSEHOLD = new_plan("household")
BOUT = Bout(id="b1", day=1, start="10:00", end="10:10", station="A-S1", person="M3", watcher="M2")
SPELL = ChargeSpell(id="c1", day=1, start="10:00", end="12:00", device="A-D1", count=2, energy_wh=8.0)
ADOPTED = structs.replace(
    HOUSEHOLD,
    rota=Rota(
        id="r1",
        name="First",
        bouts=(BOUT, structs.replace(BOUT, id="b2", person="M1", watcher=None)),
        charging=(SPELL, structs.replace(SPELL, id="c2", device="A-D5")),
    ),
)


def with_bout(**more: object) -> Plan:
    return structs.replace(ADOPTED, rota=structs.replace(ADOPTED.rota, bouts=(structs.replace(BOUT, **more),)))


def with_charging(**more: object) -> Plan:
    return structs.replace(ADOPTED, rota=structs.replace(ADOPTED.rota, charging=(structs.replace(SPELL, **more),)))


def at(plan: Plan, *place: str) -> list[Problem]:
    return [problem for problem in check(plan) if problem.place == place]


def test_a_sound_rota_has_nothing_to_say_and_survives_the_file():
    assert check(ADOPTED) == ()
    assert decode(encode(ADOPTED)) == ADOPTED


@pytest.mark.parametrize(("key", "value"), [("person", "M9"), ("station", "A-S9"), ("watcher", "M9")])
def test_bouts_name_records_that_are_there(key, value):
    (problem,) = at(with_bout(**{key: value}), "rota", "bouts", "b1", key)
    assert problem.severity == "error"
    assert problem.text.startswith("there is no '")


def test_charging_names_a_device_that_is_there():
    assert at(with_charging(device="A-D99"), "rota", "charging", "c1", "device")[0].severity == "error"


@pytest.mark.parametrize(
    ("changes", "severity"),
    [
        ({"day": 0}, "error"),
        ({"day": 6}, "note"),
        ({"end": "10:00"}, "error"),
        ({"end": "09:00"}, "error"),
        ({"end": "25:00"}, "error"),
    ],
)
def test_parts_of_a_day_lie_in_the_plan_and_have_a_length(changes, severity):
    assert [one.severity for one in at(with_bout(**changes), "rota", "bouts", "b1")] == [severity]
    assert [one.severity for one in at(with_charging(**changes), "rota", "charging", "c1")] == [severity]
    spell = Spell(**{"day": 1, "start": "10:00", "end": "12:00", **changes})
    away = set_value(("people", "M1", "absences"), (structs.replace(spell, end="12:00"),))(HOUSEHOLD)
    assert not has_errors(check(away)) or changes.get("day") == 0
    absent = structs.replace(HOUSEHOLD.people[0], absences=(spell,))
    plan = structs.replace(HOUSEHOLD, people=(absent, *HOUSEHOLD.people[1:]))
    assert [one.severity for one in at(plan, "people", "M1", "absences")] == [severity]


def test_units_exist():
    assert at(with_bout(unit=2), "rota", "bouts", "b1", "unit")[0].severity == "warning"
    assert at(with_bout(unit=0), "rota", "bouts", "b1", "unit")[0].severity == "warning"
    path = ("stations", "A-S1", "outages")
    for count, severity in ((0, "error"), (1, None), (2, "note")):
        plan = set_value(path, (Spell(day=1, count=count),))(HOUSEHOLD)
        assert [one.severity for one in at(plan, *path)] == ([severity] if severity else [])


def test_nobody_watches_themselves():
    assert at(with_bout(watcher="M3"), "rota", "bouts", "b1", "watcher")[0].severity == "warning"


@pytest.mark.parametrize(
    "changes", [{"count": 0}, {"first_ticket": 0}, {"energy_wh": -1.0}, {"energy_wh": float("nan")}]
)
def test_charging_is_counted_from_one_and_its_energy_is_a_number(changes):
    assert has_errors(check(with_charging(**changes)))


def test_ids_of_bouts_stand_once():
    twice = structs.replace(ADOPTED, rota=structs.replace(ADOPTED.rota, bouts=(BOUT, BOUT)))
    assert at(twice, "rota", "bouts", "b1")[0].text.endswith("have the same id 'b1'")


def test_bouts_are_edited_like_other_records():
    path = ("rota", "bouts", "b1")
    locked = set_value((*path, "locked"), True)(ADOPTED)
    assert get_value(locked, (*path, "locked")) is True
    assert locked.people is ADOPTED.people
    assert locked.rota.bouts[1] is ADOPTED.rota.bouts[1]
    assert new_id(ADOPTED, ("rota", "bouts")) == "b3"
    assert add_record(("rota", "bouts"), structs.replace(BOUT, id="b3"))(ADOPTED).rota.bouts[2].id == "b3"
    assert [one.id for one in move_record(path, 1)(ADOPTED).rota.bouts] == ["b2", "b1"]
    assert [one.id for one in remove_record(path)(ADOPTED).rota.bouts] == ["b2"]
    assert set_value(("rota",), None)(ADOPTED) == HOUSEHOLD
    assert set_value(("rota",), ADOPTED.rota)(HOUSEHOLD) == ADOPTED


def test_what_a_removed_record_leaves_in_the_rota():
    def left(*path: str) -> list[tuple[str, str | None]]:
        plan = remove_record(path)(ADOPTED)
        assert not has_errors(check(plan))
        return [(bout.id, bout.watcher) for bout in plan.rota.bouts]

    assert left("people", "M3") == [("b2", None)]
    assert left("people", "M2") == [("b1", None), ("b2", None)]
    assert left("people", "M4") == [("b1", "M2"), ("b2", None)]
    assert left("stations", "A-S1") == []
    assert [one.id for one in remove_record(("devices", "A-D1"))(ADOPTED).rota.charging] == ["c2"]
    assert remove_record(("people", "M4"))(ADOPTED).rota is ADOPTED.rota
