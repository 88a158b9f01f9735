"""What the user may ask of the plan: where a number comes from, what a word means, what is stored, what to do now.

Dialogs know nothing of the window; here they meet document, sections and answers.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QObject, QStandardPaths, Slot
from PySide6.QtWidgets import QApplication, QDialog, QWidget

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits import Path as Place
from kitplanner.plan.files import read_plan
from kitplanner.plan.scrub import ScrubError
from kitplanner.planners.pipeline import Results
from kitplanner.planners.trace_fields import TraceError
from kitplanner.session.autosave import recovery_folder
from kitplanner.session.document import DocumentError
from kitplanner.session.forget import Places, forecast, forget_everybody
from kitplanner.ui.dialogs import ask
from kitplanner.ui.menus import Handler
from kitplanner.ui.trace_guide import TraceGuide
from kitplanner.ui.trace_refs import FIELD, TraceRef, ref_words, traced
from kitplanner.ui.trace_sources import flow_refs, plan_refs, watch_entries, watch_page

if TYPE_CHECKING:
    from kitplanner.ui.main_window import MainWindow
    from kitplanner.ui.workbench import Workbench

CRASH_NOTE = "crash-note.txt"


class Understanding(QObject):
    """Opens the dialogs that explain, and carries out what they ask for."""

    def __init__(self, window: MainWindow, bench: Workbench) -> None:
        super().__init__(bench)
        self._window, self._bench = window, bench
        self._document = window.document
        self.guide = TraceGuide(window)
        self.guide.trace_requested.connect(self.show_trace)
        self.guide.nothing_here.connect(self._on_nothing_here)
        self.guide.watch(window.energy_line, flow_refs)
        self.guide.watch(window.verdict, plan_refs)
        watch_entries(self.guide)
        bench.editing.explain_requested.connect(self._on_explain)
        window.verdict.where_requested.connect(self._on_where)
        window.verdict.ready_requested.connect(self.show_ready)
        window.verdict.problems_requested.connect(self.show_problems)

    def handlers(self) -> dict[str, Handler]:
        """Return what the menu lines of this part do."""
        return {
            "compare": self.compare,
            "problems": self.show_problems,
            "ready": self.show_ready,
            "privacy": self.show_privacy,
            "help": self.show_help,
            "where_from": self.ask_where,
            "meaning": self.ask_meaning,
        }

    def set_answers(self, results: Results) -> None:
        """Take the plan and the answers that the window shows."""
        self.guide.seen.plan, self.guide.seen.results = results.plan, results

    def watch_page(self, key: str, page: Any) -> None:
        """Know the numbers of an answer page."""
        watch_page(self.guide, key, page)
        if hasattr(page, "place_requested"):
            page.place_requested.connect(self._bench.sections.go_to)

    def ask_where(self) -> None:
        """Ask for the number where the keyboard is."""
        self.guide.ask(QApplication.focusWidget())

    def ask_meaning(self) -> None:
        """Say what the field with the keyboard means; the list of words where there is none."""
        refs = self.guide.refs_at(QApplication.focusWidget())
        if refs and refs[0].formula == FIELD:
            self._on_explain(refs[0].ids, "meaning")
        else:
            self._show_word("")

    @Slot(object)
    def show_trace(self, ref: TraceRef) -> None:
        """Show where a number comes from, or say why that is not known."""
        from kitplanner.ui.dialogs.trace_dialog import TraceDialog  # dialogs load when asked for

        seen = self.guide.seen
        plan = self._document.plan if ref.formula == FIELD or seen.results is None else seen.plan
        try:
            found = traced(plan, seen.results or Results(plan=plan, problems=()), ref, seen.point)
            name = ref_words(plan, ref)
        except (TraceError, EditError) as error:
            ask.tell(self._window, str(error))
            return
        dialog = TraceDialog(plan, name, found, self._window)
        dialog.jump_requested.connect(self._bench.sections.go_to)
        dialog.open()

    @Slot()
    def show_problems(self) -> None:
        """List every problem of the plan, each leading to its field."""
        from kitplanner.ui.dialogs.problems_dialog import ProblemsDialog  # as above

        results = self.guide.seen.results
        dialog = ProblemsDialog(self._document.plan, results.problems if results else (), self._window)
        dialog.jump_requested.connect(self._bench.sections.go_to)
        dialog.open()

    @Slot()
    def show_ready(self) -> None:
        """Show the lists for a warning, the dark, the return of power and the end."""
        results = self.guide.seen.results
        if results is None or results.has_errors:
            self.show_problems()
            return
        from kitplanner.ui.dialogs.readiness_dialog import ReadinessDialog  # as above

        self._open(ReadinessDialog(self._document.plan, self._window))

    def show_privacy(self) -> None:
        """Show what is stored about people, the chosen one first."""
        from kitplanner.ui.dialogs.privacy_dialog import PrivacyDialog  # as above

        chosen = self._bench.sections.panel.current_id if self._bench.sections.current == "people" else ""
        dialog = PrivacyDialog(self._document.plan, chosen, self._window)
        dialog.jump_requested.connect(self._bench.sections.go_to)
        dialog.delete_requested.connect(self._on_delete_requested)
        dialog.open()

    def show_help(self, page: str = "") -> None:
        """Open the help at the page for what is in sight."""
        from kitplanner.report.help_pages import page_for  # as above
        from kitplanner.ui.dialogs.help_window import HelpWindow

        dialog = HelpWindow(self._window)
        dialog.show_page(page or page_for(self._place_in_sight()))
        dialog.show()

    def compare(self) -> None:
        """Ask for another plan and show both side by side."""
        folder = self._document.path.parent if self._document.path is not None else Path.home()
        path = ask.ask_open_path(self._window, folder)
        if path is None:
            return
        try:
            other = read_plan(path)
        except PlanFileError as error:
            ask.tell(self._window, str(error))
            return
        from kitplanner.ui.dialogs.compare_dialog import CompareDialog  # as above

        dialog = CompareDialog(other, path.name, self._document.plan, self._document.name, self._window)
        dialog.jump_requested.connect(self._bench.sections.go_to)
        dialog.open()

    def places(self) -> Places:
        """Return where traces of people may lie beside the plan."""
        folder = QStandardPaths.writableLocation(QStandardPaths.StandardLocation.AppLocalDataLocation)
        return Places(recovery_folder(), Path(folder) / CRASH_NOTE)

    def _place_in_sight(self) -> str:
        """Return the section when the keyboard is in the plan, else the page of answers."""
        widget = QApplication.focusWidget()
        in_plan = widget is not None and self._bench.sections.isAncestorOf(widget)
        return self._bench.sections.current if in_plan else self._bench.answers.current

    def _open(self, dialog: QDialog) -> None:
        dialog.open()

    def _show_word(self, word: str) -> None:
        from kitplanner.ui.dialogs.help_window import HelpWindow  # as above

        dialog = HelpWindow(self._window)
        dialog.show_word(word)
        dialog.show()

    @Slot(object, str)
    def _on_explain(self, place: Place, what: str) -> None:
        if what == "trace":
            self.show_trace(TraceRef(FIELD, tuple(place)))
            return
        from kitplanner.ui.dialogs.glossary_dialog import GlossaryDialog  # as above

        try:
            dialog = GlossaryDialog(self._document.plan, tuple(place), self._window)
        except (TraceError, EditError) as error:
            ask.tell(self._window, str(error))
            return
        dialog.word_requested.connect(self._on_word_requested)
        dialog.open()

    @Slot(str)
    def _on_word_requested(self, word: str) -> None:
        self._show_word(word)

    @Slot(QWidget)
    def _on_where(self, button: QWidget) -> None:
        self.guide.ask(button)

    @Slot()
    def _on_nothing_here(self) -> None:
        words = self.tr("There is no number here. Go into a field, a table of answers or the verdict first.")
        ask.tell(self._window, words)

    @Slot()
    def _on_delete_requested(self) -> None:
        from kitplanner.ui.dialogs.privacy_dialog import DeletePeopleDialog  # as above

        dialog = DeletePeopleDialog(forecast(self._document, self.places()), self._window)
        dialog.confirmed.connect(self.delete_people)
        dialog.open()

    @Slot()
    def delete_people(self) -> None:
        """Delete all persons for good; say so when something is left."""
        try:
            forget_everybody(self._document, self._bench.editing, self._bench.autosave, self.places())
        except (DocumentError, ScrubError) as error:
            ask.tell(self._window, str(error))
