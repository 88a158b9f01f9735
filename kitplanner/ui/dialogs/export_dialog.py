"""A section as a table for other programs: what goes out, with names or without, and how decimals are written."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.exchange import EXCHANGED
from kitplanner.plan.exchange_export import ExportChoices, Sheet, sheet_of
from kitplanner.plan.records import Plan
from kitplanner.session.field_parsing import number_style
from kitplanner.session.field_text import translate
from kitplanner.ui.panels.sections import section_of
from kitplanner.ui.widgets.plain import plain_label

_LEAST_CHARS = 60


class ExportDialog(QDialog):
    """Asks what to write.

    Signals
    -------
    chosen(sheet: Sheet)
        The table to be written; where to is asked next.
    """

    chosen = Signal(object)

    def __init__(self, plan: Plan, section: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Export a table"))
        self._plan = plan
        self.what = QComboBox(self)
        for key in EXCHANGED:
            self.what.addItem(translate("Sections", section_of(key).title), key)
        self.what.setCurrentIndex(EXCHANGED.index(section) if section in EXCHANGED else 0)
        self.names = QCheckBox(self.tr("With &names, roles, body masses and self-tests"), self)
        self.decimal = QComboBox(self)
        self.decimal.addItem(self.tr("point: 1.5"), False)
        self.decimal.addItem(self.tr("comma: 1,5"), True)
        self.decimal.setCurrentIndex(1 if number_style().decimal == "," else 0)
        self.remark = plain_label(wrap=True)
        self.remark.setMinimumWidth(_LEAST_CHARS * self.fontMetrics().averageCharWidth())
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.save = QPushButton(self.tr("&Save as…"), self)
        self.save.setDefault(True)
        buttons.addButton(self.save, QDialogButtonBox.ButtonRole.AcceptRole)
        form = QFormLayout()
        form.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.FieldsStayAtSizeHint)
        form.addRow(self.tr("&Table"), self.what)
        form.addRow(self.tr("&Decimals are written with a"), self.decimal)
        form.addRow(self.names)
        layout = QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(self.remark)
        layout.addWidget(buttons)
        self.what.currentIndexChanged.connect(self._show_remark)
        self.names.toggled.connect(self._show_remark)
        buttons.accepted.connect(self._on_save)
        buttons.rejected.connect(self.reject)
        self._show_remark()

    def sheet(self) -> Sheet:
        """Return the table as chosen now."""
        choices = ExportChoices(
            with_names=self.names.isChecked(), decimal_comma=bool(self.decimal.currentData()), say=translate
        )
        return sheet_of(self._plan, self.what.currentData(), choices)

    @Slot()
    def _show_remark(self) -> None:
        sheet = self.sheet()
        rows = self.tr("1 row.") if len(sheet.rows) == 1 else self.tr("{count} rows.").format(count=len(sheet.rows))
        self.remark.setText(" ".join((rows, *sheet.notes)))
        self.save.setEnabled(bool(sheet.rows))

    @Slot()
    def _on_save(self) -> None:
        self.chosen.emit(self.sheet())
        self.accept()
