"""Paints a laid-out energy line: bands, peeling losses, joins, gap, chips and words, in the scheme's colours."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QLinearGradient, QPainter, QPainterPath, QPen

from kitplanner.ui.energy_line_picture import Chip, Hook, Picture, Ribbon
from kitplanner.ui.hatches import CATEGORY_HATCHES, draw_hatch
from kitplanner.ui.theme import CATEGORY_FILLS, Colours, text_on, type_font

LEAD = 18.0
INNER = 5.0
TAIL = 9.0
_MIDDLE = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextDontClip


def ribbon_path(ribbon: Ribbon) -> QPainterPath:
    """Return the outline of a band that bends smoothly between its two ends."""
    (x0, x1), (b0, b1) = ribbon.x, ribbon.bends
    b0, b1 = max(x0, min(b0, x1)), max(x0, min(b1, x1))
    middle = (b0 + b1) / 2
    (top0, low0), (top1, low1) = ribbon.start, ribbon.end
    path = QPainterPath(QPointF(x0, top0))
    path.lineTo(b0, top0)
    path.cubicTo(middle, top0, middle, top1, b1, top1)
    path.lineTo(x1, top1)
    path.lineTo(x1, low1)
    path.lineTo(b1, low1)
    path.cubicTo(middle, low1, middle, low0, b0, low0)
    path.lineTo(x0, low0)
    path.closeSubpath()
    return path


def fill_colour(scheme: Colours, fill: str) -> QColor:
    """Return the colour that a band's fill names."""
    if fill.startswith("category"):
        return QColor(CATEGORY_FILLS[int(fill.removeprefix("category")) % len(CATEGORY_FILLS)])
    return scheme.color(fill)


def paint_picture(painter: QPainter, picture: Picture, scheme: Colours, *, mirror_width: float = 0.0) -> None:
    """Paint everything; with `mirror_width` the flow runs from right to left."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.save()
    if mirror_width:
        painter.translate(mirror_width, 0)
        painter.scale(-1, 1)
    for hook in picture.hooks:
        if hook.joins:
            _join(painter, hook, scheme)
    for ribbon in picture.ribbons:
        _ribbon(painter, ribbon, scheme)
    for hook in picture.hooks:
        if not hook.joins:
            _loss(painter, hook, scheme)
    painter.setPen(QPen(scheme.color("outline"), 1.2))
    for x, top, bottom in picture.marks:
        painter.drawLine(QPointF(x, top), QPointF(x, bottom))
    painter.restore()
    for chip in picture.chips:
        paint_chip(painter, chip, scheme, mirrored(chip.box, mirror_width))
    _words(painter, picture, scheme, mirror_width)


def mirrored(box: QRectF, width: float) -> QRectF:
    """Return a box mirrored in a width, or as it is when the width is 0."""
    return QRectF(width - box.right(), box.top(), box.width(), box.height()) if width else box


def _words(painter: QPainter, picture: Picture, scheme: Colours, mirror_width: float) -> None:
    # Sides are set here, and the direction of letters by the text itself, not by the window.
    painter.setLayoutDirection(Qt.LayoutDirection.LayoutDirectionAuto)
    swap = {Qt.AlignmentFlag.AlignLeft: Qt.AlignmentFlag.AlignRight}
    swap |= {value: key for key, value in swap.items()}
    for word in picture.words:
        if not word.text:
            continue
        align = swap.get(word.align, word.align) if mirror_width else word.align
        painter.setFont(type_font(word.size, bold=word.bold))  # type: ignore[arg-type]
        painter.setPen(scheme.color(word.colour))
        box = mirrored(word.box, mirror_width)
        if word.colour == "gap":
            painter.fillRect(box.adjusted(0, -1, 0, 1), scheme.color("paper"))
        painter.drawText(box, int(align | Qt.AlignmentFlag.AlignAbsolute | _MIDDLE), word.text)


def _ribbon(painter: QPainter, ribbon: Ribbon, scheme: Colours) -> None:
    path = ribbon_path(ribbon)
    if ribbon.fill == "gap":
        draw_hatch(painter, path, "rising", scheme.color("gap"), 7.0)
        painter.setPen(QPen(scheme.color("gap"), 1.2, Qt.PenStyle.DashLine))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPath(path)
        return
    if ribbon.fill == "reserve":
        painter.setPen(QPen(scheme.color("outline"), 0.9))
        painter.setBrush(scheme.color("flow_alt"))
        painter.drawPath(path)
        draw_hatch(painter, path, "upright", scheme.color("outline"), 6.0)
        return
    colour = fill_colour(scheme, ribbon.fill)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(colour)
    painter.drawPath(path)
    if ribbon.fill.startswith("category"):
        _category_cover(painter, path, ribbon.fill, colour, scheme)
    elif ribbon.key not in {"B", "O"} and not ribbon.key.startswith("c"):
        painter.setPen(QPen(scheme.color("paper"), 1.0))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPath(path)


def _category_cover(painter: QPainter, path: QPainterPath, fill: str, colour: QColor, scheme: Colours) -> None:
    hatch = CATEGORY_HATCHES[int(fill.removeprefix("category")) % len(CATEGORY_HATCHES)]
    ink = QColor(text_on(colour))
    ink.setAlpha(150)
    draw_hatch(painter, path, hatch, ink, 6.0)
    painter.setPen(QPen(scheme.color("outline"), 0.9))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(path)


def paint_chip(painter: QPainter, chip: Chip, scheme: Colours, box: QRectF) -> None:
    """Paint a code in its small box: a category's code, or the letter of a level."""
    if not chip.fill.startswith("category"):
        painter.setPen(QPen(scheme.color("outline"), 1.0))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawRoundedRect(box.adjusted(0.5, 1, -0.5, -1), 4, 4)
        painter.setFont(type_font("small", bold=True))
        painter.setPen(scheme.color("ink"))
        painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextDontClip), chip.code)
        return
    colour = fill_colour(scheme, chip.fill)
    painter.setPen(QPen(scheme.color("outline"), 0.9))
    painter.setBrush(colour)
    painter.drawRoundedRect(box, 3, 3)
    painter.setFont(type_font("small", bold=True))
    painter.setPen(text_on(colour))
    painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextDontClip), chip.code)


def _clear(colour: QColor) -> QColor:
    clear = QColor(colour)
    clear.setAlpha(0)
    return clear


def _loss(painter: QPainter, hook: Hook, scheme: Colours) -> None:
    """Paint a strip that turns grey, bends down and fades out."""
    grey = scheme.color("loss")
    thick = hook.bottom - hook.top
    turn, foot = hook.x + LEAD, hook.bottom + INNER
    lead = QLinearGradient(hook.x, 0, turn, 0)
    lead.setColorAt(0, _clear(grey))
    lead.setColorAt(1, grey)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.fillRect(QRectF(hook.x, hook.top, LEAD + 0.3, thick), QBrush(lead))
    bend = QPainterPath(QPointF(turn, hook.top))
    outer, inner = INNER + thick, INNER
    bend.arcTo(QRectF(turn - outer, foot - outer, 2 * outer, 2 * outer), 90, -90)
    bend.lineTo(turn + inner, foot)
    bend.arcTo(QRectF(turn - inner, foot - inner, 2 * inner, 2 * inner), 0, 90)
    bend.closeSubpath()
    painter.setBrush(grey)
    painter.drawPath(bend)
    fade = QLinearGradient(0, foot, 0, foot + TAIL)
    fade.setColorAt(0, grey)
    fade.setColorAt(1, _clear(grey))
    painter.fillRect(QRectF(turn + inner, foot - 0.3, thick, TAIL), QBrush(fade))


def _join(painter: QPainter, hook: Hook, scheme: Colours) -> None:
    """Paint a strip that rises from below and bends into the flow, dotted to tell it from turning."""
    colour = scheme.color("flow_alt")
    thick = hook.bottom - hook.top
    foot, turn = hook.bottom + INNER, hook.x
    outer, inner = INNER + thick, INNER
    bend = QPainterPath(QPointF(turn, hook.top))
    bend.arcTo(QRectF(turn - outer, foot - outer, 2 * outer, 2 * outer), 90, 90)
    bend.lineTo(turn - inner, foot)
    bend.arcTo(QRectF(turn - inner, foot - inner, 2 * inner, 2 * inner), 180, -90)
    bend.lineTo(turn + 2, hook.bottom)
    bend.lineTo(turn + 2, hook.top)
    bend.closeSubpath()
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(colour)
    painter.drawPath(bend)
    draw_hatch(painter, bend, "dots", scheme.color("outline"), 6.0)
    fade = QLinearGradient(0, foot + TAIL, 0, foot)
    fade.setColorAt(0, _clear(colour))
    fade.setColorAt(1, colour)
    painter.fillRect(QRectF(turn - outer, foot - 0.3, thick, TAIL), QBrush(fade))
