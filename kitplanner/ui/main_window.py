"""The window: composition only. Parts know nothing of each other; here their signals meet."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, QEvent, Qt, QTimer, Slot
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QMainWindow, QSplitter, QVBoxLayout, QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.autosave import Autosave, Recovered, find_recovered, recovery_folder
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.session.gates import Gates
from kitplanner.session.recompute import Recompute
from kitplanner.session.settings import AppSettings
from kitplanner.ui.answers import Answers
from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.about import TextDialog, about_text, keys_text
from kitplanner.ui.energy_line import EnergyLine
from kitplanner.ui.file_actions import FileActions
from kitplanner.ui.guard import guarded
from kitplanner.ui.menus import Handler, Menus
from kitplanner.ui.panels.sections_pane import SectionsPane
from kitplanner.ui.station_chain import StationChain
from kitplanner.ui.verdict_strip import VerdictStrip
from kitplanner.ui.view_settings import ViewSettings
from kitplanner.ui.widgets.plain import restyle_labels
from kitplanner.ui.widgets.recovery_band import RecoveryBand

_FIRST_SIZE = (1280, 800)
# Below this width, in average characters of the font, the side list of sections gives way to a box.
_WIDE_CHARS = 165
_FIRST_SECTION = "people"


class MainWindow(QMainWindow):
    """Energy line on top, the plan on the left, the answers on the right, the verdict at the bottom."""

    # Qt calls some overrides from inside the base class's constructor.
    _is_ready = False

    def __init__(self, document: PlanDocument, settings: AppSettings, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self._has_painted = False
        self._first_paint = QTimer(self)
        self._first_paint.setSingleShot(True)
        self._first_paint.timeout.connect(self._after_first_paint)
        self.document, self._settings = document, settings
        self.editing = Editing(document, self)
        self.gates = Gates(document, settings, self)
        self.recompute = Recompute(document, parent=self)
        self.autosave = Autosave(document, recovery_folder(), self)
        self.files = FileActions(document, settings, self)
        self.energy_line = EnergyLine(self)
        self.sections = SectionsPane(self.editing, self.gates, self)
        self.answers = Answers(self.gates, self)
        self.verdict = VerdictStrip(self)
        self.recovery = RecoveryBand(self)
        self.chain = StationChain(self.energy_line, self)
        self.view = ViewSettings(settings, self)
        self.menus = Menus(self, document.stack, self._handlers())
        self._build()
        self._connect()
        self._begin()
        self._is_ready = True

    def _handlers(self) -> dict[str, Handler]:
        return {
            "open": self.files.open_chosen,
            "save": self.files.save,
            "save_as": self.files.save_as,
            "print_effort": self._print_effort,
            "pdf_effort": self._export_effort,
            "quit": self.close,
            "add": self._add,
            "duplicate": self._duplicate,
            "remove": self._remove,
            "next_problem": self.sections.go_to_next_problem,
            "to_table": self._focus_table,
            "to_line": self.energy_line.setFocus,
            "keys": self._show_keys,
            "about": self._show_about,
        }

    def _build(self) -> None:
        self.setAcceptDrops(True)
        self._splitter = QSplitter(Qt.Orientation.Horizontal, self)
        self._splitter.setChildrenCollapsible(False)
        self._splitter.addWidget(self.sections)
        self._splitter.addWidget(self.answers)
        self._splitter.setStretchFactor(0, 9)
        self._splitter.setStretchFactor(1, 12)
        central = QWidget(self)
        layout = QVBoxLayout(central)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.recovery)
        layout.addWidget(self.energy_line)
        layout.addWidget(self._splitter, 1)
        layout.addWidget(self.verdict)
        self.setCentralWidget(central)
        self.resize(*_FIRST_SIZE)
        self.restoreGeometry(self._settings.state("window"))
        if not self._splitter.restoreState(self._settings.state("split")):
            self._splitter.setSizes([610, 670])

    def _connect(self) -> None:
        document = self.document
        document.plan_changed.connect(self._on_plan_changed)
        document.file_changed.connect(self._on_file_changed)
        document.edit_refused.connect(self._on_edit_refused)
        self.autosave.failed.connect(self._on_edit_refused)
        document.stack.cleanChanged.connect(self._on_clean_changed)
        self.recompute.results_changed.connect(self._on_results_changed)
        self.energy_line.section_requested.connect(self.sections.show_section)
        self.energy_line.station_requested.connect(self._on_station_requested)
        self.energy_line.day_requested.connect(self.chain.show_day)
        self.sections.record_chosen.connect(self._on_record_chosen)
        self.sections.section_chosen.connect(self._on_section_chosen)
        self.answers.page_chosen.connect(self._on_page_chosen)
        self.answers.page_loaded.connect(self._on_page_loaded)
        self.files.recent_changed.connect(self._show_recent)
        self.menus.new_requested.connect(self.files.start_new)
        self.menus.recent_requested.connect(self.files.open_path)
        self.menus.section_requested.connect(self.sections.show_section)
        self.menus.scheme_requested.connect(self.view.choose_scheme)
        self.menus.text_percent_requested.connect(self.view.choose_text_percent)
        self.view.changed.connect(self._on_view_changed)
        self.recovery.restore_requested.connect(self._on_restore_requested)
        self.recovery.discard_requested.connect(self.files.discard_recovered)

    def _begin(self) -> None:
        self.sections.show_section(self._settings.section or _FIRST_SECTION)
        self.answers.choose(self._settings.page)
        if self.document.path is None and self.document.plan == Plan():
            self.files.start_new("camp")
        else:
            self.recompute.run_now()
        if self.document.path is not None:
            self._settings.add_recent(self.document.path)
        self._show_recent()
        self._on_view_changed()
        self._on_file_changed(self.document.path)

    @Slot()
    def _after_first_paint(self) -> None:
        """Build what the first picture did not need: forms, then pages and their charts."""
        self.sections.panel.focus_table()
        self.answers.load_pages()
        self.sections.open_details()
        self.recovery.offer(find_recovered(recovery_folder()))

    @Slot(object, object)
    def _on_plan_changed(self, _before: Plan, after: Plan) -> None:
        self.sections.show_plan(after)

    @Slot(object)
    def _on_results_changed(self, results: Results) -> None:
        plan = results.plan
        self.sections.show_problems(results.problems)
        self.energy_line.set_flow(results.flow)
        self.verdict.set_answers(plan, results)
        self.answers.set_answers(plan, results)
        self.chain.refresh(plan)

    @Slot(object)
    def _on_file_changed(self, _path: Path | None) -> None:
        self.setWindowTitle(f"{self.files.name()}[*]")
        self.setWindowFilePath(str(self.document.path) if self.document.path is not None else "")
        self._on_clean_changed(self.document.stack.isClean())

    @Slot(bool)
    def _on_clean_changed(self, clean: bool) -> None:
        self.setWindowModified(not clean)

    @Slot(str)
    def _on_edit_refused(self, sentence: str) -> None:
        ask.tell(self, sentence)

    @Slot(str)
    def _on_station_requested(self, station_id: str) -> None:
        self.sections.show_section("stations")
        self.sections.panel.choose(station_id)
        self.chain.show_station(self.document.plan, station_id)

    @Slot(str, str)
    def _on_record_chosen(self, section: str, record_id: str) -> None:
        if section == "stations" and record_id:
            self.chain.show_station(self.document.plan, record_id)

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
        if hasattr(page, "point_changed"):
            page.point_changed.connect(self.chain.show_point)

    @Slot(object)
    def _on_restore_requested(self, recovered: Recovered) -> None:
        if self.files.restore(recovered):
            self.recovery.done()

    @Slot()
    def _show_recent(self) -> None:
        self.menus.show_recent(self._settings.recent_files)

    @Slot()
    def _on_view_changed(self) -> None:
        self.menus.show_view(self._settings.scheme, self._settings.text_percent)
        restyle_labels(self)
        self.sections.restyle()
        self._fit()

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

        print_effort(self, self.document.plan, self.recompute.results)

    def _export_effort(self) -> None:
        from kitplanner.ui.printing.print_effort import export_effort_pdf  # as above

        path = ask.ask_pdf_path(self, self.files.pdf_suggestion(self.tr("effort")))
        if path is None:
            return
        try:
            export_effort_pdf(path, self.document.plan, self.recompute.results)
        except OSError as error:
            sentence = self.tr("{name} could not be written ({reason}). Choose another place.")
            ask.tell(self, sentence.format(name=path.name, reason=error.strerror or error))

    def _show_keys(self) -> None:
        TextDialog(self.tr("Keys"), keys_text(self.menuBar()), self).open()

    def _show_about(self) -> None:
        TextDialog(self.tr("About Kitplanner"), about_text(), self).open()

    def _fit(self) -> None:
        chars = self.width() / max(1, self.fontMetrics().averageCharWidth())
        self.sections.use_wide(chars >= _WIDE_CHARS)

    @guarded()
    def paintEvent(self, event: QPaintEvent) -> None:
        """Begin the slower parts after the first picture."""
        super().paintEvent(event)
        if not self._has_painted:
            self._has_painted = True
            self._first_paint.start()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Choose the way to switch sections that fits the width."""
        super().resizeEvent(event)
        self._fit()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow colours and text size set from outside."""
        super().changeEvent(event)
        if self._is_ready and event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange):
            self._on_view_changed()

    @guarded()
    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Take plan files dropped on the window."""
        if _dropped_plan(event) is not None:
            event.acceptProposedAction()

    @guarded()
    def dropEvent(self, event: QDropEvent) -> None:
        """Open a dropped plan file."""
        path = _dropped_plan(event)
        if path is not None:
            event.acceptProposedAction()
            self.files.open_path(path)

    @guarded()
    def closeEvent(self, event: QCloseEvent) -> None:
        """Ask about unsaved changes, then let go of worker, recovery file and lock."""
        if not self.files.may_leave():
            event.ignore()
            return
        self._settings.keep_state("window", QByteArray(self.saveGeometry()))
        self._settings.keep_state("split", QByteArray(self._splitter.saveState()))
        self._settings.sync()
        self.recompute.close()
        self.autosave.close()
        self.document.close()
        event.accept()


def _dropped_plan(event: QDropEvent) -> Path | None:
    """Return the first dropped file that may be a plan."""
    paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
    return next((path for path in paths if path.suffix == ask.SUFFIX), None)
