"""The whole window by keyboard and screen reader, on every page and in every section: names, roles, targets, order."""

from __future__ import annotations

from itertools import pairwise

import pytest
from PySide6.QtCore import QEvent, QPoint, QRect, QSize, Qt
from PySide6.QtGui import QAccessible, QKeyEvent
from PySide6.QtWidgets import QAbstractItemView, QAbstractScrollArea, QApplication, QMenu, QWidget

from kitplanner.ui.answers import PAGES
from kitplanner.ui.panels.sections import SECTIONS
from kitplanner.ui.reading_order import reading_order
from tests.ui.shell import let_go, make_window, wait_until_loaded

LEAST_TARGET_PX = 24
# What Qt itself puts inside a spin box or combo box; the box has the name.
INNER = "qt_"
MEANINGLESS = (QAccessible.Role.NoRole, QAccessible.Role.Client)


@pytest.fixture(params=["camp", "bench"])
def window(qtbot, request):
    window = make_window(request.param)
    window.resize(1280, 800)
    window.show()
    wait_until_loaded(window, qtbot)
    yield window
    let_go(window)


def places(window):
    """Bring every section and every page into sight, one after the other."""
    for entry in PAGES:
        window.desk.answers.choose(entry.key)
        QApplication.processEvents()
        yield f"page {entry.key}"
    for section in SECTIONS:
        window.desk.sections.show_section(section.key)
        QApplication.processEvents()
        yield f"section {section.key}"


def controls(window) -> list[QWidget]:
    """Everything in sight that the Tab key reaches."""
    return [
        widget
        for widget in window.findChildren(QWidget)
        if widget.isVisible()
        and widget.focusPolicy() & Qt.FocusPolicy.TabFocus
        and widget.focusProxy() is None
        and not widget.objectName().startswith(INNER)
        # The viewport of a scroll area takes keys for the area, which has the name.
        and not (isinstance(widget.parent(), QAbstractScrollArea) and widget.parent().viewport() is widget)
    ]


def words(place: str, widget: QWidget, what: str) -> str:
    return f"{place}: {type(widget).__name__} {widget.objectName()} {widget.accessibleName()} {what}"


def test_every_control_has_a_name_and_a_role(window):
    wrong = []
    for place in places(window):
        for widget in controls(window):
            interface = QAccessible.queryAccessibleInterface(widget)
            if interface is None or not (interface.text(QAccessible.Text.Name) or widget.accessibleName()):
                wrong.append(words(place, widget, "has no name"))
            elif interface.role() in MEANINGLESS and not interface.text(QAccessible.Text.Description):
                wrong.append(words(place, widget, f"has role {interface.role().name} and no description"))
    assert sorted(set(wrong)) == []


def test_every_target_is_large_enough(window):
    small = []
    for place in places(window):
        for widget in controls(window):
            if isinstance(widget, QAbstractItemView):
                continue
            if widget.height() < LEAST_TARGET_PX or widget.width() < LEAST_TARGET_PX:
                small.append(words(place, widget, f"is {widget.width()}x{widget.height()}"))
    assert sorted(set(small)) == []


def test_the_tab_key_follows_the_reading_order(window):
    for place in places(window):
        expected = reading_order(window)
        assert len(expected) > 5, place
        expected[0].setFocus()
        for before, after in pairwise(expected):
            if isinstance(before, QAbstractItemView) and before.tabKeyNavigation():
                after.setFocus()
                continue
            assert QApplication.focusWidget() is before, (place, before, QApplication.focusWidget())
            _press_tab(before)
            assert QApplication.focusWidget() is after, (place, words("", before, "then"), QApplication.focusWidget())


def _press_tab(widget: QWidget) -> None:
    press = QKeyEvent(QEvent.Type.KeyPress, Qt.Key.Key_Tab, Qt.KeyboardModifier.NoModifier)
    QApplication.sendEvent(widget, press)


def test_plan_comes_before_answers_and_rows_before_lower_rows(window):
    window.desk.sections.show_section("people")
    window.desk.answers.choose("effort")
    QApplication.processEvents()
    order = reading_order(window)
    at = {widget: number for number, widget in enumerate(order)}
    panel, answers = window.desk.sections.panel, window.desk.answers
    assert at[window.energy_line] < at[window.desk.sections.switch.list] < at[panel.button("add")]
    assert at[panel.button("add")] < at[panel.table] < at[panel.details.form.row("name").editor] < at[answers.tabBar()]
    top = [answers.tabBar().mapTo(window, QPoint()).y(), answers.page("effort").person.mapTo(window, QPoint()).y()]
    assert top == sorted(top)


@pytest.mark.parametrize("page", [entry.key for entry in PAGES])
def test_focus_can_be_seen_on_every_control(window, qtbot, page):
    """The Tab key changes the picture of the control that it reaches."""
    window.desk.answers.choose(page)
    window.desk.sections.show_section("people")
    QApplication.processEvents()
    # Charts are built after the first picture and move what stands below them.
    qtbot.waitUntil(lambda: getattr(window.desk.answers.page(page), "is_loaded", True), timeout=30000)
    qtbot.wait(150)
    order, unseen = reading_order(window), []
    order[0].setFocus()
    for before, after in pairwise(order):
        before.setFocus()
        _press_tab(before)
        QApplication.processEvents()
        # Tab may have scrolled: the place is asked for again.
        around = QRect(after.mapTo(window, QPoint(-3, -3)), after.size() + QSize(6, 6))
        reached = window.grab(around).toImage()
        window.energy_line.setFocus()
        QApplication.processEvents()
        if reached == window.grab(around).toImage():
            unseen.append(words(page, after, "looks the same with the focus"))
    assert not unseen, "\n".join(sorted(set(unseen)))


def test_the_letters_of_every_menu_are_unique(window):
    bar = [action.menu() for action in window.menuBar().actions()]
    assert _twice(window.menuBar().actions()) == []
    waiting = [menu for menu in bar if menu is not None]
    while waiting:
        menu: QMenu = waiting.pop()
        assert _twice(menu.actions()) == [], menu.title()
        waiting += [action.menu() for action in menu.actions() if action.menu() is not None]


def _twice(actions) -> list[str]:
    texts = [action.text().replace("&&", "") for action in actions]
    letters = [text[text.index("&") + 1].lower() for text in texts if "&" in text]
    return [letter for letter in letters if letters.count(letter) > 1]
