"""The document: edits, undo, files, lock; nothing lost and no exception into Qt."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from kitplanner.plan.edits import EditError, set_value
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Person, Plan
from kitplanner.session.document import DocumentError, FileChangedError, FileInUseError, PlanDocument
from kitplanner.session.file_lock import FileLock


@pytest.fixture
def document(qapp):
    document = PlanDocument(Plan(title="Hut", people=(Person(id="P1", name="Ada"),)))
    yield document
    document.close()


def test_an_edit_is_one_named_step_and_marks_the_document(document):
    seen = []
    document.plan_changed.connect(lambda before, after: seen.append((before, after)))
    first = document.plan
    assert document.apply(set_value(("people", "P1", "age"), 40), "Change age of Ada") is None
    assert document.plan.people[0].age == 40
    assert document.stack.undoText() == "Change age of Ada"
    assert document.is_modified
    document.stack.undo()
    assert document.plan is first
    assert not document.is_modified
    assert [pair[1] for pair in seen] == [seen[0][1], first]


def test_an_edit_that_changes_nothing_leaves_no_step(document):
    assert document.apply(set_value(("title",), "Hut"), "Change title") is None
    assert document.stack.count() == 0


def test_a_refused_edit_says_why_and_changes_nothing(document):
    said, before = [], document.plan
    document.edit_refused.connect(said.append)
    sentence = document.apply(set_value(("people", "P9", "age"), 40), "Change age")
    assert sentence
    assert said == [sentence]
    assert document.plan is before
    assert document.stack.count() == 0


def test_a_fault_in_an_edit_reaches_the_hook_and_not_qt(document, monkeypatch):
    caught = []
    monkeypatch.setattr(sys, "excepthook", lambda kind, _error, _trace: caught.append(kind))
    before = document.plan
    assert document.apply(lambda _plan: 1 / 0, "Divide") is not None
    assert caught == [ZeroDivisionError]
    assert document.plan is before


def test_edit_errors_are_sentences():
    error = EditError(("people", "P9"), "there is nothing at this place", "choose another")
    assert str(error).endswith(".")


def test_save_and_open_bring_the_same_plan_back(document, tmp_path):
    path = tmp_path / "hut.kitplan"
    document.save_as(path)
    assert not document.is_modified
    assert document.path == path
    assert read_plan(path) == document.plan
    other = PlanDocument()
    with pytest.raises(FileInUseError, match=r"hut\.kitplan is open in"):
        other.open_file(path)
    other.open_copy(path)
    assert other.path is None
    assert other.plan == document.plan
    other.close()


def test_a_document_can_read_its_own_file_again(document, tmp_path):
    document.save_as(tmp_path / "hut.kitplan")
    document.apply(set_value(("days",), 9), "Change days")
    document.open_file(tmp_path / "hut.kitplan")
    assert document.plan.days == 3
    assert document.stack.count() == 0
    assert document.is_locked


def test_saving_under_another_name_lets_the_first_file_go(document, tmp_path):
    first, second = tmp_path / "a.kitplan", tmp_path / "b.kitplan"
    document.save_as(first)
    document.save_as(second)
    other = PlanDocument()
    other.open_file(first)
    assert other.path == first
    other.close()


def test_a_file_changed_by_another_program_is_not_overwritten_unasked(document, tmp_path):
    path = tmp_path / "hut.kitplan"
    document.save_as(path)
    path.write_bytes(path.read_bytes().replace(b"Hut", b"Barn"))
    os.utime(path, ns=(1, 1))
    document.apply(set_value(("days",), 9), "Change days")
    with pytest.raises(FileChangedError):
        document.save()
    assert b"Barn" in path.read_bytes()
    document.save(overwrite=True)
    assert read_plan(path).days == 9


def test_saving_without_a_file_asks_for_a_name(document):
    with pytest.raises(DocumentError, match="Save as"):
        document.save()


@pytest.mark.parametrize("content", [b"", b"not a plan", b'{"format": "kitplanner-plan", "version": 99}', b"\xff\xfe"])
def test_a_bad_file_is_refused_and_the_open_plan_stays(document, tmp_path, content):
    path = tmp_path / "bad.kitplan"
    path.write_bytes(content)
    before = document.plan
    with pytest.raises(DocumentError) as refusal:
        document.open_file(path)
    assert "bad.kitplan" in str(refusal.value)
    assert document.plan is before
    assert path.read_bytes() == content


def test_a_folder_that_is_missing_keeps_plan_and_name(document, tmp_path):
    with pytest.raises(DocumentError):
        document.save_as(tmp_path / "missing" / "hut.kitplan")
    assert document.path is None
    assert document.is_modified is False or document.stack.count() == 0


def test_a_new_plan_has_no_file_and_no_steps(document, tmp_path):
    document.save_as(tmp_path / "hut.kitplan")
    replaced = []
    document.plan_replaced.connect(lambda: replaced.append(document.path))
    document.new_plan(Plan(title="Other"))
    assert replaced == [None]
    assert document.plan.title == "Other"
    assert not document.is_locked


def test_restored_work_counts_as_unsaved(document, tmp_path):
    document.save_as(tmp_path / "hut.kitplan")
    document.restore(Plan(title="Recovered"), tmp_path / "hut.kitplan")
    assert document.is_modified
    document.save()
    assert read_plan(tmp_path / "hut.kitplan").title == "Recovered"


def test_a_lock_of_a_dead_process_is_taken_over(qapp, tmp_path):
    path = tmp_path / "hut.kitplan"
    script = (
        "import os, sys; from pathlib import Path; from kitplanner.session.file_lock import FileLock; "
        "print(FileLock(Path(sys.argv[1])).acquire()); sys.stdout.flush(); "
        "lock = FileLock(Path(sys.argv[1])); os._exit(0 if lock.acquire() is None else 9)"
    )
    run = subprocess.run(
        [sys.executable, "-c", script, str(path)], capture_output=True, text=True, timeout=60, check=False
    )
    assert run.returncode == 0, run.stderr
    assert any(file.name.startswith(".~lock.") for file in tmp_path.iterdir())
    lock = FileLock(path)
    assert lock.acquire() is None
    lock.release()


def test_a_folder_that_cannot_hold_a_lock_goes_without(qapp):
    lock = FileLock(Path("/proc/kitplanner/hut.kitplan"))
    assert lock.acquire() is None
    assert not lock.is_held
