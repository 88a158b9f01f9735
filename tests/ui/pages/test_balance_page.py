"""The Balance page shows the balance: verdict, hours, days, cuts, tables."""

from __future__ import annotations

import numpy as np
import pytest
from msgspec.structs import replace

from kitplanner.report.wording import number, percent
from kitplanner.report.wording_balance import days_sentence, evening_sentence, verdict_sentence
from kitplanner.ui.pages.balance_charts import cuts_chart, days_chart, hours_chart
from kitplanner.ui.pages.balance_page import BalancePage
from tests.ui.sample_answers import demo_answers, show_page

WORDS = ("made", "used", "Wh")


@pytest.fixture
def page(qtbot):
    widget = BalancePage()
    widget.set_answers(*demo_answers("shelter"))
    return show_page(qtbot, widget)


def cells(table):
    model = table.model()
    return [[model.index(r, c).data() for c in range(model.columnCount())] for r in range(model.rowCount())]


def test_verdict_and_evening_stand_on_top(page):
    plan, results = demo_answers("shelter")
    assert page.verdict.text() == verdict_sentence(plan, results.balance)
    assert page.evening.text() == evening_sentence(plan, results.balance)
    assert page.evening.y() < page.verdict.y()


def test_hours_are_the_balance_s(page):
    _plan, results = demo_answers("shelter")
    made, used = page.hours.plot.data.bars
    assert made.height.sum() == pytest.approx(sum(hour.made_wh for hour in results.balance.hours))
    assert used.height.sum() == pytest.approx(sum(hour.use_wh for hour in results.balance.hours))
    assert not made.hollow
    assert used.hollow
    assert len(cells(page.hours.table)) == 24


def test_empty_day_is_marked(page):
    _plan, results = demo_answers("shelter")
    assert results.balance.first_empty_day == 3
    (shade,) = page.days.plot.data.shades
    assert (shade.low, shade.high) == (2.0, 3.0)
    assert "day 3" in shade.text
    assert page.days.sentence.text() == days_sentence(results.balance)


def test_a_plan_that_fits_marks_no_empty_day():
    plan, results = demo_answers("household")
    assert days_chart(plan, results.balance, ("Wh", "empty", "day")).shades == ()


def test_cuts_stand_side_by_side(page):
    _plan, results = demo_answers("shelter")
    strict, shared = page.cuts.plot.data.bars
    assert strict.height == pytest.approx([row.covered_fraction for row in results.balance.cuts.strict])
    assert shared.height == pytest.approx([row.covered_fraction for row in results.balance.cuts.shared])
    assert np.allclose(shared.x - strict.x, 0.4)
    first = cells(page.cut_table)[0]
    assert first[3] == percent(results.balance.cuts.strict[0].covered_fraction)


def test_devices_table_lists_every_device(page):
    plan, results = demo_answers("shelter")
    rows = cells(page.devices)
    assert [row[0] for row in rows] == [device.name for device in plan.devices]
    assert [row[3] for row in rows] == [number(row.use_wh) for row in results.balance.devices]


def test_no_balance_says_why(page):
    plan, results = demo_answers("shelter")
    page.set_answers(plan, replace(results, balance=None))
    page.catch_up()
    assert "worked out" in page.verdict.text()
    assert not page.hours.isVisible()


def test_nothing_to_draw_gives_no_chart():
    _plan, results = demo_answers("household")
    empty = replace(results.balance, hours=(), days=(), cuts=replace(results.balance.cuts, strict=(), shared=()))
    assert hours_chart(empty, WORDS) is None
    assert days_chart(_plan, empty, WORDS) is None
    assert cuts_chart(empty, (*WORDS, "priority")) is None


def test_narrow_page_stands_in_one_column(qtbot, page):
    page.resize(1100, 900)
    qtbot.waitUntil(lambda: page.hours.y() == page.days.y())
    page.resize(420, 900)
    qtbot.waitUntil(lambda: page.days.y() > page.hours.y())
