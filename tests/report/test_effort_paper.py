"""The effort table on paper: what must stand on it, and what must not."""

from __future__ import annotations

import datetime
import re
from pathlib import Path

import pytest
from msgspec.structs import replace

from kitplanner.plan.cautions import CAUTIONS
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan
from kitplanner.planners.effort import effort
from kitplanner.planners.results import EffortResult
from kitplanner.report.content import Heading, Paper, Paragraph, Table, check_tables
from kitplanner.report.papers.effort import Printed, effort_paper, typical_row
from kitplanner.report.twins import csv_text, html_text, plain_text

DEMOS = Path(__file__).parents[2] / "demo_profiles"
PRINTED = Printed(date=datetime.date(2026, 3, 4), version="0.1.0")


def demo_plan(name: str) -> Plan:
    return read_plan(DEMOS / f"{name}.kitplan")


def paper_of(plan: Plan) -> Paper:
    return effort_paper(plan, effort(plan), PRINTED)


def tables(paper: Paper) -> list[Table]:
    return [block for block in paper.blocks if isinstance(block, Table)]


@pytest.mark.parametrize("name", ["household", "camp", "shelter", "bench"])
def test_every_demo_gives_a_sound_paper(name: str) -> None:
    paper = paper_of(demo_plan(name))
    check_tables(paper)
    assert tables(paper)
    for twin in (plain_text(paper), html_text(paper), csv_text(paper)):
        assert paper.title in twin


def test_devices_stand_against_stations_and_routes() -> None:
    plan = demo_plan("household")
    full = tables(paper_of(plan))[0]
    assert [item.lines for item in full.header[0][1:]] == [
        ("Table crank, clamped", "direct"),
        ("Table crank, clamped", "through a store"),
    ]
    charged = [device for device in plan.devices if device.battery_wh]
    assert [row[0].text.split(" (each")[0] for row in full.rows] == [device.name for device in charged]


def test_a_cell_tells_typical_minutes_range_and_reason() -> None:
    plan = demo_plan("household")
    plan = replace(plan, people=plan.people[:1])
    row = next(row for row in tables(paper_of(plan))[0].rows if row[0].text.startswith("Smartphone, adult"))
    assert row[1].lines[0] == "3 h 20 min (p)"
    assert re.fullmatch(r"2 h \d\d min to [45] h \d\d min", row[1].lines[1])
    assert row[2].lines[0] == "3 h 57 min (p)"


def test_every_mark_is_explained_below_its_table() -> None:
    for name in ("household", "camp", "bench"):
        for table in tables(paper_of(demo_plan(name)))[:3]:
            used = {mark for row in table.rows for cell in row for mark in re.findall(r"\((\w)\)", cell.text)}
            told = {note[1] for note in table.footnotes}
            assert used <= told


def test_no_person_is_named() -> None:
    plan = demo_plan("camp")
    text = plain_text(paper_of(plan))
    for person in plan.people:
        assert person.name not in text


def test_finding_ones_minutes_by_watts() -> None:
    paper = paper_of(demo_plan("household"))
    assert any(isinstance(block, Heading) and block.text == "Find your minutes" for block in paper.blocks)
    table = tables(paper)[-1]
    assert [row[0].text for row in table.rows] == ["6.0 W", "4.2 W", "3.0 W"]
    phone = next(i for i, item in enumerate(table.header[0]) if item.text.startswith("Smartphone, adult"))
    assert [row[phone].text for row in table.rows] == ["3 h 20 min", "4 h 32 min", "6 h 11 min"]


def test_no_table_by_watts_where_watts_change_nothing() -> None:
    titles = [table.title for table in tables(paper_of(demo_plan("camp")))]
    assert "Pedal stand, chain enclosed" not in titles


@pytest.mark.parametrize(
    ("name", "labels"), [("household", ["C5", "C14"]), ("camp", ["C5", "C7", "C14"]), ("bench", ["C5", "C14"])]
)
def test_cautions_stand_on_the_paper_in_full(name: str, labels: list[str]) -> None:
    cautions = [b for b in paper_of(demo_plan(name)).blocks if isinstance(b, Paragraph) and b.style == "caution"]
    assert [block.label for block in cautions] == labels
    assert cautions[-1].text == CAUTIONS["C14"].text


def test_cold_brings_its_caution() -> None:
    plan = demo_plan("household")
    cold = replace(plan, conditions=replace(plan.conditions, air_degc=2.0))
    assert "C9: Below 0" in plain_text(paper_of(cold))


def test_foot_tells_plan_date_validity_and_version() -> None:
    foot = paper_of(demo_plan("household")).foot
    assert foot == "Quillaby Row 7 · printed 2026-03-04 · valid 2026-11-09 to 2026-11-13 · version 0.1.0"


def test_nothing_hangs_on_shade() -> None:
    for table in tables(paper_of(demo_plan("shelter"))):
        assert all(item.shade_fraction == 0.0 for row in (*table.header, *table.rows) for item in row)


def test_what_cannot_be_charged_says_so_with_its_reason() -> None:
    row = tables(paper_of(demo_plan("bench")))[0].rows[0]
    assert row[-1].text == "no (c)"


def test_a_plan_without_any_charge_says_so() -> None:
    paper = effort_paper(Plan(title="Empty"), EffortResult(rows=()), PRINTED)
    assert not tables(paper)
    assert "nobody can charge a device" in plain_text(paper)


def test_typical_is_the_one_in_the_middle() -> None:
    rows = [row for row in effort(demo_plan("household"), device="A-D1").rows if row.charge == "full"]
    direct = [row for row in rows if row.route == "direct"]
    assert typical_row(direct).person == "M3"
    assert typical_row([]) is None


def test_names_cannot_steer_html_or_spreadsheets() -> None:
    plan = demo_plan("household")
    nasty = replace(plan.devices[0], name='=HYPERLINK("x")<img src=x>')
    paper = paper_of(replace(plan, devices=(nasty,)))
    assert "<img" not in html_text(paper)
    assert "\n=HYPERLINK" not in csv_text(paper)
    assert '\n"=HYPERLINK' not in csv_text(paper)
