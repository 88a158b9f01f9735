"""One section of the plan: its cautions and problems, its table, and the details of the chosen record."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QByteArray, QItemSelectionModel, QModelIndex, Qt, Signal, Slot
from PySide6.QtGui import QAction, QKeySequence, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHeaderView,
    QScrollArea,
    QSplitter,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.cautions import ShownCaution
from kitplanner.plan.edits import Path
from kitplanner.plan.fields import FIELDS
from kitplanner.plan.records import Plan
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import translate
from kitplanner.session.new_records import singular
from kitplanner.ui.dialogs.ask import ask_how_many
from kitplanner.ui.guard import guarded
from kitplanner.ui.models.field_delegate import FieldDelegate
from kitplanner.ui.models.records_model import RecordsModel
from kitplanner.ui.models.sort_filter import SortFilter
from kitplanner.ui.panels.cell_questions import add_questions
from kitplanner.ui.panels.record_details import RecordDetails, make_details
from kitplanner.ui.panels.section_entry import SectionEntry
from kitplanner.ui.panels.sections import PLAN_SECTION, Section
from kitplanner.ui.widgets.button_row import ButtonRow
from kitplanner.ui.widgets.plain import colour_label, plain_label
from kitplanner.ui.widgets.small_button import SmallButton

_MEASURED_ROWS = 60
# Rows of the table: squeezed to the first, as many as there are records from the second to the third, and never more
# than the share of the height beyond the second. The form has the rest until the user moves the bar between them.
_LEAST_TABLE_ROWS, _FAIR_TABLE_ROWS, _MOST_TABLE_ROWS = 3, 6, 14
_FEW_TABLE_ROWS = 3
_TABLE_SHARE = 0.5
_MOST_COLUMN_CHARS = 34
_FRAME_PX = 8
_LEAST_FORM_LINES = 4


class SectionPanel(QWidget):
    """Table and form of one section.

    Signals
    -------
    record_chosen(section: str, record_id: str)
        The user chose another record in the table; empty id for none.
    split_moved(state: QByteArray)
        The user moved the bar between table and form.
    """

    record_chosen = Signal(str, str)
    split_moved = Signal(object)

    def __init__(self, section: Section, editing: Editing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.section = section
        self._editing = editing
        self._plan: Plan = editing.plan
        self._problems: Mapping[Path, str] = {}
        self._may_build = False
        self._cautions: tuple[ShownCaution, ...] = ()
        self._details: RecordDetails | None = None
        self._buttons: dict[str, SmallButton] = {}
        self._is_split_kept = False
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(4)
        self._scroll = QScrollArea(self)
        self._scroll.setWidgetResizable(True)
        self._scroll.setFrameShape(QScrollArea.Shape.NoFrame)
        self._scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self._scroll.setAccessibleName(self.tr("Details"))
        self._scroll.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAsNeeded)
        self.table: QTableView | None = None
        if section.key == PLAN_SECTION:
            self._layout.addWidget(self._scroll, 1)
        else:
            self._build_table()
        self.show_plan(editing.plan, {})

    @property
    def current_id(self) -> str:
        """Id of the chosen record, empty without one."""
        if self.table is None:
            return ""
        return self._view.id_at(self.table.currentIndex().row())

    @property
    def details(self) -> RecordDetails:
        """Details of the chosen record, made when first needed."""
        if self._details is None:
            self._details = make_details(self.section.kind, self._editing, self._scroll)
            self._scroll.setWidget(self._details)
        return self._details

    def button(self, name: str) -> SmallButton:
        """One of the buttons: add, several, duplicate, remove, up, down."""
        return self._buttons[name]

    def show_plan(self, plan: Plan, problems: Mapping[Path, str]) -> None:
        """Show the section of a plan with the problems of its fields."""
        before, self._plan = self._plan, plan
        same_problems = dict(problems) == dict(self._problems)
        self._problems = problems
        if self.table is None:
            self._show_details()
            return
        records = getattr(plan, self.section.key)
        self._model.set_records(records)
        self._model.set_problems({path: text for path, text in problems.items() if path[:1] == (self.section.key,)})
        if not self.current_id and records:
            self._select_row(0)
        if before is not plan or not same_problems:
            self._show_details()
        self._hint.setVisible(not records)
        self.entry.refresh()
        self._share_height()

    def show_cautions(self, cautions: tuple[ShownCaution, ...]) -> None:
        """Show the section's inline cautions at their fields."""
        self._cautions = cautions
        if self._details is not None:
            self._details.show_cautions(cautions)

    def open_details(self) -> None:
        """Build and show the form of the chosen record; the first picture of the window does not wait for it."""
        self._may_build = True
        self._show_details()

    def choose(self, record_id: str) -> bool:
        """Choose a record; False when it is not there."""
        if self.table is None or self._model.row_of(record_id) < 0:
            return False
        if self._view.row_of(record_id) < 0:
            self.entry.show_all()
        self._select_row(self._view.row_of(record_id))
        return True

    def focus_field(self, path: Path) -> bool:
        """Choose the record of a field and put the keyboard into the field."""
        if self.table is None:
            self.open_details()
            return self.details.focus_field(path)
        if len(path) < 2 or not self.choose(path[1]):
            return False
        self.open_details()
        if len(path) > 2 and self.details.focus_field(path[2:]):
            return True
        self.table.setFocus(Qt.FocusReason.OtherFocusReason)
        return True

    def focus_table(self) -> None:
        """Put the keyboard into the table, or into the form of a section without one."""
        if self.table is not None:
            self.table.setFocus(Qt.FocusReason.ShortcutFocusReason)
        else:
            self.open_details()
            self.details.form.focus_field(self.details.form.field_keys()[0])

    @Slot()
    def add_one(self) -> None:
        """Add a record and begin with its name."""
        if self.table is None:
            return
        self._chosen_after_adding(self._editing.add(self.section.key))

    @Slot()
    def remove_chosen(self) -> None:
        """Remove the selected records."""
        if self.table is None:
            return
        ids = self.entry.ids()
        row = self._view.row_of(ids[0]) if ids else -1
        if ids and self._editing.remove(self.section.key, ids) is None and self._view.rowCount():
            self._select_row(min(row, self._view.rowCount() - 1))

    def handle_rows(self, name: str) -> None:
        """Do one of the things with rows that the Edit menu offers, where this section has it."""
        if self.table is not None and self.entry.action(name).isVisible():
            self.entry.action(name).trigger()

    def _build_table(self) -> None:
        columns = tuple(spec for spec in FIELDS[self.section.kind] if spec.column)
        title = translate("Sections", self.section.title)
        self._model = RecordsModel((self.section.key,), columns, self._editing, self)
        self.table = QTableView(self)
        self._view = SortFilter(self._model, self.section.key, self._editing, self)
        self.table.setModel(self._view)
        self.table.setItemDelegate(FieldDelegate(self.table))
        self.table.setAccessibleName(title)
        self.table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.table.setAlternatingRowColors(True)
        self.table.setTabKeyNavigation(False)
        self.table.setShowGrid(False)
        self.table.setCornerButtonEnabled(False)
        self.table.verticalHeader().hide()
        header = self.table.horizontalHeader()
        header.setResizeContentsPrecision(_MEASURED_ROWS)
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        header.setStretchLastSection(True)
        header.setHighlightSections(False)
        self.table.selectionModel().currentRowChanged.connect(self._on_current_row_changed)
        self._model.dataChanged.connect(self._on_rows_changed)
        remove = QAction(self.tr("Remove"), self.table)
        remove.setShortcut(QKeySequence(QKeySequence.StandardKey.Delete))
        remove.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        remove.triggered.connect(self.remove_chosen)
        self.table.addAction(remove)
        add_questions(self.table, self._editing)
        self.entry = SectionEntry(self.section.key, self._editing, self.table, self._view, self)
        self.entry.added.connect(self._on_added)
        self.entry.order_changed.connect(self._show_details)
        self.table.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        self._hint = plain_label(translate("Sections", self.section.hint), wrap=True)
        self._hint.setContentsMargins(8, 4, 8, 4)
        top = QWidget(self)
        layout = QVBoxLayout(top)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        self._button_row = self._build_buttons()
        layout.addWidget(self._hint)
        layout.addWidget(self._button_row)
        layout.addWidget(self.entry)
        layout.addWidget(self.table, 1)
        self._splitter = QSplitter(Qt.Orientation.Vertical, self)
        self._splitter.setChildrenCollapsible(False)
        self._splitter.addWidget(top)
        self._splitter.addWidget(self._scroll)
        self._splitter.splitterMoved.connect(self._on_splitter_moved)
        self._layout.addWidget(self._splitter, 1)
        self._fit_rows()

    def _build_buttons(self) -> ButtonRow:
        word = translate("Fields", singular(self.section.key))
        for name, text, help_, slot in (
            ("add", self.tr("Add"), self.tr("Add: {what}"), self.add_one),
            ("several", self.tr("Several…"), self.tr("Add several: {what}"), self._on_several),
            ("duplicate", self.tr("Copy"), self.tr("Copy the chosen one: {what}"), self.duplicate_chosen),
            ("remove", self.tr("Remove"), self.tr("Remove the chosen ones: {what}"), self.remove_chosen),
            ("up", "↑", self.tr("Move up: {what}"), self._on_up),
            ("down", "↓", self.tr("Move down: {what}"), self._on_down),
        ):
            button = SmallButton(text, self)
            button.setAccessibleName(help_.format(what=word))
            button.setToolTip(help_.format(what=word))
            button.clicked.connect(slot)
            self._buttons[name] = button
        more = self._buttons["more"] = SmallButton(self.tr("More"), self)
        more.setAccessibleName(self.tr("More to do with rows: {what}").format(what=word))
        more.setMenu(self.entry.menu)
        return ButtonRow(tuple(self._buttons.values()), self)

    def _fit_rows(self) -> None:
        metrics = self.fontMetrics()
        self._scroll.setMinimumHeight(_LEAST_FORM_LINES * metrics.height() + 40)
        if self.table is not None:
            height = max(24, metrics.height() + 8)
            header = self.table.horizontalHeader()
            header.setMaximumSectionSize(_MOST_COLUMN_CHARS * metrics.averageCharWidth())
            self.table.verticalHeader().setDefaultSectionSize(height)
            self.table.setMinimumHeight(self._table_height(_LEAST_TABLE_ROWS))
            colour_label(self._hint, "muted")
            self._share_height()

    def _table_height(self, rows: int) -> int:
        """Height of the table with its heading, a scroll bar and some rows."""
        assert self.table is not None
        head, bar = self.table.horizontalHeader(), self.table.horizontalScrollBar()
        row = self.table.verticalHeader().defaultSectionSize()
        return head.sizeHint().height() + rows * row + bar.sizeHint().height() + _FRAME_PX

    def keep_split(self, state: QByteArray) -> None:
        """Take over where the user put the bar between table and form."""
        if self.table is not None and not state.isEmpty():
            self._is_split_kept = self._splitter.restoreState(state)

    def _share_height(self) -> None:
        """Give the table the rows it has, within a fair share, and the form the rest."""
        if self.table is None or self._is_split_kept:
            return
        whole = self._splitter.height()
        above = self._splitter.widget(0)
        layout = None if above is None else above.layout()
        others = 0 if layout is None else layout.minimumSize().height() - self.table.minimumHeight()
        count = self._model.rowCount()
        wanted = others + self._table_height(max(_FEW_TABLE_ROWS, min(count, _MOST_TABLE_ROWS)))
        fair = others + self._table_height(min(max(_FEW_TABLE_ROWS, count), _FAIR_TABLE_ROWS))
        top = min(wanted, max(fair, round(_TABLE_SHARE * whole)))
        self._splitter.setSizes([top, max(1, whole - top)])

    @Slot(int, int)
    def _on_splitter_moved(self, _at: int, _index: int) -> None:
        self._is_split_kept = True
        self.split_moved.emit(self._splitter.saveState())

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Share the new height."""
        super().resizeEvent(event)
        self._share_height()

    def _record(self) -> Any:
        if self.table is None:
            return self._plan
        current = self.current_id
        return next((record for record in self._model.records if record.id == current), None)

    def _show_details(self) -> bool:
        record = self._record()
        if self._details is None and not self._may_build:
            return False
        has_record = record is not None
        self._scroll.setVisible(has_record)
        if has_record:
            path = () if self.table is None else (self.section.key, record.id)
            self.details.show_record(path, record, self._problems)
            self.details.show_cautions(self._cautions)
        for name in ("duplicate", "remove", "up", "down"):
            if name in self._buttons:
                self._buttons[name].setEnabled(has_record and (self._view.is_plan or name not in ("up", "down")))
        return has_record

    def _chosen_after_adding(self, ids: tuple[str, ...]) -> None:
        if ids and self.choose(ids[0]):
            self.open_details()
            self.details.form.focus_field("name")
            editor = self.details.form.row("name").editor
            if hasattr(editor, "selectAll"):
                editor.selectAll()

    @Slot(QModelIndex, QModelIndex)
    def _on_current_row_changed(self, _current: QModelIndex, _previous: QModelIndex) -> None:
        self._show_details()
        if self.table is not None and self.table.hasFocus():
            self.record_chosen.emit(self.section.key, self.current_id)

    @Slot()
    def _on_rows_changed(self) -> None:
        # A value may have become longer; the header measures only what is on the screen.
        if self.table is not None:
            self.table.horizontalHeader().resizeSections(QHeaderView.ResizeMode.ResizeToContents)

    @Slot()
    def _on_several(self) -> None:
        word = translate("Fields", singular(self.section.key))
        count = ask_how_many(self, self.tr("Add several"), self.tr("How many ({what})?").format(what=word))
        if count:
            self._chosen_after_adding(self._editing.add(self.section.key, count))

    @Slot()
    def duplicate_chosen(self) -> None:
        """Add a copy of the chosen record behind it."""
        if self.current_id:
            self._chosen_after_adding(self._editing.duplicate(self.section.key, self.current_id))

    @Slot(object)
    def _on_added(self, ids: tuple[str, ...]) -> None:
        if ids and self.choose(ids[0]) and self.table is not None:
            self.table.setFocus(Qt.FocusReason.OtherFocusReason)

    @Slot()
    def _on_up(self) -> None:
        self._move(-1)

    @Slot()
    def _on_down(self) -> None:
        self._move(1)

    def _move(self, steps: int) -> None:
        chosen = self.current_id
        if chosen and self._editing.move((self.section.key, chosen), steps) is None:
            self._select_row(self._view.row_of(chosen))

    def _select_row(self, row: int) -> None:
        """Make a row the only selected one, whatever keys are held for the shortcut that led here."""
        if self.table is not None:
            flags = QItemSelectionModel.SelectionFlag.ClearAndSelect | QItemSelectionModel.SelectionFlag.Rows
            self.table.selectionModel().setCurrentIndex(self._view.index(row, 0), flags)

    def recolour(self) -> None:
        """Follow the theme and the text size."""
        self._fit_rows()
        if self.table is not None:
            self.table.viewport().update()
