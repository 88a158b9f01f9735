"""The plot draws what the data says, in the scheme's colours, and has no behaviour of its own."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QApplication, QMenu

from kitplanner.ui import theme
from kitplanner.ui.charts.bar_items import HatchedBars
from kitplanner.ui.charts.chart_data import Axis, Band, Bars, ChartData, Line, Mark, Shade
from kitplanner.ui.charts.plot import Plot

X = np.linspace(0.0, 10.0, 200)


def chart(**parts):
    x = Axis("", 0.0, 10.0, ((0.0, "0"), (5.0, "5"), (10.0, "10")))
    return ChartData(x, Axis("W", 0.0, 1.0, ((0.0, "0"), (1.0, "1"))), **parts)


@pytest.fixture
def look(qapp):
    yield lambda scheme: theme.apply(qapp, scheme, 1.0)
    theme.apply(qapp, "light", 1.0)
    qapp.setStyleSheet("")


@pytest.fixture
def plot(qtbot, look):
    look("light")
    widget = Plot()
    qtbot.addWidget(widget)
    widget.resize(500, 240)
    widget.show()
    return widget


def items(plot, kind):
    return [item for item in plot.getPlotItem().items if isinstance(item, kind)]


def words(plot):
    return [item.textItem.toPlainText() for item in items(plot, pg.TextItem)]


def test_draws_curves_bands_bars_marks_and_words(plot):
    plot.set_data(
        chart(
            lines=(Line(X, X / 10, "made"), Line(X, X / 20, "used", "second", "dashed", dots=True)),
            bands=(Band(X, X / 20, X / 10),),
            bars=(Bars(np.array([2.0, 4.0]), np.array([0.5, 0.7]), 0.8, "strict", texts=("50 %", "70 %")),),
            shades=(Shade(3.0, 5.0, "comfort"),),
            marks=(Mark(7.0, "full"), Mark(0.4, "low", level=True)),
        )
    )
    assert len(items(plot, HatchedBars)) == 1
    assert len(items(plot, pg.FillBetweenItem)) == 1
    assert len(items(plot, pg.ScatterPlotItem)) == 1
    assert {"made", "used", "comfort", "full", "low", "50 %", "70 %"} <= set(words(plot))
    plot.grab()


def test_new_data_replaces_the_old(plot):
    plot.set_data(chart(lines=(Line(X, X / 10, "made"),)))
    plot.set_data(chart(lines=(Line(X, X / 20, "used"),)))
    assert words(plot) == ["used"]
    titles = [item for item in plot.scene().items() if isinstance(item, pg.QtWidgets.QGraphicsSimpleTextItem)]
    assert [title.text() for title in titles].count("W") == 1
    plot.set_data(None)
    assert words(plot) == []


def test_failed_points_leave_a_hole(plot):
    y = X / 10
    y[80:120] = np.nan
    plot.set_data(chart(lines=(Line(X, y, "made"),)))
    plot.grab()
    (curve,) = items(plot, pg.PlotCurveItem)
    assert curve.opts["connect"] == "finite"


@pytest.mark.parametrize("scheme", ["light", "dark", "contrast"])
def test_follows_the_scheme(plot, look, scheme):
    plot.set_data(chart(lines=(Line(X, np.full_like(X, 0.5)),)))
    look(scheme)
    image = plot.grab().toImage()
    assert image.pixelColor(496, 4) == theme.colours().color("field")
    wanted = theme.colours().color("line")
    column = [image.pixelColor(250, y) for y in range(image.height())]
    assert any(
        abs(c.red() - wanted.red()) + abs(c.green() - wanted.green()) + abs(c.blue() - wanted.blue()) < 30
        for c in column
    )


def test_wheel_and_drag_change_nothing_and_there_is_no_menu(plot):
    plot.set_data(chart(lines=(Line(X, X / 10),)))
    before = plot.viewRange()
    middle = QPointF(250, 120)
    none = Qt.MouseButton.NoButton
    event = QWheelEvent(
        middle,
        middle,
        QPoint(),
        QPoint(0, 120),
        none,
        Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(plot.viewport(), event)
    assert not event.isAccepted()
    assert plot.viewRange() == before
    assert plot.getViewBox().mouseEnabled() == [False, False]
    assert not plot.getPlotItem().menuEnabled()


def test_cursor_follows_without_drawing_again(plot):
    plot.set_data(chart(lines=(Line(X, X / 10),)))
    plot.set_cursor(3.0)
    curve = items(plot, pg.PlotCurveItem)[0]
    plot.set_cursor(6.0)
    assert items(plot, pg.PlotCurveItem)[0] is curve
    assert 6.0 in [line.value() for line in items(plot, pg.InfiniteLine) if line.angle == 90]


def test_markup_in_names_is_shown_as_text(plot):
    plot.set_data(chart(lines=(Line(X, X / 10, "<b>phone</b>"),)))
    assert words(plot) == ["<b>phone</b>"]


def test_words_that_have_no_room_give_way(plot):
    bars = Bars(np.arange(10.0), np.full(10, 0.5), 0.4, texts=("100 %",) * 10)
    plot.resize(220, 200)
    plot.set_data(chart(bars=(bars,)))
    assert words(plot) == []
    plot.resize(1400, 200)
    assert len(words(plot)) == 10


def test_the_library_s_menus_never_show(plot):
    plot.set_data(chart(lines=(Line(X, X / 10),)))
    plot.grab()
    assert not [menu for menu in plot.findChildren(QMenu) if menu.isVisible()]
