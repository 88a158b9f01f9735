"""Names out of plan file, backup, recovery and crash notes: a byte search finds nothing, the rest stays."""

from __future__ import annotations

import datetime as dt
import json
from pathlib import Path

import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.edits_privacy import delete_all_people, names_of
from kitplanner.plan.files import (
    Recovery,
    backup_path,
    read_plan,
    read_recovery,
    write_plan,
    write_recovery,
)
from kitplanner.plan.records import Device, Person, Plan
from kitplanner.plan.scrub import ScrubError, files_with_names, scrub, scrub_steps
from kitplanner.plan.shipped import demo
from tests.plan.test_edits_privacy import NAMES, byte_forms

NOW = dt.datetime(2026, 5, 1, tzinfo=dt.UTC)


def files_of(folder: Path, plan: Plan, note: bytes = b"a note\n") -> list[Path]:
    """Plan file, its backup, a recovery file, a half-written one, and a crash note."""
    file = folder / "home.kitplan"
    write_plan(file, plan)
    write_plan(file, structs.replace(plan, days=plan.days + 1))
    recovery = folder / "recovery" / "one.json"
    recovery.parent.mkdir(exist_ok=True)
    write_recovery(recovery, Recovery(plan=plan, original=str(file), original_sha256="0", saved_at=NOW))
    broken = folder / "recovery" / "broken.json"
    broken.write_bytes(json.dumps({"plan": {"people": [one.name for one in plan.people]}}).encode()[:-3])
    crash = folder / "crash-note.txt"
    crash.write_bytes(note)
    return [file, backup_path(file), recovery, broken, crash]


def home(names: list[str]) -> Plan:
    people = tuple(Person(id=f"p{i}", name=name, cap_min=17) for i, name in enumerate(names))
    return Plan(people=people, devices=(Device(id="D", name=f"Phone of {names[0]}"),))


@given(st.lists(NAMES, min_size=1, max_size=3, unique=True), st.sampled_from(["utf-8", "utf-16-le", "utf-16", "json"]))
@settings(
    max_examples=25,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.function_scoped_fixture],
    phases=[Phase.explicit, Phase.reuse, Phase.generate],
)
def test_a_byte_search_finds_nothing(tmp_path: Path, names: list[str], encoding: str) -> None:
    text = f"fault while {names[0]} was edited; version 0.1"
    note = json.dumps(text).encode() if encoding == "json" else text.encode(encoding)
    paths = files_of(tmp_path, home(names), note)
    scrub(paths, names)
    for path in paths:
        data = path.read_bytes() if path.exists() else b""
        assert not [name for name in names for form in byte_forms(name) if form in data], path.name
    assert files_with_names(paths, names) == ()
    assert read_plan(paths[0]).people == ()
    assert read_recovery(paths[2]).plan.people == ()
    assert paths[4].exists()


def test_the_rest_of_a_crash_note_stays(tmp_path: Path) -> None:
    paths = files_of(tmp_path, home(["Oruun"]), b"Kitplanner 0.1\nValueError about Oruun\n  line 3\n")
    scrub(paths, ["Oruun"])
    assert paths[4].read_text() == "Kitplanner 0.1\nValueError about ***\n  line 3\n"


def test_steps_are_told_before_anything_is_written(tmp_path: Path) -> None:
    paths = files_of(tmp_path, home(["Oruun"]))
    before = {path: path.read_bytes() for path in paths}
    steps = scrub_steps([*paths, tmp_path / "absent"], ["Oruun"])
    assert [step.action for step in steps] == ["rewrite", "rewrite", "rewrite", "blot", "nothing", "nothing"]
    assert all(step.reason for step in steps)
    assert {path: path.read_bytes() for path in paths} == before


def test_only_the_people_meant_go(tmp_path: Path) -> None:
    paths = files_of(tmp_path, home(["Oruun", "Sefwe"]))
    scrub(paths, ["Oruun"])
    assert [one.name for one in read_plan(paths[1]).people] == ["Sefwe"]
    assert [one.cap_min for one in read_plan(paths[1]).people] == [17]


def test_everybody_goes_also_under_a_former_name(tmp_path: Path) -> None:
    paths = files_of(tmp_path, home(["Formerly Zhuv"]), b"Formerly Zhuv was here")
    write_plan(paths[0], delete_all_people()(home(["Oruun"])), backup=False)
    scrub(paths, ["Oruun"], everybody=True)
    assert not [path.name for path in paths if b"Zhuv" in path.read_bytes()]


def test_a_path_with_a_name_is_taken_out_of_the_recovery(tmp_path: Path) -> None:
    file = tmp_path / "one.json"
    plan = Plan(title="Hut")
    write_recovery(file, Recovery(plan=plan, original="/home/Oruun/hut.kitplan", original_sha256="0", saved_at=NOW))
    scrub([file], ["Oruun"])
    found = read_recovery(file)
    assert (found.original, found.plan) == (None, plan)


def test_a_file_without_the_names_keeps_its_bytes(tmp_path: Path) -> None:
    paths = files_of(tmp_path, Plan(title="Hut"))
    before = {path: path.read_bytes() for path in paths}
    scrub(paths, ["Oruun"])
    assert {path: path.read_bytes() for path in paths} == before


def test_a_name_that_is_also_a_word_of_the_format_does_no_harm(tmp_path: Path) -> None:
    """Keys and choices such as "name" or "usual" stay; only free text and people are searched in a plan."""
    paths = files_of(tmp_path, home(["Name", "Usual", "People"]))
    scrub(paths[:3], ["Name", "Usual", "People"])
    assert read_plan(paths[0]).people == ()


def test_what_cannot_be_searched_is_removed_or_named(tmp_path: Path) -> None:
    folder = tmp_path / "folder"
    folder.mkdir()
    with pytest.raises(ScrubError, match="folder could not be freed"):
        scrub([folder], ["Oruun"])


@pytest.mark.parametrize("name", ["household", "shelter"])
def test_demo_files(tmp_path: Path, name: str) -> None:
    plan = read_plan(demo(name))
    paths = files_of(tmp_path, plan)
    scrub(paths, names_of(plan), everybody=True)
    assert files_with_names(paths, names_of(plan)) == ()
    assert read_plan(paths[1]).devices == plan.devices
