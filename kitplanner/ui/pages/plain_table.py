"""A read-only table of texts: the twin of a chart, copied as text by the usual key."""

from __future__ import annotations

from typing import Any

from msgspec import Struct
from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, QSize, Qt
from PySide6.QtGui import QFontMetricsF, QGuiApplication, QKeyEvent, QKeySequence, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QSizePolicy, QTableView, QWidget

from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import type_font
from kitplanner.ui.widgets.plain import as_tool_tip

Index = QModelIndex | QPersistentModelIndex


class TableData(Struct, frozen=True):
    """Headers and rows as texts; the first column names the row, the others are figures."""

    headers: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


class PlainTableModel(QAbstractTableModel):
    """Model of a TableData."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._data = TableData((), ())

    def set_data(self, data: TableData) -> None:
        """Show other rows; the selection stays where the shape stays."""
        if (data.headers, len(data.rows)) != (self._data.headers, len(self._data.rows)):
            self.beginResetModel()
            self._data = data
            self.endResetModel()
            return
        self._data = data
        if data.rows and data.headers:
            self.dataChanged.emit(self.index(0, 0), self.index(len(data.rows) - 1, len(data.headers) - 1))

    @guarded(0)
    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of rows."""
        return 0 if parent.isValid() else len(self._data.rows)

    @guarded(0)
    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() else len(self._data.headers)

    @guarded(None)
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a cell's text or alignment."""
        if not index.isValid():
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            row = self._data.rows[index.row()]
            return row[index.column()] if index.column() < len(row) else ""
        if role == Qt.ItemDataRole.ToolTipRole and index.column() == 0:
            return as_tool_tip(self._data.rows[index.row()][0])
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignLeading if index.column() == 0 else Qt.AlignmentFlag.AlignTrailing
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None

    @guarded(None)
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a column's title."""
        if orientation != Qt.Orientation.Horizontal or section >= len(self._data.headers):
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return self._data.headers[section]
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignLeading if section == 0 else Qt.AlignmentFlag.AlignTrailing
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None


def copied_text(view: QTableView) -> str:
    """Return the selected block of a table as lines with tabs."""
    indexes = sorted(view.selectedIndexes(), key=lambda index: (index.row(), index.column()))
    lines: dict[int, list[str]] = {}
    for index in indexes:
        lines.setdefault(index.row(), []).append(str(index.data() or "").replace("\n", " "))
    return "\n".join("\t".join(cells) for cells in lines.values())


class PlainTable(QTableView):
    """A table that is as high as its rows, up to `most_rows`, and leaves the wheel to the page."""

    def __init__(self, name: str, parent: QWidget | None = None, *, most_rows: int = 12) -> None:
        super().__init__(parent)
        self._most_rows = most_rows
        self._fits = True
        self._model = PlainTableModel(self)
        self.setModel(self._model)
        self.setAccessibleName(name)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.verticalHeader().hide()
        self.horizontalHeader().setHighlightSections(False)
        self.horizontalHeader().setTextElideMode(Qt.TextElideMode.ElideRight)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)

    def set_data(self, data: TableData) -> None:
        """Show other rows."""
        self._model.set_data(data)
        line = QFontMetricsF(type_font()).height()
        self.verticalHeader().setDefaultSectionSize(round(line * 1.5))
        self._share_width()
        self.updateGeometry()

    def _share_width(self) -> None:
        """Give the names what the figures leave, unless that is too little to read."""
        header, columns = self.horizontalHeader(), self._model.columnCount()
        if not columns:
            return
        figures = sum(max(header.sectionSizeHint(n), self.sizeHintForColumn(n)) for n in range(1, columns))
        self._fits = self.viewport().width() - figures >= min(self.sizeHintForColumn(0), self._least_name_px())
        mode = QHeaderView.ResizeMode.Stretch if self._fits else QHeaderView.ResizeMode.ResizeToContents
        if header.sectionResizeMode(0) != mode:
            header.setSectionResizeMode(0, mode)

    @staticmethod
    def _least_name_px() -> float:
        return QFontMetricsF(type_font()).averageCharWidth() * 18

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Share the new width, and make room for a scroll bar where the columns do not fit."""
        super().resizeEvent(event)
        self._share_width()
        self.updateGeometry()

    @guarded(QSize(300, 120))
    def sizeHint(self) -> QSize:
        """Return the height of the rows."""
        rows = max(1, min(self._model.rowCount(), self._most_rows))
        head = self.horizontalHeader().sizeHint().height()
        bar = 0 if self._fits else self.horizontalScrollBar().sizeHint().height()
        return QSize(300, head + rows * self.verticalHeader().defaultSectionSize() + bar + 4)

    @guarded(QSize(160, 120))
    def minimumSizeHint(self) -> QSize:
        """Return the same height, so that a page scrolls instead of squeezing the rows."""
        return QSize(160, self.sizeHint().height())

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy the selection as text that pastes into a spreadsheet."""
        if event.matches(QKeySequence.StandardKey.Copy):
            QGuiApplication.clipboard().setText(copied_text(self))
            return
        super().keyPressEvent(event)
