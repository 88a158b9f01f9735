"""Start-up refusals, and the drift that the refused pair of PySide6 and Python shows."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from kitplanner.app import qt_check


def test_void_qt_calls_lose_no_reference_to_none(qapp) -> None:
    from PySide6.QtCore import QObject

    thing = QObject()
    before = sys.getrefcount(None)
    for _ in range(1000):
        thing.setObjectName("a")
    # The unsound pair loses 1,000 here and ends Python after about 5,000.
    assert abs(sys.getrefcount(None) - before) < 100


@pytest.mark.parametrize("python", [(3, 10), (3, 11)])
def test_unsound_pair_is_refused_with_remedy(python: tuple[int, int]) -> None:
    sentence = qt_check.unsound_pair("6.12.0", python)
    assert sentence is not None
    assert f"Python {python[0]}.{python[1]}" in sentence
    assert "pip install 'PySide6-Essentials<6.12'" in sentence


@pytest.mark.parametrize(("qt", "python"), [("6.12.0", (3, 12)), ("6.11.3", (3, 11)), ("6.10.3", (3, 10))])
def test_sound_pairs_pass(qt: str, python: tuple[int, int]) -> None:
    assert qt_check.unsound_pair(qt, python) is None


def test_no_screen_names_the_commands_that_do_without() -> None:
    sentence = qt_check.no_screen({}, "linux")
    assert sentence is not None
    for command in ("kitplanner effort", "kitplanner balance"):
        assert command in sentence


@pytest.mark.parametrize(
    "environment", [{"DISPLAY": ":0"}, {"WAYLAND_DISPLAY": "wayland-0"}, {"QT_QPA_PLATFORM": "offscreen"}]
)
def test_a_screen_of_any_kind_passes(environment: dict[str, str]) -> None:
    assert qt_check.no_screen(environment, "linux") is None


def test_other_systems_always_have_a_screen() -> None:
    assert qt_check.no_screen({}, "darwin") is None


@pytest.mark.parametrize(
    ("environment", "x11"),
    [
        ({"DISPLAY": ":0"}, True),
        ({"DISPLAY": ":0", "WAYLAND_DISPLAY": "wayland-0"}, False),
        ({"DISPLAY": ":0", "QT_QPA_PLATFORM": "offscreen"}, False),
        ({"QT_QPA_PLATFORM": "xcb;wayland"}, True),
        ({}, False),
    ],
)
def test_when_qt_draws_through_x11(environment: dict[str, str], x11: bool) -> None:
    assert qt_check.uses_x11(environment, "linux") is x11


@pytest.mark.skipif(not sys.platform.startswith("linux"), reason="X11 is looked for on Linux only")
def test_silent_display_is_refused_instead_of_a_core_dump() -> None:
    sentence = qt_check.silent_display({"DISPLAY": ":9731"})
    assert sentence is not None
    assert "':9731'" in sentence
    assert qt_check.silent_display({"QT_QPA_PLATFORM": "offscreen", "DISPLAY": ":9731"}) is None


def test_missing_plugin_library_is_named(tmp_path: Path) -> None:
    (tmp_path / "libqxcb.so").write_bytes(b"not a library")
    sentence = qt_check.missing_plugin_library({"DISPLAY": ":0"}, tmp_path)
    assert sentence is not None
    assert "apt-get install libegl1" in sentence
    assert qt_check.missing_plugin_library({"DISPLAY": ":0"}, tmp_path / "nowhere") is None


def test_missing_library_sentence_names_library_and_packages() -> None:
    sentence = qt_check.missing_library(ImportError("libEGL.so.1: cannot open shared object file: No such file"))
    assert "libEGL.so.1" in sentence
    assert "libxcb-cursor0" in sentence
    assert "cannot open" not in sentence


def window_command(environment: dict[str, str], *arguments: str) -> subprocess.CompletedProcess[str]:
    kept = {
        key: value for key, value in os.environ.items() if key not in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")
    }
    return subprocess.run(
        [
            sys.executable,
            "-c",
            "from kitplanner.app.main import main_window; raise SystemExit(main_window())",
            *arguments,
        ],
        env=kept | environment,
        cwd=Path(__file__).parents[2],
        capture_output=True,
        text=True,
        timeout=60,
        check=False,
    )


def test_window_without_screen_ends_with_one_sentence() -> None:
    answer = window_command({})
    assert answer.returncode == 2
    assert answer.stdout == ""
    assert answer.stderr.startswith("kitplanner: There is no screen here")
    assert len(answer.stderr.splitlines()) == 1


@pytest.mark.skipif(shutil.which("Xvfb") is None, reason="needs an X11 system: Xvfb is not installed")
def test_window_on_a_silent_display_ends_with_one_sentence() -> None:
    answer = window_command({"DISPLAY": ":9731"})
    assert answer.returncode == 2
    assert len(answer.stderr.splitlines()) == 1
    assert "does not answer" in answer.stderr
