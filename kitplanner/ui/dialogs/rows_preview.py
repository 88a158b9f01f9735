"""The rows of a table before they are taken: each cell as typed, what becomes of each row, what cannot be taken."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QColor

from kitplanner.plan.exchange import Preview, PreviewRow
from kitplanner.ui import theme
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.plain import as_tool_tip

Index = QModelIndex | QPersistentModelIndex
_ROOT = QModelIndex()
_OWN_COLUMNS = 2
_NAMED = 3


class RowsPreviewModel(QAbstractTableModel):
    """Row number, what happens in words, then the cells."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._seen: Preview | None = None
        self._leaves_out = False

    def set_preview(self, seen: Preview | None, *, leaves_out: bool) -> None:
        """Show another preview; rows that cannot be taken are called left out where they are."""
        self.beginResetModel()
        self._seen, self._leaves_out = seen, leaves_out
        self.endResetModel()

    @guarded(0)
    def rowCount(self, parent: Index = _ROOT) -> int:
        """Count the rows of the table."""
        return 0 if parent.isValid() or self._seen is None else len(self._seen.rows)

    @guarded(0)
    def columnCount(self, parent: Index = _ROOT) -> int:
        """Count the columns."""
        return 0 if parent.isValid() or self._seen is None else _OWN_COLUMNS + len(self._seen.columns)

    @guarded()
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Name the columns, those without a field with a word."""
        if self._seen is None or orientation != Qt.Orientation.Horizontal or role != Qt.ItemDataRole.DisplayRole:
            return None
        if section < _OWN_COLUMNS:
            return (self.tr("Row"), self.tr("What happens"))[section]
        if section - _OWN_COLUMNS >= len(self._seen.columns):
            return None
        column = self._seen.columns[section - _OWN_COLUMNS]
        header = column.header or self.tr("column {number}").format(number=column.place)
        return header if column.key else self.tr("{name} (left out)").format(name=header)

    @guarded()
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Answer for one cell."""
        if self._seen is None or not index.isValid() or index.row() >= len(self._seen.rows):
            return None
        row = self._seen.rows[index.row()]
        problem = self._problem(row, index.column())
        if role == Qt.ItemDataRole.DisplayRole:
            text = self._text(row, index.column())
            return f"{text} ⚠".strip() if problem and index.column() >= _OWN_COLUMNS else text
        if role == Qt.ItemDataRole.ToolTipRole:
            return as_tool_tip(problem) if problem else None
        if role == Qt.ItemDataRole.ForegroundRole:
            return QColor(theme.colours().warning) if problem else self._quiet(row, index.column())
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return self._spoken(row, index.column(), problem)
        return None

    def what_happens(self, row: PreviewRow) -> str:
        """Say what becomes of a row."""
        if row.problems:
            return self.tr("left out") if self._leaves_out else self.tr("cannot be taken")
        if row.action == "new":
            return self.tr("new")
        if row.action == "same":
            return self.tr("stays as it is")
        fields = [cell.header for cell in row.cells if cell.changed]
        named = ", ".join(fields[:_NAMED]) + (" …" if len(fields) > _NAMED else "")
        return self.tr("changes {fields}").format(fields=named)

    def _text(self, row: PreviewRow, column: int) -> str:
        if column == 0:
            return str(row.line)
        if column == 1:
            return self.what_happens(row)
        return row.cells[column - _OWN_COLUMNS].text

    def _problem(self, row: PreviewRow, column: int) -> str:
        if column < _OWN_COLUMNS:
            return "\n".join(row.problems) if column == 1 else ""
        return row.cells[column - _OWN_COLUMNS].problem

    def _quiet(self, row: PreviewRow, column: int) -> QColor | None:
        is_quiet = column >= _OWN_COLUMNS and not row.cells[column - _OWN_COLUMNS].changed
        return QColor(theme.colours().muted) if is_quiet else None

    def _spoken(self, row: PreviewRow, column: int, problem: str) -> str:
        header = self.headerData(column, Qt.Orientation.Horizontal)
        spoken = self.tr("Row {number}, {column}: {text}").format(
            number=row.line, column=header, text=self._text(row, column) or self.tr("empty")
        )
        return f"{spoken}. {problem}" if problem else spoken
