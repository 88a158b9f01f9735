"""A section's rows in another order or only some of them: what is shown changes, the plan never does.

Rows stay where they are while one of their cells is edited; sorting and filtering happen only when asked for.
"""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QModelIndex, QObject, QPersistentModelIndex, QSortFilterProxyModel, Qt, Signal

from kitplanner.plan.edits import Path
from kitplanner.plan.edits_many import sort_section
from kitplanner.plan.fields import FieldSpec
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import Names
from kitplanner.ui.guard import guarded
from kitplanner.ui.models.records_model import RecordsModel

Index = QModelIndex | QPersistentModelIndex
_ROOT = QModelIndex()
_ASCENDING = Qt.SortOrder.AscendingOrder


class SortFilter(QSortFilterProxyModel):
    """View order and filter over the records of one section.

    Signals
    -------
    order_changed()
        Rows are shown in another order.
    """

    order_changed = Signal()

    def __init__(self, model: RecordsModel, section: str, editing: Editing, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._records = model
        self._section = section
        self._editing = editing
        self._needle = ""
        self._sorted_by: tuple[str, bool] | None = None
        self._rank: dict[str, int] = {}
        # A row must not jump away or vanish while it is being written.
        self.setDynamicSortFilter(False)
        self.setSourceModel(model)

    @property
    def sorted_by(self) -> tuple[str, bool] | None:
        """Key of the column that gives the order and whether it falls; None in the plan's own order."""
        return self._sorted_by

    @property
    def filter_text(self) -> str:
        """What the rows shown must hold; empty for all."""
        return self._needle

    @property
    def is_plan(self) -> bool:
        """True while all rows are shown in the plan's own order."""
        return self._sorted_by is None and not self._needle

    def set_filter(self, text: str) -> None:
        """Show only rows with a cell that holds the text, large and small letters alike."""
        if text.strip() != self._needle:
            self.beginFilterChange()
            self._needle = text.strip()
            self.endFilterChange(QSortFilterProxyModel.Direction.Rows)

    def id_at(self, row: int) -> str:
        """Id of the record in a row, empty where there is none."""
        return self.path_of(self.index(row, 0))[-2] if 0 <= row < self.rowCount() else ""

    def ids(self) -> tuple[str, ...]:
        """Ids of the records shown, in the order shown."""
        return tuple(self.id_at(row) for row in range(self.rowCount()))

    def row_of(self, record_id: str) -> int:
        """Row in which a record is shown, -1 when it is not."""
        row = self._records.row_of(record_id)
        return self.mapFromSource(self._records.index(row, 0)).row() if row >= 0 else -1

    def path_of(self, index: Index) -> Path:
        """Path of the field in a cell."""
        return self._records.path_of(self.mapToSource(index))

    def spec_at(self, column: int) -> FieldSpec:
        """Field of a column."""
        return self._records.specs[column]

    def names_for(self, spec: FieldSpec) -> Names:
        """Names of the records a field may refer to."""
        return self._records.names_for(spec)

    @guarded()
    def sort(self, column: int, order: Qt.SortOrder = _ASCENDING) -> None:
        """Show the rows in the order of a column, by the rules of sorting the plan; -1 for the plan's own order."""
        self._sorted_by = None
        self._rank = {}
        if 0 <= column < len(self._records.specs):
            key, falling = self._records.specs[column].key, order == Qt.SortOrder.DescendingOrder
            plan = sort_section(self._section, key, descending=falling)(self._editing.plan)
            self._rank = {record.id: place for place, record in enumerate(getattr(plan, self._section))}
            self._sorted_by = (key, falling)
        super().sort(0 if self._sorted_by else -1, _ASCENDING)
        self.order_changed.emit()

    @guarded(False)
    def lessThan(self, left: Index, right: Index) -> bool:
        """Compare two rows by their places in the order asked for; later ones come last."""
        return self._place(left) < self._place(right)

    @guarded(True)
    def filterAcceptsRow(self, row: int, parent: Index = _ROOT) -> bool:
        """Tell whether a cell of the row holds the text."""
        if not self._needle:
            return True
        needle = self._needle.casefold()
        return any(needle in self._text(row, column).casefold() for column in range(len(self._records.specs)))

    def _text(self, row: int, column: int) -> str:
        shown: Any = self._records.data(self._records.index(row, column), Qt.ItemDataRole.DisplayRole)
        return str(shown)

    def _place(self, index: Index) -> tuple[int, int]:
        return self._rank.get(self._records.path_of(index)[-2], len(self._rank)), index.row()
