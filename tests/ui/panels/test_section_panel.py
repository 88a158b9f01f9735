"""Sections: table and form together, stages and other parts."""

import pytest
from PySide6.QtCore import Qt

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.fields import STAGE_KINDS
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.dialogs import ask
from kitplanner.ui.panels import section_panel
from kitplanner.ui.panels.section_panel import SectionPanel
from kitplanner.ui.panels.sections import SECTIONS, section_of


class Desk:
    def __init__(self, qtbot, kind, section):
        self.document = PlanDocument(new_plan(kind))
        self.editing = Editing(self.document)
        self.panel = SectionPanel(section_of(section), self.editing)
        qtbot.addWidget(self.panel)
        self.document.plan_changed.connect(lambda _before, after: self.panel.show_plan(after, {}))
        self.panel.show()
        self.panel.open_details()


@pytest.fixture
def bench(qtbot):
    return Desk(qtbot, "bench", "stations")


@pytest.fixture
def people(qtbot):
    return Desk(qtbot, "camp", "people")


@pytest.mark.parametrize("section", [section.key for section in SECTIONS])
def test_every_section_opens_on_an_empty_plan_too(qtbot, section):
    desk = Desk(qtbot, "camp", section)
    from kitplanner.plan.records import Plan

    desk.document.new_plan(Plan())
    if desk.panel.table is not None:
        assert desk.panel.current_id == ""
        desk.panel.add_one()
        assert desk.panel.current_id != ""


def test_the_form_follows_the_table(people):
    people.panel.choose("L3")
    assert people.panel.details.form.row("name").editor.text() == "Quorin"
    people.panel.details.form.row("age").entered.emit("age", "32")
    assert people.document.plan.people[2].age == 32
    assert people.panel.current_id == "L3"


def test_buttons_add_copy_move_and_remove(people, monkeypatch):
    press = people.panel.button
    people.panel.choose("L2")
    press("up").click()
    assert [person.id for person in people.document.plan.people[:2]] == ["L2", "L1"]
    press("down").click()
    press("duplicate").click()
    assert len(people.document.plan.people) == 25
    press("remove").click()
    assert len(people.document.plan.people) == 24
    monkeypatch.setattr(section_panel, "ask_how_many", lambda *_: 5)
    press("several").click()
    assert len(people.document.plan.people) == 29
    monkeypatch.setattr(section_panel, "ask_how_many", lambda *_: 0)
    press("several").click()
    assert len(people.document.plan.people) == 29
    assert ask.ask_how_many is not None


def test_delete_removes_the_selected_rows(people, qtbot):
    people.panel.table.selectAll()
    people.panel.remove_chosen()
    assert people.document.plan.people == ()
    people.document.stack.undo()
    assert len(people.document.plan.people) == 24


def test_stages_can_be_added_by_kind_moved_and_removed(bench):
    stages = bench.panel.details.stages
    assert stages.list().count() == 3
    menu = stages.button("add").menu()
    assert [action.data() for action in menu.actions()] == list(STAGE_KINDS)
    stages.list().setCurrentRow(0)
    menu.triggered.emit(menu.actions()[STAGE_KINDS.index("converter")])
    kinds = [type(stage).__name__ for stage in bench.document.plan.stations[0].stages]
    assert kinds == ["DiodeStage", "ConverterStage", "LinearStage", "CableStage"]
    assert stages.list().currentRow() == 1
    stages.button("down").click()
    assert type(bench.document.plan.stations[0].stages[2]).__name__ == "ConverterStage"
    assert stages.list().currentRow() == 2
    stages.button("up").click()
    stages.button("remove").click()
    assert len(bench.document.plan.stations[0].stages) == 3


def test_each_stage_has_the_form_of_its_kind(bench):
    stages = bench.panel.details.stages
    stages.choose("s2")
    stages.form().row("r2_ohm").entered.emit("r2_ohm", "390")
    assert bench.document.plan.stations[0].stages[1].r2_ohm == 390
    assert bench.document.stack.undoText() == (
        "Change resistor from adjust to ground of Linear regulator 120/360, no heat sink of "
        "Small fast hand crank, linear regulator"
    )
    stages.form().row("r2_ohm").entered.emit("r2_ohm", "many")
    assert "⚠" in stages.list().item(1).text()


def test_a_station_by_parts_shows_its_machine_gear_and_test_load(bench, qtbot):
    details = bench.panel.details
    for key in ("machine", "gear", "test_load"):
        assert details.part_form(key).isVisible()
    details.part_form("gear").row("ratio").entered.emit("ratio", "25")
    assert bench.document.plan.stations[0].gear.ratio == 25
    details.form.row("described_by").entered.emit("described_by", "measured")
    assert not details.part_form("gear").isVisible()
    assert not details.stages.isVisible()


@pytest.mark.parametrize(
    "path",
    [("stations", "C-5V", "count"), ("stations", "A", "gear", "ratio"), ("stations", "A", "stages", "s2", "r1_ohm")],
)
def test_a_place_of_the_plan_leads_to_its_field(bench, qtbot, path):
    bench.panel.activateWindow()
    qtbot.waitExposed(bench.panel)
    assert bench.panel.focus_field(path)
    assert bench.panel.current_id == path[1]


def test_a_place_that_is_gone_leads_nowhere(bench):
    assert not bench.panel.focus_field(("stations", "gone", "count"))


def test_temperatures_of_single_days_can_be_edited(qtbot):
    desk = Desk(qtbot, "camp", "plan")
    parts = desk.panel.details.temperatures
    assert parts.list().count() == 3
    parts.button("add").click()
    assert len(desk.document.plan.conditions.temperatures) == 4
    parts.form().row("air_degc").entered.emit("air_degc", "31")
    assert 31 in [part.air_degc for part in desk.document.plan.conditions.temperatures]
    assert desk.panel.focus_field(("conditions", "air_degc"))
    assert desk.panel.focus_field(("days",))


def test_the_table_keeps_the_keyboard_out_of_its_cells_when_tabbing(people):
    assert not people.panel.table.tabKeyNavigation()
    assert people.panel.table.focusPolicy() == Qt.FocusPolicy.StrongFocus
