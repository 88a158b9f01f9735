"""The board as a picture that scrolls: rows, days, width of a day; what hand and keys do is in `rota_board.py`."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import QEvent, QRect, QRectF, QSize, QSizeF, Qt, Signal
from PySide6.QtGui import QFontMetricsF, QPainter, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QAbstractScrollArea, QFrame, QWidget

from kitplanner.ui.board import board_access
from kitplanner.ui.board.board_data import BoardData, Mode, Row, ShownBout, rows_of
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.board.board_layout import BoardLayout, Sizes
from kitplanner.ui.board.board_painter import BoardPainter, BoardState, Scene
from kitplanner.ui.board.board_time import curves_of, hours_shown
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import text_scale, type_font

LEAST_TARGET_PX = 24.0
_ZOOMS = (1.0, 1.5, 2.0, 3.0, 4.0)


class BoardView(QAbstractScrollArea):
    """The painted board without hands.

    Signals
    -------
    zoom_changed(zoom: float)
        Another width of the day.
    """

    zoom_changed = Signal(float)
    ready = False

    def __init__(self, hand: BoardHand, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        board_access.install()
        self.hand = hand
        self.mode: Mode = "people"
        self.days: tuple[int, ...] = (1,)
        self.zoom = 1.0
        self._painter = BoardPainter()
        self._state = BoardState()
        self._scene = Scene(BoardData(), self._layout_of(BoardData(), ()), self._state)
        self.setAccessibleName(self.tr("Rota board"))
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        for bar in (self.horizontalScrollBar(), self.verticalScrollBar()):
            bar.setSingleStep(24)
            bar.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.ready = True

    def show_data(self, data: BoardData) -> None:
        """Show other data; place, choice and scrolling stay."""
        before, had_turns = self.hand.bout(), bool(self.hand.data.bouts)
        self.hand.set_data(data)
        self.days = tuple(day for day in self.days if day <= data.plan.days) or (1,)
        self._rebuild()
        if not had_turns and data.bouts:
            self._to_first_turn()
        after = self.hand.bout()
        if before is not None and after is not None and before != after:
            board_access.announce(self, data.sentence(after))

    def show_as(self, mode: Mode, days: tuple[int, ...]) -> None:
        """Show people or stations, on these days."""
        if (mode, days) != (self.mode, self.days):
            self.mode, self.days = mode, days
            self._rebuild()
            self._to_first_turn()
            self.reveal()

    def _to_first_turn(self) -> None:
        """Scroll down to the first row with a turn, unless one is in sight."""
        turns, layout = self.shown_turns(), self._scene.layout
        if turns:
            box = self.rect_of(turns[0])
            if box.bottom() > layout.body.bottom():
                self.verticalScrollBar().setValue(round(box.top() - layout.body.top() - 2 * layout.sizes.row_px))

    def hours(self) -> tuple[int, int]:
        """Return the first and last minute of a day that is shown."""
        return self._scene.layout.low_min, self._scene.layout.high_min

    def set_zoom(self, zoom: float) -> None:
        """Make the day wider; 1 fits the window."""
        middle = self._scene.layout.time_at(self._scene.layout.body.center().x())
        self.zoom = min(max(zoom, _ZOOMS[0]), _ZOOMS[-1])
        self._rebuild()
        layout = self._scene.layout
        at = layout.x_of(*middle) + layout.across_px - layout.body.center().x()
        self.horizontalScrollBar().setValue(round(at))
        self.zoom_changed.emit(self.zoom)

    def zoom_by(self, steps: int) -> None:
        """Make the day wider or narrower by steps."""
        nearest = min(range(len(_ZOOMS)), key=lambda place: abs(_ZOOMS[place] - self.zoom))
        self.set_zoom(_ZOOMS[min(max(0, nearest + steps), len(_ZOOMS) - 1)])

    def shown_turns(self) -> list[ShownBout]:
        """Return the turns of the shown days in the order of rows and time."""
        layout, days = self._scene.layout, set(self.days)
        placed = [(layout.place_of(bout), bout.day, bout.start_min, bout) for bout in self.hand.data.bouts]
        inside = [row for row in placed if row[0] >= 0 and row[1] in days]
        return [row[3] for row in sorted(inside, key=lambda row: row[:3])]

    def turn_rect(self, index: int) -> QRect:
        """Return where a turn is in the viewport."""
        turns = self.shown_turns()
        return self.rect_of(turns[index]).toAlignedRect() if index < len(turns) else QRect()

    def rect_of(self, bout: ShownBout) -> QRectF:
        """Return the block of a turn in the viewport; empty where its day is not shown."""
        layout = self._scene.layout
        place = layout.place_of(bout)
        if place < 0 or bout.day not in layout.days:
            return QRectF()
        return layout.block_rect(place, bout.day, bout.start_min, bout.end_min)

    def reveal(self) -> None:
        """Scroll to the chosen turn."""
        bout = self.hand.bout()
        box = self.rect_of(bout) if bout is not None else QRectF()
        if box.isEmpty():
            return
        body = self._scene.layout.body
        for bar, low, high, least, most in (
            (self.horizontalScrollBar(), box.left(), box.right(), body.left(), body.right()),
            (self.verticalScrollBar(), box.top(), box.bottom(), body.top(), body.bottom()),
        ):
            if low < least:
                bar.setValue(round(bar.value() + low - least - 8))
            elif high > most:
                bar.setValue(round(bar.value() + high - most + 8))

    def _sizes(self, height: float) -> Sizes:
        text, small = QFontMetricsF(type_font("text")), QFontMetricsF(type_font("small"))
        width = float(self.viewport().width())
        rows = self._scene.layout.rows if self.ready else ()
        people = [row for row in rows if row.kind in ("person", "unit")]
        names = max(
            (text.horizontalAdvance(r.name) + small.horizontalAdvance(r.note) + 22 for r in people), default=90.0
        )
        side = small.horizontalAdvance("000 of 000 ") + (56 if width >= 760 * text_scale() else 34)
        foot = min(7.0 * small.height(), 0.27 * height)
        return Sizes(
            row_px=float(max(LEAST_TARGET_PX, round(text.height() * 1.5))),
            names_px=round(min(max(names, 7.0 * text.height()), 0.26 * width)),
            side_px=round(side),
            head_px=round(small.height() * 2 + 8),
            foot_px=round(foot),
        )

    def _layout_of(self, data: BoardData, rows: tuple[Row, ...]) -> BoardLayout:
        view = QSizeF(self.viewport().size())
        low, high = hours_shown(data)
        sizes = self._sizes(view.height())
        body = max(60.0, view.width() - sizes.names_px - sizes.side_px)
        fit = body / (high - low)
        if len(self.days) > 1:
            fit = max(fit * 0.55, body / ((high - low) * len(self.days)))
        return BoardLayout(rows, self.days, low, high, sizes, view, fit * self.zoom)

    def _rebuild(self) -> None:
        data = self.hand.data
        words = self._words(data)
        rows = rows_of(data, self.mode, self.days, words)
        self._scene.layout = replace(self._scene.layout, rows=rows)
        layout = self._layout_of(data, rows)
        self._scene = Scene(data, layout, self._state, curves_of(data, self.days), words)
        across = max(0, round(layout.content_px - layout.body.width()))
        down = max(0, round(layout.rows_px - layout.body.height()))
        self.horizontalScrollBar().setPageStep(round(layout.body.width()))
        self.verticalScrollBar().setPageStep(round(layout.body.height()))
        self.horizontalScrollBar().setRange(0, across)
        self.verticalScrollBar().setRange(0, down)
        self._scroll()

    def _scroll(self) -> None:
        across, down = float(self.horizontalScrollBar().value()), float(self.verticalScrollBar().value())
        self._scene.layout = replace(self._scene.layout, across_px=across, down_px=down)
        self._state.chosen, self._state.swap = self.hand.chosen, self.hand.swap
        self.viewport().update()

    def _words(self, data: BoardData) -> dict[str, str]:
        words = {
            "of": self.tr("{used} of {cap}"),
            "zero": self.tr("0 min"),
            "turned": self.tr("{used} min"),
            "charge": self.tr("On charge"),
            "given": self.tr("{wh} Wh (O)"),
            "rows": self.tr("People") if self.mode == "people" else self.tr("Stations"),
            "minutes": self.tr("Minutes"),
            "level": self.tr("in the stores, O"),
            "have": self.tr("with what was given out"),
            "due": self.tr("needed by then"),
            "no curves": self.tr("Store level and needs are being worked out."),
        }
        if not data.bouts:
            words["no curves"] = ""
        if data.is_older:
            words["due"] += self.tr(" (before the last change)")
        return words | {f"day {day}": self.tr("Day {day}").format(day=day) for day in self.days}

    @guarded()
    def paintEvent(self, event: QPaintEvent) -> None:
        """Paint what is to be painted."""
        painter = QPainter(self.viewport())
        try:
            self._painter.paint(painter, QRectF(event.rect()), self._scene)
            if self.hasFocus():
                self._paint_focus(painter)
        finally:
            painter.end()

    def _paint_focus(self, painter: QPainter) -> None:
        painter.setPen(self.palette().color(self.palette().ColorRole.Highlight))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawRect(self.viewport().rect().adjusted(0, 0, -1, -1))

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Fit the day to the new width."""
        super().resizeEvent(event)
        if self.ready:
            self._rebuild()

    @guarded()
    def scrollContentsBy(self, _dx: int, _dy: int) -> None:
        """Paint another part; names and hours stand still, so nothing is shifted."""
        if self.ready:
            self._scroll()

    @guarded(QSize(420, 300))
    def minimumSizeHint(self) -> QSize:
        """Return a size in which eight rows and the curves stand."""
        line = QFontMetricsF(type_font("text")).height()
        return QSize(280, round(19 * line))

    @guarded(QSize(700, 480))
    def sizeHint(self) -> QSize:
        """Return a comfortable size."""
        line = QFontMetricsF(type_font("text")).height()
        return QSize(round(46 * line), round(30 * line))

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow text size and colours."""
        super().changeEvent(event)
        if self.ready and event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange):
            self._rebuild()
