"""What the File menu does: new, open, save, print, and asking about unsaved changes."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from PySide6.QtCore import QDate, QObject, QStandardPaths, Signal, Slot
from PySide6.QtWidgets import QApplication, QWidget

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.edits_start import StartAnswers, restart_from
from kitplanner.plan.records import Plan
from kitplanner.session.autosave import Recovered, discard
from kitplanner.session.document import DocumentError, FileChangedError, FileInUseError, PlanDocument
from kitplanner.session.settings import AppSettings
from kitplanner.ui.dialogs import ask


class FileActions(QObject):
    """New, open and save of the document, with every question they need.

    Signals
    -------
    recent_changed()
        The list of recent files is another one.
    """

    recent_changed = Signal()

    def __init__(self, document: PlanDocument, settings: AppSettings, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._settings = settings
        self._window = window

    def offer_start(self) -> None:
        """Show the ways to begin a plan."""
        from kitplanner.ui.dialogs.start_dialog import StartDialog  # the first picture needs no dialog

        day = QDate.currentDate()
        today = dt.date(day.year(), day.month(), day.day())
        dialog = StartDialog(today, self._settings.recent_files, self._window)
        dialog.answered.connect(self.start_from)
        dialog.example_chosen.connect(self.start_new)
        dialog.open_chosen.connect(self._on_open_chosen)
        dialog.open()

    @Slot(object)
    def start_from(self, answers: StartAnswers) -> None:
        """Begin a plan from answers; it is unsaved work from the first moment."""
        if self.may_leave():
            self._document.new_plan(Plan())
            self._document.apply(restart_from(answers), self.tr("Start a plan"))

    @Slot(str)
    def start_new(self, kind: str) -> None:
        """Begin a plan from one of the examples, or an empty one."""
        if not self.may_leave():
            return
        try:
            plan = new_plan(kind) if kind else Plan()
        except (PlanFileError, OSError) as error:
            ask.tell(self._window, str(error))
            return
        self._document.new_plan(plan)

    def open_chosen(self) -> None:
        """Ask which file to open, and open it."""
        path = ask.ask_open_path(self._window, self._folder())
        if path is not None:
            self.open_path(path)

    @Slot(object)
    def _on_open_chosen(self, path: Path | None) -> None:
        if path is None:
            self.open_chosen()
        else:
            self.open_path(path)

    @Slot(object)
    def open_path(self, path: Path) -> None:
        """Open a file, asking first about unsaved changes and about a copy when it is in use."""
        if not self.may_leave():
            return
        try:
            self._document.open_file(path)
        except FileInUseError as error:
            if ask.ask_open_copy(self._window, str(error)) is ask.Answer.COPY:
                self._open_copy(path)
            return
        except DocumentError as error:
            ask.tell(self._window, str(error))
            return
        self._remember()

    def save(self) -> bool:
        """Save; return True when the plan is in its file now."""
        self._commit_pending()
        if self._document.path is None:
            return self.save_as()
        try:
            self._document.save()
        except FileChangedError as error:
            return self._save_changed(str(error))
        except DocumentError as error:
            ask.tell(self._window, str(error))
            return False
        self._remember()
        return True

    def save_as(self) -> bool:
        """Ask for a name and save there."""
        self._commit_pending()
        suggestion = self._document.path or self._folder() / f"{self._file_name()}{ask.SUFFIX}"
        path = ask.ask_save_path(self._window, suggestion)
        if path is None:
            return False
        try:
            self._document.save_as(path)
        except DocumentError as error:
            ask.tell(self._window, str(error))
            return False
        self._remember()
        return True

    def may_leave(self) -> bool:
        """Ask what to do with unsaved changes; False when the user wants to stay."""
        self._commit_pending()
        if not self._document.is_modified:
            return True
        answer = ask.ask_save(self._window, self._document.name)
        if answer is ask.Answer.SAVE:
            return self.save()
        return answer is ask.Answer.DISCARD

    @Slot(object)
    def restore(self, recovered: Recovered) -> bool:
        """Take over recovered work; return True when it is the open plan now."""
        if not self.may_leave():
            return False
        try:
            self._document.restore(recovered.recovery.plan, recovered.original)
        except DocumentError:
            # Its own file is in use: the work itself must not wait for that.
            self._document.restore(recovered.recovery.plan, None)
        discard(recovered)
        return True

    @Slot(object)
    def discard_recovered(self, recovered: Recovered) -> None:
        """Remove recovered work on the user's word."""
        discard(recovered)

    def pdf_suggestion(self, paper: str) -> Path:
        """Suggest where to write a paper as PDF."""
        folder = self._document.path.parent if self._document.path is not None else self._folder()
        return folder / f"{self._file_name()} {paper}.pdf"

    def _save_changed(self, sentence: str) -> bool:
        answer = ask.ask_replace(self._window, sentence)
        if answer is ask.Answer.COPY:
            return self.save_as()
        if answer is not ask.Answer.SAVE:
            return False
        try:
            self._document.save(overwrite=True)
        except DocumentError as error:
            ask.tell(self._window, str(error))
            return False
        self._remember()
        return True

    def _open_copy(self, path: Path) -> None:
        try:
            self._document.open_copy(path)
        except DocumentError as error:
            ask.tell(self._window, str(error))

    def _remember(self) -> None:
        if self._document.path is not None:
            self._settings.add_recent(self._document.path)
            self.recent_changed.emit()

    def _folder(self) -> Path:
        recent = self._settings.recent_files
        if self._document.path is not None:
            return self._document.path.parent
        if recent and recent[0].parent.is_dir():
            return recent[0].parent
        return Path(QStandardPaths.writableLocation(QStandardPaths.StandardLocation.DocumentsLocation))

    def _file_name(self) -> str:
        stem = self._document.path.stem if self._document.path is not None else self._document.name
        safe = "".join(sign if sign.isalnum() or sign in " -_" else " " for sign in stem)
        return " ".join(safe.split()) or "plan"

    def _commit_pending(self) -> None:
        """Finish the entry the keyboard is in, so that nothing typed stays behind."""
        widget = QApplication.focusWidget()
        if widget is not None and self._window.isAncestorOf(widget):
            widget.clearFocus()
            widget.setFocus()
