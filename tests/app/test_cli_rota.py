"""Command `rota`: JSON to the key, tables, files, adopting, and bad input in one sentence."""

from __future__ import annotations

import csv
import json
import re
import subprocess
import sys
from pathlib import Path

import icalendar
import pytest
from msgspec.structs import replace

from kitplanner.app import cli, cli_rota
from kitplanner.app.cli import main
from kitplanner.app.cli_rota import _Progress
from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import read_plan, write_plan
from kitplanner.plan.records import Block, Bout, Plan, Rota, Window
from kitplanner.plan.shipped import demo
from kitplanner.planners.rota.result import RotaProgress

ROOT = Path(cli.__file__).parents[2]
HOUSEHOLD = str(demo("household"))
KEYS = {
    "slot_min",
    "days",
    "unmet_wh",
    "unmet_margin_wh",
    "objective",
    "bound",
    "gap_fraction",
    "proved",
    "seconds",
    "cut_off",
    "violations",
}
BOUT_KEYS = {"person", "watcher", "station", "unit", "start", "end", "output_wh"}
CHARGING_KEYS = {"device", "count", "from", "start", "end", "energy_wh"}
OBJECTIVE_KEYS = {"name", "value", "unit", "bound", "gap", "proved"}
AIMS = ["unmet", "margin", "excess", "greatest_load", "spread", "unpopular", "handovers", "change"]
CLOCK = re.compile(r"([01][0-9]|2[0-3]):[0-5][0-9]|24:00")


def answer(capsys, *arguments):
    code = main([str(argument) for argument in arguments])
    shown = capsys.readouterr()
    assert "Traceback" not in shown.out + shown.err
    return code, shown.out, shown.err


def found_by(capsys, *arguments):
    code, out, err = answer(capsys, "rota", *arguments)
    assert (code, err) == (0, "")
    return out


def refused(capsys, *arguments, code=2):
    found, out, err = answer(capsys, "rota", *arguments)
    assert (found, out) == (code, "")
    assert err.strip()
    return err


def saved(tmp_path: Path, plan: Plan, name: str = "plan.kitplan") -> Path:
    path = tmp_path / name
    write_plan(path, plan, backup=False)
    return path


@pytest.mark.parametrize("name", ["household", "camp", "shelter"])
def test_json_has_every_key(capsys, name):
    plan = read_plan(demo(name))
    found = json.loads(found_by(capsys, demo(name), "--work", "200", "--json"))
    assert set(found) >= KEYS
    assert found["violations"] == []
    assert [day["day"] for day in found["days"]] == list(range(1, plan.days + 1))
    assert found["days"][0]["date"] == plan.start.isoformat()
    bouts = [bout for day in found["days"] for bout in day["bouts"]]
    charging = [row for day in found["days"] for row in day["charging"]]
    assert bouts
    assert charging
    people, stations = {one.id for one in plan.people}, {one.id: one for one in plan.stations}
    devices = {one.id: one for one in plan.devices}
    for bout in bouts:
        assert set(bout) >= BOUT_KEYS
        assert {bout["person"], bout["watcher"] or bout["person"]} <= people
        assert 1 <= bout["unit"] <= stations[bout["station"]].count
    for row in charging:
        assert set(row) >= CHARGING_KEYS
        assert 1 <= row["count"] <= devices[row["device"]].count
    for row in (*bouts, *charging):
        assert CLOCK.fullmatch(row["start"])
        assert CLOCK.fullmatch(row["end"])
        assert row["start"] < row["end"]
    assert [row["name"] for row in found["objective"]] == AIMS
    assert all(set(row) >= OBJECTIVE_KEYS for row in found["objective"])
    assert sum(bout["output_wh"] for bout in bouts) == pytest.approx(found["made_wh"])
    assert found["gap_fraction"] == pytest.approx(abs(found["made_wh"] - found["bound"]) / found["bound"])
    assert found["cut_off"] is False


@pytest.mark.parametrize("name", ["household", "camp"])
def test_household_and_camp_are_met(capsys, name):
    found = json.loads(found_by(capsys, demo(name), "--json"))
    assert found["unmet_wh"] == pytest.approx(0.0, abs=1e-6)
    assert found["unmet_margin_wh"] >= 0.0
    if name == "household":
        assert found["made_wh"] == pytest.approx(33.0, abs=1.0)


def test_the_same_call_gives_the_same_rota(capsys):
    first, second = (json.loads(found_by(capsys, demo("camp"), "--work", "300", "--json")) for _ in range(2))
    for found in (first, second):
        del found["seconds"]
    assert first == second


def test_no_work_gives_the_first_rota(capsys):
    found = json.loads(found_by(capsys, demo("camp"), "--work", "0", "--json"))
    assert found["steps"] == 0
    assert found["violations"] == []
    assert any(day["bouts"] for day in found["days"])


def test_a_rota_cut_off_says_so(capsys):
    found = json.loads(found_by(capsys, demo("shelter"), "--seconds", "0.000001", "--json"))
    assert found["cut_off"] is True
    assert "cut off" in found_by(capsys, demo("shelter"), "--seconds", "0.000001")


def test_tables_one_day_after_the_other(capsys):
    out = found_by(capsys, HOUSEHOLD)
    assert out.startswith("Every need is met and every rule is kept; nobody turns more than ")
    days = [line for line in out.splitlines() if re.match(r"Day \d, ", line)]
    assert days == [
        "Day 1, Monday 2026-11-09",
        "Day 2, Tuesday 2026-11-10",
        "Day 3, Wednesday 2026-11-11",
        "Day 4, Thursday 2026-11-12",
        "Day 5, Friday 2026-11-13",
    ]
    assert "A-S1 Table crank, clamped" in out
    assert "M3 Pimtavi" in out
    assert "greatest share of own minutes" in out
    assert "proven least" in out


def test_what_cannot_be_met_is_said(capsys):
    out = found_by(capsys, demo("shelter"), "--work", "100")
    assert "of use cannot be met" in out.splitlines()[0]
    assert re.search(r"^C-D\d+ .* goes without [0-9.]+ Wh at the outlet \(O\) .*: .+\.$", out, re.MULTILINE)


def test_csv_of_bouts_and_charging(capsys, tmp_path):
    path = tmp_path / "week.csv"
    out = found_by(capsys, HOUSEHOLD, "--work", "50", "--csv", path)
    assert "week.csv" in out
    assert "week-charging.csv" in out
    with path.open(newline="", encoding="utf-8") as stream:
        bouts = list(csv.DictReader(stream))
    with (tmp_path / "week-charging.csv").open(newline="", encoding="utf-8") as stream:
        charging = list(csv.DictReader(stream))
    found = json.loads(found_by(capsys, HOUSEHOLD, "--work", "50", "--json"))
    expected = [(day["day"], bout["person"], bout["start"]) for day in found["days"] for bout in day["bouts"]]
    assert [(int(row["day"]), row["person"], row["start"]) for row in bouts] == expected
    assert len(charging) == sum(len(day["charging"]) for day in found["days"])
    assert "Oruun" not in path.read_text()
    found_by(capsys, HOUSEHOLD, "--work", "50", "--csv", path, "--names")
    assert "Oruun" in path.read_text()


def test_calendars_in_a_folder(capsys, tmp_path):
    folder = tmp_path / "ics"
    for names in ((), ("--names",)):
        found_by(capsys, HOUSEHOLD, "--work", "50", "--ics", folder, *names)
        text = "".join(path.read_text() for path in folder.iterdir())
        assert ("Oruun" in text) == bool(names)
    found = json.loads(found_by(capsys, HOUSEHOLD, "--work", "50", "--json"))
    events = icalendar.Calendar.from_ical((folder / "station-A-S1.ics").read_bytes()).walk("VEVENT")
    starts = [f"{day['date']}T{bout['start']}:00" for day in found["days"] for bout in day["bouts"]]
    assert [event["dtstart"].dt.isoformat() for event in events] == starts


def test_adopting_writes_the_plan_and_nothing_else(capsys, tmp_path):
    plan = new_plan("household")
    path = saved(tmp_path, plan)
    out = found_by(capsys, path, "--work", "50", "--adopt")
    assert out.splitlines()[-1] == f"Adopted as version 1 in {path}."
    adopted = read_plan(path)
    assert replace(adopted, rota=None) == plan
    assert adopted.rota.work == 50
    again = found_by(capsys, path, "--work", "50", "--adopt", "--json")
    assert json.loads(again)["edition"] == 1
    assert read_plan(path) == adopted
    assert sorted(file.name for file in tmp_path.iterdir()) == ["plan.kitplan", "plan.kitplan~"]


def test_calendars_after_another_rota_carry_its_edition(capsys, tmp_path):
    # Nobody may turn at 3 in the morning, so no new rota can keep this bout.
    night = Bout(id="b1", day=1, start="03:00", end="03:20", station="A-S1", person="M1")
    path = saved(tmp_path, replace(new_plan("household"), rota=Rota(id="rota", bouts=(night,))))
    found_by(capsys, path, "--ics", tmp_path / "ics", "--adopt")
    edition = read_plan(path).rota.edition
    assert edition == 2
    events = [
        event
        for file in (tmp_path / "ics").iterdir()
        for event in icalendar.Calendar.from_ical(file.read_bytes()).walk("VEVENT")
    ]
    assert {int(event["sequence"]) for event in events} == {2}
    assert {str(event["status"]) for event in events} == {"CONFIRMED", "CANCELLED"}


def test_a_plan_that_cannot_be_written_is_one_sentence(capsys, tmp_path, monkeypatch):
    path = saved(tmp_path, new_plan("household"))
    before = path.read_bytes()

    def full(_path, _plan):
        raise cli_rota.PlanFileError("plan.kitplan", "it cannot be written (disk full)", "save it elsewhere")

    monkeypatch.setattr(cli_rota, "write_plan", full)
    code, _, err = answer(capsys, "rota", path, "--work", "0", "--json", "--adopt")
    assert code == 2
    assert "disk full" in err
    assert path.read_bytes() == before


def without(plan: Plan, **changed) -> Plan:
    return replace(plan, **changed)


BAD_PLANS = {
    "Nobody is in the plan": lambda plan: without(plan, people=()),
    "No station is in the plan": lambda plan: without(
        plan, stations=(), people=tuple(replace(one, stations=()) for one in plan.people)
    ),
    "Nobody may turn at a time": lambda plan: without(
        plan, blocks=(Block(id="Q1", name="Away", windows=(Window(start="00:00", end="24:00"),)),)
    ),
    "Only Oruun turns": lambda plan: without(plan, people=plan.people[:1]),
    "may only turn while an adult watches": lambda plan: without(plan, people=(plan.people[2],)),
    "All stores together hold": lambda plan: without(
        plan, stores=(replace(plan.stores[0], count=1, nominal_wh=1.0, floor_fraction=0.0),)
    ),
}


@pytest.mark.parametrize("words", BAD_PLANS)
def test_plans_that_leave_little_to_do_get_a_sentence(capsys, tmp_path, words):
    path = saved(tmp_path, BAD_PLANS[words](new_plan("household")))
    out = found_by(capsys, path, "--work", "100")
    assert any(words in line for line in out.splitlines()[:4])
    found = json.loads(found_by(capsys, path, "--work", "100", "--json"))
    assert found["remarks"]
    assert found["violations"] == []


def test_locks_that_contradict_each_other_stop_with_their_rules(capsys, tmp_path):
    fields = {"day": 1, "station": "A-S1", "locked": True}
    bouts = (
        Bout(id="b1", person="M1", start="09:00", end="09:20", **fields),
        Bout(id="b2", person="M2", start="09:10", end="09:30", **fields),
    )
    path = saved(tmp_path, replace(new_plan("household"), rota=Rota(id="rota", bouts=bouts)))
    err = refused(capsys, path, code=1)
    assert "The locked bouts break" in err
    assert "unlock or change them" in err


def test_two_thousand_people_get_a_sentence(capsys, tmp_path):
    plan = new_plan("camp")
    crowd = tuple(replace(plan.people[n % 4], id=f"P{n}") for n in range(2000))
    path = tmp_path / "crowd.kitplan"
    write_plan(path, replace(plan, people=crowd), backup=False)
    code, out, err = answer(capsys, "rota", path, "--work", "0", "--json")
    assert code in (0, 1)
    assert (out == "") == (code == 1)
    assert len(err) < 2000


@pytest.mark.parametrize(
    "arguments",
    [
        ["--work", "-1"],
        ["--work", "1.5"],
        ["--work", "many"],
        ["--work", "9" * 30],
        ["--seconds", "0"],
        ["--seconds", "-3"],
        ["--seconds", "nan"],
        ["--json", "--csv", "x.csv"],
        ["--csv", "x.csv", "--ics", "x"],
        ["--names"],
        ["--csv", "home.kitplan"],
        ["--csv", "/"],
        ["--csv", ""],
        ["--csv", "no folder/x.csv"],
        ["--csv", "a\0b.csv"],
        ["--ics", "a\0b"],
        ["--ics", "no folder/deeper"],
    ],
)
def test_wrong_calls(capsys, tmp_path, monkeypatch, arguments):
    monkeypatch.chdir(tmp_path)
    refused(capsys, HOUSEHOLD, "--work", "0", *arguments)
    assert list(tmp_path.iterdir()) == []


def test_a_file_is_no_folder_for_calendars(capsys, tmp_path):
    path = tmp_path / "x"
    path.write_text("precious")
    assert "folder" in refused(capsys, HOUSEHOLD, "--ics", path)
    assert path.read_text() == "precious"


def test_names_cannot_steer_a_terminal(capsys, tmp_path):
    plan = new_plan("household")
    evil = "x\x1b]0;title\x07\x1b[2J\u202e\r\nsecond"
    changed = replace(
        plan,
        people=tuple(replace(record, name=evil) for record in plan.people),
        stations=tuple(replace(record, name=evil) for record in plan.stations),
        devices=tuple(replace(record, name=evil) for record in plan.devices),
    )
    out = found_by(capsys, saved(tmp_path, changed), "--work", "0")
    assert not re.search(r"[\x00-\x09\x0b-\x1f\x7f-\x9f\u202e]", out)


class Terminal:
    def __init__(self, is_terminal):
        self.text = ""
        self._is = is_terminal

    def isatty(self):
        return self._is

    def write(self, text):
        self.text += text

    def flush(self):
        pass


def moments(monkeypatch, terminal):
    clock = iter(range(100))
    monkeypatch.setattr(cli_rota.time, "monotonic", lambda: next(clock))
    monkeypatch.setattr(sys, "stderr", terminal)
    progress = _Progress()
    told = progress.listener()
    told(RotaProgress(seconds=0.1, steps=0, stage="bounds", value=0.0, bound=0.0))
    told(RotaProgress(seconds=1.2, steps=40, stage="greatest_load", value=0.5, bound=0.4))
    progress.clear()
    return terminal.text


def test_progress_stands_on_a_terminal_only(monkeypatch):
    text = moments(monkeypatch, Terminal(is_terminal=True))
    assert "1.2 s, step 40, greatest load: 0.500, at best 0.400" in text
    assert text.endswith("\r")
    assert "\n" not in text
    assert moments(monkeypatch, Terminal(is_terminal=False)) == ""


def test_standard_output_is_json_and_nothing_else():
    command = [sys.executable, "-m", "kitplanner.app.cli", "rota", HOUSEHOLD, "--work", "0", "--json"]
    found = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, timeout=60, check=False)
    assert (found.returncode, found.stderr) == (0, "")
    assert json.loads(found.stdout)["slot_min"] == 5
