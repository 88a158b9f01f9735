"""One process that shows one kind of window, prints the time of its first finished frame and ends.

Called by bench_first_frame with the kind, the plan's path and the time at which the process was started, on the
clock that all processes of the machine share.
"""

from __future__ import annotations

import sys
import time

from PySide6.QtCore import QEvent, QObject, QTimer
from PySide6.QtWidgets import QApplication, QLabel, QMainWindow, QWidget

GIVE_UP_MS = 20_000
HIGH_PRIORITY = 1  # as a number: the bare window shall not pay for loading all names of Qt's namespace
SIZE = (1500, 1100)  # tall enough for the first chart to be in sight; the same for every kind


class FirstFrame(QObject):
    """Ends the program after the event turn in which the awaited widget was first painted."""

    def __init__(self, kind: str, start: float) -> None:
        super().__init__()
        self._kind = kind
        self._start = start
        self._seen = False

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Paint and not self._seen and self._is_awaited(watched):
            self._seen = True
            # Answered as soon as the whole window is painted and on the screen, before any later work.
            QApplication.postEvent(self, QEvent(QEvent.Type.User), HIGH_PRIORITY)
        return False

    def customEvent(self, event: QEvent) -> None:
        print(f"{(time.monotonic() - self._start) * 1000:.2f}", flush=True)
        QApplication.exit(0)

    def _is_awaited(self, watched: QObject) -> bool:
        if not isinstance(watched, QWidget):
            return False
        if self._kind in ("plot", "charts"):
            pyqtgraph = sys.modules.get("pyqtgraph")
            return pyqtgraph is not None and isinstance(watched.parent(), pyqtgraph.GraphicsView)
        if self._kind == "window":
            return type(watched).__name__ == "VerdictStrip" and shows_verdict(watched)
        return watched.isWindow()


def shows_verdict(strip: QWidget) -> bool:
    """Whether the strip holds the camp's answer already."""
    return any("fits" in label.text().lower() for label in strip.findChildren(QLabel))


def bare() -> QMainWindow:
    return QMainWindow()


def plot() -> QMainWindow:
    import pyqtgraph

    window = bare()
    widget = pyqtgraph.PlotWidget()
    widget.plot([0.0, 1.0, 2.0, 3.0], [0.0, 1.0, 4.0, 9.0])
    window.setCentralWidget(widget)
    return window


def main() -> int:
    kind, plan, start = sys.argv[1], sys.argv[2], float(sys.argv[3])
    watcher = FirstFrame(kind, start)
    if kind in ("bare", "plot"):
        app = QApplication([])
        app.installEventFilter(watcher)
        window = bare() if kind == "bare" else plot()
    else:
        from pathlib import Path

        from kitplanner.app.window import prepare

        desk = prepare(Path(plan))
        app, window = desk.app, desk.window
        app.installEventFilter(watcher)
    QTimer.singleShot(GIVE_UP_MS, lambda: QApplication.exit(3))
    window.resize(*SIZE)
    window.show()
    return app.exec()


if __name__ == "__main__":
    sys.exit(main())
