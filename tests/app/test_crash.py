"""Crash notes say where the program failed and nothing of the user's."""

from __future__ import annotations

import sys
import threading
from pathlib import Path

import pytest

from kitplanner.app.crash import CrashHooks


def fault(secret: str) -> None:
    name_of_a_person = secret
    raise ValueError(f"no watts for {name_of_a_person}")


def raised(secret: str) -> ValueError:
    try:
        fault(secret)
    except ValueError as error:
        return error
    raise AssertionError("the fault did not happen")


def test_note_holds_places_but_no_text_of_the_error(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    hooks = CrashHooks(tmp_path / "new", said.append)
    error = raised("Alma")
    hooks.on_exception(type(error), error, error.__traceback__)
    note = hooks.path.read_text(encoding="utf-8")
    assert "ValueError" in note
    assert "test_crash.py" in note
    assert "in fault" in note
    for text in (note, said[0], capsys.readouterr().err):
        assert "Alma" not in text
    assert str(hooks.path) in said[0]


def test_the_same_fault_is_reported_once(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    hooks = CrashHooks(tmp_path, said.append)
    for _ in range(28):
        error = raised("Bela")
        hooks.on_exception(type(error), error, error.__traceback__)
    assert len(said) == 1
    assert capsys.readouterr().err.count("ValueError") == 1


def test_unwritable_note_is_said(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    (tmp_path / "file").write_text("a file, not a folder")
    hooks = CrashHooks(tmp_path / "file", said.append)
    error = raised("Cid")
    hooks.on_exception(type(error), error, error.__traceback__)
    assert "could not be written" in said[0]
    assert "ValueError" in capsys.readouterr().err


def test_hooks_catch_worker_threads(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    hooks = CrashHooks(tmp_path, said.append)
    hooks.install()
    assert sys.excepthook == hooks.on_exception
    thread = threading.Thread(target=fault, args=("Dora",))
    thread.start()
    thread.join()
    assert len(said) == 1
    assert "ValueError" in capsys.readouterr().err


def test_keyboard_interrupt_is_left_to_python(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    CrashHooks(tmp_path, said.append).on_exception(KeyboardInterrupt, KeyboardInterrupt(), None)
    assert said == []
    assert "KeyboardInterrupt" in capsys.readouterr().err
