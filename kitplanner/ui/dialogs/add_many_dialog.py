"""More records like one of them, all at once: how many, and what they will be called."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QFormLayout, QPushButton, QSpinBox, QVBoxLayout, QWidget

from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_many import MOST_MORE, add_like
from kitplanner.plan.records import Plan
from kitplanner.ui.widgets.plain import plain_label

_FIRST_COUNT = 3
_LEAST_CHARS = 46


class AddManyDialog(QDialog):
    """Asks how many more.

    Signals
    -------
    chosen(edit: Edit, count: int)
        The user adds this many.
    """

    chosen = Signal(object, int)

    def __init__(self, plan: Plan, section: str, record_id: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Add several like this"))
        self._plan, self._section, self._id = plan, section, record_id
        name = next(record.name or record.id for record in getattr(plan, section) if record.id == record_id)
        self.count = QSpinBox(self)
        self.count.setRange(1, MOST_MORE)
        self.count.setValue(_FIRST_COUNT)
        self.count.setMinimumHeight(24)
        self.names = plain_label(wrap=True)
        self.names.setMinimumWidth(_LEAST_CHARS * self.fontMetrics().averageCharWidth())
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.add = QPushButton(self.tr("&Add them"), self)
        self.add.setDefault(True)
        buttons.addButton(self.add, QDialogButtonBox.ButtonRole.AcceptRole)
        form = QFormLayout()
        form.addRow(self.tr("&How many more like {name}").format(name=name.replace("&", "&&")), self.count)
        form.addRow(self.names)
        layout = QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(buttons)
        self.count.valueChanged.connect(self._show_names)
        buttons.accepted.connect(self._on_add)
        buttons.rejected.connect(self.reject)
        self._show_names()
        self.count.selectAll()

    @Slot()
    def _show_names(self) -> None:
        before = {record.id for record in getattr(self._plan, self._section)}
        try:
            after = add_like((self._section, self._id), self.count.value())(self._plan)
        except EditError as error:
            self.names.setText(str(error))
            self.add.setEnabled(False)
            return
        self.add.setEnabled(True)
        added = [record.name for record in getattr(after, self._section) if record.id not in before]
        words = self.tr("Named {first}.") if len(added) == 1 else self.tr("Named {first} to {last}.")
        self.names.setText(
            words.format(first=added[0], last=added[-1]) + " " + self.tr("Everything else is as in the one chosen.")
        )

    @Slot()
    def _on_add(self) -> None:
        count = self.count.value()
        self.chosen.emit(add_like((self._section, self._id), count), count)
        self.accept()
