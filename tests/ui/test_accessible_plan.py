"""A household plan made through the accessibility tree alone, as a screen reader's user would; then by keyboard.

Nothing here knows an object's name or holds a widget: parts are found by role and name from the application down, and
only what their interfaces offer is done to them. Both ways must end in the same plan.
"""

from __future__ import annotations

import time
from collections.abc import Iterator

import pytest
from msgspec import structs
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible, QAccessibleInterface
from PySide6.QtWidgets import QApplication

from kitplanner.plan.records import Plan
from tests.ui.shell import let_go, make_window, wait_until_loaded

Role = QAccessible.Role
TEXT = QAccessible.Text
DEEPEST = 40
PATIENCE_S = 10.0


@pytest.fixture
def window(qtbot):
    window = make_window("camp")
    window.resize(1400, 900)
    window.show()
    window.activateWindow()
    wait_until_loaded(window, qtbot)
    yield window
    let_go(window)


def below(interface: QAccessibleInterface, depth: int = 0) -> Iterator[QAccessibleInterface]:
    """An interface and everything in it; menus that are not open yet belong to it."""
    closed_menu = interface.role() in (Role.PopupMenu, Role.MenuItem)
    if depth > DEEPEST or not interface.isValid() or (interface.state().invisible and not closed_menu):
        return
    yield interface
    for place in range(interface.childCount()):
        child = interface.child(place)
        if child is not None:
            yield from below(child, depth + 1)


def find(role: QAccessible.Role, name: str) -> QAccessibleInterface:
    """The part with a role and a name, from the application down, as soon as it is there: a press takes a moment."""
    end = time.monotonic() + PATIENCE_S
    while True:
        QApplication.processEvents()
        root = QAccessible.queryAccessibleInterface(QApplication.instance())
        whole = [one for place in range(root.childCount()) for one in below(root.child(place)) if one.role() == role]
        found = [one for one in whole if one.text(TEXT.Name) == name]
        if found:
            return found[-1]
        names = sorted({one.text(TEXT.Name) for one in whole})
        assert time.monotonic() < end, f"no {role.name} {name!r} among {names}"


def act(role: QAccessible.Role, name: str, action: str = "Press") -> None:
    """Do one of the things a part offers."""
    interface = find(role, name).actionInterface()
    assert action in interface.actionNames(), f"{name}: {interface.actionNames()}"
    interface.doAction(action)
    QApplication.processEvents()


def set_number(name: str, value: int) -> None:
    """Give a number to a part that has one."""
    find(Role.SpinBox, name).valueInterface().setCurrentValue(value)
    assert find(Role.SpinBox, name).valueInterface().currentValue() == value


def write(name: str, text: str) -> None:
    """Put a text in place of the one that stands in a field."""
    act(Role.EditableText, name, "SetFocus")
    field = find(Role.EditableText, name)
    before = field.text(TEXT.Value)
    field.editableTextInterface().replaceText(0, len(before), text)


def made_by_tree() -> None:
    """Begin a household and answer the five questions."""
    act(Role.MenuItem, "New…")
    act(Role.Button, "Household")
    set_number("Days", 4)
    act(Role.Button, "Next question")
    set_number("aged 18 to 49", 3)
    act(Role.Button, "Next question")
    set_number("Smartphone", 1)
    act(Role.Button, "Next question")
    find(Role.SpinBox, "Pedal stand")
    act(Role.Button, "Next question")
    find(Role.SpinBox, "Power bank 20 Ah")
    act(Role.Button, "Make the plan now")
    find(Role.ListItem, "Stores, 1 records")


def bank_by_tree() -> None:
    """Say how full the bank is."""
    act(Role.MenuItem, "Stores")
    write("Charge at the start", "10")
    act(Role.Table, "Stores", "SetFocus")


def activate(window, qtbot) -> None:
    """Give the keys to the window again after a dialog, as a window manager does."""
    window.activateWindow()
    qtbot.waitUntil(window.isActiveWindow)


def made_by_keys(qtbot, window) -> None:
    """The same with keys alone."""

    def press(key, times: int = 1, held=Qt.KeyboardModifier.NoModifier) -> None:
        for _ in range(times):
            qtbot.keyClick(QApplication.focusWidget(), key, held)
            QApplication.processEvents()

    press(Qt.Key.Key_N, held=Qt.KeyboardModifier.ControlModifier)
    qtbot.waitUntil(lambda: QApplication.activeModalWidget() is not None)
    press(Qt.Key.Key_Return)
    for text in ("4", "3", "1"):
        qtbot.keyClicks(QApplication.focusWidget(), text)
        press(Qt.Key.Key_Return)
    press(Qt.Key.Key_Return, 2)
    activate(window, qtbot)
    press(Qt.Key.Key_4, held=Qt.KeyboardModifier.ControlModifier)
    press(Qt.Key.Key_F6)
    for _ in range(60):
        if QAccessible.queryAccessibleInterface(QApplication.focusWidget()).text(TEXT.Name) == "Charge at the start":
            break
        press(Qt.Key.Key_Tab)
    qtbot.keyClicks(QApplication.focusWidget(), "10")
    press(Qt.Key.Key_Return)


def test_a_household_is_made_through_the_accessibility_tree_alone(window, qtbot):
    made_by_tree()
    activate(window, qtbot)
    bank_by_tree()
    by_tree: Plan = window.document.plan
    assert (by_tree.title, by_tree.days, len(by_tree.people)) == ("Household", 4, 3)
    assert by_tree.stores[0].start_fraction == 0.1
    # The guess of the start is gone with its note: what stands there now is the own value.
    assert "start_fraction" not in by_tree.stores[0].notes
    verdict = find(Role.Border, "Verdict")
    words = [one.text(TEXT.Name) for one in below(verdict)]
    assert any("Does not fit" in text for text in words), words
    window.document.stack.setClean()
    made_by_keys(qtbot, window)
    by_keys = window.document.plan
    assert by_keys is not by_tree
    # Both may stand on either side of midnight; everything else is the same.
    assert structs.replace(by_keys, start=by_tree.start) == by_tree
