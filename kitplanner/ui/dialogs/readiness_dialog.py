"""Ready at hand: a warning has come, dark hours, power is back, saving, closing down; each with its caution."""

from __future__ import annotations

from msgspec import Struct
from PySide6.QtCore import QSize, Qt, Slot
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QScrollArea, QTabWidget, QVBoxLayout, QWidget

from kitplanner.plan.fields import QT_TRANSLATE_NOOP
from kitplanner.plan.records import Plan
from kitplanner.planners.readiness import ChargeList, recharge_list, warning_list
from kitplanner.planners.readiness_closing import close_down_list, saving_tips
from kitplanner.planners.readiness_lamps import dark_hours
from kitplanner.report.wording_readiness import (
    CHARGE_HEADER,
    CLOSE_HEADER,
    cautions_of_list,
    charge_list_sentence,
    charge_rows,
    close_rows,
    close_sentence,
    dark_sentences,
    print_sentence,
    task_reason_words,
    tip_sentence,
)
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs.jump_dialog import room_for
from kitplanner.ui.dialogs.reading_table import Line, ReadingTable
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.caution_note import CautionNote
from kitplanner.ui.widgets.plain import plain_label

# Papers that this version prints.
PAPERS = ("effort", "rota")


class Sheet(Struct, frozen=True):
    """One tab: title, sentences, a table, and the list whose cautions stand below."""

    key: str
    title: str
    sentences: tuple[str, ...]
    headers: tuple[str, ...]
    lines: tuple[Line, ...]


WARNING = QT_TRANSLATE_NOOP("Ready", "&Warning received")
DARK = QT_TRANSLATE_NOOP("Ready", "&Dark hours")
POWER_BACK = QT_TRANSLATE_NOOP("Ready", "&Power is back")
CLOSE_DOWN = QT_TRANSLATE_NOOP("Ready", "C&lose down")


def sheets(plan: Plan) -> tuple[Sheet, ...]:
    """Return what the dialog shows of a plan."""
    warned, back, closing = warning_list(plan), recharge_list(plan), close_down_list(plan)
    saving = tuple(tip_sentence(plan, tip) for tip in saving_tips(plan))
    return (
        _charging(plan, warned, WARNING, (charge_list_sentence(plan, warned), print_sentence(plan, PAPERS))),
        Sheet("dark", DARK, (*dark_sentences(plan, dark_hours(plan)), *saving), (), ()),
        _charging(plan, back, POWER_BACK, (charge_list_sentence(plan, back),)),
        Sheet(
            "close_down",
            CLOSE_DOWN,
            (close_sentence(plan, closing),),
            CLOSE_HEADER,
            tuple(
                Line(row, (task.section, task.record))
                for row, task in zip(close_rows(plan, closing), closing, strict=True)
            ),
        ),
    )


def _charging(plan: Plan, found: ChargeList, title: str, sentences: tuple[str, ...]) -> Sheet:
    rows = zip(charge_rows(plan, found), found.tasks, strict=True)
    lines = tuple(Line((*row, task_reason_words(task)), (task.section, task.record)) for row, task in rows)
    headers = (*CHARGE_HEADER, translate("Ready", QT_TRANSLATE_NOOP("Ready", "Why there")))
    return Sheet(found.name, title, sentences, headers if lines else (), lines)


class ReadinessDialog(QDialog):
    """Four lists for the hours before, in and after an outage."""

    def __init__(self, plan: Plan, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Be ready"))
        self.tabs = QTabWidget(self)
        self.tabs.setDocumentMode(True)
        self.tabs.setAccessibleName(self.tr("Lists"))
        self._texts: dict[str, str] = {}
        for sheet in sheets(plan):
            self.tabs.addTab(self._page(sheet), translate("Ready", sheet.title))
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        buttons.rejected.connect(self.reject)
        buttons.button(QDialogButtonBox.StandardButton.Close).setMinimumHeight(26)
        layout = QVBoxLayout(self)
        layout.addWidget(self.tabs, 1)
        layout.addWidget(plain_label(self.tr("These lists never replace official instructions."), wrap=True))
        layout.addWidget(buttons)
        for key, slot in ((Qt.Key.Key_PageDown, self._on_page_down), (Qt.Key.Key_PageUp, self._on_page_up)):
            QShortcut(QKeySequence(key), self).activated.connect(slot)
        self.resize(room_for(self, 108, 34))
        self.tabs.tabBar().setFocus(Qt.FocusReason.OtherFocusReason)

    def text_of(self, key: str) -> str:
        """Return everything one list says: warning, dark, power_back, close_down."""
        return self._texts[key]

    @Slot()
    def _on_page_down(self) -> None:
        self._scroll(1)

    @Slot()
    def _on_page_up(self) -> None:
        self._scroll(-1)

    def _scroll(self, pages: int) -> None:
        area = self.tabs.currentWidget()
        if isinstance(area, QScrollArea):
            bar = area.verticalScrollBar()
            bar.setValue(bar.value() + pages * bar.pageStep())

    def _page(self, sheet: Sheet) -> QWidget:
        page = QWidget()
        column = QVBoxLayout(page)
        column.setSpacing(8)
        said = list(sheet.sentences)
        for number, text in enumerate(sheet.sentences):
            label = plain_label(text, wrap=True, bold=number == 0)
            label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
            column.addWidget(label)
        if sheet.headers:
            table = SheetTable(translate("Ready", sheet.title).replace("&", ""))
            table.set_lines(sheet.headers, sheet.lines)
            column.addWidget(table)
            said += ["\t".join(line.cells) for line in sheet.lines]
        for caution in cautions_of_list(sheet.key):
            words = f"{translate('Cautions', caution.hazard)}. {translate('Cautions', caution.text)}"
            column.addWidget(CautionNote(caution.id, words, gate=False))
            said.append(words)
        column.addStretch(1)
        self._texts[sheet.key] = "\n".join(said)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QScrollArea.Shape.NoFrame)
        area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        area.setAccessibleName(translate("Ready", sheet.title).replace("&", ""))
        area.setAccessibleDescription(self._texts[sheet.key])
        area.setWidget(page)
        return area


class SheetTable(ReadingTable):
    """A table as high as its rows up to a share of the page, which scrolls."""

    def __init__(self, name: str) -> None:
        super().__init__(name)
        self.verticalHeader().sectionResized.connect(self._on_rows_sized)

    @Slot()
    def _on_rows_sized(self) -> None:
        wanted = self.verticalHeader().length() + self.horizontalHeader().sizeHint().height() + 6
        self.setFixedHeight(min(wanted, self.fontMetrics().height() * 22))

    @guarded(QSize(300, 120))
    def sizeHint(self) -> QSize:
        """Return the height of the rows."""
        return QSize(300, self.height())
