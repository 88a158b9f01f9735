"""The picture of what matters most: one bar per input from its low to its high answer, the longest on top."""

from __future__ import annotations

from collections.abc import Sequence

from msgspec import Struct
from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QFocusEvent,
    QFontMetricsF,
    QHelpEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPainterPath,
    QPaintEvent,
    QPen,
)
from PySide6.QtWidgets import QSizePolicy, QToolTip, QWidget

from kitplanner.plan.edits import Path
from kitplanner.ui.guard import guarded
from kitplanner.ui.hatches import draw_hatch
from kitplanner.ui.theme import colours, type_font
from kitplanner.ui.widgets.plain import as_tool_tip

_LEAST_ROW_PX = 26.0
_NAME_SHARE = 0.42


class Bar(Struct, frozen=True):
    """One input: its name, the answers at its ends and where they lie from 0 to 1, its sentence, its field."""

    name: str
    low: str
    high: str
    low_at: float
    high_at: float
    sentence: str
    place: Path = ()
    is_choice: bool = False


class BarPicture(QWidget):
    """Bars, the answer as it is as a line through all of them.

    Signals
    -------
    bar_chosen(index: int)
        The user stands on another bar.
    place_requested(place: Path)
        The user wants to go to the field of a bar.
    """

    bar_chosen = Signal(int)
    place_requested = Signal(object)

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._bars: tuple[Bar, ...] = ()
        self._centre: float | None = None
        self._chosen = 0
        self.setAccessibleName(name)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        # Nothing to stand on until the first answer.
        self.hide()

    @property
    def bars(self) -> tuple[Bar, ...]:
        """The bars shown."""
        return self._bars

    @property
    def chosen(self) -> int:
        """The bar the keyboard stands on."""
        return self._chosen

    def set_bars(self, bars: Sequence[Bar], centre: float | None) -> None:
        """Show other bars; `centre` is where the answer lies as the plan is now."""
        self._bars, self._centre = tuple(bars), centre
        self._choose(min(self._chosen, max(0, len(bars) - 1)))
        self.setVisible(bool(bars))
        self.updateGeometry()
        self.update()

    def bar_rect(self, index: int) -> QRectF:
        """Return where a bar is painted."""
        bar, row = self._bars[index], self._row_rect(index)
        left, width = self._scale()
        low, high = sorted((bar.low_at, bar.high_at))
        return QRectF(left + low * width, row.top() + row.height() * 0.22, (high - low) * width, row.height() * 0.56)

    def _row_height(self) -> float:
        return max(_LEAST_ROW_PX, QFontMetricsF(type_font()).height() + 10.0)

    def _row_rect(self, index: int) -> QRectF:
        height = self._row_height()
        return QRectF(0.0, 2.0 + index * height, self.width(), height)

    def _value_px(self) -> float:
        metrics = QFontMetricsF(type_font("small"))
        texts = [text for bar in self._bars for text in (bar.low, bar.high)]
        return max((metrics.horizontalAdvance(text) for text in texts), default=0.0) + 8.0

    def _name_px(self) -> float:
        metrics = QFontMetricsF(type_font())
        widest = max((metrics.horizontalAdvance(bar.name) for bar in self._bars), default=0.0) + 14.0
        return min(widest, self.width() * _NAME_SHARE)

    def _scale(self) -> tuple[float, float]:
        """Return where the scale begins and how long it is; the figures stand at the ends of the bars."""
        left = self._name_px() + self._value_px()
        return left, max(10.0, self.width() - left - self._value_px() - 4.0)

    def _choose(self, index: int) -> None:
        if not self._bars:
            self.setAccessibleDescription("")
            return
        self._chosen = max(0, min(len(self._bars) - 1, index))
        self.setAccessibleDescription(self._bars[self._chosen].sentence)
        self.bar_chosen.emit(self._chosen)
        self.update()

    def _index_at(self, point: QPointF) -> int:
        index = int((point.y() - 2.0) // self._row_height())
        return index if 0 <= index < len(self._bars) else -1

    @guarded()
    def paintEvent(self, _event: QPaintEvent) -> None:
        """Paint all bars."""
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            for index in range(len(self._bars)):
                self._paint_bar(painter, index)
            self._paint_centre(painter)
        finally:
            painter.end()

    def _paint_bar(self, painter: QPainter, index: int) -> None:
        scheme, bar, row = colours(), self._bars[index], self._row_rect(index)
        if index % 2:
            painter.fillRect(row, scheme.color("stripe"))
        painter.setFont(type_font())
        painter.setPen(scheme.color("ink"))
        name = QFontMetricsF(type_font()).elidedText(bar.name, Qt.TextElideMode.ElideRight, self._name_px() - 10.0)
        painter.drawText(row.adjusted(6.0, 0.0, 0.0, 0.0), int(Qt.AlignmentFlag.AlignVCenter), name)
        box = self.bar_rect(index)
        path = QPainterPath()
        path.addRect(box)
        painter.fillPath(path, scheme.color("field" if bar.is_choice else "flow"))
        if bar.is_choice:
            draw_hatch(painter, path, "falling", scheme.color("edge"), 7.0)
        painter.setPen(QPen(scheme.color("outline"), 1.0))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPath(path)
        self._paint_values(painter, bar, box, row)
        if index == self._chosen and self.hasFocus():
            painter.setPen(QPen(scheme.color("accent"), 2.0))
            painter.drawRect(row.adjusted(1.0, 1.0, -1.0, -1.0))

    def _paint_values(self, painter: QPainter, bar: Bar, box: QRectF, row: QRectF) -> None:
        painter.setFont(type_font("small"))
        painter.setPen(colours().color("ink"))
        left, right = (bar.low, bar.high) if bar.low_at <= bar.high_at else (bar.high, bar.low)
        room = self._value_px()
        before = QRectF(box.left() - room, row.top(), room - 4.0, row.height())
        behind = QRectF(box.right() + 4.0, row.top(), room, row.height())
        painter.drawText(before, int(Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignRight), left)
        painter.drawText(behind, int(Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft), right)

    def _paint_centre(self, painter: QPainter) -> None:
        if self._centre is None or not self._bars:
            return
        left, width = self._scale()
        at = left + self._centre * width
        painter.setPen(QPen(colours().color("ink"), 1.4, Qt.PenStyle.DashLine))
        painter.drawLine(QPointF(at, 2.0), QPointF(at, self._row_rect(len(self._bars) - 1).bottom()))

    @guarded(QSize(400, 100))
    def sizeHint(self) -> QSize:
        """Return the height of all bars."""
        return QSize(400, round(len(self._bars) * self._row_height() + 4))

    @guarded(QSize(240, 60))
    def minimumSizeHint(self) -> QSize:
        """Return the same height; the page scrolls."""
        return QSize(240, self.sizeHint().height())

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Walk by arrows, go to the field with Return."""
        steps = {Qt.Key.Key_Up: -1, Qt.Key.Key_Down: 1}
        ends = {Qt.Key.Key_Home: 0, Qt.Key.Key_End: len(self._bars) - 1}
        if event.key() in steps:
            self._choose(self._chosen + steps[Qt.Key(event.key())])
        elif event.key() in ends:
            self._choose(ends[Qt.Key(event.key())])
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and self._bars:
            self._go(self._chosen)
        else:
            super().keyPressEvent(event)

    def _go(self, index: int) -> None:
        if self._bars[index].place:
            self.place_requested.emit(self._bars[index].place)

    @guarded()
    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Choose a bar."""
        index = self._index_at(event.position())
        if index >= 0:
            self._choose(index)

    @guarded()
    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Go to the field of a bar."""
        index = self._index_at(event.position())
        if index >= 0:
            self._go(index)

    @guarded()
    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show where the keyboard is."""
        super().focusInEvent(event)
        self.update()

    @guarded()
    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Take the frame away."""
        super().focusOutEvent(event)
        self.update()

    @guarded(False)
    def event(self, event: QEvent) -> bool:
        """Say a bar's sentence as a tip."""
        if isinstance(event, QHelpEvent) and event.type() == QEvent.Type.ToolTip:
            index = self._index_at(QPointF(event.pos()))
            if index >= 0:
                QToolTip.showText(event.globalPos(), as_tool_tip(self._bars[index].sentence), self)
                return True
        return super().event(event)
