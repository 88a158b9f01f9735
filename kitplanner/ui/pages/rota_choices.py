"""A row of small choices, each with its word; breaks into lines where the width is small."""

from __future__ import annotations

from PySide6.QtCore import QPoint, QRect, QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QLayout, QLayoutItem, QSizePolicy, QWidget

from kitplanner.ui.guard import guarded

_GAP_PX = 8
_LEAST_PX = 26


class FlowLayout(QLayout):
    """Lays items one after the other and begins a new line where one does not fit."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self._items: list[QLayoutItem] = []
        self.setContentsMargins(0, 0, 0, 0)

    @guarded()
    def addItem(self, item: QLayoutItem) -> None:
        """Take one more item."""
        self._items.append(item)

    @guarded(0)
    def count(self) -> int:
        """Return the number of items."""
        return len(self._items)

    @guarded(None)
    def itemAt(self, index: int) -> QLayoutItem | None:
        """Return an item."""
        return self._items[index] if 0 <= index < len(self._items) else None

    @guarded(None)
    def takeAt(self, index: int) -> QLayoutItem | None:
        """Let go of an item."""
        return self._items.pop(index) if 0 <= index < len(self._items) else None

    @guarded(False)
    def hasHeightForWidth(self) -> bool:
        """Say that the row itself gives its height."""
        return False

    @guarded(30)
    def heightForWidth(self, width: int) -> int:
        """Return the height of the lines at a width."""
        return self._arrange(QRect(0, 0, width, 0), move=False)

    @guarded()
    def setGeometry(self, rect: QRect) -> None:
        """Place the items."""
        super().setGeometry(rect)
        self._arrange(rect, move=True)

    @guarded(QSize(100, 30))
    def sizeHint(self) -> QSize:
        """Return the size of all in one line."""
        width = sum(item.sizeHint().width() + _GAP_PX for item in self._items)
        return QSize(width, max((item.sizeHint().height() for item in self._items), default=0))

    @guarded(QSize(100, 30))
    def minimumSize(self) -> QSize:
        """Return the size of the widest item."""
        width = max((item.minimumSize().width() for item in self._items), default=0)
        return QSize(width, max((item.minimumSize().height() for item in self._items), default=0))

    def _arrange(self, rect: QRect, *, move: bool) -> int:
        x, y, line = rect.x(), rect.y(), 0
        for item in self._items:
            if item.isEmpty():
                continue
            hint = item.sizeHint()
            if x > rect.x() and x + hint.width() > rect.right() + 1:
                x, y, line = rect.x(), y + line + _GAP_PX // 2, 0
            if move:
                item.setGeometry(QRect(QPoint(x, y), hint))
            x += hint.width() + _GAP_PX
            line = max(line, hint.height())
        return y + line - rect.y()


class ChoiceRow(QWidget):
    """Words with their boxes."""

    def __init__(self, choices: list[tuple[str, QWidget]], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        flow = FlowLayout(self)
        self._holders: dict[QWidget, QWidget] = {}
        for word, box in choices:
            holder = self._holders[box] = QWidget()
            row = QHBoxLayout(holder)
            row.setContentsMargins(0, 0, 0, 0)
            row.setSpacing(4)
            if word:
                label = QLabel(word)
                label.setTextFormat(Qt.TextFormat.PlainText)
                label.setBuddy(box)
                box.setAccessibleName(word)
                row.addWidget(label)
            if isinstance(box, QComboBox):
                box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
            box.setMinimumHeight(_LEAST_PX)
            row.addWidget(box)
            flow.addWidget(holder)
        self._flow = flow
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)

    def show_choice(self, box: QWidget, shown: bool) -> None:
        """Show a box with its word, or leave both out."""
        holder = self._holders[box]
        if holder.isHidden() == shown:
            holder.setVisible(shown)
            self.updateGeometry()

    @guarded(QSize(100, 30))
    def sizeHint(self) -> QSize:
        """Return the height of the lines at the present width; a layout's own way is lost in a scrolling column."""
        return QSize(200, self._flow.heightForWidth(self.width()))

    @guarded(QSize(100, 30))
    def minimumSizeHint(self) -> QSize:
        """Return the widest item and the height of the lines."""
        return QSize(self._flow.minimumSize().width(), self.sizeHint().height())

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Ask for the height of the new width."""
        super().resizeEvent(event)
        self.updateGeometry()
