"""The answers on the right: one tab per page, built one after the other once the window has been painted."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from msgspec import Struct
from PySide6.QtCore import QTimer, Signal, Slot
from PySide6.QtWidgets import QTabWidget, QVBoxLayout, QWidget

from kitplanner.plan.cautions import cautions_for
from kitplanner.plan.fields import QT_TRANSLATE_NOOP
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.field_text import translate
from kitplanner.session.gates import Gates
from kitplanner.ui.widgets.caution_band import CautionBand


def _effort_page() -> QWidget:
    from kitplanner.ui.pages.effort_page import EffortPage  # draws charts: loads pyqtgraph when shown

    return EffortPage()


def _balance_page() -> QWidget:
    from kitplanner.ui.pages.balance_page import BalancePage  # draws charts: loads pyqtgraph when shown

    return BalancePage()


def _matters_page() -> QWidget:
    from kitplanner.ui.pages.matters_panel import MattersPage  # asked for after the window's first picture

    return MattersPage()


def _rota_page() -> QWidget:
    from kitplanner.ui.pages.rota_page import RotaPage  # a large page: loads after the window's first picture

    return RotaPage()


def _bench_page() -> QWidget:
    from kitplanner.ui.pages.bench_page import BenchPage  # draws charts: loads pyqtgraph when shown

    return BenchPage()


class PageEntry(Struct, frozen=True):
    """One tab: its key, its title, and how its page is made."""

    key: str
    title: str
    make: Callable[[], QWidget]


PAGES: tuple[PageEntry, ...] = (
    PageEntry("effort", QT_TRANSLATE_NOOP("Answers", "Effort"), _effort_page),
    PageEntry("balance", QT_TRANSLATE_NOOP("Answers", "Balance"), _balance_page),
    PageEntry("rota", QT_TRANSLATE_NOOP("Answers", "Rota"), _rota_page),
    PageEntry("matters", QT_TRANSLATE_NOOP("Answers", "What matters"), _matters_page),
    PageEntry("bench", QT_TRANSLATE_NOOP("Answers", "Bench"), _bench_page),
)


# How often and how many times to look whether the first page has its chart; a second at most.
_LOOK_MS, _MOST_LOOKS = 20, 50


class Answers(QTabWidget):
    """Tabs of answer pages.

    Signals
    -------
    page_chosen(key: str)
        The user chose a page.
    page_loaded(key: str)
        A page exists now.
    pages_loaded()
        All pages exist.
    """

    page_chosen = Signal(str)
    page_loaded = Signal(str)
    pages_loaded = Signal()

    def __init__(self, gates: Gates, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._plan = Plan()
        self._results: Results | None = None
        self._gates = gates
        self._holders: dict[str, QWidget] = {}
        self._pages: dict[str, Any] = {}
        self._bands: dict[str, CautionBand] = {}
        self._waiting: list[PageEntry] = []
        self._patience = 0
        # A timer of its own ends with the tabs; a single shot would still come after the window is gone.
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.timeout.connect(self._load_next)
        self.setAccessibleName(self.tr("Answers"))
        self.setDocumentMode(True)
        for entry in PAGES:
            holder = QWidget()
            QVBoxLayout(holder).setContentsMargins(0, 0, 0, 0)
            self._holders[entry.key] = holder
            self.addTab(holder, translate("Answers", entry.title))
        self.currentChanged.connect(self._on_current_changed)

    @property
    def current(self) -> str:
        """Key of the page shown."""
        return PAGES[max(0, self.currentIndex())].key

    def page(self, key: str) -> Any:
        """A page, None while it is not built."""
        return self._pages.get(key)

    def band(self, key: str) -> CautionBand:
        """The cautions at the head of a page that exists."""
        return self._bands[key]

    def choose(self, key: str) -> None:
        """Show a page."""
        index = next((i for i, entry in enumerate(PAGES) if entry.key == key), -1)
        if index >= 0:
            self.setCurrentIndex(index)

    def set_answers(self, plan: Plan, results: Results | None) -> None:
        """Give plan and results to all pages; hidden ones only remember them."""
        self._plan, self._results = plan, results
        for key, band in self._bands.items():
            band.show_cautions(cautions_for(plan, key))
        for page in self._pages.values():
            page.set_answers(plan, results)

    def load_pages(self) -> None:
        """Build the pages one by one, the shown one first, leaving the window alive between them."""
        self._waiting = sorted(PAGES, key=lambda entry: entry.key != self.current)
        self._load_next()

    @Slot()
    def _load_next(self) -> None:
        if not self._waiting:
            self.pages_loaded.emit()
            return
        if self._patience and self.isVisible() and not getattr(self._pages.get(self.current), "is_loaded", True):
            # The page in sight gets its chart before the hidden ones are built.
            self._patience -= 1
            self._timer.start(_LOOK_MS)
            return
        entry = self._waiting.pop(0)
        page: Any = entry.make()
        self._pages[entry.key] = page
        layout = self._holders[entry.key].layout()
        assert layout is not None
        layout.addWidget(page)
        band = CautionBand(self._gates)
        page.column.insertWidget(0, band)
        band.show_cautions(cautions_for(self._plan, entry.key))
        self._bands[entry.key] = band
        page.set_answers(self._plan, self._results)
        self._patience = _MOST_LOOKS if len(self._pages) == 1 else 0
        self.page_loaded.emit(entry.key)
        self._timer.start(0)

    @Slot(int)
    def _on_current_changed(self, _index: int) -> None:
        for key, band in self._bands.items():
            if key != self.current:
                band.leave()
        self.page_chosen.emit(self.current)
