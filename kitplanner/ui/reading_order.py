"""Puts the keyboard's way through a window in reading order, whatever was built first or came later.

Panels, pages and cautions are made when they are first needed, and Qt lets the Tab key follow the order of making.
"""

from __future__ import annotations

from itertools import pairwise

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QScrollArea, QWidget

_AIR_PX = 24


def reading_order(root: QWidget) -> list[QWidget]:
    """Return the visible widgets that the Tab key reaches, as one reads: rows from the top, each from its start."""
    found: list[QWidget] = []
    for child in _as_read(root):
        takes_tab = child.focusPolicy() & Qt.FocusPolicy.TabFocus and child.isEnabled() and child.focusProxy() is None
        if takes_tab:
            found.append(child)
        else:
            found.extend(reading_order(child))
    return found


def put_in_reading_order(root: QWidget) -> None:
    """Make the Tab key follow the reading order."""
    order = reading_order(root)
    for before, after in pairwise(order):
        if before.nextInFocusChain() is not after:
            QWidget.setTabOrder(before, after)


def bring_into_sight(widget: QWidget | None) -> None:
    """Scroll every area around a widget until it is seen; Qt does so only for the area that had the focus before."""
    area = widget.parentWidget() if widget is not None else None
    while area is not None and widget is not None:
        if isinstance(area, QScrollArea):
            area.ensureWidgetVisible(widget, _AIR_PX, _AIR_PX)
        area = area.parentWidget()


def _as_read(parent: QWidget) -> list[QWidget]:
    """Return the visible children of a widget, row by row."""
    children = [child for child in parent.children() if isinstance(child, QWidget) and child.isVisible()]
    children = [child for child in children if not child.isWindow()]
    from_right = parent.layoutDirection() == Qt.LayoutDirection.RightToLeft
    waiting = sorted(children, key=lambda child: child.y())
    ordered: list[QWidget] = []
    while waiting:
        bottom = waiting[0].y() + waiting[0].height()
        row = [child for child in waiting if child.y() + child.height() / 2 <= bottom]
        row = row or waiting[:1]
        waiting = [child for child in waiting if child not in row]
        ordered += sorted(row, key=lambda child: (-child.x() - child.width() if from_right else child.x(), child.y()))
    return ordered
