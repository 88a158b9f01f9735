"""What fills, hatches and letters mean: one sample for each station, then watching, locked, broken."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPaintEvent, QPen, QResizeEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from kitplanner.report.wording import plain
from kitplanner.ui.board.block_pictures import BlockKey, draw_block, draw_sign, draw_watch
from kitplanner.ui.board.board_data import BoardData
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import colours, type_font

_GAP_PX = 14.0
_FLAGS = int(Qt.TextFlag.TextSingleLine | Qt.AlignmentFlag.AlignVCenter)


class BoardLegend(QWidget):
    """The legend; breaks into lines where the width is small."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._data = BoardData()
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setAccessibleName(self.tr("Legend of the board"))

    def show_data(self, data: BoardData) -> None:
        """Explain other stations."""
        self._data = data
        lines = [f"{data.looks[one.id].code}: {plain(one.name) or one.id}" for one in data.plan.stations]
        self.setAccessibleDescription("; ".join(lines))
        self.updateGeometry()
        self.update()

    def _items(self) -> list[tuple[str, str]]:
        """Return the kind of each sample and its words."""
        items = [(one.id, plain(one.name) or one.id) for one in self._data.plan.stations]
        items.append(("watch", self.tr("watches")))
        items.append(("lock", self.tr("locked")))
        items.append(("break", self.tr("broken rule")))
        items.append(("shut", self.tr("not to be used")))
        return items

    def _placed(self, width: float) -> list[tuple[str, str, QRectF]]:
        metrics = QFontMetricsF(type_font("small"))
        sample, line = self._sample_px(), metrics.height() + 8
        placed, x, y = [], 0.0, 0.0
        for kind, words in self._items():
            wide = sample + 6 + metrics.horizontalAdvance(words)
            if x > 0.0 and x + wide > width:
                x, y = 0.0, y + line
            placed.append((kind, words, QRectF(x, y, wide, line)))
            x += wide + _GAP_PX
        return placed

    @staticmethod
    def _sample_px() -> float:
        return QFontMetricsF(type_font("small", bold=True)).horizontalAdvance("WW") + 8

    @guarded(QSize(100, 20))
    def sizeHint(self) -> QSize:
        """Return the height of the lines at the present width."""
        placed = self._placed(float(self.width() or 400))
        return QSize(200, round(placed[-1][2].bottom()) if placed else 0)

    @guarded(QSize(100, 20))
    def minimumSizeHint(self) -> QSize:
        """Return the same height."""
        return QSize(100, self.sizeHint().height())

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Break the lines anew."""
        super().resizeEvent(event)
        self.updateGeometry()

    @guarded()
    def paintEvent(self, _event: QPaintEvent) -> None:
        """Paint samples and words."""
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            for kind, words, area in self._placed(float(self.width())):
                box = QRectF(area.left(), area.top() + 2, self._sample_px(), area.height() - 4)
                self._sample(painter, kind, box)
                painter.setFont(type_font("small"))
                painter.setPen(colours().color("ink"))
                painter.drawText(area.adjusted(box.width() + 6, 0, 2, 0), _FLAGS, words)
        finally:
            painter.end()

    def _sample(self, painter: QPainter, kind: str, box: QRectF) -> None:
        scheme = colours()
        look = self._data.looks.get(kind)
        if look is not None:
            draw_block(painter, box, BlockKey(look.fill, look.hatch, look.code, int(box.width()), int(box.height())))
        elif kind == "break":
            draw_sign(painter, QPointF(box.center().x(), box.center().y()), 13)
        elif kind == "shut":
            colour = scheme.color("edge")
            colour.setAlpha(60)
            painter.fillRect(box, colour)
        else:
            inner = box.adjusted(4, 1, -4, -1)
            if kind == "watch":
                draw_watch(painter, inner)
            else:
                body = QRectF(inner.center().x() - 4, inner.center().y() - 1, 8, 6)
                painter.setPen(QPen(scheme.color("ink"), 1.2))
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.drawArc(body.adjusted(1.5, -4, -1.5, -1), 0, 180 * 16)
                painter.fillRect(body, scheme.color("ink"))
