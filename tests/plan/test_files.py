"""Saving never loses the old file; reading refuses what is no plain file."""

from __future__ import annotations

import datetime as dt
import os
import stat
from pathlib import Path

import pytest

from kitplanner.plan import files
from kitplanner.plan.codec import LARGEST_BYTES, PlanFileError, encode
from kitplanner.plan.files import (
    Recovery,
    backup_path,
    discard_recovery,
    file_sha256,
    read_plan,
    read_recovery,
    write_plan,
    write_recovery,
)
from kitplanner.plan.records import Plan
from kitplanner.plan.shipped import demo

OLD, NEW = Plan(title="old"), Plan(title="new")


@pytest.fixture
def kept(tmp_path):
    """A saved plan and a look at what stands in its folder."""
    path = tmp_path / "hut.kitplan"
    write_plan(path, OLD)
    return path


def names(path: Path) -> list[str]:
    return sorted(one.name for one in path.parent.iterdir())


def test_written_plans_come_back_and_keep_one_backup(kept):
    assert read_plan(kept) == OLD
    assert names(kept) == ["hut.kitplan"]
    write_plan(kept, NEW)
    write_plan(kept, Plan(title="newest"))
    assert read_plan(kept).title == "newest"
    assert read_plan(backup_path(kept)) == NEW
    assert names(kept) == ["hut.kitplan", "hut.kitplan~"]


def test_no_backup_on_request(kept):
    write_plan(kept, NEW, backup=False)
    assert names(kept) == ["hut.kitplan"]


def test_the_mode_is_kept_and_a_new_file_follows_the_users_mask(kept):
    kept.chmod(0o640)
    write_plan(kept, NEW)
    assert stat.S_IMODE(kept.stat().st_mode) == 0o640
    mask = os.umask(0o027)
    try:
        write_plan(kept.with_name("other.kitplan"), NEW)
    finally:
        os.umask(mask)
    assert stat.S_IMODE(kept.with_name("other.kitplan").stat().st_mode) == 0o640


def test_links_survive(kept, tmp_path):
    folder = tmp_path / "elsewhere"
    folder.mkdir()
    link = folder / "link.kitplan"
    link.symlink_to(kept)
    write_plan(link, NEW)
    assert link.is_symlink()
    assert read_plan(kept) == NEW
    assert names(link) == ["link.kitplan"]
    assert "hut.kitplan~" in names(kept)


@pytest.mark.parametrize("step", ["fsync", "replace", "write"])
def test_a_failure_at_any_step_leaves_the_old_file_whole(kept, monkeypatch, step):
    def fail(*_args, **_kwargs):
        raise OSError(28, "No space left on device")

    if step == "fsync":
        monkeypatch.setattr(files.os, "fsync", fail)
    elif step == "write":
        monkeypatch.setattr(files.os, "open", fail)
    else:
        monkeypatch.setattr(Path, "replace", fail)
    with pytest.raises(PlanFileError, match=r"hut\.kitplan: it cannot be written \(no space left on device\)"):
        write_plan(kept, NEW)
    monkeypatch.undo()
    assert read_plan(kept) == OLD
    assert names(kept) == ["hut.kitplan"]


def test_a_really_full_disk_is_told(kept):
    if not Path("/dev/full").exists():
        pytest.skip("this system has no /dev/full")
    with pytest.raises(PlanFileError, match="not a regular file"):
        write_plan(Path("/dev/full"), NEW)
    assert stat.S_ISCHR(Path("/dev/full").stat().st_mode)


def test_a_plan_no_file_can_hold_is_refused_before_the_disk_is_touched(kept):
    with pytest.raises(PlanFileError, match=r"^hut\.kitplan: a number is not finite"):
        write_plan(kept, Plan(margin_fraction=float("nan")))
    assert read_plan(kept) == OLD
    assert names(kept) == ["hut.kitplan"]


def test_a_write_protected_file_is_not_replaced(kept, monkeypatch):
    monkeypatch.setattr(files.os, "access", lambda *_args: False)
    with pytest.raises(PlanFileError, match="write-protected"):
        write_plan(kept, NEW)
    assert read_plan(kept) == OLD


@pytest.mark.parametrize("name", ["folder", "pipe", "missing/hut.kitplan", "nul\0.kitplan"])
def test_only_regular_files_in_existing_folders_are_written(tmp_path, name):
    (tmp_path / "folder").mkdir()
    os.mkfifo(tmp_path / "pipe")
    with pytest.raises(PlanFileError) as caught:
        write_plan(tmp_path / name, NEW)
    assert str(caught.value).endswith(".")
    assert "\n" not in str(caught.value)
    assert sorted(one.name for one in tmp_path.iterdir()) == ["folder", "pipe"]


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("folder", "folder: it is a folder"),
        ("pipe", "pipe: it is not a regular file"),
        ("missing", "missing: it cannot be read \\(no such file"),
        ("nul\0", "not a file name"),
        ("loop", "loop: it cannot be read"),
        ("huge", "huge: it has 100 MB"),
    ],
)
def test_what_cannot_be_read_is_told_at_once(tmp_path, name, words):
    (tmp_path / "folder").mkdir()
    os.mkfifo(tmp_path / "pipe")
    (tmp_path / "loop").symlink_to(tmp_path / "loop")
    with (tmp_path / "huge").open("wb") as stream:
        stream.truncate(100_000_000)
    with pytest.raises(PlanFileError, match=words):
        read_plan(tmp_path / name)


def test_the_files_name_stands_before_the_place(tmp_path):
    path = tmp_path / "camp.kitplan"
    path.write_bytes(demo("camp").read_bytes().replace(b'"age": 58', b'"age": "x"'))
    with pytest.raises(PlanFileError, match=r"^camp\.kitplan, people, first record \(id L1\), key age: "):
        read_plan(path)
    path.write_bytes(b"x")
    with pytest.raises(PlanFileError, match=r"^camp\.kitplan: it is not a plan"):
        read_plan(path)


def test_the_limit_is_checked_before_reading(tmp_path, monkeypatch):
    path = tmp_path / "big.kitplan"
    with path.open("wb") as stream:
        stream.truncate(LARGEST_BYTES + 1)
    monkeypatch.setattr(Path, "open", lambda *_args, **_kwargs: pytest.fail("the file was opened"))
    with pytest.raises(PlanFileError, match="MB"):
        read_plan(path)


def test_recovery_files_hold_plan_and_origin(kept, tmp_path):
    path = tmp_path / "recovery.json"
    moment = dt.datetime(2026, 1, 2, 3, 4, 5, tzinfo=dt.UTC)
    given = Recovery(plan=NEW, original=str(kept), original_sha256=file_sha256(kept), saved_at=moment)
    write_recovery(path, given)
    assert read_recovery(path) == given
    assert file_sha256(kept) == given.original_sha256
    write_plan(kept, NEW)
    assert file_sha256(kept) != given.original_sha256
    discard_recovery(path)
    discard_recovery(path)
    assert not path.exists()
    assert file_sha256(path) is None


@pytest.mark.parametrize("text", [b"{}", b"", encode(OLD), b'{"format": "kitplanner-recovery", "plan": {}}', b"[[["])
def test_other_files_are_no_recovery_files(tmp_path, text):
    path = tmp_path / "r.json"
    path.write_bytes(text)
    with pytest.raises(PlanFileError):
        read_recovery(path)
