"""Own hatches, drawn as lines in the painter's own units, so screen, print and grey all tell bands apart.

Qt's brush patterns are fixed in device pixels and turn to mush at print resolution, hence these.
"""

from __future__ import annotations

import math
from typing import Literal

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPainterPath, QPen

Hatch = Literal["none", "rising", "falling", "level", "upright", "crossed", "dots"]

# One hatch per category fill, in the order of `theme.CATEGORY_FILLS`.
CATEGORY_HATCHES: tuple[Hatch, ...] = ("none", "rising", "dots", "upright", "falling", "level")


def draw_hatch(painter: QPainter, shape: QPainterPath, hatch: Hatch, colour: QColor, step: float) -> None:
    """Draw a hatch inside a shape; `step` is the distance of the lines in the painter's units."""
    if hatch == "none":
        return
    painter.save()
    try:
        painter.setClipPath(shape, Qt.ClipOperation.IntersectClip)
        area = shape.boundingRect()
        if hatch == "dots":
            _dots(painter, area, colour, step)
            return
        pen = QPen(colour, step * 0.18)
        painter.setPen(pen)
        kinds = ("rising", "falling") if hatch == "crossed" else (hatch,)
        for kind in kinds:
            painter.drawLines(_lines(area, kind, step))
    finally:
        painter.restore()


def _lines(area: QRectF, kind: str, step: float) -> list[QLineF]:
    """Return lines over an area; they hang on multiples of the step, so neighbours do not jump."""
    left, right, top, bottom = area.left(), area.right(), area.top(), area.bottom()
    if kind == "level":
        first = math.ceil(top / step)
        return [QLineF(left, n * step, right, n * step) for n in range(first, math.floor(bottom / step) + 1)]
    if kind == "upright":
        first = math.ceil(left / step)
        return [QLineF(n * step, top, n * step, bottom) for n in range(first, math.floor(right / step) + 1)]
    stride = step * math.sqrt(2.0)
    if kind == "rising":
        first, last = math.floor((left + top) / stride), math.ceil((right + bottom) / stride)
        return [QLineF(n * stride - top, top, n * stride - bottom, bottom) for n in range(first, last + 1)]
    first, last = math.floor((left - bottom) / stride), math.ceil((right - top) / stride)
    return [QLineF(n * stride + top, top, n * stride + bottom, bottom) for n in range(first, last + 1)]


def _dots(painter: QPainter, area: QRectF, colour: QColor, step: float) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(colour)
    radius = step * 0.17
    first_row, last_row = math.floor(area.top() / step), math.ceil(area.bottom() / step)
    first_column, last_column = math.floor(area.left() / step), math.ceil(area.right() / step)
    for row in range(first_row, last_row + 1):
        shift = step / 2 if row % 2 else 0.0
        for column in range(first_column, last_column + 1):
            painter.drawEllipse(QPointF(column * step + shift, row * step), radius, radius)
