"""All cautions of one place: one still to be acknowledged in full when first met, afterwards all behind one line."""

from __future__ import annotations

from PySide6.QtCore import QCoreApplication, QEvent, Qt, Slot
from PySide6.QtGui import QResizeEvent, QShowEvent
from PySide6.QtWidgets import QPushButton, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution
from kitplanner.session.gates import Gates
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.caution_note import CautionNote
from kitplanner.ui.widgets.plain import as_tool_tip

translate = QCoreApplication.translate
_LINE_AIR_PX = 16


class CautionBand(QWidget):
    """Shows cautions without a storm: one gate at a time, the rest named and one key away.

    A gate stands in full on the first visit; on later visits it is one line that says it is not read yet, until its
    box is ticked, so that it never takes the room from the work it protects.
    """

    def __init__(self, gates: Gates, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._gates = gates
        self._shown: tuple[ShownCaution, ...] = ()
        self._notes: list[CautionNote] = []
        self._is_open = False
        self._in_full = self._words = ""
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

    def leave(self) -> None:
        """End the visit: another section or page comes into sight, and what was shown in full may fold."""
        self._in_full, self._is_open = "", False
        if self._shown:
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

    def _to_show(self) -> ShownCaution | None:
        """The waiting gate if it is met for the first time or in this very visit."""
        waiting = self._waiting()
        if waiting is None or (waiting.caution.id != self._in_full and self._gates.was_seen(waiting.caution.id)):
            return None
        return waiting

    @Slot()
    def _rebuild(self) -> None:
        waiting = self._to_show()
        others = tuple(one for one in self._shown if one is not waiting)
        for note in self._notes:
            self._layout.removeWidget(note)
            note.hide()
            note.deleteLater()
        self._notes = []
        if waiting is not None:
            self._add(waiting, 0)
            self._in_full = waiting.caution.id
            if self.isVisible():
                self._gates.note_seen(waiting.caution.id)
        if self._is_open:
            for one in others:
                self._add(one, self._layout.count())
        words = self._words = self._line_words(others)
        self._fit_words()
        self._button.setAccessibleName(words)
        self._button.setToolTip(as_tool_tip(words))
        self._button.setChecked(self._is_open)
        self._button.setVisible(bool(others))
        self.setVisible(bool(self._shown))

    def _fit_words(self) -> None:
        """Shorten the line to its room; the tool tip and screen readers have all of it."""
        button, arrow = self._button, "▾" if self._is_open else "▸"
        room = max(self.width(), button.fontMetrics().averageCharWidth() * 20) - _LINE_AIR_PX
        text = button.fontMetrics().elidedText(f"{arrow} {self._words}", Qt.TextElideMode.ElideRight, room)
        if button.text() != text:
            button.setText(text)

    def _line_words(self, others: tuple[ShownCaution, ...]) -> str:
        """Name the cautions behind the line, those still to be read first."""
        unread = [one for one in others if one.how == "gate" and not self._gates.is_acknowledged(one.caution.id)]
        rest = [one for one in others if one not in unread]
        parts = []
        for pattern, ones in ((self.tr("⚠ Not read yet: {names}"), unread), (self.tr("Cautions: {names}"), rest)):
            if ones:
                parts.append(pattern.format(names=", ".join(translate("Cautions", one.caution.hazard) for one in ones)))
        return " · ".join(parts)

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
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Fit the line into the new width."""
        super().resizeEvent(event)
        self._fit_words()

    @guarded()
    def showEvent(self, event: QShowEvent) -> None:
        """From now on the gate in sight counts as shown."""
        super().showEvent(event)
        if self._in_full and self._notes:
            self._gates.note_seen(self._in_full)

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Build anew in another language."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.LanguageChange and self._shown:
            self._rebuild()
