"""The way into the window: checks first, then the window, then its exit code."""

from __future__ import annotations

import shutil
import subprocess
import sys
import types
from pathlib import Path

import pytest

import kitplanner.app
from kitplanner import __version__
from kitplanner.app import main
from kitplanner.plan.shipped import demo


@pytest.fixture
def no_window_module(monkeypatch: pytest.MonkeyPatch) -> None:
    """Forget the window's module, so that the next import looks for it again."""
    monkeypatch.delitem(sys.modules, "kitplanner.app.window", raising=False)
    monkeypatch.delattr(kitplanner.app, "window", raising=False)


class Unloadable:
    """An import finder on a machine where Qt lacks something."""

    def __init__(self, text: str) -> None:
        self.text = text

    def find_spec(self, name: str, path: object = None, target: object = None) -> None:
        if name == "kitplanner.app.window":
            raise ImportError(self.text)


def test_refusal_goes_to_stderr_with_exit_2(monkeypatch, capsys) -> None:
    monkeypatch.setattr(main, "before_qt", lambda: "There is no screen here.")
    assert main.open_window(None) == 2
    answer = capsys.readouterr()
    assert answer.out == ""
    assert answer.err == "kitplanner: There is no screen here.\n"


def test_missing_system_library_is_one_sentence_with_the_remedy(no_window_module, monkeypatch, capsys) -> None:
    missing = Unloadable("libEGL.so.1: cannot open shared object file: No such file or directory")
    monkeypatch.setattr(sys, "meta_path", [missing, *sys.meta_path])
    assert main.open_window(None) == 2
    error = capsys.readouterr().err
    assert "libEGL.so.1 is missing" in error
    assert "apt-get install libegl1" in error
    assert len(error.splitlines()) == 1


def test_a_fault_of_our_own_is_not_called_a_missing_library(no_window_module, monkeypatch) -> None:
    monkeypatch.setattr(sys, "meta_path", [Unloadable("cannot import name 'x' from 'kitplanner'"), *sys.meta_path])
    with pytest.raises(ImportError, match="cannot import name"):
        main.open_window(None)


def test_plan_and_exit_code_pass_through(monkeypatch) -> None:
    opened: list[Path | None] = []

    def run(path: Path | None) -> int:
        opened.append(path)
        return 7

    monkeypatch.setattr(main, "before_qt", lambda: None)
    stand_in = types.SimpleNamespace(run=run)
    monkeypatch.setitem(sys.modules, "kitplanner.app.window", stand_in)
    monkeypatch.setattr(kitplanner.app, "window", stand_in, raising=False)
    assert main.main_window(["a.kitplan"]) == 7
    assert main.main_window([]) == 7
    assert opened == [Path("a.kitplan"), None]


def test_version_and_help(capsys) -> None:
    for argument in ("--version", "--help"):
        with pytest.raises(SystemExit) as end:
            main.main_window([argument])
        assert end.value.code == 0
    output = capsys.readouterr().out
    assert __version__ in output
    assert "PLAN" in output


def start_window(plan: Path, home: Path, ending: str) -> subprocess.CompletedProcess[str]:
    """Run the real window in a process of its own; `ending` runs in its event loop."""
    program = f"""
import sys
from pathlib import Path
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from kitplanner.app import window
made = window.prepare
def prepare(path):
    desk = made(path)
    def end():
        {ending}
    QTimer.singleShot(400, end)
    return desk
window.prepare = prepare
from kitplanner.app.main import main_window
raise SystemExit(main_window([sys.argv[1]]))
"""
    environment = {"HOME": str(home), "QT_QPA_PLATFORM": "offscreen", "PATH": "/usr/bin:/bin", "LC_ALL": "C.UTF-8"}
    return subprocess.run(
        [sys.executable, "-c", program, str(plan)],
        env=environment,
        cwd=Path(__file__).parents[2],
        capture_output=True,
        text=True,
        timeout=60,
        check=False,
    )


def test_window_opens_on_a_demo_and_closes_cleanly(tmp_path: Path) -> None:
    plan = tmp_path / "camp.kitplan"
    shutil.copy(demo("camp"), plan)
    before = plan.read_bytes()
    answer = start_window(
        plan, tmp_path, "print(desk.window.isVisible(), desk.document.plan.title); desk.window.close()"
    )
    assert answer.returncode == 0, answer.stderr
    assert answer.stdout.startswith("True ")
    assert "Traceback" not in answer.stderr
    assert plan.read_bytes() == before


@pytest.mark.parametrize("content", [None, b"", b"\x00\x01not json", b'{"format": "other"}', b"[" * 100_000])
def test_unreadable_plan_is_one_sentence_and_exit_2(tmp_path: Path, content: bytes | None) -> None:
    plan = tmp_path / "bad.kitplan"
    if content is not None:
        plan.write_bytes(content)
    answer = start_window(plan, tmp_path, "print('the window came up'); desk.window.close()")
    assert answer.returncode == 2, answer.stderr
    assert answer.stdout == ""
    assert len(answer.stderr.strip().splitlines()) == 1, answer.stderr
    assert "Traceback" not in answer.stderr
    if content is not None:
        assert plan.read_bytes() == content
