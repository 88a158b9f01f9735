"""Pasted and imported tables: seen before they are taken, taken in one step, nothing lost."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog

from kitplanner.plan.catalogue import new_plan
from kitplanner.session.document import PlanDocument
from kitplanner.ui.dialogs.import_dialog import ImportDialog
from kitplanner.ui.dialogs.paste_dialog import PasteDialog

GOOD = "Name\tNumber\tOwn battery [Wh]\tUse a day\nPhone Z\t3\t15.4\t6\nLamp Z\t2\t7\t1\n"
BAD = "Name\tNumber\nPhone Z\t3\nLamp Z\ttwo\n"


@pytest.fixture
def plan(qapp):
    return new_plan("camp")


def pasted(qtbot, plan, text, section="devices", onto=()):
    dialog = PasteDialog(plan, section, text, onto)
    qtbot.addWidget(dialog)
    dialog.show()
    dialog.edits = []
    dialog.taken.connect(lambda edit, count, where: dialog.edits.append((edit, count, where)))
    return dialog


def texts_of(dialog, column):
    return [dialog.model.index(row, column).data() for row in range(dialog.model.rowCount())]


def test_good_rows_are_one_step(qtbot, plan):
    dialog = pasted(qtbot, plan, GOOD)
    assert texts_of(dialog, 1) == ["new", "new"]
    assert dialog.summary.text() == "2 rows: 2 new."
    dialog.take.click()
    ((edit, count, where),) = dialog.edits
    document = PlanDocument(plan)
    assert document.apply(edit, "Paste 2 rows") is None
    assert (count, where, document.stack.count()) == (2, "devices", 1)
    assert [(one.name, one.count, one.battery_wh) for one in document.plan.devices[-2:]] == [
        ("Phone Z", 3, 15.4),
        ("Lamp Z", 2, 7.0),
    ]
    document.stack.undo()
    assert document.plan == plan


def test_a_bad_cell_stops_the_whole_block_and_is_named_until_its_row_is_left_out(qtbot, plan):
    dialog = pasted(qtbot, plan, BAD)
    assert not dialog.take.isEnabled()
    assert "Row 3, column Number" in dialog.remarks.toPlainText()
    assert texts_of(dialog, 1) == ["new", "cannot be taken"]
    assert dialog.model.index(1, 3).data() == "two ⚠"
    assert "two" in dialog.model.index(1, 3).data(Qt.ItemDataRole.AccessibleTextRole)
    dialog.leave_out.click()
    assert texts_of(dialog, 1)[1] == "left out"
    dialog.take.click()
    edit, count, _ = dialog.edits[0]
    assert count == 1
    assert [one.name for one in edit(plan).devices[len(plan.devices) :]] == ["Phone Z"]


def test_known_names_change_their_record_and_say_which_field(qtbot, plan):
    name = plan.devices[0].name
    dialog = pasted(qtbot, plan, f"Name\tNumber\n{name}\t{plan.devices[0].count + 1}\n")
    assert texts_of(dialog, 1) == ["changes Number"]
    dialog.take.click()
    assert dialog.edits[0][0](plan).devices[0].count == plan.devices[0].count + 1


def test_a_block_without_names_goes_onto_the_chosen_rows_only_when_asked(qtbot, plan):
    ids = tuple(person.id for person in plan.people[:2])
    dialog = pasted(qtbot, plan, "31\n32\n", "people", ids)
    assert dialog.onto.isVisible()
    assert not dialog.onto.isChecked()
    dialog.first.setCurrentIndex(dialog.first.findData("age"))
    dialog.onto.click()
    assert [row.record_id for row in dialog.seen.rows] == list(ids)
    dialog.take.click()
    assert [person.age for person in dialog.edits[0][0](plan).people[:2]] == [31, 32]


def test_decimals_are_read_as_the_user_says(qtbot, plan):
    dialog = pasted(qtbot, plan, "Name\tOwn battery [Wh]\nPhone Z\t1,500\n")
    assert "two ways" in dialog.remarks.toPlainText()
    dialog.decimal.setCurrentIndex(1)
    assert not dialog.seen.problems
    dialog.take.click()
    assert dialog.edits[0][0](plan).devices[-1].battery_wh == 1.5


def test_what_is_no_table_says_so_and_takes_nothing(qtbot, plan):
    dialog = pasted(qtbot, plan, "Mystery\tRiddle\n")
    dialog.header.click()
    assert not dialog.take.isEnabled()
    assert dialog.summary.text().endswith(".")


def test_a_choice_of_header_is_kept(qtbot, plan):
    dialog = pasted(qtbot, plan, "Name\nAda\n", "people")
    assert dialog.header.isChecked()
    dialog.header.click()
    assert len(dialog.seen.rows) == 2
    dialog.header.click()
    assert len(dialog.seen.rows) == 1


def test_escape_takes_nothing(qtbot, plan):
    dialog = pasted(qtbot, plan, GOOD)
    qtbot.keyClick(dialog, Qt.Key.Key_Escape)
    assert dialog.edits == []


def test_a_long_paste_is_read_on_the_thread(qtbot, plan):
    text = "Name\tAge\n" + "\n".join(f"Person {number} of many\t{20 + number % 40}" for number in range(9000))
    dialog = pasted(qtbot, plan, text, "people")
    assert not dialog.take.isEnabled()
    qtbot.waitUntil(lambda: dialog.seen is not None, timeout=20000)
    assert dialog.seen.count("new") == 9000
    assert dialog.take.isEnabled()
    dialog.done(QDialog.DialogCode.Rejected)


def imported(qtbot, plan, path, section="people"):
    dialog = ImportDialog(plan, section, path)
    qtbot.addWidget(dialog)
    dialog.show()
    qtbot.waitUntil(lambda: dialog.summary.text() not in ("", "Reading…"), timeout=20000)
    return dialog


def test_a_csv_file_goes_where_it_is_told(qtbot, plan, tmp_path):
    path = tmp_path / "kit.csv"
    path.write_text("Name;Number\nBank Z;2\n", encoding="utf-8")
    dialog = imported(qtbot, plan, path)
    dialog.where.setCurrentIndex(dialog.where.findData("stores"))
    qtbot.waitUntil(lambda: dialog.seen is not None and dialog.seen.section == "stores", timeout=20000)
    assert dialog.section == "stores"
    assert dialog.sheet.isHidden()
    taken = []
    dialog.taken.connect(lambda edit, _count, where: taken.append((edit, where)))
    dialog.take.click()
    assert taken[0][1] == "stores"
    assert taken[0][0](plan).stores[-1].name == "Bank Z"


def test_a_workbook_is_read_sheet_by_sheet(qtbot, plan, tmp_path):
    openpyxl = pytest.importorskip("openpyxl")
    pytest.importorskip("python_calamine")
    book = openpyxl.Workbook()
    book.active.append(["Name", "Age"])
    book.active.append(["Ada", 40])
    second = book.create_sheet("more")
    for row in (["Name", "Age"], ["Bo", 50], ["Cem", 60]):
        second.append(row)
    path = tmp_path / "people.xlsx"
    book.save(path)
    dialog = imported(qtbot, plan, path)
    assert dialog.seen.count("new") == 1
    dialog.sheet.setValue(2)
    qtbot.waitUntil(lambda: dialog.seen is not None and len(dialog.seen.rows) == 2, timeout=20000)
    dialog.sheet.setValue(9)
    qtbot.waitUntil(lambda: dialog.seen is None and dialog.summary.text() != "Reading…", timeout=20000)
    assert not dialog.take.isEnabled()


def test_without_the_spreadsheets_extra_a_workbook_is_one_clear_sentence(qtbot, plan, tmp_path, monkeypatch):
    path = tmp_path / "people.xlsx"
    path.write_bytes(b"PK\x03\x04")
    monkeypatch.setitem(__import__("sys").modules, "python_calamine", None)
    dialog = imported(qtbot, plan, path)
    assert "spreadsheets extra" in dialog.summary.text()
    assert not dialog.take.isEnabled()


def test_a_file_that_cannot_be_read_is_named(qtbot, plan, tmp_path):
    dialog = imported(qtbot, plan, tmp_path / "gone.csv")
    assert dialog.summary.text().startswith("gone.csv")
