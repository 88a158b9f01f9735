"""Draws chart data with pyqtgraph: own axes, few ticks, words at the curves, colours of the scheme."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QBrush, QFontMetricsF, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import QWidget

from kitplanner.ui.charts.chart_data import Band, Bars, ChartData, Line, Mark, Shade
from kitplanner.ui.guard import guarded
from kitplanner.ui.hatches import draw_hatch
from kitplanner.ui.theme import colours, type_font

_DASHES = {"solid": Qt.PenStyle.SolidLine, "dashed": Qt.PenStyle.DashLine, "dotted": Qt.PenStyle.DotLine}
_LINE_PX = 2.0


class PlainAxis(pg.AxisItem):
    """An axis without boxes or minor ticks: muted figures, one thin rule."""

    def __init__(self, orientation: str) -> None:
        super().__init__(orientation, maxTickLength=0)
        self.setStyle(tickTextOffset=6, autoExpandTextSpace=True, autoReduceTextSpace=False, hideOverlappingLabels=True)

    @guarded()
    def paint(self, painter: QPainter, option: object, widget: QWidget | None) -> None:
        """Draw the axis; a fault in it is reported and never reaches Qt."""
        super().paint(painter, option, widget)


class HatchedBars(pg.GraphicsObject):
    """Bars as own shapes: filled, or hollow with a hatch, with a thin outline."""

    def __init__(self, bars: Bars) -> None:
        super().__init__()
        self._bars = bars
        tall = bars.height[np.isfinite(bars.height)]
        top, low = float(tall.max(initial=0.0)), float(tall.min(initial=0.0))
        left, right = float(bars.x.min()) - bars.width, float(bars.x.max()) + bars.width
        self._bounds = QRectF(left, low, right - left, max(1e-9, top - low))

    @guarded(QRectF())
    def boundingRect(self) -> QRectF:
        """Return the extent in the chart's units."""
        return self._bounds

    @guarded()
    def paint(self, painter: QPainter, _option: object, _widget: QWidget | None) -> None:
        """Draw in pixels, so that outline and hatch keep their width at any scale."""
        scheme, to_px = colours(), painter.transform()
        painter.save()
        painter.resetTransform()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        fill = scheme.color(self._bars.colour)
        for x, height in zip(self._bars.x, self._bars.height, strict=True):
            if not np.isfinite(height) or height == 0:
                continue
            half = self._bars.width / 2
            box = to_px.mapRect(QRectF(QPointF(x - half, 0), QPointF(x + half, float(height))).normalized())
            path = QPainterPath()
            path.addRect(box)
            if self._bars.hollow:
                draw_hatch(painter, path, "rising", fill, 6.0)
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.setPen(QPen(fill, 1.3))
            else:
                painter.setBrush(fill)
                painter.setPen(QPen(scheme.color("outline"), 0.8))
            painter.drawRect(box)
        painter.restore()


class Plot(pg.PlotWidget):
    """A chart of one ChartData; its words stand above it, not along its side."""

    ready = False

    def __init__(self, parent: QWidget | None = None, *, height_lines: float = 13.0) -> None:
        super().__init__(parent, axisItems={"left": PlainAxis("left"), "bottom": PlainAxis("bottom")})
        self._data: ChartData | None = None
        self._height_lines = height_lines
        self._cursor: pg.InfiniteLine | None = None
        self._cursor_at: float | None = None
        self.setAntialiasing(True)
        item = self.getPlotItem()
        item.setMenuEnabled(False)
        item.hideButtons()
        self.setMouseEnabled(x=False, y=False)
        self.getViewBox().setMouseEnabled(False, False)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setFrameShape(pg.QtWidgets.QFrame.Shape.NoFrame)
        self.ready = True
        self._style()

    @property
    def data(self) -> ChartData | None:
        """What is drawn now."""
        return self._data

    def set_data(self, data: ChartData | None) -> None:
        """Draw other data; None empties the chart."""
        self._data = data
        self._draw()

    def set_cursor(self, at: float | None) -> None:
        """Put a line at a place on the x axis, to follow a slider."""
        self._cursor_at = at
        if self._cursor is None or at is None:
            self._draw()
            return
        self._cursor.setValue(at)

    @guarded()
    def wheelEvent(self, event: QEvent) -> None:
        """Leave the wheel to the page, so that scrolling never stops at a chart."""
        event.ignore()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Take the new colours and type size."""
        super().changeEvent(event)
        if self.ready and event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange):
            self._style()
            self._draw()
            self.updateGeometry()

    @guarded(QSize(320, 200))
    def sizeHint(self) -> QSize:
        """Return a height that follows the text size."""
        line = QFontMetricsF(type_font("small")).height()
        return QSize(round(24 * line), round(self._height_lines * line))

    @guarded(QSize(200, 150))
    def minimumSizeHint(self) -> QSize:
        """Return the least size at which ticks and words stay apart."""
        line = QFontMetricsF(type_font("small")).height()
        return QSize(round(13 * line), round(self._height_lines * line * 0.8))

    def _style(self) -> None:
        scheme, font = colours(), type_font("small")
        self.setBackground(scheme.color("field"))
        line = QFontMetricsF(font).height()
        self.getPlotItem().layout.setContentsMargins(2, round(line * 1.5), round(line * 0.9), 2)
        for name in ("left", "bottom"):
            axis = self.getAxis(name)
            axis.setTickFont(font)
            axis.setPen(QPen(scheme.color("rule"), 1))
            axis.setTextPen(QPen(scheme.color("muted")))
            axis.setStyle(tickTextOffset=round(line * 0.35))
        self.getAxis("left").setGrid(False)

    def _draw(self) -> None:
        item = self.getPlotItem()
        item.clear()
        self._cursor = None
        for name in ("left", "bottom"):
            item.showAxis(name, self._data is not None)
        data = self._data
        if data is None:
            return
        self.setXRange(data.x.low, data.x.high, padding=0)
        self.setYRange(data.y.low, data.y.high, padding=0.03)
        self.getAxis("bottom").setTicks([list(data.x.ticks)])
        self.getAxis("left").setTicks([list(data.y.ticks)])
        for shade in data.shades:
            self._shade(shade, data)
        self._rules(data)
        for band in data.bands:
            self._band(band)
        for bars in data.bars:
            item.addItem(HatchedBars(bars))
            self._bar_words(bars)
        for line in data.lines:
            self._line(line)
        for mark in data.marks:
            self._mark(mark, data)
        self._titles(data)
        self._names(data)
        if self._cursor_at is not None:
            self._cursor = pg.InfiniteLine(pos=self._cursor_at, angle=90, pen=QPen(colours().color("ink"), 1.2))
            item.addItem(self._cursor)

    def _rules(self, data: ChartData) -> None:
        pen = QPen(colours().color("rule"), 1)
        pen.setCosmetic(True)
        for value, _text in data.y.ticks:
            rule = pg.InfiniteLine(pos=value, angle=0, pen=pen)
            rule.setZValue(-5)
            self.getPlotItem().addItem(rule)

    def _shade(self, shade: Shade, data: ChartData) -> None:
        colour = colours().color(shade.colour)
        brush = QBrush(colour, Qt.BrushStyle.BDiagPattern) if shade.hatched else QBrush(colour)
        edge = QPen(colours().color("rule"), 1)
        edge.setCosmetic(True)
        region = pg.LinearRegionItem((shade.low, shade.high), movable=False, brush=brush, pen=edge)
        region.setZValue(-10)
        self.getPlotItem().addItem(region)
        if shade.text:
            self._word(shade.text, (shade.low + shade.high) / 2, data.y.high, (0.5, 0.0), "muted")

    def _band(self, band: Band) -> None:
        colour = colours().color(band.colour)
        colour.setAlpha(60)
        edge = QPen(colours().color(band.colour), 1)
        edge.setCosmetic(True)
        low = pg.PlotCurveItem(band.x, band.low, pen=edge)
        high = pg.PlotCurveItem(band.x, band.high, pen=edge)
        for curve in (low, high):
            self.getPlotItem().addItem(curve)
        self.getPlotItem().addItem(pg.FillBetweenItem(low, high, brush=QBrush(colour)))

    def _line(self, line: Line) -> None:
        pen = QPen(colours().color(line.colour), _LINE_PX, _DASHES[line.dash])
        pen.setCosmetic(True)
        curve = pg.PlotCurveItem(line.x, line.y, pen=pen, connect="finite", antialias=True)
        if line.dash == "solid":
            curve.setSegmentedLineMode("on")
        self.getPlotItem().addItem(curve)
        if line.dots:
            brush, outline = QBrush(colours().color(line.colour)), QPen(colours().color("field"), 1)
            self.getPlotItem().addItem(pg.ScatterPlotItem(line.x, line.y, size=9, brush=brush, pen=outline))

    def _bar_words(self, bars: Bars) -> None:
        for x, height, text in zip(bars.x, bars.height, bars.texts, strict=False):
            if text and np.isfinite(height):
                self._word(text, float(x), float(max(height, 0.0)), (0.5, 1.0), "ink")

    def _mark(self, mark: Mark, data: ChartData) -> None:
        pen = QPen(colours().color(mark.colour), 1.3, Qt.PenStyle.DashLine)
        pen.setCosmetic(True)
        item = self.getPlotItem()
        item.addItem(pg.InfiniteLine(pos=mark.at, angle=0 if mark.level else 90, pen=pen))
        if not mark.text:
            return
        if mark.level:
            self._word(mark.text, data.x.high, mark.at, (1.0, 1.0), mark.colour)
            return
        right = mark.at > (data.x.low + data.x.high) / 2
        self._word(mark.text, mark.at, data.y.high, (1.0 if right else 0.0, 0.0), mark.colour)

    def _word(self, text: str, x: float, y: float, anchor: tuple[float, float], colour: str) -> None:
        word = pg.TextItem(color=colours().color(colour), anchor=anchor)
        word.setFont(type_font("small"))
        word.setText(text)
        word.setPos(x, y)
        self.getPlotItem().addItem(word, ignoreBounds=True)

    def _titles(self, data: ChartData) -> None:
        """Write what the chart counts above its figures."""
        scheme, font = colours(), type_font("small")
        scene = self.getPlotItem()
        for old in getattr(self, "_title_items", ()):
            old.setParentItem(None)
            if old.scene() is not None:
                old.scene().removeItem(old)
        title = pg.QtWidgets.QGraphicsSimpleTextItem(data.y.label, scene)
        title.setFont(font)
        title.setBrush(scheme.color("muted"))
        title.setPos(4, 2)
        self._title_items = [title]

    def _names(self, data: ChartData) -> None:
        """Write each curve's name at its end, moved apart where two would meet."""
        ends = []
        for line in data.lines:
            good = np.flatnonzero(np.isfinite(line.y))
            if line.name and len(good):
                ends.append((float(line.y[good[-1]]), float(line.x[good[-1]]), line))
        gap = 0.09 * (data.y.high - data.y.low)
        last = None
        for y, x, line in sorted(ends, key=lambda end: end[0]):
            at = y if last is None else max(y, last + gap)
            last = at
            self._word(line.name, x, at, (1.0, 1.0), line.colour)

