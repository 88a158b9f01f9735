"""Command `print`: PDFs without a screen, read back with pypdf; each in a process of its own, as from a terminal."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pypdf
import pytest
from msgspec.structs import replace

from kitplanner.app import cli
from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import write_plan
from kitplanner.plan.records import Bout, Rota
from kitplanner.plan.shipped import demo

ROOT = Path(cli.__file__).parents[2]
SIZES_MM = {"A4": (210, 297), "A3": (297, 420), "Letter": (216, 279)}


def run(*arguments):
    environment = {key: value for key, value in os.environ.items() if key not in ("DISPLAY", "QT_QPA_PLATFORM")}
    command = [sys.executable, "-m", "kitplanner.app.cli", "print", *map(str, arguments)]
    return subprocess.run(command, cwd=ROOT, env=environment, capture_output=True, text=True, timeout=100, check=False)


def pages_of(path: Path) -> list[pypdf.PageObject]:
    return list(pypdf.PdfReader(path).pages)


def text_of(page: pypdf.PageObject) -> str:
    # What stands between two words of a PDF is for the reader to guess: one space here.
    return " ".join(page.extract_text().split())


@pytest.mark.parametrize("size", SIZES_MM)
def test_rota_of_a_household_is_a_page_a_day(tmp_path, size):
    path = tmp_path / "rota.pdf"
    found = run(demo("household"), "rota", "-o", path, "--size", size)
    assert (found.returncode, found.stderr) == (0, "")
    pages = pages_of(path)
    assert len(pages) == 5
    for day, page in enumerate(pages, start=1):
        measured = [float(side) * 25.4 / 72 for side in page.mediabox[2:]]
        assert measured == pytest.approx(SIZES_MM[size], abs=1.0)
        text = text_of(page)
        assert f"Day {day}, " in text
        assert "proposal, not adopted" in text
        assert "Stop at once and tell someone" in text


def test_an_adopted_rota_is_printed_as_it_was_saved(tmp_path):
    bout = Bout(id="b1", day=2, start="09:00", end="09:20", station="A-S1", person="M1")
    rota = Rota(id="rota", edition=3, state="posted", bouts=(bout,))
    plan = tmp_path / "plan.kitplan"
    write_plan(plan, replace(new_plan("household"), rota=rota), backup=False)
    path = tmp_path / "rota.pdf"
    assert run(plan, "rota", "-o", path).returncode == 0
    texts = [text_of(page) for page in pages_of(path)]
    assert len(texts) == 5
    assert "version 3" in texts[1]
    assert "Oruun" in texts[1]
    assert "Nobody turns on this day." in texts[0]


def test_effort_table(tmp_path):
    path = tmp_path / "effort.pdf"
    assert run(demo("household"), "effort", "-o", path).returncode == 0
    assert "Minutes of turning per charge" in text_of(pages_of(path)[0])


@pytest.mark.parametrize(
    "arguments",
    [
        ["rota"],
        ["poster", "-o", "x.pdf"],
        ["effort", "-o", "x.pdf", "--size", "A9"],
        ["effort", "-o", "x.kitplan"],
        ["effort", "-o", "no folder/x.pdf"],
        ["effort", "-o", "."],
    ],
)
def test_wrong_calls(arguments):
    found = run(demo("household"), *arguments)
    assert (found.returncode, found.stdout) == (2, "")
    assert found.stderr.strip()
    assert "Traceback" not in found.stderr
