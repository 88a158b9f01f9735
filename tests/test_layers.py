"""Each layer, imported in a fresh process, loads only what it may; the window starts without the slow packages."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
PACKAGE = ROOT / "kitplanner"
QT = {"PySide6", "shiboken6"}
SLOW = {"pandas", "scipy", "highspy", "pyqtgraph", "openpyxl", "python_calamine", "icalendar", "segno"}
# What a layer's modules may load besides the layers below it.
FORBIDDEN = {
    "domain": QT | SLOW | {"msgspec"},
    "plan": QT | SLOW,
    "planners": QT | SLOW,
    "report": QT | SLOW,
    "session": SLOW,
}
FORBIDDEN_QT_PARTS = {"session": {"PySide6.QtWidgets", "PySide6.QtPrintSupport"}}


def modules_of(layer: str) -> list[str]:
    paths = sorted((PACKAGE / layer).rglob("*.py"))
    names = [".".join(path.relative_to(ROOT).with_suffix("").parts) for path in paths]
    return [name.removesuffix(".__init__") for name in names]


def loaded_by(program: str, *arguments: str) -> set[str]:
    """Names in `sys.modules` at the end of a program run in a fresh process."""
    ending = "\nimport sys, json\nprint(json.dumps(sorted(sys.modules)))"
    answer = subprocess.run(
        [sys.executable, "-W", "error", "-c", program + ending, *arguments],
        cwd=ROOT,
        env=os.environ | {"QT_QPA_PLATFORM": "offscreen"},
        capture_output=True,
        text=True,
        timeout=100,
        check=False,
    )
    assert answer.returncode == 0, answer.stderr
    return set(json.loads(answer.stdout.splitlines()[-1]))


def tops(modules: set[str]) -> set[str]:
    return {name.partition(".")[0] for name in modules}


@pytest.mark.parametrize("layer", FORBIDDEN)
def test_layer_loads_only_what_it_may(layer: str) -> None:
    names = modules_of(layer)
    assert len(names) > 1, f"{layer} is empty"
    loaded = loaded_by("\n".join(f"import {name}" for name in names))
    assert set(names) <= loaded
    assert not tops(loaded) & FORBIDDEN[layer]
    assert not loaded & FORBIDDEN_QT_PARTS.get(layer, set())


@pytest.mark.parametrize("layer", FORBIDDEN)
def test_layer_loads_no_layer_above(layer: str) -> None:
    order = ["domain", "plan", "planners", ("session", "report"), "ui", "app"]
    level = next(i for i, entry in enumerate(order) if layer == entry or layer in entry)
    above = {name for entry in order[level + 1 :] for name in ([entry] if isinstance(entry, str) else entry)}
    if layer in ("session", "report"):
        above |= {"session", "report"} - {layer}
    loaded = loaded_by("\n".join(f"import {name}" for name in modules_of(layer)))
    assert not {name.split(".")[1] for name in loaded if name.startswith("kitplanner.")} & above


def test_command_line_loads_neither_qt_nor_slow_packages() -> None:
    program = (
        "import contextlib, io\n"
        "from kitplanner.app.cli import main\n"
        "from kitplanner.plan.shipped import demo\n"
        "with contextlib.redirect_stdout(io.StringIO()):\n"
        "    assert main(['balance', str(demo('camp'))]) == 0\n"
        "    assert main(['effort', str(demo('household'))]) == 0\n"
    )
    assert not tops(loaded_by(program)) & (QT | SLOW)


def test_window_module_loads_no_slow_package_before_its_first_paint() -> None:
    assert not tops(loaded_by("import kitplanner.app.window")) & SLOW


def test_only_charts_import_pyqtgraph() -> None:
    users = {
        path.relative_to(PACKAGE).as_posix()
        for path in PACKAGE.rglob("*.py")
        if any(
            line.strip().startswith(("import pyqtgraph", "from pyqtgraph")) for line in path.read_text().splitlines()
        )
    }
    assert users, "nobody draws charts"
    assert all(user.startswith("ui/charts/") for user in users), users
