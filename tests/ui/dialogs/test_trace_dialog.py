"""Where does this come from: formula, inputs with mark and source, and the way to their fields."""

from __future__ import annotations

import pytest
from msgspec.structs import replace
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QContextMenuEvent
from PySide6.QtWidgets import QApplication, QDialog, QMenu

from kitplanner.plan.catalogue import new_plan
from kitplanner.planners.pipeline import run_quick
from kitplanner.planners.results import TraceStep
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.trace_dialog import TraceDialog
from kitplanner.ui.trace_refs import FIELD, TraceRef, place_of, ref_words, traced
from tests.ui.shell import let_go, make_window, wait_until_loaded


@pytest.fixture
def window(qtbot):
    window = make_window()
    window.resize(1280, 800)
    window.show()
    wait_until_loaded(window, qtbot)
    yield window
    let_go(window)


def opened(window, kind=QDialog):
    return next(one for one in window.findChildren(kind) if one.isVisible())


def context_menu_event(widget):
    at = QPoint(5, 5)
    return QContextMenuEvent(QContextMenuEvent.Reason.Keyboard, at, widget.mapToGlobal(at))


def test_coverage_shows_formula_inputs_marks_and_sources(qtbot):
    plan = new_plan("camp")
    results = run_quick(plan, None)
    ref = TraceRef("coverage")
    dialog = TraceDialog(plan, ref_words(plan, ref), traced(plan, results, ref))
    text = dialog.text()
    assert f"{results.balance.coverage_fraction:.4f}".rstrip("0") in text
    assert "coverage = have / need" in text
    assert "Margin on use\t15 %\tguidance\tdesign margin" in text
    assert [line.place for line in dialog.table.lines] == [(), (), ("days",), ("margin_fraction",)]
    dialog.close()


def test_a_jump_closes_the_dialog_and_puts_the_keyboard_into_the_field(window, qtbot):
    window.desk.understanding.show_trace(TraceRef("coverage"))
    dialog = opened(window, TraceDialog)
    assert not dialog.go.isEnabled()
    qtbot.keyClick(dialog.table, Qt.Key.Key_Down)
    qtbot.keyClick(dialog.table, Qt.Key.Key_Down)
    assert dialog.go.isEnabled()
    window.activateWindow()
    qtbot.keyClick(dialog.table, Qt.Key.Key_Return)
    assert not dialog.isVisible()
    assert window.desk.sections.current == "plan"
    assert QApplication.focusWidget().accessibleName() == "Days"


def test_a_field_says_whether_it_was_given_or_is_a_default(qtbot):
    plan = new_plan("camp")
    person = plan.people[0]
    given = traced(plan, run_quick(plan, None), TraceRef(FIELD, ("people", person.id, "cap_min")))
    assert given.value == "30 min"
    assert given.words.startswith("This value is entered")
    plan = replace(plan, people=(replace(person, cap_min=None), *plan.people[1:]))
    empty = traced(plan, run_quick(plan, None), TraceRef(FIELD, ("people", person.id, "cap_min")))
    assert empty.words.startswith("The field is empty")


def test_every_step_with_a_field_leads_to_a_field_that_exists(window, qtbot):
    window.recompute.run_now()
    qtbot.waitUntil(lambda: not window.recompute.is_busy, timeout=30000)
    seen = window.desk.understanding.guide.seen
    row = next(row for row in seen.results.effort.rows if row.minutes_p50)
    refs = [
        TraceRef("need"),
        TraceRef("have"),
        TraceRef("device_use", (seen.plan.devices[0].id,)),
        TraceRef("store_usable", (seen.plan.stores[0].id,)),
        TraceRef("station_time", (seen.plan.stations[0].id,)),
        TraceRef("station_output", (row.person, row.station)),
        TraceRef("minutes_p50", (row.device, row.station, row.person, row.route, row.charge)),
    ]
    led = 0
    for ref in refs:
        for step in traced(seen.plan, seen.results, ref).steps:
            place = place_of(seen.plan, step)
            if step.key:
                assert place, step
                assert window.desk.sections.go_to(place) is None
                led += 1
    assert led > 20


def test_a_step_without_a_record_or_a_field_leads_nowhere():
    plan = new_plan("camp")
    base = {"label": "x", "value": "1", "unit": "", "mark": "computed", "source": ""}
    assert place_of(plan, TraceStep(**base)) == ()
    assert place_of(plan, TraceStep(**base, record="nobody", key="count")) == ()
    assert place_of(plan, TraceStep(**base, record=plan.devices[0].id, key="count"))[0] == "devices"


def test_shift_f1_in_a_field_and_in_a_table_ask_for_that_field(window, qtbot):
    asked = []
    window.desk.understanding.guide.trace_requested.connect(asked.append)
    window.activateWindow()
    panel = window.desk.sections.panel
    window.desk.sections.show_section("people")
    first = window.document.plan.people[0].id
    panel.details.form.focus_field("cap_min")
    window.desk.menus.action("where_from").trigger()
    opened(window, TraceDialog).close()
    panel.table.setFocus()
    panel.table.setCurrentIndex(panel.table.model().index(1, 0))
    window.desk.menus.action("where_from").trigger()
    opened(window, TraceDialog).close()
    second = window.document.plan.people[1].id
    assert asked == [TraceRef(FIELD, ("people", first, "cap_min")), TraceRef(FIELD, ("people", second, "name"))]


def test_the_menu_key_on_a_row_of_the_balance_offers_its_numbers_first(window, qtbot):
    window.desk.answers.choose("balance")
    table = window.desk.answers.page("balance").devices
    table.setFocus()
    table.setCurrentIndex(table.model().index(2, 3))
    QApplication.sendEvent(table, context_menu_event(table))
    menu = opened(window, QMenu)
    name = window.document.plan.devices[2].name
    texts = [action.text() for action in menu.actions() if action.data() is not None]
    assert texts[0] == f"Use of {name}"
    assert "Coverage, have over need" in texts
    menu.actions()[1].trigger()
    assert f"Use of {name}" in opened(window, TraceDialog).heading.text()
    opened(window, TraceDialog).close()
    menu.close()


def test_the_right_button_in_a_field_offers_both_questions(window, qtbot):
    editor = window.desk.sections.panel.details.form.row("cap_min").editor
    editor.customContextMenuRequested.emit(QPoint(3, 3))
    menu = next(one for one in editor.findChildren(QMenu) if one.isVisible())
    texts = [action.text() for action in menu.actions()]
    assert texts[-2:] == ["Where does this come from?", "What does this mean?"]
    menu.actions()[-2].trigger()
    dialog = opened(window, TraceDialog)
    assert dialog.heading.text().startswith("Most a day")
    dialog.close()
    menu.close()


def test_the_strip_offers_its_numbers_and_without_answers_no_button(window, qtbot):
    assert window.verdict.where.isVisible()
    window.verdict.where.click()
    menu = opened(window, QMenu)
    assert "What limits" in [action.text() for action in menu.actions()]
    menu.close()
    window.document.apply(lambda plan: replace(plan, days=0), "break it")
    assert not window.verdict.where.isVisible()
    assert window.verdict.problems.text() == "⚠ 1 problem…"
    window.document.stack.undo()
    assert not window.verdict.problems.isVisible() or "problem" in window.verdict.problems.text()


def test_where_nothing_is_asked_for_a_sentence_says_so(window, qtbot, monkeypatch):
    told = []
    monkeypatch.setattr(ask, "tell", lambda _parent, text: told.append(text))
    window.desk.understanding.guide.ask(window.desk.sections.switch)
    window.desk.understanding.show_trace(TraceRef("device_use", ("gone",)))
    assert told[0].startswith("There is no number here")
    assert told[1] == 'There is no device "gone" in the plan.'


def test_every_number_that_is_offered_can_be_traced_and_named(window, qtbot):
    """Balance, effort, energy line; each with a value and at least one step."""
    guide = window.desk.understanding.guide
    seen, pages = guide.seen, window.desk.answers
    effort, balance = pages.page("effort"), pages.page("balance")
    pages.choose("effort")
    QApplication.processEvents()
    qtbot.waitUntil(lambda: effort.matrix.chosen_row() is not None, timeout=10000)
    refs = {
        *guide.refs_at(effort.matrix),
        *guide.refs_at(window.energy_line),
        *(ref for row in range(3) for ref in guide.refs_at(balance.devices, row)),
        *(ref for row in range(2) for ref in guide.refs_at(balance.stations, row)),
        *guide.refs_at(balance.cut_table, 1),
        *guide.refs_at(window.verdict),
    }
    assert len(refs) > 50
    for ref in refs:
        found = traced(seen.plan, seen.results, ref)
        assert found.value, ref
        assert found.words, ref
        assert found.steps, ref
        assert "{" not in ref_words(seen.plan, ref)


def test_the_bench_says_where_its_watts_come_from(qtbot):
    window = make_window("bench")
    window.show()
    wait_until_loaded(window, qtbot)
    guide, page = window.desk.understanding.guide, window.desk.answers.page("bench")
    window.desk.answers.choose("bench")
    qtbot.waitUntil(lambda: guide.seen.point is not None, timeout=30000)
    refs = guide.refs_at(page.stages, 1)
    assert ref_words(guide.seen.plan, refs[0]).startswith("Watts into ")
    assert len(refs) > 8
    for ref in refs:
        assert traced(guide.seen.plan, guide.seen.results, ref, guide.seen.point).steps, ref
    window.desk.understanding.show_trace(refs[-1])
    opened(window, TraceDialog).close()
    let_go(window)
