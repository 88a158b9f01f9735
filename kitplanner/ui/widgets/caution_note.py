"""Caution texts at their places: a quiet note, or a band that stays until it is ticked."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt, Signal, Slot
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen, QResizeEvent
from PySide6.QtWidgets import QCheckBox, QLabel, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.ui import theme
from kitplanner.ui.guard import guarded

_BAR_PX = 4


class CautionNote(QWidget):
    """One caution; with `gate` it carries a box to tick.

    Signals
    -------
    acknowledged(caution: str, done: bool)
        The box of a gate was ticked or unticked.
    """

    acknowledged = Signal(str, bool)

    def __init__(
        self, caution: str, text: str, *, gate: bool, done: bool = False, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._caution = caution
        self._is_gate = gate
        self._label = QLabel(text, self)
        self._label.setTextFormat(Qt.TextFormat.PlainText)
        self._label.setWordWrap(True)
        self._label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.setAccessibleName(self.tr("Caution"))
        self.setAccessibleDescription(text)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Minimum)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(_BAR_PX + 8, 6, 8, 6)
        layout.setSpacing(4)
        layout.addWidget(self._label)
        self._box: QCheckBox | None = None
        if gate:
            self._box = QCheckBox(self.tr("I have read this caution"), self)
            self._box.setChecked(done)
            self._box.setMinimumHeight(24)
            self._box.setAccessibleDescription(text)
            self._box.clicked.connect(self._on_clicked)
            layout.addWidget(self._box)

    @property
    def caution(self) -> str:
        """Which caution this is."""
        return self._caution

    @property
    def text(self) -> str:
        """The caution's text."""
        return self._label.text()

    def box(self) -> QCheckBox | None:
        """The box to tick, None at a note without one."""
        return self._box

    @Slot(bool)
    def _on_clicked(self, checked: bool) -> None:
        self.acknowledged.emit(self._caution, checked)

    @guarded()
    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw a bar at the reading side, so that the note stands apart without colour alone."""
        painter = QPainter(self)
        try:
            colours = theme.colours()
            bar = QColor(colours.warning if self._is_gate else colours.edge)
            rtl = self.layoutDirection() == Qt.LayoutDirection.RightToLeft
            left = self.width() - _BAR_PX if rtl else 0
            painter.fillRect(self.rect(), QColor(colours.paper))
            painter.fillRect(left, 0, _BAR_PX, self.height(), bar)
            painter.setPen(QPen(QColor(colours.rule), 1))
            painter.drawRect(self.rect().adjusted(0, 0, -1, -1))
        finally:
            painter.end()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Ask for the height that the whole text needs at this width; a form's layout forgets to."""
        super().resizeEvent(event)
        layout = self.layout()
        needed = self.heightForWidth(self.width())
        if layout is not None and needed > 0 and needed != self.minimumHeight():
            self.setMinimumHeight(needed)
            # Qt resized the note inside this very event; its layout has to be told once more.
            layout.invalidate()
            layout.setGeometry(self.rect())

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Repaint when the theme changes."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self.update()
