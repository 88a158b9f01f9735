"""A paper as a PDF file without a window: Qt draws off screen, so this works where there is no display."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtGui import QGuiApplication

from kitplanner.report.content import Paper
from kitplanner.ui.printing.paper_printer import write_pdf
from kitplanner.ui.printing.sheet import SheetSize


def write_paper(paper: Paper, path: Path, size: SheetSize) -> None:
    """Write a paper as PDF; fonts need an application object, which the window has already and a command has not.

    Raises
    ------
    OSError
        When the file cannot be written.
    """
    app = QGuiApplication.instance() or QGuiApplication(["kitplanner"])
    write_pdf(paper, path, size)
    # Alive until the last page is drawn.
    del app
