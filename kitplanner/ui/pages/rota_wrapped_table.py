"""A small table whose last column holds sentences: they wrap, nothing has to be scrolled across."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QHeaderView, QWidget

from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.plain_table import PlainTable, TableData


class WrappedTable(PlainTable):
    """Figures first, words last; as high as its rows."""

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(name, parent)
        self.setWordWrap(True)
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)

    def set_data(self, data: TableData) -> None:
        """Show other rows."""
        super().set_data(data)
        self.resizeRowsToContents()
        self.updateGeometry()

    def _share_width(self) -> None:
        """Give the words what the names and figures leave."""
        header = self.horizontalHeader()
        for place in range(header.count()):
            is_last = place == header.count() - 1
            mode = QHeaderView.ResizeMode.Stretch if is_last else QHeaderView.ResizeMode.ResizeToContents
            if header.sectionResizeMode(place) != mode:
                header.setSectionResizeMode(place, mode)

    @guarded(QSize(300, 120))
    def sizeHint(self) -> QSize:
        """Return the height of all rows as they are wrapped now."""
        rows = sum(self.rowHeight(place) for place in range(self.model().rowCount()))
        return QSize(300, self.horizontalHeader().sizeHint().height() + rows + 4)
