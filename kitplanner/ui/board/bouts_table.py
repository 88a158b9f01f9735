"""The same turns as a plain table, for the keyboard, screen readers and spreadsheets; the same keys as the board."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QItemSelectionModel, QModelIndex, QPersistentModelIndex, Qt, Slot
from PySide6.QtGui import QContextMenuEvent, QFontMetricsF, QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from kitplanner.domain.units import clock
from kitplanner.report.wording import number
from kitplanner.ui.board.board_data import BoardData, ShownBout
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.board.board_menu import open_menu
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.plain_table import copied_text
from kitplanner.ui.theme import type_font
from kitplanner.ui.widgets.plain import as_tool_tip

Index = QModelIndex | QPersistentModelIndex
_FIGURES = (0, 4, 7, 8)


class BoutsModel(QAbstractTableModel):
    """Turns as rows."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._data = BoardData()
        self._bouts: tuple[ShownBout, ...] = ()
        self._heads = (
            self.tr("day"),
            self.tr("from"),
            self.tr("to"),
            self.tr("station"),
            self.tr("unit"),
            self.tr("turns"),
            self.tr("watches"),
            self.tr("min"),
            self.tr("Wh (S)"),
            self.tr("locked"),
            self.tr("broken rule"),
        )

    @property
    def bouts(self) -> tuple[ShownBout, ...]:
        """Turns in the order of the rows."""
        return self._bouts

    def show_data(self, data: BoardData, days: tuple[int, ...]) -> None:
        """Show other turns; where their number stays, only the cells are drawn again."""
        inside = (bout for bout in data.bouts if bout.day in days)
        bouts = tuple(sorted(inside, key=lambda one: (one.day, one.start_min, one.station, one.unit)))
        if len(bouts) != len(self._bouts):
            self.beginResetModel()
            self._data, self._bouts = data, bouts
            self.endResetModel()
            return
        self._data, self._bouts = data, bouts
        if bouts:
            self.dataChanged.emit(self.index(0, 0), self.index(len(bouts) - 1, len(self._heads) - 1))

    @guarded(0)
    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of turns."""
        return 0 if parent.isValid() else len(self._bouts)

    @guarded(0)
    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() else len(self._heads)

    @guarded(None)
    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a cell."""
        if not index.isValid():
            return None
        bout = self._bouts[index.row()]
        if role == Qt.ItemDataRole.DisplayRole:
            return self._cells(bout)[index.column()]
        if role == Qt.ItemDataRole.ToolTipRole:
            return as_tool_tip(self._data.sentence(bout))
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignTrailing if index.column() in _FIGURES else Qt.AlignmentFlag.AlignLeading
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None

    def _cells(self, bout: ShownBout) -> tuple[str, ...]:
        names = self._data.person_names
        station = next((one for one in self._data.plan.stations if one.id == bout.station), None)
        return (
            str(bout.day),
            clock(bout.start_min),
            clock(bout.end_min),
            (station.name or station.id) if station is not None else bout.station,
            str(bout.unit),
            names.get(bout.person, bout.person),
            names.get(bout.watcher, bout.watcher) if bout.watcher else "",
            str(bout.length_min),
            number(bout.output_wh, 2) if bout.output_wh is not None else "",
            self.tr("locked") if bout.locked else "",
            " ".join(self._data.breaks.get(bout.id, ())),
        )

    @guarded(None)
    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return a column's title."""
        if orientation != Qt.Orientation.Horizontal or section >= len(self._heads):
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return self._heads[section]
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignTrailing if section in _FIGURES else Qt.AlignmentFlag.AlignLeading
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None


class BoutsTable(QTableView):
    """The table of turns; choosing a row chooses the turn on the board."""

    def __init__(self, hand: BoardHand, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._hand = hand
        self._follows = False
        self.turns = BoutsModel(self)
        self.setModel(self.turns)
        self.setAccessibleName(self.tr("Turns of the rota"))
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.verticalHeader().hide()
        self.horizontalHeader().setHighlightSections(False)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.selectionModel().currentRowChanged.connect(self._on_row)
        self.doubleClicked.connect(self._on_double_click)
        hand.chosen_changed.connect(self._on_chosen)

    def show_data(self, data: BoardData, days: tuple[int, ...]) -> None:
        """Show other turns."""
        self._follows = True
        self.turns.show_data(data, days)
        self._follows = False
        self.verticalHeader().setDefaultSectionSize(round(QFontMetricsF(type_font()).height() * 1.6))
        self._on_chosen(self._hand.chosen)

    @Slot(QModelIndex, QModelIndex)
    def _on_row(self, now: QModelIndex, _before: QModelIndex) -> None:
        if now.isValid() and not self._follows:
            self._hand.choose(self.turns.bouts[now.row()].id)

    @Slot(str)
    def _on_chosen(self, bout_id: str) -> None:
        row = next((place for place, bout in enumerate(self.turns.bouts) if bout.id == bout_id), -1)
        if row >= 0 and row != self.currentIndex().row():
            self._follows = True
            flags = QItemSelectionModel.SelectionFlag
            self.selectionModel().setCurrentIndex(
                self.turns.index(row, max(0, self.currentIndex().column())), flags.ClearAndSelect | flags.Rows
            )
            self._follows = False

    @Slot(QModelIndex)
    def _on_double_click(self, _index: QModelIndex) -> None:
        self._hand.open_form()

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy rows; else do what the key does on the board."""
        if event.matches(QKeySequence.StandardKey.Copy):
            QGuiApplication.clipboard().setText(copied_text(self))
        elif not self._hand.key(event):
            super().keyPressEvent(event)

    @guarded()
    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        """Offer what can be done with a turn."""
        if self._hand.bout() is not None:
            open_menu(self, self._hand, event.globalPos())
