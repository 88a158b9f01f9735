"""Bars drawn by the program itself, so that outline and hatch keep their width at any scale."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import QWidget

from kitplanner.ui.charts.chart_data import Bars
from kitplanner.ui.guard import guarded
from kitplanner.ui.hatches import draw_hatch
from kitplanner.ui.theme import colours, type_font


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
