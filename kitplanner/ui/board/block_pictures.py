"""Pictures of blocks, drawn once for each look and width: fill, hatch, dark outline, letters, lock mark."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPainterPath, QPen, QPixmap

from kitplanner.ui.hatches import CATEGORY_HATCHES, draw_hatch
from kitplanner.ui.theme import CATEGORY_FILLS, colours, text_on, type_font

_MOST_KEPT = 800
_RADIUS_PX = 3.0
_HATCH_STEP_PX = 7.0


@dataclass(frozen=True)
class BlockKey:
    """What makes two blocks look alike."""

    fill: int
    hatch: int
    text: str
    width: int
    height: int
    locked: bool = False


class BlockPictures:
    """Pixmaps of blocks by key; forgotten when colours, text size or the screen's scale change."""

    def __init__(self) -> None:
        self._kept: dict[BlockKey, QPixmap] = {}
        self._made_for: tuple[object, ...] = ()

    def of(self, key: BlockKey, ratio: float) -> QPixmap:
        """Return the picture of a block."""
        made_for = (colours(), type_font("small").pointSizeF(), ratio)
        if made_for != self._made_for or len(self._kept) > _MOST_KEPT:
            self._kept.clear()
            self._made_for = made_for
        picture = self._kept.get(key)
        if picture is None:
            picture = self._kept[key] = _draw(key, ratio)
        return picture


def _draw(key: BlockKey, ratio: float) -> QPixmap:
    picture = QPixmap(round(key.width * ratio), round(key.height * ratio))
    picture.setDevicePixelRatio(ratio)
    picture.fill(Qt.GlobalColor.transparent)
    painter = QPainter(picture)
    try:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        draw_block(painter, QRectF(0, 0, key.width, key.height), key)
    finally:
        painter.end()
    return picture


def draw_block(painter: QPainter, area: QRectF, key: BlockKey) -> None:
    """Draw a block into an area: on the screen's pictures, in the legend, on paper."""
    fill = QColor(CATEGORY_FILLS[key.fill % len(CATEGORY_FILLS)])
    ink = text_on(fill)
    shape = QPainterPath()
    shape.addRoundedRect(area.adjusted(0.5, 0.5, -0.5, -0.5), _RADIUS_PX, _RADIUS_PX)
    painter.fillPath(shape, fill)
    line = QColor(ink)
    line.setAlpha(120)
    draw_hatch(painter, shape, CATEGORY_HATCHES[key.hatch % len(CATEGORY_HATCHES)], line, _HATCH_STEP_PX)
    if key.text and fits(key.text, area.width()):
        _letters(painter, area, key.text, fill, ink)
    if key.locked:
        _lock(painter, area, fill, ink)
    painter.setPen(QPen(colours().color("outline"), 1.0))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(shape)


def fits(text: str, width: float) -> bool:
    """Return whether letters have room inside a block."""
    return QFontMetricsF(type_font("small", bold=True)).horizontalAdvance(text) + 3 <= width


def _letters(painter: QPainter, area: QRectF, text: str, fill: QColor, ink: QColor) -> None:
    """Write letters on a patch of the plain fill, so that no hatch runs through them."""
    font = type_font("small", bold=True)
    painter.setFont(font)
    box = QFontMetricsF(font).tightBoundingRect(text)
    patch = QRectF(0, 0, box.width() + 4, box.height() + 4)
    patch.moveCenter(area.center())
    painter.fillRect(patch.intersected(area.adjusted(1, 1, -1, -1)), fill)
    painter.setPen(ink)
    painter.drawText(area, int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextSingleLine), text)


def _lock(painter: QPainter, area: QRectF, fill: QColor, ink: QColor) -> None:
    """Draw a small padlock in the lower right corner."""
    body = QRectF(area.right() - 8.5, area.bottom() - 7.5, 6.0, 4.5)
    painter.fillRect(body.adjusted(-1, -3.5, 1, 1).intersected(area), fill)
    painter.setPen(QPen(ink, 1.1))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawArc(QRectF(body.left() + 1.2, body.top() - 2.8, 3.6, 5.0), 0, 180 * 16)
    painter.fillRect(body, ink)


def draw_sign(painter: QPainter, at: QPointF, size: float) -> None:
    """Draw the sign of a broken rule: a filled triangle with an exclamation mark."""
    scheme = colours()
    shape = QPainterPath(QPointF(at.x(), at.y() - size * 0.62))
    shape.lineTo(at.x() + size * 0.62, at.y() + size * 0.45)
    shape.lineTo(at.x() - size * 0.62, at.y() + size * 0.45)
    shape.closeSubpath()
    painter.setPen(QPen(scheme.color("field"), 1.0))
    painter.setBrush(scheme.color("warning"))
    painter.drawPath(shape)
    painter.setPen(QPen(scheme.color("field"), max(1.2, size * 0.13)))
    painter.drawLine(QPointF(at.x(), at.y() - size * 0.22), QPointF(at.x(), at.y() + size * 0.12))
    painter.drawPoint(QPointF(at.x(), at.y() + size * 0.3))
