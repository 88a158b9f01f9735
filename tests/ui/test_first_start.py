"""The ways to begin a plan: at the first start, and from File, New."""

import pytest

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import write_plan
from kitplanner.plan.records import Plan
from kitplanner.session.settings import AppSettings
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.start_dialog import StartDialog
from tests.ui.shell import let_go, make_window


@pytest.fixture
def opened(qtbot):
    windows = []

    def make(plan=None):
        window = make_window("household", plan=plan)
        windows.append(window)
        window.show()
        window.load_workbench()
        return window

    yield make
    for window in windows:
        let_go(window)


def start_of(window):
    return [dialog for dialog in window.findChildren(StartDialog) if dialog.isVisible()]


def test_the_first_start_without_a_file_offers_the_ways_to_begin_over_an_example(opened):
    window = opened(Plan())
    assert len(start_of(window)) == 1
    assert window.document.plan == new_plan("camp")
    start_of(window)[0].reject()
    assert window.document.plan == new_plan("camp")
    assert AppSettings().has_started


def test_a_later_start_or_one_with_a_plan_does_not_ask(opened):
    assert start_of(opened(new_plan("household"))) == []
    AppSettings().has_started = True
    assert start_of(opened(Plan())) == []


def test_answers_become_unsaved_work_that_can_be_undone(opened):
    window = opened()
    window.desk.menus.action("start").trigger()
    (dialog,) = start_of(window)
    dialog.begin("household")
    dialog.question(1).set_days(7)
    dialog.button("make").click()
    assert window.document.plan.days == 7
    assert len(window.document.plan.people) == 2
    assert window.document.is_modified
    assert window.document.path is None
    window.document.stack.undo()
    assert window.document.plan == Plan()


def test_unsaved_work_is_asked_about_first(opened, monkeypatch):
    window = opened()
    window.desk.editing.add("people")
    before = window.document.plan
    monkeypatch.setattr(ask, "ask_save", lambda *_: ask.Answer.CANCEL)
    window.desk.files.offer_start()
    dialog = start_of(window)[0]
    dialog.begin("bench")
    dialog.button("make").click()
    assert window.document.plan is before


def test_examples_and_recent_files_open(opened, tmp_path):
    window = opened()
    window.desk.files.offer_start()
    start_of(window)[0].button("example:shelter").click()
    assert window.document.plan == new_plan("shelter")
    path = tmp_path / "mine.kitplan"
    write_plan(path, new_plan("bench"))
    window.settings.add_recent(path)
    window.desk.files.offer_start()
    start_of(window)[0].button("recent:0").click()
    assert window.document.path == path


def test_open_asks_which_file(opened, monkeypatch):
    window = opened()
    asked = []
    monkeypatch.setattr(ask, "ask_open_path", lambda *_: asked.append(True))
    window.desk.files.offer_start()
    start_of(window)[0].button("open").click()
    assert asked == [True]
