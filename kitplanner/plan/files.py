"""Reading and writing plan files so that a failure at any moment leaves the old file whole."""

from __future__ import annotations

import contextlib
import datetime as dt
import hashlib
import json
import os
import secrets
import stat
from pathlib import Path
from typing import Any

import msgspec

from kitplanner.plan.codec import LARGEST_BYTES, PlanFileError, decode, encode, read_raw, refuse_size
from kitplanner.plan.records import Plan

BACKUP_SUFFIX = "~"
RECOVERY_FORMAT = "kitplanner-recovery"


def read_plan(path: Path) -> Plan:
    """Return the plan in a file.

    Raises
    ------
    PlanFileError
        With the file's name, place, reason and remedy; the file is never changed.
    """
    path = Path(path)
    data = read_bytes(path)
    with _naming(path):
        return decode(data)


def read_bytes(path: Path) -> bytes:
    """Return a regular file's bytes, refusing others and too large ones before anything is read."""
    path = Path(path)
    try:
        found = path.stat()
        _refuse_special(path, found.st_mode)
        with _naming(path):
            refuse_size(found.st_size)
        with path.open("rb") as stream:
            data = stream.read(LARGEST_BYTES + 1)
    except OSError as error:
        raise PlanFileError(
            path.name, f"it cannot be read ({_cause(error)})", "check its name and your rights"
        ) from error
    except ValueError as error:
        if isinstance(error, PlanFileError):
            raise
        raise PlanFileError(ascii(path.name), "this is not a file name", "check the name") from error
    with _naming(path):
        refuse_size(len(data))
    return data


def write_plan(path: Path, plan: Plan, *, backup: bool = True) -> None:
    """Write a plan in place of an older one, keeping one backup beside it (its name with ~ at the end).

    The text is written aside in the same folder, flushed to the disk and then put in the old file's place
    in one step, so at every moment either the old or the new file is there, whole.

    Raises
    ------
    PlanFileError
        If anything fails; the old file is then unchanged.
    """
    path = Path(path)
    with _naming(path):
        data = encode(plan)
    write_bytes(path, data, backup=backup)


def write_bytes(path: Path, data: bytes, *, backup: bool = False) -> None:
    """Put bytes in a file's place in one step; links are followed, the old file's mode is kept."""
    try:
        target = Path(os.path.realpath(path))
        mode = _mode_of(target)
        aside = _aside_path(target)
        try:
            _write_aside(aside, data, mode)
            if backup and mode is not None:
                _keep_backup(target)
            aside.replace(target)
        finally:
            aside.unlink(missing_ok=True)
        _sync_folder(target.parent)
    except OSError as error:
        reason = f"it cannot be written ({_cause(error)})"
        raise PlanFileError(Path(path).name, reason, "save it in another folder or under another name") from error
    except ValueError as error:
        if isinstance(error, PlanFileError):
            raise
        raise PlanFileError(ascii(Path(path).name), "this is not a file name", "choose another name") from error


def backup_path(path: Path) -> Path:
    """Return where the backup of a plan file stands.

    Examples
    --------
    >>> backup_path(Path("camp.kitplan")).name
    'camp.kitplan~'
    """
    return Path(path).with_name(Path(path).name + BACKUP_SUFFIX)


def _aside_path(target: Path) -> Path:
    """Return a free hidden name in the target's folder, short whatever the target is called."""
    return target.with_name(f".kitplan-{secrets.token_hex(8)}")


def _mode_of(target: Path) -> int | None:
    """Return an existing file's mode, None for a new file; raise if it may not be replaced."""
    try:
        mode = target.stat().st_mode
    except FileNotFoundError:
        return None
    _refuse_special(target, mode)
    if not os.access(target, os.W_OK):
        raise PermissionError(None, "the file is write-protected")
    return stat.S_IMODE(mode)


def _refuse_special(path: Path, mode: int) -> None:
    if not stat.S_ISREG(mode):
        what = "a folder" if stat.S_ISDIR(mode) else "not a regular file"
        raise PlanFileError(path.name or str(path), f"it is {what}", "choose a .kitplan file")


def _write_aside(aside: Path, data: bytes, mode: int | None) -> None:
    # O_EXCL: never follow or overwrite what somebody else put there; 0o666 lets the user's mask decide.
    descriptor = os.open(aside, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), 0o666)
    with os.fdopen(descriptor, "wb") as stream:
        stream.write(data)
        stream.flush()
        os.fsync(stream.fileno())
    if mode is not None:
        aside.chmod(mode)


def _keep_backup(target: Path) -> None:
    """Let the backup name point at the present file; a copy where the disk knows no hard links."""
    spare = _aside_path(target)
    try:
        try:
            os.link(target, spare)
        except OSError:
            _write_aside(spare, target.read_bytes(), stat.S_IMODE(target.stat().st_mode))
        spare.replace(backup_path(target))
    finally:
        spare.unlink(missing_ok=True)


def _sync_folder(folder: Path) -> None:
    """Flush the folder's own entry; systems that cannot open a folder have no such step."""
    if not hasattr(os, "O_DIRECTORY"):
        return
    descriptor = os.open(folder, os.O_RDONLY | os.O_DIRECTORY)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)


def _cause(error: OSError) -> str:
    text = error.strerror or str(error)
    return text[:1].lower() + text[1:]


@contextlib.contextmanager
def _naming(path: Path) -> Any:
    """Put the file's name before the place of any refusal inside."""
    try:
        yield
    except PlanFileError as error:
        place = f"{path.name}, {error.place[:1].lower()}{error.place[1:]}"
        place = path.name if error.place in ("The file", "The plan") else place
        raise PlanFileError(place, error.reason, error.remedy) from error


class Recovery(msgspec.Struct, frozen=True, kw_only=True):
    """A plan kept while editing: which file it belongs to and what that file held when it was read."""

    plan: Plan
    original: str | None
    original_sha256: str | None
    saved_at: dt.datetime


def file_sha256(path: Path) -> str | None:
    """Return the SHA-256 of a file's bytes as hexadecimal text, None if the file is not there."""
    path = Path(path)
    return hashlib.sha256(read_bytes(path)).hexdigest() if path.exists() else None


def recovery_bytes(recovery: Recovery) -> bytes:
    """Return what a recovery file holds."""
    raw = {
        "format": RECOVERY_FORMAT,
        "version": 1,
        "original": recovery.original,
        "original_sha256": recovery.original_sha256,
        "saved_at": recovery.saved_at.isoformat(),
        "plan": json.loads(encode(recovery.plan)),
    }
    return (json.dumps(raw, indent=1, ensure_ascii=False, allow_nan=False) + "\n").encode("utf-8")


def write_recovery(path: Path, recovery: Recovery) -> None:
    """Write a recovery file to the path the caller chose."""
    write_bytes(path, recovery_bytes(recovery))


def read_recovery(path: Path) -> Recovery:
    """Return what a recovery file holds; PlanFileError if it is not one."""
    path = Path(path)
    data = read_bytes(path)
    with _naming(path):
        raw = read_raw(data)
        if raw.get("format") != RECOVERY_FORMAT or not isinstance(raw.get("plan"), dict):
            raise PlanFileError("The file", "it is not a recovery file", "choose another one")
        plan = decode(json.dumps(raw["plan"]).encode("utf-8"))
        try:
            return Recovery(
                plan=plan,
                original=_text_or_none(raw.get("original")),
                original_sha256=_text_or_none(raw.get("original_sha256")),
                saved_at=dt.datetime.fromisoformat(str(raw.get("saved_at"))),
            )
        except ValueError as error:
            raise PlanFileError("Key saved_at", "it is not a moment in time", "choose another recovery file") from error


def _text_or_none(value: object) -> str | None:
    return value if isinstance(value, str) else None


def discard_recovery(path: Path) -> None:
    """Remove a recovery file if it is there."""
    Path(path).unlink(missing_ok=True)
