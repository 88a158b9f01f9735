"""Tables in and out of files: which file, the preview, one undo step; and the table written for other programs."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, QStandardPaths, Signal, Slot
from PySide6.QtWidgets import QWidget

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.edits import Edit
from kitplanner.plan.exchange_export import Sheet, csv_of, xlsx_of
from kitplanner.plan.exchange_tables import ExchangeError
from kitplanner.plan.files import write_bytes
from kitplanner.session.document import PlanDocument
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs import ask
from kitplanner.ui.panels.sections import section_of

_WORKBOOK = ".xlsx"


class TableActions(QObject):
    """Import and export.

    Signals
    -------
    rows_taken(section: str)
        Rows of a file went into a section.
    """

    rows_taken = Signal(str)

    def __init__(self, document: PlanDocument, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._window = window

    def import_chosen(self, section: str) -> None:
        """Ask which file to take rows from, and show what they would do."""
        path = ask.ask_table_path(self._window, self._folder())
        if path is not None:
            self.import_path(path, section)

    def import_path(self, path: Path, section: str) -> None:
        """Show what the rows of a file would do."""
        from kitplanner.ui.dialogs.import_dialog import ImportDialog  # the first picture needs no dialog

        dialog = ImportDialog(self._document.plan, section, path, self._window)
        dialog.taken.connect(self._on_taken)
        dialog.open()

    def export_chosen(self, section: str) -> None:
        """Ask what to write and where to."""
        from kitplanner.ui.dialogs.export_dialog import ExportDialog  # as above

        dialog = ExportDialog(self._document.plan, section, self._window)
        dialog.chosen.connect(self._on_export)
        dialog.open()

    @Slot(object, int, str)
    def _on_taken(self, edit: Edit, count: int, section: str) -> None:
        words = self.tr("Import 1 row") if count == 1 else self.tr("Import {count} rows").format(count=count)
        if self._document.apply(edit, words) is None:
            self.rows_taken.emit(section)

    @Slot(object)
    def _on_export(self, sheet: Sheet) -> None:
        title = translate("Sections", section_of(sheet.section).title)
        path = ask.ask_export_path(self._window, self._folder() / f"{title}.csv")
        if path is None:
            return
        try:
            write_bytes(path, xlsx_of(sheet) if path.suffix.lower() == _WORKBOOK else csv_of(sheet))
        except (ExchangeError, PlanFileError) as error:
            ask.tell(self._window, str(error))

    def _folder(self) -> Path:
        if self._document.path is not None:
            return self._document.path.parent
        return Path(QStandardPaths.writableLocation(QStandardPaths.StandardLocation.DocumentsLocation))
