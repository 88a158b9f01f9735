"""Which cautions the user has acknowledged for the open plan.

Acknowledgements belong to the reader, not to the plan: they are kept in the preferences under the file's
path, so a plan handed to somebody else asks again.
"""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal, Slot

from kitplanner.session.document import PlanDocument
from kitplanner.session.settings import AppSettings


class Gates(QObject):
    """Acknowledged cautions of the open document.

    Signals
    -------
    changed()
        Something was acknowledged or taken back, or another document is open.
    """

    changed = Signal()

    def __init__(self, document: PlanDocument, settings: AppSettings, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._settings = settings
        self._document = document
        self._path = document.path
        self._done: frozenset[str] = frozenset() if self._path is None else settings.acknowledged(self._path)
        self._seen: set[str] = set()
        document.plan_replaced.connect(self._on_plan_replaced)
        document.file_changed.connect(self._on_file_changed)

    def is_acknowledged(self, caution: str) -> bool:
        """True when the caution was acknowledged for this plan."""
        return caution in self._done

    def was_seen(self, caution: str) -> bool:
        """True when the caution's whole text has stood on the screen since the plan was opened."""
        return caution in self._seen

    def note_seen(self, caution: str) -> None:
        """Remember that the caution's whole text was shown; this is no acknowledgement."""
        self._seen.add(caution)

    def acknowledge(self, caution: str, done: bool = True) -> None:
        """Tick or untick one caution."""
        after = self._done | {caution} if done else self._done - {caution}
        if after == self._done:
            return
        self._done = after
        if self._path is not None:
            self._settings.keep_acknowledged(self._path, after)
        self.changed.emit()

    @Slot()
    def _on_plan_replaced(self) -> None:
        """Another plan brings its own ticks and is read anew."""
        self._seen.clear()
        self._path = self._document.path
        self._done = frozenset() if self._path is None else self._settings.acknowledged(self._path)
        self.changed.emit()

    @Slot(object)
    def _on_file_changed(self, path: Path | None) -> None:
        """Keep the ticks of a plan that was saved under a (new) name."""
        if path is not None and path != self._path:
            self._path = path
            self._settings.keep_acknowledged(path, self._done)
