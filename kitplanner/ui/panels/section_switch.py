"""Which section is shown: a list at the side in a wide window, one box in a narrow one or with large text."""

from __future__ import annotations

from collections.abc import Mapping

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QSize, Qt, Signal, Slot
from PySide6.QtWidgets import (
    QComboBox,
    QListWidget,
    QListWidgetItem,
    QSizePolicy,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QWidget,
)

from kitplanner.plan.records import Plan
from kitplanner.session.field_text import translate
from kitplanner.ui.guard import guarded
from kitplanner.ui.panels.sections import PLAN_SECTION, SECTIONS

_KEY_ROLE = Qt.ItemDataRole.UserRole


class _Indented(QStyledItemDelegate):
    """Leaves a little room before the text of an entry."""

    @guarded()
    def initStyleOption(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> None:
        """Indent the text."""
        super().initStyleOption(option, index)
        option.text = f"  {option.text}"


class SectionSwitch(QWidget):
    """Holds the two switches, side list and box; both always show the same section.

    Signals
    -------
    section_chosen(key: str)
        The user chose a section.
    """

    section_chosen = Signal(str)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.hide()
        self.list = QListWidget(parent)
        self.list.setAccessibleName(self.tr("Sections"))
        self.list.setItemDelegate(_Indented(self.list))
        self.list.setFrameShape(QListWidget.Shape.NoFrame)
        self.list.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.list.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Expanding)
        self.box = QComboBox(parent)
        self.box.setAccessibleName(self.tr("Section"))
        self.box.setMinimumHeight(28)
        for section in SECTIONS:
            title = translate("Sections", section.title)
            item = QListWidgetItem(title)
            item.setData(_KEY_ROLE, section.key)
            self.list.addItem(item)
            self.box.addItem(title, section.key)
        self.list.currentRowChanged.connect(self._on_row_changed)
        self.box.activated.connect(self._on_row_changed)

    def current(self) -> str:
        """Key of the section shown."""
        item = self.list.currentItem()
        return PLAN_SECTION if item is None else str(item.data(_KEY_ROLE))

    def choose(self, key: str) -> None:
        """Show a section as chosen, and say so if it is another one."""
        row = next((row for row, section in enumerate(SECTIONS) if section.key == key), 0)
        self.list.setCurrentRow(row)

    def use_list(self, wide: bool) -> None:
        """Use the side list when there is room, otherwise the box."""
        self.list.setVisible(wide)
        self.box.setVisible(not wide)

    def show_counts(self, plan: Plan, problems: Mapping[str, int]) -> None:
        """Show how many records each section has, and where there are problems."""
        for row, section in enumerate(SECTIONS):
            title = translate("Sections", section.title)
            count = "" if section.key == PLAN_SECTION else str(len(getattr(plan, section.key)))
            wrong = problems.get(section.key, 0)
            text = f"{title}  {count}" if count not in ("", "0") else title
            text = f"{text}  ⚠ {wrong}" if wrong else text
            item = self.list.item(row)
            if item.text() != text:
                item.setText(text)
                self.box.setItemText(row, text)
                spoken = self.tr("{title}, {count} records").format(title=title, count=count) if count else title
                spoken = self.tr("{text}, {count} problems").format(text=spoken, count=wrong) if wrong else spoken
                item.setData(Qt.ItemDataRole.AccessibleTextRole, spoken)
        self.fit()

    def fit(self) -> None:
        """Give the list the width of its longest entry and rows that are easy to hit."""
        metrics = self.list.fontMetrics()
        height = max(28, metrics.height() + 12)
        widest = 0
        for row in range(self.list.count()):
            item = self.list.item(row)
            item.setSizeHint(QSize(0, height))
            widest = max(widest, metrics.horizontalAdvance(item.text()))
        self.list.setFixedWidth(widest + metrics.averageCharWidth() * 5 + 12)

    @Slot(int)
    def _on_row_changed(self, row: int) -> None:
        if row < 0:
            return
        if self.box.currentIndex() != row:
            self.box.setCurrentIndex(row)
        if self.list.currentRow() != row:
            self.list.setCurrentRow(row)
            return
        self.section_chosen.emit(str(self.list.item(row).data(_KEY_ROLE)))
