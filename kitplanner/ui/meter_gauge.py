"""A drawn panel meter: the band of volts to hold in front of the regulator, and where the needle stands now."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPainterPath, QPaintEvent, QPen
from PySide6.QtWidgets import QSizePolicy, QWidget

from kitplanner.ui.charts.chart_data import nice_step
from kitplanner.ui.guard import guarded
from kitplanner.ui.hatches import draw_hatch
from kitplanner.ui.theme import colours, type_font

_START_DEG, _SWEEP_DEG = 160.0, 140.0


class MeterGauge(QWidget):
    """The dial of a panel meter with its safe band."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._low: float | None = None
        self._high: float | None = None
        self._now: float | None = None
        self.setAccessibleName(self.tr("Panel meter in front of the regulator"))
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)

    def set_reading(self, low: float | None, high: float | None, now: float | None, words: str) -> None:
        """Show a band and a needle; `words` say the same."""
        self._low, self._high, self._now = low, high, now
        self.setAccessibleDescription(words)
        self.setToolTip("")
        self.setVisible(low is not None and high is not None)
        self.update()

    @property
    def full_scale_v(self) -> float:
        """The last figure on the dial."""
        most = max((value for value in (self._high, self._now, self._low) if value is not None), default=10.0)
        step = nice_step(most * 1.2, 4)
        return step * math.ceil(most * 1.15 / step)

    @guarded(QSize(240, 150))
    def sizeHint(self) -> QSize:
        """Return a size that follows the text."""
        line = QFontMetricsF(type_font("small")).height()
        return QSize(round(17 * line), round(10.5 * line))

    @guarded(QSize(180, 120))
    def minimumSizeHint(self) -> QSize:
        """Return the least size at which figures stay apart."""
        hint = self.sizeHint()
        return QSize(round(hint.width() * 0.8), hint.height())

    def _angle(self, volts: float) -> float:
        return math.radians(_START_DEG - _SWEEP_DEG * min(1.0, max(0.0, volts / self.full_scale_v)))

    @guarded()
    def paintEvent(self, _event: QPaintEvent) -> None:
        """Paint dial, band, figures and needle."""
        if self._low is None or self._high is None:
            return
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            scheme, line = colours(), QFontMetricsF(type_font("small")).height()
            face = QRectF(self.rect()).adjusted(1, 1, -1, -1)
            painter.setPen(QPen(scheme.color("edge"), 1))
            painter.setBrush(scheme.color("field"))
            painter.drawRoundedRect(face, 8, 8)
            radius = min(face.width() * 0.5 - 2.2 * line, face.height() - 4.2 * line)
            hub = QPointF(face.center().x(), face.top() + radius + 2.1 * line)
            self._band(painter, hub, radius, line)
            self._scale(painter, hub, radius, line)
            self._needle(painter, hub, radius)
            painter.setFont(type_font("small", bold=True))
            painter.setPen(scheme.color("ink"))
            text = f"{self._low:.2f} – {self._high:.2f} V"
            box = QRectF(face.left(), face.bottom() - 1.6 * line, face.width(), 1.4 * line)
            painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter), text)
        finally:
            painter.end()

    def _point(self, hub: QPointF, radius: float, angle: float) -> QPointF:
        return hub + QPointF(math.cos(angle), -math.sin(angle)) * radius

    def _band(self, painter: QPainter, hub: QPointF, radius: float, line: float) -> None:
        assert self._low is not None
        assert self._high is not None
        if self._high <= self._low:
            return
        start, end = math.degrees(self._angle(self._low)), math.degrees(self._angle(self._high))
        inner = radius - 0.8 * line
        path = QPainterPath()
        outer_box = QRectF(hub.x() - radius, hub.y() - radius, 2 * radius, 2 * radius)
        inner_box = QRectF(hub.x() - inner, hub.y() - inner, 2 * inner, 2 * inner)
        path.arcMoveTo(outer_box, start)
        path.arcTo(outer_box, start, end - start)
        path.arcTo(inner_box, end, start - end)
        path.closeSubpath()
        painter.setPen(QPen(colours().color("outline"), 1.2))
        painter.setBrush(colours().color("flow"))
        painter.drawPath(path)
        draw_hatch(painter, path, "rising", colours().color("outline"), 6.0)

    def _scale(self, painter: QPainter, hub: QPointF, radius: float, line: float) -> None:
        scheme, full = colours(), self.full_scale_v
        painter.setFont(type_font("small"))
        step = nice_step(full, 5)
        arc = QRectF(hub.x() - radius, hub.y() - radius, 2 * radius, 2 * radius)
        painter.setPen(QPen(scheme.color("outline"), 1.4))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawArc(arc, round(16 * (_START_DEG - _SWEEP_DEG)), round(16 * _SWEEP_DEG))
        for count in range(math.floor(full / step + 1e-9) * 5 + 1):
            value = count * step / 5
            angle, major = self._angle(value), count % 5 == 0
            long = 0.55 * line if major else 0.28 * line
            painter.setPen(QPen(scheme.color("outline"), 1.3 if major else 0.8))
            painter.drawLine(self._point(hub, radius, angle), self._point(hub, radius + long, angle))
            if major:
                at = self._point(hub, radius + 1.25 * line, angle)
                box = QRectF(at.x() - 2 * line, at.y() - line, 4 * line, 2 * line)
                painter.setPen(scheme.color("muted"))
                painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter), f"{value:g}")

    def _needle(self, painter: QPainter, hub: QPointF, radius: float) -> None:
        scheme = colours()
        if self._now is not None and math.isfinite(self._now):
            painter.setPen(QPen(scheme.color("ink"), 2.2, c=Qt.PenCapStyle.RoundCap))
            painter.drawLine(hub, self._point(hub, radius * 1.02, self._angle(self._now)))
        painter.setBrush(scheme.color("ink"))
        painter.setPen(Qt.PenStyle.NoPen)
        painter.drawEllipse(hub, 5, 5)
