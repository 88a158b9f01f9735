"""Seeded clicks, keys, drags and wheel turns all over a window; every step can be repeated from its seed."""

from __future__ import annotations

import random
import time

from PySide6.QtCore import QPoint, QPointF, Qt, QTimer
from PySide6.QtGui import QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

from kitplanner.ui.answers import PAGES
from kitplanner.ui.panels.sections import SECTIONS

KEYS = (
    *(Qt.Key.Key_Tab, Qt.Key.Key_Backtab, Qt.Key.Key_Up, Qt.Key.Key_Down, Qt.Key.Key_Left, Qt.Key.Key_Right),
    *(Qt.Key.Key_Return, Qt.Key.Key_Space, Qt.Key.Key_Escape, Qt.Key.Key_Delete, Qt.Key.Key_Backspace),
    *(Qt.Key.Key_PageUp, Qt.Key.Key_PageDown, Qt.Key.Key_Home, Qt.Key.Key_End, Qt.Key.Key_F2, Qt.Key.Key_F8),
)
SHORTCUTS = (Qt.Key.Key_Z, Qt.Key.Key_Y, Qt.Key.Key_A, Qt.Key.Key_C, Qt.Key.Key_D, Qt.Key.Key_1, Qt.Key.Key_3)
LETTERS = '0123456789.,-:%aé<&"Wh '
STALL_S = 0.1


class Monkey:
    """Plays with a window; `slow` lists the steps that took longer than a tenth of a second."""

    def __init__(self, window: QWidget, seed: int) -> None:
        self.window = window
        self.dice = random.Random(seed)
        self.slow: list[tuple[float, str]] = []
        self._closer = QTimer()
        self._closer.setInterval(20)
        self._closer.timeout.connect(self._close_popups)
        self._closer.start()

    def play(self, count: int) -> None:
        """Do so many steps."""
        steps = (
            *[self._click] * 5,
            *[self._key] * 4,
            *[self._type] * 2,
            self._wheel,
            self._drag,
            self._shortcut,
            self._switch,
        )
        for _ in range(count):
            step = self.dice.choice(steps)
            start = time.perf_counter()
            step()
            QApplication.processEvents()
            took = time.perf_counter() - start
            if took > STALL_S:
                self.slow.append((took, step.__name__))

    def stop(self) -> None:
        """Let the window be."""
        self._closer.stop()
        self._close_popups()

    def _close_popups(self) -> None:
        for widget in (QApplication.activePopupWidget(), QApplication.activeModalWidget()):
            if widget is not None:
                widget.close()

    def _target(self) -> QWidget:
        widgets = [self.window, *self.window.findChildren(QWidget)]
        seen = [w for w in widgets if w.isVisible() and w.isEnabled() and not w.visibleRegion().isEmpty()]
        return self.dice.choice(seen or [self.window])

    def _point(self, widget: QWidget) -> QPoint:
        return QPoint(self.dice.randrange(max(1, widget.width())), self.dice.randrange(max(1, widget.height())))

    def _focus(self) -> QWidget:
        return QApplication.focusWidget() or self.window

    def _click(self) -> None:
        widget = self._target()
        button = Qt.MouseButton.LeftButton if self.dice.random() < 0.9 else Qt.MouseButton.RightButton
        press = QTest.mouseDClick if self.dice.random() < 0.15 else QTest.mouseClick
        press(widget, button, Qt.KeyboardModifier.NoModifier, self._point(widget))

    def _key(self) -> None:
        held = Qt.KeyboardModifier.ShiftModifier if self.dice.random() < 0.15 else Qt.KeyboardModifier.NoModifier
        QTest.keyClick(self._focus(), self.dice.choice(KEYS), held)

    def _type(self) -> None:
        for _ in range(self.dice.randrange(1, 6)):
            QTest.keyClick(self._focus(), self.dice.choice(LETTERS))

    def _shortcut(self) -> None:
        QTest.keyClick(self._focus(), self.dice.choice(SHORTCUTS), Qt.KeyboardModifier.ControlModifier)

    def _wheel(self) -> None:
        widget = self._target()
        at = QPointF(self._point(widget))
        turn = QPoint(0, self.dice.choice((-120, 120)))
        where = QPointF(widget.mapToGlobal(at.toPoint()))
        none = (Qt.MouseButton.NoButton, Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase)
        QApplication.sendEvent(widget, QWheelEvent(at, where, QPoint(), turn, *none, False))

    def _drag(self) -> None:
        widget = self._target()
        start, end = self._point(widget), self._point(widget)
        QTest.mousePress(widget, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, start)
        for part in range(1, 5):
            QTest.mouseMove(widget, start + (end - start) * part / 4)
        QTest.mouseRelease(widget, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, end)

    def _switch(self) -> None:
        desk = self.window.desk
        what = self.dice.randrange(4)
        if what == 0:
            desk.sections.show_section(self.dice.choice(SECTIONS).key)
        elif what == 1:
            desk.answers.choose(self.dice.choice(PAGES).key)
        elif what == 2:
            self.window.resize(self.dice.randrange(700, 1920), self.dice.randrange(500, 1080))
        else:
            self.window.document.stack.undo()
