"""The window: energy line and verdict first; everything else once they have been painted."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QEvent, Qt, QTimer, Slot
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QApplication, QMainWindow, QVBoxLayout, QWidget

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.document import PlanDocument
from kitplanner.session.recompute import Recompute
from kitplanner.session.settings import AppSettings
from kitplanner.ui.energy_line import EnergyLine
from kitplanner.ui.guard import guarded
from kitplanner.ui.reading_order import bring_into_sight, put_in_reading_order
from kitplanner.ui.verdict_strip import VerdictStrip

if TYPE_CHECKING:
    from kitplanner.ui.workbench import Workbench

_FIRST_SIZE = (1280, 800)
_SUFFIX = ".kitplan"
_TABLES = (".csv", ".tsv", ".xlsx", ".xlsm", ".xls", ".ods")


class MainWindow(QMainWindow):
    """Energy line on top, the workbench in the middle, the verdict at the bottom."""

    # Qt calls some overrides from inside the base class's constructor.
    _is_ready = False
    # True where the window began with an example because there was nothing to open.
    is_on_example = False

    def __init__(self, document: PlanDocument, settings: AppSettings, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setAcceptDrops(True)
        self.document = document
        self.settings = settings
        self.recompute = Recompute(document, parent=self)
        self.energy_line = EnergyLine(self)
        self.verdict = VerdictStrip(self)
        self.bench: Workbench | None = None
        self._has_painted = False
        self._first_paint = QTimer(self)
        self._first_paint.setSingleShot(True)
        self._first_paint.timeout.connect(self.load_workbench)
        self._build()
        self._connect()
        self._begin()
        self._is_ready = True

    @property
    def desk(self) -> Workbench:
        """The workbench, built now if the first picture has not been painted yet."""
        self.load_workbench()
        assert self.bench is not None
        return self.bench

    @Slot()
    def load_workbench(self) -> None:
        """Build menus, sections and answers; a second call does nothing."""
        if self.bench is not None:
            return
        from kitplanner.ui.workbench import Workbench  # the first picture does not wait for it

        self.bench = bench = Workbench(self)
        self._layout.replaceWidget(self._room, bench)
        self._room.deleteLater()
        self._layout.setStretchFactor(bench, 1)
        self._layout.insertWidget(0, bench.recovery)
        bench.begin()

    def _build(self) -> None:
        central = QWidget(self)
        self._room = QWidget(central)
        self._layout = QVBoxLayout(central)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(0)
        self._layout.addWidget(self.energy_line)
        self._layout.addWidget(self._room, 1)
        self._layout.addWidget(self.verdict)
        self.setCentralWidget(central)
        # The menus come later; the bar keeps their place so that nothing jumps.
        self.menuBar().setMinimumHeight(self.fontMetrics().height() + 6)
        self.resize(*_FIRST_SIZE)
        self.restoreGeometry(self.settings.state("window"))

    def _connect(self) -> None:
        self.document.file_changed.connect(self._on_file_changed)
        self.document.stack.cleanChanged.connect(self._on_clean_changed)
        self.recompute.results_changed.connect(self._on_results_changed)

    def _begin(self) -> None:
        if self.document.path is None and self.document.plan == Plan():
            self._begin_with_example()
        else:
            self.recompute.run_now()
        self._on_file_changed(self.document.path)

    def _begin_with_example(self) -> None:
        """Show a plan that can be changed at once instead of an empty window."""
        self.is_on_example = True
        try:
            self.document.new_plan(new_plan("camp"))
        except (PlanFileError, OSError):
            # An installation without its examples still works; the File menu says what is missing.
            self.recompute.run_now()

    @Slot(object)
    def _on_results_changed(self, results: Results) -> None:
        self.energy_line.set_flow(results.flow, has_stores=bool(results.plan.stores))
        self.verdict.set_answers(results.plan, results)

    @Slot(object)
    def _on_file_changed(self, _path: Path | None) -> None:
        self.setWindowTitle(f"{self.document.name}[*]")
        self.setWindowFilePath(str(self.document.path) if self.document.path is not None else "")
        self._on_clean_changed(self.document.stack.isClean())

    @Slot(bool)
    def _on_clean_changed(self, clean: bool) -> None:
        self.setWindowModified(not clean)

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
        if self._is_ready and self.bench is not None:
            self.bench.fit()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow colours and text size."""
        super().changeEvent(event)
        follows = event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange)
        if follows and self._is_ready and self.bench is not None:
            self.bench.restyle()

    @guarded(False)
    def focusNextPrevChild(self, forward: bool) -> bool:
        """Let the Tab key follow the reading order, also through parts that came later."""
        put_in_reading_order(self)
        moved = bool(super().focusNextPrevChild(forward))
        bring_into_sight(QApplication.focusWidget())
        return moved

    @guarded()
    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Take plan files and tables dropped on the window."""
        if _dropped_file(event) is not None:
            event.acceptProposedAction()

    @guarded()
    def dropEvent(self, event: QDropEvent) -> None:
        """Open a dropped plan file, or show what the rows of a dropped table would do."""
        path = _dropped_file(event)
        if path is not None:
            event.acceptProposedAction()
            if path.suffix.lower() in _TABLES:
                self.desk.tables.import_path(path, self.desk.sections.current)
            else:
                self.desk.files.open_path(path)

    @guarded()
    def closeEvent(self, event: QCloseEvent) -> None:
        """Ask about unsaved changes, then let go of worker, recovery file and lock."""
        if self.bench is not None and not self.bench.may_close():
            event.ignore()
            return
        self.settings.keep_state("window", QByteArray(self.saveGeometry()))
        self.settings.sync()
        self._first_paint.stop()
        self.recompute.close()
        self.document.close()
        event.accept()


def _dropped_file(event: QDropEvent) -> Path | None:
    """Return the first dropped file that may be a plan or a table."""
    paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
    return next((path for path in paths if path.suffix == _SUFFIX or path.suffix.lower() in _TABLES), None)
