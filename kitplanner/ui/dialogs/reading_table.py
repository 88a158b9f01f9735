"""A table to read in a dialog: texts wrap, rows lead to a place of the plan."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from msgspec import Struct
from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QSize, Qt, Signal, Slot
from PySide6.QtGui import QFontMetrics, QGuiApplication, QKeyEvent, QKeySequence, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from kitplanner.plan.edits import Path
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.plain_table import PlainTableModel, TableData, copied_text

Index = QModelIndex | QPersistentModelIndex
MOST_LINES = 1000
_CELL_PX, _HEAD_PX = 14, 22
_LEAST_CHARS = 9


class Line(Struct, frozen=True):
    """One row: its texts, and the field or record it leads to, if any."""

    cells: tuple[str, ...]
    place: Path = ()


class ReadingModel(PlainTableModel):
    """Rows of texts, all from the left."""

    def set_headers(self, headers: tuple[str, ...]) -> None:
        """Show the titles in lines of their own."""
        self._data = TableData(headers, self._data.rows)
        self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, max(0, len(headers) - 1))

    @guarded(None)
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a cell's text, from the top left."""
        if role == Qt.ItemDataRole.TextAlignmentRole and index.isValid():
            return int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        return super().data(index, role)

    @guarded(None)
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a column's title, from the left."""
        if role == Qt.ItemDataRole.TextAlignmentRole and orientation == Qt.Orientation.Horizontal:
            return int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        return super().headerData(section, orientation, role)


class ReadingTable(QTableView):
    """Rows of wrapped texts.

    Signals
    -------
    place_requested(place: Path)
        The user wants to go where the chosen row leads.
    """

    place_requested = Signal(object)

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._lines: tuple[Line, ...] = ()
        self._headers: tuple[str, ...] = ()
        self._model = ReadingModel(self)
        self.setModel(self._model)
        self.setAccessibleName(name)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setWordWrap(True)
        self.setTextElideMode(Qt.TextElideMode.ElideNone)
        self.verticalHeader().hide()
        self.horizontalHeader().setHighlightSections(False)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        self.activated.connect(self._on_activated)

    @property
    def lines(self) -> tuple[Line, ...]:
        """The rows shown."""
        return self._lines

    def set_lines(self, headers: Sequence[str], lines: Sequence[Line]) -> None:
        """Show other rows; beyond a thousand the last one says how many are left out."""
        shown = tuple(lines[:MOST_LINES])
        if len(lines) > MOST_LINES:
            more = self.tr("… and {count} more").format(count=len(lines) - MOST_LINES)
            shown = (*shown, Line((more, *([""] * (len(headers) - 1)))))
        self._lines, self._headers = shown, tuple(headers)
        self._model.set_data(TableData(tuple(headers), tuple(line.cells for line in shown)))
        self._share()
        if shown:
            self.setCurrentIndex(self._model.index(0, 0))

    def chosen_place(self) -> Path:
        """Return where the chosen row leads, empty for nowhere."""
        row = self.currentIndex().row()
        return self._lines[row].place if 0 <= row < len(self._lines) else ()

    def _share(self) -> None:
        """Give every column what it needs; where that is too much the widest give way and wrap."""
        if not self._headers:
            return
        metrics, bold = QFontMetrics(self.font()), QFontMetrics(self.horizontalHeader().font())
        texts = [[line.cells[column] for line in self._lines] for column in range(len(self._headers))]
        wanted, least = [], []
        for head, cells in zip(self._headers, texts, strict=True):
            head_px = bold.horizontalAdvance(head) + _HEAD_PX
            wanted.append(max([head_px, *(metrics.horizontalAdvance(text) + _CELL_PX for text in cells)]))
            word_px = max((bold.horizontalAdvance(word) for word in head.split()), default=0) + _HEAD_PX
            least.append(max(word_px, _LEAST_CHARS * metrics.averageCharWidth()))
        widths = shared_widths(wanted, self.viewport().width(), least)
        for column, width in enumerate(widths):
            self.setColumnWidth(column, width)
        heads = [wrapped(head, bold, width - _HEAD_PX) for head, width in zip(self._headers, widths, strict=True)]
        self._model.set_headers(tuple(heads))
        self.resizeRowsToContents()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Share the new width."""
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self._share()

    @guarded(QSize(300, 120))
    def minimumSizeHint(self) -> QSize:
        """Return room for a few lines."""
        return QSize(200, self.fontMetrics().height() * 5)

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy the chosen rows as text, go with Return."""
        if event.matches(QKeySequence.StandardKey.Copy):
            QGuiApplication.clipboard().setText(copied_text(self))
            return
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and self.chosen_place():
            self.place_requested.emit(self.chosen_place())
            return
        super().keyPressEvent(event)

    @Slot(QModelIndex)
    def _on_activated(self, index: QModelIndex) -> None:
        if 0 <= index.row() < len(self._lines) and self._lines[index.row()].place:
            self.place_requested.emit(self._lines[index.row()].place)


def wrapped(text: str, metrics: QFontMetrics, room: int) -> str:
    """Return a text with a new line before every word that does not fit."""
    lines: list[str] = []
    for word in text.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and metrics.horizontalAdvance(longer) <= room:
            lines[-1] = longer
        else:
            lines.append(word)
    return "\n".join(lines)


def shared_widths(wanted: Sequence[int], room: int, least: Sequence[int]) -> list[int]:
    """Return the columns' widths: as wanted where there is room, else the widest cut to one common width.

    Examples
    --------
    >>> shared_widths([50, 100], 200, [20, 20]), shared_widths([50, 400, 300], 450, [20, 20, 20])
    ([50, 150], [50, 200, 200])
    >>> shared_widths([90, 90], 100, [60, 20])
    [60, 50]
    """
    left, cap = room, 0
    for place, width in enumerate(sorted(wanted)):
        cap = left // (len(wanted) - place)
        if width > cap:
            break
        left -= width
    else:
        # The last column takes what is left, so that the rows end at the table's edge.
        return [*wanted[:-1], wanted[-1] + left]
    return [max(min(width, small), min(width, cap)) for width, small in zip(wanted, least, strict=True)]
