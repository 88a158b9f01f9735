"""The built packages hold every file of the project that a user or a later builder needs."""

from __future__ import annotations

import shlex
import subprocess
import sys
import tarfile
import tomllib
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]


def files_of(folder: str) -> set[str]:
    """All files of a folder but caches and the lock files of an open window."""
    paths = (path for path in (ROOT / folder).rglob("*") if path.is_file() and "__pycache__" not in path.parts)
    return {path.relative_to(ROOT / folder).as_posix() for path in paths if not path.name.startswith(".~lock.")}


@pytest.fixture(scope="module")
def built(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the wheel and the source package, built without any network."""
    folder = tmp_path_factory.mktemp("built")
    program = "import sys; from hatchling import build; build.build_wheel(sys.argv[1]); build.build_sdist(sys.argv[1])"
    subprocess.run([sys.executable, "-c", program, str(folder)], cwd=ROOT, check=True, capture_output=True, timeout=100)
    return folder


def test_wheel_holds_package_resources_and_demos(built: Path) -> None:
    with zipfile.ZipFile(next(built.glob("*.whl"))) as wheel:
        names = set(wheel.namelist())
    for folder, inside in (
        ("kitplanner", "kitplanner"),
        ("resources", "kitplanner/_resources"),
        ("demo_profiles", "kitplanner/_demo_profiles"),
    ):
        assert files_of(folder)
        assert {f"{inside}/{name}" for name in files_of(folder)} <= names
    assert not [name for name in names if name.startswith("tests/")]


def test_wheel_holds_the_desktop_entry(built: Path) -> None:
    with zipfile.ZipFile(next(built.glob("*.whl"))) as wheel:
        names = wheel.namelist()
    assert any(name.endswith("data/share/applications/org.kitplanner.Kitplanner.desktop") for name in names)


def test_source_package_is_whole(built: Path) -> None:
    with tarfile.open(next(built.glob("*.tar.gz"))) as package:
        names = {name.partition("/")[2] for name in package.getnames()}
    for folder in ("kitplanner", "resources", "demo_profiles", "tests"):
        assert {f"{folder}/{name}" for name in files_of(folder)} <= names
    assert {"README.md", "DEVELOPERS.md", "pyproject.toml", ".ci/run"} <= names


def test_top_level_is_what_the_guide_says() -> None:
    tracked = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False)
    if tracked.returncode != 0:
        pytest.skip("not a git checkout")
    top = {name.partition("/")[0] for name in tracked.stdout.splitlines()}
    named = {"README.md", "DEVELOPERS.md", "pyproject.toml", "kitplanner", "resources", "tests", "demo_profiles"}
    assert {name for name in top if not name.startswith(".")} == named


def test_dependencies_are_imported_somewhere() -> None:
    """A package that nothing imports does not belong among the dependencies."""
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    names = [line.partition(">")[0] for line in project["dependencies"]]
    text = "\n".join(path.read_text(encoding="utf-8") for path in (ROOT / "kitplanner").rglob("*.py"))
    for name in names:
        module = {"PySide6-Essentials": "PySide6"}.get(name, name)
        assert f"import {module}" in text or f"from {module}" in text, name


def test_font_licence_travels_with_the_fonts() -> None:
    fonts = ROOT / "resources" / "fonts"
    assert sorted(path.name for path in fonts.glob("*.ttf")) == ["DejaVuSans-Bold.ttf", "DejaVuSans.ttf"]
    assert "Bitstream" in (fonts / "LICENSE.txt").read_text(encoding="utf-8")


def test_readme_shows_what_the_commands_answer() -> None:
    """Each answer line under a command in the tour comes from that command."""
    lines = (ROOT / "README.md").read_text(encoding="utf-8").splitlines()
    tour = lines[lines.index("## A short tour") : lines.index("## What it is not")]
    shown: dict[str, list[str]] = {}
    command = None
    for line in tour:
        if line.startswith("$ kitplanner "):
            command = line.removeprefix("$ kitplanner ").partition("#")[0].strip()
        elif line.startswith(("```", "Letters")):
            command = None
        elif command and line and line != "...":
            shown.setdefault(command, []).append(line)
    assert len(shown) >= 3
    for command, answers in shown.items():
        call = [
            sys.executable,
            "-c",
            "from kitplanner.app.cli import main; raise SystemExit(main())",
            *shlex.split(command),
        ]
        said = subprocess.run(
            call, cwd=ROOT, capture_output=True, text=True, timeout=60, check=True
        ).stdout.splitlines()
        for answer in answers:
            assert answer in said, command
