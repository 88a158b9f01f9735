"""A dialog to read: a heading, sentences, one table whose rows lead to their fields."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QModelIndex, QSize, Qt, Signal, Slot
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLabel, QPushButton, QVBoxLayout, QWidget

from kitplanner.plan.edits import Path
from kitplanner.ui.dialogs.reading_table import Line, ReadingTable
from kitplanner.ui.widgets.plain import plain_label

_CHARS, _LINES = 104, 30
_SCREEN_SHARE = 0.9
_LEAST_TARGET_PX = 26


class JumpDialog(QDialog):
    """Heading, sentences and a table, without blocking the window.

    Signals
    -------
    jump_requested(place: Path)
        The user wants to go to a field; the dialog has closed.
    """

    jump_requested = Signal(object)

    def __init__(self, title: str, table_name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(title)
        self.heading = plain_label(wrap=True, size="title", bold=True)
        self._sentences = QVBoxLayout()
        self._sentences.setSpacing(4)
        self._labels: list[QLabel] = []
        self.table = ReadingTable(table_name, self)
        self.table.place_requested.connect(self._jump)
        self.table.selectionModel().currentChanged.connect(self._on_current_changed)
        self.buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        self.buttons.rejected.connect(self.reject)
        self.go = QPushButton(self.tr("&Go to field"), self)
        self.go.setToolTip(self.tr("Go to the field of the chosen row (Return)"))
        self.go.setAutoDefault(False)
        self.go.clicked.connect(self._on_go)
        self.buttons.addButton(self.go, QDialogButtonBox.ButtonRole.ActionRole)
        for button in self.buttons.buttons():
            button.setMinimumHeight(_LEAST_TARGET_PX)
        self.column = QVBoxLayout(self)
        self.column.setSpacing(8)
        self.column.addWidget(self.heading)
        self.column.addLayout(self._sentences)
        self.column.addWidget(self.table, 1)
        self.column.addWidget(self.buttons)
        self.resize(room_for(self, _CHARS, _LINES))

    def show_content(
        self, heading: str, sentences: Sequence[str], headers: Sequence[str], lines: Sequence[Line]
    ) -> None:
        """Show what there is to read."""
        self.heading.setText(heading)
        self.heading.setVisible(bool(heading))
        shown = [text for text in sentences if text]
        for label in self._labels[len(shown) :]:
            self._sentences.removeWidget(label)
            label.deleteLater()
        del self._labels[len(shown) :]
        while len(self._labels) < len(shown):
            label = plain_label(wrap=True)
            label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
            self._labels.append(label)
            self._sentences.addWidget(label)
        for label, text in zip(self._labels, shown, strict=True):
            label.setText(text)
        self.setAccessibleDescription(" ".join((heading, *shown)))
        self.table.setAccessibleDescription(" ".join(shown))
        self.table.set_lines(headers, lines)
        self.table.setVisible(bool(headers))
        leads = any(line.place for line in lines)
        self.go.setVisible(leads)
        self._on_current_changed()
        self.table.setFocus(Qt.FocusReason.OtherFocusReason)

    def text(self) -> str:
        """Everything shown, for tests and for reading aloud."""
        rows = ["\t".join(line.cells) for line in self.table.lines]
        return "\n".join((self.heading.text(), *(label.text() for label in self._labels), *rows))

    @Slot(object)
    def _jump(self, place: Path) -> None:
        self.jump_requested.emit(place)
        self.close()

    @Slot()
    def _on_go(self) -> None:
        if self.table.chosen_place():
            self._jump(self.table.chosen_place())

    @Slot(QModelIndex, QModelIndex)
    def _on_current_changed(self, *_: QModelIndex) -> None:
        self.go.setEnabled(bool(self.table.chosen_place()))


def room_for(widget: QWidget, chars: int, lines: int) -> QSize:
    """Return a size in characters and lines of the present text, never more than the screen has."""
    metrics, screen = widget.fontMetrics(), QGuiApplication.primaryScreen()
    wanted = QSize(chars * metrics.averageCharWidth(), lines * metrics.height())
    if screen is None:
        return wanted
    return wanted.boundedTo(screen.availableSize() * _SCREEN_SHARE)
