"""The middle of the window with its menus: composition only. Parts know nothing of each other; here they meet."""

from __future__ import annotations

import functools
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, Qt, Slot
from PySide6.QtWidgets import QSplitter

from kitplanner.plan.edits import Edit
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.autosave import Autosave, Recovered, find_recovered, recovery_folder
from kitplanner.session.editing import Editing
from kitplanner.session.gates import Gates
from kitplanner.ui.answers import Answers
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.about import TextDialog, about_text, keys_text
from kitplanner.ui.file_actions import FileActions
from kitplanner.ui.focus_ring import FocusRing
from kitplanner.ui.menus import Handler, Menus
from kitplanner.ui.panels.section_entry import ROW_ACTIONS
from kitplanner.ui.panels.sections_pane import SectionsPane
from kitplanner.ui.rota_links import RotaLinks
from kitplanner.ui.station_chain import StationChain
from kitplanner.ui.table_actions import TableActions
from kitplanner.ui.understanding import Understanding
from kitplanner.ui.view_settings import ViewSettings
from kitplanner.ui.widgets.plain import restyle_labels
from kitplanner.ui.widgets.recovery_band import RecoveryBand

if TYPE_CHECKING:
    from kitplanner.ui.main_window import MainWindow

# Below this width, in average characters of the font, the side list of sections gives way to a box.
_WIDE_CHARS = 165
_FIRST_SECTION = "people"
_FIRST_SPLIT = [610, 670]


class Workbench(QSplitter):
    """The plan on the left, the answers on the right, and what the menus do with them."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(Qt.Orientation.Horizontal, window)
        self._window = window
        self._document, self._settings = window.document, window.settings
        self.editing = Editing(self._document, self)
        self.gates = Gates(self._document, self._settings, self)
        self.autosave = Autosave(self._document, recovery_folder(), self)
        self.files = FileActions(self._document, self._settings, window)
        self.tables = TableActions(self._document, window)
        self.sections = SectionsPane(self.editing, self.gates, self)
        self.answers = Answers(self.gates, self)
        self.recovery = RecoveryBand(window)
        self.focus_ring = FocusRing(window)
        self.chain = StationChain(window.energy_line, self)
        self.view = ViewSettings(self._settings, self)
        self.understanding = Understanding(window, self)
        self.rota_links = RotaLinks(window, self)
        self.menus = Menus(window, self._document.stack, self._handlers())
        self.setChildrenCollapsible(False)
        self.addWidget(self.sections)
        self.addWidget(self.answers)
        self.setStretchFactor(0, 9)
        self.setStretchFactor(1, 12)
        if not self.restoreState(self._settings.state("split")):
            self.setSizes(_FIRST_SPLIT)
        self.sections.keep_split(self._settings.state("table_split"))
        self._connect()

    def begin(self) -> None:
        """Show the plan as it is now, then build the pages one after the other."""
        self.sections.show_section(self._settings.section or _FIRST_SECTION)
        self.answers.choose(self._settings.page)
        if self._document.path is not None:
            self._settings.add_recent(self._document.path)
        self._show_recent()
        if self._window.recompute.results is not None:
            self._on_results_changed(self._window.recompute.results)
        self.restyle()
        self.sections.panel.focus_table()
        self.sections.open_details()
        self.answers.load_pages()
        recovered = find_recovered(recovery_folder())
        self.recovery.offer(recovered)
        if self._window.is_on_example and not self._settings.has_started and not recovered:
            self._settings.has_started = True
            self.files.offer_start()

    def may_close(self) -> bool:
        """Ask about unsaved changes; when the window may close, keep its state and remove the recovery file."""
        if not self.files.may_leave():
            return False
        self._settings.keep_state("split", QByteArray(self.saveState()))
        self._settings.keep_state("table_split", self.sections.split)
        self.autosave.close()
        return True

    @Slot()
    def restyle(self) -> None:
        """Follow colours and text size."""
        self.menus.show_view(self._settings.scheme, self._settings.text_percent)
        restyle_labels(self._window)
        self.sections.restyle()
        self.fit()

    def fit(self) -> None:
        """Choose the way to switch sections that fits the width."""
        chars = self._window.width() / max(1, self.fontMetrics().averageCharWidth())
        self.sections.use_wide(chars >= _WIDE_CHARS)

    def _handlers(self) -> dict[str, Handler]:
        return {
            "start": self.files.offer_start,
            "open": self.files.open_chosen,
            "import": self._import_table,
            "export": self._export_table,
            **{name: functools.partial(self._handle_rows, name) for name in ROW_ACTIONS},
            "save": self.files.save,
            "save_as": self.files.save_as,
            "print_effort": self._print_effort,
            "pdf_effort": self._export_effort,
            "quit": self._window.close,
            "add": self._add,
            "duplicate": self._duplicate,
            "remove": self._remove,
            "next_problem": self.sections.go_to_next_problem,
            "to_table": self._focus_table,
            "to_line": self._window.energy_line.setFocus,
            **self.understanding.handlers(),
            **self.rota_links.handlers(),
            "keys": self._show_keys,
            "about": self._show_about,
        }

    def _connect(self) -> None:
        document, line = self._document, self._window.energy_line
        document.plan_changed.connect(self._on_plan_changed)
        document.edit_refused.connect(self._on_refused)
        self.autosave.failed.connect(self._on_refused)
        self._window.recompute.results_changed.connect(self._on_results_changed)
        line.section_requested.connect(self.sections.show_section)
        line.station_requested.connect(self._on_station_requested)
        line.day_requested.connect(self.chain.show_day)
        self.sections.record_chosen.connect(self._on_record_chosen)
        self.sections.section_chosen.connect(self._on_section_chosen)
        self.answers.page_chosen.connect(self._on_page_chosen)
        self.answers.page_loaded.connect(self._on_page_loaded)
        self.answers.page_loaded.connect(self.rota_links.page_loaded)
        self.tables.rows_taken.connect(self.sections.show_section)
        self.files.recent_changed.connect(self._show_recent)
        self.menus.new_requested.connect(self.files.start_new)
        self.menus.recent_requested.connect(self.files.open_path)
        self.menus.section_requested.connect(self.sections.show_section)
        self.menus.scheme_requested.connect(self.view.choose_scheme)
        self.menus.text_percent_requested.connect(self.view.choose_text_percent)
        self.view.changed.connect(self.restyle)
        self.recovery.restore_requested.connect(self._on_restore_requested)
        self.recovery.discard_requested.connect(self.files.discard_recovered)

    @Slot(object, object)
    def _on_plan_changed(self, _before: Plan, after: Plan) -> None:
        self.sections.show_plan(after)

    @Slot(object)
    def _on_results_changed(self, results: Results) -> None:
        self.sections.show_problems(results.problems)
        self.answers.set_answers(results.plan, results)
        self.understanding.set_answers(results)
        self.chain.refresh(results.plan)

    @Slot(str)
    def _on_refused(self, sentence: str) -> None:
        ask.tell(self._window, sentence)

    @Slot(str)
    def _on_station_requested(self, station_id: str) -> None:
        self.sections.show_section("stations")
        self.sections.panel.choose(station_id)
        self.chain.show_station(self._document.plan, station_id)

    @Slot(str, str)
    def _on_record_chosen(self, section: str, record_id: str) -> None:
        if section == "stations" and record_id:
            self.chain.show_station(self._document.plan, record_id)

    @Slot(str)
    def _on_section_chosen(self, key: str) -> None:
        self._settings.section = key
        if key != "stations":
            self.chain.show_day()

    @Slot(str)
    def _on_page_chosen(self, key: str) -> None:
        self._settings.page = key

    @Slot(str)
    def _on_page_loaded(self, key: str) -> None:
        page = self.answers.page(key)
        self.understanding.watch_page(key, page)
        if hasattr(page, "point_changed"):
            page.point_changed.connect(self.chain.show_point)
        if hasattr(page, "edit_requested"):
            page.edit_requested.connect(self._on_page_edit)

    @Slot(object, str, str)
    def _on_page_edit(self, edit: Edit, text: str, merge_key: str) -> None:
        self._document.apply(edit, text, merge_key or None)

    @Slot(object)
    def _on_restore_requested(self, recovered: Recovered) -> None:
        if self.files.restore(recovered):
            self.recovery.done()

    @Slot()
    def _show_recent(self) -> None:
        self.menus.show_recent(self._settings.recent_files)

    def _import_table(self) -> None:
        self.tables.import_chosen(self.sections.current)

    def _export_table(self) -> None:
        self.tables.export_chosen(self.sections.current)

    def _handle_rows(self, name: str) -> None:
        self.sections.panel.handle_rows(name)

    def _add(self) -> None:
        self.sections.panel.add_one()

    def _duplicate(self) -> None:
        self.sections.panel.duplicate_chosen()

    def _remove(self) -> None:
        self.sections.panel.remove_chosen()

    def _focus_table(self) -> None:
        self.sections.panel.focus_table()

    def _print_effort(self) -> None:
        from kitplanner.ui.printing.print_effort import print_effort  # the printer's libraries are rarely needed

        print_effort(self._window, self._document.plan, self._window.recompute.results)

    def _export_effort(self) -> None:
        from kitplanner.ui.printing.print_effort import export_effort_pdf  # as above

        path = ask.ask_pdf_path(self._window, self.files.pdf_suggestion(self.tr("effort")))
        if path is None:
            return
        try:
            export_effort_pdf(path, self._document.plan, self._window.recompute.results)
        except OSError as error:
            sentence = self.tr("{name} could not be written ({reason}). Choose another place.")
            ask.tell(self._window, sentence.format(name=path.name, reason=error.strerror or error))

    def _show_keys(self) -> None:
        TextDialog(self.tr("Keys"), keys_text(self._window.menuBar()), self._window).open()

    def _show_about(self) -> None:
        TextDialog(self.tr("About Kitplanner"), about_text(), self._window).open()
