"""New, open, save: every question asked, nothing lost on the way."""

import pytest

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import read_plan, write_plan
from kitplanner.plan.records import Plan
from kitplanner.session.document import PlanDocument
from kitplanner.ui.dialogs import ask
from tests.ui.shell import let_go, make_window


@pytest.fixture
def window(qtbot):
    window = make_window("household")
    window.load_workbench()
    yield window
    let_go(window)


@pytest.fixture
def told(monkeypatch):
    sentences = []
    monkeypatch.setattr(ask, "tell", lambda _parent, text, _more="": sentences.append(text))
    return sentences


def test_save_as_gives_the_plan_a_file_and_save_keeps_to_it(window, monkeypatch, tmp_path):
    path = tmp_path / "row.kitplan"
    asked = []
    monkeypatch.setattr(ask, "ask_save_path", lambda _parent, suggestion: asked.append(suggestion) or path)
    window.desk.editing.add("people")
    assert window.desk.files.save()
    window.desk.editing.add("people")
    assert window.desk.files.save()
    assert len(asked) == 1
    assert asked[0].name == "Quillaby Row 7.kitplan"
    assert read_plan(path) == window.document.plan
    assert window.settings.recent_files == (path,)


def test_a_save_that_was_called_off_keeps_the_plan_unsaved(window, monkeypatch):
    monkeypatch.setattr(ask, "ask_save_path", lambda *_: None)
    window.desk.editing.add("people")
    assert not window.desk.files.save()
    assert window.isWindowModified()


def test_what_is_being_typed_is_saved_too(window, monkeypatch, tmp_path, qtbot):
    window.show()
    qtbot.waitExposed(window)
    monkeypatch.setattr(ask, "ask_save_path", lambda *_: tmp_path / "row.kitplan")
    window.desk.sections.show_section("people")
    row = window.desk.sections.panel.details.form.row("age")
    row.editor.setFocus()
    row.editor.setText("77")
    row.editor.editingFinished.emit()
    assert window.desk.files.save()
    assert read_plan(tmp_path / "row.kitplan").people[0].age == 77


def test_opening_a_bad_file_says_why_and_keeps_the_plan(window, told, tmp_path):
    path = tmp_path / "bad.kitplan"
    path.write_text("{")
    before = window.document.plan
    window.desk.files.open_path(path)
    assert len(told) == 1
    assert "bad.kitplan" in told[0]
    assert window.document.plan is before


@pytest.mark.parametrize(("answer", "opened"), [(ask.Answer.CANCEL, False), (ask.Answer.DISCARD, True)])
def test_opening_asks_about_unsaved_changes(window, monkeypatch, tmp_path, answer, opened):
    path = tmp_path / "camp.kitplan"
    write_plan(path, new_plan("camp"))
    window.desk.editing.add("people")
    monkeypatch.setattr(ask, "ask_save", lambda *_: answer)
    window.desk.files.open_path(path)
    assert (window.document.path == path) is opened


def test_a_file_in_use_can_be_opened_as_a_copy(window, monkeypatch, tmp_path):
    path = tmp_path / "camp.kitplan"
    write_plan(path, new_plan("camp"))
    other = PlanDocument()
    other.open_file(path)
    monkeypatch.setattr(ask, "ask_open_copy", lambda *_: ask.Answer.COPY)
    window.desk.files.open_path(path)
    assert window.document.path is None
    assert window.document.plan == new_plan("camp")
    other.close()


@pytest.mark.parametrize("answer", [ask.Answer.CANCEL, ask.Answer.SAVE, ask.Answer.COPY])
def test_a_file_changed_elsewhere_is_asked_about(window, monkeypatch, tmp_path, answer):
    path, other = tmp_path / "row.kitplan", tmp_path / "other.kitplan"
    window.document.save_as(path)
    write_plan(path, Plan(title="Elsewhere"))
    window.desk.editing.add("people")
    monkeypatch.setattr(ask, "ask_replace", lambda *_: answer)
    monkeypatch.setattr(ask, "ask_save_path", lambda *_: other)
    assert window.desk.files.save() is (answer is not ask.Answer.CANCEL)
    assert (read_plan(path).title == "Elsewhere") is (answer is not ask.Answer.SAVE)
    assert other.exists() is (answer is ask.Answer.COPY)


@pytest.mark.parametrize("kind", ["household", "camp", "shelter", "bench", ""])
def test_every_new_plan_can_be_begun(window, kind):
    window.desk.menus.new_requested.emit(kind)
    assert window.document.plan == (new_plan(kind) if kind else Plan())
    assert window.document.path is None
    assert window.recompute.results is not None


def test_a_pdf_that_cannot_be_written_is_said(window, monkeypatch, told, tmp_path):
    monkeypatch.setattr(ask, "ask_pdf_path", lambda *_: tmp_path / "missing" / "effort.pdf")
    window.desk._export_effort()
    assert len(told) == 1


def test_the_effort_table_is_written_as_pdf(window, monkeypatch, told, tmp_path):
    path = tmp_path / "effort.pdf"
    monkeypatch.setattr(ask, "ask_pdf_path", lambda *_: path)
    window.desk._export_effort()
    assert told == []
    assert path.read_bytes().startswith(b"%PDF")


def test_names_get_the_ending_of_a_plan(qtbot, monkeypatch, tmp_path):
    from PySide6.QtWidgets import QFileDialog

    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(tmp_path / "row"), ""))
    assert ask.ask_save_path(None, tmp_path) == tmp_path / "row.kitplan"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: ("", ""))
    assert ask.ask_save_path(None, tmp_path) is None
