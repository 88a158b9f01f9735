"""Asks of the numbers in the window: by right button, Menu key or Shift+F1, wherever the keyboard stands.

A watched widget knows by a function which numbers it shows; from the widget outwards all are offered.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from weakref import WeakKeyDictionary

from PySide6.QtCore import QEvent, QObject, QPoint, Qt, Signal, Slot
from PySide6.QtGui import QAction, QContextMenuEvent, QCursor
from PySide6.QtWidgets import QAbstractItemView, QMenu, QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import BenchPoint
from kitplanner.ui.guard import guarded
from kitplanner.ui.trace_refs import FIELD, TraceRef, ref_words

MOST_OFFERED = 26


class Seen(QObject):
    """The plan and the answers that the window shows now, and the point of the bench."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.plan = Plan()
        self.results: Results | None = None
        self.point: BenchPoint | None = None

    @Slot(object, str)
    def set_point(self, point: BenchPoint | None, _name: str) -> None:
        """Take the point that the bench shows."""
        self.point = point


Source = Callable[[Seen, QWidget, int], tuple[TraceRef, ...]]


class TraceGuide(QObject):
    """Finds the numbers under the pointer or the keyboard.

    Signals
    -------
    trace_requested(ref: TraceRef)
        The user wants to know where a number comes from.
    nothing_here()
        There is no number where the keyboard stands.
    """

    trace_requested = Signal(object)
    nothing_here = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.seen = Seen(self)
        self._window = parent
        self._sources: WeakKeyDictionary[QWidget, Source] = WeakKeyDictionary()
        self._kinds: list[tuple[type[QWidget], Source]] = []

    def watch(self, widget: QWidget, source: Source) -> None:
        """Offer the numbers of a widget; `source` gets what is seen, the widget and the row (-1 for none)."""
        self._sources[widget] = source
        widget.installEventFilter(self)
        if isinstance(widget, QAbstractItemView):
            widget.viewport().installEventFilter(self)

    def watch_kind(self, kind: type[QWidget], source: Source) -> None:
        """Know the numbers of every widget of a kind; such widgets open their menus themselves."""
        self._kinds.append((kind, source))

    def refs_at(self, widget: QWidget | None, row: int = -1) -> tuple[TraceRef, ...]:
        """Return the numbers of a widget and of what it stands in, nearest first, none twice."""
        found: dict[TraceRef, None] = {}
        for one in _outwards(widget):
            at = one.currentIndex().row() if row < 0 and isinstance(one, QAbstractItemView) else row
            for source in self._sources_of(one):
                found.update(dict.fromkeys(source(self.seen, one, at)))
        return tuple(found)[:MOST_OFFERED]

    def _sources_of(self, widget: QWidget) -> Iterator[Source]:
        if widget in self._sources:
            yield self._sources[widget]
        yield from (source for kind, source in self._kinds if isinstance(widget, kind))

    def ask(self, widget: QWidget | None) -> None:
        """Ask for the number at the keyboard: the only one at once, else from a menu."""
        refs = self.refs_at(widget)
        if not refs:
            self.nothing_here.emit()
        elif len(refs) == 1 or refs[0].formula == FIELD:
            self.trace_requested.emit(refs[0])
        else:
            assert widget is not None
            self.offer(refs, widget.mapToGlobal(widget.rect().center()))

    def offer(self, refs: tuple[TraceRef, ...], at: QPoint) -> QMenu:
        """Open a menu of numbers."""
        menu = QMenu(self._window)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.setAccessibleName(self.tr("Where does this come from?"))
        menu.addSection(self.tr("Where does this come from?"))
        self.fill(menu, refs)
        menu.popup(at)
        if menu.actions():
            menu.setActiveAction(menu.actions()[-len(refs)])
        return menu

    def fill(self, menu: QMenu, refs: tuple[TraceRef, ...]) -> None:
        """Put the numbers into a menu."""
        for ref in refs:
            action = menu.addAction(ref_words(self.seen.plan, ref).replace("&", "&&"))
            action.setData(ref)
        menu.triggered.connect(self._on_triggered)

    @Slot(QAction)
    def _on_triggered(self, action: QAction) -> None:
        if isinstance(action.data(), TraceRef):
            self.trace_requested.emit(action.data())

    @guarded(False)
    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Answer a request for a context menu of a watched widget."""
        if event.type() != QEvent.Type.ContextMenu or not isinstance(watched, QWidget):
            return False
        assert isinstance(event, QContextMenuEvent)
        row = -1
        by_mouse = event.reason() == QContextMenuEvent.Reason.Mouse
        view = watched.parent()
        if by_mouse and isinstance(view, QAbstractItemView) and view.viewport() is watched:
            row = view.indexAt(event.pos()).row()
        refs = self.refs_at(watched, row)
        if not refs:
            return False
        self.offer(refs, QCursor.pos() if by_mouse else watched.mapToGlobal(watched.rect().center()))
        event.accept()
        return True


def _outwards(widget: QWidget | None) -> Iterator[QWidget]:
    """Yield a widget and what it stands in, up to its window."""
    while widget is not None:
        yield widget
        widget = widget.parentWidget()
