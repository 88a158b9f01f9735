"""The table twin: figures as text, copied whole, user text never read as markup."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QGuiApplication, QKeyEvent

from kitplanner.ui.pages.plain_table import PlainTable, PlainTableModel, TableData

DATA = TableData(("day", "used", "made"), (("1", "30.7", "6.6"), ("<b>2</b>", "31", "0")))


@pytest.fixture
def table(qtbot):
    widget = PlainTable("Days")
    qtbot.addWidget(widget)
    widget.resize(400, 200)
    widget.set_data(DATA)
    widget.show()
    return widget


def test_model_keeps_qt_s_rules(qtmodeltester):
    model = PlainTableModel()
    model.set_data(DATA)
    qtmodeltester.check(model, force_py=True)


def test_shows_text_literally(table):
    assert table.model().index(1, 0).data() == "<b>2</b>"
    assert "<b>" not in table.model().index(1, 0).data(Qt.ItemDataRole.ToolTipRole)


def test_copies_the_selection_for_a_spreadsheet(table):
    table.selectAll()
    key = QKeyEvent(QEvent.Type.KeyPress, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    table.keyPressEvent(key)
    assert QGuiApplication.clipboard().text() == "1\t30.7\t6.6\n<b>2</b>\t31\t0"


def test_selection_stays_when_only_figures_change(table):
    table.selectRow(1)
    table.set_data(TableData(DATA.headers, (("1", "30.7", "7"), ("2", "31", "1"))))
    assert table.selectionModel().selectedRows()[0].row() == 1
    assert table.model().index(1, 2).data() == "1"


def test_height_follows_the_rows(table):
    before = table.sizeHint().height()
    table.set_data(TableData(DATA.headers, DATA.rows * 3))
    assert table.sizeHint().height() == before + 4 * table.verticalHeader().defaultSectionSize()


def test_has_a_name_and_is_read_only(table):
    assert table.accessibleName() == "Days"
    assert not table.model().flags(table.model().index(0, 0)) & Qt.ItemFlag.ItemIsEditable
