"""The preview of a paper, with its way to the printer."""

from __future__ import annotations

from PySide6.QtCore import QObject, Qt, Slot
from PySide6.QtPrintSupport import QPrinter, QPrintPreviewDialog
from PySide6.QtWidgets import QWidget

from kitplanner.report.content import Paper
from kitplanner.ui.printing.paper_printer import print_paper
from kitplanner.ui.printing.sheet import SheetSize, page_layout


def new_printer(size: SheetSize = "A4") -> QPrinter:
    """Return a printer set to the papers' page."""
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setPageLayout(page_layout(size))
    return printer


class PaperPreview(QObject):
    """Shows a paper as it will be printed; its printer button asks for the printer. Lives as long as its dialog."""

    def __init__(self, paper: Paper, parent: QWidget | None, size: SheetSize = "A4") -> None:
        self.printer = new_printer(size)
        self.dialog = QPrintPreviewDialog(self.printer, parent)
        super().__init__(self.dialog)
        self._paper = paper
        self.dialog.setWindowTitle(self.tr("Print {title}").format(title=paper.title))
        self.dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.dialog.paintRequested.connect(self._on_paint_requested)

    def open(self) -> None:
        """Show the preview above its window."""
        self.dialog.resize(900, 760)
        self.dialog.open()

    @Slot(QPrinter)
    def _on_paint_requested(self, printer: QPrinter) -> None:
        print_paper(self._paper, printer)
