"""Preferences come back with their types, also from a file of text."""

from pathlib import Path

import pytest
from PySide6.QtCore import QByteArray, QSettings

from kitplanner.session.settings import RECENT_LIMIT, AppSettings


@pytest.fixture
def again(qapp, tmp_path):
    """Make settings that read what an earlier run wrote to the same file."""

    def make():
        return AppSettings(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))

    return make


def test_values_survive_a_restart_with_their_types(again):
    first = again()
    first.text_percent = 150
    first.scheme = "dark"
    first.section = "devices"
    first.page = "bench"
    first.keep_state("window", QByteArray(b"\x00\xff"))
    first.sync()
    second = again()
    assert (second.text_percent, second.scheme, second.section, second.page) == (150, "dark", "devices", "bench")
    assert bytes(second.state("window").data()) == b"\x00\xff"


@pytest.mark.parametrize(("kept", "shown"), [(20, 100), (999, 200), (125, 125)])
def test_text_size_stays_in_its_range(again, kept, shown):
    settings = again()
    settings.text_percent = kept
    assert settings.text_percent == shown


def test_an_unknown_scheme_falls_back_to_the_system(again, tmp_path):
    (tmp_path / "s.ini").write_text("[view]\nscheme=plaid\ntext_percent=many\n")
    assert again().scheme == "system"
    assert again().text_percent == 100


@pytest.mark.parametrize("count", [0, 1, 2, 15])
def test_recent_files_come_back_newest_first_also_when_there_is_only_one(again, tmp_path, count):
    first = again()
    paths = [tmp_path / f"{number}.kitplan" for number in range(count)]
    for path in paths:
        first.add_recent(path)
    first.sync()
    assert again().recent_files == tuple(reversed(paths))[:RECENT_LIMIT]


def test_a_file_opened_again_moves_to_the_front(again, tmp_path):
    settings = again()
    for name in ("a", "b", "a"):
        settings.add_recent(tmp_path / name)
    assert settings.recent_files == (tmp_path / "a", tmp_path / "b")
    settings.clear_recent()
    assert settings.recent_files == ()


def test_acknowledged_cautions_belong_to_one_file(again, tmp_path):
    first = again()
    first.keep_acknowledged(tmp_path / "a", {"C1"})
    first.sync()
    assert again().acknowledged(tmp_path / "a") == {"C1"}
    assert again().acknowledged(Path(tmp_path / "b")) == frozenset()
