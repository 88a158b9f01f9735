"""A short ordered list inside a record (stages of a station, temperatures) with the form of the chosen one."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QSize, Qt, Slot
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemView,
    QListWidget,
    QListWidgetItem,
    QMenu,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.edits import Path
from kitplanner.plan.fields import FIELDS, kind_of
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import translate
from kitplanner.session.new_records import stage_word
from kitplanner.ui.widgets.button_row import ButtonRow
from kitplanner.ui.widgets.plain import plain_label
from kitplanner.ui.widgets.record_form import RecordForm
from kitplanner.ui.widgets.small_button import SmallButton

_ROWS_SHOWN = 5
_LEAST_ROW_PX = 24
_ID_ROLE = Qt.ItemDataRole.UserRole


class NestedList(QWidget):
    """Parts of a record in order: add (by kind), remove, move, and the form of the chosen part."""

    def __init__(
        self,
        key: str,
        kinds: tuple[str, ...],
        title: str,
        editing: Editing,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(parent)
        self._key = key
        self._kinds = kinds
        self._editing = editing
        self._path: Path = ()
        self._parts: tuple[Any, ...] = ()
        self._problems: Mapping[Path, str] = {}
        self._forms: dict[str, RecordForm] = {}
        self._title = plain_label(title, bold=True)
        self._list = QListWidget(self)
        self._buttons: dict[str, SmallButton] = {}
        self._build(title)
        self._list.currentRowChanged.connect(self._on_current_row_changed)
        editing.draft_changed.connect(self._on_draft_changed)

    def list(self) -> QListWidget:
        """The list of parts."""
        return self._list

    def button(self, name: str) -> SmallButton:
        """One of the buttons: add, remove, up, down."""
        return self._buttons[name]

    def form(self) -> RecordForm | None:
        """The form of the chosen part, None without one."""
        part = self._current()
        return None if part is None else self._forms.get(kind_of(part))

    def show_parts(self, owner_path: Path, parts: tuple[Any, ...], problems: Mapping[Path, str]) -> None:
        """Show the parts of a record; the chosen part stays chosen when it is still there."""
        current = self._current_id() if owner_path == self._path[:-1] else None
        self._path = (*owner_path, self._key)
        self._parts, self._problems = parts, problems
        self._list.blockSignals(True)
        self._list.clear()
        for number, part in enumerate(parts, start=1):
            item = QListWidgetItem(self._item_text(number, part))
            item.setData(_ID_ROLE, part.id)
            item.setSizeHint(QSize(0, self._row_height()))
            self._list.addItem(item)
        ids = [part.id for part in parts]
        self._list.setCurrentRow(ids.index(current) if current in ids else (0 if ids else -1))
        self._list.blockSignals(False)
        self._fit_height()
        self._show_form()

    def choose(self, part_id: str) -> bool:
        """Choose a part; False when it is not there."""
        row = next((i for i, part in enumerate(self._parts) if part.id == part_id), -1)
        if row >= 0:
            self._list.setCurrentRow(row)
        return row >= 0

    def _build(self, title: str) -> None:
        self._list.setAccessibleName(title)
        self._list.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._list.setTextElideMode(Qt.TextElideMode.ElideRight)
        self._list.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self._title.setBuddy(self._list)
        for name, text, slot in (
            ("add", self.tr("Add"), self._on_add),
            ("remove", self.tr("Remove"), self._on_remove),
            ("up", self.tr("Up"), self._on_up),
            ("down", self.tr("Down"), self._on_down),
        ):
            button = SmallButton(text, self)
            button.setAccessibleName(f"{text}: {title}")
            self._buttons[name] = button
            if name == "add" and len(self._kinds) > 1:
                button.setMenu(self._make_menu())
            else:
                button.clicked.connect(slot)
        remove = QAction(self.tr("Remove"), self._list)
        remove.setShortcut(QKeySequence(QKeySequence.StandardKey.Delete))
        remove.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        remove.triggered.connect(self._on_remove)
        self._list.addAction(remove)
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(10, 8, 10, 4)
        self._layout.setSpacing(4)
        for widget in (self._title, self._list):
            self._layout.addWidget(widget)
        self._layout.addWidget(ButtonRow(tuple(self._buttons.values()), self))

    def _make_menu(self) -> QMenu:
        menu = QMenu(self)
        for kind in self._kinds:
            menu.addAction(translate("Fields", stage_word(kind))).setData(kind)
        menu.triggered.connect(self._on_kind_chosen)
        return menu

    def _item_text(self, number: int, part: Any) -> str:
        kind = kind_of(part)
        word = translate("Fields", stage_word(kind))
        name = part.name or part.id
        text = f"{number}  {name}" if name == word or len(self._kinds) == 1 else f"{number}  {name} ({word})"
        path = (*self._path, part.id)
        wrong = any(one[: len(path)] == path for one in self._problems) or bool(self._editing.drafts.below(path))
        return f"{text} ⚠" if wrong else text

    def _fit_height(self) -> None:
        shown = min(max(len(self._parts), 2), _ROWS_SHOWN)
        self._list.setFixedHeight(self._row_height() * shown + 2 * self._list.frameWidth() + 4)

    def _row_height(self) -> int:
        return max(_LEAST_ROW_PX, self._list.fontMetrics().height() + 8)

    def _current(self) -> Any:
        row = self._list.currentRow()
        return self._parts[row] if 0 <= row < len(self._parts) else None

    def _current_id(self) -> str | None:
        item = self._list.currentItem()
        return None if item is None else str(item.data(_ID_ROLE))

    def _show_form(self) -> None:
        part = self._current()
        shown = "" if part is None else kind_of(part)
        for name in ("remove", "up", "down"):
            self._buttons[name].setEnabled(part is not None)
        if part is not None and shown not in self._forms:
            form = RecordForm(FIELDS[shown], self._editing, self)
            self._forms[shown] = form
            self._layout.addWidget(form)
        for kind, form in self._forms.items():
            form.setVisible(kind == shown)
        if part is not None:
            self._forms[shown].show_record((*self._path, part.id), part, self._problems)

    def _move(self, steps: int) -> None:
        part_id = self._current_id()
        if part_id is not None:
            self._editing.move((*self._path, part_id), steps)

    @Slot(int)
    def _on_current_row_changed(self, _row: int) -> None:
        self._show_form()

    @Slot(QAction)
    def _on_kind_chosen(self, action: QAction) -> None:
        self._add(str(action.data()))

    @Slot()
    def _on_add(self) -> None:
        self._add(self._kinds[0])

    def _add(self, kind: str) -> None:
        row = self._list.currentRow()
        added = self._editing.add_part(self._path, kind, row + 1 if row >= 0 else None)
        if added is not None and self.choose(added):
            form = self.form()
            if form is not None:
                form.focus_field("name")

    @Slot()
    def _on_remove(self) -> None:
        part_id = self._current_id()
        row = self._list.currentRow()
        if part_id is not None and self._editing.remove_part((*self._path, part_id)) is None:
            self._list.setCurrentRow(min(row, self._list.count() - 1))

    @Slot()
    def _on_up(self) -> None:
        self._move(-1)

    @Slot()
    def _on_down(self) -> None:
        self._move(1)

    @Slot(object)
    def _on_draft_changed(self, path: Path) -> None:
        if self._path and path[: len(self._path)] == self._path:
            for number, part in enumerate(self._parts, start=1):
                self._list.item(number - 1).setText(self._item_text(number, part))
