"""Store level and needs under the rows, on the board's own time axis."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPen, QPolygonF

from kitplanner.ui.board.board_data import Curves
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.charts.chart_data import nice_step
from kitplanner.ui.theme import colours, type_font

_FLAGS = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter)
_STEPS = 2


def draw_curves(painter: QPainter, curves: Curves | None, layout: BoardLayout, words: Mapping[str, str]) -> None:
    """Draw level as an area, what there is to give as a line, what must be given by then dashed."""
    scheme, foot = colours(), layout.foot
    font = type_font("small")
    metrics = QFontMetricsF(font)
    line = metrics.height()
    painter.fillRect(QRectF(0, foot.top(), layout.view.width(), foot.height()), scheme.color("field"))
    painter.setPen(QPen(scheme.color("edge"), 1))
    painter.drawLine(QPointF(0, foot.top() + 0.5), QPointF(layout.view.width(), foot.top() + 0.5))
    painter.setFont(font)
    if curves is None or foot.height() < 2 * line:
        painter.setPen(scheme.color("muted"))
        painter.drawText(
            QRectF(foot.left() + 4, foot.top() + 4, foot.width(), line), _FLAGS, words.get("no curves", "")
        )
        return
    plot = QRectF(foot.left(), foot.top() + line + 6, foot.width(), foot.height() - 1.5 * line - 10)
    top = max(max(curves.have_wh, default=0.0), max(curves.due_wh, default=0.0), max(curves.level_wh, default=0.0), 1.0)
    step = nice_step(top, _STEPS)
    painter.setPen(QPen(scheme.color("rule"), 0))
    marks = [n * step for n in range(int(top / step) + 1)]
    rules = [_y(plot, value, top) for value in marks]
    painter.drawLines([QLineF(plot.left(), y, plot.right(), y) for y in rules])
    painter.setPen(scheme.color("muted"))
    for value, y in zip(marks, rules, strict=True):
        text = f"{value:g} Wh"
        box = QRectF(0, y - line / 2, plot.left() - 6, line)
        painter.drawText(box, _FLAGS | int(Qt.AlignmentFlag.AlignRight), text)
    painter.save()
    painter.setClipRect(plot.adjusted(0, -2, 0, 2))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    for place, day in enumerate(layout.days):
        _draw_day(painter, curves, layout, (place, day), (plot, top))
    painter.restore()
    _legend(painter, QRectF(foot.left(), foot.top() + 3, foot.width(), line), metrics, words)


def _draw_day(
    painter: QPainter, curves: Curves, layout: BoardLayout, which: tuple[int, int], where: tuple[QRectF, float]
) -> None:
    (place, day), (plot, top) = which, where
    scheme = colours()
    per_day = 1440 // curves.slot_min
    first = place * per_day + layout.low_min // curves.slot_min
    last = place * per_day + layout.high_min // curves.slot_min

    def points(values: Sequence[float]) -> QPolygonF:
        return QPolygonF(
            [
                QPointF(layout.x_of(day, (slot - place * per_day) * curves.slot_min), _y(plot, values[slot], top))
                for slot in range(first, min(last + 1, len(values)))
            ]
        )

    level = points(curves.level_wh)
    area = QPolygonF(level)
    area.append(QPointF(level.last().x(), plot.bottom()))
    area.append(QPointF(level.first().x(), plot.bottom()))
    fill = QColor(scheme.color("flow"))
    fill.setAlpha(90)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(fill)
    painter.drawPolygon(area)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(scheme.color("line"), 2.0))
    painter.drawPolyline(points(curves.have_wh))
    painter.setPen(QPen(scheme.color("ink"), 1.4, Qt.PenStyle.DashLine))
    painter.drawPolyline(points(curves.due_wh))


def _y(plot: QRectF, value: float, top: float) -> float:
    return plot.bottom() - plot.height() * max(0.0, value) / top


def _legend(painter: QPainter, area: QRectF, metrics: QFontMetricsF, words: Mapping[str, str]) -> None:
    """Write what area, line and dashes mean, each with its sample."""
    scheme = colours()
    left = area.left() + 4
    for key in ("level", "have", "due"):
        text = words.get(key, "")
        sample = QRectF(left, area.center().y() - 4, 18, 8)
        if key == "level":
            fill = QColor(scheme.color("flow"))
            fill.setAlpha(90)
            painter.fillRect(sample, fill)
        else:
            style = Qt.PenStyle.SolidLine if key == "have" else Qt.PenStyle.DashLine
            painter.setPen(QPen(scheme.color("line" if key == "have" else "ink"), 2.0, style))
            painter.drawLine(QPointF(left, area.center().y()), QPointF(left + 18, area.center().y()))
        painter.setPen(scheme.color("ink"))
        wide = metrics.horizontalAdvance(text)
        painter.drawText(QRectF(left + 22, area.top(), wide + 2, area.height()), _FLAGS, text)
        left += 22 + wide + 14
