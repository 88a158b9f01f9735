"""The Bench page asks the bench and shows its point, sweep, stages and meter band."""

from __future__ import annotations

import numpy as np
import pytest
from msgspec.structs import replace

from kitplanner.planners.bench import bench_point, bench_sweep
from kitplanner.report.wording_bench import point_sentence
from kitplanner.ui.pages.bench_charts import failure_spans, sweep_table
from kitplanner.ui.pages.bench_page import BenchPage
from tests.ui.sample_answers import demo_answers, show_page


@pytest.fixture
def page(qtbot):
    widget = BenchPage()
    widget.set_answers(*demo_answers("bench"))
    return show_page(qtbot, widget, (900, 1400))


def cells(table):
    model = table.model()
    return [[model.index(r, c).data() for c in range(model.columnCount())] for r in range(model.rowCount())]


def wait_point(qtbot, page, check):
    qtbot.waitUntil(lambda: page.point is not None and check(page.point), timeout=5000)


def test_meter_band_at_a_fixed_current_is_the_contract_s(qtbot, page):
    # Set A at 0.3 A: 6.73 to 8.16 V.
    page.choose_station("A")
    page.controls.fixed.click()
    page.controls.amps.setValue(0.3)
    wait_point(qtbot, page, lambda point: point.plug_a == pytest.approx(0.3))
    assert "6.73 V" in page.meter_words.text()
    assert "8.16 V" in page.meter_words.text()
    assert page.gauge.accessibleDescription() == page.meter_words.text()
    assert page.gauge.full_scale_v > 8.16


def test_offers_every_station_by_parts(page):
    plan, _results = demo_answers("bench")
    offered = [page.controls.station.itemData(n) for n in range(page.controls.station.count())]
    assert offered == [station.id for station in plan.stations if station.described_by == "parts"]


def test_best_cadence_is_the_bench_s_own(qtbot, page):
    plan, _results = demo_answers("bench")
    page.choose_station("B")
    wait_point(qtbot, page, lambda point: point.station == "B")
    best = bench_point(plan, "B")
    assert page.point.rpm == pytest.approx(best.rpm)
    assert page.controls.rpm.value() == pytest.approx(best.rpm, abs=0.06)
    assert page.answer.text() == point_sentence(best, next(s.name for s in plan.stations if s.id == "B"))


def test_slider_asks_for_a_cadence(qtbot, page):
    page.controls.slider.setValue(100)
    wait_point(qtbot, page, lambda point: point.rpm == pytest.approx(100.0))
    assert not page.controls.best.isChecked()
    assert page.watts.plot._cursor.value() == pytest.approx(100.0)
    page.controls.best.click()
    wait_point(qtbot, page, lambda point: point.rpm != pytest.approx(100.0))


def test_losses_in_the_table_add_up(page):
    rows = cells(page.stages)
    lost = sum(float(row[2]) for row in rows[:-1])
    assert float(rows[0][1]) - lost == pytest.approx(float(rows[-1][1]), abs=0.05)


def test_small_charts_share_one_axis_and_the_comfort_band(page):
    frames = [frame for frame in page.small_frames() if frame.isVisible()]
    assert len(frames) >= 5
    axes = {(frame.plot.data.x.low, frame.plot.data.x.high) for frame in frames}
    assert len(axes) == 1
    assert {frame.plot.data.shades[0].text for frame in frames} == {"comfort"}


def test_failing_cadences_are_named(page):
    plan, _results = demo_answers("bench")
    sweep = bench_sweep(plan, "A")
    spans = failure_spans(sweep)
    assert spans
    assert spans[0][0] == pytest.approx(sweep.rpm[0])
    for low, high, states in spans:
        inside = [s for rpm, s in zip(sweep.rpm, sweep.states, strict=True) if low < rpm < high]
        assert set(inside) <= {states}
    assert len(page.states.text().splitlines()) == len(spans)


def test_sweep_table_has_a_state_for_each_cadence():
    plan, _results = demo_answers("bench")
    sweep = bench_sweep(plan, "A-buck")
    table = sweep_table(sweep, ("",) * 9)
    assert len(table.rows) == min(25, len(sweep.rpm))
    assert all(row[8] for row in table.rows)
    assert not any("nan" in cell for row in table.rows for cell in row)


def test_plan_without_parts_says_so(qtbot, page):
    with qtbot.waitSignal(page.point_changed) as told:
        page.set_answers(*demo_answers("household"))
        page.catch_up()
    assert told.args == [None, ""]
    assert "described by its parts" in page.answer.text()
    assert not page.stages.isVisible()


def test_an_edit_of_the_station_is_followed(qtbot, page):
    plan, results = demo_answers("bench")
    station = plan.stations[0]
    weaker = replace(station, machine=replace(station.machine, ra_ohm=station.machine.ra_ohm * 2))
    before = np.array(page._sweep.stored_w)
    page.set_answers(replace(plan, stations=(weaker, *plan.stations[1:])), results)
    page.catch_up()
    after = page._sweep.stored_w
    assert np.nanmax(before) > np.nanmax(after)


def test_gauge_paints_and_hides_without_a_band(qtbot, page):
    page.gauge.set_reading(6.0, 8.0, 7.0, "between")
    page.gauge.grab()
    page.gauge.set_reading(None, None, None, "")
    assert page.gauge.isHidden()
