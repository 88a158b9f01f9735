"""Recovery files: written while editing, offered after a crash, gone after a clean close."""

import pytest

from kitplanner.plan.edits import set_value
from kitplanner.plan.records import Plan
from kitplanner.session.autosave import Autosave, discard, find_recovered
from kitplanner.session.document import PlanDocument


@pytest.fixture
def desk(qapp, tmp_path):
    folder = tmp_path / "recovery"
    document = PlanDocument(Plan(title="Hut"))
    autosave = Autosave(document, folder)
    yield document, autosave, folder
    autosave.close()
    document.close()


def change(document, days=9):
    document.apply(set_value(("days",), days), "Change days")


def leave_as_after_a_crash(autosave):
    """Let go of the lock without removing the file, as the end of a process does."""
    autosave.wait()
    autosave._lock.unlock()


def test_unsaved_work_is_found_after_a_crash(desk):
    document, autosave, folder = desk
    change(document)
    autosave.write_now()
    leave_as_after_a_crash(autosave)
    (found,) = find_recovered(folder)
    assert found.recovery.plan == document.plan
    assert found.original is None
    assert not found.original_changed


def test_a_running_program_keeps_its_own_work(desk):
    document, autosave, folder = desk
    change(document)
    autosave.write_now()
    autosave.wait()
    assert autosave.file.exists()
    assert find_recovered(folder) == ()


def test_saving_removes_the_recovery_file(desk, tmp_path):
    document, autosave, _ = desk
    document.save_as(tmp_path / "hut.kitplan")
    change(document)
    autosave.write_now()
    autosave.wait()
    assert autosave.file.exists()
    document.save()
    assert not autosave.file.exists()


def test_nothing_is_written_for_an_unchanged_plan(desk):
    _, autosave, _ = desk
    autosave.write_now()
    autosave.wait()
    assert not autosave.file.exists()


def test_the_timer_writes_by_itself_after_a_pause(desk, qtbot):
    document, autosave, _ = desk
    autosave._quiet.setInterval(10)
    change(document)
    qtbot.waitUntil(autosave.file.exists, timeout=5000)


def test_an_original_that_changed_since_is_told(desk, tmp_path):
    document, autosave, folder = desk
    path = tmp_path / "hut.kitplan"
    document.save_as(path)
    change(document)
    autosave.write_now()
    leave_as_after_a_crash(autosave)
    assert not find_recovered(folder)[0].original_changed
    path.write_bytes(path.read_bytes().replace(b"Hut", b"Barn"))
    assert find_recovered(folder)[0].original_changed
    path.unlink()
    assert find_recovered(folder)[0].original_changed


def test_a_damaged_recovery_file_is_left_alone(desk):
    _document, _autosave, folder = desk
    folder.mkdir()
    (folder / "bad.json").write_text("{")
    assert find_recovered(folder) == ()
    assert (folder / "bad.json").exists()


def test_discarding_removes_the_file(desk):
    document, autosave, folder = desk
    change(document)
    autosave.write_now()
    leave_as_after_a_crash(autosave)
    discard(find_recovered(folder)[0])
    assert find_recovered(folder) == ()
    assert list(folder.glob("*.json")) == []


def test_a_folder_that_cannot_be_written_is_said_once(qapp, qtbot, tmp_path):
    (tmp_path / "recovery").write_text("a file, not a folder")
    document = PlanDocument(Plan())
    autosave = Autosave(document, tmp_path / "recovery")
    said = []
    autosave.failed.connect(said.append)
    for days in (7, 8):
        change(document, days)
        autosave.write_now()
    autosave._quiet.stop()
    autosave._longest.stop()
    assert len(said) == 1
    assert "Save often" in said[0]
