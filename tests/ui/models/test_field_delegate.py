"""Cell editors keep what is typed."""

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QApplication, QTableView

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.fields import FIELDS
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.models.field_delegate import FieldDelegate
from kitplanner.ui.models.records_model import RecordsModel
from kitplanner.ui.widgets.editors import ChoiceEditor, LineEditor, NumberEditor


@pytest.fixture
def table(qtbot):
    document = PlanDocument(new_plan("camp"))
    editing = Editing(document)
    columns = tuple(spec for spec in FIELDS["device"] if spec.column) + tuple(
        spec for spec in FIELDS["device"] if spec.key in ("kind", "use_windows", "evening")
    )
    model = RecordsModel(("devices",), columns, editing)
    model.set_records(document.plan.devices)
    document.plan_changed.connect(lambda _before, after: model.set_records(after.devices))
    view = QTableView()
    qtbot.addWidget(view)
    view.setModel(model)
    model.setParent(view)
    view.setItemDelegate(FieldDelegate(view))
    view.resize(900, 400)
    view.show()
    view.document = document
    return view


def open_editor(view, key):
    column = next(i for i, spec in enumerate(view.model().specs) if spec.key == key)
    index = view.model().index(0, column)
    view.setCurrentIndex(index)
    view.edit(index)
    return view.findChild(ChoiceEditor) or view.findChild(NumberEditor) or view.findChild(LineEditor)


def press(qtbot, editor, key):
    qtbot.keyClick(editor, key)
    # Qt commits a cell's entry from the event queue.
    QApplication.processEvents()


def test_a_number_keeps_all_its_digits(table, qtbot):
    editor = open_editor(table, "battery_wh")
    assert isinstance(editor, NumberEditor)
    assert editor.text() == "11.1"
    editor.setText("3.14159")
    press(qtbot, editor, Qt.Key.Key_Return)
    assert table.document.plan.devices[0].battery_wh == 3.14159


def test_return_without_a_change_is_no_step(table, qtbot):
    editor = open_editor(table, "battery_wh")
    press(qtbot, editor, Qt.Key.Key_Return)
    assert table.document.stack.count() == 0


def test_escape_gives_up_the_entry(table, qtbot):
    editor = open_editor(table, "battery_wh")
    editor.setText("99")
    press(qtbot, editor, Qt.Key.Key_Escape)
    assert table.document.stack.count() == 0


def test_a_wrong_number_stays_as_a_draft(table, qtbot):
    editor = open_editor(table, "battery_wh")
    editor.setText("eleven")
    press(qtbot, editor, Qt.Key.Key_Return)
    assert table.document.stack.count() == 0
    assert open_editor(table, "battery_wh").text() == "eleven"


def test_a_choice_is_taken_when_it_is_chosen(table, qtbot):
    editor = open_editor(table, "kind")
    assert isinstance(editor, ChoiceEditor)
    assert editor.currentData() == "radio"
    editor.setCurrentIndex(editor.findData("light"))
    editor.activated.emit(editor.currentIndex())
    assert table.document.plan.devices[0].kind == "light"


def test_windows_are_typed_as_text(table, qtbot):
    editor = open_editor(table, "use_windows")
    assert editor.text() == "07:00-19:00"
    editor.setText("8-9, 18:30-20")
    press(qtbot, editor, Qt.Key.Key_Return)
    assert [window.start for window in table.document.plan.devices[0].use_windows] == ["08:00", "18:30"]


@pytest.mark.parametrize("kind", [NumberEditor, ChoiceEditor])
def test_the_wheel_over_an_editor_without_focus_changes_nothing(qtbot, kind):
    spec = next(spec for spec in FIELDS["device"] if spec.key == ("priority" if kind is NumberEditor else "use_by"))
    editor = kind(spec)
    qtbot.addWidget(editor)
    editor.show_text("3" if kind is NumberEditor else "percent")
    wheel = QWheelEvent(
        QPointF(5, 5),
        QPointF(5, 5),
        QPoint(0, 0),
        QPoint(0, 120),
        Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(editor, wheel)
    shown = editor.text() if kind is NumberEditor else editor.currentData()
    assert shown == ("3" if kind is NumberEditor else "percent")
