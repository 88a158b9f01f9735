"""Tells screen readers what the energy line is made of: one item for each stage, with its sentence."""

from __future__ import annotations

import functools
import weakref
from typing import TYPE_CHECKING

from PySide6.QtCore import QCoreApplication, QObject, QRect
from PySide6.QtGui import QAccessible, QAccessibleInterface
from PySide6.QtWidgets import QAccessibleWidget

from kitplanner.ui.guard import guarded

if TYPE_CHECKING:
    from kitplanner.ui.energy_line import EnergyLine

_ROLE, _TEXT = QAccessible.Role, QAccessible.Text
_NAME = "kitplanner_accessible_lines"


class StageItem(QAccessibleInterface):
    """One stage of the line."""

    def __init__(self, line: EnergyLine, index: int) -> None:
        super().__init__()
        self._line = weakref.ref(line)
        self._index = index

    def _spot_sentence(self) -> str:
        line = self._line()
        sentences = line.sentences() if line is not None else ()
        return sentences[self._index] if self._index < len(sentences) else ""

    @guarded(False)
    def isValid(self) -> bool:
        """Say whether the line still exists."""
        return self._line() is not None

    @guarded(None)
    def object(self) -> QObject | None:
        """Return no object: a stage is painted, not a widget."""
        return None

    @guarded(None)
    def parent(self) -> QAccessibleInterface | None:
        """Return the line."""
        line = self._line()
        return QAccessible.queryAccessibleInterface(line) if line is not None else None

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
        """Return the stage's sentence as its name."""
        return self._spot_sentence() if kind == _TEXT.Name else ""

    @guarded(None)
    def setText(self, _kind: QAccessible.Text, _text: str) -> None:
        """Ignore: a stage is not edited here."""

    @guarded(QRect())
    def rect(self) -> QRect:
        """Return where the stage is on the screen."""
        line = self._line()
        if line is None:
            return QRect()
        box = line.stage_rect(self._index)
        return QRect(line.mapToGlobal(box.topLeft()), box.size())

    @guarded(_ROLE.ListItem)
    def role(self) -> QAccessible.Role:
        """Return that it is an item of a list."""
        return _ROLE.ListItem

    @guarded(QAccessible.State())
    def state(self) -> QAccessible.State:
        """Return that the stage can be chosen, and whether it is."""
        state = QAccessible.State()
        line = self._line()
        state.selectable = state.focusable = True  # type: ignore[attr-defined]
        state.selected = line is not None and line.stage == self._index  # type: ignore[attr-defined]
        return state


class LineInterface(QAccessibleWidget):
    """The line as a list of its stages."""

    def __init__(self, line: EnergyLine) -> None:
        super().__init__(line, _ROLE.List, line.accessibleName())
        self._line = weakref.ref(line)
        self._items: dict[int, StageItem] = {}

    @guarded(0)
    def childCount(self) -> int:
        """Return the number of stages."""
        line = self._line()
        return len(line.sentences()) if line is not None else 0

    @guarded(None)
    def child(self, index: int) -> QAccessibleInterface | None:
        """Return a stage; the object lives as long as the line's interface."""
        line = self._line()
        if line is None or not 0 <= index < self.childCount():
            return None
        if index not in self._items:
            self._items[index] = StageItem(line, index)
        return self._items[index]

    @guarded(-1)
    def indexOfChild(self, child: QAccessibleInterface) -> int:
        """Return which stage an item is."""
        return next((index for index, item in self._items.items() if item is child), -1)


class Interfaces(QObject):
    """Keeps the Python side of the interfaces alive as long as their lines; belongs to the application."""

    def __init__(self, app: QCoreApplication) -> None:
        super().__init__(app)
        self.setObjectName(_NAME)
        self._kept: dict[int, LineInterface] = {}

    def make(self, _key: str, thing: QObject) -> QAccessibleInterface | None:
        """Return the interface of an energy line, nothing for other objects."""
        from kitplanner.ui.energy_line import EnergyLine

        if not isinstance(thing, EnergyLine):
            return None
        if id(thing) not in self._kept:
            self._kept[id(thing)] = LineInterface(thing)
            thing.destroyed.connect(functools.partial(self._drop, id(thing)))
        return self._kept[id(thing)]

    def _drop(self, key: int, _gone: QObject | None = None) -> None:
        self._kept.pop(key, None)


def install() -> Interfaces:
    """Tell Qt, once for an application, how to describe energy lines."""
    app = QCoreApplication.instance()
    assert app is not None
    known = app.findChild(Interfaces, _NAME)
    if known is not None:
        return known
    interfaces = Interfaces(app)
    QAccessible.installFactory(interfaces.make)
    return interfaces
