"""The cautions of one page, each in its note."""

from __future__ import annotations

from PySide6.QtCore import Signal, Slot
from PySide6.QtWidgets import QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution
from kitplanner.ui.widgets.caution_note import CautionNote


class CautionList(QWidget):
    """A column of cautions; rebuilt only when it must show others.

    Signals
    -------
    acknowledged(caution: str, done: bool)
        The box of a gate was ticked or unticked.
    """

    acknowledged = Signal(str, bool)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._shown: tuple[tuple[ShownCaution, ...], frozenset[str]] = ((), frozenset())
        self._notes: list[CautionNote] = []
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(14, 8, 14, 8)
        self._column.setSpacing(6)
        self.hide()

    def set_cautions(self, cautions: tuple[ShownCaution, ...], done: frozenset[str]) -> None:
        """Show these cautions, ticked where they were acknowledged."""
        if (cautions, done) == self._shown:
            return
        self._shown = (cautions, done)
        for note in self._notes:
            self._column.removeWidget(note)
            note.hide()
            note.deleteLater()
        self._notes = []
        for shown in cautions:
            text = self.tr("{number} {hazard}: {text}").format(
                number=shown.caution.id, hazard=shown.caution.hazard, text=shown.text
            )
            note = CautionNote(shown.caution.id, text, gate=shown.how == "gate", done=shown.caution.id in done)
            note.acknowledged.connect(self._on_acknowledged)
            self._column.addWidget(note)
            self._notes.append(note)
        self.setVisible(bool(cautions))

    @Slot(str, bool)
    def _on_acknowledged(self, caution: str, done: bool) -> None:
        self.acknowledged.emit(caution, done)
