"""A push button no wider than its text, never smaller than a finger or a pointer needs."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QPushButton, QSizePolicy, QWidget

from kitplanner.ui.guard import guarded

_LEAST_PX = 26


class SmallButton(QPushButton):
    """A push button for rows of many; the style's own least width would push the last ones out of sight."""

    def __init__(self, text: str, parent: QWidget | None = None) -> None:
        super().__init__(text, parent)
        self.setAutoDefault(False)
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)

    @guarded(QSize(_LEAST_PX, _LEAST_PX))
    def sizeHint(self) -> QSize:
        """Return the room for the text and, with a menu, its arrow."""
        return self._needed()

    @guarded(QSize(_LEAST_PX, _LEAST_PX))
    def minimumSizeHint(self) -> QSize:
        """Return the same: the text is never cut."""
        return self._needed()

    def _needed(self) -> QSize:
        metrics = self.fontMetrics()
        arrow = 2 * metrics.averageCharWidth() if self.menu() is not None else 0
        width = metrics.horizontalAdvance(self.text()) + 2 * metrics.averageCharWidth() + 4 + arrow
        return QSize(max(_LEAST_PX, width), max(_LEAST_PX, metrics.height() + 8))
