"""A ring around the control that the keyboard has reached, in the accent colour and two pixels wide.

The style marks focused buttons and boxes by one fine line at most, too little for weak eyes; fields, tables and
painted views show the focus themselves.
"""

from __future__ import annotations

from PySide6.QtCore import QObject, Qt, Slot
from PySide6.QtGui import QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractButton, QApplication, QComboBox, QFocusFrame, QSlider, QTabBar, QWidget
from shiboken6 import isValid

from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import colours

_RINGED = (QAbstractButton, QComboBox, QSlider, QTabBar)
_WIDTH_PX = 2.0


class _Ring(QFocusFrame):
    """The ring itself; Qt keeps it around its control while that moves and scrolls."""

    @guarded()
    def paintEvent(self, _event: QPaintEvent) -> None:
        """Draw the ring."""
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QPen(colours().color("accent"), _WIDTH_PX))
            edge = round(_WIDTH_PX / 2)
            painter.drawRoundedRect(self.rect().adjusted(edge, edge, -edge, -edge), 4, 4)
        finally:
            painter.end()


class FocusRing(QObject):
    """Puts the ring around what the keyboard reaches in a window, and takes it away when the mouse chooses."""

    def __init__(self, window: QWidget) -> None:
        super().__init__(window)
        self._window = window
        self._ring: _Ring | None = None
        app = QApplication.instance()
        if isinstance(app, QApplication):
            app.focusChanged.connect(self._on_focus_changed)

    @Slot("QWidget*", "QWidget*")
    def _on_focus_changed(self, _before: QWidget | None, now: QWidget | None) -> None:
        if not isValid(self._window):
            return
        by_keys = self._window.testAttribute(Qt.WidgetAttribute.WA_KeyboardFocusChange)
        wanted = isinstance(now, _RINGED) and by_keys and self._window.isAncestorOf(now)
        # The ring stands among the control's neighbours and goes with them when they are removed.
        has_ring = self._ring is not None and isValid(self._ring)
        if wanted and not has_ring:
            self._ring = _Ring(self._window)
        if self._ring is not None and isValid(self._ring):
            self._ring.setWidget(now if wanted else None)  # type: ignore[arg-type]  # Qt takes none
