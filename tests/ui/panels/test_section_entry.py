"""Many rows in a section's table: paste, copy, more like one, one field of all, kinds, order, filter."""

import pytest
from PySide6.QtCore import QItemSelectionModel, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.edits_many import sort_section
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.add_many_dialog import AddManyDialog
from kitplanner.ui.dialogs.catalogue_dialog import CatalogueDialog
from kitplanner.ui.dialogs.paste_dialog import PasteDialog
from kitplanner.ui.dialogs.set_many_dialog import SetManyDialog
from kitplanner.ui.panels.section_panel import SectionPanel
from kitplanner.ui.panels.sections import section_of


class Desk:
    def __init__(self, qtbot, kind, section):
        self.document = PlanDocument(new_plan(kind))
        self.editing = Editing(self.document)
        self.panel = SectionPanel(section_of(section), self.editing)
        qtbot.addWidget(self.panel)
        self.document.plan_changed.connect(lambda _before, after: self.panel.show_plan(after, {}))
        self.panel.resize(700, 700)
        self.panel.show()
        self.panel.activateWindow()
        with qtbot.waitActive(self.panel):
            pass
        self.panel.open_details()
        self.entry = self.panel.entry
        self.table = self.panel.table

    def dialog(self, kind):
        (found,) = (widget for widget in self.panel.window().findChildren(kind) if widget.isVisible())
        return found

    def names(self, section):
        return [record.name for record in getattr(self.document.plan, section)]


@pytest.fixture
def people(qtbot):
    return Desk(qtbot, "camp", "people")


@pytest.fixture
def devices(qtbot):
    return Desk(qtbot, "camp", "devices")


@pytest.fixture(autouse=True)
def _empty_clipboard(qapp):
    yield
    QGuiApplication.clipboard().clear()


def test_keys_copy_rows_and_paste_them_back_with_a_preview(people, qtbot):
    people.panel.choose("L2")
    people.table.setFocus()
    qtbot.keyClick(people.table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    copied = QGuiApplication.clipboard().text()
    assert copied.splitlines()[1].startswith("L2\t")
    QGuiApplication.clipboard().setText("Name\tAge\nZora\t31\nYves\t47\n")
    qtbot.keyClick(people.table, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    dialog = people.dialog(PasteDialog)
    assert dialog.seen.count("new") == 2
    before = people.document.stack.count()
    dialog.take.click()
    assert people.names("people")[-2:] == ["Zora", "Yves"]
    assert people.document.stack.count() == before + 1
    assert people.document.stack.undoText() == "Paste 2 rows"
    assert people.panel.details.form.row("name").editor.text() == "Zora"
    people.document.stack.undo()
    assert "Zora" not in people.names("people")


def test_an_empty_clipboard_says_so(people, monkeypatch):
    told = []
    monkeypatch.setattr(ask, "tell", lambda _parent, text, _more="": told.append(text))
    QGuiApplication.clipboard().clear()
    people.entry.ask_paste()
    assert told[0].startswith("Nothing to paste")


def test_rows_are_copied_as_they_are_shown(people):
    people.entry.sort_by_column()
    people.table.selectAll()
    people.entry.copy_whole()
    ids = [line.split("\t")[0] for line in QGuiApplication.clipboard().text().splitlines()[1:]]
    wanted = sort_section("people", "name")(people.document.plan).people
    assert ids == [person.id for person in wanted]


def test_sorting_by_the_header_changes_the_view_and_the_plan_only_when_asked(people):
    before = people.document.plan
    header = people.table.horizontalHeader()
    header.setSortIndicator(1, Qt.SortOrder.DescendingOrder)
    assert people.document.plan is before
    assert not people.panel.button("up").isEnabled()
    assert people.entry.action("sort_plan").isEnabled()
    people.entry.action("sort_plan").trigger()
    assert people.document.plan.people == sort_section("people", "age", descending=True)(before).people
    assert people.panel.button("up").isEnabled()
    assert header.sortIndicatorSection() == -1
    people.document.stack.undo()
    assert people.document.plan == before


def test_the_keyboard_sorts_up_and_down_and_back(people):
    before = people.panel._view.ids()
    people.entry.sort_by_column()
    up = people.panel._view.ids()
    people.entry.sort_by_column()
    assert people.panel._view.sorted_by == ("name", True)
    assert set(people.panel._view.ids()) == set(up)
    people.entry.show_plan_order()
    assert people.panel._view.ids() == before


def test_the_filter_counts_and_never_hides_what_is_asked_for(people, qtbot):
    assert people.entry.isHidden()
    qtbot.keyClick(people.table, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    assert QApplication.focusWidget() is people.entry.filter
    qtbot.keyClicks(people.entry.filter, "quorin")
    assert people.entry.shown.text() == "1 of 24 shown"
    qtbot.keyClick(people.entry.filter, Qt.Key.Key_Return)
    assert people.panel.choose("L1")
    assert people.panel.current_id == "L1"
    assert people.entry.shown.text() == "24 of 24 shown"
    qtbot.keyClick(people.table, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    qtbot.keyClicks(people.entry.filter, "nobody")
    qtbot.keyClick(people.entry.filter, Qt.Key.Key_Escape)
    assert people.entry.isHidden()
    assert people.panel._view.rowCount() == 24
    assert QApplication.focusWidget() is people.table


def test_adding_while_filtered_shows_the_new_record(people):
    people.entry.filter.setText("quorin")
    people.panel.add_one()
    assert people.panel.current_id == people.document.plan.people[-1].id


def test_only_rows_in_sight_are_removed(people):
    people.entry.filter.setText("quorin")
    people.table.selectAll()
    people.panel.remove_chosen()
    assert len(people.document.plan.people) == 23
    assert "Quorin" not in people.names("people")


def test_removing_in_a_sorted_view_removes_the_row_chosen(people):
    people.table.horizontalHeader().setSortIndicator(1, Qt.SortOrder.AscendingOrder)
    people.panel.choose("L5")
    people.panel.remove_chosen()
    assert "L5" not in [person.id for person in people.document.plan.people]
    assert len(people.document.plan.people) == 23


def test_cells_of_a_sorted_view_are_written_into_their_own_record(people):
    people.table.horizontalHeader().setSortIndicator(1, Qt.SortOrder.DescendingOrder)
    people.panel.choose("L4")
    index = people.table.currentIndex()
    people.table.edit(index)
    editor = QApplication.focusWidget()
    editor.setText("Otis")
    people.table.commitData(editor)
    assert next(person for person in people.document.plan.people if person.id == "L4").name == "Otis"


def test_several_like_this(devices):
    name = devices.document.plan.devices[0].name
    devices.panel.choose(devices.document.plan.devices[0].id)
    devices.entry.action("like").trigger()
    dialog = devices.dialog(AddManyDialog)
    dialog.count.setValue(17)
    dialog.add.click()
    assert devices.document.stack.undoText() == f"Add 17 like {name}"
    assert devices.names("devices")[1] == f"{name} 2"
    assert devices.panel.current_id == devices.document.plan.devices[1].id


def test_a_kind_of_the_list(devices):
    devices.entry.action("kinds").trigger()
    dialog = devices.dialog(CatalogueDialog)
    dialog.choose("laptop")
    dialog.add.click()
    assert devices.names("devices")[-1] == "Laptop"
    assert devices.panel.current_id == devices.document.plan.devices[-1].id
    assert devices.document.stack.undoText() == "Add Laptop"


def test_one_field_of_the_chosen_rows(devices):
    flags = QItemSelectionModel.SelectionFlag.Select | QItemSelectionModel.SelectionFlag.Rows
    devices.panel._select_row(0)
    devices.table.selectionModel().select(devices.panel._view.index(2, 0), flags)
    devices.entry.action("set").trigger()
    dialog = devices.dialog(SetManyDialog)
    dialog.field.setCurrentIndex(dialog.field.findData("priority"))
    dialog.editor.setText("5")
    dialog.set_button.click()
    plan = devices.document.plan
    assert [plan.devices[place].priority for place in (0, 2)] == [5, 5]
    assert devices.document.stack.undoText() == "Set Priority of 2 rows"


@pytest.mark.parametrize("section", ["blocks", "groups", "people"])
def test_sections_offer_only_what_they_have(qtbot, section):
    desk = Desk(qtbot, "camp", section)
    has_table = section == "people"
    assert desk.entry.action("paste").isVisible() is has_table
    assert desk.entry.action("copy").isVisible() is has_table
    assert not desk.entry.action("kinds").isVisible()
    desk.panel.handle_rows("kinds")
    assert not desk.panel.window().findChildren(CatalogueDialog)


def test_the_way_of_giving_use_is_changed_without_changing_the_energy(devices):
    path = ("devices", devices.document.plan.devices[0].id)
    devices.panel.choose(path[1])
    form = devices.panel.details.form
    form.row("battery_wh").entered.emit("battery_wh", "15 Wh")
    form.row("use_by").entered.emit("use_by", "wh_per_day")
    form.row("use_wh_per_day").entered.emit("use_wh_per_day", "6")
    form.row("use_by").entered.emit("use_by", "percent")
    assert form.row("use_battery_fraction_per_day").editor.text() == "40"
    form.row("use_battery_fraction_per_day").entered.emit("use_battery_fraction_per_day", "20 %")
    form.row("use_by").entered.emit("use_by", "wh_per_day")
    assert float(form.row("use_wh_per_day").editor.text()) == 3.0


def test_a_way_that_cannot_hold_the_use_is_refused_and_nothing_changes(devices):
    device = devices.document.plan.devices[0]
    form = devices.panel.details.form
    devices.panel.choose(device.id)
    form.row("use_by").entered.emit("use_by", "wh_per_day")
    form.row("battery_wh").entered.emit("battery_wh", "")
    before = devices.document.plan
    form.row("use_by").entered.emit("use_by", "percent")
    assert devices.document.plan is before
    assert "percent needs a battery" in form.row("use_by").problem
