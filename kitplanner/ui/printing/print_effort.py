"""Prints the effort table, or writes it as a PDF."""

from __future__ import annotations

import datetime
from pathlib import Path

from PySide6.QtCore import QCoreApplication
from PySide6.QtWidgets import QWidget

from kitplanner import __version__
from kitplanner.plan.records import Plan
from kitplanner.planners.effort import effort
from kitplanner.planners.pipeline import Results
from kitplanner.report.content import Paper
from kitplanner.report.papers.effort import Printed, effort_paper
from kitplanner.ui.dialogs import ask
from kitplanner.ui.printing.paper_printer import write_pdf
from kitplanner.ui.printing.print_dialogs import PaperPreview
from kitplanner.ui.printing.sheet import SheetSize


class NothingToPrintError(OSError):
    """The plan has problems that stop the calculation, so there is no table; the message is one sentence."""


def paper_of(plan: Plan, results: Results | None) -> Paper:
    """Return the effort table of the plan as it is now, worked out here if the window has not done so yet.

    Raises
    ------
    NothingToPrintError
        When the plan has errors.
    """
    if results is not None and results.has_errors:
        text = QCoreApplication.translate(
            "Printing", "the plan has problems that stop the calculation; put them right first"
        )
        raise NothingToPrintError(text)
    known = results is not None and results.plan is plan and results.is_effort_current
    rows = results.effort if known and results is not None else None
    today = datetime.datetime.now().astimezone().date()
    return effort_paper(plan, rows if rows is not None else effort(plan), Printed(date=today, version=__version__))


def print_effort(parent: QWidget, plan: Plan, results: Results | None, size: SheetSize = "A4") -> None:
    """Show the effort table as it will be printed, with its way to the printer."""
    try:
        paper = paper_of(plan, results)
    except NothingToPrintError as error:
        text = QCoreApplication.translate("Printing", "There is nothing to print: {reason}.").format(reason=error)
        ask.tell(parent, text)
        return
    PaperPreview(paper, parent, size).open()


def export_effort_pdf(path: Path, plan: Plan, results: Results | None, size: SheetSize = "A4") -> None:
    """Write the effort table as a PDF.

    Raises
    ------
    OSError
        When it cannot be written, or there is nothing to print.
    """
    write_pdf(paper_of(plan, results), path, size)
