"""A lock file beside a plan, so that two programs do not write the same plan."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QCoreApplication, QLockFile

_WAIT_MS = 100


class FileLock:
    """Lock of one plan file; a folder that cannot be written goes without."""

    def __init__(self, path: Path) -> None:
        self._file = QLockFile(str(path.with_name(f".~lock.{path.name}#")))
        # Only a dead process makes a lock stale, never its age.
        self._file.setStaleLockTime(0)

    @property
    def is_held(self) -> bool:
        """True while this program holds the lock."""
        return self._file.isLocked()

    def acquire(self) -> str | None:
        """Take the lock; return who holds it otherwise, None when it is ours or cannot exist."""
        if self._file.tryLock(_WAIT_MS) or self._file.error() != QLockFile.LockError.LockFailedError:
            return None
        process, host, program = self._file.getLockInfo()
        text = QCoreApplication.translate("FileLock", "{program} on {host} (process {process})")
        return text.format(program=program, host=host, process=process)

    def release(self) -> None:
        """Give the lock back."""
        self._file.unlock()
