"""More like one, one field of all, kinds, export."""

import pytest
from PySide6.QtCore import Qt

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.catalogue_kinds import CATALOGUE_SECTIONS, kinds
from kitplanner.plan.device_use import device_use_wh_per_day
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.dialogs.add_many_dialog import AddManyDialog
from kitplanner.ui.dialogs.catalogue_dialog import CatalogueDialog
from kitplanner.ui.dialogs.export_dialog import ExportDialog
from kitplanner.ui.dialogs.set_many_dialog import SetManyDialog


def shown(qtbot, dialog):
    qtbot.addWidget(dialog)
    dialog.show()
    dialog.told = []
    dialog.chosen.connect(lambda *told: dialog.told.append(told))
    return dialog


@pytest.fixture
def editing(qapp):
    document = PlanDocument(new_plan("camp"))
    editing = Editing(document)
    document.setParent(editing)
    return editing


def test_seventeen_like_this(qtbot, editing):
    plan = editing.plan
    dialog = shown(qtbot, AddManyDialog(plan, "devices", plan.devices[0].id))
    dialog.count.setValue(17)
    name = plan.devices[0].name
    assert f"Named {name} 2 to {name} 18." in dialog.names.text()
    qtbot.keyClick(dialog.count, Qt.Key.Key_Return)
    ((edit, count),) = dialog.told
    after = edit(plan).devices
    assert (count, len(after)) == (17, len(plan.devices) + 17)
    assert {one.battery_wh for one in after[:18]} == {plan.devices[0].battery_wh}


def test_one_field_of_all_keeps_what_was_typed_until_it_can_be_taken(qtbot, editing):
    ids = tuple(device.id for device in editing.plan.devices[:3])
    dialog = shown(qtbot, SetManyDialog(editing, "devices", ids, "battery_wh"))
    dialog.editor.setText("12 Wx")
    dialog.set_button.click()
    assert dialog.told == []
    assert dialog.editor.text() == "12 Wx"
    assert "battery" in dialog.problem.text()
    dialog.editor.setText("3000 mAh at 4 V")
    dialog.set_button.click()
    ((edit, label, count),) = dialog.told
    assert (label, count) == ("Own battery", 3)
    assert [device.battery_wh for device in edit(editing.plan).devices[:3]] == [12.0] * 3


def test_another_way_of_use_keeps_the_energy_of_every_row(qtbot, editing):
    ids = tuple(device.id for device in editing.plan.devices)
    dialog = shown(qtbot, SetManyDialog(editing, "devices", ids, "use_by"))
    dialog.editor.setCurrentIndex(dialog.editor.findData("wh_per_day"))
    dialog.set_button.click()
    after = dialog.told[0][0](editing.plan)
    assert {device.use_by for device in after.devices} == {"wh_per_day"}
    for before, now in zip(editing.plan.devices, after.devices, strict=True):
        assert device_use_wh_per_day(now) == pytest.approx(device_use_wh_per_day(before), rel=1e-12)


def test_different_values_are_not_put_over_the_others_unseen(qtbot, editing):
    ids = tuple(person.id for person in editing.plan.people)
    dialog = shown(qtbot, SetManyDialog(editing, "people", ids, "age"))
    assert dialog.editor.text() == ""
    dialog.field.setCurrentIndex(dialog.field.findData("stations"))
    assert dialog.spec.key == "stations"
    dialog.set_button.click()
    assert dialog.told[0][1]


@pytest.mark.parametrize("section", ["people", "devices", "stores", "stations", "blocks", "charging_points"])
def test_every_field_of_a_section_can_be_shown(qtbot, editing, section):
    records = getattr(editing.plan, section)
    dialog = shown(qtbot, SetManyDialog(editing, section, (records[0].id,)))
    for place in range(dialog.field.count()):
        dialog.field.setCurrentIndex(place)
        assert dialog.editor.isVisible()
        assert dialog.editor.accessibleName()
    dialog.reject()


@pytest.mark.parametrize("section", CATALOGUE_SECTIONS)
def test_every_kind_shows_its_values_with_marks_and_can_be_added(qtbot, editing, section):
    for kind in kinds(section):
        dialog = shown(qtbot, CatalogueDialog(section))
        dialog.choose(kind.key)
        lines = [dialog.values.topLevelItem(row) for row in range(dialog.values.topLevelItemCount())]
        sources = {line.text(4) for line in lines if line.text(4)}
        assert sources <= {note.source for note in kind.notes.values()}
        assert sources
        dialog.count.setValue(4)
        dialog.add.click()
        record = getattr(dialog.told[0][0](editing.plan), section)[-1]
        assert (record.count, record.notes) == (4, kind.notes)


def test_a_kind_is_found_by_a_word_and_its_source_is_shown_whole(qtbot):
    dialog = shown(qtbot, CatalogueDialog("devices"))
    dialog.search.setText("LAPTOP")
    assert dialog.kind.key == "laptop"
    line = next(
        dialog.values.topLevelItem(row)
        for row in range(dialog.values.topLevelItemCount())
        if dialog.values.topLevelItem(row).text(4)
    )
    dialog.values.setCurrentItem(line)
    assert dialog.source.text() == f"{line.text(0)}: {line.text(4)}"
    dialog.search.setText("nothing of this name")
    assert dialog.kind is None
    assert not dialog.add.isEnabled()
    dialog.search.setText("")
    assert dialog.add.isEnabled()


def test_names_go_out_only_when_asked_for(qtbot, editing):
    dialog = shown(qtbot, ExportDialog(editing.plan, "people"))
    assert "Name" not in dialog.sheet().header
    assert "left out" in dialog.remark.text()
    dialog.names.setChecked(True)
    assert "Name" in dialog.sheet().header
    dialog.decimal.setCurrentIndex(1)
    dialog.save.click()
    assert dialog.told[0][0].decimal_comma
