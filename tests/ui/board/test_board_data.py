"""Rows, looks, shaded hours and broken rules at their places; curves that add up."""

from __future__ import annotations

import numpy as np
import pytest
from msgspec import structs

from kitplanner.plan.edits_rota import move_bout
from kitplanner.plan.records import Bout, Person, Rota, Spell, Station
from kitplanner.planners.rota.result import RotaAnswer, RotaCharge, RotaSolution, StoreLevels
from kitplanner.ui.board.board_data import block_parts, looks_of, rows_of, shut_parts
from kitplanner.ui.board.board_time import curves_of, hours_shown
from tests.ui.board.boards import data_of, small_plan

WORDS = {
    "of": "{used} of {cap}",
    "zero": "0 min",
    "turned": "{used} min",
    "charge": "On charge",
    "given": "{wh} Wh",
}


def rows(data, mode="people", days=(1,)):
    return rows_of(data, mode, days, WORDS)


def test_every_person_has_a_row_with_their_own_minutes():
    texts = {row.name: (row.text, row.note) for row in rows(data_of(small_plan())) if row.kind == "person"}
    assert texts == {
        "Hesmira": ("15 of 40", ""),
        "Quorin": ("20 of 60", ""),
        "Arvik": ("20 of 40", ""),
        "Embrel": ("0 min", "cook"),
    }


def test_minutes_add_up_over_days_and_a_day_off_offers_none():
    plan = small_plan()
    people = (structs.replace(plan.people[1], days_off=(2,)), *plan.people[2:])
    data = data_of(structs.replace(plan, people=(plan.people[0], *people)))
    texts = {row.name: row.text for row in rows(data, days=(1, 2)) if row.kind == "person"}
    assert texts["Hesmira"] == "15 of 80"
    assert texts["Quorin"] == "40 of 60"


def test_station_rows_are_units():
    made = [row for row in rows(data_of(small_plan()), "stations") if row.kind == "unit"]
    assert [(row.name, row.unit, row.text) for row in made] == [
        ("Pedal stand, unit 1", 1, "40 min"),
        ("Pedal stand, unit 2", 2, "0 min"),
        ("Table crank", 1, "15 min"),
    ]
    assert made[0].cap_min == 720


def test_charging_rows_follow_under_their_heading():
    made = [(row.kind, row.name, row.note, row.text) for row in rows(data_of(small_plan()))][4:]
    assert made == [("heading", "On charge", "", ""), ("device", "Radio", "×2", "6 Wh")]


def test_looks_tell_many_stations_apart():
    looks = looks_of(tuple(Station(id=str(n), name="Crank") for n in range(30)))
    assert len({look.code for look in looks.values()}) == 30
    assert all(len(look.code) == 2 for look in looks.values())
    assert len({(look.fill, look.hatch) for look in looks.values()}) == 30


def test_shaded_are_blocks_own_hours_absence_and_closed_stations():
    plan = small_plan()
    away = structs.replace(plan.people[0], absences=(Spell(day=1, start="15:00", end="16:00"),))
    plan = structs.replace(plan, people=(away, *plan.people[1:]))
    data = data_of(plan)
    made = rows(data)
    assert shut_parts(data, made[0], 1) == ((0, 480), (720, 840), (900, 960), (1200, 1440))
    assert shut_parts(data, made[0], 2) == ((0, 480), (720, 840), (1200, 1440))
    assert shut_parts(data, made[3], 1) == ((0, 420), (720, 840), (1260, 1440))
    unit = rows(data, "stations")[0]
    assert shut_parts(data, unit, 1) == ((0, 480), (720, 840), (1200, 1440))


def test_a_block_of_another_group_does_not_shade():
    plan = small_plan()
    blocks = (structs.replace(plan.blocks[1], groups=("g",)),)
    plan = structs.replace(plan, blocks=blocks)
    assert block_parts(plan, "g", 1) == ((720, 840),)
    assert block_parts(plan, None, 1) == ()


def test_hours_hold_every_turn():
    plan = small_plan()
    assert hours_shown(data_of(plan)) == (480, 1200)
    early = move_bout("b1", 1, 365)(plan)
    assert hours_shown(data_of(early)) == (360, 1200)


def test_a_broken_rule_is_named_at_its_turn():
    data = data_of(move_bout("b2", 1, 12 * 60)(small_plan()))
    assert set(data.breaks) == {"b2"}
    bout = next(one for one in data.bouts if one.id == "b2")
    assert "Broken rule: " in data.sentence(bout)
    assert data.breaks["b2"][0] in data.sentence(bout)


def test_a_rule_of_a_whole_day_is_named_at_its_row():
    many = tuple(
        Bout(id=f"x{n}", day=1, start=f"{8 + n:02d}:00", end=f"{8 + n:02d}:20", station="s", person="l1")
        for n in (0, 1, 2, 3)
    )
    data = data_of(small_plan(rota=Rota(id="rota", bouts=many)))
    assert data.row_breaks.get(("l1", 1)) or any("80 min" in t or "cap" in t for t in sum(data.breaks.values(), ()))


def test_a_turn_in_words():
    data = data_of(small_plan())
    texts = {bout.id: data.sentence(bout) for bout in data.bouts}
    assert texts["b2"] == "Arvik, Pedal stand, unit 1, day 1, 10:00 to 10:20, watched by Hesmira"
    assert texts["b3"].endswith("15:00 to 15:15, locked")


def test_names_missing_show_ids():
    plan = small_plan()
    plan = structs.replace(plan, people=(*plan.people[:3], Person(id="c", name="")))
    assert rows(data_of(plan))[3].name == "c"


@pytest.fixture
def answer():
    """Two slots an hour; the store gives 6 Wh from 09:00 to 11:00, 3 Wh come in at 10:00."""
    slots = 48
    level = np.full(slots + 1, 10.0)
    level[19:23] = 10.0 - 1.5 * np.arange(1, 5)
    level[23:] = 4.0
    level[21:] += 3.0
    due = np.where(np.arange(slots + 1) >= 36, 5.0, 0.0)
    levels = StoreLevels(slot_min=30, stores_wh={}, devices_wh={}, pooled_wh=level, due_wh=due)
    solution = RotaSolution(
        slot_min=30, bouts=(), objectives=(), made_wh=0.0, made_bound_wh=0.0, steps=0, seconds=0.0, cut_off=False
    )
    charge = RotaCharge(day=1, start_min=540, end_min=660, device="d", count=1, first_ticket=1, energy_wh=6.0)
    return RotaAnswer(
        solution=solution, charging=(charge,), unmet=(), unmet_wh=0.0, unmet_margin_wh=0.0, levels=levels, violations=()
    )


def test_what_there_is_to_give_is_the_level_with_what_was_given_out(answer):
    curves = curves_of(data_of(small_plan(), answer=answer), (1,))
    have = np.array(curves.have_wh)
    assert have[0] == 10.0
    assert have[20] == pytest.approx(10.0)
    assert have[-1] == pytest.approx(13.0)
    assert curves.due_wh[35] == 0.0
    assert curves.due_wh[36] == 5.0


def test_no_curves_without_an_answer_or_for_days_it_does_not_know(answer):
    data = data_of(small_plan())
    assert curves_of(data, (1,)) is None
    assert curves_of(data_of(small_plan(), answer=answer), (2,)) is None
