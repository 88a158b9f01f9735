"""Editors show what they are told, report text, and leave undo to the plan while nothing is typed."""

import pytest
from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QApplication, QWidget

from kitplanner.plan.fields import FIELDS, field
from kitplanner.ui.widgets.editors import (
    LEAST_TARGET_PX,
    ChoiceEditor,
    FlagEditor,
    LineEditor,
    NumberEditor,
    RefsEditor,
    make_editor,
)


@pytest.fixture
def make(qtbot):
    def build(kind, key):
        editor = make_editor(field(kind, key))
        qtbot.addWidget(editor)
        editor.said = []
        editor.entered.connect(editor.said.append)
        return editor

    return build


def test_every_field_has_an_editor_that_is_easy_to_hit(qtbot):
    holder = QWidget()
    qtbot.addWidget(holder)
    for specs in FIELDS.values():
        for spec in specs:
            editor = make_editor(spec, holder)
            assert max(editor.minimumHeight(), editor.minimumSizeHint().height()) >= LEAST_TARGET_PX - 2, spec.key


def test_an_entry_is_reported_once_and_only_when_it_differs(make, qtbot):
    editor = make("person", "name")
    editor.show_text("Ada")
    editor.editingFinished.emit()
    assert editor.said == []
    editor.setText("Ada L.")
    editor.editingFinished.emit()
    editor.editingFinished.emit()
    assert editor.said == ["Ada L."]


def test_an_empty_field_shows_its_default_in_italics(make):
    editor = make("person", "bout_min")
    editor.show_text("", "20 min")
    assert editor.placeholderText() == "20 min"
    assert editor.font().italic()
    editor.setText("15")
    assert not editor.font().italic()


@pytest.mark.parametrize(
    ("key", "start", "after"),
    [
        (Qt.Key.Key_Up, "15", "16"),
        (Qt.Key.Key_Down, "15", "14"),
        (Qt.Key.Key_PageUp, "15", "25"),
        (Qt.Key.Key_Up, "x", "x"),
    ],
)
def test_keys_step_a_number(make, qtbot, key, start, after):
    editor = make("person", "bout_min")
    assert isinstance(editor, NumberEditor)
    editor.show_text(start)
    qtbot.keyClick(editor, key)
    assert editor.text() == after


def test_steps_stop_at_the_ends_of_the_range_and_keep_percent(make, qtbot):
    editor = make("plan", "margin_fraction")
    editor.show_text("199.5")
    qtbot.keyClick(editor, Qt.Key.Key_PageUp)
    assert editor.text() == "200"
    editor.show_text("15")
    qtbot.keyClick(editor, Qt.Key.Key_Up)
    assert editor.text() == "16"


def test_escape_gives_back_what_was_shown(make, qtbot):
    editor = make("person", "age")
    editor.show_text("58")
    editor.setText("5800")
    qtbot.keyClick(editor, Qt.Key.Key_Escape)
    assert editor.text() == "58"


@pytest.mark.parametrize(("typed", "taken_by_field"), [("58", False), ("59", True)])
def test_undo_belongs_to_the_plan_while_nothing_is_typed(make, qtbot, typed, taken_by_field):
    editor = make("person", "age")
    editor.show_text("58")
    editor.setText(typed)
    event = QKeyEvent(QEvent.Type.ShortcutOverride, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    event.ignore()
    QApplication.sendEvent(editor, event)
    assert event.isAccepted() is taken_by_field


def test_a_choice_reports_the_value_and_offers_the_default(make):
    editor = make("person", "may_watch")
    assert isinstance(editor, ChoiceEditor)
    editor.show_text("", "adults")
    assert editor.currentText() == "default: adults"
    editor.setCurrentIndex(editor.findData("no"))
    editor.activated.emit(editor.currentIndex())
    assert editor.said == ["no"]


def test_a_reference_to_nothing_is_shown_and_not_replaced(make):
    editor = make("person", "group")
    editor.show_text("G9", "none", {"G1": "Leaders"})
    assert editor.currentData() == "G9"


def test_a_flag_reports_yes_and_no(make, qtbot):
    editor = make("station", "guarded")
    assert isinstance(editor, FlagEditor)
    editor.show_text("yes")
    editor.click()
    assert editor.said == ["no"]


def test_several_references_can_be_picked(make):
    editor = make("person", "stations")
    assert isinstance(editor, RefsEditor)
    editor.show_text("Pedal stand", "all", {"S1": "Pedal stand", "S2": "Crank & co"})
    editor._fill_menu()
    actions = editor._menu.actions()
    assert [action.isChecked() for action in actions] == [True, False]
    editor._on_triggered(actions[1])
    assert editor.said == ["Pedal stand, Crank & co"]
    editor.setAccessibleName("Allowed stations")
    assert editor.line().accessibleName() == "Allowed stations"
    assert isinstance(editor.line(), LineEditor)
