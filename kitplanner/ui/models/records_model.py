"""Table model over the records of one section; columns are the fields that FIELDS shows in tables.

It never changes anything itself: `setData` hands the typed text to `Editing`, and the rows follow when the
plan has changed. Rows are told apart by id, so selection and scroll position stay.
"""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, Slot
from PySide6.QtGui import QColor, QFont

from kitplanner.plan.edits import Path
from kitplanner.plan.fields import FieldSpec, is_shown
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import (
    Names,
    default_text,
    editor_text,
    help_text,
    label_of,
    unit_of,
    value_text,
)
from kitplanner.ui import theme
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.plain import as_tool_tip

Index = QModelIndex | QPersistentModelIndex
PATH_ROLE = Qt.ItemDataRole.UserRole + 1
SPEC_ROLE = Qt.ItemDataRole.UserRole + 2
# Beyond this many changed rows one reset is cheaper than telling each row.
_MOST_STEPS = 200
_LONG_DEFAULT_CHARS = 20
_ROOT = QModelIndex()


class RecordsModel(QAbstractTableModel):
    """Rows are records with an id, columns are fields."""

    def __init__(
        self,
        path: Path,
        specs: tuple[FieldSpec, ...],
        editing: Editing,
        parent: QObject | None = None,
    ) -> None:
        super().__init__(parent)
        self._path = path
        self._specs = specs
        self._editing = editing
        self._records: list[Any] = []
        self._marked: dict[Path, str] = {}
        self._row_marks: dict[str, str] = {}
        editing.draft_changed.connect(self._on_draft_changed)

    @property
    def specs(self) -> tuple[FieldSpec, ...]:
        """Fields of the columns."""
        return self._specs

    @property
    def records(self) -> tuple[Any, ...]:
        """Records shown now."""
        return tuple(self._records)

    def row_of(self, record_id: str) -> int:
        """Row of a record, -1 when it is not shown."""
        return next((row for row, record in enumerate(self._records) if record.id == record_id), -1)

    def set_records(self, records: tuple[Any, ...]) -> None:
        """Show other records, telling only the differences."""
        before, after = [record.id for record in self._records], [record.id for record in records]
        if before == after:
            self._update_rows(records)
        elif _is_diffable(before, after):
            self._remove_missing(set(after))
            self._place_rows(records)
            self._update_rows(records)
        else:
            self.beginResetModel()
            self._records = list(records)
            self.endResetModel()

    def set_problems(self, problems: dict[Path, str]) -> None:
        """Mark the cells (or whole records) that have a problem."""
        if problems == self._marked:
            return
        self._marked = problems
        depth = len(self._path)
        self._row_marks = {path[depth]: text for path, text in problems.items() if len(path) > depth}
        if self._records:
            last = self.index(len(self._records) - 1, len(self._specs) - 1)
            self.dataChanged.emit(self.index(0, 0), last)

    @guarded(0)
    def rowCount(self, parent: Index = _ROOT) -> int:
        """Count the records."""
        return 0 if parent.isValid() else len(self._records)

    @guarded(0)
    def columnCount(self, parent: Index = _ROOT) -> int:
        """Count the fields."""
        return 0 if parent.isValid() else len(self._specs)

    @guarded(Qt.ItemFlag.NoItemFlags)
    def flags(self, index: Index) -> Qt.ItemFlag:
        """Let every cell be edited that is shown for its record."""
        if not index.isValid():
            return Qt.ItemFlag.NoItemFlags
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren
        return flags | Qt.ItemFlag.ItemIsEditable if self._applies(index) else flags

    @guarded()
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Name the fields with their units, the rows by number."""
        if orientation == Qt.Orientation.Vertical:
            return section + 1 if role == Qt.ItemDataRole.DisplayRole else None
        if not 0 <= section < len(self._specs):
            return None
        spec = self._specs[section]
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole):
            unit = unit_of(spec)
            return f"{label_of(spec)}, {unit}" if unit else label_of(spec)
        if role == Qt.ItemDataRole.ToolTipRole:
            return as_tool_tip(help_text(spec))
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _alignment(spec)
        return None

    @guarded()
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Answer for one cell."""
        if not index.isValid() or index.row() >= len(self._records):
            return None
        match role:
            case Qt.ItemDataRole.DisplayRole:
                return self._display(index)
            case Qt.ItemDataRole.EditRole:
                return self._edit_text(index)
            case Qt.ItemDataRole.FontRole | Qt.ItemDataRole.ForegroundRole:
                return self._look(index, role)
            case Qt.ItemDataRole.TextAlignmentRole:
                return _alignment(self._specs[index.column()])
            case Qt.ItemDataRole.ToolTipRole:
                problem = self._problem(index)
                return as_tool_tip(problem) if problem else None
            case Qt.ItemDataRole.AccessibleTextRole:
                return self._spoken(index)
        if role == PATH_ROLE:
            return self.path_of(index)
        return self._specs[index.column()] if role == SPEC_ROLE else None

    @guarded(False)
    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:
        """Hand a typed text on; an invalid one is kept as a draft and shown where it was typed."""
        if role != Qt.ItemDataRole.EditRole or not index.isValid():
            return False
        text = str(value)
        if text == self._edit_text(index):
            return True
        return self._editing.enter(self.path_of(index), self._specs[index.column()], text) is None

    def path_of(self, index: Index) -> Path:
        """Path of the field in a cell."""
        return (*self._path, self._records[index.row()].id, self._specs[index.column()].key)

    def names_for(self, spec: FieldSpec) -> Names:
        """Names of the records a field may refer to."""
        return self._editing.names(spec.refs_to) if spec.refs_to else {}

    def _applies(self, index: Index) -> bool:
        spec = self._specs[index.column()]
        return is_shown(spec, self._records[index.row()])

    def _value(self, index: Index) -> Any:
        return getattr(self._records[index.row()], self._specs[index.column()].key)

    def _edit_text(self, index: Index) -> str:
        draft = self._editing.drafts.get(self.path_of(index))
        spec = self._specs[index.column()]
        return editor_text(spec, self._value(index), self.names_for(spec)) if draft is None else draft.text

    def _display(self, index: Index) -> str:
        spec = self._specs[index.column()]
        draft = self._editing.drafts.get(self.path_of(index))
        if draft is not None:
            return f"{draft.text} ⚠"
        if not self._applies(index):
            return "–"
        text = value_text(spec, self._value(index), self.names_for(spec), exact=False)
        text = text or _short(default_text(spec, self.names_for(spec)))
        marked = index.column() == 0 and self._records[index.row()].id in self._row_marks
        return f"{text} ⚠" if marked or self.path_of(index) in self._marked else text

    def _is_default(self, index: Index) -> bool:
        value = self._value(index)
        return value is None or value == ()

    def _look(self, index: Index, role: int) -> QFont | QColor | None:
        if self._editing.drafts.get(self.path_of(index)) is not None or self.path_of(index) in self._marked:
            return QColor(theme.colours().warning) if role == Qt.ItemDataRole.ForegroundRole else None
        if not self._is_default(index) and self._applies(index):
            return None
        if role == Qt.ItemDataRole.ForegroundRole:
            return QColor(theme.colours().muted)
        font = theme.type_font()
        font.setItalic(True)
        return font

    def _problem(self, index: Index) -> str:
        path = self.path_of(index)
        draft = self._editing.drafts.get(path)
        if draft is not None:
            return draft.problem
        marked = self._row_marks.get(self._records[index.row()].id, "") if index.column() == 0 else ""
        return self._marked.get(path, marked)

    def _spoken(self, index: Index) -> str:
        spec = self._specs[index.column()]
        record = self._records[index.row()]
        text = self._display(index).replace("⚠", "").strip() or self.tr("empty")
        unit = unit_of(spec) if not self._is_default(index) else ""
        spoken = f"{record.name or record.id}, {label_of(spec)}: {text} {unit}".strip()
        problem = self._problem(index)
        return f"{spoken}. {problem}" if problem else spoken

    def _remove_missing(self, wanted: set[str]) -> None:
        for row in range(len(self._records) - 1, -1, -1):
            if self._records[row].id not in wanted:
                self.beginRemoveRows(_ROOT, row, row)
                del self._records[row]
                self.endRemoveRows()

    def _place_rows(self, records: tuple[Any, ...]) -> None:
        for row, record in enumerate(records):
            if row < len(self._records) and self._records[row].id == record.id:
                continue
            found = self.row_of(record.id)
            if found < 0:
                self.beginInsertRows(_ROOT, row, row)
                self._records.insert(row, record)
                self.endInsertRows()
            else:
                self.beginMoveRows(_ROOT, found, found, _ROOT, row)
                self._records.insert(row, self._records.pop(found))
                self.endMoveRows()

    def _update_rows(self, records: tuple[Any, ...]) -> None:
        for row, record in enumerate(records):
            before = self._records[row]
            if before is record:
                continue
            self._records[row] = record
            changed = [
                column
                for column, spec in enumerate(self._specs)
                if getattr(before, spec.key) != getattr(record, spec.key)
                or is_shown(spec, before) != is_shown(spec, record)
            ]
            if changed:
                self.dataChanged.emit(self.index(row, min(changed)), self.index(row, max(changed)))

    @Slot(object)
    def _on_draft_changed(self, path: Path) -> None:
        depth = len(self._path)
        if path[:depth] != self._path or len(path) <= depth:
            return
        row = self.row_of(path[depth])
        if row >= 0:
            self.dataChanged.emit(self.index(row, 0), self.index(row, len(self._specs) - 1))


def _short(default: str) -> str:
    """Leave a long explanation of a default to the form: "by age: 20 for adults, ..." becomes "by age"."""
    return default.split(":", 1)[0] if len(default) > _LONG_DEFAULT_CHARS else default


def _alignment(spec: FieldSpec) -> Qt.AlignmentFlag:
    """Numbers stand at the right, under their heading."""
    side = Qt.AlignmentFlag.AlignRight if spec.kind in ("number", "integer") else Qt.AlignmentFlag.AlignLeft
    return side | Qt.AlignmentFlag.AlignVCenter


def _is_diffable(before: list[str], after: list[str]) -> bool:
    """Tell whether row-by-row changes are few and unambiguous."""
    old, new = set(before), set(after)
    if len(old) != len(before) or len(new) != len(after):
        return False
    moved = [one for one in after if one in old] != [one for one in before if one in new]
    steps = len(old ^ new) + (len(old & new) if moved else 0)
    return steps <= _MOST_STEPS
