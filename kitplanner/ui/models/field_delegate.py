"""Cell editors built from FIELDS, which keep every digit and every wrong letter that was typed."""

from __future__ import annotations

from PySide6.QtCore import QAbstractItemModel, QModelIndex, QPersistentModelIndex, Qt
from PySide6.QtWidgets import QStyledItemDelegate, QStyleOptionViewItem, QWidget

from kitplanner.session.field_text import default_text, label_of
from kitplanner.ui.guard import guarded
from kitplanner.ui.models.records_model import SPEC_ROLE, RecordsModel
from kitplanner.ui.models.sort_filter import SortFilter
from kitplanner.ui.widgets.editors import ChoiceEditor, LineEditor, NumberEditor, RefsEditor

Index = QModelIndex | QPersistentModelIndex


class FieldDelegate(QStyledItemDelegate):
    """Makes the editor of a cell from its field; what was typed goes to the model as text."""

    @guarded()
    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget | None:
        """Make the editor of a cell."""
        spec = index.data(SPEC_ROLE)
        if spec is None:
            return None
        editor: QWidget
        if spec.kind in ("choice", "ref", "flag"):
            editor = ChoiceEditor(spec, parent)
            editor.entered.connect(self._on_entered)
        elif spec.kind in ("number", "integer"):
            editor = NumberEditor(spec, parent)
        else:
            editor = LineEditor(spec, parent)
        editor.setAccessibleName(label_of(spec))
        editor.setAutoFillBackground(True)
        return editor

    @guarded()
    def setEditorData(self, editor: QWidget, index: Index) -> None:
        """Show the cell's exact value (or what was typed there before)."""
        spec, model = index.data(SPEC_ROLE), index.model()
        text = str(index.data(Qt.ItemDataRole.EditRole))
        names = model.names_for(spec) if isinstance(model, (RecordsModel, SortFilter)) else {}
        default = default_text(spec, names)
        if isinstance(editor, (ChoiceEditor, RefsEditor)):
            editor.show_text(text, default, names)
        elif isinstance(editor, LineEditor):
            editor.show_text(text, default)
            editor.selectAll()

    @guarded()
    def setModelData(self, editor: QWidget, model: QAbstractItemModel, index: Index) -> None:
        """Hand over what was typed."""
        if isinstance(editor, ChoiceEditor):
            model.setData(index, editor.currentData(), Qt.ItemDataRole.EditRole)
        elif isinstance(editor, LineEditor):
            model.setData(index, editor.text(), Qt.ItemDataRole.EditRole)

    @guarded()
    def updateEditorGeometry(self, editor: QWidget, option: QStyleOptionViewItem, index: Index) -> None:
        """Give the editor the room it needs, wider than a narrow column."""
        rect = option.rect
        rect.setWidth(max(rect.width(), min(editor.sizeHint().width(), 240)))
        editor.setGeometry(rect)

    def _on_entered(self, _text: str) -> None:
        editor = self.sender()
        if isinstance(editor, QWidget):
            self.commitData.emit(editor)
            self.closeEditor.emit(editor)
