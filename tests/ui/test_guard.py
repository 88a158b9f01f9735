"""A fault in an overridden virtual is reported and answered, never raised into Qt."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QWidget

from kitplanner.ui.guard import guarded


class Faulty(QWidget):
    @guarded(QSize(7, 9))
    def sizeHint(self):
        return 1 / 0

    @guarded()
    def paintEvent(self, _event):
        int("a")


def test_fault_is_reported_and_default_given(qtbot):
    with qtbot.captureExceptions() as caught:
        widget = Faulty()
        qtbot.addWidget(widget)
        assert widget.sizeHint() == QSize(7, 9)
        widget.resize(20, 20)
        widget.grab()
    assert {kind for kind, _value, _trace in caught} == {ZeroDivisionError, ValueError}


def test_value_passes_through():
    assert guarded(0)(lambda: 5)() == 5
