"""Base of the pages with answers: hidden pages wait, charts are built after the first paint.

A page gets plan and results by `set_answers`; while it is hidden it only remembers them, so an edit costs nothing
for pages that nobody sees.
"""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize, Qt, QTimer, Signal, Slot
from PySide6.QtGui import QPaintEvent, QShowEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QVBoxLayout, QWidget

from kitplanner.plan.cautions import cautions_for
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.gates import Gates
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.caution_list import CautionList
from kitplanner.ui.pages.chart_frame import ChartFrame, restyle_labels


class AnswerPage(QWidget):
    """One page of answers in a scrolling column.

    Signals
    -------
    charts_loaded()
        The page's charts are built and drawn.
    """

    charts_loaded = Signal()
    ready = False
    place = ""

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.plan: Plan | None = None
        self.results: Results | None = None
        self._is_stale = False
        self._is_loading = False
        self.is_loaded = False
        self._gates: Gates | None = None
        self._gate_box = CautionList()
        self._note_box = CautionList()
        self.content = QWidget()
        self.content.setBackgroundRole(self.backgroundRole())
        self.column = QVBoxLayout(self.content)
        self.column.setContentsMargins(14, 10, 14, 14)
        self.column.setSpacing(10)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAsNeeded)
        whole = QWidget()
        stacked = QVBoxLayout(whole)
        stacked.setContentsMargins(0, 0, 0, 0)
        stacked.setSpacing(0)
        for part in (self._gate_box, self.content):
            stacked.addWidget(part)
        stacked.addStretch(1)
        stacked.addWidget(self._note_box)
        area.setWidget(whole)
        area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
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

    def set_gates(self, gates: Gates) -> None:
        """Take the record of acknowledged cautions; without it every gate stays open to be ticked."""
        self._gates = gates
        gates.changed.connect(self._show_cautions)
        for box in (self._gate_box, self._note_box):
            box.acknowledged.connect(gates.acknowledge)
        self._show_cautions()

    @Slot()
    def _show_cautions(self) -> None:
        """Show the page's cautions: gates above the answers until they are ticked, the rest below."""
        if self.plan is None or not self.place:
            return
        shown = cautions_for(self.plan, self.place)
        gates = self._gates
        done = frozenset(one.caution.id for one in shown if gates is not None and gates.is_acknowledged(one.caution.id))
        above = tuple(one for one in shown if one.how == "gate" and one.caution.id not in done)
        self._gate_box.set_cautions(above, done)
        self._note_box.set_cautions(tuple(one for one in shown if one not in above), done)

    def refresh(self) -> None:
        """Draw plan and results; pages fill this in."""

    def frames(self) -> list[ChartFrame]:
        """Return the page's charts."""
        return self.findChildren(ChartFrame)

    def _refresh_now(self) -> None:
        self._is_stale = False
        if self.plan is not None:
            self._show_cautions()
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
    def paintEvent(self, event: QPaintEvent) -> None:
        """Ask for the charts once the page itself has been painted."""
        super().paintEvent(event)
        if not self._is_loading:
            self._is_loading = True
            QTimer.singleShot(0, self.load_charts)

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Take a new text size."""
        super().changeEvent(event)
        if self.ready and event.type() == QEvent.Type.FontChange:
            restyle_labels(self)

    @guarded(QSize(520, 420))
    def minimumSizeHint(self) -> QSize:
        """Return a small size: the column scrolls."""
        return QSize(320, 200)
