"""A form for one record, built from its FieldSpecs: label, editor, unit, origin, and the problem beside it."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Any

from PySide6.QtCore import QEvent, QPoint, Qt, Signal, Slot
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QFormLayout, QHBoxLayout, QLabel, QLineEdit, QMenu, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution
from kitplanner.plan.edits import Path
from kitplanner.plan.fields import FieldSpec, is_shown
from kitplanner.session.editing import Editing
from kitplanner.session.field_text import (
    Names,
    default_text,
    editor_text,
    help_text,
    label_of,
    translate,
    unit_of,
)
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.caution_note import CautionNote
from kitplanner.ui.widgets.editors import ChoiceEditor, FlagEditor, RefsEditor, make_editor
from kitplanner.ui.widgets.plain import as_tool_tip, colour_label, plain_label

# Fields an inline caution speaks of; the first that a form has is where it stands.
_FIELD_OF_CAUTION: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "C2": ("chemistry",),
        "C5": ("cap_min",),
        "C7": ("air_degc",),
        "C8": ("described_by",),
        "C9": ("air_degc", "chemistry"),
        "C11": ("guarded",),
        "C12": ("outlets",),
        "C13": ("evening",),
    }
)


_SHORT_UNIT_CHARS = 4
# The editor takes the width up to its own limit before the empty rest of the line does.
_MUCH = 1000


class FieldRow(QWidget):
    """Editor of one field with unit, origin and problem.

    Signals
    -------
    entered(key: str, text: str)
        The user finished an entry.
    explain_requested(key: str, what: str)
        The user asks where the value comes from ("trace") or what the field means ("meaning").
    """

    entered = Signal(str, str)
    explain_requested = Signal(str, str)

    def __init__(self, spec: FieldSpec, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.spec = spec
        self.label = plain_label(label_of(spec), wrap=True)
        self.label.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Minimum)
        self.editor = make_editor(spec, self)
        self.editor.setAccessibleName(label_of(spec))
        self.label.setBuddy(self.editor)
        self._unit = plain_label(unit_of(spec))
        self._origin = plain_label()
        self._problem = plain_label(wrap=True)
        self._problem.hide()
        self._build()
        self.editor.entered.connect(self._on_entered)

    def show_value(self, text: str, default: str, names: Names, origin: str, problem: str) -> None:
        """Show text (a value or a draft), what an empty field means, where the value comes from, what is wrong."""
        if isinstance(self.editor, (ChoiceEditor, RefsEditor)):
            self.editor.show_text(text, default, names)
        else:
            self.editor.show_text(text, default)
        self._origin.setText(origin)
        self._problem.setText(f"⚠ {problem}" if problem else "")
        self._problem.setVisible(bool(problem))
        unit = unit_of(self.spec)
        value = f"{text} {unit}".strip() if text else self.tr("default {text}").format(text=default) if default else ""
        described = ". ".join(part for part in (problem, value, origin) if part)
        self.editor.setAccessibleDescription(described)

    @property
    def problem(self) -> str:
        """The problem shown beside the field, empty when there is none."""
        return self._problem.text().removeprefix("⚠ ")

    def unit_width(self) -> int:
        """Width the unit needs."""
        return self._unit.fontMetrics().horizontalAdvance(self._unit.text())

    def set_unit_width(self, width: int) -> None:
        """Give the unit the room that all fields of a form share, so that their editors end at one line."""
        self._unit.setMinimumWidth(width if self._unit.text() else 0)
        self.editor.limit_width()

    def recolour(self) -> None:
        """Take over the theme's colours."""
        colour_label(self._unit, "muted")
        colour_label(self._origin, "muted")
        colour_label(self._problem, "warning")

    def _build(self) -> None:
        for widget in (self, self.label):
            widget.setToolTip(as_tool_tip(help_text(self.spec)))
        line = QHBoxLayout()
        line.setContentsMargins(0, 0, 0, 0)
        line.addWidget(self.editor, 0 if isinstance(self.editor, FlagEditor) else _MUCH)
        line.setSpacing(5)
        line.addWidget(self._unit)
        line.addWidget(self._origin)
        line.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(1)
        layout.addLayout(line)
        layout.addWidget(self._problem)
        self.setFocusProxy(self.editor)
        asked = self.editor.line() if isinstance(self.editor, RefsEditor) else self.editor
        for part in (asked, self.label):
            part.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
            part.customContextMenuRequested.connect(self._on_menu)
        self.recolour()

    @Slot(QPoint)
    def _on_menu(self, at: QPoint) -> None:
        asked = self.sender()
        assert isinstance(asked, QWidget)
        menu = asked.createStandardContextMenu() if isinstance(asked, QLineEdit) else QMenu(asked)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        if menu.actions():
            menu.addSeparator()
        for what, text in explanation_texts(self):
            menu.addAction(text).setData(what)
        menu.triggered.connect(self._on_triggered)
        menu.popup(asked.mapToGlobal(at))

    @Slot(QAction)
    def _on_triggered(self, action: QAction) -> None:
        if action.data() in EXPLANATIONS:
            self.explain_requested.emit(self.spec.key, action.data())

    @Slot(str)
    def _on_entered(self, text: str) -> None:
        self.entered.emit(self.spec.key, text)


EXPLANATIONS = ("trace", "meaning")


def explanation_texts(owner: QWidget) -> tuple[tuple[str, str], ...]:
    """Return the questions about a field with their texts."""
    texts = (owner.tr("Where does this come from?"), owner.tr("What does this mean?"))
    return tuple(zip(EXPLANATIONS, texts, strict=True))


class RecordForm(QWidget):
    """All fields of one record, in groups; only those that mean something for it are shown."""

    def __init__(self, specs: tuple[FieldSpec, ...], editing: Editing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._editing = editing
        self._path: Path = ()
        self._record: Any = None
        self._problems: Mapping[Path, str] = {}
        self._rows = {spec.key: FieldRow(spec, self) for spec in specs}
        self._headings: dict[str, QLabel] = {}
        self._cautions: tuple[ShownCaution, ...] = ()
        self._notes: list[CautionNote] = []
        self._layout = QFormLayout(self)
        self._build()
        editing.draft_changed.connect(self._on_draft_changed)

    @property
    def path(self) -> Path:
        """Path of the record shown."""
        return self._path

    def row(self, key: str) -> FieldRow:
        """The row of a field."""
        return self._rows[key]

    def field_keys(self) -> tuple[str, ...]:
        """Keys of all fields, shown or not."""
        return tuple(self._rows)

    def show_record(self, path: Path, record: Any, problems: Mapping[Path, str]) -> None:
        """Show a record; a field being typed into keeps its text unless its value changed."""
        self._path, self._record, self._problems = path, record, problems
        for key in self._rows:
            self._show_field(key)
        self._show_groups()

    def show_cautions(self, cautions: tuple[ShownCaution, ...]) -> None:
        """Put inline cautions right behind the field they speak of."""
        if cautions == self._cautions:
            return
        self._cautions = cautions
        for note in self._notes:
            self._layout.removeRow(note)
        self._notes = []
        for shown in cautions:
            key = next((key for key in _FIELD_OF_CAUTION.get(shown.caution.id, ()) if key in self._rows), None)
            if key is None:
                continue
            hazard, words = translate("Cautions", shown.caution.hazard), translate("Cautions", shown.text)
            note = CautionNote(shown.caution.id, f"{hazard}. {words}", gate=False)
            self._layout.insertRow(_row_of(self._layout, self._rows[key]) + 1, note)
            self._notes.append(note)

    def notes(self) -> tuple[CautionNote, ...]:
        """The inline cautions shown."""
        return tuple(self._notes)

    def focus_field(self, key: str) -> bool:
        """Put the keyboard into a field; False when it is not shown."""
        row = self._rows.get(key)
        if row is None or row.isHidden():
            return False
        row.editor.setFocus(Qt.FocusReason.OtherFocusReason)
        return True

    def _build(self) -> None:
        self._layout.setContentsMargins(10, 6, 10, 10)
        self._layout.setHorizontalSpacing(10)
        self._layout.setVerticalSpacing(4)
        self._layout.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        self._layout.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self._layout.setLabelAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        for row in self._rows.values():
            heading = row.spec.heading
            if heading and heading not in self._headings:
                label = plain_label(translate("Fields", heading), bold=True)
                label.setContentsMargins(0, 8, 0, 0)
                self._headings[heading] = label
                self._layout.addRow(label)
            self._layout.addRow(row.label, row)
            row.entered.connect(self._on_entered)
            row.explain_requested.connect(self._on_explain)
        self._align_units()

    def _align_units(self) -> None:
        # A rare long unit takes its room from its own editor, not from all of them.
        most = _SHORT_UNIT_CHARS * self.fontMetrics().averageCharWidth()
        width = max((row.unit_width() for row in self._rows.values() if row.unit_width() <= most), default=0)
        for row in self._rows.values():
            row.set_unit_width(width)

    def _show_field(self, key: str) -> None:
        row = self._rows[key]
        spec, path = row.spec, (*self._path, key)
        names = self._editing.names(spec.refs_to) if spec.refs_to else {}
        draft = self._editing.drafts.get(path)
        text = editor_text(spec, getattr(self._record, key), names) if draft is None else draft.text
        problem = self._problems.get(path, "") if draft is None else draft.problem
        origin = self._editing.origin_of(spec, self._record)
        row.show_value(text, default_text(spec, names), names, origin, problem)

    def _show_groups(self) -> None:
        shown = {key: is_shown(row.spec, self._record) for key, row in self._rows.items()}
        for key, row in self._rows.items():
            self._layout.setRowVisible(row, shown[key])
        for heading, label in self._headings.items():
            visible = any(shown[key] for key, row in self._rows.items() if row.spec.heading == heading)
            self._layout.setRowVisible(label, visible)

    @Slot(str, str)
    def _on_entered(self, key: str, text: str) -> None:
        self._editing.enter((*self._path, key), self._rows[key].spec, text)

    @Slot(str, str)
    def _on_explain(self, key: str, what: str) -> None:
        self._editing.explain_requested.emit((*self._path, key), what)

    @Slot(object)
    def _on_draft_changed(self, path: Path) -> None:
        if self._record is not None and path[:-1] == self._path and path[-1] in self._rows:
            self._show_field(path[-1])

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow the theme and the text size."""
        super().changeEvent(event)
        if event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange) and hasattr(self, "_headings"):
            for row in self._rows.values():
                row.recolour()
            self._align_units()


def _row_of(layout: QFormLayout, widget: QWidget) -> int:
    """Return the row of a form in which a widget stands."""
    position: Any = layout.getWidgetPosition(widget)
    return int(position[0])
