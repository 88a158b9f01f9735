"""Beginning a plan: five questions by keyboard, examples, files."""

import datetime as dt

import pytest
import shiboken6
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication

from kitplanner.plan.catalogue import PLAN_KINDS
from kitplanner.plan.checks import check
from kitplanner.plan.edits_start import start_plan, suggested_answers
from kitplanner.ui.dialogs.start_dialog import StartDialog

TODAY = dt.date(2026, 3, 2)


@pytest.fixture
def dialog(qtbot):
    dialog = StartDialog(TODAY)
    dialog.show()
    dialog.activateWindow()
    with qtbot.waitActive(dialog):
        pass
    dialog.told = []
    dialog.answered.connect(dialog.told.append)
    yield dialog
    if shiboken6.isValid(dialog):
        dialog.close()


def press(qtbot, key, times=1):
    for _ in range(times):
        qtbot.keyClick(QApplication.focusWidget(), key)


def test_six_times_enter_is_a_household_that_calculates(dialog, qtbot):
    press(qtbot, Qt.Key.Key_Return, 6)
    (answers,) = dialog.told
    assert answers.devices == suggested_answers("household", TODAY).devices
    plan = start_plan(answers)
    assert not [problem for problem in check(plan) if problem.severity == "error"]
    assert plan.people[0].notes["age"].mark == "guess"


def test_numbers_are_typed_over_what_is_filled_in(dialog, qtbot):
    press(qtbot, Qt.Key.Key_Return)
    qtbot.keyClicks(QApplication.focusWidget(), "10")
    press(qtbot, Qt.Key.Key_Return)
    qtbot.keyClicks(QApplication.focusWidget(), "5")
    press(qtbot, Qt.Key.Key_Return, 4)
    (answers,) = dialog.told
    assert answers.days == 10
    assert [(group.band, group.count) for group in answers.people] == [("18_49", 5)]


@pytest.mark.parametrize("kind", PLAN_KINDS)
def test_every_kind_asks_five_questions_filled_in(dialog, kind):
    dialog.button(kind).click()
    assert dialog.page == 1
    for number in range(1, 6):
        assert dialog.step.text() == f"Question {number} of 5"
        if number < 5:
            dialog.button("next").click()
    assert dialog.button("next").isHidden()
    dialog.button("make").click()
    (answers,), suggested = dialog.told, suggested_answers(kind, TODAY)
    assert (answers.kind, answers.days, answers.people) == (kind, suggested.days, suggested.people)
    for section in ("devices", "stations", "stores"):
        assert set(getattr(answers, section)) == set(getattr(suggested, section))


def test_presets_set_the_days_and_name_their_guidance(dialog):
    dialog.begin("household")
    days = dialog.question(1)
    days.set_days(7)
    assert "Norwegian DSB: one week" in days.guidance.text()
    assert "reported" in days.guidance.text()
    days.set_days(5)
    assert days.guidance.text() == "No guidance is known for this number."


def test_going_back_keeps_the_answers_and_the_plan_can_be_made_early(dialog):
    dialog.begin("shelter")
    dialog.button("next").click()
    dialog.question(2).box("65_79").setValue(3)
    dialog.button("back").click()
    dialog.button("next").click()
    assert dialog.question(2).box("65_79").value() == 3
    dialog.button("make").click()
    assert ("65_79", 3) in [(group.band, group.count) for group in dialog.told[0].people]


def test_answers_that_cannot_be_used_stay_and_say_why(dialog):
    dialog.begin("shelter")
    dialog.question(2).box("18_49").setValue(500)
    dialog.question(2).box("12").setValue(1)
    dialog.button("make").click()
    assert dialog.told == []
    assert dialog.isVisible()
    assert "501" in dialog.problem.text()


def test_examples_files_and_an_empty_plan_are_one_press_away(qtbot, tmp_path):
    path = tmp_path / "A & B.kitplan"
    path.write_text("{}")
    wanted = {"example:camp": ("example", "camp"), "empty": ("example", ""), "open": ("open", None)}
    wanted["recent:0"] = ("open", path)
    for name, answer in wanted.items():
        dialog = StartDialog(TODAY, (path, tmp_path / "gone.kitplan"))
        qtbot.addWidget(dialog)
        dialog.show()
        told = []
        dialog.example_chosen.connect(lambda kind, told=told: told.append(("example", kind)))
        dialog.open_chosen.connect(lambda file, told=told: told.append(("open", file)))
        dialog.button(name).click()
        assert told == [answer]


def test_every_question_names_its_numbers(dialog):
    dialog.begin("camp")
    for number in range(2, 6):
        question = dialog.question(number)
        boxes = question.findChildren(type(question.box(next(iter(question._boxes)))))
        assert boxes
        assert all(box.accessibleName() and box.minimumHeight() >= 24 for box in boxes)
