"""Every page by keyboard and screen reader: names, plain text, charts with words and twins."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import QLabel, QWidget

from kitplanner.ui.pages.balance_page import BalancePage
from kitplanner.ui.pages.bench_page import BenchPage
from kitplanner.ui.pages.effort_page import EffortPage
from tests.ui.sample_answers import demo_answers, show_page

PAGES = [(EffortPage, "camp"), (BalancePage, "shelter"), (BenchPage, "bench")]


@pytest.fixture(params=PAGES, ids=[page.__name__ for page, _demo in PAGES])
def page(qtbot, request):
    kind, demo = request.param
    widget = kind()
    widget.set_answers(*demo_answers(demo))
    show_page(qtbot, widget, (1000, 1600))
    qtbot.wait(60)
    return widget


def name_of(widget):
    return QAccessible.queryAccessibleInterface(widget).text(QAccessible.Text.Name)


def test_whatever_takes_the_focus_has_a_name(page):
    nameless = [
        type(widget).__name__
        for widget in page.findChildren(QWidget)
        if widget.isVisible()
        and widget.focusPolicy() & Qt.FocusPolicy.TabFocus
        and widget.objectName() != "qt_spinbox_lineedit"
        and not name_of(widget)
    ]
    assert nameless == []


def test_text_is_never_read_as_markup(page):
    plain = {label.textFormat() for label in page.findChildren(QLabel) if label.isVisible() and not label.buddy()}
    assert plain == {Qt.TextFormat.PlainText}


def test_every_chart_has_a_name_figures_and_a_twin(page):
    frames = [frame for frame in page.frames() if frame.isVisible()]
    assert frames
    for frame in frames:
        assert name_of(frame.plot) == frame.title.text()
        assert frame.plot.data is not None
        assert frame.table.model().rowCount() > 0
        frame.toggle.click()
        assert frame.table.isVisible()
        frame.toggle.click()
        assert frame.plot.isVisible()


def test_curves_stay_within_300_points(page):
    for frame in page.frames():
        for line in frame.plot.data.lines if frame.plot.data else ():
            assert len(line.x) <= 300


def test_nothing_is_wider_than_the_page_at_double_text(qtbot, qapp, page):
    from kitplanner.ui import theme

    try:
        theme.apply(qapp, "light", 2.0)
        page.resize(640, 900)
        qtbot.wait(120)
        content = page.column.parentWidget()
        assert content.width() <= 640
    finally:
        theme.apply(qapp, "light", 1.0)
        qapp.setStyleSheet("")
