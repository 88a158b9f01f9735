"""Questions to the user, each behind one function; every text is shown literally."""

from __future__ import annotations

from enum import Enum
from pathlib import Path

from PySide6.QtCore import QCoreApplication, Qt
from PySide6.QtWidgets import QFileDialog, QInputDialog, QMessageBox, QPushButton, QWidget

from kitplanner.session.editing import MOST_AT_ONCE

translate = QCoreApplication.translate
SUFFIX = ".kitplan"


class Answer(Enum):
    """What the user decided."""

    SAVE = "save"
    DISCARD = "discard"
    CANCEL = "cancel"
    COPY = "copy"


def tell(parent: QWidget | None, text: str, more: str = "") -> None:
    """Show one sentence that needs nothing but reading."""
    box = _box(parent, QMessageBox.Icon.Warning, text, more)
    box.setStandardButtons(QMessageBox.StandardButton.Ok)
    _run(box)


def ask_save(parent: QWidget | None, name: str) -> Answer:
    """Ask what to do with unsaved changes."""
    text = translate("Ask", "Save the changes to {name}?").format(name=name)
    more = translate("Ask", "Without saving, the changes since the last save are lost.")
    return _choose(
        parent,
        text,
        more,
        (
            (translate("Ask", "&Save"), QMessageBox.ButtonRole.AcceptRole, Answer.SAVE),
            (translate("Ask", "&Don't save"), QMessageBox.ButtonRole.DestructiveRole, Answer.DISCARD),
            (translate("Ask", "&Cancel"), QMessageBox.ButtonRole.RejectRole, Answer.CANCEL),
        ),
    )


def ask_open_copy(parent: QWidget | None, sentence: str) -> Answer:
    """Ask whether to open a copy of a file that is in use."""
    return _choose(
        parent,
        sentence,
        "",
        (
            (translate("Ask", "Open a &copy"), QMessageBox.ButtonRole.AcceptRole, Answer.COPY),
            (translate("Ask", "&Cancel"), QMessageBox.ButtonRole.RejectRole, Answer.CANCEL),
        ),
    )


def ask_replace(parent: QWidget | None, sentence: str) -> Answer:
    """Ask whether to write over a file that another program changed."""
    return _choose(
        parent,
        sentence,
        "",
        (
            (translate("Ask", "Save &as…"), QMessageBox.ButtonRole.AcceptRole, Answer.COPY),
            (translate("Ask", "&Replace it"), QMessageBox.ButtonRole.DestructiveRole, Answer.SAVE),
            (translate("Ask", "&Cancel"), QMessageBox.ButtonRole.RejectRole, Answer.CANCEL),
        ),
    )


def ask_how_many(parent: QWidget | None, title: str, question: str) -> int:
    """Ask for a count; 0 when the user changed their mind."""
    count, ok = QInputDialog.getInt(parent, title, question, 4, 1, MOST_AT_ONCE)
    return count if ok else 0


def ask_open_path(parent: QWidget | None, folder: Path) -> Path | None:
    """Ask which plan file to open."""
    title = translate("Ask", "Open a plan")
    name, _ = QFileDialog.getOpenFileName(parent, title, str(folder), _filters())
    return Path(name) if name else None


def ask_save_path(parent: QWidget | None, suggestion: Path) -> Path | None:
    """Ask under which name to save; a name without an ending gets the plan's."""
    title = translate("Ask", "Save the plan as")
    name, _ = QFileDialog.getSaveFileName(parent, title, str(suggestion), _filters())
    if not name:
        return None
    path = Path(name)
    return path if path.suffix else path.with_suffix(SUFFIX)


def ask_table_path(parent: QWidget | None, folder: Path) -> Path | None:
    """Ask from which table to take rows."""
    title = translate("Ask", "Import a table")
    tables = translate("Ask", "Tables")
    everything = translate("Ask", "All files")
    kinds = f"{tables} (*.csv *.tsv *.txt *.xlsx *.xlsm *.xls *.ods);;{everything} (*)"
    name, _ = QFileDialog.getOpenFileName(parent, title, str(folder), kinds)
    return Path(name) if name else None


def ask_export_path(parent: QWidget | None, suggestion: Path) -> Path | None:
    """Ask where to write a table; a name without an ending gets that of the kind chosen."""
    title = translate("Ask", "Export a table")
    workbook = translate("Ask", "Workbook")
    name, kind = QFileDialog.getSaveFileName(parent, title, str(suggestion), f"CSV (*.csv);;{workbook} (*.xlsx)")
    if not name:
        return None
    path = Path(name)
    return path if path.suffix else path.with_suffix(".xlsx" if "xlsx" in kind else ".csv")


def ask_pdf_path(parent: QWidget | None, suggestion: Path) -> Path | None:
    """Ask where to write a PDF."""
    title = translate("Ask", "Save as PDF")
    name, _ = QFileDialog.getSaveFileName(parent, title, str(suggestion), translate("Ask", "PDF (*.pdf)"))
    if not name:
        return None
    path = Path(name)
    return path if path.suffix else path.with_suffix(".pdf")


def _filters() -> str:
    plans = translate("Ask", "Plans")
    everything = translate("Ask", "All files")
    return f"{plans} (*{SUFFIX});;{everything} (*)"


def _choose(
    parent: QWidget | None,
    text: str,
    more: str,
    choices: tuple[tuple[str, QMessageBox.ButtonRole, Answer], ...],
) -> Answer:
    box = _box(parent, QMessageBox.Icon.Question, text, more)
    answers: list[tuple[QPushButton, Answer]] = [
        (box.addButton(label, role), answer) for label, role, answer in choices
    ]
    box.setDefaultButton(answers[0][0])
    box.setEscapeButton(answers[-1][0])
    clicked = _run(box)
    return next((answer for button, answer in answers if button is clicked), answers[-1][1])


def _box(parent: QWidget | None, icon: QMessageBox.Icon, text: str, more: str) -> QMessageBox:
    box = QMessageBox(parent)
    box.setIcon(icon)
    box.setWindowTitle(translate("Ask", "Kitplanner"))
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.setText(text)
    if more:
        box.setInformativeText(more)
    return box


def _run(box: QMessageBox) -> object:
    """Show a box, wait for the answer and let the box go."""
    box.exec()
    clicked = box.clickedButton()
    box.deleteLater()
    return clicked
