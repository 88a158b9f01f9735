"""Draws chart data with pyqtgraph: own axes, few ticks, words at the curves, colours of the scheme."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QBrush, QFontMetricsF, QPainter, QPainterPath, QPen, QResizeEvent
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
        self.setStyle(
            tickTextOffset=6, autoExpandTextSpace=True, autoReduceTextSpace=False, hideOverlappingLabels=False
        )

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
        to_px = painter.transform()
        painter.save()
        painter.resetTransform()
        half = self._bars.width / 2
        for x, height in zip(self._bars.x, self._bars.height, strict=True):
            if np.isfinite(height) and height != 0:
                box = QRectF(QPointF(x - half, 0), QPointF(x + half, float(height))).normalized()
                fill_box(painter, to_px.mapRect(box), self._bars)
        painter.restore()


class Swatch(pg.GraphicsObject):
    """A small sample of a kind of bar."""

    def __init__(self, bars: Bars) -> None:
        super().__init__()
        self._bars = bars
        side = QFontMetricsF(type_font("small")).height() * 0.72
        self._box = QRectF(0, side * 0.1, side * 1.3, side)

    @guarded(QRectF())
    def boundingRect(self) -> QRectF:
        """Return the sample's box."""
        return self._box.adjusted(-1, -1, 1, 1)

    @guarded()
    def paint(self, painter: QPainter, _option: object, _widget: QWidget | None) -> None:
        """Draw the sample."""
        fill_box(painter, self._box, self._bars)


def fill_box(painter: QPainter, box: QRectF, bars: Bars) -> None:
    """Draw one bar: filled with a thin outline, or hollow with a hatch."""
    scheme = colours()
    fill = scheme.color(bars.colour)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    if bars.hollow:
        path = QPainterPath()
        path.addRect(box)
        draw_hatch(painter, path, "rising", fill, 6.0)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(fill, 1.3))
    else:
        painter.setBrush(fill)
        painter.setPen(QPen(scheme.color("outline"), 0.8))
    painter.drawRect(box)


class Plot(pg.PlotWidget):
    """A chart of one ChartData; its words stand above it, not along its side."""

    ready = False

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent, axisItems={"left": PlainAxis("left"), "bottom": PlainAxis("bottom")})
        self._data: ChartData | None = None
        self._cursor: pg.InfiniteLine | None = None
        self._cursor_at: float | None = None
        self._title_items: list[pg.QtWidgets.QGraphicsItem] = []
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

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Choose again which words have room."""
        super().resizeEvent(event)
        if self.ready and self._data is not None and any(bars.texts for bars in self._data.bars):
            self._draw()

    @guarded(QSize(320, 200))
    def sizeHint(self) -> QSize:
        """Return a small size: the frame around the plot sets its height."""
        return QSize(320, 120)

    @guarded(QSize(120, 80))
    def minimumSizeHint(self) -> QSize:
        """Return the least size."""
        return QSize(120, 80)

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
        self.getAxis("bottom").setHeight(round(line * 1.55))

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
        self.setYRange(data.y.low, data.y.high + self._head_room(data), padding=0.02)
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
        self._marks(data)
        self._titles(data)
        self._names(data)
        if self._cursor_at is not None:
            pen = QPen(colours().color("ink"), 1.4)
            pen.setCosmetic(True)
            self._cursor = pg.InfiniteLine(pos=self._cursor_at, angle=90, pen=pen)
            item.addItem(self._cursor)

    @staticmethod
    def _head_room(data: ChartData) -> float:
        """Return the room above the figures that words at the top need."""
        has_words = any(line.name for line in data.lines) or any(bar.texts for bar in data.bars)
        has_words = (
            has_words
            or any(shade.text for shade in data.shades)
            or any(mark.text and not mark.foot for mark in data.marks)
        )
        return 0.16 * (data.y.high - data.y.low) if has_words else 0.0

    def _top(self, data: ChartData) -> float:
        return data.y.high + self._head_room(data)

    def _rules(self, data: ChartData) -> None:
        pen = QPen(colours().color("rule"), 1)
        pen.setCosmetic(True)
        for value, _text in data.y.ticks:
            rule = pg.InfiniteLine(pos=value, angle=0, pen=pen)
            rule.setZValue(-5)
            self.getPlotItem().addItem(rule)

    def _shade(self, shade: Shade, data: ChartData) -> None:
        colour = colours().color("edge" if shade.hatched else shade.colour)
        if shade.hatched:
            colour.setAlpha(110)
        brush = QBrush(colour, Qt.BrushStyle.BDiagPattern) if shade.hatched else QBrush(colour)
        edge = QPen(Qt.PenStyle.NoPen)
        region = pg.LinearRegionItem((shade.low, shade.high), movable=False, brush=brush, pen=edge)
        region.setZValue(-10)
        self.getPlotItem().addItem(region)
        if shade.text:
            self._word(shade.text, (shade.low + shade.high) / 2, self._top(data), (0.5, 0.0), "muted")

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
            outline.setCosmetic(True)
            self.getPlotItem().addItem(pg.ScatterPlotItem(line.x, line.y, size=9, brush=brush, pen=outline))

    def _bar_words(self, bars: Bars) -> None:
        metrics = QFontMetricsF(type_font("small"))
        room = bars.width * self._px_per_x() * 1.1
        for x, height, text in zip(bars.x, bars.height, bars.texts, strict=False):
            if text and metrics.horizontalAdvance(text) <= room and np.isfinite(height):
                self._word(text, float(x), float(max(height, 0.0)), (0.5, 1.0), "ink")

    def _px_per_x(self) -> float:
        """Return how many pixels one unit of the x axis takes."""
        (low, high), _y = self.viewRange()
        return float(self.getViewBox().width()) / max(1e-9, float(high) - float(low))

    def _marks(self, data: ChartData) -> None:
        """Draw lines across; words of neighbours keep apart: side by side, or one above and one below."""
        levels = sorted((mark for mark in data.marks if mark.level), key=lambda mark: mark.at)
        for place, mark in enumerate(levels):
            below = place == 0 and len(levels) > 1
            self._mark_line(mark, 0)
            if mark.text:
                self._word(mark.text, data.x.high, mark.at, (1.0, 0.0 if below else 1.0), mark.colour)
        drop, before, span = 0.0, None, data.y.high - data.y.low
        for mark in sorted((mark for mark in data.marks if not mark.level), key=lambda mark: mark.at):
            self._mark_line(mark, 90)
            if mark.text:
                near = before is not None and mark.at - before < 0.6 * (data.x.high - data.x.low)
                drop, before = (drop + 0.14 if near else 0.0), mark.at
                right = mark.at > (data.x.low + data.x.high) / 2
                y = data.y.low + drop * span if mark.foot else self._top(data) - drop * span
                self._word(mark.text, mark.at, y, (1.0 if right else 0.0, 1.0 if mark.foot else 0.0), mark.colour)

    def _mark_line(self, mark: Mark, angle: int) -> None:
        pen = QPen(colours().color(mark.colour), 1.3, Qt.PenStyle.DashLine)
        pen.setCosmetic(True)
        self.getPlotItem().addItem(pg.InfiniteLine(pos=mark.at, angle=angle, pen=pen))

    def _word(self, text: str, x: float, y: float, anchor: tuple[float, float], colour: str) -> None:
        word = pg.TextItem(color=colours().color(colour), anchor=anchor)
        word.setFont(type_font("small"))
        word.setText(text)
        word.setPos(x, y)
        self.getPlotItem().addItem(word, ignoreBounds=True)

    def _titles(self, data: ChartData) -> None:
        """Write what the chart counts above its figures, and beside it what each kind of bar means."""
        for old in self._title_items:
            if old.scene() is not None:
                old.scene().removeItem(old)
        self._title_items = []
        at = self._title(data.y.label, 4.0)
        for bars in data.bars:
            if bars.name:
                swatch = Swatch(bars)
                swatch.setParentItem(self.getPlotItem())
                swatch.setPos(at + 10, 4)
                self._title_items.append(swatch)
                at = self._title(bars.name, at + 14 + swatch.boundingRect().width())

    def _title(self, text: str, left: float) -> float:
        """Write a word into the line above the chart; return where it ends."""
        word = pg.QtWidgets.QGraphicsSimpleTextItem(text, self.getPlotItem())
        word.setFont(type_font("small"))
        word.setBrush(colours().color("muted"))
        word.setPos(left, 2)
        self._title_items.append(word)
        return left + float(word.boundingRect().width())

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
