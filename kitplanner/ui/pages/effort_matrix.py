"""The shaded table of minutes: devices down, stations across, the figure in every cell."""

from __future__ import annotations

import math
from typing import Any

from msgspec import Struct
from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, QRectF, QSize, Qt, Signal, Slot
from PySide6.QtGui import QFontMetricsF, QGuiApplication, QKeyEvent, QKeySequence, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHeaderView,
    QSizePolicy,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QWidget,
)

from kitplanner.planners.results import EffortRow
from kitplanner.report.wording import minutes
from kitplanner.report.wording_effort import effort_limit_words
from kitplanner.ui.guard import guarded
from kitplanner.ui.hatches import draw_hatch
from kitplanner.ui.heat_colours import cividis
from kitplanner.ui.pages.plain_table import copied_text
from kitplanner.ui.theme import colours, text_on, type_font
from kitplanner.ui.widgets.plain import as_tool_tip

Index = QModelIndex | QPersistentModelIndex
ROW_ROLE = Qt.ItemDataRole.UserRole + 1
SHADE_ROLE = Qt.ItemDataRole.UserRole + 2
SHADE_LOW_MIN, SHADE_HIGH_MIN = 60.0, 600.0

_NAMES_STEP_PX = 16


class Matrix(Struct, frozen=True):
    """Names down and across, and a row or None for each cell."""

    devices: tuple[str, ...] = ()
    stations: tuple[str, ...] = ()
    cells: tuple[tuple[EffortRow | None, ...], ...] = ()


def cell_text(row: EffortRow | None) -> str:
    """Return the minutes of a cell, or why there are none."""
    if row is None:
        return "–"
    return minutes(row.minutes_p50) if row.minutes_p50 is not None else "×"


def range_text(row: EffortRow | None) -> str:
    """Return the 10-90 % range of a cell, or the limit in words."""
    if row is None:
        return ""
    if row.minutes_p50 is None:
        return effort_limit_words(row.limit)
    if row.minutes_p10 is None or row.minutes_p90 is None:
        return ""
    return f"{minutes(row.minutes_p10)} – {minutes(row.minutes_p90)}"


class EffortModel(QAbstractTableModel):
    """Model of a Matrix."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._matrix = Matrix()

    @property
    def matrix(self) -> Matrix:
        """What the table shows."""
        return self._matrix

    def set_matrix(self, matrix: Matrix) -> None:
        """Show another table; the selection stays where the names stay."""
        same = (matrix.devices, matrix.stations) == (self._matrix.devices, self._matrix.stations)
        if not same:
            self.beginResetModel()
        self._matrix = matrix
        if not same:
            self.endResetModel()
        elif matrix.devices and matrix.stations:
            last = self.index(len(matrix.devices) - 1, len(matrix.stations) - 1)
            self.dataChanged.emit(self.index(0, 0), last)

    def row_at(self, index: Index) -> EffortRow | None:
        """Return the effort row of a cell."""
        if not index.isValid():
            return None
        return self._matrix.cells[index.row()][index.column()]

    @staticmethod
    def shade(row: EffortRow | None) -> float | None:
        """Return where a cell's minutes lie between one hour (1, yellow) and ten hours (0, dark blue), by ratio.

        The scale is the same for every plan and person, so that two tables can be compared.
        """
        if row is None or not row.minutes_p50:
            return None
        share = math.log(row.minutes_p50 / SHADE_LOW_MIN) / math.log(SHADE_HIGH_MIN / SHADE_LOW_MIN)
        return 1.0 - min(1.0, max(0.0, share))

    @guarded(0)
    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of devices."""
        return 0 if parent.isValid() else len(self._matrix.devices)

    @guarded(0)
    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of stations."""
        return 0 if parent.isValid() else len(self._matrix.stations)

    @guarded(None)
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a cell's text, row, shade or words for a screen reader."""
        if not index.isValid():
            return None
        row = self.row_at(index)
        match role:
            case Qt.ItemDataRole.DisplayRole:
                return cell_text(row)
            case Qt.ItemDataRole.AccessibleTextRole:
                matrix = self._matrix
                where = f"{matrix.devices[index.row()]}, {matrix.stations[index.column()]}"
                return f"{where}: {cell_text(row)}, {range_text(row)}"
            case _ if role == ROW_ROLE:
                return row
            case _ if role == SHADE_ROLE:
                return self.shade(row)
        return None

    @guarded(None)
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a device's or a station's name."""
        names = self._matrix.stations if orientation == Qt.Orientation.Horizontal else self._matrix.devices
        if section >= len(names):
            return None
        if role == Qt.ItemDataRole.ToolTipRole:
            return as_tool_tip(names[section])
        return names[section] if role == Qt.ItemDataRole.DisplayRole else None


class MinutesDelegate(QStyledItemDelegate):
    """Paints minutes large, the range small below, on the shade of the cell."""

    @guarded()
    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """Paint one cell."""
        row, shade = index.data(ROW_ROLE), index.data(SHADE_ROLE)
        scheme, box = colours(), QRectF(option.rect).adjusted(1, 1, -1, -1)
        painter.save()
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            if shade is not None:
                fill = cividis(float(shade))
                ink = text_on(fill)
                painter.fillRect(box, fill)
            else:
                ink = scheme.color("muted")
                painter.fillRect(box, scheme.color("field"))
                path = QPainterPath()
                path.addRect(box)
                if row is not None:
                    draw_hatch(painter, path, "falling", scheme.color("rule"), 9.0)
            painter.setPen(ink)
            self._words(painter, box, row)
            if option.state & QStyle.StateFlag.State_Selected:
                painter.setBrush(Qt.BrushStyle.NoBrush)
                # The chosen cell keeps its frame; while the keyboard is here it is wider and in the accent colour.
                has_keys = bool(option.state & QStyle.StateFlag.State_HasFocus)
                painter.setPen(QPen(scheme.color("accent" if has_keys else "outline"), 5 if has_keys else 2))
                painter.drawRect(box.adjusted(1, 1, -1, -1))
                painter.setPen(QPen(scheme.color("field"), 1))
                painter.drawRect(box.adjusted(3, 3, -3, -3))
        finally:
            painter.restore()

    @staticmethod
    def _words(painter: QPainter, box: QRectF, row: EffortRow | None) -> None:
        inner = box.adjusted(6, 3, -6, -3)
        flags = Qt.AlignmentFlag.AlignHCenter
        large, small = type_font("text", bold=True), type_font("small")
        below = range_text(row)
        fits = below and QFontMetricsF(small).horizontalAdvance(below) <= inner.width()
        painter.setFont(large)
        vertical = Qt.AlignmentFlag.AlignTop if fits else Qt.AlignmentFlag.AlignVCenter
        painter.drawText(inner, int(flags | vertical), cell_text(row))
        if fits:
            painter.setFont(small)
            painter.drawText(inner, int(flags | Qt.AlignmentFlag.AlignBottom), below)

    @guarded(QSize(110, 40))
    def sizeHint(self, _option: QStyleOptionViewItem, index: Index) -> QSize:
        """Return room for both lines."""
        row = index.data(ROW_ROLE)
        small = QFontMetricsF(type_font("small"))
        wide = max(small.horizontalAdvance(range_text(row)), small.horizontalAdvance("00 h 00 min – 00 h 00 min"))
        return QSize(round(wide + 18), row_height())


def row_height() -> int:
    """Return the height of one row: two lines and their air."""
    text, small = QFontMetricsF(type_font("text", bold=True)), QFontMetricsF(type_font("small"))
    return round(text.height() + small.height() + 10)


class EffortMatrix(QTableView):
    """The shaded table; choosing a cell tells its row.

    Signals
    -------
    row_chosen(row: EffortRow | None)
        The user stands on another cell.
    """

    row_chosen = Signal(object)

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._model = EffortModel(self)
        self.setModel(self._model)
        self._delegate = MinutesDelegate(self)
        self.setItemDelegate(self._delegate)
        self.setAccessibleName(name)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setMouseTracking(True)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.verticalHeader().setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        for header in (self.horizontalHeader(), self.verticalHeader()):
            header.setHighlightSections(False)
            header.setTextElideMode(Qt.TextElideMode.ElideRight)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.selectionModel().currentChanged.connect(self._on_current_changed)

    @property
    def matrix(self) -> Matrix:
        """What the table shows."""
        return self._model.matrix

    def set_matrix(self, matrix: Matrix) -> None:
        """Show another table, keeping the chosen cell where it still exists."""
        place = self._place_again(matrix)
        self._model.set_matrix(matrix)
        self.verticalHeader().setDefaultSectionSize(row_height())
        self._fit_columns()
        self.updateGeometry()
        if matrix.devices and matrix.stations:
            row, column = min(place[0], len(matrix.devices) - 1), min(place[1], len(matrix.stations) - 1)
            self.setCurrentIndex(self._model.index(row, column))
        self.row_chosen.emit(self.chosen_row())

    def _place_again(self, matrix: Matrix) -> tuple[int, int]:
        """Return where the chosen device and station stand in another table, else the same place."""
        at, before = self.currentIndex(), self.chosen_row()
        for number, line in enumerate(matrix.cells):
            for column, row in enumerate(line):
                if (
                    before is not None
                    and row is not None
                    and (row.device, row.station) == (before.device, before.station)
                ):
                    return number, column
        return (at.row(), at.column()) if at.isValid() else (0, 0)

    def chosen_row(self) -> EffortRow | None:
        """Return the row of the chosen cell."""
        return self._model.row_at(self.currentIndex())

    def _fit_columns(self) -> None:
        """Give the names a third of the width at most, and scroll when the cells would get too narrow."""
        header, bold = self.horizontalHeader(), QFontMetricsF(type_font("text", bold=True))
        header.setMinimumSectionSize(round(bold.horizontalAdvance("00 h 00 min") + 14))
        names = QFontMetricsF(self.verticalHeader().font())
        widest = max((names.horizontalAdvance(name) for name in self._model.matrix.devices), default=0.0) + 24
        # In steps, so that a scroll bar of the page that comes and goes moves no column.
        share = _NAMES_STEP_PX * (0.34 * self.width() // _NAMES_STEP_PX)
        self.verticalHeader().setFixedWidth(round(min(widest, max(share, 120.0))))

    @Slot()
    def _on_current_changed(self) -> None:
        self.row_chosen.emit(self.chosen_row())

    @guarded()
    def resizeEvent(self, event: Any) -> None:
        """Share the width between names and cells."""
        super().resizeEvent(event)
        self._fit_columns()
        self.updateGeometry()

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy the chosen cell as text."""
        if event.matches(QKeySequence.StandardKey.Copy):
            QGuiApplication.clipboard().setText(copied_text(self))
            return
        super().keyPressEvent(event)

    @guarded(QSize(300, 160))
    def sizeHint(self) -> QSize:
        """Return the height of all rows up to ten."""
        rows = max(1, min(self._model.rowCount(), 10))
        head, header = self.horizontalHeader().sizeHint().height(), self.horizontalHeader()
        narrow = header.minimumSectionSize() * header.count() > self.viewport().width()
        bar = self.horizontalScrollBar().sizeHint().height() if narrow else 0
        return QSize(360, head + rows * row_height() + bar + 4)

    @guarded(QSize(200, 160))
    def minimumSizeHint(self) -> QSize:
        """Return the same height: the page scrolls instead."""
        return QSize(220, self.sizeHint().height())
