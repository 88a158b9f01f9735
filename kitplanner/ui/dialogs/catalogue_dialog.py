"""The list of generic kinds: each value with its mark, spread and source, and how many to add."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt, Signal, Slot
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QHBoxLayout,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QPushButton,
    QSpinBox,
    QTreeWidget,
    QTreeWidgetItem,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.catalogue_kinds import CatalogueKind, CatalogueSection, add_kind, kinds, record_of
from kitplanner.plan.edits_start import MOST_UNITS
from kitplanner.plan.fields import FIELDS, SECTION_KINDS, FieldSpec, is_shown
from kitplanner.session.field_text import label_of, translate, unit_of, value_text
from kitplanner.ui.dialogs.dialog_size import fair_size
from kitplanner.ui.widgets.plain import as_tool_tip, plain_label

_KEY = Qt.ItemDataRole.UserRole
_LEAST_PX = 24
_SIZE_CHARS, _SIZE_LINES = 136, 30


class CatalogueDialog(QDialog):
    """Picks a kind.

    Signals
    -------
    chosen(edit: Edit, name: str)
        The user adds a kind: the edit and its name.
    """

    chosen = Signal(object, str)

    def __init__(self, section: CatalogueSection, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Add from the list of kinds"))
        self._section = section
        self._kinds = {kind.key: kind for kind in kinds(section)}
        self._build()
        self.search.textChanged.connect(self._on_find)
        self.list.currentItemChanged.connect(self._show_kind)
        self.list.itemActivated.connect(self._on_add)
        self.values.currentItemChanged.connect(self._show_source)
        self.list.setCurrentRow(0)
        self.list.setFocus()

    @property
    def kind(self) -> CatalogueKind | None:
        """The kind chosen; None while the search finds none."""
        item = self.list.currentItem()
        return None if item is None or item.isHidden() else self._kinds[item.data(_KEY)]

    def choose(self, key: str) -> None:
        """Choose a kind by its key."""
        for row in range(self.list.count()):
            if self.list.item(row).data(_KEY) == key:
                self.list.setCurrentRow(row)

    def _build(self) -> None:
        self.search = QLineEdit(self)
        self.search.setClearButtonEnabled(True)
        self.search.setAccessibleName(self.tr("Find a kind"))
        self.list = QListWidget(self)
        self.list.setAccessibleName(self.tr("Kinds"))
        for kind in self._kinds.values():
            item = QListWidgetItem(translate("Catalogue", kind.name))
            item.setData(_KEY, kind.key)
            item.setSizeHint(self._room_for(item.text()))
            self.list.addItem(item)
        self.help = plain_label(wrap=True)
        self.values = QTreeWidget(self)
        self.values.setAccessibleName(self.tr("Values of the kind"))
        self.values.setRootIsDecorated(False)
        self.values.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.values.setHeaderLabels(
            [self.tr("Field"), self.tr("Value"), self.tr("Mark"), self.tr("Spread"), self.tr("Source")]
        )
        self.values.setWordWrap(True)
        self.source = plain_label(wrap=True)
        self.count = QSpinBox(self)
        self.count.setRange(1, MOST_UNITS)
        self.count.setMinimumHeight(24)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.add = QPushButton(self.tr("&Add"), self)
        self.add.setDefault(True)
        buttons.addButton(self.add, QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.accepted.connect(self._on_add)
        buttons.rejected.connect(self.reject)
        self._lay_out(buttons)

    def _room_for(self, text: str) -> QSize:
        metrics = self.fontMetrics()
        width = metrics.horizontalAdvance(text) + 2 * metrics.averageCharWidth()
        return QSize(width, max(_LEAST_PX, metrics.height() + 6))

    def _lay_out(self, buttons: QDialogButtonBox) -> None:
        left = QVBoxLayout()
        found = QFormLayout()
        found.addRow(self.tr("&Find"), self.search)
        left.addLayout(found)
        left.addWidget(self.list, 1)
        right = QVBoxLayout()
        right.addWidget(self.help)
        right.addWidget(self.values, 1)
        right.addWidget(self.source)
        count = QFormLayout()
        count.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.FieldsStayAtSizeHint)
        count.addRow(self.tr("&How many"), self.count)
        right.addLayout(count)
        middle = QHBoxLayout()
        middle.addLayout(left, 3)
        middle.addLayout(right, 7)
        layout = QVBoxLayout(self)
        layout.addLayout(middle, 1)
        layout.addWidget(buttons)
        self.resize(fair_size(self, _SIZE_CHARS, _SIZE_LINES))

    @Slot(str)
    def _on_find(self, text: str) -> None:
        needle = text.strip().casefold()
        first = -1
        for row in range(self.list.count()):
            kind = self._kinds[self.list.item(row).data(_KEY)]
            found = needle in f"{translate('Catalogue', kind.name)} {translate('Catalogue', kind.help)}".casefold()
            self.list.item(row).setHidden(not found)
            first = row if found and first < 0 else first
        self.list.setCurrentRow(first)
        self._show_kind()

    @Slot()
    def _show_kind(self) -> None:
        kind = self.kind
        self.values.clear()
        self.add.setEnabled(kind is not None)
        if kind is None:
            self.help.setText(self.tr("No kind has this in its name or description."))
            return
        self.help.setText(translate("Catalogue", kind.help))
        record = record_of(kind.key, "x")
        for spec in FIELDS[SECTION_KINDS[self._section]]:
            if spec.key in kind.values and is_shown(spec, record):
                line = _line(spec, getattr(record, spec.key), kind)
                line.setSizeHint(0, self._room_for(line.text(0)))
                self.values.addTopLevelItem(line)
        for column in range(4):
            self.values.resizeColumnToContents(column)
        first = next((line for line in self._lines() if line.text(4)), None)
        if first is not None:
            self.values.setCurrentItem(first)
        self._show_source()

    def _lines(self) -> list[QTreeWidgetItem]:
        lines = (self.values.topLevelItem(row) for row in range(self.values.topLevelItemCount()))
        return [line for line in lines if line is not None]

    @Slot()
    def _show_source(self) -> None:
        """Show the whole source of the chosen value; in the table it may be cut."""
        item = self.values.currentItem()
        has_source = item is not None and bool(item.text(4))
        words = self.tr("{field}: {source}")
        self.source.setText(words.format(field=item.text(0), source=item.text(4)) if item and has_source else "")

    @Slot()
    def _on_add(self) -> None:
        kind = self.kind
        if kind is not None:
            self.chosen.emit(add_kind(kind.key, self.count.value()), translate("Catalogue", kind.name))
            self.accept()


def _line(spec: FieldSpec, value: object, kind: CatalogueKind) -> QTreeWidgetItem:
    """Return one value with its mark, spread and source."""
    note = kind.notes.get(spec.key)
    text = f"{value_text(spec, value, exact=False)} {unit_of(spec)}".strip()
    spread = "" if note is None or note.spread_fraction is None else f"± {note.spread_fraction:.0%}"
    source = "" if note is None else note.source
    mark = "" if note is None else translate("Marks", note.mark)
    item = QTreeWidgetItem([label_of(spec), text, mark, spread, source])
    item.setToolTip(4, as_tool_tip(source))
    return item
