"""Colours and text size: chosen in the menu, kept in the preferences, applied at once."""

from __future__ import annotations

from typing import cast, get_args

from PySide6.QtCore import QObject, Signal, Slot
from PySide6.QtWidgets import QApplication

from kitplanner.session.settings import AppSettings, Scheme
from kitplanner.ui import theme


class ViewSettings(QObject):
    """Applies colours and text size.

    Signals
    -------
    changed()
        Another look is in force.
    """

    changed = Signal()

    def __init__(self, settings: AppSettings, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._settings = settings

    @Slot(str)
    def choose_scheme(self, scheme: str) -> None:
        """Keep and apply a colour scheme."""
        if scheme in get_args(Scheme):
            self._settings.scheme = cast(Scheme, scheme)
            self.apply()

    @Slot(int)
    def choose_text_percent(self, percent: int) -> None:
        """Keep and apply a text size."""
        self._settings.text_percent = percent
        self.apply()

    def apply(self) -> None:
        """Apply what is kept."""
        app = QApplication.instance()
        if isinstance(app, QApplication):
            theme.apply(app, self._settings.scheme, self._settings.text_percent / 100)
        self.changed.emit()
