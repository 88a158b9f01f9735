"""The program's entry in the user's menu, its icon and its file type, copied into the user's own data folder.

A copy installed into a virtual environment is not found by the desktop: nothing of it stands in the folders that the
XDG Base Directory Specification names. The files go to `$XDG_DATA_HOME`, else `~/.local/share`.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Iterator, Mapping
from pathlib import Path

from msgspec import Struct

from kitplanner.plan.shipped import resource

PROGRAM = "kitplanner-window"
_REFRESH_S = 30.0
# Program, and the folder under the data folder that it is told about.
_REFRESHERS = (("update-desktop-database", "applications"), ("update-mime-database", "mime"))


class LauncherError(OSError):
    """The launcher cannot be installed or removed; one sentence for the user."""


class Done(Struct, frozen=True):
    """What was done: files written or removed, lists refreshed, and what is left to say."""

    files: tuple[Path, ...]
    refreshed: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()


def data_folder(environ: Mapping[str, str]) -> Path:
    """Return the user's data folder; a relative `$XDG_DATA_HOME` does not count, as its specification says.

    Examples
    --------
    >>> str(data_folder({"XDG_DATA_HOME": "/x", "HOME": "/h"})), str(data_folder({"HOME": "/h"}))
    ('/x', '/h/.local/share')
    """
    given = Path(environ.get("XDG_DATA_HOME", ""))
    return given if given.is_absolute() else Path(environ.get("HOME", "~")).expanduser() / ".local" / "share"


def program_path(environ: Mapping[str, str]) -> Path | None:
    """Return where the window's command is: beside this Python, else on the search path."""
    beside = Path(sys.executable).parent / PROGRAM
    if beside.is_file():
        return beside
    found = shutil.which(PROGRAM, path=environ.get("PATH"))
    return None if found is None else Path(found)


def install(environ: Mapping[str, str]) -> Done:
    """Copy menu entry, icon, file type and description to the user's data folder, older copies replaced.

    Raises
    ------
    LauncherError
        When this is no freedesktop system, the command is not there, or a file cannot be written.
    """
    _refuse_elsewhere()
    program = program_path(environ)
    if program is None:
        raise LauncherError(f"The command {PROGRAM} is not there; install the program with pip first.")
    folder = data_folder(environ)
    written = []
    try:
        for source, place in _files():
            target = folder / place
            target.parent.mkdir(parents=True, exist_ok=True)
            data = source.read_bytes()
            if source.suffix == ".desktop":
                data = entry_text(source.read_text(encoding="utf-8"), program).encode()
            _put(target, data)
            written.append(target)
    except OSError as error:
        raise _failed(error, "written") from error
    refreshed, remarks = _refresh(folder, environ)
    return Done(tuple(written), refreshed, remarks)


def remove(environ: Mapping[str, str]) -> Done:
    """Remove what `install` wrote; files that are not there need nothing.

    Raises
    ------
    LauncherError
        When this is no freedesktop system, or a file cannot be removed.
    """
    _refuse_elsewhere()
    folder = data_folder(environ)
    removed = []
    try:
        for _, place in _files():
            target = folder / place
            if os.path.lexists(target):
                target.unlink()
                removed.append(target)
    except OSError as error:
        raise _failed(error, "removed") from error
    if not removed:
        return Done(())
    refreshed, remarks = _refresh(folder, environ)
    return Done(tuple(removed), refreshed, remarks)


def entry_text(text: str, program: Path) -> str:
    r"""Return the menu entry with the whole path of the command, quoted as the Desktop Entry Specification says.

    Examples
    --------
    >>> entry_text("Exec=kitplanner-window %f", Path("/a b/kitplanner-window"))
    'Exec="/a b/kitplanner-window" %f\n'
    """
    quoted = str(program)
    for sign in ("\\", '"', "`", "$"):
        quoted = quoted.replace(sign, "\\" + sign)
    # A value's own escapes are read before the quotes, and a per cent sign begins a field code.
    quoted = quoted.replace("\\", "\\\\").replace("%", "%%")
    entry = f'Exec="{quoted}" %f'
    lines = [entry if line.startswith("Exec=") else line for line in text.splitlines()]
    return "\n".join(lines) + "\n"


def _files() -> Iterator[tuple[Path, Path]]:
    """Yield the shipped files with their places under a data folder."""
    root = resource("desktop")
    for source in sorted(path for path in root.rglob("*") if path.is_file()):
        yield source, source.relative_to(root)


def _put(target: Path, data: bytes) -> None:
    """Put a file in its place whole."""
    new = target.with_name(f".{target.name}.new")
    new.write_bytes(data)
    new.replace(target)


def _refresh(folder: Path, environ: Mapping[str, str]) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """Let the desktop read its lists anew, with the programs that are there."""
    done, remarks = [], []
    for name, part in _REFRESHERS:
        program = shutil.which(name, path=environ.get("PATH"))
        if program is None:
            remarks.append(f"{name} is not installed; the desktop sees the change at the next log-in.")
            continue
        try:
            subprocess.run(  # noqa: S603 - a fixed program of the desktop on the user's own folder
                [program, str(folder / part)], check=True, capture_output=True, timeout=_REFRESH_S
            )
            done.append(name)
        except (OSError, subprocess.SubprocessError) as error:
            remarks.append(f"{name} failed ({type(error).__name__}); the files are in place all the same.")
    return tuple(done), tuple(remarks)


def _refuse_elsewhere() -> None:
    if sys.platform in ("win32", "darwin"):
        raise LauncherError("Menu entries of this kind exist on Linux and BSD desktops only; start kitplanner-window.")


def _failed(error: OSError, what: str) -> LauncherError:
    name = Path(str(error.filename)).name if error.filename else "A file"
    return LauncherError(f"{name} could not be {what} ({error.strerror or error}); check the folder's permissions.")
