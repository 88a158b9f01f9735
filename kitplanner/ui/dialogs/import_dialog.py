"""A table from a file into a section: CSV, or one sheet of a workbook, looked at before it is taken."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import Slot
from PySide6.QtWidgets import QComboBox, QSpinBox, QWidget

from kitplanner.plan.exchange import EXCHANGED
from kitplanner.plan.exchange_tables import WORKBOOKS
from kitplanner.plan.records import Plan
from kitplanner.session.exchange_run import Source
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs.rows_dialog import RowsDialog
from kitplanner.ui.panels.sections import section_of

_MOST_SHEETS = 200


class ImportDialog(RowsDialog):
    """Rows of a file; where they go and which sheet is read can be chosen."""

    def __init__(self, plan: Plan, section: str, path: Path, parent: QWidget | None = None) -> None:
        self._is_workbook = path.suffix.lower() in WORKBOOKS
        super().__init__(plan, section if section in EXCHANGED else EXCHANGED[0], Source(path=path), parent)
        self.setWindowTitle(self.tr("Import a table"))
        self.intro.setText(self.tr("Rows of {name}. Nothing changes before you take them.").format(name=path.name))
        self.look_again()

    def _build_choices(self) -> None:
        self.where = QComboBox(self)
        for key in EXCHANGED:
            self.where.addItem(translate("Sections", section_of(key).title), key)
        self.where.setCurrentIndex(EXCHANGED.index(self._section))
        self.where.currentIndexChanged.connect(self._on_where)
        self.sheet = QSpinBox(self)
        self.sheet.setRange(1, _MOST_SHEETS)
        self.sheet.setKeyboardTracking(False)
        self.sheet.valueChanged.connect(self._on_sheet)
        self.choices.addRow(self.tr("Rows &go into"), self.where)
        self.choices.addRow(self.tr("&Sheet of the workbook"), self.sheet)
        self.choices.setRowVisible(self.sheet, self._is_workbook)

    @Slot(int)
    def _on_where(self, _index: int) -> None:
        self._section = self.where.currentData()
        self.first.blockSignals(True)
        self.first.clear()
        self.first.blockSignals(False)
        self.look_again()

    @Slot(int)
    def _on_sheet(self, number: int) -> None:
        self._source = Source(path=self._source.path, sheet=number - 1)
        self._table_read = None
        self.look_again()
