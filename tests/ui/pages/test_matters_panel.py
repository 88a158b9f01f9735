"""What matters most: the bars are the answer's own, sorted, and lead to their fields."""

from __future__ import annotations

import pytest
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication

from kitplanner.plan.catalogue import new_plan
from kitplanner.planners.sensitivity import coverage_sensitivity, joined_people
from kitplanner.report.wording_sensitivity import sensitivity_sentence
from kitplanner.ui.pages.matters_panel import MattersPage, bars_of
from tests.ui.shell import let_go, make_window, wait_until_loaded


@pytest.fixture
def window(qtbot):
    window = make_window()
    window.resize(1280, 800)
    window.show()
    wait_until_loaded(window, qtbot)
    qtbot.waitUntil(lambda: window.desk.answers.page("matters") is not None, timeout=30000)
    yield window
    let_go(window)


def shown(window, qtbot) -> MattersPage:
    window.desk.answers.choose("matters")
    page = window.desk.answers.page("matters")
    qtbot.waitUntil(lambda: bool(page.coverage.picture.bars) and not page.work.is_busy, timeout=30000)
    return page


def test_a_hidden_page_asks_nothing(window):
    page = window.desk.answers.page("matters")
    window.desk.answers.choose("effort")
    assert not page.work.is_busy
    assert page.coverage.picture.bars == ()


def test_bars_sentence_and_table_say_what_was_computed(window, qtbot):
    page, plan = shown(window, qtbot), window.document.plan
    found = joined_people(coverage_sensitivity(plan))
    bars, centre = bars_of(plan, found)
    assert page.coverage.picture.bars == bars
    assert 0.0 < centre < 1.0
    # Joined people are drawn from their lowest to their highest together, which is not quite their swing.
    alone = [n for n, row in enumerate(found.rows[: len(bars)]) if row.variation.name != "person"]
    lengths = [abs(bars[n].high_at - bars[n].low_at) for n in alone]
    assert lengths == sorted(lengths, reverse=True)
    assert [row.swing for row in found.rows] == sorted((row.swing for row in found.rows), reverse=True)
    assert page.coverage.sentence.text() == sensitivity_sentence(plan, found)
    assert page.coverage.table.model().rowCount() == len(found.rows)
    rects = [page.coverage.picture.bar_rect(n).width() for n in alone]
    assert rects == sorted(rects, reverse=True)
    assert page.minutes.picture.bars


def test_nobody_is_ranked(window, qtbot):
    page = shown(window, qtbot)
    names = {person.name for person in window.document.plan.people}
    assert not any(name in bar.name for name in names for bar in page.coverage.picture.bars)


def test_keys_walk_the_bars_and_return_goes_to_the_field(window, qtbot):
    page = shown(window, qtbot)
    picture = page.coverage.picture
    window.activateWindow()
    picture.setFocus()
    at = next(n for n, bar in enumerate(picture.bars) if bar.place and bar.place[0] == "devices")
    qtbot.keyClick(picture, Qt.Key.Key_Home)
    for _ in range(at):
        qtbot.keyClick(picture, Qt.Key.Key_Down)
    assert picture.chosen == at
    assert picture.accessibleDescription() == picture.bars[at].sentence
    assert page.coverage.chosen.text().startswith(picture.bars[at].sentence)
    qtbot.keyClick(picture, Qt.Key.Key_Return)
    assert window.desk.sections.current == "devices"
    assert window.desk.sections.panel.current_id == picture.bars[at].place[1]


def test_a_click_chooses_and_a_choice_is_hatched(window, qtbot):
    picture = shown(window, qtbot).coverage.picture
    at = next(n for n, bar in enumerate(picture.bars) if bar.is_choice)
    qtbot.mouseClick(picture, Qt.MouseButton.LeftButton, pos=picture.bar_rect(at).center().toPoint())
    assert picture.chosen == at
    assert picture.bars[at].name == "Margin on use"


def test_the_table_twin_takes_the_place_of_the_picture(window, qtbot):
    frame = shown(window, qtbot).coverage
    frame.toggle.click()
    assert frame.table.isVisible()
    assert not frame.picture.isVisible()
    frame.toggle.click()
    assert frame.picture.isVisible()


def test_an_edit_brings_a_new_answer_and_errors_say_why_there_is_none(window, qtbot):
    page = shown(window, qtbot)
    before = page.coverage.sentence.text()
    window.document.apply(lambda plan: replace(plan, days=plan.days + 4), "longer")
    qtbot.waitUntil(lambda: page.coverage.sentence.text() != before, timeout=30000)
    window.document.apply(lambda plan: replace(plan, days=0), "break it")
    qtbot.waitUntil(lambda: "problems that stop" in page.coverage.sentence.text(), timeout=30000)
    assert not page.coverage.picture.isVisible()
    assert not page.coverage.toggle.isVisible()


def test_closing_the_window_while_it_works_is_quiet(qtbot):
    window = make_window("bench")
    window.show()
    wait_until_loaded(window, qtbot)
    qtbot.waitUntil(lambda: window.desk.answers.page("matters") is not None, timeout=30000)
    window.desk.answers.choose("matters")
    qtbot.waitUntil(lambda: window.desk.answers.page("matters").work.is_busy, timeout=30000)
    let_go(window)
    QApplication.processEvents()


def test_a_plan_that_needs_nothing_has_no_bars(qtbot):
    plan = replace(new_plan("household"), devices=())
    assert bars_of(plan, joined_people(coverage_sensitivity(plan))) == ((), None)
