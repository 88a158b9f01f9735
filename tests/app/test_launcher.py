"""Menu entry, icon and file type: copied to the user's folder, taken out again, valid by the desktop's tools."""

from __future__ import annotations

import configparser
import os
import shlex
import shutil
import subprocess
from pathlib import Path
from xml.etree import ElementTree

import pytest

from kitplanner.app import launcher
from kitplanner.app.cli import main
from kitplanner.plan.shipped import resource

NAME = "org.kitplanner.Kitplanner"
PLACES = {
    f"applications/{NAME}.desktop",
    f"icons/hicolor/scalable/apps/{NAME}.svg",
    f"metainfo/{NAME}.metainfo.xml",
    f"mime/packages/{NAME}.xml",
}


@pytest.fixture
def home(tmp_path, monkeypatch):
    """A home with a command in it and none of the desktop's own programs."""
    command = tmp_path / "tools here" / launcher.PROGRAM
    command.parent.mkdir()
    command.write_text("#!/bin/sh\n", encoding="utf-8")
    command.chmod(0o755)
    monkeypatch.setattr(launcher.sys, "executable", str(command.parent / "python"))
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "data"))
    monkeypatch.setenv("PATH", str(tmp_path))
    return tmp_path


def installed(home: Path) -> set[str]:
    data = home / "data"
    return {path.relative_to(data).as_posix() for path in data.rglob("*") if path.is_file()}


def test_the_command_writes_every_file_says_so_and_takes_them_out_again(home, capsys):
    foreign = home / "data" / "applications" / "other.desktop"
    foreign.parent.mkdir(parents=True)
    foreign.write_text("not ours", encoding="utf-8")
    assert main(["install-launcher"]) == 0
    said = capsys.readouterr().out
    assert installed(home) == PLACES | {"applications/other.desktop"}
    assert all(f"Wrote {home / 'data' / place}" in said for place in PLACES)
    assert "update-mime-database is not installed" in said
    assert main(["install-launcher", "--remove"]) == 0
    assert installed(home) == {"applications/other.desktop"}
    assert capsys.readouterr().out.count("Removed ") == len(PLACES)
    assert main(["install-launcher", "--remove"]) == 0
    assert "nothing was removed" in capsys.readouterr().out


def test_the_entry_starts_the_command_by_its_whole_path(home):
    assert main(["install-launcher"]) == 0
    entry = configparser.RawConfigParser()
    entry.optionxform = str
    entry.read(home / "data" / "applications" / f"{NAME}.desktop", encoding="utf-8")
    parts = shlex.split(entry["Desktop Entry"]["Exec"])
    assert parts == [str(home / "tools here" / launcher.PROGRAM), "%f"]


def test_awkward_signs_in_the_path_are_escaped_twice():
    """Desktop Entry Specification, "The Exec key": quotes, then the escapes of a string value, %% for a per cent."""
    line = launcher.entry_text("Exec=x %f", Path('/a"$b/100%/k')).strip()
    assert line == 'Exec="/a\\\\"\\\\$b/100%%/k" %f'


def test_a_second_time_replaces_what_is_there(home):
    assert main(["install-launcher"]) == 0
    icon = home / "data" / f"icons/hicolor/scalable/apps/{NAME}.svg"
    icon.write_text("older", encoding="utf-8")
    assert main(["install-launcher"]) == 0
    assert icon.read_bytes() == resource(f"desktop/icons/hicolor/scalable/apps/{NAME}.svg").read_bytes()
    assert installed(home) == PLACES


def test_reasons_are_told_without_a_traceback(home, capsys, monkeypatch):
    (home / "data").write_text("a file where the folder should be", encoding="utf-8")
    assert main(["install-launcher"]) == 2
    assert "could not be written" in capsys.readouterr().err
    monkeypatch.setattr(launcher.sys, "executable", str(home / "nowhere" / "python"))
    assert main(["install-launcher"]) == 2
    assert "is not there; install the program" in capsys.readouterr().err


def test_other_systems_are_refused(home, monkeypatch, capsys):
    monkeypatch.setattr(launcher.sys, "platform", "win32")
    assert main(["install-launcher"]) == 2
    assert "start kitplanner-window" in capsys.readouterr().err


def test_a_refresher_that_fails_does_not_stop_the_installation(home, monkeypatch, capsys):
    broken = home / "update-mime-database"
    broken.write_text("#!/bin/sh\nexit 1\n", encoding="utf-8")
    broken.chmod(0o755)
    monkeypatch.setenv("PATH", f"{home}{os.pathsep}/bin{os.pathsep}/usr/bin")
    assert main(["install-launcher"]) == 0
    assert "update-mime-database failed (CalledProcessError)" in capsys.readouterr().out
    assert installed(home) >= PLACES


@pytest.mark.skipif(shutil.which("desktop-file-validate") is None, reason="desktop-file-utils is not installed")
def test_the_menu_entry_is_valid():
    run = subprocess.run(
        ["desktop-file-validate", str(resource(f"desktop/applications/{NAME}.desktop"))],
        capture_output=True,
        text=True,
        check=False,
    )
    assert (run.returncode, run.stdout) == (0, "")


@pytest.mark.skipif(shutil.which("appstreamcli") is None, reason="appstream is not installed")
def test_the_description_is_valid():
    run = subprocess.run(
        ["appstreamcli", "validate", "--no-net", str(resource(f"desktop/metainfo/{NAME}.metainfo.xml"))],
        capture_output=True,
        text=True,
        check=False,
    )
    assert run.returncode == 0, run.stdout


@pytest.mark.skipif(shutil.which("update-mime-database") is None, reason="shared-mime-info is not installed")
def test_the_file_type_is_understood_by_the_desktop(tmp_path):
    packages = tmp_path / "mime" / "packages"
    packages.mkdir(parents=True)
    shutil.copy(resource(f"desktop/mime/packages/{NAME}.xml"), packages)
    subprocess.run(["update-mime-database", str(tmp_path / "mime")], check=True, capture_output=True)
    globs = (tmp_path / "mime" / "globs2").read_text(encoding="utf-8")
    assert "application/x-kitplan+json:*.kitplan" in globs


def test_entry_description_and_file_type_agree():
    entry = configparser.RawConfigParser()
    entry.optionxform = str
    entry.read(resource(f"desktop/applications/{NAME}.desktop"), encoding="utf-8")
    told = entry["Desktop Entry"]
    described = ElementTree.parse(resource(f"desktop/metainfo/{NAME}.metainfo.xml")).getroot()
    assert described.findtext("launchable") == f"{NAME}.desktop"
    assert described.findtext("provides/binary") == launcher.PROGRAM == told["Exec"].split()[0]
    assert told["MimeType"] == f"{described.findtext('provides/mediatype')};"
    assert told["Icon"] == NAME
