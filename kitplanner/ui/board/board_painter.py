"""Paints the board into any painter: only rows that touch the area to be painted."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPen

from kitplanner.domain.units import clock
from kitplanner.ui.board.block_pictures import BlockKey, BlockPictures, draw_sign, fits
from kitplanner.ui.board.board_curves import draw_curves
from kitplanner.ui.board.board_data import BoardData, Curves, Row, ShownBout, ShownCharge, named_blocks, shut_parts
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.theme import Colours, colours, type_font

Parts = tuple[tuple[int, int], ...]
_FLAGS = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter)


@dataclass(frozen=True)
class Ghost:
    """A turn as it would be if the hand let go now; `broken` names rules it would break."""

    bout: ShownBout
    place: int
    broken: tuple[str, ...] = ()


@dataclass
class BoardState:
    """What changes while the hand works: chosen turn, the other one of a swap, the ghost, the focus."""

    chosen: str = ""
    swap: str = ""
    ghost: Ghost | None = None
    has_focus: bool = False


@dataclass
class Scene:
    """Everything a picture is made of."""

    data: BoardData
    layout: BoardLayout
    state: BoardState
    curves: Curves | None = None
    words: Mapping[str, str] = field(default_factory=dict)


class BoardPainter:
    """Paints a scene; keeps pictures of blocks and shaded hours between calls."""

    def __init__(self) -> None:
        self._pictures = BlockPictures()
        self._shut: dict[tuple[str, str, int, int], Parts] = {}
        self._shut_of: object = None
        self._bouts: dict[tuple[str, str, int], list[ShownBout]] = {}
        self._bouts_of: object = None
        self._ratio = 1.0

    def paint(self, painter: QPainter, area: QRectF, scene: Scene) -> None:
        """Paint what touches an area of the viewport."""
        self._ratio = painter.device().devicePixelRatioF()
        scheme, layout = colours(), scene.layout
        painter.fillRect(area, scheme.color("field"))
        body = layout.body
        if layout.rows and layout.days:
            middle = area.intersected(body.adjusted(-layout.sizes.names_px, 0, layout.sizes.side_px, 0))
            if not middle.isEmpty():
                self._paint_rows(painter, middle, scene, scheme)
            if area.bottom() > body.bottom():
                painter.save()
                painter.setClipRect(layout.foot.adjusted(-layout.sizes.names_px, 0, layout.sizes.side_px, 0))
                draw_curves(painter, scene.curves, layout, scene.words)
                painter.restore()
            if area.top() < body.top():
                self._paint_head(painter, scene, scheme)

    def _paint_rows(self, painter: QPainter, area: QRectF, scene: Scene, scheme: Colours) -> None:
        layout, body = scene.layout, scene.layout.body
        places = layout.rows_between(area.top(), area.bottom())
        painter.save()
        painter.setClipRect(area.intersected(body))
        self._shade(painter, places, scene, scheme)
        for place in places:
            self._blocks(painter, place, area, scene, scheme)
        self._now_line(painter, scene, scheme)
        self._ghost(painter, scene, scheme)
        painter.restore()
        painter.save()
        painter.setClipRect(area)
        if area.left() < body.left():
            self._names(painter, places, scene, scheme)
        if area.right() > body.right():
            self._sides(painter, places, scene, scheme)
        painter.restore()

    def _shade(self, painter: QPainter, places: range, scene: Scene, scheme: Colours) -> None:
        layout = scene.layout
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(_shut_colour(scheme))
        shut = []
        for place in places:
            top = layout.row_top(place)
            for day in layout.days:
                for start, end in self._shut_parts(scene.data, layout.rows[place], day):
                    left, right = layout.x_of(day, start), layout.x_of(day, end)
                    if right > left:
                        shut.append(QRectF(left, top, right - left, layout.sizes.row_px))
        painter.drawRects(shut)
        top, bottom = layout.row_top(places.start), layout.row_top(places.stop)
        painter.setPen(QPen(scheme.color("rule"), 0))
        lines = [QLineF(0, layout.row_top(n), layout.view.width(), layout.row_top(n)) for n in places]
        lines += [QLineF(x, top, x, bottom) for x, _text in hour_lines(layout)]
        painter.drawLines(lines)
        painter.setPen(QPen(scheme.color("edge"), 1))
        painter.drawLines(
            [QLineF(layout.day_left(d) - 5, top, layout.day_left(d) - 5, bottom) for d in layout.days[1:]]
        )

    def _shut_parts(self, data: BoardData, row: Row, day: int) -> Parts:
        if self._shut_of is not data.plan:
            self._shut, self._shut_of = {}, data.plan
        key = (row.kind, row.key, row.unit, day)
        if key not in self._shut:
            self._shut[key] = shut_parts(data, row, day)
        return self._shut[key]

    def _row_bouts(self, data: BoardData, row: Row) -> list[ShownBout]:
        if self._bouts_of is not data.bouts:
            self._bouts, self._bouts_of = {}, data.bouts
            for bout in data.bouts:
                self._bouts.setdefault(("person", bout.person, 0), []).append(bout)
                self._bouts.setdefault(("unit", bout.station, bout.unit), []).append(bout)
        return self._bouts.get((row.kind, row.key, row.unit), [])

    def _blocks(self, painter: QPainter, place: int, area: QRectF, scene: Scene, scheme: Colours) -> None:
        data, layout = scene.data, scene.layout
        row = layout.rows[place]
        if row.kind == "heading":
            return
        if row.kind == "device":
            for charge in data.charges:
                inside = charge.end_min > layout.low_min and charge.start_min < layout.high_min
                if charge.device == row.key and charge.day in layout.days and inside:
                    self._charge(painter, place, charge, scene, scheme)
            return
        days = set(layout.days)
        if row.kind == "person":
            for bout in data.by_watcher.get(row.key, ()):
                if bout.day in days:
                    self._watch(painter, place, bout, scene, scheme)
        bouts = [bout for bout in self._row_bouts(data, row) if bout.day in days]
        watched = data.by_watcher.get(row.key, ()) if row.kind == "person" else ()
        starts = sorted(layout.x_of(b.day, b.start_min) for b in (*bouts, *(w for w in watched if w.day in days)))
        for bout in bouts:
            box = layout.block_rect(place, bout.day, bout.start_min, bout.end_min)
            if box.right() < area.left() - 60 or box.left() > area.right() + 4:
                continue
            room = next((x for x in starts if x >= box.right() - 1), box.right() + 400)
            self._block(painter, box, bout, room, scene)

    def _block(self, painter: QPainter, box: QRectF, bout: ShownBout, room: float, scene: Scene) -> None:
        data, scheme, state = scene.data, colours(), scene.state
        look = data.looks.get(bout.station)
        is_person = scene.layout.rows and scene.layout.rows[0].kind == "person"
        text = (look.code if look else "?") if is_person else data.person_names.get(bout.person, bout.person)
        inside = text if fits(text, box.width()) else ""
        fill, hatch = (look.fill, look.hatch) if look else (0, 0)
        key = BlockKey(fill, hatch, inside, int(box.width()), int(box.height()), bout.locked)
        lifted = state.ghost is not None and state.ghost.bout.id == bout.id
        if lifted:
            painter.setOpacity(0.35)
        painter.drawPixmap(box.topLeft(), self._pictures.of(key, self._ratio))
        if lifted:
            painter.setOpacity(1.0)
        if not inside:
            _beside(painter, box, text, room, scheme.color("muted"))
        broken = data.breaks.get(bout.id)
        if broken:
            self._broken(painter, box, scheme)
        if bout.id in (state.chosen, state.swap):
            self._ring(painter, box, scheme, dashed=bout.id == state.swap)

    @staticmethod
    def _ring(painter: QPainter, box: QRectF, scheme: Colours, *, dashed: bool) -> None:
        style = Qt.PenStyle.DashLine if dashed else Qt.PenStyle.SolidLine
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(scheme.color("field"), 4.0))
        painter.drawRect(box.adjusted(-1, -1, 1, 1))
        painter.setPen(QPen(scheme.color("accent"), 2.0, style))
        painter.drawRect(box.adjusted(-1.5, -1.5, 1.5, 1.5))

    @staticmethod
    def _broken(painter: QPainter, box: QRectF, scheme: Colours) -> None:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(scheme.color("warning"), 2.0))
        painter.drawRect(box.adjusted(0, 0, -1, -1))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        draw_sign(painter, QPointF(box.left() + 2, box.top() + 4), 11)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)

    @staticmethod
    def _watch(painter: QPainter, place: int, bout: ShownBout, scene: Scene, scheme: Colours) -> None:
        box = scene.layout.block_rect(place, bout.day, bout.start_min, bout.end_min).adjusted(0.5, 2.5, -1.5, -3.5)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        pen = QPen(scheme.color("ink"), 1.0)
        pen.setDashPattern([2.5, 2.0])
        painter.setPen(pen)
        painter.drawRoundedRect(box, 3, 3)
        if bout.id == scene.state.chosen:
            painter.setPen(QPen(scheme.color("accent"), 2.0, Qt.PenStyle.DashLine))
            painter.drawRoundedRect(box.adjusted(-2, -2, 2, 2), 3, 3)

    @staticmethod
    def _charge(painter: QPainter, place: int, charge: ShownCharge, scene: Scene, scheme: Colours) -> None:
        box = scene.layout.block_rect(place, charge.day, charge.start_min, charge.end_min).adjusted(
            0.5, 1.5, -0.5, -1.5
        )
        painter.setBrush(scheme.color("panel"))
        painter.setPen(QPen(scheme.color("edge"), 1.0))
        painter.drawRoundedRect(box, 3, 3)
        font = type_font("small")
        painter.setFont(font)
        painter.setPen(scheme.color("ink"))
        metrics = QFontMetricsF(font)
        for text in (f"{charge.count} · {charge.energy_wh:.0f} Wh", f"{charge.energy_wh:.0f} Wh", str(charge.count)):
            if metrics.horizontalAdvance(text) + 6 <= box.width():
                painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextSingleLine), text)
                break
        if scene.data.charge_breaks.get((charge.day, charge.start_min)):
            BoardPainter._broken(painter, box, scheme)

    @staticmethod
    def _now_line(painter: QPainter, scene: Scene, scheme: Colours) -> None:
        now = scene.data.now
        if now is None or now[0] not in scene.layout.days:
            return
        x = scene.layout.x_of(*now)
        body = scene.layout.body
        painter.setPen(QPen(scheme.color("accent"), 2.0))
        painter.drawLine(QPointF(x, body.top()), QPointF(x, body.bottom()))

    @staticmethod
    def _ghost(painter: QPainter, scene: Scene, scheme: Colours) -> None:
        ghost = scene.state.ghost
        if ghost is None:
            return
        bout = ghost.bout
        box = scene.layout.block_rect(ghost.place, bout.day, bout.start_min, bout.end_min)
        fill = QColor(scheme.color("accent"))
        fill.setAlpha(70)
        painter.setBrush(fill)
        painter.setPen(QPen(scheme.color("warning" if ghost.broken else "accent"), 2.0))
        painter.drawRoundedRect(box.adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
        if ghost.broken:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            draw_sign(painter, QPointF(box.left() + 2, box.top() + 4), 12)
            painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        painter.setFont(type_font("small"))
        painter.setPen(scheme.color("ink"))
        text = f"{clock(bout.start_min)}–{clock(bout.end_min)}"
        wide = QFontMetricsF(type_font("small")).horizontalAdvance(text)
        body = scene.layout.body
        left = box.right() + 4 if box.right() + 8 + wide < body.right() else box.left() - wide - 6
        label = QRectF(left, box.top(), wide + 4, box.height())
        painter.fillRect(label, scheme.color("field"))
        painter.drawText(label.adjusted(2, 0, 0, 0), _FLAGS, text)

    @staticmethod
    def _names(painter: QPainter, places: range, scene: Scene, scheme: Colours) -> None:
        layout = scene.layout
        wide = layout.sizes.names_px
        painter.fillRect(QRectF(0, layout.body.top(), wide, layout.body.height()), scheme.color("field"))
        plain, bold = type_font("text"), type_font("text", bold=True)
        small = QFontMetricsF(type_font("small"))
        for place in places:
            row, top = layout.rows[place], layout.row_top(place)
            font = bold if row.kind == "heading" else plain
            painter.setFont(font)
            painter.setPen(scheme.color("ink"))
            note = small.elidedText(row.note, Qt.TextElideMode.ElideRight, wide * 0.45) if row.note else ""
            room = wide - 12 - (small.horizontalAdvance(note) + 6 if note else 0)
            text = QFontMetricsF(font).elidedText(row.name, Qt.TextElideMode.ElideRight, room)
            painter.drawText(QRectF(6, top, wide - 8, layout.sizes.row_px), _FLAGS, text)
            if note:
                painter.setFont(type_font("small"))
                painter.setPen(scheme.color("muted"))
                right = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignRight)
                painter.drawText(QRectF(6, top, wide - 14, layout.sizes.row_px), right, note)
        painter.setPen(QPen(scheme.color("rule"), 0))
        painter.drawLines([QLineF(0, layout.row_top(n), wide, layout.row_top(n)) for n in places])

    @staticmethod
    def _sides(painter: QPainter, places: range, scene: Scene, scheme: Colours) -> None:
        layout = scene.layout
        left, wide = layout.body.right(), layout.sizes.side_px
        painter.fillRect(QRectF(left, layout.body.top(), wide, layout.body.height()), scheme.color("field"))
        painter.setFont(type_font("small"))
        metrics = QFontMetricsF(type_font("small"))
        bar = max(24.0, wide - metrics.horizontalAdvance("000 of 000 ") - 12)
        for place in places:
            row, top = layout.rows[place], layout.row_top(place)
            if row.kind == "heading":
                continue
            broken = any(scene.data.row_breaks.get((row.key, day)) for day in layout.days) and row.kind != "device"
            over = row.used_min > row.cap_min
            painter.setPen(scheme.color("warning" if over or broken else "ink"))
            painter.drawText(QRectF(left + 8, top, wide - 8, layout.sizes.row_px), _FLAGS, row.text)
            if row.cap_min > 0 and row.kind != "device":
                box = QRectF(left + wide - bar - 6, top + layout.sizes.row_px / 2 - 3, bar, 6)
                painter.fillRect(box, scheme.color("rule"))
                share = min(1.0, row.used_min / row.cap_min)
                painter.fillRect(
                    QRectF(box.left(), box.top(), box.width() * share, 6), scheme.color("warning" if over else "muted")
                )
            if broken or over:
                painter.setRenderHint(QPainter.RenderHint.Antialiasing)
                draw_sign(painter, QPointF(left + wide - 9, top + layout.sizes.row_px / 2), 12)
                painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        painter.setPen(QPen(scheme.color("rule"), 0))
        painter.drawLines([QLineF(left, layout.row_top(n), left + wide, layout.row_top(n)) for n in places])

    @staticmethod
    def _paint_head(painter: QPainter, scene: Scene, scheme: Colours) -> None:
        layout = scene.layout
        body = layout.body
        painter.save()
        painter.fillRect(QRectF(0, 0, layout.view.width(), layout.sizes.head_px), scheme.color("field"))
        painter.setFont(type_font("small"))
        metrics = QFontMetricsF(type_font("small"))
        line = metrics.height()
        painter.setPen(scheme.color("muted"))
        painter.drawText(
            QRectF(6, layout.sizes.head_px - line - 4, layout.sizes.names_px, line), _FLAGS, scene.words["rows"]
        )
        painter.drawText(
            QRectF(body.right() + 8, layout.sizes.head_px - line - 4, layout.sizes.side_px, line),
            _FLAGS,
            scene.words["minutes"],
        )
        painter.setClipRect(QRectF(body.left(), 0, body.width(), layout.sizes.head_px))
        for day in layout.days:
            left = layout.day_left(day)
            _day_head(painter, scene, (day, left, line), metrics, scheme)
        painter.setPen(scheme.color("muted"))
        for x, text in hour_lines(layout):
            if text:
                painter.drawText(
                    QRectF(x + 2, layout.sizes.head_px - line - 4, metrics.horizontalAdvance(text) + 4, line),
                    _FLAGS,
                    text,
                )
        painter.restore()
        painter.setPen(QPen(scheme.color("edge"), 1))
        painter.drawLine(QPointF(0, body.top() - 0.5), QPointF(layout.view.width(), body.top() - 0.5))


def _day_head(
    painter: QPainter, scene: Scene, where: tuple[int, float, float], metrics: QFontMetricsF, scheme: Colours
) -> None:
    """Write a day's name and the names of its blocks above the hours."""
    day, left, line = where
    layout = scene.layout
    painter.setPen(scheme.color("ink"))
    title = scene.words.get(f"day {day}", str(day)) if len(layout.days) > 1 else ""
    taken = left
    if title:
        shown = max(left, layout.body.left())
        painter.drawText(QRectF(shown + 2, 2, layout.day_px, line), _FLAGS, title)
        taken = shown + metrics.horizontalAdvance(title) + 10
    painter.setPen(scheme.color("muted"))
    for name, (start, end) in named_blocks(scene.data.plan, day):
        start_x, end_x = layout.x_of(day, start), layout.x_of(day, end)
        wide = metrics.horizontalAdvance(name)
        if end_x > start_x and wide + 4 <= end_x - start_x and start_x >= taken:
            painter.drawText(QRectF(start_x + 2, 2, wide + 2, line), _FLAGS, name)


def _shut_colour(scheme: Colours) -> QColor:
    colour = QColor(scheme.color("edge"))
    colour.setAlpha(46)
    return colour


def _beside(painter: QPainter, box: QRectF, text: str, room: float, colour: QColor) -> None:
    """Write letters that have no room inside a block to its right, where nothing stands."""
    font = type_font("small")
    wide = QFontMetricsF(font).horizontalAdvance(text)
    if box.right() + 2 + wide <= room:
        painter.setFont(font)
        painter.setPen(colour)
        painter.drawText(QRectF(box.right() + 2, box.top(), wide + 2, box.height()), _FLAGS, text)


def hour_lines(layout: BoardLayout) -> list[tuple[float, str]]:
    """Return x and text of the hours; as many texts as have room."""
    wide = QFontMetricsF(type_font("small")).horizontalAdvance("00:00") + 10
    step = next((each for each in (60, 120, 180, 240, 360, 720) if each * layout.px_per_min >= wide), 1440)
    lines = []
    for day in layout.days:
        first = -(-layout.low_min // 60) * 60
        for minute in range(first, layout.high_min + 1, 60 if layout.px_per_min * 60 >= 8 else step):
            shown = (minute - first) % step == 0 and minute < layout.high_min
            lines.append((layout.x_of(day, minute), clock(minute) if shown else ""))
    return lines
