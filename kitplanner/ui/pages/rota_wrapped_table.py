"""A small table whose last column holds sentences: they wrap, nothing has to be scrolled across."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt, QTimer, Slot
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QHeaderView, QWidget

from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.plain_table import PlainTable, TableData


class WrappedTable(PlainTable):
    """Figures first, words last; as high as its rows.

    Rows take their height once a layout has settled: a header that does so by itself while the table is being resized
    has Qt lay it out again from within, without end.
    """

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(name, parent)
        self.setWordWrap(True)
        # As high as its rows, so a bar would only come and go while it is laid out.
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._settle = QTimer(self)
        self._settle.setSingleShot(True)
        self._settle.timeout.connect(self._wrap)

    def set_data(self, data: TableData) -> None:
        """Show other rows."""
        super().set_data(data)
        self._wrap()

    @Slot()
    def _wrap(self) -> None:
        self.resizeRowsToContents()
        self.updateGeometry()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Wrap anew for another width."""
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self._settle.start()

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
