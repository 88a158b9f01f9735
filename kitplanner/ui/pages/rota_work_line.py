"""The line that tells how far a search is, with its way to stop it."""

from __future__ import annotations

import time

from PySide6.QtCore import QTimer, Signal, Slot
from PySide6.QtWidgets import QHBoxLayout, QProgressBar, QWidget

from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.widgets.small_button import SmallButton

_TICK_MS = 200


class RotaWorkLine(QWidget):
    """What is being worked out, for how long, how good it is so far; Stop.

    Signals
    -------
    stop_requested()
        The user does not want to wait any longer.
    """

    stop_requested = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._what = ""
        self._said = ""
        self._began = 0.0
        self.words = plain_label()
        self.bar = QProgressBar()
        self.bar.setRange(0, 0)
        self.bar.setTextVisible(False)
        self.bar.setAccessibleName(self.tr("Work under way"))
        self.bar.setFixedWidth(self.fontMetrics().averageCharWidth() * 14)
        self.stop = SmallButton(self.tr("&Stop"))
        self.stop.clicked.connect(self.stop_requested)
        self._timer = QTimer(self)
        self._timer.setInterval(_TICK_MS)
        self._timer.timeout.connect(self._show)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.bar)
        layout.addWidget(self.words, 1)
        layout.addWidget(self.stop)
        self.hide()

    def begin(self, what: str) -> None:
        """Say what begins; the search ends by itself, so the bar only moves."""
        self._what, self._said, self._began = what, "", time.monotonic()
        self._show()
        self._timer.start()
        self.show()

    def tell(self, words: str) -> None:
        """Say how far it is."""
        self._said = words
        self._show()

    def end(self) -> None:
        """Nothing is worked out any more."""
        self._timer.stop()
        self.hide()

    @Slot()
    def _show(self) -> None:
        seconds = f"{time.monotonic() - self._began:.1f}"
        text = self.tr("{what} {seconds} s").format(what=self._what, seconds=seconds)
        self.words.setText(f"{text}, {self._said}" if self._said else text)
