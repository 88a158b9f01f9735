"""Tables in and out of files, through the File menu."""

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import QApplication

from kitplanner.plan.exchange_tables import read_table
from kitplanner.ui import table_actions
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.export_dialog import ExportDialog
from kitplanner.ui.dialogs.import_dialog import ImportDialog
from tests.ui.shell import let_go, make_window


@pytest.fixture
def window(qtbot):
    window = make_window("camp")
    window.load_workbench()
    window.show()
    yield window
    let_go(window)


@pytest.fixture
def told(monkeypatch):
    sentences = []
    monkeypatch.setattr(ask, "tell", lambda _parent, text, _more="": sentences.append(text))
    return sentences


def test_a_table_comes_in_as_one_step_and_its_section_is_shown(window, monkeypatch, tmp_path, qtbot):
    path = tmp_path / "stores.csv"
    path.write_text("Name,Number\nBank Z,2\nBank Y,1\n", encoding="utf-8")
    monkeypatch.setattr(ask, "ask_table_path", lambda *_: path)
    window.desk.sections.show_section("stores")
    before = window.document.plan
    window.desk.sections.show_section("stores")
    window.desk.menus.action("import").trigger()
    (dialog,) = window.findChildren(ImportDialog)
    qtbot.waitUntil(lambda: dialog.seen is not None, timeout=20000)
    window.desk.sections.show_section("people")
    dialog.take.click()
    assert [store.name for store in window.document.plan.stores[-2:]] == ["Bank Z", "Bank Y"]
    assert window.desk.sections.current == "stores"
    assert window.document.stack.undoText() == "Import 2 rows"
    window.document.stack.undo()
    assert window.document.plan == before


@pytest.mark.parametrize("ending", ["csv", "xlsx"])
def test_a_table_goes_out(window, monkeypatch, tmp_path, ending, told):
    pytest.importorskip("openpyxl")
    pytest.importorskip("python_calamine")
    path = tmp_path / f"devices.{ending}"
    monkeypatch.setattr(ask, "ask_export_path", lambda *_: path)
    window.desk.sections.show_section("devices")
    window.desk.menus.action("export").trigger()
    (dialog,) = window.findChildren(ExportDialog)
    dialog.save.click()
    assert told == []
    table = read_table(path)
    assert len(table.rows) == 1 + len(window.document.plan.devices)


def test_what_cannot_be_written_is_one_sentence(window, monkeypatch, tmp_path, told):
    path = tmp_path / "gone" / "devices.csv"
    monkeypatch.setattr(ask, "ask_export_path", lambda *_: path)
    window.desk.tables.export_chosen("devices")
    window.findChildren(ExportDialog)[0].save.click()
    assert len(told) == 1
    assert "devices.csv" in told[0]


def test_without_the_writer_of_workbooks_the_sentence_says_what_to_install(window, monkeypatch, tmp_path, told):
    monkeypatch.setitem(__import__("sys").modules, "openpyxl", None)
    monkeypatch.setattr(ask, "ask_export_path", lambda *_: tmp_path / "devices.xlsx")
    window.desk.tables.export_chosen("devices")
    window.findChildren(ExportDialog)[0].save.click()
    assert "spreadsheets" in told[0]
    assert not (tmp_path / "devices.xlsx").exists()


def test_a_dropped_table_is_shown_before_it_is_taken(window, tmp_path, qtbot):
    path = tmp_path / "people.csv"
    path.write_text("Name,Age\nZora,31\n", encoding="utf-8")
    before = window.document.plan
    window.desk.sections.show_section("people")
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(path))])
    keys = (Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier)
    enter = QDragEnterEvent(window.rect().center(), Qt.DropAction.CopyAction, data, *keys)
    QApplication.sendEvent(window, enter)
    assert enter.isAccepted()
    QApplication.sendEvent(window, QDropEvent(QPointF(5, 5), Qt.DropAction.CopyAction, data, *keys))
    (dialog,) = window.findChildren(ImportDialog)
    qtbot.waitUntil(lambda: dialog.seen is not None, timeout=20000)
    assert dialog.section == "people"
    assert window.document.plan is before


def test_a_change_of_mind_writes_nothing(window, monkeypatch, tmp_path):
    monkeypatch.setattr(ask, "ask_export_path", lambda *_: None)
    monkeypatch.setattr(ask, "ask_table_path", lambda *_: None)
    monkeypatch.setattr(table_actions, "write_bytes", lambda *_: pytest.fail("nothing is to be written"))
    window.desk.tables.export_chosen("devices")
    window.findChildren(ExportDialog)[0].save.click()
    window.desk.tables.import_chosen("devices")
    assert not [dialog for dialog in window.findChildren(ImportDialog) if dialog.isVisible()]
