"""What hand and keys do to turns: the same for the board, its table and its menu; every change is one named edit."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from dataclasses import replace

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QKeyEvent

from kitplanner.domain.units import clock
from kitplanner.plan import edits_rota
from kitplanner.plan.edits import Edit, chain
from kitplanner.ui.board.board_data import BoardData, Row, ShownBout

DAY_MIN = 1440
Change = tuple[Edit, str]


class BoardHand(QObject):
    """Chosen turn and what can be done with it.

    Signals
    -------
    edit_requested(edit: Edit, text: str, merge_key: str)
        One named change of the plan; an empty key never merges.
    hand_over_requested(bout_id: str)
        Ask to whom the turn goes.
    form_requested(bout: ShownBout, is_new: bool)
        Open the form of a turn.
    told(text: str)
        Something to say to the one who works here.
    chosen_changed(bout_id: str)
        Another turn is chosen, or none.
    swap_changed()
        A swap has begun or ended.
    """

    edit_requested = Signal(object, str, str)
    hand_over_requested = Signal(str)
    form_requested = Signal(object, bool)
    told = Signal(str)
    chosen_changed = Signal(str)
    swap_changed = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.data = BoardData()
        self.chosen = ""
        self.swap = ""
        self._runs = itertools.count()
        self._run = ("", 0)
        self._keys: dict[int, Callable[[], None]] = {
            int(Qt.Key.Key_H.value): self.hand_over,
            int(Qt.Key.Key_S.value): self.swap_people,
            int(Qt.Key.Key_L.value): self.lock,
            int(Qt.Key.Key_Delete.value): self.remove,
            int(Qt.Key.Key_Return.value): self.open_form,
            int(Qt.Key.Key_Enter.value): self.open_form,
        }

    def set_data(self, data: BoardData) -> None:
        """Work on other data; the chosen turn stays where it is still there."""
        self.data = data
        known = {bout.id for bout in data.bouts}
        if self.swap and self.swap not in known:
            self.swap = ""
            self.swap_changed.emit()
        if self.chosen and self.chosen not in known:
            self.choose("")

    def bout(self, bout_id: str | None = None) -> ShownBout | None:
        """Return a turn by id, the chosen one without."""
        wanted = self.chosen if bout_id is None else bout_id
        return next((bout for bout in self.data.bouts if bout.id == wanted), None)

    def choose(self, bout_id: str) -> None:
        """Choose a turn; steps on another one begin a new undo step."""
        if bout_id != self.chosen:
            self.chosen = bout_id
            self._run = ("", 0)
            self.chosen_changed.emit(bout_id)

    def may_change(self, bout: ShownBout | None) -> bool:
        """Return whether a turn may be moved now, and say why not."""
        if bout is None:
            self.told.emit(self.tr("Choose a turn first."))
            return False
        if not self.data.editable:
            self.told.emit(self.tr("This is a proposal. Adopt it to change turns by hand."))
            return False
        if bout.locked:
            self.told.emit(self.tr("This turn is locked. Press L to unlock it."))
            return False
        return True

    def change(self, before: ShownBout, after: ShownBout) -> Change:
        """Return the edit that makes one turn into another of the same id, with its name."""
        edits: list[Edit] = []
        if (before.day, before.start_min, before.end_min) != (after.day, after.start_min, after.end_min):
            if before.length_min == after.length_min:
                edits.append(edits_rota.move_bout(before.id, after.day, after.start_min))
            else:
                edits.append(edits_rota.resize_bout(before.id, after.start_min, after.end_min))
        if before.person != after.person:
            edits.append(edits_rota.hand_over(before.id, after.person))
        if (before.station, before.unit) != (after.station, after.unit):
            edits.append(edits_rota.place_bout(before.id, after.station, after.unit))
        return chain(*edits), self._name(before, after)

    def _name(self, before: ShownBout, after: ShownBout) -> str:
        names = self.data.person_names
        who, whom = names.get(before.person, before.person), names.get(after.person, after.person)
        start, then = clock(before.start_min), clock(after.start_min)
        if before.person != after.person:
            return self.tr("Hand over {who}'s turn at {start} to {whom}").format(who=who, start=start, whom=whom)
        if before.length_min != after.length_min:
            text = self.tr("Make {who}'s turn at {start} {length} min long")
            return text.format(who=who, start=start, length=after.length_min)
        if (before.station, before.unit) != (after.station, after.unit):
            place = self.data.station_words(after)
            return self.tr("Put {who}'s turn at {start} at {place}").format(who=who, start=start, place=place)
        return self.tr("Move {who}'s turn at {start} to {then}").format(who=who, start=start, then=then)

    def apply(self, before: ShownBout, after: ShownBout, merge_key: str = "") -> None:
        """Ask for a change, unless it changes nothing."""
        if before != after:
            edit, text = self.change(before, after)
            self.edit_requested.emit(edit, text, merge_key)

    def _run_key(self, kind: str) -> str:
        """Return the key under which repeated key strokes of one kind become one step to undo."""
        if self._run[0] != kind:
            self._run = (kind, next(self._runs))
        return f"rota-{kind}-{self.chosen}-{self._run[1]}"

    def step(self, slots: int) -> None:
        """Move the chosen turn by slots; past midnight it goes to the next day."""
        bout = self.bout()
        if not self.may_change(bout) or bout is None:
            return
        start = bout.start_min + slots * self.data.grid_min
        day = bout.day
        if start < 0 and day > 1:
            day, start = day - 1, DAY_MIN - bout.length_min
        elif start + bout.length_min > DAY_MIN and day < self.data.plan.days:
            day, start = day + 1, 0
        start = min(max(0, start), DAY_MIN - bout.length_min)
        moved = replace(bout, day=day, start_min=start, end_min=start + bout.length_min)
        self.apply(bout, moved, self._run_key("move"))

    def size(self, slots: int) -> None:
        """Lengthen or shorten the chosen turn at its end by slots."""
        bout = self.bout()
        if self.may_change(bout) and bout is not None:
            end = min(DAY_MIN, bout.end_min + slots * self.data.grid_min)
            if end > bout.start_min:
                self.apply(bout, replace(bout, end_min=end), self._run_key("size"))

    def to_row(self, row: Row) -> None:
        """Give the chosen turn to another row's person or unit."""
        bout = self.bout()
        if self.may_change(bout) and bout is not None:
            self.apply(bout, in_row(bout, row), self._run_key("row"))

    def hand_over(self) -> None:
        """Ask to whom the chosen turn goes."""
        if self.may_change(self.bout()):
            self.hand_over_requested.emit(self.chosen)

    def give_to(self, bout_id: str, person: str) -> None:
        """Give a turn to a person."""
        bout = self.bout(bout_id)
        if bout is not None:
            self.apply(bout, replace(bout, person=person))

    def swap_people(self) -> None:
        """Begin a swap with the chosen turn, or end it with the turn chosen now."""
        bout = self.bout()
        if not self.may_change(bout) or bout is None:
            return
        other = self.bout(self.swap) if self.swap else None
        if other is None or other.id == bout.id:
            self.swap = "" if other is not None else bout.id
            self.swap_changed.emit()
            text = self.tr("Choose the other turn and press S, or Escape to leave it.") if self.swap else ""
            self.told.emit(text or self.tr("No swap."))
            return
        if other.person == bout.person:
            self.told.emit(self.tr("Both turns are of the same person. Choose a turn of somebody else."))
            return
        names = self.data.person_names
        text = self.tr("Swap {one} and {other}").format(
            one=names.get(other.person, other.person), other=names.get(bout.person, bout.person)
        )
        self.end_swap()
        self.edit_requested.emit(edits_rota.swap_people(other.id, bout.id), text, "")

    def end_swap(self) -> None:
        """Leave a swap that has begun."""
        if self.swap:
            self.swap = ""
            self.swap_changed.emit()

    def lock(self) -> None:
        """Lock the chosen turn or unlock it."""
        bout = self.bout()
        if bout is None or not self.data.editable:
            self.may_change(bout)
            return
        who, start = self.data.person_names.get(bout.person, bout.person), clock(bout.start_min)
        text = self.tr("Unlock {who}'s turn at {start}") if bout.locked else self.tr("Lock {who}'s turn at {start}")
        edit = edits_rota.lock_bout(bout.id, not bout.locked)
        self.edit_requested.emit(edit, text.format(who=who, start=start), "")

    def remove(self) -> None:
        """Take the chosen turn out."""
        bout = self.bout()
        if self.may_change(bout) and bout is not None:
            who, start = self.data.person_names.get(bout.person, bout.person), clock(bout.start_min)
            text = self.tr("Remove {who}'s turn at {start}").format(who=who, start=start)
            self.edit_requested.emit(edits_rota.remove_bout(bout.id), text, "")

    def open_form(self) -> None:
        """Open the form of the chosen turn."""
        bout = self.bout()
        if bout is None or not self.data.editable:
            self.may_change(bout)
            return
        self.form_requested.emit(bout, False)

    def key(self, event: QKeyEvent) -> bool:
        """Do what a key means; return whether it meant anything."""
        modifiers = event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
        if event.key() == Qt.Key.Key_Escape and self.swap:
            self.end_swap()
            return True
        action = self._keys.get(int(event.key()))
        if action is None or modifiers:
            return False
        action()
        return True


def in_row(bout: ShownBout, row: Row) -> ShownBout:
    """Return a turn as it would be in another row; unchanged in a row that takes no turns."""
    if row.kind == "person":
        return replace(bout, person=row.key)
    if row.kind == "unit":
        return replace(bout, station=row.key, unit=row.unit)
    return bout
