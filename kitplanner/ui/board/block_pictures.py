"""Pictures of blocks, drawn once for each look and width: fill, hatch, dark outline, letters, lock mark."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPainterPath, QPen, QPixmap

from kitplanner.ui.hatches import CATEGORY_HATCHES, draw_hatch
from kitplanner.ui.theme import CATEGORY_FILLS, colours, text_on, type_font

_MOST_KEPT = 1500
_RADIUS_PX = 3.0
_HATCH_STEP_PX = 7.0
# Room between a block and letters that stand beside it.
BESIDE_PX = 2
WATCH_DASHES = [2.5, 2.0]
FLAGS = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter)
_CENTRE = int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextSingleLine)


@dataclass(frozen=True)
class BlockKey:
    """What makes two blocks look alike; `beside` is written to the right of the block, outside it."""

    fill: int
    hatch: int
    text: str
    width: int
    height: int
    locked: bool = False
    beside: str = ""
    kind: Literal["turn", "watch", "charge"] = "turn"


class BlockPictures:
    """Pixmaps of blocks by key; forgotten when colours, text size or the screen's scale change."""

    def __init__(self) -> None:
        self._kept: dict[BlockKey, QPixmap] = {}

    def clear(self) -> None:
        """Forget all pictures."""
        self._kept.clear()

    def of(self, key: BlockKey, ratio: float) -> QPixmap:
        """Return the picture of a block."""
        picture = self._kept.get(key)
        if picture is None:
            if len(self._kept) > _MOST_KEPT:
                self._kept.clear()
            picture = self._kept[key] = _draw(key, ratio)
        return picture


def new_picture(width: float, height: float, ratio: float, draw: Callable[[QPainter], None]) -> QPixmap:
    """Return a clear picture with something drawn on it."""
    picture = QPixmap(max(1, round(width * ratio)), max(1, round(height * ratio)))
    picture.setDevicePixelRatio(ratio)
    picture.fill(Qt.GlobalColor.transparent)
    painter = QPainter(picture)
    try:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        draw(painter)
    finally:
        painter.end()
    return picture


def _draw(key: BlockKey, ratio: float) -> QPixmap:
    area = QRectF(0, 0, key.width, key.height)
    extra = beside_px(key.beside) + BESIDE_PX if key.beside else 0.0

    def draw(painter: QPainter) -> None:
        if key.kind == "watch":
            draw_watch(painter, area)
        elif key.kind == "charge":
            _charge(painter, area, key.text)
        else:
            draw_block(painter, area, key)
        if key.beside:
            painter.setFont(type_font("small"))
            painter.setPen(colours().color("muted"))
            painter.drawText(QRectF(key.width + BESIDE_PX, 0, extra + 2, key.height), FLAGS, key.beside)

    return new_picture(key.width + extra, key.height, ratio, draw)


def draw_block(painter: QPainter, area: QRectF, key: BlockKey) -> None:
    """Draw a block into an area: on the screen's pictures and in the legend."""
    fill = QColor(CATEGORY_FILLS[key.fill % len(CATEGORY_FILLS)])
    ink = text_on(fill)
    shape = QPainterPath()
    shape.addRoundedRect(area.adjusted(0.5, 0.5, -0.5, -0.5), _RADIUS_PX, _RADIUS_PX)
    painter.fillPath(shape, fill)
    line = QColor(ink)
    line.setAlpha(120)
    draw_hatch(painter, shape, CATEGORY_HATCHES[key.hatch % len(CATEGORY_HATCHES)], line, _HATCH_STEP_PX)
    if key.text:
        _letters(painter, area, key.text, fill, ink)
    if key.locked:
        _lock(painter, area, fill, ink)
    painter.setPen(QPen(colours().color("outline"), 1.0))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(shape)


def draw_watch(painter: QPainter, area: QRectF) -> None:
    """Draw the dashed outline of somebody who watches."""
    pen = QPen(colours().color("ink"), 1.0)
    pen.setDashPattern(WATCH_DASHES)
    painter.setPen(pen)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawRoundedRect(area.adjusted(0.5, 2.5, -0.5, -2.5), _RADIUS_PX, _RADIUS_PX)


def _charge(painter: QPainter, area: QRectF, text: str) -> None:
    scheme = colours()
    painter.setBrush(scheme.color("panel"))
    painter.setPen(QPen(scheme.color("edge"), 1.0))
    painter.drawRoundedRect(area.adjusted(0.5, 1.5, -0.5, -1.5), _RADIUS_PX, _RADIUS_PX)
    if text:
        painter.setFont(type_font("small"))
        painter.setPen(scheme.color("ink"))
        painter.drawText(area, _CENTRE, text)


def letters_px(text: str) -> float:
    """Return the width that letters inside a block need."""
    return QFontMetricsF(type_font("small", bold=True)).horizontalAdvance(text) + 3


def beside_px(text: str) -> float:
    """Return the width that letters beside a block need."""
    return QFontMetricsF(type_font("small")).horizontalAdvance(text)


def _letters(painter: QPainter, area: QRectF, text: str, fill: QColor, ink: QColor) -> None:
    """Write letters on a patch of the plain fill, so that no hatch runs through them."""
    font = type_font("small", bold=True)
    painter.setFont(font)
    box = QFontMetricsF(font).tightBoundingRect(text)
    patch = QRectF(0, 0, box.width() + 4, box.height() + 4)
    patch.moveCenter(area.center())
    painter.fillRect(patch.intersected(area.adjusted(1, 1, -1, -1)), fill)
    painter.setPen(ink)
    painter.drawText(area, _CENTRE, text)


def _lock(painter: QPainter, area: QRectF, fill: QColor, ink: QColor) -> None:
    """Draw a small padlock in the lower right corner, within the block however narrow it is."""
    wide = min(6.0, area.width() - 3.0)
    body = QRectF(area.right() - wide - 1.5, area.bottom() - 7.0, wide, 4.5)
    painter.fillRect(body.adjusted(-1, -4.0, 1, 1).intersected(area.adjusted(1, 1, -1, -1)), fill)
    painter.setPen(QPen(ink, 1.1))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawArc(QRectF(body.left() + wide * 0.2, body.top() - 2.8, wide * 0.6, 5.0), 0, 180 * 16)
    painter.fillRect(body, ink)


def draw_sign(painter: QPainter, at: QPointF, size: float) -> None:
    """Draw the sign of a broken rule: a filled triangle with an exclamation mark."""
    scheme = colours()
    shape = QPainterPath(QPointF(at.x(), at.y() - size * 0.62))
    shape.lineTo(at.x() + size * 0.62, at.y() + size * 0.45)
    shape.lineTo(at.x() - size * 0.62, at.y() + size * 0.45)
    shape.closeSubpath()
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(scheme.color("field"), 1.0))
    painter.setBrush(scheme.color("warning"))
    painter.drawPath(shape)
    painter.setPen(QPen(scheme.color("field"), max(1.2, size * 0.13)))
    painter.drawLine(QPointF(at.x(), at.y() - size * 0.22), QPointF(at.x(), at.y() + size * 0.12))
    painter.drawPoint(QPointF(at.x(), at.y() + size * 0.3))
    painter.restore()
