"""Head, names and minutes of the board: what stands still while the rows are scrolled."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPen, QPixmap

from kitplanner.domain.units import clock
from kitplanner.ui.board.block_pictures import FLAGS, draw_sign, new_picture
from kitplanner.ui.board.board_data import BoardData, Row, named_blocks
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.theme import colours, type_font

_RIGHT = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignRight)
_MOST_KEPT = 1000


@dataclass(frozen=True)
class _Strip:
    """What makes two ends of a row look alike."""

    row: Row
    width: float
    height: float
    is_left: bool
    is_broken: bool = False


class BoardMargins:
    """Draws names and minutes; keeps a picture of each row's ends."""

    def __init__(self) -> None:
        self._kept: dict[_Strip, QPixmap] = {}
        self._look: tuple[object, ...] = ()

    def prepare(self, ratio: float) -> None:
        """Forget pictures of another look."""
        look = (colours(), type_font("small").pointSizeF(), ratio)
        if look != self._look or len(self._kept) > _MOST_KEPT:
            self._look = look
            self._kept.clear()

    def draw_names(self, painter: QPainter, places: range, layout: BoardLayout, ratio: float) -> None:
        """Draw the names of rows."""
        painter.fillRect(
            QRectF(0, layout.body.top(), layout.sizes.names_px, layout.body.height()), colours().color("field")
        )
        for place in places:
            strip = _Strip(layout.rows[place], layout.sizes.names_px, layout.sizes.row_px, is_left=True)
            painter.drawPixmap(QPointF(0, layout.row_top(place)), self._picture(strip, ratio))

    def draw_sides(self, painter: QPainter, places: range, scene: tuple[BoardData, BoardLayout], ratio: float) -> None:
        """Draw the minutes of rows against their caps."""
        data, layout = scene
        left, wide = layout.body.right(), layout.sizes.side_px
        painter.fillRect(QRectF(left, layout.body.top(), wide, layout.body.height()), colours().color("field"))
        for place in places:
            row = layout.rows[place]
            broken = row.kind in ("person", "unit") and any(data.row_breaks.get((row.key, day)) for day in layout.days)
            strip = _Strip(row, wide, layout.sizes.row_px, is_left=False, is_broken=broken)
            painter.drawPixmap(QPointF(left, layout.row_top(place)), self._picture(strip, ratio))

    def _picture(self, strip: _Strip, ratio: float) -> QPixmap:
        picture = self._kept.get(strip)
        if picture is None:
            draw = _draw_name if strip.is_left else _draw_side
            picture = new_picture(strip.width, strip.height, ratio, lambda painter: draw(painter, strip))
            self._kept[strip] = picture
        return picture


def _draw_name(painter: QPainter, strip: _Strip) -> None:
    row, scheme = strip.row, colours()
    font = type_font("text", bold=row.kind == "heading")
    small = QFontMetricsF(type_font("small"))
    metrics = QFontMetricsF(font)
    # The name comes first; what is left shows the role.
    left = max(0.0, strip.width - 20 - metrics.horizontalAdvance(row.name))
    note = small.elidedText(row.note, Qt.TextElideMode.ElideRight, left) if left > 3 * small.averageCharWidth() else ""
    room = strip.width - 10
    painter.setFont(font)
    painter.setPen(scheme.color("ink"))
    text = metrics.elidedText(row.name, Qt.TextElideMode.ElideRight, room)
    painter.drawText(QRectF(6, 0, strip.width - 8, strip.height), FLAGS, text)
    if note:
        painter.setFont(type_font("small"))
        painter.setPen(scheme.color("muted"))
        painter.drawText(QRectF(6, 0, strip.width - 14, strip.height), _RIGHT, note)


def _draw_side(painter: QPainter, strip: _Strip) -> None:
    row, scheme = strip.row, colours()
    font = type_font("small")
    over = row.kind == "person" and row.used_min > row.cap_min
    painter.setFont(font)
    painter.setPen(scheme.color("warning" if over or strip.is_broken else "ink"))
    painter.drawText(QRectF(8, 0, strip.width - 8, strip.height), FLAGS, row.text)
    if row.cap_min > 0 and row.kind != "device":
        start = 8 + QFontMetricsF(font).horizontalAdvance("000 of 000 ")
        box = QRectF(start, strip.height / 2 - 3, max(16.0, strip.width - start - 6), 6)
        painter.fillRect(box, scheme.color("rule"))
        share = min(1.0, row.used_min / row.cap_min)
        filled = QRectF(box.left(), box.top(), box.width() * share, 6)
        painter.fillRect(filled, scheme.color("warning" if over else "muted"))
    if over or strip.is_broken:
        draw_sign(painter, QPointF(strip.width - 9, strip.height / 2), 12)


def draw_head(painter: QPainter, data: BoardData, layout: BoardLayout, words: dict[str, str]) -> None:
    """Draw hours, days and the names of blocks above the rows."""
    scheme, body, head = colours(), layout.body, layout.sizes.head_px
    metrics = QFontMetricsF(type_font("small"))
    line = metrics.height()
    painter.save()
    painter.fillRect(QRectF(0, 0, layout.view.width(), head), scheme.color("field"))
    painter.setFont(type_font("small"))
    painter.setPen(scheme.color("muted"))
    painter.drawText(QRectF(6, head - line - 4, layout.sizes.names_px, line), FLAGS, words.get("rows", ""))
    side = QRectF(body.right() + 8, head - line - 4, layout.sizes.side_px, line)
    painter.drawText(side, FLAGS, words.get("minutes", ""))
    painter.setClipRect(QRectF(body.left(), 0, body.width(), head))
    for day in layout.days:
        _day_head(painter, (data, layout), (day, words.get(f"day {day}", str(day))), metrics)
    painter.setPen(scheme.color("muted"))
    for x, text in hour_lines(layout):
        wide = metrics.horizontalAdvance(text) + 2
        # Words that would be cut at the edge say nothing; the lines go on.
        if text and x + 2 + wide <= body.right():
            painter.drawText(QRectF(x + 2, head - line - 4, wide + 2, line), FLAGS, text)
    painter.restore()
    painter.setPen(QPen(scheme.color("edge"), 1))
    painter.drawLine(QPointF(0, body.top() - 0.5), QPointF(layout.view.width(), body.top() - 0.5))


def _day_head(
    painter: QPainter, scene: tuple[BoardData, BoardLayout], day: tuple[int, str], metrics: QFontMetricsF
) -> None:
    """Write a day's name and the names of its blocks above the hours."""
    data, layout = scene
    number, title = day
    scheme, line = colours(), metrics.height()
    left = layout.day_left(number)
    taken = left
    if len(layout.days) > 1:
        shown = max(left, layout.body.left())
        painter.setPen(scheme.color("ink"))
        painter.drawText(QRectF(shown + 2, 2, layout.day_px, line), FLAGS, title)
        taken = shown + metrics.horizontalAdvance(title) + 10
    painter.setPen(scheme.color("muted"))
    for name, (start, end) in named_blocks(data.plan, number):
        start_x, end_x = layout.x_of(number, start), layout.x_of(number, end)
        wide = metrics.horizontalAdvance(name)
        if end_x > start_x and wide + 4 <= end_x - start_x and start_x >= taken:
            painter.drawText(QRectF(start_x + 2, 2, wide + 2, line), FLAGS, name)


def hour_lines(layout: BoardLayout) -> list[tuple[float, str]]:
    """Return x and text of the hours; as many texts as have room."""
    wide = QFontMetricsF(type_font("small")).horizontalAdvance("00:00") + 10
    step = next((each for each in (60, 120, 180, 240, 360, 720) if each * layout.px_per_min >= wide), 1440)
    between = 60 if layout.px_per_min * 60 >= 8 else step
    lines = []
    for day in layout.days:
        first = -(-layout.low_min // 60) * 60
        for minute in range(first, layout.high_min + 1, between):
            inside = (layout.high_min - minute) * layout.px_per_min >= min(wide, layout.px_per_min * 60)
            shown = (minute - first) % step == 0 and inside
            lines.append((layout.x_of(day, minute), clock(minute) if shown else ""))
    return lines


def grid_lines(layout: BoardLayout, places: range) -> tuple[list[QLineF], list[QLineF]]:
    """Return thin lines between rows and hours, and stronger ones between days."""
    top, bottom = layout.row_top(places.start), layout.row_top(places.stop)
    lines = [QLineF(0, layout.row_top(n), layout.view.width(), layout.row_top(n)) for n in (*places, places.stop)]
    lines += [QLineF(x, top, x, bottom) for x, _text in hour_lines(layout)]
    return lines, [QLineF(layout.day_left(d) - 5, top, layout.day_left(d) - 5, bottom) for d in layout.days[1:]]
