"""The whole program with a window onto its accessibility tree: run by the walks, it only ever reads.

Started as `python probe.py [PLAN]`. A line on standard input asks for "all", for "windows" without their parts or for
the part with the "focus"; the answer is one line of JSON on standard output. Everything that happens to the program
comes from the display server, as it does for a user; only when standard input ends, with the walk, it quits by itself.
"""

from __future__ import annotations

import json
import os
import sys
from collections.abc import Iterator
from pathlib import Path

from PySide6.QtCore import QObject, QSocketNotifier, Slot
from PySide6.QtGui import QAccessible, QAccessibleInterface
from PySide6.QtWidgets import QApplication, QWidget

from kitplanner.app import window as program

# Rows of a long table are read with the keyboard, not one by one here.
MOST_CHILDREN = 80
TEXT = QAccessible.Text


def below(interface: QAccessibleInterface, depth: int = 0) -> Iterator[QAccessibleInterface]:
    """An interface and everything in it that is in sight."""
    if not interface.isValid() or interface.state().invisible:
        return
    yield interface
    if depth > 40:
        return
    for place in range(min(interface.childCount(), MOST_CHILDREN)):
        child = interface.child(place)
        if child is not None:
            yield from below(child, depth + 1)


def described(interface: QAccessibleInterface) -> dict[str, object]:
    """What a screen reader could tell about an interface, and where it stands on the screen."""
    box, state = interface.rect(), interface.state()
    number = interface.valueInterface()
    return {
        "role": interface.role().name,
        "name": interface.text(TEXT.Name),
        "description": interface.text(TEXT.Description),
        "value": interface.text(TEXT.Value),
        "number": None if number is None else number.currentValue(),
        "number_low": None if number is None else number.minimumValue(),
        "number_high": None if number is None else number.maximumValue(),
        "box": [box.x(), box.y(), box.width(), box.height()],
        "focused": bool(state.focused),
        "enabled": not state.disabled,
        "checked": bool(state.checked),
        "selected": bool(state.selected),
    }


def focused() -> dict[str, object] | None:
    """The part that takes the keys, None where there is none."""
    widget = QApplication.focusWidget()
    interface = None if widget is None else QAccessible.queryAccessibleInterface(widget)
    return None if interface is None else described(interface.focusChild() or interface)


def windows(*, with_parts: bool) -> list[dict[str, object]]:
    """Every window in sight with its tree, the one that takes the keys marked."""
    found = []
    for widget in QApplication.topLevelWidgets():
        if not widget.isVisible() or not isinstance(widget, QWidget):
            continue
        root = QAccessible.queryAccessibleInterface(widget) if with_parts else None
        found.append(
            {
                "id": int(widget.winId()),
                "title": widget.windowTitle(),
                "popup": widget is QApplication.activePopupWidget(),
                "modal": widget is QApplication.activeModalWidget(),
                "active": widget is QApplication.activeWindow(),
                "kind": widget.metaObject().className(),
                "parts": [described(one) for one in below(root)] if root is not None else [],
            }
        )
    return found


class Probe(QObject):
    """Answers each line that comes in."""

    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        self._notifier = QSocketNotifier(sys.stdin.fileno(), QSocketNotifier.Type.Read, self)
        self._notifier.activated.connect(self.answer)

    @Slot()
    def answer(self) -> None:
        asked = os.read(sys.stdin.fileno(), 4096).strip()
        if not asked:
            self._notifier.setEnabled(False)
            QApplication.exit(1)
            return
        told = focused() if asked == b"focus" else windows(with_parts=asked == b"all")
        print(json.dumps(told), flush=True)


def main() -> int:
    """Start the program as its own entry does, with the probe beside it; return the exit code."""
    desk = program.prepare(Path(sys.argv[1]) if len(sys.argv) > 1 else None)
    probe = Probe(desk.app)
    desk.window.show()
    code = desk.app.exec()
    probe.deleteLater()
    desk.collector.stop()
    desk.document.close()
    return code


if __name__ == "__main__":
    sys.exit(main())
