"""Menus: everything reachable, keys and letters unique, undo named."""

from collections import Counter

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QApplication, QMenu

from kitplanner.ui.dialogs.about import TextDialog, about_text, keys_text
from kitplanner.ui.menus import SCHEMES, TEXT_PERCENTS
from tests.ui.shell import let_go, make_window


@pytest.fixture
def window(qtbot):
    window = make_window()
    window.load_workbench()
    window.show()
    yield window
    let_go(window)


def all_actions(menu):
    for action in menu.actions():
        yield action
        if isinstance(action.menu(), QMenu):
            yield from all_actions(action.menu())


def test_no_key_stands_for_two_things(window):
    keys = Counter(
        action.shortcut().toString()
        for top in window.menuBar().actions()
        for action in all_actions(top.menu())
        if not action.shortcut().isEmpty()
    )
    assert [key for key, count in keys.items() if count > 1] == []
    assert {"Ctrl+O", "Ctrl+S", "Ctrl+Shift+S", "Ctrl+Z", "Ctrl+P", "Ctrl+Q"} <= set(keys)


def test_letters_are_unique_in_each_menu(window):
    def letters(menu):
        texts = [action.text().replace("&&", "") for action in menu.actions()]
        return [text[text.index("&") + 1].lower() for text in texts if "&" in text]

    menus = [action.menu() for top in window.menuBar().actions() for action in all_actions(top.menu()) if action.menu()]
    for menu in [window.menuBar(), *(top.menu() for top in window.menuBar().actions()), *menus]:
        assert [letter for letter, count in Counter(letters(menu)).items() if count > 1] == []


def test_undo_is_named_and_works_from_the_menu(window):
    window.desk.editing.add("people")
    undo = window.desk.menus.action("undo")
    assert undo.text() == "&Undo Add person"
    undo.trigger()
    assert len(window.document.plan.people) == 24
    window.desk.menus.action("redo").trigger()
    assert len(window.document.plan.people) == 25


def test_add_copy_and_remove_work_on_the_section_shown(window):
    window.desk.sections.show_section("stores")
    before = len(window.document.plan.stores)
    window.desk.menus.action("add").trigger()
    window.desk.menus.action("duplicate").trigger()
    assert len(window.document.plan.stores) == before + 2
    window.desk.menus.action("remove").trigger()
    assert len(window.document.plan.stores) == before + 1


def test_missing_recent_files_are_greyed_not_dropped(window, tmp_path):
    (tmp_path / "there").write_text("")
    window.desk.menus.show_recent((tmp_path / "there", tmp_path / "gone & away"))
    there, gone = window.desk.menus._recent.actions()
    assert there.isEnabled()
    assert not gone.isEnabled()
    assert "gone && away" in gone.text()


def test_look_of_the_window_is_ticked(window):
    window.desk.menus.show_view("dark", 150)
    assert [action.data() for action in window.desk.menus._schemes.actions() if action.isChecked()] == ["dark"]
    assert [action.data() for action in window.desk.menus._percents.actions() if action.isChecked()] == [150]
    assert len(SCHEMES) == 4
    assert TEXT_PERCENTS[-1] == 200


def test_about_says_what_the_plan_is_and_is_not(qtbot):
    assert "Planning aid" in about_text()
    assert "medical advice" in about_text()


def test_keys_are_listed_and_the_dialog_frees_itself(window, qtbot):
    text = keys_text(window.menuBar())
    assert "Save: Ctrl+S" in text
    dialog = TextDialog("Keys", text, window)
    dialog.open()
    assert dialog.text() == text
    gone = []
    dialog.destroyed.connect(lambda: gone.append(1))
    dialog.reject()
    qtbot.waitUntil(lambda: gone == [1])


def test_the_keyboard_alone_can_add_name_and_undo_a_person(window, qtbot):
    """Ctrl+2 people, Ctrl+Shift+N add, type a name, Return, Ctrl+Z twice."""
    window.activateWindow()
    qtbot.waitUntil(lambda: QApplication.activeWindow() is window)
    both = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
    qtbot.keyClick(window, Qt.Key.Key_2, Qt.KeyboardModifier.ControlModifier)
    assert window.desk.sections.current == "people"
    qtbot.keyClick(window, Qt.Key.Key_N, both)
    editor = QApplication.focusWidget()
    assert editor.accessibleName() == "Name"
    qtbot.keyClicks(editor, "Nell")
    qtbot.keyClick(editor, Qt.Key.Key_Return)
    assert window.document.plan.people[-1].name == "Nell"
    qtbot.keyClick(editor, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    qtbot.keyClick(QApplication.focusWidget() or window, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert len(window.document.plan.people) == 24


def test_the_right_button_offers_what_the_keys_do(window):
    table = window.desk.sections.panel.table
    assert table.contextMenuPolicy() == Qt.ContextMenuPolicy.ActionsContextMenu
    assert [action.text() for action in table.actions()] != []
    assert table.mapToGlobal(QPoint(0, 0)) is not None
