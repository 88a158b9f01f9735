"""The command line as a whole: exit codes, where texts go, and every kind of bad input."""

from __future__ import annotations

import json
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner import __version__
from kitplanner.app import cli
from kitplanner.app.cli import COMMANDS, main
from kitplanner.plan.catalogue import PLAN_KINDS, new_plan
from kitplanner.plan.codec import encode
from kitplanner.plan.files import read_plan, write_plan
from kitplanner.plan.records import Device
from kitplanner.plan.shipped import demo
from kitplanner.planners.station_error import StationError

ROOT = Path(cli.__file__).parents[2]
HOUSEHOLD = str(demo("household"))


def answer(capsys, *arguments):
    """Return exit code, stdout and stderr of a call; nothing on either may be a traceback."""
    code = main([str(argument) for argument in arguments])
    shown = capsys.readouterr()
    assert "Traceback" not in shown.out + shown.err
    return code, shown.out, shown.err


def refused(capsys, *arguments, code=2):
    """Return the message of a call that must be refused without an answer."""
    found, out, err = answer(capsys, *arguments)
    assert (found, out) == (code, "")
    assert err.strip()
    return err


@pytest.fixture
def no_window(monkeypatch):
    opened = []
    monkeypatch.setattr(cli, "open_window", lambda path: opened.append(path) or 0)
    return opened


def test_help_names_every_command(capsys):
    code, out, err = answer(capsys, "--help")
    assert (code, err) == (0, "")
    assert all(command in out for command in COMMANDS)


@pytest.mark.parametrize("command", COMMANDS)
def test_help_of_each_command_has_an_example(capsys, command):
    code, out, _ = answer(capsys, command, "--help")
    assert code == 0
    assert f"Example: kitplanner {command} " in " ".join(out.split())


def test_version(capsys):
    assert answer(capsys, "--version") == (0, f"kitplanner {__version__}\n", "")


def test_window_opens_with_and_without_a_plan(capsys, no_window, tmp_path):
    assert answer(capsys)[0] == 0
    assert answer(capsys, HOUSEHOLD)[0] == 0
    # A damaged file is for the window to explain: it offers the backup and the recovery file.
    odd = tmp_path / "odd.kitplan"
    odd.write_bytes(b"{")
    assert answer(capsys, odd)[0] == 0
    assert no_window == [None, Path(HOUSEHOLD), odd]


def test_neither_file_nor_command(capsys, no_window):
    err = refused(capsys, "balnce")
    assert "neither a file nor a command" in err
    assert "balance" in err
    assert "no command" in refused(capsys, "balnce", HOUSEHOLD)
    refused(capsys, "a\0b")
    assert no_window == []


def test_arguments_come_from_the_process_by_default(capsys, monkeypatch):
    monkeypatch.setattr(sys, "argv", ["kitplanner", "--version"])
    assert main() == 0


@pytest.mark.parametrize("kind", PLAN_KINDS)
def test_new_writes_a_plan_that_opens(capsys, tmp_path, kind):
    path = tmp_path / f"{kind}.kitplan"
    code, out, err = answer(capsys, "new", kind, path)
    assert (code, err) == (0, "")
    assert str(path) in out
    assert read_plan(path) == new_plan(kind)
    assert answer(capsys, "check", path)[0] == 0


def test_new_refuses_an_existing_file(capsys, tmp_path):
    path = tmp_path / "mine.kitplan"
    path.write_text("precious")
    assert "exists already" in refused(capsys, "new", "camp", path)
    assert path.read_text() == "precious"
    link = tmp_path / "link.kitplan"
    link.symlink_to(tmp_path / "nowhere")
    assert "exists already" in refused(capsys, "new", "camp", link)
    assert not (tmp_path / "nowhere").exists()


def test_new_refuses_what_cannot_be_written(capsys, tmp_path):
    refused(capsys, "new", "camp", tmp_path / "no folder" / "x.kitplan")
    refused(capsys, "new", "camp", "a\0b")
    refused(capsys, "new", "office", tmp_path / "x.kitplan")
    assert list(tmp_path.iterdir()) == []


@pytest.fixture
def broken(tmp_path):
    plan = read_plan(Path(HOUSEHOLD))
    bad = replace(
        plan, days=0, devices=(*plan.devices, Device(id="X", name="bad\x1b[31m", battery_wh=-1.0), plan.devices[0])
    )
    path = tmp_path / "broken.kitplan"
    path.write_bytes(encode(bad))
    return path


def test_check_lists_problems_with_places(capsys, broken):
    code, out, err = answer(capsys, "check", broken)
    assert (code, err) == (1, "")
    assert "days" in out
    assert "X" in out
    assert "\x1b" not in out
    code, out, _ = answer(capsys, "check", broken, "--json")
    problems = json.loads(out)["problems"]
    assert code == 1
    assert {"place", "severity", "text", "remedy"} <= set(problems[0])
    assert any(problem["place"] == ["days"] for problem in problems)


def test_check_of_a_sound_plan(capsys):
    code, out, err = answer(capsys, "check", HOUSEHOLD)
    assert (code, err) == (0, "")
    assert "0 problems stop" in out
    assert json.loads(answer(capsys, "check", HOUSEHOLD, "--json")[1])["problems"] == []


@pytest.mark.parametrize("command", [["balance"], ["effort"], ["balance", "--json"], ["effort", "--json"]])
def test_problems_stop_the_calculation_and_are_listed(capsys, broken, command):
    err = refused(capsys, command[0], broken, *command[1:], code=1)
    assert "3 problems that stop the calculation" in err
    assert "days" in err
    assert "\x1b" not in err
    assert "days" in refused(capsys, "bench", broken, "A-S1", code=1)


FILES = {
    "empty": b"",
    "half": encode(new_plan("camp"))[:2000],
    "foreign": b'{"format": "something else"}',
    "too new": b'{"format": "kitplanner-plan", "version": 99}',
    "not text": bytes(range(256)),
    "deep": b"[" * 200_000,
    "number": b"7",
    "nan": b'{"format": "kitplanner-plan", "version": 1, "margin_fraction": NaN}',
    "infinite": b'{"format": "kitplanner-plan", "version": 1, "margin_fraction": 1e999}',
    "unknown key": b'{"format": "kitplanner-plan", "version": 1, "colour": "x"}',
    "wrong type": b'{"format": "kitplanner-plan", "version": 1, "days": "three"}',
}


@pytest.mark.parametrize("kind", FILES)
@pytest.mark.parametrize("command", ["check", "balance", "effort"])
def test_unreadable_files(capsys, tmp_path, kind, command):
    path = tmp_path / "plan.kitplan"
    path.write_bytes(FILES[kind])
    err = refused(capsys, command, path)
    assert "plan.kitplan" in err
    assert path.read_bytes() == FILES[kind]


def test_missing_file_folder_and_device(capsys, tmp_path):
    assert "absent.kitplan" in refused(capsys, "balance", tmp_path / "absent.kitplan")
    assert "folder" in refused(capsys, "balance", tmp_path)
    refused(capsys, "balance", "/dev/zero")
    refused(capsys, "balance", "a\0b")
    refused(capsys, "balance", "x" * 5000)


def test_too_large_file(capsys, tmp_path):
    path = tmp_path / "large.kitplan"
    with path.open("wb") as stream:
        stream.truncate(100_000_000)
    refused(capsys, "balance", path)


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser may read every file")
def test_file_without_rights(capsys, tmp_path):
    path = tmp_path / "locked.kitplan"
    path.write_bytes(encode(new_plan("camp")))
    path.chmod(0)
    refused(capsys, "balance", path)


def test_ten_thousand_people(capsys, tmp_path):
    plan = new_plan("camp")
    crowd = tuple(replace(plan.people[3], id=f"P{n}") for n in range(10_000))
    path = tmp_path / "crowd.kitplan"
    path.write_bytes(encode(replace(plan, people=crowd)))
    code, out, err = answer(capsys, "balance", path, "--json")
    assert code in (0, 1)
    assert (out == "") == (code == 1)
    assert len(err) < 10_000


@pytest.mark.parametrize(
    "arguments",
    [
        ["balance"],
        ["balance", HOUSEHOLD, "extra"],
        ["balance", HOUSEHOLD, "--jso"],
        ["bench", HOUSEHOLD],
        ["effort", "--wh"],
        ["effort", "--wh", "many", "--station-w", "6"],
        ["effort", "--wh", "nan", "--station-w", "6"],
        ["effort", "--wh", "inf", "--station-w", "6"],
        ["effort", "--wh", "-1", "--station-w", "6"],
        ["effort", "--wh", "0", "--station-w", "6"],
        ["effort", "--wh", "1e300", "--station-w", "6"],
        ["--unknown"],
    ],
)
def test_wrong_calls(capsys, arguments):
    refused(capsys, *arguments)


def test_station_that_cannot_be_solved_is_a_problem_of_the_plan(capsys, monkeypatch):
    def unsolvable(_plan):
        raise StationError('Station "x" cannot be computed.')

    monkeypatch.setattr("kitplanner.app.cli_balance.balance", unsolvable)
    assert "cannot be computed" in refused(capsys, "balance", HOUSEHOLD, code=1)


def test_interrupted(capsys, monkeypatch):
    def interrupt(_plan):
        raise KeyboardInterrupt

    monkeypatch.setattr("kitplanner.app.cli_balance.balance", interrupt)
    assert main(["balance", HOUSEHOLD]) == cli.EXIT_INTERRUPTED


def test_names_cannot_steer_a_terminal(capsys, tmp_path):
    plan = read_plan(Path(HOUSEHOLD))
    evil = "x\x1b]0;title\x07\x1b[2J\u202e\r\nsecond"
    changed = replace(
        plan,
        people=tuple(replace(record, name=evil) for record in plan.people),
        stations=tuple(replace(record, name=evil) for record in plan.stations),
        stores=tuple(replace(record, name=evil) for record in plan.stores),
        devices=tuple(replace(record, name=evil) for record in plan.devices),
    )
    path = tmp_path / "evil.kitplan"
    write_plan(path, changed)
    for command in ("check", "balance", "effort"):
        code, out, err = answer(capsys, command, path)
        assert code in (0, 1)
        assert not re.search(r"[\x00-\x09\x0b-\x1f\x7f-\x9f\u202e]", out + err)


@settings(max_examples=60, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.binary(max_size=200))
def test_any_bytes_get_one_sentence(tmp_path, data):
    path = tmp_path / "any.kitplan"
    path.write_bytes(data)
    assert main(["balance", str(path)]) in (1, 2)


def run(arguments, **more):
    """Run the command line in a process of its own."""
    command = [sys.executable, "-m", "kitplanner.app.cli", *arguments]
    return subprocess.run(command, cwd=ROOT, timeout=60, check=False, **more)


def test_reader_that_leaves_early():
    command = (
        f'"{sys.executable}" -m kitplanner.app.cli effort "{demo("shelter")}" | head -1; echo "${{PIPESTATUS[0]}}"'
    )
    found = subprocess.run(["bash", "-c", command], cwd=ROOT, capture_output=True, text=True, timeout=60, check=False)
    assert found.stderr == ""
    assert found.stdout.splitlines()[0].startswith("device")
    assert found.stdout.splitlines()[-1] == "0"


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no device that is always full")
def test_full_disk():
    with Path("/dev/full").open("w") as full:
        found = run(["balance", HOUSEHOLD], stdout=full, stderr=subprocess.PIPE, text=True)
    assert found.returncode == 2
    assert found.stderr.startswith("kitplanner: The answer cannot be written")
    assert len(found.stderr.splitlines()) == 1


def test_closed_output():
    command = f'"{sys.executable}" -m kitplanner.app.cli balance "{HOUSEHOLD}" >&-'
    found = subprocess.run(["bash", "-c", command], cwd=ROOT, capture_output=True, text=True, timeout=60, check=False)
    assert found.returncode == 2
    assert "output is closed" in found.stderr
    assert "Traceback" not in found.stderr


def test_terminal_that_knows_ascii_only(tmp_path):
    plan = replace(
        new_plan("household"), devices=tuple(replace(d, name="Téléphone 電") for d in new_plan("camp").devices)
    )
    path = tmp_path / "names.kitplan"
    write_plan(path, plan)
    environment = {**os.environ, "PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0"}
    found = run(["balance", str(path)], env=environment, capture_output=True)
    assert found.returncode == 0, found.stderr
    assert b"T?l?phone" in found.stdout


def test_commands_need_no_qt():
    code = (
        "import sys; from kitplanner.app.cli import main; code = main(sys.argv[1:]);"
        "late = {'PySide6', 'pandas', 'scipy', 'pyqtgraph'};"
        "assert not late & {name.split('.')[0] for name in sys.modules};"
        "sys.exit(code)"
    )
    command = [sys.executable, "-c", code, "balance", HOUSEHOLD]
    found = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, timeout=60, check=False)
    assert (found.returncode, found.stderr) == (0, "")
