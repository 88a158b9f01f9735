"""Forms from FIELDS: what is shown, what is asked, and the problem beside the field."""

import pytest
from PySide6.QtWidgets import QLabel

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.cautions import cautions_for
from kitplanner.plan.fields import FIELDS, is_shown
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.widgets.record_form import RecordForm


class Desk:
    def __init__(self, kind, section, plan):
        self.document = PlanDocument(new_plan(plan))
        self.editing = Editing(self.document)
        self.form = RecordForm(FIELDS[kind], self.editing)
        self.section = section
        self.problems = {}
        self.show()
        self.document.plan_changed.connect(lambda *_: self.show())

    def show(self):
        record = getattr(self.document.plan, self.section)[0]
        self.form.show_record((self.section, record.id), record, self.problems)

    @property
    def record(self):
        return getattr(self.document.plan, self.section)[0]

    def type(self, key, text):
        row = self.form.row(key)
        row.entered.emit(key, text)


@pytest.fixture
def person(qtbot):
    desk = Desk("person", "people", "camp")
    qtbot.addWidget(desk.form)
    return desk


@pytest.mark.parametrize(
    ("kind", "section", "plan"),
    [
        ("person", "people", "shelter"),
        ("station", "stations", "bench"),
        ("store", "stores", "camp"),
        ("device", "devices", "camp"),
    ],
)
def test_only_fields_that_mean_something_are_shown(qtbot, kind, section, plan):
    desk = Desk(kind, section, plan)
    qtbot.addWidget(desk.form)
    desk.form.show()
    for spec in FIELDS[kind]:
        assert desk.form.row(spec.key).isVisible() == is_shown(spec, desk.record), spec.key


def test_every_editor_has_name_and_buddy(person):
    for key in person.form.field_keys():
        row = person.form.row(key)
        assert row.editor.accessibleName() == row.label.text()
        assert row.label.buddy() is row.editor


def test_typing_is_one_step_and_the_form_follows_undo(person):
    editor = person.form.row("age").editor
    editor.setText("59")
    editor.editingFinished.emit()
    assert person.record.age == 59
    person.document.stack.undo()
    assert editor.text() == "58"


def test_a_wrong_entry_keeps_its_text_and_says_why_beside_the_field(person):
    editor = person.form.row("age").editor
    editor.setText("5B")
    editor.editingFinished.emit()
    row = person.form.row("age")
    assert editor.text() == "5B"
    assert "not a number" in row.problem
    assert "not a number" in editor.accessibleDescription()
    person.type("cap_min", "20")
    assert editor.text() == "5B"
    editor.setText("59")
    editor.editingFinished.emit()
    assert row.problem == ""


def test_a_problem_of_the_plan_stands_beside_its_field(person):
    person.problems = {("people", person.record.id, "age"): "99 is too much; enter less."}
    person.show()
    assert person.form.row("age").problem == "99 is too much; enter less."


def test_choosing_another_description_shows_its_fields(person):
    person.form.show()
    person.type("watts_by", "own")
    assert person.form.row("own_legs_w").isVisible()
    assert not person.form.row("share_legs_fraction").isVisible()


def test_an_inline_caution_stands_behind_its_field(person):
    inline = tuple(one for one in cautions_for(person.document.plan, "people") if one.how == "inline")
    person.form.show_cautions(inline)
    (note,) = person.form.notes()
    assert "leave it at 0" in note.text
    layout = person.form.layout()
    at_note, _ = layout.getWidgetPosition(note)
    at_field, _ = layout.getWidgetPosition(person.form.row("cap_min"))
    assert at_note == at_field + 1
    person.form.show_cautions(())
    assert person.form.notes() == ()


def test_no_label_reads_markup(person):
    from PySide6.QtCore import Qt

    person.type("name", "<b>Ada</b>")
    assert all(label.textFormat() == Qt.TextFormat.PlainText for label in person.form.findChildren(QLabel))
