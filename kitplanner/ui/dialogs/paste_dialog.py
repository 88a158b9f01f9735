"""Copied rows into a section: what a spreadsheet put on the clipboard, looked at before it is taken."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from kitplanner.plan.records import Plan
from kitplanner.session.exchange_run import Source
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs.rows_dialog import RowsDialog
from kitplanner.ui.panels.sections import section_of


class PasteDialog(RowsDialog):
    """Rows from the clipboard; a block without names of columns may be written onto chosen rows."""

    def __init__(
        self,
        plan: Plan,
        section: str,
        text: str,
        onto: tuple[str, ...] = (),
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(plan, section, Source(text), parent)
        self.setWindowTitle(self.tr("Paste rows"))
        self._onto = onto
        where = translate("Sections", section_of(section).title)
        self.intro.setText(
            self.tr("The copied rows go into: {where}. Nothing changes before you take them.").format(where=where)
        )
        words = (
            self.tr("Write onto the chosen row") if len(onto) == 1 else self.tr("Write onto the {count} chosen rows")
        )
        self.onto.setText(words.format(count=len(onto)))
        self.look_again()
