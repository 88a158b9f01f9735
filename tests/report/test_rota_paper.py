"""The rota on the wall: a day a page, who turns and who watches, and nothing private."""

from __future__ import annotations

import datetime as dt

import pytest
from msgspec.structs import replace

from kitplanner.plan.cautions import CAUTIONS
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Block, Plan, Window
from kitplanner.plan.shipped import demo
from kitplanner.planners.rota.result import RotaBout
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from kitplanner.report.content import Heading, PageBreak, Paper, Paragraph, Table, check_tables
from kitplanner.report.papers.effort import Printed
from kitplanner.report.papers.rota import STOP_TEXT, WATCH_NOTE, WallRota, rota_paper
from kitplanner.report.twins import csv_text, html_text, plain_text

PRINTED = Printed(date=dt.date(2026, 3, 4), version="0.1.0")


def bout(person: str, start_min: int, end_min: int, **more) -> RotaBout:
    fields = {"day": 1, "station": "A-S1", "unit": 1, "output_wh": 2.0} | more
    return RotaBout(person=person, start_min=start_min, end_min=end_min, **fields)


@pytest.fixture(scope="module")
def household() -> Plan:
    return read_plan(demo("household"))


def paper_of(plan: Plan, *bouts: RotaBout, **more) -> Paper:
    return rota_paper(plan, WallRota(bouts=bouts, **more), PRINTED)


def tables(paper: Paper) -> list[Table]:
    return [block for block in paper.blocks if isinstance(block, Table)]


def rows_of(table: Table) -> list[tuple[str, ...]]:
    return [tuple(item.text for item in row) for row in table.rows]


@pytest.mark.parametrize("name", ["household", "camp", "shelter"])
def test_every_demo_gives_a_sound_paper_with_each_bout_once(name: str) -> None:
    plan = read_plan(demo(name))
    bouts = WalkAndImprove().solve(plan, Effort(work=0)).bouts
    paper = paper_of(plan, *bouts)
    check_tables(paper)
    for twin in (plain_text(paper), html_text(paper), csv_text(paper)):
        assert paper.title in twin
    assert sum(isinstance(block, PageBreak) for block in paper.blocks) == plan.days - 1
    assert sum(isinstance(block, Heading) for block in paper.blocks) == plan.days
    shown = [
        item.text
        for table in tables(paper)
        for row in table.rows
        for item in row[1:]
        if item.text not in ("", "–") and not item.text.startswith("(") and not item.shade_fraction
    ]
    assert len(shown) == len(bouts)


def test_rows_are_times_columns_are_stations(household: Plan) -> None:
    paper = paper_of(household, bout("M1", 540, 560), bout("M3", 960, 970, watcher="M2"))
    assert [item.lines for item in tables(paper)[0].header[0]] == [("Time",), ("Table crank, clamped",)]
    assert rows_of(tables(paper)[0]) == [
        ("00:00–07:00", "Quiet hours"),
        ("07:00–08:00", "–"),
        ("08:00–08:30", "Meals"),
        ("08:30–09:00", "–"),
        ("09:00–09:20", "Oruun"),
        ("09:20–12:30", "–"),
        ("12:30–13:00", "Meals"),
        ("13:00–16:00", "–"),
        ("16:00–16:10", "Pimtavi + Sefwe"),
        ("16:10–18:00", "–"),
        ("18:00–18:30", "Meals"),
        ("18:30–22:00", "–"),
        ("22:00–24:00", "Quiet hours"),
    ]
    assert tables(paper)[0].footnotes == (WATCH_NOTE,)


def test_many_bouts_stand_under_whole_hours(household: Plan) -> None:
    bouts = [bout("M1" if n % 2 else "M2", 550 + 10 * n, 560 + 10 * n) for n in range(20)]
    rows = rows_of(tables(paper_of(household, *bouts))[0])
    first = next(place for place, row in enumerate(rows) if row[0] == "09:00–10:00")
    assert rows[first : first + 3] == [
        ("09:00–10:00", "09:10–09:20 Sefwe"),
        ("", "09:20–09:30 Oruun"),
        ("", "09:30–09:40 Sefwe"),
    ]


def test_who_is_still_turning_across_a_row_is_said(household: Plan) -> None:
    many = [bout("M1", 600 + 10 * n, 605 + 10 * n) for n in range(20)]
    rows = rows_of(tables(paper_of(household, bout("M2", 510, 590), *many))[0])
    assert ("09:00–10:00", "(Sefwe to 09:50)") in rows


def test_units_of_a_line_have_columns_of_their_own_and_wide_days_more_tables(household: Plan) -> None:
    wide = replace(household, stations=(replace(household.stations[0], count=8),))
    paper = paper_of(wide, *(bout("M1", 540, 560, unit=unit, watcher="M2") for unit in range(1, 9)))
    assert [table.column_count - 1 for table in tables(paper)] == [5, 3]
    assert [item.lines[-1] for item in tables(paper)[1].header[0][1:]] == ["unit 6", "unit 7", "unit 8"]
    assert rows_of(tables(paper)[0])[4][1] == "Oruun; Sefwe watches"


def test_no_private_word_stands_on_the_wall(household: Plan) -> None:
    private = [replace(one, name=f"{one.name} Surname", cap_min=33, role="ill") for one in household.people]
    text = plain_text(paper_of(replace(household, people=tuple(private)), bout("M3", 960, 970, watcher="M2")))
    assert "Pimtavi + Sefwe Surname" in text
    assert "Pimtavi Surname" not in text, "the surname of a minor"
    for word in ("33", " 14", "72", "ill;", "W ", "%"):
        assert word not in text, word


def test_people_who_read_alike_or_have_no_name_get_numbers(household: Plan) -> None:
    alike = [replace(one, name=name) for one, name in zip(household.people, ("Ann", "ann", "Bo", ""), strict=True)]
    plan = replace(household, people=tuple(alike))
    bouts = [bout(key, 540 + 30 * n, 560 + 30 * n) for n, key in enumerate(("M1", "M2", "M3", "M4"))]
    text = plain_text(paper_of(plan, *bouts))
    for name in ("Ann (no. 1)", "ann (no. 2)", "Bo\n", "no. 4\n"):
        assert name in text


def test_each_page_has_stop_rule_and_cautions(household: Plan) -> None:
    paper = paper_of(household, bout("M1", 540, 560))
    cautions = [block for block in paper.blocks if isinstance(block, Paragraph) and block.style == "caution"]
    assert [block.label for block in cautions] == ["C5", "C6", "C12"] * household.days
    assert cautions[0].text == STOP_TEXT
    assert cautions[2].text == CAUTIONS["C12"].text
    camp = read_plan(demo("camp"))
    assert "C7: Hot or close air" in plain_text(paper_of(camp))


def test_the_stop_line_names_every_sign_of_the_caution() -> None:
    for sign in ("chest", "dizz", "sick", "heartbeat", "breathless", "arm", "jaw", "joint"):
        assert sign in CAUTIONS["C5"].text
        assert sign in STOP_TEXT


def test_version_and_validity(household: Plan) -> None:
    one = bout("M1", 540, 560)
    assert paper_of(household, one).subtitle.endswith("proposal, not adopted")
    assert paper_of(household, one, edition=2).subtitle.endswith("version 2, draft")
    posted = paper_of(household, one, edition=2, posted=True, valid_until_day=3)
    assert posted.subtitle == "Quillaby Row 7 · Flat in Quillaby · version 2"
    assert posted.foot == (
        "Quillaby Row 7 · version 2 · printed 2026-03-04 · valid 2026-11-09 to 2026-11-11 · program 0.1.0"
    )


def test_blocks_of_days_and_groups(household: Plan) -> None:
    school = Block(id="Q9", name="School", kind="school", windows=(Window(start="08:00", end="13:00"),), days=(1,))
    feast = Block(id="Q8", name="Feast", kind="meal", windows=(Window(start="15:00", end="16:00"),), days=(2,))
    paper = paper_of(replace(household, blocks=(*household.blocks, school, feast)), bout("M1", 840, 850))
    notes = [block.text for block in paper.blocks if isinstance(block, Paragraph) and block.style == "note"]
    assert notes == ["Kept free: School (all) 08:00–13:00."]
    assert "Feast" not in plain_text(paper).split("Day 2")[0]


def test_a_bout_that_breaks_a_block_is_not_hidden(household: Plan) -> None:
    rows = rows_of(tables(paper_of(household, bout("M1", 750, 770)))[0])
    assert ("12:30–12:50", "Oruun") in rows
    assert ("12:50–13:00", "Meals") in rows


def test_a_day_without_bouts_says_so(household: Plan) -> None:
    paper = paper_of(household)
    assert not tables(paper)
    assert plain_text(paper).count("Nobody turns on this day.") == household.days
