"""The Effort page shows the effort answer, cell by cell, and the curve of the chosen one."""

from __future__ import annotations

import pytest
from msgspec.structs import replace
from PySide6.QtCore import Qt

from kitplanner.plan.edits import remove_record
from kitplanner.planners import pipeline
from kitplanner.planners.effort import charge_curve
from kitplanner.planners.results import EffortRow
from kitplanner.report.wording import minutes
from kitplanner.report.wording_effort import effort_sentence
from kitplanner.ui.pages.effort_matrix import EffortMatrix, Matrix, MinutesDelegate, cell_text, range_text
from kitplanner.ui.pages.effort_page import EffortPage, build_matrix, curve_table, rows_by_key
from kitplanner.ui.pages.one_charge_box import OneChargeBox
from tests.ui.sample_answers import demo_answers, show_page


def row(**changes):
    base = EffortRow(
        device="d",
        station="s",
        person="p",
        route="direct",
        charge="full",
        minutes_p10=150.0,
        minutes_p50=200.0,
        minutes_p90=260.0,
        station_output_w=6.0,
        person_power_w=12.0,
        chain_fraction=0.77,
        chain_from="S",
        limit="person",
    )
    return replace(base, **changes)


@pytest.fixture
def page(qtbot):
    plan, results = demo_answers("camp")
    widget = EffortPage()
    widget.set_answers(plan, results)
    return show_page(qtbot, widget)


def choose(page, box, value):
    box.setCurrentIndex(box.findData(value))


def test_every_cell_is_the_answer_for_its_person(page):
    _plan, results = demo_answers("camp")
    choose(page, page.person, "L3")
    shown = {(one.device, one.station) for line in page.matrix.matrix.cells for one in line if one is not None}
    wanted = {
        (one.device, one.station)
        for one in results.effort.rows
        if (one.person, one.route, one.charge) == ("L3", "direct", "full")
    }
    assert shown == wanted
    assert wanted


def test_typical_is_the_middle_of_all_persons(page):
    _plan, results = demo_answers("camp")
    for line in page.matrix.matrix.cells:
        for one in line:
            if one is None or one.minutes_p50 is None:
                continue
            times = sorted(
                other.minutes_p50
                for other in results.effort.rows
                if (other.device, other.station, other.route, other.charge)
                == (one.device, one.station, "direct", "full")
            )
            slower = sum(time > one.minutes_p50 for time in times)
            quicker = sum(time < one.minutes_p50 for time in times)
            assert max(slower, quicker) <= len(times) / 2


@pytest.mark.parametrize("charge", ["full", "plan", "day"])
@pytest.mark.parametrize("route", ["direct", "store"])
def test_way_and_charge_choose_the_rows(page, charge, route):
    choose(page, page.charge, charge)
    choose(page, page.route, route)
    rows = [one for line in page.matrix.matrix.cells for one in line if one is not None]
    assert rows
    assert {(one.charge, one.route) for one in rows} == {(charge, route)}


def test_chosen_cell_tells_its_sentence_and_curve(qtbot, page):
    plan, _results = demo_answers("camp")
    page.matrix.setCurrentIndex(page.matrix.model().index(2, 1))
    chosen = page.matrix.chosen_row()
    assert page.chosen.text() == effort_sentence(plan, chosen)
    curve = charge_curve(plan, chosen)
    qtbot.waitUntil(lambda: f"{minutes(float(curve.minutes[-1]))} of turning" in page.curve.sentence.text())
    data = page.curve.plot.data
    assert len(data.lines) == 2
    assert data.bands[0].x[-1] == pytest.approx(curve.minutes[-1])
    assert max(len(line.x) for line in data.lines) <= 300


def test_table_twin_says_the_same_as_the_curve(page, qtbot):
    qtbot.waitUntil(lambda: page.curve.table.model().rowCount() > 0)
    page.curve.toggle.click()
    assert page.curve.stack.currentWidget() is page.curve.table
    model = page.curve.table.model()
    last = [model.index(model.rowCount() - 1, column).data() for column in range(model.columnCount())]
    assert last[0] == "100 %"
    assert last[1] == minutes(page.matrix.chosen_row().minutes_p50)


def test_keyboard_walks_the_cells(qtbot, page):
    page.matrix.setFocus()
    page.matrix.setCurrentIndex(page.matrix.model().index(0, 0))
    qtbot.keyClick(page.matrix, Qt.Key.Key_Right)
    qtbot.keyClick(page.matrix, Qt.Key.Key_Down)
    assert page.chosen.text().startswith(f"One full charge of {page.matrix.matrix.devices[1]}")


def test_screen_reader_hears_names_minutes_and_range(page):
    index = page.matrix.model().index(2, 1)
    told = index.data(Qt.ItemDataRole.AccessibleTextRole)
    assert page.matrix.matrix.devices[2] in told
    assert page.matrix.matrix.stations[1] in told
    assert cell_text(page.matrix.model().row_at(index)) in told


def test_plan_with_errors_says_why_there_is_nothing(qtbot, page):
    plan, results = demo_answers("camp")
    page.set_answers(plan, replace(results, effort=None, balance=None, flow=None, problems=()))
    page.catch_up()
    assert "worked out" in page.summary.text()
    assert not page.matrix.isVisible()


def test_hidden_page_waits(qtbot):
    plan, results = demo_answers("household")
    widget = EffortPage()
    qtbot.addWidget(widget)
    widget.set_answers(plan, results)
    assert widget.matrix.matrix.devices == ()
    show_page(qtbot, widget)
    assert len(widget.matrix.matrix.devices) == 7


def test_a_device_that_cannot_be_charged_says_why():
    failed = row(minutes_p10=None, minutes_p50=None, minutes_p90=None, limit="too_little_current")
    assert cell_text(failed) == "×"
    assert "too little current" in range_text(failed)
    assert (cell_text(None), range_text(None)) == ("–", "")
    assert range_text(row()) == "2 h 30 min – 4 h 20 min"


def test_shade_runs_from_one_hour_to_ten(qtbot):
    matrix = EffortMatrix("minutes")
    qtbot.addWidget(matrix)
    shade = matrix.model().shade
    assert shade(row(minutes_p50=60.0)) == 1.0
    assert shade(row(minutes_p50=600.0)) == pytest.approx(0.0)
    assert shade(row(minutes_p50=5.0)) == 1.0
    assert shade(row(minutes_p50=120.0)) > shade(row(minutes_p50=240.0))
    assert shade(None) is None


def test_matrix_leaves_out_lines_without_rows():
    plan, results = demo_answers("camp")
    matrix = build_matrix(plan, rows_by_key(results.effort), "", "direct", "full")
    no_battery = {device.name for device in plan.devices if not device.battery_wh}
    assert no_battery
    assert not no_battery & set(matrix.devices)
    assert Matrix() == build_matrix(plan, {}, "", "direct", "full")


def test_curve_table_marks_what_is_never_reached():
    plan, results = demo_answers("camp")
    one = next(r for r in results.effort.rows if (r.charge, r.route) == ("day", "direct") and r.minutes_p50)
    table = curve_table(charge_curve(plan, one), None, ("direct", "store", "charge"))
    assert table.headers == ("charge", "direct")
    assert table.rows[-1][0] == "80 %"


def test_one_charge_gives_the_contract_s_figure(qtbot):
    # 15.4 Wh at 6 W: 199.9 min.
    box = OneChargeBox()
    qtbot.addWidget(box)
    box.compute()
    assert box.answer.text() == "3 h 20 min"
    box.watts.setValue(12.0)
    qtbot.waitUntil(lambda: box.answer.text() != "3 h 20 min")
    assert "12.0 W at the station (S)" in box.sentence.text()


def test_delegate_paints_every_kind_of_cell(qtbot):
    matrix = EffortMatrix("minutes")
    qtbot.addWidget(matrix)
    failed = row(minutes_p10=None, minutes_p50=None, minutes_p90=None, limit="connector")
    matrix.set_matrix(Matrix(("one",), ("a", "b", "c"), ((row(), failed, None),)))
    matrix.resize(500, 120)
    assert isinstance(matrix.itemDelegate(), MinutesDelegate)
    image = matrix.grab().toImage()
    assert len({image.pixelColor(x, y).name() for x in range(150, 480, 3) for y in range(30, 70, 3)}) > 4


def test_minutes_of_an_older_plan_keep_their_own_names_until_the_new_ones_come(qtbot, page):
    plan, results = demo_answers("camp")
    fewer = remove_record(("stations", plan.stations[0].id))(plan)
    page.set_answers(fewer, pipeline.run_quick(fewer, results))
    page.catch_up()
    assert "being worked out" in page.summary.text()
    assert plan.stations[0].name in page.matrix.matrix.stations
    qtbot.wait(80)
    page.set_answers(fewer, pipeline.run_slow(fewer, None))
    page.catch_up()
    assert "being worked out" not in page.summary.text()
    assert plan.stations[0].name not in page.matrix.matrix.stations


def test_chosen_pair_stays_chosen_when_lines_above_go(qtbot, page):
    plan, _results = demo_answers("camp")
    page.matrix.setCurrentIndex(page.matrix.model().index(3, 1))
    before = page.matrix.chosen_row()
    fewer = replace(plan, devices=plan.devices[1:])
    page.set_answers(fewer, pipeline.run_slow(fewer, None))
    page.catch_up()
    after = page.matrix.chosen_row()
    assert (after.device, after.station) == (before.device, before.station)


def test_curve_is_drawn_again_when_the_page_comes_back(qtbot, page):
    page.matrix.setCurrentIndex(page.matrix.model().index(1, 0))
    page.hide()
    qtbot.wait(60)
    page.show()
    qtbot.waitUntil(lambda: page.curve.plot.data is not None and page.curve.sentence.text() != "")
