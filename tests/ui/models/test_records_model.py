"""The table model: row differences by id, drafts in the cell, spoken cells."""

import pytest
from PySide6.QtCore import QItemSelectionModel, QPersistentModelIndex, Qt
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QTableView

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.fields import FIELDS
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.models.records_model import RecordsModel

Role = Qt.ItemDataRole


class Desk:
    """A document and a model that follows it, under Qt's own model tester."""

    def __init__(self, kind="camp", section="people", record="person"):
        self.document = PlanDocument(new_plan(kind))
        self.editing = Editing(self.document)
        columns = tuple(spec for spec in FIELDS[record] if spec.column)
        self.section = section
        self.model = RecordsModel((section,), columns, self.editing)
        self.tester = QAbstractItemModelTester(self.model, QAbstractItemModelTester.FailureReportingMode.Fatal)
        self.model.set_records(getattr(self.document.plan, section))
        self.document.plan_changed.connect(self.follow)

    def follow(self, _before, after):
        self.model.set_records(getattr(after, self.section))

    def column(self, key):
        return next(i for i, spec in enumerate(self.model.specs) if spec.key == key)

    def cell(self, row, key):
        return self.model.index(row, self.column(key))


@pytest.fixture
def desk(qapp):
    return Desk()


def test_an_edit_goes_through_the_document_and_tells_one_row(desk):
    changes = []
    desk.model.dataChanged.connect(lambda first, last: changes.append((first.row(), last.row())))
    assert desk.model.setData(desk.cell(2, "age"), "32")
    assert desk.document.plan.people[2].age == 32
    assert set(changes) == {(2, 2)}
    assert desk.cell(2, "age").data() == "32"
    desk.document.stack.undo()
    assert desk.cell(2, "age").data() == "31"


def test_a_wrong_entry_stays_in_the_cell_with_its_reason(desk):
    assert not desk.model.setData(desk.cell(2, "age"), "3l")
    assert desk.cell(2, "age").data() == "3l ⚠"
    assert desk.cell(2, "age").data(Role.EditRole) == "3l"
    assert "not a number" in desk.cell(2, "age").data(Role.ToolTipRole)
    assert "not a number" in desk.cell(2, "age").data(Role.AccessibleTextRole)
    desk.model.setData(desk.cell(2, "age"), "31")
    assert desk.cell(2, "age").data() == "31"


def test_removal_and_undo_keep_selection_and_persistent_rows(desk, qtbot):
    view = QTableView()
    qtbot.addWidget(view)
    view.setModel(desk.model)
    view.selectionModel().setCurrentIndex(desk.cell(3, "name"), QItemSelectionModel.SelectionFlag.ClearAndSelect)
    kept = QPersistentModelIndex(desk.cell(3, "name"))
    resets = []
    desk.model.modelReset.connect(lambda: resets.append(1))
    name = desk.cell(3, "name").data()
    desk.editing.remove("people", ("L1",))
    assert (kept.row(), view.currentIndex().row()) == (2, 2)
    desk.document.stack.undo()
    assert (kept.row(), kept.data()) == (3, name)
    desk.editing.move(("people", "L1"), 5)
    assert (kept.row(), kept.data()) == (2, name)
    desk.editing.add("people", 3)
    assert desk.model.rowCount() == 27
    assert resets == []


def test_another_plan_is_shown_whole(desk):
    desk.document.new_plan(new_plan("household"))
    assert desk.model.rowCount() == len(desk.document.plan.people)
    assert desk.cell(0, "name").data() == desk.document.plan.people[0].name


def test_records_with_the_same_id_do_not_upset_the_model(desk):
    first = desk.document.plan.people[0]
    desk.model.set_records((first, first))
    desk.model.set_records((first,))
    assert desk.model.rowCount() == 1


def test_an_empty_optional_value_shows_its_default_in_italics(desk):
    desk.editing.enter(("people", "L1", "bout_min"), desk.model.specs[desk.column("bout_min")], "")
    index = desk.cell(0, "bout_min")
    assert index.data(Role.EditRole) == ""
    assert index.data() not in ("", "None")
    assert index.data(Role.FontRole).italic()
    assert desk.cell(0, "age").data(Role.FontRole) is None


def test_a_field_without_meaning_cannot_be_edited(qapp):
    desk = Desk("bench", "stations", "station")
    index = desk.cell(0, "output_w")
    assert not index.flags() & Qt.ItemFlag.ItemIsEditable
    assert index.data() == "–"


def test_cells_and_headings_are_spoken_with_name_value_and_unit(desk):
    assert desk.cell(0, "age").data(Role.AccessibleTextRole) == "Hesmira, Age: 58 years"
    heading = desk.model.headerData(desk.column("age"), Qt.Orientation.Horizontal)
    assert heading == "Age, years"


def test_percent_stands_at_display_scale(qapp):
    desk = Desk("camp", "devices", "device")
    index = desk.cell(0, "start_fraction")
    assert index.data() == "50"
    desk.model.setData(index, "62.5")
    assert desk.document.plan.devices[0].start_fraction == 0.625


def test_markup_in_a_name_never_reaches_a_tool_tip_as_markup(desk):
    desk.model.setData(desk.cell(0, "age"), "<img src='x'>")
    tip = desk.cell(0, "age").data(Role.ToolTipRole)
    assert "<img" not in tip
    assert "&lt;img" in tip


def test_problems_mark_cell_and_record(desk):
    desk.model.set_problems({("people", "L1", "age"): "Too old; enter less."})
    assert desk.cell(0, "age").data() == "58 ⚠"
    assert desk.cell(0, "name").data() == "Hesmira ⚠"
    assert "Too old" in desk.cell(0, "age").data(Role.ToolTipRole)
    desk.model.set_problems({})
    assert desk.cell(0, "name").data() == "Hesmira"


def test_an_index_of_another_time_gets_no_answer(desk):
    stale = desk.model.index(23, 0)
    desk.model.set_records(desk.document.plan.people[:1])
    assert desk.model.data(stale) is None
    assert desk.model.data(desk.model.index(-1, 0)) is None
