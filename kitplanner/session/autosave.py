"""Recovery files: unsaved work kept beside the preferences, removed on a clean close."""

from __future__ import annotations

import datetime
import logging
import uuid
from concurrent.futures import Future, ThreadPoolExecutor
from pathlib import Path

from msgspec import Struct
from PySide6.QtCore import QLockFile, QObject, QStandardPaths, QTimer, Signal, Slot

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import Recovery, discard_recovery, file_sha256, read_recovery, write_recovery
from kitplanner.plan.records import Plan
from kitplanner.session.document import PlanDocument

QUIET_MS = 3_000
LONGEST_MS = 30_000

_log = logging.getLogger(__name__)


class Recovered(Struct, frozen=True, kw_only=True):
    """Unsaved work found at the start: its recovery file, and what that file holds."""

    file: Path
    recovery: Recovery
    original_changed: bool

    @property
    def original(self) -> Path | None:
        """File the work belongs to, None when it never had one."""
        return None if self.recovery.original is None else Path(self.recovery.original)


def recovery_folder() -> Path:
    """Folder of recovery files of this user."""
    return Path(QStandardPaths.writableLocation(QStandardPaths.StandardLocation.AppDataLocation)) / "recovery"


class Autosave(QObject):
    """Writes a recovery file about three seconds after the last change, at least every thirty.

    Signals
    -------
    failed(sentence: str)
        The recovery file could not be written; said once, the plan itself is not touched.
    """

    failed = Signal(str)
    _write_failed = Signal(str)

    def __init__(self, document: PlanDocument, folder: Path, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._file = folder / f"{uuid.uuid4().hex}.json"
        self._lock = _lock_of(self._file)
        self._executor: ThreadPoolExecutor | None = None
        self._has_warned = False
        self._quiet = self._make_timer(QUIET_MS)
        self._longest = self._make_timer(LONGEST_MS)
        self._write_failed.connect(self._on_write_failed)
        document.plan_changed.connect(self._on_plan_changed)
        document.stack.cleanChanged.connect(self._on_clean_changed)

    @property
    def file(self) -> Path:
        """The recovery file of this document, existing or not."""
        return self._file

    @Slot()
    def write_now(self) -> None:
        """Write the recovery file, off the window's thread."""
        self._quiet.stop()
        self._longest.stop()
        if not self._document.is_modified:
            return
        try:
            self._file.parent.mkdir(parents=True, exist_ok=True)
        except OSError as error:
            self._on_write_failed(error.strerror or str(error))
            return
        self._lock.tryLock(0)
        if self._executor is None:
            self._executor = ThreadPoolExecutor(max_workers=1, thread_name_prefix="kitplanner-recovery")
        signal = self._write_failed

        def report(done: Future[None]) -> None:
            error = None if done.cancelled() else done.exception()
            if error is not None:
                signal.emit(str(error))

        job = self._executor.submit(_write, self._file, self._document.plan, self._document.path)
        job.add_done_callback(report)

    @Slot()
    def close(self) -> None:
        """Remove the recovery file: the work was saved, or given up on purpose."""
        self._quiet.stop()
        self._longest.stop()
        self._finish_writing()
        self._remove()

    def wait(self) -> None:
        """Return once everything asked for is on disk."""
        self._finish_writing()

    def _make_timer(self, interval_ms: int) -> QTimer:
        timer = QTimer(self)
        timer.setSingleShot(True)
        timer.setInterval(interval_ms)
        timer.timeout.connect(self.write_now)
        return timer

    @Slot(object, object)
    def _on_plan_changed(self, _before: Plan, _after: Plan) -> None:
        self._quiet.start()
        if not self._longest.isActive():
            self._longest.start()

    @Slot(bool)
    def _on_clean_changed(self, clean: bool) -> None:
        if clean:
            self.close()

    @Slot(str)
    def _on_write_failed(self, reason: str) -> None:
        _log.warning("recovery file not written: %s", reason)
        if not self._has_warned:
            self._has_warned = True
            sentence = self.tr("Unsaved work cannot be kept for recovery ({reason}). Save often.")
            self.failed.emit(sentence.format(reason=reason.rstrip(".")))

    def _finish_writing(self) -> None:
        if self._executor is not None:
            self._executor.shutdown(wait=True)
            self._executor = None

    def _remove(self) -> None:
        discard_recovery(self._file)
        self._lock.unlock()


def find_recovered(folder: Path) -> tuple[Recovered, ...]:
    """List the recovery files that no running program holds, newest first; unreadable ones are left alone."""
    found = []
    for file in sorted(folder.glob("*.json")):
        lock = _lock_of(file)
        if not lock.tryLock(0):
            continue
        lock.unlock()
        try:
            found.append(_read(file))
        except PlanFileError as error:
            _log.warning("recovery file cannot be read: %s", error)
    return tuple(sorted(found, key=lambda one: one.recovery.saved_at, reverse=True))


def _lock_of(file: Path) -> QLockFile:
    lock = QLockFile(str(file.with_suffix(".lock")))
    # Only a dead process makes a lock stale, never its age.
    lock.setStaleLockTime(0)
    return lock


def _write(file: Path, plan: Plan, original: Path | None) -> None:
    recovery = Recovery(
        plan=plan,
        original=None if original is None else str(original),
        original_sha256=None if original is None else file_sha256(original),
        saved_at=datetime.datetime.now(datetime.UTC),
    )
    write_recovery(file, recovery)


def _read(file: Path) -> Recovered:
    recovery = read_recovery(file)
    now = None if recovery.original is None else _sha256_or_none(Path(recovery.original))
    return Recovered(file=file, recovery=recovery, original_changed=now != recovery.original_sha256)


def _sha256_or_none(path: Path) -> str | None:
    try:
        return file_sha256(path)
    except PlanFileError:
        return None


def discard(recovered: Recovered) -> None:
    """Remove a recovery file after the user restored or declined it."""
    discard_recovery(recovered.file)
    recovered.file.with_suffix(".lock").unlink(missing_ok=True)
