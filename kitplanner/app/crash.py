"""What happens when the program itself has a fault: a note on disk, a line on stderr, one message per fault.

The note holds the versions and the places in the program, never the error's text, the plan or the paths of the user:
an error's text may quote a name from the plan.
"""

from __future__ import annotations

import sys
import threading
import traceback
from collections.abc import Callable
from pathlib import Path
from types import TracebackType

from kitplanner import __version__

NOTE_NAME = "crash-note.txt"
NOTES_LIMIT_BYTES = 64_000

Report = Callable[[str], None]


def places(error: BaseException) -> list[str]:
    """Where the error passed, innermost last: module, line, function; nothing of the user's."""
    return [
        f"{'/'.join(Path(frame.filename).parts[-3:])}:{frame.lineno} in {frame.name}"
        for frame in traceback.extract_tb(error.__traceback__)
    ]


def note_text(error: BaseException) -> str:
    """The crash note: kind of error, places, versions."""
    return "\n".join(
        [
            f"Kitplanner {__version__}, Python {sys.version.split()[0]}, {sys.platform}",
            type(error).__name__,
            *(f"  {place}" for place in places(error)),
            "",
        ]
    )


class CrashHooks:
    """The program's exception hooks; `report` shows one sentence to the user, once per distinct fault."""

    def __init__(self, folder: Path, report: Report) -> None:
        self._path = folder / NOTE_NAME
        self._report = report
        self._seen: set[str] = set()
        self._lock = threading.Lock()

    @property
    def path(self) -> Path:
        """Where the notes are kept."""
        return self._path

    def install(self) -> None:
        """Take over from Python's own hooks."""
        sys.excepthook = self.on_exception
        threading.excepthook = self.on_thread_exception

    def on_exception(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        """Handle an error that nobody caught; Ctrl+C stays Ctrl+C."""
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, error, trace)
            return
        text = note_text(error)
        with self._lock:
            if text in self._seen:
                return
            self._seen.add(text)
        print(text, file=sys.stderr)
        self._report(self._sentence(text))

    def on_thread_exception(self, arguments: threading.ExceptHookArgs) -> None:
        """The same for an error in a worker thread."""
        if arguments.exc_value is not None:
            self.on_exception(arguments.exc_type, arguments.exc_value, arguments.exc_traceback)

    def _sentence(self, text: str) -> str:
        """Write the note and say where it is."""
        try:
            self._path.parent.mkdir(parents=True, exist_ok=True)
            old = self._path.read_text(encoding="utf-8") if self._path.exists() else ""
            self._path.write_text((text + "\n" + old)[:NOTES_LIMIT_BYTES], encoding="utf-8")
        except OSError as reason:
            return (
                f"A fault in the program stopped the last step; your plan is as it was before. "
                f"A note about it could not be written ({reason.strerror})."
            )
        return (
            f"A fault in the program stopped the last step; your plan is as it was before. Save it under a new name. "
            f"A note for the makers, without anything from your plan, is in {self._path}."
        )
