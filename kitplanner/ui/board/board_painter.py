"""Paints the board into any painter: only rows that touch the area to be painted."""

from __future__ import annotations

from dataclasses import dataclass, field

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPen

from kitplanner.domain.units import clock
from kitplanner.ui.board.block_pictures import FLAGS, WATCH_DASHES, draw_sign
from kitplanner.ui.board.board_curves import draw_curves
from kitplanner.ui.board.board_data import BoardData, Curves, ShownBout
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.board.board_margins import BoardMargins, draw_head, grid_lines
from kitplanner.ui.board.board_rows import BoardRows, RowContent
from kitplanner.ui.theme import Colours, colours, type_font

_LIFTED_OPACITY = 0.35


@dataclass(frozen=True)
class Ghost:
    """A turn as it would be if the hand let go now; `broken` names rules it would break."""

    bout: ShownBout
    place: int
    broken: tuple[str, ...] = ()


@dataclass
class BoardState:
    """What changes while the hand works: chosen turn, the other one of a swap, the ghost."""

    chosen: str = ""
    swap: str = ""
    ghost: Ghost | None = None


@dataclass
class Scene:
    """Everything a picture is made of."""

    data: BoardData
    layout: BoardLayout
    state: BoardState
    curves: Curves | None = None
    words: dict[str, str] = field(default_factory=dict)


class BoardPainter:
    """Paints a scene; keeps pictures of rows between calls."""

    def __init__(self) -> None:
        self._rows = BoardRows()
        self._margins = BoardMargins()

    def paint(self, painter: QPainter, area: QRectF, scene: Scene) -> None:
        """Paint what touches an area of the viewport."""
        ratio = painter.device().devicePixelRatioF()
        layout = scene.layout
        painter.fillRect(area, colours().color("field"))
        if not layout.rows or not layout.days:
            return
        self._rows.prepare(scene.data, layout, ratio)
        self._margins.prepare(ratio)
        body = layout.body
        middle = area.intersected(QRectF(0, body.top(), layout.view.width(), body.height()))
        if not middle.isEmpty():
            self._paint_rows(painter, middle, scene, ratio)
        if area.bottom() > body.bottom():
            painter.save()
            painter.setClipRect(QRectF(0, body.bottom(), layout.view.width(), layout.sizes.foot_px))
            draw_curves(painter, scene.curves, layout, scene.words)
            painter.restore()
        if area.top() < body.top():
            draw_head(painter, scene.data, layout, scene.words)

    def _paint_rows(self, painter: QPainter, area: QRectF, scene: Scene, ratio: float) -> None:
        layout, body, scheme = scene.layout, scene.layout.body, colours()
        places = layout.rows_between(area.top(), area.bottom())
        painter.save()
        painter.setClipRect(area.intersected(body))
        self._body(painter, places, area, scene)
        painter.restore()
        painter.save()
        painter.setClipRect(area)
        if area.left() < body.left():
            self._margins.draw_names(painter, places, layout, ratio)
        if area.right() > body.right():
            self._margins.draw_sides(painter, places, (scene.data, layout), ratio)
        painter.setPen(QPen(scheme.color("rule"), 0))
        edges = [QRectF(0, layout.row_top(n), layout.view.width(), 0) for n in (*places, places.stop)]
        for edge in edges:
            painter.drawLine(edge.topLeft(), QPointF(body.left(), edge.top()))
            painter.drawLine(QPointF(body.right(), edge.top()), edge.topRight())
        painter.restore()

    def _body(self, painter: QPainter, places: range, area: QRectF, scene: Scene) -> None:
        layout, scheme = scene.layout, colours()
        contents = [self._rows.row(place, scene.data, layout) for place in places]
        across, down = layout.across_px, layout.down_px
        painter.translate(-across, -down)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(_shut_colour(scheme))
        painter.drawRects([box for content in contents for box in content.shut])
        painter.translate(across, down)
        thin, strong = grid_lines(layout, places)
        painter.setPen(QPen(scheme.color("rule"), 0))
        painter.drawLines(thin)
        painter.setPen(QPen(scheme.color("edge"), 1))
        painter.drawLines(strong)
        painter.translate(-across, -down)
        self._items(painter, contents, area.translated(across, down), scene.state)
        for content in contents:
            for box in content.broken:
                _broken(painter, box, scheme)
        painter.translate(across, down)
        _now_line(painter, scene, scheme)
        _ghost(painter, scene, scheme)

    @staticmethod
    def _items(painter: QPainter, contents: list[RowContent], area: QRectF, state: BoardState) -> None:
        lifted = state.ghost.bout.id if state.ghost is not None else ""
        special = {state.chosen, state.swap, lifted} - {""}
        marked = []
        left, right, draw = area.left() - 60, area.right() + 4, painter.drawPixmap
        for content in contents:
            for item in content.items:
                if item.bout_id in special:
                    marked.append(item)
                elif item.box.right() >= left and item.box.left() <= right:
                    draw(item.at, item.picture)
        for item in marked:
            painter.setOpacity(_LIFTED_OPACITY if item.bout_id == lifted and not item.is_watch else 1.0)
            draw(item.at, item.picture)
            painter.setOpacity(1.0)
            if item.bout_id in (state.chosen, state.swap):
                _ring(painter, item.box, dashed=item.is_watch or item.bout_id == state.swap)


def _ring(painter: QPainter, box: QRectF, *, dashed: bool) -> None:
    scheme = colours()
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(scheme.color("field"), 4.0))
    painter.drawRect(box.adjusted(-1, -1, 1, 1))
    pen = QPen(scheme.color("accent"), 2.0)
    if dashed:
        pen.setDashPattern(WATCH_DASHES)
    painter.setPen(pen)
    painter.drawRect(box.adjusted(-1.5, -1.5, 1.5, 1.5))


def _broken(painter: QPainter, box: QRectF, scheme: Colours) -> None:
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(scheme.color("warning"), 2.0))
    painter.drawRect(box.adjusted(0, 0, -1, -1))
    draw_sign(painter, QPointF(box.left() + 2, box.top() + 4), 12)


def _now_line(painter: QPainter, scene: Scene, scheme: Colours) -> None:
    now = scene.data.now
    if now is None or now[0] not in scene.layout.days:
        return
    x, body = scene.layout.x_of(*now), scene.layout.body
    painter.setPen(QPen(scheme.color("accent"), 2.0))
    painter.drawLine(QPointF(x, body.top()), QPointF(x, body.bottom()))


def _ghost(painter: QPainter, scene: Scene, scheme: Colours) -> None:
    ghost = scene.state.ghost
    if ghost is None:
        return
    bout, body = ghost.bout, scene.layout.body
    box = scene.layout.block_rect(ghost.place, bout.day, bout.start_min, bout.end_min)
    fill = QColor(scheme.color("accent"))
    fill.setAlpha(70)
    painter.setBrush(fill)
    painter.setPen(QPen(scheme.color("warning" if ghost.broken else "accent"), 2.0))
    painter.drawRoundedRect(box.adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
    if ghost.broken:
        draw_sign(painter, QPointF(box.left() + 2, box.top() + 4), 12)
    font = type_font("small")
    text = f"{clock(bout.start_min)}–{clock(bout.end_min)}"
    wide = QFontMetricsF(font).horizontalAdvance(text)
    left = box.right() + 4 if box.right() + 8 + wide < body.right() else box.left() - wide - 6
    label = QRectF(left, box.top(), wide + 4, box.height())
    painter.fillRect(label, scheme.color("field"))
    painter.setFont(font)
    painter.setPen(scheme.color("ink"))
    painter.drawText(label.adjusted(2, 0, 0, 0), FLAGS, text)


def _shut_colour(scheme: Colours) -> QColor:
    colour = QColor(scheme.color("edge"))
    colour.setAlpha(46)
    return colour
