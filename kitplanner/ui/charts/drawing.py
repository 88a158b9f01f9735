"""Draws one ChartData into a plot: shades, rules, bands, bars, curves, marks and their words."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import Qt
from PySide6.QtGui import QBrush, QFontMetricsF, QPen
from PySide6.QtWidgets import QGraphicsItem, QGraphicsSimpleTextItem

from kitplanner.ui.charts.bar_items import HatchedBars, Swatch
from kitplanner.ui.charts.chart_data import Band, Bars, ChartData, Line, Mark, Shade
from kitplanner.ui.theme import colours, type_font

_DASHES = {"solid": Qt.PenStyle.SolidLine, "dashed": Qt.PenStyle.DashLine, "dotted": Qt.PenStyle.DotLine}
_LINE_PX = 2.0


class ChartDrawing:
    """One drawing; `titles` are the items above the chart that the plot removes before the next one."""

    def __init__(self, item: pg.PlotItem, data: ChartData) -> None:
        self._item = item
        self._data = data
        self.titles: list[QGraphicsItem] = []

    def draw(self) -> None:
        """Draw everything, from the back to the front."""
        for shade in self._data.shades:
            self._shade(shade)
        self._rules()
        for band in self._data.bands:
            self._band(band)
        for bars in self._data.bars:
            self._item.addItem(HatchedBars(bars))
            self._bar_words(bars)
        for line in self._data.lines:
            self._line(line)
        self._marks()
        self._titles()
        self._names()

    def head_room(self) -> float:
        """Return the room above the figures that words at the top need."""
        has_words = any(line.name for line in self._data.lines) or any(bar.texts for bar in self._data.bars)
        has_words = (
            has_words
            or any(shade.text for shade in self._data.shades)
            or any(mark.text and not mark.foot for mark in self._data.marks)
        )
        return 0.16 * (self._data.y.high - self._data.y.low) if has_words else 0.0

    def _top(self) -> float:
        return self._data.y.high + self.head_room()

    def _rules(self) -> None:
        pen = QPen(colours().color("rule"), 1)
        pen.setCosmetic(True)
        for value, _text in self._data.y.ticks:
            rule = pg.InfiniteLine(pos=value, angle=0, pen=pen)
            rule.setZValue(-5)
            self._item.addItem(rule)

    def _shade(self, shade: Shade) -> None:
        colour = colours().color("edge" if shade.hatched else shade.colour)
        if shade.hatched:
            colour.setAlpha(110)
        brush = QBrush(colour, Qt.BrushStyle.BDiagPattern) if shade.hatched else QBrush(colour)
        edge = QPen(Qt.PenStyle.NoPen)
        region = pg.LinearRegionItem((shade.low, shade.high), movable=False, brush=brush, pen=edge)
        region.setZValue(-10)
        self._item.addItem(region)
        if shade.text:
            self._word(shade.text, (shade.low + shade.high) / 2, self._top(), (0.5, 0.0), "muted")

    def _band(self, band: Band) -> None:
        colour = colours().color(band.colour)
        colour.setAlpha(60)
        edge = QPen(colours().color(band.colour), 1)
        edge.setCosmetic(True)
        low = pg.PlotCurveItem(band.x, band.low, pen=edge)
        high = pg.PlotCurveItem(band.x, band.high, pen=edge)
        for curve in (low, high):
            self._item.addItem(curve)
        self._item.addItem(pg.FillBetweenItem(low, high, brush=QBrush(colour)))

    def _line(self, line: Line) -> None:
        pen = QPen(colours().color(line.colour), _LINE_PX, _DASHES[line.dash])
        pen.setCosmetic(True)
        curve = pg.PlotCurveItem(line.x, line.y, pen=pen, connect="finite", antialias=True)
        if line.dash == "solid":
            curve.setSegmentedLineMode("on")
        self._item.addItem(curve)
        if line.dots:
            brush, outline = QBrush(colours().color(line.colour)), QPen(colours().color("field"), 1)
            outline.setCosmetic(True)
            self._item.addItem(pg.ScatterPlotItem(line.x, line.y, size=9, brush=brush, pen=outline))

    def _bar_words(self, bars: Bars) -> None:
        metrics = QFontMetricsF(type_font("small"))
        room = bars.width * self._px_per_x() * 1.1
        for x, height, text in zip(bars.x, bars.height, bars.texts, strict=False):
            if text and metrics.horizontalAdvance(text) <= room and np.isfinite(height):
                self._word(text, float(x), float(max(height, 0.0)), (0.5, 1.0), "ink")

    def _px_per_x(self) -> float:
        """Return how many pixels one unit of the x axis takes."""
        (low, high), _y = self._item.getViewBox().viewRange()
        return float(self._item.getViewBox().width()) / max(1e-9, float(high) - float(low))

    def _marks(self) -> None:
        """Draw lines across; words of neighbours keep apart: side by side, or one above and one below."""
        levels = sorted((mark for mark in self._data.marks if mark.level), key=lambda mark: mark.at)
        for place, mark in enumerate(levels):
            below = place == 0 and len(levels) > 1
            self._mark_line(mark, 0)
            if mark.text:
                self._word(mark.text, self._data.x.high, mark.at, (1.0, 0.0 if below else 1.0), mark.colour)
        drop, before, span = 0.0, None, self._data.y.high - self._data.y.low
        for mark in sorted((mark for mark in self._data.marks if not mark.level), key=lambda mark: mark.at):
            self._mark_line(mark, 90)
            if mark.text:
                near = before is not None and mark.at - before < 0.6 * (self._data.x.high - self._data.x.low)
                drop, before = (drop + 0.14 if near else 0.0), mark.at
                right = mark.at > (self._data.x.low + self._data.x.high) / 2
                y = self._data.y.low + drop * span if mark.foot else self._top() - drop * span
                self._word(mark.text, mark.at, y, (1.0 if right else 0.0, 1.0 if mark.foot else 0.0), mark.colour)

    def _mark_line(self, mark: Mark, angle: int) -> None:
        pen = QPen(colours().color(mark.colour), 1.3, Qt.PenStyle.DashLine)
        pen.setCosmetic(True)
        self._item.addItem(pg.InfiniteLine(pos=mark.at, angle=angle, pen=pen))

    def _word(self, text: str, x: float, y: float, anchor: tuple[float, float], colour: str) -> None:
        word = pg.TextItem(color=colours().color(colour), anchor=anchor)
        word.setFont(type_font("small"))
        word.setText(text)
        word.setPos(x, y)
        self._item.addItem(word, ignoreBounds=True)

    def _titles(self) -> None:
        """Write what the chart counts above its figures, and beside it what each kind of bar means."""
        at = self._title(self._data.y.label, 4.0)
        for bars in self._data.bars:
            if bars.name:
                swatch = Swatch(bars)
                swatch.setParentItem(self._item)
                swatch.setPos(at + 10, 4)
                self.titles.append(swatch)
                at = self._title(bars.name, at + 14 + swatch.boundingRect().width())

    def _title(self, text: str, left: float) -> float:
        """Write a word into the line above the chart; return where it ends."""
        word = QGraphicsSimpleTextItem(text, self._item)
        word.setFont(type_font("small"))
        word.setBrush(colours().color("muted"))
        word.setPos(left, 2)
        self.titles.append(word)
        return left + float(word.boundingRect().width())

    def _names(self) -> None:
        """Write each curve's name at its end, moved apart where two would meet."""
        ends = []
        for line in self._data.lines:
            good = np.flatnonzero(np.isfinite(line.y))
            if line.name and len(good):
                ends.append((float(line.y[good[-1]]), float(line.x[good[-1]]), line))
        gap = 0.09 * (self._data.y.high - self._data.y.low)
        last = None
        for y, x, line in sorted(ends, key=lambda end: end[0]):
            at = y if last is None else max(y, last + gap)
            last = at
            self._word(line.name, x, at, (1.0, 1.0), line.colour)
