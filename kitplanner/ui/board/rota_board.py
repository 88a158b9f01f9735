"""The board: people or stations down, time across; turns are chosen, moved, resized and handed over by hand or keys."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

from PySide6.QtCore import QEvent, QPoint, QPointF, QRect, QRectF, QSize, QSizeF, Qt, Signal, Slot
from PySide6.QtGui import (
    QContextMenuEvent,
    QFocusEvent,
    QFontMetricsF,
    QHelpEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QAbstractScrollArea, QFrame, QToolTip, QWidget

from kitplanner.ui.board import board_access
from kitplanner.ui.board.board_data import BoardData, Mode, ShownBout, curves_of, hours_shown, rows_of
from kitplanner.ui.board.board_hand import BoardHand, in_row
from kitplanner.ui.board.board_layout import BoardLayout, Sizes
from kitplanner.ui.board.board_menu import open_menu
from kitplanner.ui.board.board_painter import BoardPainter, BoardState, Ghost, Scene
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import text_scale, type_font
from kitplanner.ui.widgets.plain import as_tool_tip

Grip = Literal["move", "start", "end"]
_EDGE_PX = 5.0
_LEAST_TARGET_PX = 24.0
_DRAG_PX = 4
_ZOOMS = (1.0, 1.5, 2.0, 3.0, 4.0)


@dataclass
class _Drag:
    """A turn in the hand."""

    bout: ShownBout
    grip: Grip
    pressed: QPointF
    place: int
    target: ShownBout
    has_begun: bool = False


class RotaBoard(QAbstractScrollArea):
    """The painted board.

    Signals
    -------
    tentative_changed(edit: Edit | None)
        What the plan would become if the hand let go now; None once it has.
    zoom_changed(zoom: float)
        Another width of the day.
    """

    tentative_changed = Signal(object)
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
        self._drag: _Drag | None = None
        self.setAccessibleName(self.tr("Rota board"))
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.viewport().setMouseTracking(True)
        for bar in (self.horizontalScrollBar(), self.verticalScrollBar()):
            bar.setSingleStep(24)
            bar.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        hand.chosen_changed.connect(self._on_chosen)
        hand.swap_changed.connect(self._on_swap)
        self.ready = True

    def show_data(self, data: BoardData) -> None:
        """Show other data; place, choice and scrolling stay."""
        before = self.hand.bout()
        self.hand.set_data(data)
        self.days = tuple(day for day in self.days if day <= data.plan.days) or (1,)
        self._drag = None if self._drag is None or not self._drag.has_begun else self._drag
        self._rebuild()
        after = self.hand.bout()
        if before is not None and after is not None and before != after:
            board_access.announce(self, data.sentence(after))

    def show_as(self, mode: Mode, days: tuple[int, ...]) -> None:
        """Show people or stations, on these days."""
        if (mode, days) != (self.mode, self.days):
            self.mode, self.days = mode, days
            self._rebuild()
            self.reveal()

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

    def show_ghost_breaks(self, sentences: tuple[str, ...]) -> None:
        """Mark the turn in the hand with the rules it would break."""
        ghost = self._state.ghost
        if ghost is not None and ghost.broken != sentences:
            self._state.ghost = replace(ghost, broken=sentences)
            self.viewport().update(self._ghost_area(ghost))

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
        names = max((text.horizontalAdvance(row.name) + small.horizontalAdvance(row.note) + 22
                     for row in self._scene.layout.rows), default=90.0) if self.ready else 90.0  # fmt: skip
        side = small.horizontalAdvance("000 of 000 ") + (56 if width >= 760 * text_scale() else 34)
        foot = min(7.0 * small.height(), 0.27 * height)
        return Sizes(
            row_px=float(max(_LEAST_TARGET_PX, round(text.height() * 1.5))),
            names_px=round(min(max(names, 80.0), 0.26 * width)),
            side_px=round(side),
            head_px=round(small.height() * 2 + 8),
            foot_px=round(foot),
        )

    def _layout_of(self, data: BoardData, rows: tuple) -> BoardLayout:
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

    def bout_at(self, at: QPointF) -> tuple[ShownBout | None, Grip]:
        """Return the turn at a place and how a hand would take it; small blocks have a wider catch."""
        layout = self._scene.layout
        if not layout.rows or not layout.body.contains(at):
            return None, "move"
        row, best = layout.rows[layout.row_at(at.y())], None
        for bout in self.hand.data.bouts:
            if bout.day not in layout.days:
                continue
            mine = bout.person == row.key if row.kind == "person" else (bout.station, bout.unit) == (row.key, row.unit)
            if not mine and not (row.kind == "person" and bout.watcher == row.key):
                continue
            left, right = layout.x_of(bout.day, bout.start_min), layout.x_of(bout.day, bout.end_min)
            reach = max(0.0, (_LEAST_TARGET_PX - (right - left)) / 2)
            away = max(left - at.x(), at.x() - right, 0.0)
            if away <= reach and (best is None or away < best[0]):
                best = (away, bout, left, right, mine)
        if best is None:
            return None, "move"
        _away, bout, left, right, mine = best
        edge = min(_EDGE_PX, max(1.0, (right - left) / 4))
        grip: Grip = "start" if at.x() < left + edge else "end" if at.x() > right - edge else "move"
        return bout, grip if mine else "move"

    @Slot(str)
    def _on_chosen(self, _bout_id: str) -> None:
        self._scroll()
        bout = self.hand.bout()
        if bout is not None:
            self.reveal()
            board_access.announce(self, self.hand.data.sentence(bout))

    @Slot()
    def _on_swap(self) -> None:
        self._scroll()

    def _ghost_area(self, ghost: Ghost) -> QRect:
        layout = self._scene.layout
        box = layout.block_rect(ghost.place, ghost.bout.day, ghost.bout.start_min, ghost.bout.end_min)
        wide = QFontMetricsF(type_font("small")).horizontalAdvance("00:00–00:00") + 16
        return box.adjusted(-wide, -4, wide, 4).toAlignedRect()

    def _begin_drag(self, at: QPointF) -> None:
        bout, grip = self.bout_at(at)
        self._drag = None
        self.hand.choose(bout.id if bout is not None else "")
        if bout is not None:
            row = self._scene.layout.rows[self._scene.layout.row_at(at.y())]
            is_own = row.kind != "person" or row.key == bout.person
            if is_own:
                self._drag = _Drag(bout, grip, at, self._scene.layout.row_at(at.y()), bout)

    def drag_to(self, at: QPointF) -> None:
        """Carry the turn in the hand to a place; only what changes is painted."""
        drag = self._drag
        if drag is None:
            return
        if not drag.has_begun:
            if (at - drag.pressed).manhattanLength() < _DRAG_PX:
                return
            if not self.hand.may_change(drag.bout):
                self._drag = None
                return
            drag.has_begun = True
        target, place = self._target(drag, at)
        if target == drag.target and place == drag.place and self._state.ghost is not None:
            return
        before = self._state.ghost
        drag.target, drag.place = target, place
        self._state.ghost = Ghost(target, place)
        dirty = self._ghost_area(self._state.ghost)
        self.viewport().update(dirty | self._ghost_area(before) if before is not None else dirty)
        if before is None:
            self.viewport().update(self.rect_of(drag.bout).toAlignedRect().adjusted(-4, -4, 4, 4))
        self.tentative_changed.emit(self.hand.change(drag.bout, target)[0] if target != drag.bout else None)

    def _target(self, drag: _Drag, at: QPointF) -> tuple[ShownBout, int]:
        layout, bout, grid = self._scene.layout, drag.bout, self.hand.data.grid_min
        shift = (at.x() - drag.pressed.x()) / layout.px_per_min
        if drag.grip == "end":
            end = min(max(round((bout.end_min + shift) / grid) * grid, bout.start_min + grid), 1440)
            return replace(bout, end_min=end), drag.place
        if drag.grip == "start":
            start = max(min(round((bout.start_min + shift) / grid) * grid, bout.end_min - grid), 0)
            return replace(bout, start_min=start), drag.place
        day, minute = layout.time_at(layout.x_of(bout.day, bout.start_min) + at.x() - drag.pressed.x())
        start = min(max(round(minute / grid) * grid, 0), 1440 - bout.length_min)
        place = layout.row_at(at.y())
        if layout.rows[place].kind not in ("person", "unit"):
            place = drag.place
        moved = replace(bout, day=day, start_min=start, end_min=start + bout.length_min)
        return in_row(moved, layout.rows[place]), place

    def let_go(self, *, keep: bool) -> None:
        """End a drag: ask for the change, or leave all as it was."""
        drag, self._drag = self._drag, None
        self._state.ghost = None
        self.viewport().update()
        if drag is not None and drag.has_begun:
            self.tentative_changed.emit(None)
            if keep:
                self.hand.apply(drag.bout, drag.target)

    def _new_turn_at(self, at: QPointF) -> None:
        layout, data = self._scene.layout, self.hand.data
        row = layout.rows[layout.row_at(at.y())]
        if not layout.body.contains(at) or row.kind not in ("person", "unit") or not data.plan.stations:
            return
        day, minute = layout.time_at(at.x())
        start = int(minute // data.grid_min) * data.grid_min
        station = data.plan.stations[0]
        first = data.plan.people[0].id if data.plan.people else ""
        fresh = ShownBout("", day, start, min(1440, start + station.slot_min), station.id, 1, first)
        self.hand.form_requested.emit(in_row(fresh, row), True)

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
        return QSize(round(24 * line), round(19 * line))

    @guarded(QSize(700, 480))
    def sizeHint(self) -> QSize:
        """Return a comfortable size."""
        line = QFontMetricsF(type_font("text")).height()
        return QSize(round(46 * line), round(30 * line))

    @guarded()
    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Choose a turn and take it into the hand."""
        if event.button() == Qt.MouseButton.LeftButton:
            self._begin_drag(event.position())

    @guarded()
    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        """Carry a turn, or show how a hand would take it."""
        if self._drag is not None:
            self.drag_to(event.position())
            return
        bout, grip = self.bout_at(event.position())
        can = bout is not None and self.hand.data.editable and not bout.locked
        shape = Qt.CursorShape.OpenHandCursor if grip == "move" else Qt.CursorShape.SizeHorCursor
        self.viewport().setCursor(shape if can else Qt.CursorShape.ArrowCursor)

    @guarded()
    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        """Put the turn where it is."""
        if event.button() == Qt.MouseButton.LeftButton:
            self.let_go(keep=True)

    @guarded()
    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Open the form of a turn, or of a new one on an empty place."""
        bout, _grip = self.bout_at(event.position())
        if bout is not None:
            self.hand.open_form()
        elif self.hand.data.editable:
            self._new_turn_at(event.position())

    @guarded()
    def wheelEvent(self, event: QWheelEvent) -> None:
        """Scroll; with Ctrl make the day wider or narrower."""
        if event.modifiers() & Qt.KeyboardModifier.ControlModifier:
            self.zoom_by(1 if event.angleDelta().y() > 0 else -1)
            event.accept()
            return
        super().wheelEvent(event)

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Do by keys what the hand does."""
        if event.key() == Qt.Key.Key_Escape and self._drag is not None:
            self.let_go(keep=False)
        elif not self._arrow(event) and not self.hand.key(event):
            super().keyPressEvent(event)

    def _arrow(self, event: QKeyEvent) -> bool:
        """Arrows move, with Shift they resize, with Ctrl they choose another turn."""
        across = {Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1}.get(Qt.Key(event.key()), 0)
        down = {Qt.Key.Key_Up: -1, Qt.Key.Key_Down: 1}.get(Qt.Key(event.key()), 0)
        modifiers = event.modifiers()
        if event.key() in (Qt.Key.Key_Plus, Qt.Key.Key_Minus):
            self.zoom_by(1 if event.key() == Qt.Key.Key_Plus else -1)
            return True
        if event.key() in (Qt.Key.Key_Home, Qt.Key.Key_End):
            turns = self.shown_turns()
            if turns:
                self.hand.choose(turns[0 if event.key() == Qt.Key.Key_Home else -1].id)
            return True
        if not across and not down:
            return False
        if modifiers & Qt.KeyboardModifier.ControlModifier or not self.hand.chosen:
            self._choose_next(across or down)
        elif modifiers & Qt.KeyboardModifier.ShiftModifier:
            self.hand.size(across)
        elif across:
            self.hand.step(across)
        else:
            self._to_next_row(down)
        return True

    def _choose_next(self, step: int) -> None:
        turns = self.shown_turns()
        if not turns:
            return
        places = [place for place, bout in enumerate(turns) if bout.id == self.hand.chosen]
        place = places[0] + step if places else 0
        self.hand.choose(turns[min(max(0, place), len(turns) - 1)].id)

    def _to_next_row(self, step: int) -> None:
        bout, layout = self.hand.bout(), self._scene.layout
        place = layout.place_of(bout) + step if bout is not None else -1
        if 0 <= place < len(layout.rows) and layout.rows[place].kind in ("person", "unit"):
            self.hand.to_row(layout.rows[place])

    @guarded()
    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        """Offer what can be done with a turn."""
        if event.reason() == QContextMenuEvent.Reason.Mouse:
            bout, _grip = self.bout_at(QPointF(event.pos()))
            self.hand.choose(bout.id if bout is not None else "")
            at = event.globalPos()
        else:
            bout = self.hand.bout()
            box = self.rect_of(bout) if bout is not None else QRectF()
            at = self.viewport().mapToGlobal(box.bottomLeft().toPoint() if not box.isEmpty() else QPoint(40, 40))
        if self.hand.bout() is not None:
            open_menu(self, self.hand, at)

    @guarded()
    def focusInEvent(self, event: QFocusEvent) -> None:
        """Choose the first turn where none is chosen yet and the keys brought the focus."""
        super().focusInEvent(event)
        turns = self.shown_turns()
        keys = (Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason)
        if not self.hand.chosen and turns and event.reason() in keys:
            self.hand.choose(turns[0].id)
        self.viewport().update()

    @guarded()
    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Show that the keys go elsewhere."""
        super().focusOutEvent(event)
        self.viewport().update()

    @guarded(False)
    def viewportEvent(self, event: QEvent) -> bool:
        """Say a turn in words where the pointer rests."""
        if isinstance(event, QHelpEvent) and self.ready:
            bout, _grip = self.bout_at(QPointF(event.pos()))
            text = self.hand.data.sentence(bout) if bout is not None else ""
            QToolTip.showText(event.globalPos(), as_tool_tip(text) if text else "", self)
            return True
        return bool(super().viewportEvent(event))

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow text size and colours."""
        super().changeEvent(event)
        if self.ready and event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange):
            self._rebuild()
