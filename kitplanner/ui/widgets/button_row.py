"""Buttons beside each other, in two rows where one is too narrow for them."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QSize
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QGridLayout, QPushButton, QSizePolicy, QWidget

from kitplanner.ui.guard import guarded

_GAP_PX = 4


class ButtonRow(QWidget):
    """Keeps all its buttons in sight at any text size."""

    def __init__(self, buttons: Sequence[QPushButton], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._buttons = tuple(buttons)
        self._rows = 0
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setSpacing(_GAP_PX)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        self._arrange(1)

    @property
    def rows(self) -> int:
        """Number of rows in use."""
        return self._rows

    def needed_width(self) -> int:
        """Width that all buttons need in one row."""
        return sum(button.sizeHint().width() + _GAP_PX for button in self._buttons)

    def _arrange(self, rows: int) -> None:
        if rows == self._rows:
            return
        self._rows = rows
        columns = -(-len(self._buttons) // rows)
        for button in self._buttons:
            self._grid.removeWidget(button)
        for number, button in enumerate(self._buttons):
            self._grid.addWidget(button, number // columns, number % columns)
        for column in range(len(self._buttons) + 1):
            self._grid.setColumnStretch(column, 1 if column == columns else 0)

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Choose one row or two."""
        super().resizeEvent(event)
        self._arrange(1 if self.width() >= self.needed_width() else 2)

    @guarded(QSize(100, 26))
    def minimumSizeHint(self) -> QSize:
        """Return the least width: half of the buttons in a row."""
        half = -(-len(self._buttons) // 2)
        columns = [max(button.sizeHint().width() for button in self._buttons[index::half]) for index in range(half)]
        height = max((button.sizeHint().height() for button in self._buttons), default=0)
        return QSize(sum(columns) + _GAP_PX * len(columns), height * self._rows + _GAP_PX * (self._rows - 1))
