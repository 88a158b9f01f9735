"""What a field means: its help, its range and default, and the words of the glossary that belong to it."""

from __future__ import annotations

from PySide6.QtCore import Signal, Slot
from PySide6.QtWidgets import QDialogButtonBox, QPushButton, QWidget

from kitplanner.plan.edits import Path, get_value
from kitplanner.plan.fields import kind_of
from kitplanner.plan.records import Plan
from kitplanner.report.glossary import Term, terms_of_field
from kitplanner.ui.dialogs.jump_dialog import JumpDialog
from kitplanner.ui.dialogs.reading_table import Line
from kitplanner.ui.trace_refs import field_help


class GlossaryDialog(JumpDialog):
    """One field and its words.

    Signals
    -------
    word_requested(word: str)
        The user wants to read on in the help, at a word.
    """

    word_requested = Signal(str)

    def __init__(self, plan: Plan, path: Path, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("What does this mean?"), self.tr("Words"), parent)
        label, words = field_help(plan, path)
        found = terms_of_field(kind_of(get_value(plan, path[:-1])), path[-1])
        self._words: tuple[Term, ...] = found
        self.more = QPushButton(self.tr("&All words"), self)
        self.more.setAutoDefault(False)
        self.more.setMinimumHeight(26)
        self.more.clicked.connect(self._on_more)
        self.buttons.addButton(self.more, QDialogButtonBox.ButtonRole.ActionRole)
        lines = [Line((term.word, term.meaning)) for term in found]
        headers = (self.tr("Word"), self.tr("Meaning here")) if lines else ()
        self.show_content(label, words.splitlines(), headers, lines)

    @Slot()
    def _on_more(self) -> None:
        row = self.table.currentIndex().row()
        self.word_requested.emit(self._words[row].word if 0 <= row < len(self._words) else "")
        self.close()
