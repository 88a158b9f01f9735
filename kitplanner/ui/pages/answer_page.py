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
            QTimer.singleShot(0, self.first_painted.emit)


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
        """Take a plan and its results; draw them now if the page is in sight."""
        self.plan, self.results = plan, results
        if self.isVisible():
            self._refresh_now()
        else:
            self._is_stale = True

    def refresh(self) -> None:
        """Draw plan and results; every page has its own."""

    def frames(self) -> list[ChartFrame]:
        """Return the page's charts."""
        return self.findChildren(ChartFrame)

    def _refresh_now(self) -> None:
        self._is_stale = False
        if self.plan is not None:
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
        if self._is_stale:
            self._refresh_now()

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
