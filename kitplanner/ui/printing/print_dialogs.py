"""Print, preview and save as PDF from the window; every failure is one sentence."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QCoreApplication, QObject, Qt, Slot
from PySide6.QtPrintSupport import QPrintDialog, QPrinter, QPrintPreviewDialog
from PySide6.QtWidgets import QFileDialog, QWidget

from kitplanner.report.content import Paper
from kitplanner.ui.printing.paper_printer import PrintError, print_paper, write_pdf
from kitplanner.ui.printing.sheet import SheetSize, page_layout

translate = QCoreApplication.translate


def new_printer(size: SheetSize = "A4") -> QPrinter:
    """Return a printer set to the papers' page."""
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setPageLayout(page_layout(size))
    return printer


class PaperPreview(QObject):
    """Shows a paper as it will be printed, with a way to the printer; lives as long as its dialog."""

    def __init__(self, paper: Paper, parent: QWidget | None, size: SheetSize = "A4") -> None:
        self.printer = new_printer(size)
        self.dialog = QPrintPreviewDialog(self.printer, parent)
        super().__init__(self.dialog)
        self._paper = paper
        self.dialog.setWindowTitle(paper.title)
        self.dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.dialog.paintRequested.connect(self._on_paint_requested)

    def open(self) -> None:
        """Show the preview above its window."""
        self.dialog.resize(900, 760)
        self.dialog.open()

    @Slot(QPrinter)
    def _on_paint_requested(self, printer: QPrinter) -> None:
        print_paper(self._paper, printer)


def ask_print(paper: Paper, parent: QWidget | None, size: SheetSize = "A4") -> str:
    """Ask for a printer and print; return a sentence if it failed, nothing otherwise."""
    printer = new_printer(size)
    dialog = QPrintDialog(printer, parent)
    dialog.setWindowTitle(translate("Printing", "Print {title}").format(title=paper.title))
    try:
        if dialog.exec() != QPrintDialog.DialogCode.Accepted:
            return ""
        print_paper(paper, printer)
    except PrintError as error:
        return str(error)
    finally:
        dialog.deleteLater()
    return ""


def ask_pdf_path(parent: QWidget | None, proposed: Path) -> Path | None:
    """Ask where to write a PDF; None if the user left the question."""
    title = translate("Printing", "Save as PDF")
    name, _kind = QFileDialog.getSaveFileName(parent, title, str(proposed), translate("Printing", "PDF (*.pdf)"))
    if not name:
        return None
    return Path(name) if Path(name).suffix.lower() == ".pdf" else Path(f"{name}.pdf")


def ask_save_pdf(paper: Paper, parent: QWidget | None, proposed: Path, size: SheetSize = "A4") -> str:
    """Ask where to write a PDF and write it; return a sentence if it failed, nothing otherwise."""
    path = ask_pdf_path(parent, proposed)
    if path is None:
        return ""
    try:
        write_pdf(paper, path, size)
    except PrintError as error:
        return str(error)
    return ""
