"""Brings values from a worker into the window's thread without the worker ever touching a QObject.

A signal emitted by a worker while its object is being deleted in the window's thread ends the process. The worker
here holds a plain queue; the window looks into it while something is under way.
"""

from __future__ import annotations

from collections.abc import Callable
from queue import Empty, SimpleQueue

from PySide6.QtCore import QObject, QTimer, Signal, Slot
from shiboken6 import isValid

# Soon enough for the eye, seldom enough to cost nothing.
LOOK_MS = 10


class Mailbox(QObject):
    """A queue that is emptied in the window's thread while senders are open.

    Signals
    -------
    arrived(value: object)
        One value, in the order in which it was posted.
    """

    arrived = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._queue: SimpleQueue[object] = SimpleQueue()
        self._senders = 0
        self._timer = QTimer(self)
        self._timer.setInterval(LOOK_MS)
        self._timer.timeout.connect(self._deliver)

    def open(self) -> Callable[[object], None]:
        """Return what a worker may call with a value; say `done` once its last value has arrived."""
        self._senders += 1
        self._timer.start()
        return self._queue.put

    def done(self) -> None:
        """One sender has sent its last value."""
        self._senders -= 1
        if self._senders <= 0:
            self._senders = 0
            self._timer.stop()

    @Slot()
    def _deliver(self) -> None:
        # A receiver may delete this box with its window; what is left then has nobody to go to.
        while isValid(self):
            try:
                value = self._queue.get_nowait()
            except Empty:
                return
            self.arrived.emit(value)
