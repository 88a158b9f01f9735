"""Offers unsaved work of an earlier run, without standing in the way."""

from __future__ import annotations

from PySide6.QtCore import QDateTime, QLocale, Signal, Slot
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QSizePolicy, QWidget

from kitplanner.session.autosave import Recovered
from kitplanner.ui.widgets.plain import plain_label


class RecoveryBand(QWidget):
    """One piece of recovered work at a time: restore, discard or leave for later.

    Signals
    -------
    restore_requested(recovered: Recovered)
    discard_requested(recovered: Recovered)
        What to do with the work shown.
    """

    restore_requested = Signal(object)
    discard_requested = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._waiting: list[Recovered] = []
        self._text = plain_label(wrap=True)
        self._buttons: dict[str, QPushButton] = {}
        layout = QHBoxLayout(self)
        layout.setContentsMargins(12, 6, 12, 6)
        layout.addWidget(self._text, 1)
        for name, text, slot in (
            ("restore", self.tr("Restore"), self._on_restore),
            ("discard", self.tr("Discard"), self._on_discard),
            ("later", self.tr("Later"), self._on_later),
        ):
            button = QPushButton(text, self)
            button.setMinimumHeight(26)
            button.clicked.connect(slot)
            self._buttons[name] = button
            layout.addWidget(button)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Maximum)
        self.setAccessibleName(self.tr("Unsaved work found"))
        self.hide()

    def offer(self, found: tuple[Recovered, ...]) -> None:
        """Offer pieces of recovered work, newest first."""
        self._waiting = list(found)
        self._show_first()

    def button(self, name: str) -> QPushButton:
        """One of the buttons: restore, discard, later."""
        return self._buttons[name]

    def text(self) -> str:
        """The sentence shown."""
        return self._text.text()

    def _show_first(self) -> None:
        self.setVisible(bool(self._waiting))
        if not self._waiting:
            return
        first = self._waiting[0]
        name = first.original.name if first.original is not None else first.recovery.plan.title or self.tr("a new plan")
        when = QLocale().toString(_moment(first), QLocale.FormatType.ShortFormat)
        sentence = self.tr("Unsaved work on {name} from {when} was found.").format(name=name, when=when)
        if first.original_changed:
            sentence = f"{sentence} {self.tr('The file itself has changed since; compare before you save.')}"
        self._text.setText(sentence)
        for which, button in self._buttons.items():
            button.setAccessibleName(f"{button.text()}: {sentence}" if which == "restore" else button.text())

    @Slot()
    def _on_restore(self) -> None:
        if self._waiting:
            self.restore_requested.emit(self._waiting[0])

    @Slot()
    def _on_discard(self) -> None:
        if self._waiting:
            self.discard_requested.emit(self._waiting[0])
            self.done()

    @Slot()
    def _on_later(self) -> None:
        self.done()

    def done(self) -> None:
        """Go on to the next piece."""
        self._waiting = self._waiting[1:]
        self._show_first()


def _moment(recovered: Recovered) -> QDateTime:
    """Return when the work was kept, in local time."""
    return QDateTime.fromSecsSinceEpoch(int(recovered.recovery.saved_at.timestamp()))
