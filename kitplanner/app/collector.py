"""Python's cyclic garbage collector, moved into the thread of the window.

It otherwise runs in whatever thread happens to allocate, and a widget freed by a worker ends the process.
"""

from __future__ import annotations

import gc

from PySide6.QtCore import QObject, QTimer, Slot

INTERVAL_MS = 1000


class WindowCollector(QObject):
    """Runs the collector by its usual thresholds, from a timer of the thread it was made in."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._thresholds = gc.get_threshold()
        self._timer = QTimer(self)
        self._timer.timeout.connect(self.collect)

    @Slot()
    def start(self) -> None:
        """Take the collector over."""
        gc.disable()
        self._timer.start(INTERVAL_MS)

    @Slot()
    def stop(self) -> None:
        """Give the collector back."""
        self._timer.stop()
        gc.enable()

    @Slot()
    def collect(self) -> None:
        """Collect the oldest generation whose counter has passed its threshold."""
        for generation in (2, 1, 0):
            if self._thresholds[generation] and gc.get_count()[generation] > self._thresholds[generation]:
                gc.collect(generation)
                return
