"""One field of all chosen rows, set at once; what was typed stays until it can be taken."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import (
    QApplication,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QPushButton,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.edits import Edit, EditError, chain
from kitplanner.plan.edits_many import set_many
from kitplanner.plan.fields import FIELDS, SECTION_KINDS, FieldSpec, is_shown
from kitplanner.session.editing import Editing, edit_of_entry
from kitplanner.session.field_parsing import FieldTextError, parse_value
from kitplanner.session.field_text import default_text, editor_text, help_text, label_of, unit_of
from kitplanner.ui.widgets.editors import ChoiceEditor, FieldEditor, FlagEditor, RefsEditor, make_editor
from kitplanner.ui.widgets.plain import colour_label, plain_label

_LEAST_CHARS = 64


class SetManyDialog(QDialog):
    """Asks for a field and its value.

    Signals
    -------
    chosen(edit: Edit, label: str, count: int)
        The user sets a field: one edit, the field's label, how many records.
    """

    chosen = Signal(object, str, int)

    def __init__(
        self, editing: Editing, section: str, ids: tuple[str, ...], key: str = "", parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Set one field of the chosen rows"))
        self._editing, self._section, self._ids = editing, section, ids
        # A name that several share says nothing; everything else can be the same.
        self._specs = tuple(spec for spec in FIELDS[SECTION_KINDS[section]] if spec.key != "name")
        chosen = set(ids)
        self._records = tuple(record for record in getattr(editing.plan, section) if record.id in chosen)
        self._editors: dict[str, FieldEditor] = {}
        self._build()
        self.field.currentIndexChanged.connect(self._show_field)
        place = next((number for number, spec in enumerate(self._specs) if spec.key == key), 0)
        self.field.setCurrentIndex(place)
        self._show_field()

    @property
    def spec(self) -> FieldSpec:
        """The field to set."""
        return self._specs[self.field.currentIndex()]

    @property
    def editor(self) -> FieldEditor:
        """Editor of the field to set."""
        return self._editors[self.spec.key]

    def _build(self) -> None:
        self.field = QComboBox(self)
        for spec in self._specs:
            self.field.addItem(label_of(spec), spec.key)
        self._stack = QStackedWidget(self)
        self._unit = plain_label()
        self.remark = plain_label(wrap=True)
        self.problem = plain_label(wrap=True)
        colour_label(self.problem, "warning")
        colour_label(self.remark, "muted")
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.set_button = QPushButton(self.tr("&Set {count} rows").format(count=len(self._records)), self)
        self.set_button.setDefault(True)
        buttons.addButton(self.set_button, QDialogButtonBox.ButtonRole.AcceptRole)
        form = QFormLayout()
        form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        form.addRow(self.tr("&Field"), self.field)
        form.addRow(self.tr("Value"), self._stack)
        form.addRow("", self._unit)
        layout = QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(self.remark)
        layout.addWidget(self.problem)
        layout.addStretch(1)
        layout.addWidget(buttons)
        buttons.accepted.connect(self._on_set)
        buttons.rejected.connect(self.reject)
        self.setMinimumWidth(_LEAST_CHARS * self.fontMetrics().averageCharWidth())

    @Slot()
    def _show_field(self) -> None:
        spec = self.spec
        if spec.key not in self._editors:
            self._editors[spec.key] = self._make_editor(spec)
        self._stack.setCurrentWidget(self.editor)
        unit = unit_of(spec)
        self._unit.setText(self.tr("in {unit}; other units are read too").format(unit=unit) if unit else "")
        self.problem.setText("")
        unused = sum(not is_shown(spec, record) for record in self._records)
        lines = [help_text(spec).splitlines()[0]]
        if unused:
            lines.append(
                self.tr("{count} of the {all} rows do not use this field as they are described now.").format(
                    count=unused, all=len(self._records)
                )
            )
        self.remark.setText("\n".join(lines))

    def _make_editor(self, spec: FieldSpec) -> FieldEditor:
        editor = make_editor(spec, self._stack)
        editor.setAccessibleName(label_of(spec))
        names = self._editing.names(spec.refs_to) if spec.refs_to else {}
        values = {repr(getattr(record, spec.key)) for record in self._records}
        # All rows alike: that value; else nothing, so that no row's own value is put over the others unseen.
        same = getattr(self._records[0], spec.key) if len(values) == 1 else None
        text = editor_text(spec, same, names)
        if isinstance(editor, (ChoiceEditor, RefsEditor)):
            editor.show_text(text, default_text(spec, names), names)
        else:
            editor.show_text(text, default_text(spec, names))
        self._stack.addWidget(editor)
        return editor

    def _typed(self) -> str:
        editor = self.editor
        if isinstance(editor, ChoiceEditor):
            return str(editor.currentData() or "")
        if isinstance(editor, FlagEditor):
            return "yes" if editor.isChecked() else "no"
        return editor.line().text() if isinstance(editor, RefsEditor) else editor.text()

    @Slot()
    def _on_set(self) -> None:
        spec = self.spec
        try:
            value = parse_value(spec, self._typed(), self._editing.names(spec.refs_to) if spec.refs_to else {})
            edit = _edit_of_all(self._section, self._ids, spec.key, value)
            edit(self._editing.plan)
        except (FieldTextError, EditError) as error:
            self.problem.setText(f"⚠ {error}")
            QApplication.beep()
            self.editor.setFocus(Qt.FocusReason.OtherFocusReason)
            return
        self.chosen.emit(edit, label_of(spec), len(self._records))
        self.accept()


def _edit_of_all(section: str, ids: tuple[str, ...], key: str, value: Any) -> Edit:
    """Return the edit of every row; a device's use and a station's way of description keep their rules."""
    has_rules = (section == "devices" and key.startswith("use_")) or (section, key) == ("stations", "described_by")
    if has_rules:
        return chain(*(edit_of_entry((section, one, key), value) for one in ids))
    return set_many(section, ids, key, value)
