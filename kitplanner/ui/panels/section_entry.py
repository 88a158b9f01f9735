"""Entry of many rows in a section's table: paste, copy, more like one, one field of all, kinds, order, filter."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtGui import QAction, QGuiApplication, QKeySequence, QShortcut
from PySide6.QtWidgets import QAbstractItemView, QHBoxLayout, QLineEdit, QMenu, QTableView, QWidget

from kitplanner.plan.catalogue_kinds import CATALOGUE_SECTIONS
from kitplanner.plan.edits import Edit
from kitplanner.plan.edits_many import sort_section
from kitplanner.plan.exchange import EXCHANGED, ExchangeError
from kitplanner.session.clipboard import put_rows, rows_on
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs import ask
from kitplanner.ui.models.sort_filter import SortFilter
from kitplanner.ui.panels.sections import section_of
from kitplanner.ui.widgets.plain import colour_label, plain_label

# A section this long shows its filter; a shorter one when asked for.
_MANY_ROWS = 30
_NO_COLUMN = -1
# What the Edit menu offers of this.
ROW_ACTIONS = ("paste", "copy", "like", "kinds", "set", "sort_plan", "filter")
_Key = QKeySequence.StandardKey


class SectionEntry(QWidget):
    """The line above a table with filter and count, and the actions that handle many rows.

    Signals
    -------
    added(ids: tuple[str, ...])
        Records were added; the first is to be shown.
    order_changed()
        Rows are shown in another order, or others are shown.
    """

    added = Signal(object)
    order_changed = Signal()

    def __init__(self, section: str, editing: Editing, table: QTableView, view: SortFilter, parent: QWidget) -> None:
        super().__init__(parent)
        self._section, self._editing, self._table, self._view = section, editing, table, view
        self._actions: dict[str, QAction] = {}
        self._is_asked_for = False
        self.menu = QMenu(self)
        self.filter = QLineEdit(self)
        self.filter.setClearButtonEnabled(True)
        self.filter.setMinimumHeight(24)
        self.filter.setPlaceholderText(self.tr("text in any column"))
        title = translate("Sections", section_of(section).title)
        self.filter.setAccessibleName(self.tr("Filter: {section}").format(section=title))
        self._label = plain_label(self.tr("Filter"))
        self._label.setBuddy(self.filter)
        self.shown = plain_label()
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self._label)
        layout.addWidget(self.filter, 1)
        layout.addWidget(self.shown)
        self._build_actions()
        self._connect()
        self._sort_by_header()
        self.hide()

    def action(self, name: str) -> QAction:
        """One of the actions: kinds, like, set, copy, copy_all, paste, by_column, plan_order, sort_plan, filter."""
        return self._actions[name]

    def ids(self) -> tuple[str, ...]:
        """Ids of the selected records, in the order shown."""
        rows = sorted({index.row() for index in self._table.selectionModel().selectedIndexes()})
        return tuple(self._view.id_at(row) for row in rows)

    def refresh(self) -> None:
        """Show how many rows are shown and which actions have something to work on."""
        shown, every = self._view.rowCount(), self._view.sourceModel().rowCount()
        self.setVisible(every >= _MANY_ROWS or bool(self._view.filter_text) or self._is_asked_for)
        self.shown.setText(self.tr("{shown} of {all} shown").format(shown=shown, all=every))
        colour_label(self.shown, "muted" if shown == every else "ink")
        for name in ("like", "set", "copy", "copy_all"):
            self._actions[name].setEnabled(shown > 0)
        self._actions["by_column"].setEnabled(shown > 0)
        for name in ("plan_order", "sort_plan"):
            self._actions[name].setEnabled(self._view.sorted_by is not None)

    def show_all(self) -> None:
        """Take the filter away, so that every record can be reached."""
        self.filter.clear()

    @Slot()
    def ask_kinds(self) -> None:
        """Offer the list of generic kinds."""
        if self._section in CATALOGUE_SECTIONS:
            from kitplanner.ui.dialogs.catalogue_dialog import CatalogueDialog  # the first picture needs no dialog

            dialog = CatalogueDialog(self._section, self.window())  # type: ignore[arg-type]
            dialog.chosen.connect(self._on_kind)
            dialog.open()

    @Slot()
    def ask_like(self) -> None:
        """Ask how many more like the chosen record."""
        record_id = self._view.id_at(self._table.currentIndex().row())
        if record_id:
            from kitplanner.ui.dialogs.add_many_dialog import AddManyDialog  # as above

            dialog = AddManyDialog(self._editing.plan, self._section, record_id, self.window())
            dialog.chosen.connect(self._on_like)
            dialog.open()

    @Slot()
    def ask_set(self) -> None:
        """Ask for one field of all selected rows."""
        ids = self.ids()
        if ids:
            from kitplanner.ui.dialogs.set_many_dialog import SetManyDialog  # as above

            column = self._table.currentIndex().column()
            key = self._view.spec_at(column).key if column >= 0 else ""
            dialog = SetManyDialog(self._editing, self._section, ids, key, self.window())
            dialog.chosen.connect(self._on_set)
            dialog.open()

    @Slot()
    def copy_rows(self) -> None:
        """Put the selected rows on the clipboard, with the columns shown."""
        self._copy(tuple(self._view.spec_at(column).key for column in range(self._view.columnCount())))

    @Slot()
    def copy_whole(self) -> None:
        """Put the selected rows on the clipboard with every field they have."""
        self._copy(())

    @Slot()
    def ask_paste(self) -> None:
        """Show what the rows on the clipboard would do."""
        text = rows_on(QGuiApplication.clipboard())
        if not text.strip():
            ask.tell(self.window(), self.tr("Nothing to paste: no rows of text were copied. Copy cells and try again."))
            return
        from kitplanner.ui.dialogs.paste_dialog import PasteDialog  # as above

        dialog = PasteDialog(self._editing.plan, self._section, text, self.ids(), self.window())
        dialog.taken.connect(self._on_pasted)
        dialog.open()

    @Slot()
    def focus_filter(self) -> None:
        """Put the keyboard into the filter."""
        self._is_asked_for = True
        self.refresh()
        self.filter.setFocus(Qt.FocusReason.ShortcutFocusReason)
        self.filter.selectAll()

    @Slot()
    def leave_filter(self) -> None:
        """Show all rows again and go back to the table."""
        self._is_asked_for = False
        self.filter.clear()
        self._focus_table()
        self.refresh()

    @Slot()
    def sort_plan(self) -> None:
        """Put the records of the plan into the order shown, as one step."""
        by = self._view.sorted_by
        if by is None:
            return
        words = self.tr("Sort: {section}").format(section=translate("Sections", section_of(self._section).title))
        if self._editing.carry_out(sort_section(self._section, by[0], descending=by[1]), words) is None:
            self.show_plan_order()

    @Slot()
    def show_plan_order(self) -> None:
        """Show the rows in the plan's own order again."""
        self._table.horizontalHeader().setSortIndicator(_NO_COLUMN, Qt.SortOrder.AscendingOrder)

    @Slot()
    def sort_by_column(self) -> None:
        """Sort by the column with the keyboard in it; a second time the other way round."""
        column = max(0, self._table.currentIndex().column())
        falls = self._view.sorted_by == (self._view.spec_at(column).key, False)
        order = Qt.SortOrder.DescendingOrder if falls else Qt.SortOrder.AscendingOrder
        self._table.horizontalHeader().setSortIndicator(column, order)

    def _build_actions(self) -> None:
        lines = (
            ("kinds", self.tr("Add from the list of &kinds…"), self.ask_kinds, None),
            ("like", self.tr("Add several &like this…"), self.ask_like, None),
            ("set", self.tr("Set one &field of the chosen rows…"), self.ask_set, None),
            ("", "", None, None),
            ("copy", self.tr("&Copy rows"), self.copy_rows, _Key.Copy),
            ("copy_all", self.tr("Copy rows with &every field"), self.copy_whole, None),
            ("paste", self.tr("&Paste rows…"), self.ask_paste, _Key.Paste),
            ("", "", None, None),
            ("by_column", self.tr("Show &sorted by this column"), self.sort_by_column, None),
            ("plan_order", self.tr("Show in the plan's &order"), self.show_plan_order, None),
            ("sort_plan", self.tr("Sort the plan like &this"), self.sort_plan, None),
            ("filter", self.tr("F&ilter"), self.focus_filter, _Key.Find),
        )
        for name, text, slot, keys in lines:
            if slot is None:
                self.menu.addSeparator()
                continue
            action = QAction(text, self)
            action.triggered.connect(slot)
            if keys is not None:
                action.setShortcuts(keys)
                action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
            self._actions[name] = action
            self.menu.addAction(action)
            self._table.addAction(action)
        self._actions["kinds"].setVisible(self._section in CATALOGUE_SECTIONS)
        for name in ("copy", "copy_all", "paste"):
            self._actions[name].setVisible(self._section in EXCHANGED)

    def _connect(self) -> None:
        self.filter.textChanged.connect(self._on_filter)
        self.filter.returnPressed.connect(self._focus_table)
        leave = QShortcut(QKeySequence(Qt.Key.Key_Escape), self.filter)
        leave.setContext(Qt.ShortcutContext.WidgetShortcut)
        leave.activated.connect(self.leave_filter)
        self._view.order_changed.connect(self._on_order)

    def _sort_by_header(self) -> None:
        header = self._table.horizontalHeader()
        header.setSortIndicatorClearable(True)
        header.setSortIndicator(_NO_COLUMN, Qt.SortOrder.AscendingOrder)
        self._table.setSortingEnabled(True)

    def _copy(self, keys: tuple[str, ...]) -> None:
        ids = self.ids()
        if not ids:
            return
        try:
            sheet = put_rows(QGuiApplication.clipboard(), self._editing.plan, self._section, ids, keys)
        except ExchangeError as error:
            ask.tell(self.window(), str(error))
            return
        if sheet.notes:
            ask.tell(self.window(), " ".join(sheet.notes))

    @Slot(str)
    def _on_filter(self, text: str) -> None:
        chosen = self._view.id_at(self._table.currentIndex().row())
        self._view.set_filter(text)
        self.refresh()
        row = self._view.row_of(chosen)
        if row >= 0:
            self._table.scrollTo(self._view.index(row, 0), QAbstractItemView.ScrollHint.EnsureVisible)
        self.order_changed.emit()

    @Slot()
    def _focus_table(self) -> None:
        self._table.setFocus(Qt.FocusReason.OtherFocusReason)

    @Slot()
    def _on_order(self) -> None:
        self.refresh()
        self.order_changed.emit()

    @Slot(object, str)
    def _on_kind(self, edit: Edit, name: str) -> None:
        self._add(edit, self.tr("Add {record}").format(record=name))

    @Slot(object, int)
    def _on_like(self, edit: Edit, count: int) -> None:
        name = self._editing.name_of((self._section, self._view.id_at(self._table.currentIndex().row())))
        self._add(edit, self.tr("Add {count} like {record}").format(count=count, record=name))

    @Slot(object, str, int)
    def _on_set(self, edit: Edit, label: str, count: int) -> None:
        self._editing.carry_out(edit, self.tr("Set {field} of {count} rows").format(field=label, count=count))

    @Slot(object, int, str)
    def _on_pasted(self, edit: Edit, count: int, _section: str) -> None:
        words = self.tr("Paste 1 row") if count == 1 else self.tr("Paste {count} rows").format(count=count)
        self._add(edit, words)

    def _add(self, edit: Edit, text: str) -> None:
        before = {record.id for record in getattr(self._editing.plan, self._section)}
        if self._editing.carry_out(edit, text) is None:
            after = getattr(self._editing.plan, self._section)
            self.added.emit(tuple(record.id for record in after if record.id not in before))
