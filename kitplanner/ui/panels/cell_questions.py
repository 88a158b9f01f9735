"""What may be asked about the cell that the keyboard is in: where its value comes from, what it means."""

from __future__ import annotations

from PySide6.QtCore import Slot
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QTableView

from kitplanner.plan.edits import Path
from kitplanner.session.editing import Editing
from kitplanner.ui.models.records_model import PATH_ROLE
from kitplanner.ui.widgets.record_form import explanation_texts


class CellQuestion(QAction):
    """One question of a table's own menu."""

    def __init__(self, what: str, text: str, table: QTableView, editing: Editing) -> None:
        super().__init__(text, table)
        self._what, self._table, self._editing = what, table, editing
        self.triggered.connect(self._on_triggered)

    @Slot()
    def _on_triggered(self) -> None:
        place = chosen_place(self._table)
        if place:
            self._editing.explain_requested.emit(place, self._what)


def add_questions(table: QTableView, editing: Editing) -> None:
    """Let a table's own menu ask about the chosen cell."""
    for what, text in explanation_texts(table):
        table.addAction(CellQuestion(what, text, table, editing))


def chosen_place(table: QTableView) -> Path:
    """Return the field of the chosen cell, empty without one."""
    place = table.currentIndex().data(PATH_ROLE)
    return tuple(place) if place else ()
