"""Tells screen readers what the board is made of: one item for each turn, with its sentence."""

from __future__ import annotations

import functools
import weakref
from typing import TYPE_CHECKING

from PySide6.QtCore import QCoreApplication, QObject, QRect
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QAccessibleInterface
from PySide6.QtWidgets import QAccessibleWidget

from kitplanner.ui.guard import guarded

if TYPE_CHECKING:
    from kitplanner.ui.board.rota_board import RotaBoard

_ROLE, _TEXT = QAccessible.Role, QAccessible.Text
_NAME = "kitplanner_accessible_boards"


class TurnItem(QAccessibleInterface):
    """One turn of the board."""

    def __init__(self, board: RotaBoard, index: int) -> None:
        super().__init__()
        self._board = weakref.ref(board)
        self._index = index

    @guarded(False)
    def isValid(self) -> bool:
        """Say whether the turn still exists."""
        board = self._board()
        return board is not None and self._index < len(board.shown_turns())

    @guarded(None)
    def object(self) -> QObject | None:
        """Return no object: a turn is painted, not a widget."""
        return None

    @guarded(None)
    def parent(self) -> QAccessibleInterface | None:
        """Return the board."""
        board = self._board()
        return QAccessible.queryAccessibleInterface(board) if board is not None else None

    @guarded(0)
    def childCount(self) -> int:
        """Return 0."""
        return 0

    @guarded(None)
    def child(self, _index: int) -> QAccessibleInterface | None:
        """Return nothing."""
        return None

    @guarded(None)
    def childAt(self, _x: int, _y: int) -> QAccessibleInterface | None:
        """Return nothing."""
        return None

    @guarded(-1)
    def indexOfChild(self, _child: QAccessibleInterface) -> int:
        """Return that there is none."""
        return -1

    @guarded("")
    def text(self, kind: QAccessible.Text) -> str:
        """Return the turn's sentence as its name."""
        board = self._board()
        if board is None or kind != _TEXT.Name:
            return ""
        turns = board.shown_turns()
        return board.hand.data.sentence(turns[self._index]) if self._index < len(turns) else ""

    @guarded(None)
    def setText(self, _kind: QAccessible.Text, _text: str) -> None:
        """Ignore: a turn is edited by keys and its form."""

    @guarded(QRect())
    def rect(self) -> QRect:
        """Return where the turn is on the screen."""
        board = self._board()
        if board is None:
            return QRect()
        box = board.turn_rect(self._index)
        return QRect(board.viewport().mapToGlobal(box.topLeft()), box.size())

    @guarded(_ROLE.ListItem)
    def role(self) -> QAccessible.Role:
        """Return that it is an item of a list."""
        return _ROLE.ListItem

    @guarded(QAccessible.State())
    def state(self) -> QAccessible.State:
        """Return that the turn can be chosen, and whether it is."""
        state = QAccessible.State()
        board = self._board()
        state.selectable = state.focusable = True  # type: ignore[attr-defined]
        turns = board.shown_turns() if board is not None else []
        chosen = board is not None and self._index < len(turns) and turns[self._index].id == board.hand.chosen
        state.selected = state.focused = chosen  # type: ignore[attr-defined]
        return state


class BoardInterface(QAccessibleWidget):
    """The board as a list of its turns."""

    def __init__(self, board: RotaBoard) -> None:
        super().__init__(board, _ROLE.List, board.accessibleName())
        self._board = weakref.ref(board)
        self._items: dict[int, TurnItem] = {}

    @guarded(0)
    def childCount(self) -> int:
        """Return the number of turns shown."""
        board = self._board()
        return len(board.shown_turns()) if board is not None else 0

    @guarded(None)
    def child(self, index: int) -> QAccessibleInterface | None:
        """Return a turn; the object lives as long as the board's interface."""
        board = self._board()
        if board is None or not 0 <= index < self.childCount():
            return None
        if index not in self._items:
            self._items[index] = TurnItem(board, index)
        return self._items[index]

    @guarded(-1)
    def indexOfChild(self, child: QAccessibleInterface) -> int:
        """Return which turn an item is."""
        return next((index for index, item in self._items.items() if item is child), -1)


class Interfaces(QObject):
    """Keeps the Python side of the interfaces alive as long as their boards; belongs to the application."""

    def __init__(self, app: QCoreApplication) -> None:
        super().__init__(app)
        self.setObjectName(_NAME)
        self._kept: dict[int, BoardInterface] = {}

    def make(self, _key: str, thing: QObject) -> QAccessibleInterface | None:
        """Return the interface of a board, nothing for other objects."""
        from kitplanner.ui.board.rota_board import RotaBoard

        if not isinstance(thing, RotaBoard):
            return None
        if id(thing) not in self._kept:
            self._kept[id(thing)] = BoardInterface(thing)
            thing.destroyed.connect(functools.partial(self._drop, id(thing)))
        return self._kept[id(thing)]

    def _drop(self, key: int, _gone: QObject | None = None) -> None:
        self._kept.pop(key, None)


def install() -> Interfaces:
    """Tell Qt, once for an application, how to describe boards."""
    app = QCoreApplication.instance()
    assert app is not None
    known = app.findChild(Interfaces, _NAME)
    if known is not None:
        return known
    interfaces = Interfaces(app)
    QAccessible.installFactory(interfaces.make)
    return interfaces


def announce(thing: QObject, text: str) -> None:
    """Let a screen reader say something now."""
    if text and QAccessible.isActive():
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(thing, text))
