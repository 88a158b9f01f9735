"""The open plan: its file, its undo stack, and the one way to change it."""

from __future__ import annotations

import os
import sys
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoStack

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.edits import Edit, EditError
from kitplanner.plan.files import read_plan, write_plan
from kitplanner.plan.records import Plan
from kitplanner.session.commands import PlanCommand
from kitplanner.session.file_lock import FileLock


class DocumentError(Exception):
    """A file could not be opened or saved; the text is one sentence for the user."""


class FileInUseError(DocumentError):
    """Another running program holds the file."""


class FileChangedError(DocumentError):
    """The file on disk is not the one that was opened."""


class PlanDocument(QObject):
    """The plan being edited, its undo stack and its file.

    Signals
    -------
    plan_changed(before: Plan, after: Plan)
        The plan is another object now; the only signal about content.
    plan_replaced()
        Another plan was opened, restored or begun; the undo stack is empty.
    file_changed(path: Path | None)
        The document belongs to another file now: after opening, and after saving under a new name.
    edit_refused(sentence: str)
        An edit could not be carried out and left the plan as it was.
    """

    plan_changed = Signal(object, object)
    plan_replaced = Signal()
    file_changed = Signal(object)
    edit_refused = Signal(str)

    def __init__(self, plan: Plan | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._plan = Plan() if plan is None else plan
        self._path: Path | None = None
        self._lock: FileLock | None = None
        self._seen_on_disk: tuple[int, int] | None = None
        self.stack = QUndoStack(self)

    @property
    def plan(self) -> Plan:
        """The current plan (frozen)."""
        return self._plan

    @property
    def path(self) -> Path | None:
        """File of the plan, None before the first save."""
        return self._path

    @property
    def name(self) -> str:
        """Name for titles and questions: the file's, or the plan's own."""
        if self._path is not None:
            return self._path.name
        return self._plan.title or self.tr("New plan")

    @property
    def is_modified(self) -> bool:
        """True while the plan differs from its file."""
        return not self.stack.isClean()

    @property
    def is_locked(self) -> bool:
        """True while other programs are kept from opening the same file for writing."""
        return self._lock is not None and self._lock.is_held

    def apply(self, edit: Edit, text: str, merge_key: str | None = None) -> str | None:
        """Carry out an edit as one undo step; return why not, or None when done.

        It never raises: Qt calls it from slots and delegates, where an exception can end the process.
        """
        before = self._plan
        try:
            after = edit(before)
        except EditError as error:
            self.edit_refused.emit(str(error))
            return str(error)
        except Exception as error:  # noqa: BLE001 - reported by the hook, never lost
            sys.excepthook(type(error), error, error.__traceback__)
            return self.tr("The change could not be made because of a fault in the program; the plan is as it was.")
        if after is not before and after != before:
            self.stack.push(PlanCommand(before, after, text, self._set_plan, merge_key))
        return None

    def new_plan(self, plan: Plan) -> None:
        """Start on another plan that has no file yet."""
        self._release()
        self._replace(plan, None)

    def open_file(self, path: Path) -> None:
        """Read a plan file and hold its lock.

        Raises
        ------
        DocumentError
            With one sentence; the open plan stays untouched.
        """
        path = Path(os.path.abspath(path))
        plan = self._read(path)
        lock = self._lock if path == self._path and self._lock is not None else self._take_lock(path)
        if lock is not self._lock:
            self._release()
        self._lock = lock
        self._replace(plan, path)

    def open_copy(self, path: Path) -> None:
        """Read a plan file as a new plan without a file, for one that is in use elsewhere."""
        self.restore(self._read(path), None)

    def restore(self, plan: Plan, path: Path | None) -> None:
        """Take over a recovered plan as an unsaved change of its file (or of none)."""
        self._release()
        if path is not None:
            self._lock = self._take_lock(path)
        self._replace(plan, path)
        self.stack.resetClean()

    def save(self, *, overwrite: bool = False) -> None:
        """Write the plan to its file.

        Raises
        ------
        FileChangedError
            When another program wrote the file since, unless `overwrite`.
        DocumentError
            When it has no file or cannot be written; the old file is kept.
        """
        if self._path is None:
            raise DocumentError(self.tr("The plan has no file yet. Choose a name with Save as."))
        if not overwrite and _signature(self._path) not in (None, self._seen_on_disk):
            sentence = self.tr("{name} was changed by another program since it was opened. Save under another name.")
            raise FileChangedError(sentence.format(name=self._path.name))
        self._write(self._path)

    def save_as(self, path: Path) -> None:
        """Write the plan to another file, which becomes the document's own.

        Raises
        ------
        DocumentError
            When it cannot be written or another program holds it; the document keeps its old file.
        """
        path = Path(os.path.abspath(path))
        if path == self._path:
            self.save(overwrite=True)
            return
        lock = self._take_lock(path)
        try:
            self._write(path)
        except DocumentError:
            lock.release()
            raise
        self._release()
        self._lock = lock
        self._path = path
        self.file_changed.emit(path)

    def close(self) -> None:
        """Let go of the file; the program is about to end."""
        self._release()

    def _set_plan(self, plan: Plan) -> None:
        before, self._plan = self._plan, plan
        self.plan_changed.emit(before, plan)

    def _replace(self, plan: Plan, path: Path | None) -> None:
        self._path = path
        self._seen_on_disk = None if path is None else _signature(path)
        self.stack.clear()
        self._set_plan(plan)
        self.plan_replaced.emit()
        self.file_changed.emit(path)

    def _read(self, path: Path) -> Plan:
        try:
            return read_plan(path)
        except PlanFileError as error:
            raise DocumentError(str(error)) from error

    def _write(self, path: Path) -> None:
        try:
            write_plan(path, self._plan)
        except PlanFileError as error:
            raise DocumentError(str(error)) from error
        self._seen_on_disk = _signature(path)
        self.stack.setClean()

    def _take_lock(self, path: Path) -> FileLock:
        lock = FileLock(path)
        holder = lock.acquire()
        if holder is not None:
            raise FileInUseError(
                self.tr("{name} is open in {holder}. Close it there, or open a copy.").format(
                    name=path.name, holder=holder
                )
            )
        return lock

    def _release(self) -> None:
        if self._lock is not None:
            self._lock.release()
            self._lock = None


def _signature(path: Path) -> tuple[int, int] | None:
    """Tell a file's state on disk by time and size, None when there is none."""
    try:
        status = path.stat()
    except OSError:
        return None
    return status.st_mtime_ns, status.st_size
