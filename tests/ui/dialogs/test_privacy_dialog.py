"""What is stored about people, and deleting them for good: a search of every byte finds no name."""

from __future__ import annotations

import datetime

import pytest
from msgspec.structs import replace
from PySide6.QtWidgets import QApplication, QCheckBox

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.edits import set_value
from kitplanner.plan.files import Recovery, backup_path, read_plan, write_plan, write_recovery
from kitplanner.plan.records import Bout, Device, MedicalNeed, Plan, Rota
from kitplanner.planners.balance import balance
from kitplanner.session.document import PlanDocument
from kitplanner.session.forget import forecast
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.privacy_dialog import DeletePeopleDialog, PrivacyDialog
from tests.ui.shell import let_go, make_window, wait_until_loaded

NAMES = ("Zorvannik", "Quellibre")


def named_plan() -> Plan:
    plan = new_plan("camp")
    one, two = plan.people[0], plan.people[1]
    people = (replace(one, name=NAMES[0]), replace(two, name=NAMES[1]), *plan.people[2:])
    devices = (replace(plan.devices[0], name=f"Phone of {NAMES[0]}"), *plan.devices[1:])
    bout = Bout(id="b1", day=1, start="10:00", end="10:15", station=plan.stations[0].id, person=one.id)
    return replace(plan, title="Meadow", people=people, devices=devices, rota=Rota(id="r", bouts=(bout,)))


@pytest.fixture
def window(qtbot, tmp_path):
    path = tmp_path / "meadow.kitplan"
    write_plan(path, named_plan())
    window = make_window(plan=Plan())
    window.document.open_file(path)
    window.show()
    wait_until_loaded(window, qtbot)
    yield window
    window.desk.autosave.close()
    let_go(window)


def opened(window, kind):
    return next(one for one in window.findChildren(kind) if one.isVisible())


def test_everything_about_one_person_with_the_papers_that_show_it(qtbot):
    plan = named_plan()
    dialog = PrivacyDialog(plan, plan.people[0].id)
    rows = {line.cells[0]: line.cells for line in reversed(dialog.table.lines)}
    assert rows["Name"][1] == NAMES[0]
    assert rows["Name"][3] == "rota for the wall"
    assert rows["Age"][3] == "–"
    assert rows["Turns in the adopted rota"][1] == "day 1 10:00-10:15"
    assert any(NAMES[0] in line.cells[1] and "devices" in line.cells[2] for line in dialog.table.lines)
    assert "Health questions are shown and never stored" in dialog.text()
    dialog.person.setCurrentIndex(1)
    assert dialog.table.lines[0].cells[1] == NAMES[1]
    dialog.close()


def test_an_empty_plan_says_that_nobody_is_in_it(qtbot):
    dialog = PrivacyDialog(Plan())
    assert "holds nobody" in dialog.text()
    assert not dialog.delete.isEnabled()
    dialog.close()


def test_deleting_says_first_what_goes_and_changes_nothing_until_confirmed(window, qtbot):
    understanding = window.desk.understanding
    understanding.show_privacy()
    opened(window, PrivacyDialog).delete.click()
    dialog = opened(window, DeletePeopleDialog)
    text = dialog.text()
    assert "24 people\tdeleted" in text
    assert "1 turn of the rota\tdeleted; 15 min turned by 1 person stay" in text
    assert "meadow.kitplan\twritten anew without people" in text
    assert "cannot be undone" in text
    dialog.reject()
    assert len(window.document.plan.people) == 24


def test_after_deleting_no_byte_of_any_file_and_no_undo_step_holds_a_name(window, qtbot, tmp_path):
    document, understanding = window.document, window.desk.understanding
    places = understanding.places()
    first = document.plan.people[0].id
    document.apply(set_value(("people", first, "name"), "Nirrowen"), "rename")
    document.save()
    document.apply(set_value(("title",), "Meadow of Quellibre"), "title")
    window.desk.autosave.write_now()
    window.desk.autosave.wait()
    old = places.recovery / "older.json"
    now = datetime.datetime.now(datetime.UTC)
    write_recovery(old, Recovery(plan=named_plan(), original=str(document.path), original_sha256=None, saved_at=now))
    places.notes.parent.mkdir(parents=True, exist_ok=True)
    places.notes.write_text(f"KeyError {NAMES[1]}\n", encoding="utf-8")
    names = (*NAMES, "Nirrowen")
    files = [document.path, backup_path(document.path), window.desk.autosave.file, old, places.notes]
    assert all(any(name.encode() in file.read_bytes() for name in names) for file in files)
    understanding.delete_people()
    folders = (tmp_path, places.recovery, places.notes.parent)
    left = [
        (file.name, name)
        for folder in folders
        for file in folder.rglob("*")
        if file.is_file()
        for name in names
        if name.encode() in file.read_bytes() or name.encode("utf-16-le") in file.read_bytes()
    ]
    assert left == []
    assert document.plan.people == ()
    assert document.plan.rota is None
    assert document.stack.count() == 0
    assert not document.is_modified
    assert "24 people took part, 1 of them turned 15 min" in read_plan(document.path).notes["title"].source
    assert not any(name in document.plan.title for name in names)
    for file in (old, places.notes):
        file.unlink(missing_ok=True)


def test_recovery_files_of_other_plans_are_left_alone(window, qtbot):
    places = window.desk.understanding.places()
    places.recovery.mkdir(parents=True, exist_ok=True)
    foreign = places.recovery / "foreign.json"
    now = datetime.datetime.now(datetime.UTC)
    other = replace(new_plan("household"), title="Another")
    write_recovery(foreign, Recovery(plan=other, original=None, original_sha256=None, saved_at=now))
    before = foreign.read_bytes()
    window.desk.understanding.delete_people()
    assert foreign.read_bytes() == before
    foreign.unlink()


def test_a_file_changed_by_another_program_stops_everything_before_anything_goes(window, qtbot, monkeypatch):
    told = []
    monkeypatch.setattr(ask, "tell", lambda _parent, text: told.append(text))
    write_plan(window.document.path, replace(named_plan(), title="Changed elsewhere"))
    window.desk.understanding.delete_people()
    assert len(window.document.plan.people) == 24
    assert "was changed by another program" in told[0]


def test_a_plan_without_a_file_is_cleaned_too(qtbot, tmp_path):
    document = PlanDocument(named_plan())
    window = make_window(plan=named_plan())
    window.load_workbench()
    found = forecast(window.document, window.desk.understanding.places())
    assert found.totals.people == 24
    assert found.files == ()
    window.desk.understanding.delete_people()
    assert window.document.plan.people == ()
    assert window.document.path is None
    document.close()
    let_go(window)


def test_health_questions_stand_at_the_limits_and_are_stored_nowhere(window, qtbot):
    window.desk.sections.show_section("people")
    QApplication.processEvents()
    form = window.desk.sections.panel.details.form
    note = next(note for note in form.notes() if note.caution == "C5")
    assert "heart" in note.text
    assert "leave it at 0" in note.text
    assert note.box() is None
    assert not any("health" in key or "reason" in key for key in window.document.plan.people[0].__struct_fields__)


def test_the_medical_list_stands_apart_and_is_never_ticked_or_covered(window, qtbot):
    need = MedicalNeed(id="n", name="Breathing aid", power_w=40.0, hours_per_day=24.0)
    plan = window.document.plan
    before = balance(plan)
    after = balance(replace(plan, medical_needs=(*plan.medical_needs, need)))
    assert after.need_wh == before.need_wh
    assert all(row.device != "n" for row in after.devices)
    window.document.apply(lambda one: replace(one, medical_needs=(need,)), "medical")
    window.desk.sections.show_section("medical_needs")
    QApplication.processEvents()
    panel = window.desk.sections.panel
    assert panel.findChildren(QCheckBox) == []
    model = panel.table.model()
    checks = [model.index(0, column).data(10) for column in range(model.columnCount())]
    assert checks == [None] * model.columnCount()
    assert "outside this balance" in window.verdict.medical.text()
    assert Device.__struct_fields__ != MedicalNeed.__struct_fields__
