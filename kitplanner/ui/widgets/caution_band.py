"""All cautions of one place: the first one still to be acknowledged in full, the others behind one line."""

from __future__ import annotations

from PySide6.QtCore import QCoreApplication, QEvent, Slot
from PySide6.QtWidgets import QPushButton, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution
from kitplanner.session.gates import Gates
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.caution_note import CautionNote

translate = QCoreApplication.translate


class CautionBand(QWidget):
    """Shows cautions without a storm: one gate at a time, the rest named and one key away."""

    def __init__(self, gates: Gates, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._gates = gates
        self._shown: tuple[ShownCaution, ...] = ()
        self._notes: list[CautionNote] = []
        self._is_open = False
        self._button = QPushButton(self)
        self._button.setCheckable(True)
        self._button.setFlat(True)
        self._button.setAutoDefault(False)
        self._button.setStyleSheet("text-align: left; padding: 2px 6px;")
        self._button.setMinimumHeight(24)
        self._button.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self._button.clicked.connect(self._on_clicked)
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(4)
        self._layout.addWidget(self._button)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Maximum)
        gates.changed.connect(self._rebuild)
        self.hide()

    def show_cautions(self, shown: tuple[ShownCaution, ...]) -> None:
        """Show the cautions of a place."""
        if shown != self._shown:
            self._shown = shown
            self._rebuild()

    def notes(self) -> tuple[CautionNote, ...]:
        """The cautions shown in full now."""
        return tuple(self._notes)

    def button(self) -> QPushButton:
        """The line that names the other cautions and opens them."""
        return self._button

    def _waiting(self) -> ShownCaution | None:
        """The first gate that is not acknowledged."""
        gates = (one for one in self._shown if one.how == "gate")
        return next((one for one in gates if not self._gates.is_acknowledged(one.caution.id)), None)

    @Slot()
    def _rebuild(self) -> None:
        waiting = self._waiting()
        others = tuple(one for one in self._shown if one is not waiting)
        for note in self._notes:
            self._layout.removeWidget(note)
            note.hide()
            note.deleteLater()
        self._notes = []
        if waiting is not None:
            self._add(waiting, 0)
        if self._is_open:
            for one in others:
                self._add(one, self._layout.count())
        names = ", ".join(translate("Cautions", one.caution.hazard) for one in others)
        arrow = "▾" if self._is_open else "▸"
        self._button.setText(self.tr("{arrow} Cautions: {names}").format(arrow=arrow, names=names))
        self._button.setAccessibleName(self.tr("Cautions: {names}").format(names=names))
        self._button.setChecked(self._is_open)
        self._button.setVisible(bool(others))
        self.setVisible(bool(self._shown))

    def _add(self, shown: ShownCaution, index: int) -> None:
        hazard, words = translate("Cautions", shown.caution.hazard), translate("Cautions", shown.text)
        done = self._gates.is_acknowledged(shown.caution.id)
        note = CautionNote(shown.caution.id, f"{hazard}. {words}", gate=shown.how == "gate", done=done, parent=self)
        note.acknowledged.connect(self._gates.acknowledge)
        self._notes.append(note)
        self._layout.insertWidget(index, note)

    @Slot(bool)
    def _on_clicked(self, checked: bool) -> None:
        self._is_open = checked
        self._rebuild()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Build anew in another language."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.LanguageChange and self._shown:
            self._rebuild()
