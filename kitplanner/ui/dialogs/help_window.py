"""Help without a network: pages to choose, plain text to read, one search over all of them."""

from __future__ import annotations

import re
from collections.abc import Mapping

from PySide6.QtCore import Qt, Slot
from PySide6.QtGui import QKeySequence, QShortcut, QTextCursor, QTextDocument
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QPlainTextEdit,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from kitplanner.report.help_pages import PAGES, page_title, plain_page
from kitplanner.report.wording import counted
from kitplanner.ui.dialogs.jump_dialog import room_for
from kitplanner.ui.theme import type_font
from kitplanner.ui.widgets.plain import plain_label
from kitplanner.ui.widgets.small_button import SmallButton

_PAGE_ROLE = Qt.ItemDataRole.UserRole
_LEAST_TARGET_PX = 26
# List items and rows of a table of words begin a line of their own.
_OWN_LINE = re.compile(r"-|\d+\. |[^.,;]{1,40}: ")


def joined_lines(text: str) -> str:
    r"""Return a page with the hard breaks inside its paragraphs taken out, so that it wraps to any width.

    Examples
    --------
    >>> joined_lines("One line\nand more.\n\n- a\n- b\nfloor: low\n")
    'One line and more.\n\n- a\n- b\nfloor: low\n'
    """
    kept: list[str] = []
    for line in text.splitlines():
        alone = not line or _OWN_LINE.match(line) is not None
        if kept and kept[-1] and not alone and not kept[-1].endswith((".", ":")):
            kept[-1] += f" {line}"
        else:
            kept.append(line)
    return "\n".join(kept) + "\n"


class HelpWindow(QDialog):
    """The help pages; not modal, so that one can read and do."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Help"))
        self._texts: Mapping[str, str] = {page: joined_lines(plain_page(page)) for page in PAGES}
        self.search = QLineEdit(self)
        self.search.setAccessibleName(self.tr("Search in all pages"))
        self.search.setPlaceholderText(self.tr("Search in all pages"))
        self.search.setClearButtonEnabled(True)
        self.search.setMinimumHeight(_LEAST_TARGET_PX)
        self.found = plain_label(wrap=True)
        self.next = SmallButton(self.tr("Next &place"), self)
        self.pages = QListWidget(self)
        self.pages.setAccessibleName(self.tr("Pages"))
        self.text = QPlainTextEdit(self)
        self.text.setReadOnly(True)
        self.text.setTabChangesFocus(True)
        self.text.setFont(type_font())
        self.text.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        self._build()
        self.search.textChanged.connect(self._on_search)
        self.search.returnPressed.connect(self.find_next)
        self.next.clicked.connect(self.find_next)
        self.pages.currentItemChanged.connect(self._on_page)
        self._on_search("")

    def show_page(self, page: str) -> None:
        """Show a page, with an empty search."""
        self.search.clear()
        for row in range(self.pages.count()):
            if self.pages.item(row).data(_PAGE_ROLE) == page:
                self.pages.setCurrentRow(row)

    def show_word(self, word: str) -> None:
        """Show the list of words, at one of them."""
        self.show_page("glossary")
        if word:
            line = next((line for line in self._texts["glossary"].splitlines() if line.startswith(f"{word}: ")), "")
            self._go_to(line or word)

    @property
    def page(self) -> str:
        """The page shown."""
        item = self.pages.currentItem()
        return "" if item is None else str(item.data(_PAGE_ROLE))

    def _build(self) -> None:
        line = QHBoxLayout()
        line.addWidget(self.search, 1)
        line.addWidget(self.next)
        side = QWidget(self)
        column = QVBoxLayout(side)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.found)
        column.addWidget(self.pages, 1)
        split = QSplitter(self)
        split.setChildrenCollapsible(False)
        split.addWidget(side)
        split.addWidget(self.text)
        split.setStretchFactor(1, 1)
        size = room_for(self, 112, 36)
        split.setSizes([size.width() * 3 // 10, size.width() * 7 // 10])
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        buttons.rejected.connect(self.reject)
        close = buttons.button(QDialogButtonBox.StandardButton.Close)
        close.setMinimumHeight(_LEAST_TARGET_PX)
        close.setAutoDefault(False)
        layout = QVBoxLayout(self)
        layout.addLayout(line)
        layout.addWidget(split, 1)
        layout.addWidget(buttons)
        self.pages.setWordWrap(True)
        find = QShortcut(QKeySequence(QKeySequence.StandardKey.Find), self)
        find.activated.connect(self._focus_search)
        self.resize(size)

    @Slot(str)
    def _on_search(self, words: str) -> None:
        """List the pages that hold all the words."""
        wanted = words.casefold().split()
        kept = [page for page in PAGES if all(word in self._texts[page].casefold() for word in wanted)]
        before = self.page
        self.pages.clear()
        for page in kept:
            item = QListWidgetItem(page_title(page))
            item.setData(_PAGE_ROLE, page)
            self.pages.addItem(item)
        self.found.setText(counted(len(kept), "page", "pages") if kept else self.tr("No page holds these words."))
        self.next.setEnabled(bool(wanted and kept))
        self.pages.setCurrentRow(kept.index(before) if before in kept else 0)
        if not kept:
            self.text.clear()
        self._mark_first()

    @Slot(QListWidgetItem, QListWidgetItem)
    def _on_page(self, item: QListWidgetItem | None, _before: QListWidgetItem | None) -> None:
        if item is not None:
            page = str(item.data(_PAGE_ROLE))
            self.text.setPlainText(self._texts[page])
            self.text.setAccessibleName(page_title(page))
            self._mark_first()

    def _mark_first(self) -> None:
        """Bring the first of the searched words into sight."""
        words = self.search.text().split()
        if words:
            self._go_to(words[0])

    def _go_to(self, words: str) -> None:
        self.text.moveCursor(QTextCursor.MoveOperation.Start)
        self.text.find(words)
        self.text.centerCursor()

    @Slot()
    def find_next(self) -> None:
        """Go to the next place of the first searched word, then to the next page, round and round."""
        words = self.search.text().split()
        if not words or self.text.find(words[0], QTextDocument.FindFlag(0)):
            return
        row = (self.pages.currentRow() + 1) % max(1, self.pages.count())
        if row == self.pages.currentRow():
            self._mark_first()
        else:
            self.pages.setCurrentRow(row)

    @Slot()
    def _focus_search(self) -> None:
        self.search.setFocus(Qt.FocusReason.ShortcutFocusReason)
        self.search.selectAll()
