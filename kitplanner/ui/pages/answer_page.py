"""Base of the pages with answers: hidden pages wait, charts are built after the first paint.

A page gets plan and results by `set_answers`; while it is hidden it only remembers them, so an edit costs nothing
for pages that nobody sees.
"""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize, Qt, QTimer, Signal, Slot
from PySide6.QtGui import QPaintEvent, QShowEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QVBoxLayout, QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.chart_frame import ChartFrame, restyle_labels

# Later than the next frame: energy line and verdict come first, and edits in quick succession draw once.
REFRESH_MS = 25


class PageColumn(QWidget):
    """The column that scrolls; tells when it was painted for the first time.

    Signals
    -------
    first_painted()
        The column stands on the screen.
    """

    first_painted = Signal()
    _was_painted = False

    @guarded()
    def paintEvent(self, event: QPaintEvent) -> None:
        """Tell the first time, once the event loop is back."""
        super().paintEvent(event)
        if not self._was_painted:
            self._was_painted = True
            # A timer of the column's own ends with it; a single shot would still come after its end.
            timer = QTimer(self)
            timer.setSingleShot(True)
            timer.timeout.connect(self.first_painted)
            timer.start()


class AnswerPage(QWidget):
    """One page of answers in a scrolling column.

    Signals
    -------
    charts_loaded()
        The page's charts are built and drawn.
    """

    charts_loaded = Signal()
    ready = False

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.plan: Plan | None = None
        self.results: Results | None = None
        self._is_stale = False
        self.is_loaded = False
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(REFRESH_MS)
        self._timer.timeout.connect(self.catch_up)
        content = PageColumn()
        content.first_painted.connect(self.load_charts)
        self.column = QVBoxLayout(content)
        self.column.setContentsMargins(14, 10, 14, 14)
        self.column.setSpacing(12)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        area.setWidget(content)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(area)
        self.ready = True

    def set_answers(self, plan: Plan, results: Results | None) -> None:
        """Take a plan and its results; a page in sight draws them after the window's own lines have been painted."""
        self.plan, self.results = plan, results
        self._is_stale = True
        if self.isVisible():
            self._timer.start()

    def refresh(self) -> None:
        """Draw plan and results; every page has its own."""

    def frames(self) -> list[ChartFrame]:
        """Return the page's charts."""
        return self.findChildren(ChartFrame)

    @Slot()
    def catch_up(self) -> None:
        """Draw the newest answers if they are not drawn yet; a hidden page waits until it is shown."""
        if self._is_stale and self.plan is not None and self.isVisible():
            self._is_stale = False
            self.refresh()

    @Slot()
    def load_charts(self) -> None:
        """Build all charts of the page; a second call does nothing."""
        if self.is_loaded:
            return
        self.is_loaded = True
        for frame in self.frames():
            frame.load()
        self.charts_loaded.emit()

    @guarded()
    def showEvent(self, event: QShowEvent) -> None:
        """Catch up with what changed while the page was hidden."""
        super().showEvent(event)
        self.catch_up()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Take a new text size."""
        super().changeEvent(event)
        if self.ready and event.type() == QEvent.Type.FontChange:
            restyle_labels(self)

    @guarded(QSize(320, 200))
    def minimumSizeHint(self) -> QSize:
        """Return a small size: the column scrolls."""
        return QSize(320, 200)
