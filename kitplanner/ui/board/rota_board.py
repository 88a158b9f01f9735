"""The board under the hand: turns are chosen, moved, resized and handed over by mouse and keys."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

from PySide6.QtCore import QEvent, QPoint, QPointF, QRect, QRectF, Qt, Signal, Slot
from PySide6.QtGui import (
    QContextMenuEvent,
    QFocusEvent,
    QFontMetricsF,
    QHelpEvent,
    QKeyEvent,
    QMouseEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QToolTip, QWidget

from kitplanner.ui.board import board_access
from kitplanner.ui.board.board_data import BoardData, ShownBout
from kitplanner.ui.board.board_hand import DAY_MIN, BoardHand, in_row
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.board.board_menu import open_menu
from kitplanner.ui.board.board_painter import Ghost
from kitplanner.ui.board.board_view import LEAST_TARGET_PX, BoardView
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import type_font
from kitplanner.ui.widgets.plain import as_tool_tip

Grip = Literal["move", "start", "end"]
_EDGE_PX = 5.0
_DRAG_PX = 4
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, -1),
    Qt.Key.Key_Down: (0, 1),
}


@dataclass
class Drag:
    """A turn in the hand."""

    bout: ShownBout
    grip: Grip
    pressed: QPointF
    place: int
    target: ShownBout
    home: int = 0
    has_begun: bool = False


def bout_at(data: BoardData, layout: BoardLayout, at: QPointF) -> tuple[ShownBout | None, Grip]:
    """Return the turn at a place and how a hand would take it; small blocks have a wider catch."""
    if not layout.rows or not layout.body.contains(at):
        return None, "move"
    row, best = layout.rows[layout.row_at(at.y())], None
    for bout in data.bouts:
        if bout.day not in layout.days:
            continue
        mine = bout.person == row.key if row.kind == "person" else (bout.station, bout.unit) == (row.key, row.unit)
        if not mine and not (row.kind == "person" and bout.watcher == row.key):
            continue
        left, right = layout.x_of(bout.day, bout.start_min), layout.x_of(bout.day, bout.end_min)
        reach = max(0.0, (LEAST_TARGET_PX - (right - left)) / 2)
        away = max(left - at.x(), at.x() - right, 0.0)
        if away <= reach and (best is None or away < best[0]):
            best = (away, bout, left, right, mine)
    if best is None:
        return None, "move"
    _away, bout, left, right, mine = best
    edge = min(_EDGE_PX, max(1.0, (right - left) / 4))
    grip: Grip = "start" if at.x() < left + edge else "end" if at.x() > right - edge else "move"
    return bout, grip if mine else "move"


def target_of(drag: Drag, at: QPointF, layout: BoardLayout, grid_min: int) -> tuple[ShownBout, int]:
    """Return the turn as it would be if the hand let go at a place, and its row."""
    bout = drag.bout
    shift = (at.x() - drag.pressed.x()) / layout.px_per_min
    if drag.grip == "end":
        end = min(max(round((bout.end_min + shift) / grid_min) * grid_min, bout.start_min + grid_min), DAY_MIN)
        return replace(bout, end_min=end), drag.place
    if drag.grip == "start":
        start = max(min(round((bout.start_min + shift) / grid_min) * grid_min, bout.end_min - grid_min), 0)
        return replace(bout, start_min=start), drag.place
    day, minute = layout.time_at(layout.x_of(bout.day, bout.start_min) + at.x() - drag.pressed.x())
    start = min(max(round(minute / grid_min) * grid_min, 0), DAY_MIN - bout.length_min)
    place = layout.row_at(at.y())
    if layout.rows[place].kind not in ("person", "unit"):
        place = drag.home
    moved = replace(bout, day=day, start_min=start, end_min=start + bout.length_min)
    return in_row(moved, layout.rows[place]), place


class RotaBoard(BoardView):
    """The board to work on.

    Signals
    -------
    tentative_changed(edit: Edit | None)
        What the plan would become if the hand let go now; None once it has.
    """

    tentative_changed = Signal(object)

    def __init__(self, hand: BoardHand, parent: QWidget | None = None) -> None:
        super().__init__(hand, parent)
        self._drag: Drag | None = None
        self.viewport().setMouseTracking(True)
        hand.chosen_changed.connect(self._on_chosen)
        hand.swap_changed.connect(self._on_swap)

    @property
    def is_held(self) -> bool:
        """True while a turn is in the hand: nothing should move under it."""
        return self._drag is not None

    def show_ghost_breaks(self, sentences: tuple[str, ...]) -> None:
        """Mark the turn in the hand with the rules it would break."""
        ghost = self._state.ghost
        if ghost is not None and ghost.broken != sentences:
            self._state.ghost = replace(ghost, broken=sentences)
            self.viewport().update(self._ghost_area(ghost))

    def bout_at(self, at: QPointF) -> tuple[ShownBout | None, Grip]:
        """Return the turn at a place and how a hand would take it."""
        return bout_at(self.hand.data, self._scene.layout, at)

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
            place = self._scene.layout.row_at(at.y())
            row = self._scene.layout.rows[place]
            if row.kind != "person" or row.key == bout.person:
                self._drag = Drag(bout, grip, at, place, bout, place)

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
        target, place = target_of(drag, at, self._scene.layout, self.hand.data.grid_min)
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

    def let_go(self, *, keep: bool) -> None:
        """End a drag: ask for the change, or leave all as it was."""
        drag, self._drag = self._drag, None
        self._state.ghost = None
        self.viewport().update()
        if drag is None:
            return
        if drag.has_begun and keep:
            self.hand.apply(drag.bout, drag.target)
        self.tentative_changed.emit(None)

    def _new_turn_at(self, at: QPointF) -> None:
        layout, data = self._scene.layout, self.hand.data
        row = layout.rows[layout.row_at(at.y())]
        if not layout.body.contains(at) or row.kind not in ("person", "unit") or not data.plan.stations:
            return
        day, minute = layout.time_at(at.x())
        start = int(minute // data.grid_min) * data.grid_min
        station = data.plan.stations[0]
        first = data.plan.people[0].id if data.plan.people else ""
        fresh = ShownBout("", day, start, min(DAY_MIN, start + station.slot_min), station.id, 1, first)
        self.hand.form_requested.emit(in_row(fresh, row), True)

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
        """Arrows move, with Shift they resize, with Ctrl they choose another turn; Home and End choose the ends."""
        key, modifiers = Qt.Key(event.key()), event.modifiers()
        if key in (Qt.Key.Key_Plus, Qt.Key.Key_Minus):
            self.zoom_by(1 if key == Qt.Key.Key_Plus else -1)
        elif key in (Qt.Key.Key_Home, Qt.Key.Key_End):
            turns = self.shown_turns()
            self.hand.choose(turns[0 if key == Qt.Key.Key_Home else -1].id if turns else "")
        elif key in _ARROWS:
            across, down = _ARROWS[key]
            if modifiers & Qt.KeyboardModifier.ControlModifier or not self.hand.chosen:
                self._choose_next(across or down)
            elif modifiers & Qt.KeyboardModifier.ShiftModifier:
                self.hand.size(across)
            elif across:
                self.hand.step(across)
            else:
                self._to_next_row(down)
        else:
            return False
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
