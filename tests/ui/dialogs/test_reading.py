"""Dialogs to read: problems, comparison, being ready, words, help; by keyboard, at large text, without leaks."""

from __future__ import annotations

import gc

import pytest
import shiboken6
from msgspec.structs import replace
from PySide6.QtCore import QCoreApplication, QEvent, QPoint, Qt
from PySide6.QtGui import QAccessible, QFontMetrics, QGuiApplication
from PySide6.QtWidgets import QApplication, QDialog, QLabel, QPushButton, QWidget

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import write_plan
from kitplanner.plan.records import Plan
from kitplanner.planners.compare import compare
from kitplanner.planners.pipeline import run_quick
from kitplanner.report.help_pages import PAGES
from kitplanner.report.wording_compare import comparison_sentence
from kitplanner.ui import theme
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.compare_dialog import CompareDialog
from kitplanner.ui.dialogs.glossary_dialog import GlossaryDialog
from kitplanner.ui.dialogs.help_window import HelpWindow
from kitplanner.ui.dialogs.privacy_dialog import PrivacyDialog
from kitplanner.ui.dialogs.problems_dialog import ProblemsDialog
from kitplanner.ui.dialogs.readiness_dialog import ReadinessDialog
from kitplanner.ui.dialogs.reading_table import MOST_LINES, Line, ReadingTable
from kitplanner.ui.dialogs.trace_dialog import TraceDialog
from kitplanner.ui.trace_refs import TraceRef, traced
from tests.ui.shell import let_go, make_window, wait_until_loaded


@pytest.fixture
def window(qtbot):
    window = make_window()
    window.show()
    wait_until_loaded(window, qtbot)
    yield window
    let_go(window)


def opened(window, kind):
    return next(one for one in window.findChildren(kind) if one.isVisible())


def all_dialogs(plan: Plan) -> list[QDialog]:
    store = plan.stores[0].id
    results = run_quick(plan, None)
    return [
        TraceDialog(plan, "Coverage", traced(plan, results, TraceRef("coverage"))),
        ProblemsDialog(plan, run_quick(replace(plan, days=0), None).problems),
        CompareDialog(new_plan("household"), "first.kitplan", plan, "second.kitplan"),
        ReadinessDialog(plan),
        PrivacyDialog(plan),
        GlossaryDialog(plan, ("stores", store, "floor_fraction")),
        HelpWindow(),
    ]


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_every_control_has_a_name_a_role_and_room(qtbot, scale):
    theme.apply(QApplication.instance(), "dark", scale)
    faults = []
    for dialog in all_dialogs(new_plan("camp")):
        dialog.show()
        QApplication.processEvents()
        screen = QGuiApplication.primaryScreen().availableSize()
        assert dialog.width() <= screen.width()
        assert dialog.height() <= screen.height()
        for widget in dialog.findChildren(QWidget):
            if not widget.isVisible() or not widget.focusPolicy() & Qt.FocusPolicy.TabFocus:
                continue
            if widget.focusProxy() is not None or widget.objectName().startswith("qt_"):
                continue
            found = QAccessible.queryAccessibleInterface(widget)
            name = found.text(QAccessible.Text.Name)
            if not name or found.role() in (QAccessible.Role.NoRole, QAccessible.Role.Client):
                faults.append((type(dialog).__name__, type(widget).__name__, name, found.role()))
            if widget.height() < 24:
                faults.append((type(dialog).__name__, type(widget).__name__, widget.height()))
        for label in dialog.findChildren(QLabel):
            assert label.textFormat() == Qt.TextFormat.PlainText, label.text()
        for button in dialog.findChildren(QPushButton):
            text = QFontMetrics(button.font()).horizontalAdvance(button.text().replace("&", ""))
            if button.isVisible() and button.width() < text:
                faults.append((type(dialog).__name__, button.text(), button.width()))
        dialog.close()
    theme.apply(QApplication.instance(), "light", 1.0)
    assert faults == []


def test_opening_and_closing_leaves_nothing_behind(window, qtbot):
    def once():
        for dialog in all_dialogs(window.document.plan):
            dialog.show()
            dialog.close()
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        gc.collect()

    for _ in range(2):
        once()
    before = len(shiboken6.getAllValidWrappers())
    for _ in range(6):
        once()
    assert len(shiboken6.getAllValidWrappers()) - before < 10


def test_user_text_is_never_read_as_markup(qtbot):
    plan = new_plan("camp")
    person = replace(plan.people[0], name="<b>Bold</b><img src=x>")
    dialog = PrivacyDialog(replace(plan, people=(person,)))
    assert dialog.table.lines[0].cells[1] == "<b>Bold</b><img src=x>"
    dialog.close()


def test_problems_come_errors_first_and_lead_to_their_fields(window, qtbot):
    person = window.document.plan.people[3]
    window.document.apply(
        lambda plan: replace(plan, days=0, people=(*plan.people[:3], replace(person, cap_min=-4.0), *plan.people[4:])),
        "break it",
    )
    window.activateWindow()
    window.verdict.problems.click()
    dialog = opened(window, ProblemsDialog)
    assert dialog.heading.text().startswith("2 problems stop the answers")
    lines = dialog.table.lines
    places = [line.place for line in lines if line.cells[0] == "stops the answers"]
    assert set(places) == {("days",), ("people", person.id, "cap_min")}
    row = places.index(("people", person.id, "cap_min"))
    dialog.table.setCurrentIndex(dialog.table.model().index(row, 0))
    qtbot.keyClick(dialog.table, Qt.Key.Key_Return)
    assert window.desk.sections.current == "people"
    assert window.desk.sections.panel.current_id == person.id
    assert QApplication.focusWidget().accessibleName() == "Most a day"


def test_a_sound_plan_says_so(qtbot):
    dialog = ProblemsDialog(Plan(), ())
    assert dialog.text() == "Nothing is wrong with this plan."
    dialog.close()


def test_another_plan_is_compared_in_one_table_and_one_sentence(window, qtbot, monkeypatch, tmp_path):
    plan = window.document.plan
    path = tmp_path / "other <1>.kitplan"
    other = replace(plan, days=plan.days + 2)
    write_plan(path, other)
    monkeypatch.setattr(ask, "ask_open_path", lambda _parent, _folder: path)
    window.desk.menus.action("compare").trigger()
    dialog = opened(window, CompareDialog)
    assert dialog.heading.text() == comparison_sentence(compare(other, plan))
    assert [line.cells for line in dialog.table.lines if line.place] == [("Plan", "Days", "5 days", "3 days")]
    assert any(line.cells[:2] == ("Answer", "Coverage") for line in dialog.table.lines)
    assert "other <1>.kitplan" in dialog.text()
    dialog.close()


def test_a_file_that_is_no_plan_is_refused_with_a_sentence(window, qtbot, monkeypatch, tmp_path):
    path = tmp_path / "letter.kitplan"
    path.write_text("Dear all", encoding="utf-8")
    told = []
    monkeypatch.setattr(ask, "ask_open_path", lambda _parent, _folder: path)
    monkeypatch.setattr(ask, "tell", lambda _parent, text: told.append(text))
    window.desk.menus.action("compare").trigger()
    assert told[0].startswith("letter.kitplan")


def test_being_ready_holds_four_lists_with_their_cautions(window, qtbot):
    window.verdict.be_ready.click()
    dialog = opened(window, ReadinessDialog)
    assert dialog.tabs.count() == 4
    warning = dialog.text_of("warning")
    assert warning.startswith("Charge now")
    assert "evening guarantee" in warning
    assert "Print now" in warning
    assert "hard bare surface" in warning
    assert "in daylight" in dialog.text_of("dark")
    assert "lamps, not candles" in dialog.text_of("dark")
    assert dialog.text_of("power_back").startswith("When power is back")
    assert "look for damage" in dialog.text_of("close_down")
    qtbot.keyClick(dialog.tabs.tabBar(), Qt.Key.Key_Right)
    assert dialog.tabs.currentIndex() == 1
    dialog.close()


def test_a_field_has_its_help_and_its_words(window, qtbot):
    store = window.document.plan.stores[0]
    window.desk.editing.explain_requested.emit(("stores", store.id, "floor_fraction"), "meaning")
    dialog = opened(window, GlossaryDialog)
    assert "floor\tthe state of charge below which the plan does not go" in dialog.text()
    dialog.more.click()
    help_ = opened(window, HelpWindow)
    assert help_.page == "glossary"
    assert help_.text.textCursor().selectedText().startswith("floor: ")
    help_.close()


def test_the_help_has_every_page_and_searches_all_of_them(qtbot):
    window = HelpWindow()
    window.show()
    assert window.pages.count() == len(PAGES)
    qtbot.keyClicks(window.search, "drop-out")
    assert 0 < window.pages.count() < len(PAGES)
    assert window.text.textCursor().selectedText().casefold() == "drop-out"
    window.search.setText("xyzzyx")
    assert window.pages.count() == 0
    assert window.found.text() == "No page holds these words."
    window.search.clear()
    assert window.pages.count() == len(PAGES)
    window.close()


def test_the_next_place_goes_on_over_the_pages(qtbot):
    window = HelpWindow()
    window.show()
    window.search.setText("battery")
    pages = {window.page}
    for _ in range(200):
        qtbot.keyClick(window.search, Qt.Key.Key_Return)
        assert window.text.textCursor().selectedText().casefold() == "battery"
        pages.add(window.page)
    assert len(pages) == window.pages.count() > 1
    window.close()


def test_help_opens_at_what_is_in_sight(window, qtbot):
    window.desk.answers.choose("rota")
    window.desk.answers.setFocus()
    window.desk.menus.action("help").trigger()
    dialog = opened(window, HelpWindow)
    assert dialog.page == "rota"
    dialog.close()


def test_a_thousand_lines_are_shown_and_the_rest_counted(qtbot):
    table = ReadingTable("Lines")
    table.resize(400, 300)
    table.set_lines(("A", "B"), [Line((str(n), "x")) for n in range(MOST_LINES + 5)])
    assert table.model().rowCount() == MOST_LINES + 1
    assert table.lines[-1].cells[0] == "… and 5 more"
    table.deleteLater()


def test_long_texts_wrap_and_the_title_keeps_its_longest_word(qtbot):
    table = ReadingTable("Lines")
    table.resize(420, 300)
    table.show()
    words = "papers that show everything " * 6
    table.set_lines(("Name", "Papers that show it", "From"), [Line(("Ann", words, words))])
    QApplication.processEvents()
    total = sum(table.columnWidth(n) for n in range(3))
    assert total <= table.viewport().width()
    assert table.rowHeight(0) > 3 * table.fontMetrics().height()
    assert table.indexAt(QPoint(3, 3)).row() == 0
    table.close()
    table.deleteLater()
