"""What would make the plan fit: every lever alone and the mildest combinations; choosing one is an edit."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QListWidget,
    QListWidgetItem,
    QVBoxLayout,
    QWidget,
)

from kitplanner.report.wording_levers import (
    ask_first_sentence,
    combination_sentence,
    lever_name,
    row_sentence,
    verdict_sentence,
)
from kitplanner.session.rota_run import Levered
from kitplanner.ui.pages.chart_frame import plain_label

_KEY = Qt.ItemDataRole.UserRole


class LeversDialog(QDialog):
    """Lists levers and combinations.

    Signals
    -------
    chosen(changes: tuple[LeverChange, ...], text: str)
        The changes to make and their name as one step.
    """

    chosen = Signal(object, str)

    def __init__(self, levered: Levered, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("What would make it fit"))
        self._levered = levered
        plan, result = levered.plan, levered.result
        layout = QVBoxLayout(self)
        layout.addWidget(plain_label(verdict_sentence(result), bold=True))
        reminder = "" if result.fits else ask_first_sentence(result)
        if reminder:
            layout.addWidget(plain_label(reminder))
        self.combinations = self._list(self.tr("Together, the mildest first"))
        singles = () if result.fits else result.singles
        for number, together in enumerate(result.combinations):
            self._add(self.combinations, combination_sentence(plan, together), number, enabled=True)
        self.singles = self._list(self.tr("One alone"))
        enough = [number for number, row in enumerate(singles) if row.enough]
        for number in (*enough, *(n for n in range(len(singles)) if n not in enough)):
            row = singles[number]
            self._add(self.singles, row_sentence(plan, row), number, enabled=row.enough and bool(row.changes))
        for view in (self.combinations, self.singles):
            if view.count():
                layout.addWidget(plain_label(view.accessibleName(), bold=True))
                layout.addWidget(view, view.count())
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        self.choose = buttons.addButton(self.tr("&Make this change"), QDialogButtonBox.ButtonRole.ActionRole)
        self.choose.clicked.connect(self._on_choose)
        self.choose.setEnabled(False)
        buttons.rejected.connect(self.reject)
        layout.addWidget(buttons)
        if self.combinations.count() or self.singles.count():
            self.resize(self.fontMetrics().averageCharWidth() * 104, self.fontMetrics().height() * 34)
        else:
            self.choose.hide()

    def _list(self, name: str) -> QListWidget:
        view = QListWidget()
        view.setAccessibleName(name)
        view.setWordWrap(True)
        view.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        view.setMinimumHeight(self.fontMetrics().height() * 6)
        view.itemSelectionChanged.connect(self._on_selection)
        view.itemActivated.connect(self._on_choose)
        return view

    def _add(self, view: QListWidget, text: str, number: int, *, enabled: bool) -> None:
        item = QListWidgetItem(text)
        item.setData(_KEY, number)
        if not enabled:
            # It stays readable by keyboard; only choosing it is off.
            item.setData(_KEY, -1)
            item.setForeground(self.palette().color(self.palette().ColorRole.PlaceholderText))
        view.addItem(item)

    def _picked(self) -> tuple[QListWidget, int] | None:
        for view in (self.combinations, self.singles):
            items = view.selectedItems()
            if items and int(items[0].data(_KEY)) >= 0:
                return view, int(items[0].data(_KEY))
        return None

    @Slot()
    def _on_selection(self) -> None:
        sender = self.sender()
        for view in (self.combinations, self.singles):
            if view is not sender and isinstance(sender, QListWidget) and sender.selectedItems():
                view.blockSignals(True)
                view.clearSelection()
                view.blockSignals(False)
        self.choose.setEnabled(self._picked() is not None)

    @Slot()
    def _on_choose(self) -> None:
        picked = self._picked()
        if picked is None:
            return
        view, number = picked
        if view is self.combinations:
            changes = self._levered.result.combinations[number].lever_changes()
            text = self.tr("Make it fit: {count} changes").format(count=len(changes))
        else:
            row = self._levered.result.singles[number]
            changes = row.changes
            text = self.tr("Make it fit: {name}").format(name=lever_name(self._levered.plan, row.lever))
        self.chosen.emit(changes, text)
        self.accept()
