"""The rota in words and rows."""

from __future__ import annotations

import csv
import io
import math

import numpy as np
import pytest
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan
from kitplanner.plan.shipped import demo
from kitplanner.planners.rota.remarks import RotaRemark
from kitplanner.planners.rota.result import (
    RotaAnswer,
    RotaBout,
    RotaCharge,
    RotaObjective,
    RotaSolution,
    StoreLevels,
    UnmetUse,
    Violation,
)
from kitplanner.report.tables_rota import aim_table, bout_table, bouts_csv, charging_csv, charging_rows
from kitplanner.report.wording_rota import (
    day_words,
    display_names,
    gap_fraction,
    gap_words,
    is_proved,
    remark_sentence,
    unmet_sentences,
    verdict_lines,
    violation_sentence,
)

NONE = np.zeros(1)
LEVELS = StoreLevels(slot_min=5, stores_wh={}, devices_wh={}, pooled_wh=NONE, due_wh=NONE)


def aim(name: str, value: float, bound: float, unit: str = "Wh", words: str = "") -> RotaObjective:
    gap = max(0.0, value - bound)
    return RotaObjective(
        name=name, value=value, unit=unit, bound=bound, gap=gap, proved=gap < 1e-6, relaxed=True, words=words
    )


BOUTS = (
    RotaBout(day=1, start_min=540, end_min=560, station="A-S1", unit=1, person="M1", output_wh=2.0),
    RotaBout(
        day=2,
        start_min=960,
        end_min=970,
        station="A-S1",
        unit=1,
        person="M3",
        watcher="M2",
        output_wh=0.7004,
        locked=True,
    ),
)
CHARGING = (
    RotaCharge(day=1, start_min=600, end_min=720, device="A-D1", count=2, first_ticket=1, energy_wh=8.0),
    RotaCharge(
        day=1, start_min=540, end_min=560, device="A-D3", count=1, first_ticket=3, energy_wh=1.5, at_station=True
    ),
)
LOAD = aim("greatest_load", 0.78, 0.78, "fraction")
OPEN_LOAD = aim("greatest_load", 0.5, 0.45, "fraction", "2.0 slots of 5 min a week above the proven least")


def answer(*aims: RotaObjective, **more) -> RotaAnswer:
    solution = RotaSolution(
        slot_min=5,
        bouts=BOUTS,
        objectives=aims,
        made_wh=more.pop("made_wh", 33.3),
        made_bound_wh=more.pop("made_bound_wh", 33.2),
        steps=9,
        seconds=4.04,
        cut_off=more.pop("cut_off", False),
    )
    fields = {"charging": CHARGING, "unmet": (), "unmet_wh": 0.0, "unmet_margin_wh": 0.0, "violations": ()} | more
    return RotaAnswer(solution=solution, levels=LEVELS, **fields)


@pytest.fixture(scope="module")
def household() -> Plan:
    return read_plan(demo("household"))


def test_verdict_where_all_is_met(household: Plan) -> None:
    assert verdict_lines(household, answer(LOAD)) == (
        "Every need is met and every rule is kept; nobody turns more than 78 % of their own minutes: proven least.",
    )


def test_verdict_with_a_load_that_is_not_proven(household: Plan) -> None:
    (line,) = verdict_lines(household, answer(OPEN_LOAD))
    assert line.endswith("50 % of their own minutes, 2.0 slots of 5 min a week above the proven least.")


def test_verdict_where_margin_or_use_is_missing(household: Plan) -> None:
    (line,) = verdict_lines(household, answer(LOAD, unmet_margin_wh=3.0))
    assert line.startswith(
        "Every need is met, but 3.0 Wh at the outlet (O) of the margin of 20 % are missing; every rule is kept;"
    )
    proven = answer(aim("unmet", 12.0, 12.0), LOAD, unmet_wh=12.0)
    assert verdict_lines(household, proven)[0].startswith(
        "12.0 Wh at the outlet (O) of use cannot be met (proven least); every rule is kept;"
    )
    open_ = answer(aim("unmet", 12.0, 10.0), LOAD, unmet_wh=12.0)
    assert "(no rota can get below 10.0 Wh)" in verdict_lines(household, open_)[0]


def test_verdict_tells_broken_rules_and_a_search_cut_off(household: Plan) -> None:
    broken = Violation(rule="rest", text="Oruun rests 5 min\x1b[2J", day=1, start_min=540, person="M1")
    lines = verdict_lines(household, answer(LOAD, violations=(broken,), cut_off=True))
    assert "every rule is kept" not in lines[0]
    assert lines[1] == "1 rule is broken, see below."
    assert lines[2] == "The search was cut off after 4.0 s; with more time the rota may get better."
    assert violation_sentence(broken) == "Oruun rests 5 min[2J."


def test_an_evening_without_its_guarantee_comes_first(household: Plan) -> None:
    miss = Violation(rule="evening", text="On day 2 no lamp is ready at lights-out, 22:00.", day=2, start_min=1320)
    lines = verdict_lines(household, answer(LOAD, evening=(miss, miss, miss)))
    assert lines[0] == ("Evening guarantee not met: On day 2 no lamp is ready at lights-out, 22:00, and 2 times more.")
    assert lines[1].startswith("Every need is met")


def test_verdict_of_a_saved_rota_without_bounds(household: Plan) -> None:
    assert verdict_lines(household, answer()) == ("Every need is met and every rule is kept.",)


def test_somebody_who_turns_all(household: Plan) -> None:
    assert (
        "somebody turns all of their own minutes: proven least"
        in verdict_lines(household, answer(aim("greatest_load", 1.0, 1.0, "fraction")))[0]
    )


def test_unmet_sentences_name_device_amount_time_and_reason(household: Plan) -> None:
    rows = (
        UnmetUse(device="A-D2", priority=4, day=3, start_min=1080, wh=1.0, why="the stores are empty"),
        UnmetUse(device="A-D2", priority=4, day=2, start_min=1080, wh=2.5, why="the stores are empty"),
        UnmetUse(device="A-D3", priority=1, day=2, start_min=60, wh=0.5, why="no charging at night"),
    )
    lamp, phone = unmet_sentences(household, answer(unmet=rows, unmet_wh=4.0))
    assert lamp == (
        "A-D3 Basic phone, emergency line (priority 1) goes without 0.50 Wh at the outlet (O) on day 2 from 01:00: "
        "no charging at night."
    )
    assert phone == (
        "A-D2 Smartphone, teen, message hour (priority 4) goes without 3.5 Wh at the outlet (O) from day 2 18:00: "
        "the stores are empty."
    )


@pytest.mark.parametrize(
    ("row", "words"),
    [
        (
            aim("excess", 1.3, 0.0),
            "at most 1.3 Wh above the least possible; the bound leaves out watchers and changeover",
        ),
        (aim("excess", 0.0, 0.0), "proven least"),
        (OPEN_LOAD, "2.0 slots of 5 min a week above the proven least"),
        (aim("handovers", 31.0, 0.0, "bouts"), "no bound is known"),
        (replace(aim("handovers", 31.0, 29.0, "bouts"), relaxed=False), "at most 2 bouts above the least possible"),
    ],
)
def test_gaps_in_units_people_understand(row: RotaObjective, words: str) -> None:
    assert gap_words(row) == words


def test_gap_of_the_made_energy() -> None:
    assert gap_fraction(answer(made_wh=33.0, made_bound_wh=30.0).solution) == pytest.approx(0.1)
    # In a shortage the best rota makes more, so being below is a gap as well.
    assert gap_fraction(answer(made_wh=27.0, made_bound_wh=30.0).solution) == pytest.approx(0.1)
    assert gap_fraction(answer(made_bound_wh=math.nan).solution) is None
    assert gap_fraction(answer(made_wh=0.0, made_bound_wh=0.0).solution) == 0.0
    assert gap_fraction(answer(made_wh=1.0, made_bound_wh=0.0).solution) is None


def test_made_energy_is_proven_only_with_all_that_decides_it() -> None:
    met = (aim("unmet", 0, 0), aim("margin", 0, 0))
    assert is_proved(answer(*met, aim("excess", 0.5, 0.5)).solution)
    assert not is_proved(answer(*met, aim("excess", 0.5, 0.0)).solution)
    assert not is_proved(answer().solution)


def test_every_remark_is_one_sentence_with_a_remedy(household: Plan) -> None:
    kinds = RotaRemark.__annotations__["kind"]
    assert kinds == "RemarkKind"
    named = {
        "no_people": "add people",
        "nobody_turns": "change minutes",
        "no_stations": "add a station",
        "stations_shut": "open one",
        "blocked": "free some",
        "no_watcher": "add an adult",
        "one_person": "ask a second person",
        "small_store": "add a store",
    }
    for kind, remedy in named.items():
        text = remark_sentence(household, RotaRemark(kind=kind, people=("M3",), bout_wh=4.0, room_wh=2.0))
        assert remedy in text, kind
        assert text.endswith(".")
        assert text.count(". ") == 0
    many = RotaRemark(kind="no_watcher", people=tuple(one.id for one in household.people) * 2)
    assert "3 more" in remark_sentence(household, many)


def test_days_and_names(household: Plan) -> None:
    assert day_words(household, 1) == "Day 1, Monday 2026-11-09"
    assert display_names(household)["M3"] == "Pimtavi"


def test_bout_rows_show_ids_and_names(household: Plan) -> None:
    table = bout_table(household, BOUTS)
    assert table.rows[1] == (
        "16:00",
        "16:10",
        "A-S1 Table crank, clamped",
        "1",
        "M3 Pimtavi",
        "M2 Sefwe",
        "0.70",
        "locked",
    )
    assert len(table.header) == len(table.sides) == len(table.rows[0])


def test_charging_rows_show_tickets(household: Plan) -> None:
    table = charging_rows(household, CHARGING)
    assert [row[3:] for row in table.rows] == [("2", "1-2", "8.0", ""), ("1", "3", "1.5", "at the station")]
    assert len(table.header) == len(table.sides) == len(table.rows[0])


def test_aim_rows() -> None:
    table = aim_table(answer(LOAD, aim("unpopular", 3, 0, "slots")))
    assert table.rows[0] == ("greatest share of own minutes", "78.0 %", "78.0 %", "proven least")
    assert table.rows[1][1] == "3 slots"


def test_csv_of_bouts(household: Plan) -> None:
    rows = list(csv.DictReader(io.StringIO(bouts_csv(household, BOUTS))))
    assert rows[1] == {
        "day": "2",
        "date": "2026-11-10",
        "start": "16:00",
        "end": "16:10",
        "station": "A-S1",
        "unit": "1",
        "person": "M3",
        "watcher": "M2",
        "output_wh": "0.700",
        "locked": "yes",
    }
    assert "Oruun" not in bouts_csv(household, BOUTS)
    named = list(csv.DictReader(io.StringIO(bouts_csv(household, BOUTS, names=True))))
    assert (named[1]["person_name"], named[1]["watcher_name"]) == ("Pimtavi", "Sefwe")


def test_csv_of_charging(household: Plan) -> None:
    rows = list(csv.DictReader(io.StringIO(charging_csv(household, CHARGING))))
    assert [row["first_ticket"] for row in rows] == ["1", "3"]
    assert rows[1]["at_station"] == "yes"


def test_no_cell_is_a_formula(household: Plan) -> None:
    evil = "=1+1"
    plan = replace(household, people=(replace(household.people[0], id=evil, name=evil), *household.people[1:]))
    bouts = (replace(BOUTS[0], person=evil, station="@x"),)
    cells = [cell for row in csv.reader(io.StringIO(bouts_csv(plan, bouts, names=True))) for cell in row]
    assert "'=1+1" in cells
    assert "'@x" in cells
    assert not any(cell.startswith(("=", "@")) for cell in cells)
