"""Ways to the Rota page from the rest of the window: what would make the plan fit, and the rota on paper."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Slot

from kitplanner.ui.dialogs import ask

if TYPE_CHECKING:
    from kitplanner.ui.main_window import MainWindow
    from kitplanner.ui.menus import Handler
    from kitplanner.ui.workbench import Workbench

ROTA_PAGE = "rota"


class RotaLinks(QObject):
    """Opens the Rota page and has it do what was asked for elsewhere; a page that is not built yet does it then."""

    def __init__(self, window: MainWindow, bench: Workbench) -> None:
        super().__init__(bench)
        self._window, self._bench = window, bench
        self._is_wanted = False
        window.verdict.fit_requested.connect(self.show_fit)

    def handlers(self) -> dict[str, Handler]:
        """Return what the menu lines of this part do."""
        return {"print_rota": self.print_rota}

    @Slot()
    def show_fit(self) -> None:
        """Go to the Rota page and look for what would make the plan fit."""
        self._bench.answers.choose(ROTA_PAGE)
        page = self._bench.answers.page(ROTA_PAGE)
        self._is_wanted = page is None
        if page is not None:
            page.catch_up()
            page.desk.find_levers()

    @Slot(str)
    def page_loaded(self, key: str) -> None:
        """Do what was asked for before the page was there."""
        if key == ROTA_PAGE and self._is_wanted:
            self.show_fit()

    def print_rota(self) -> None:
        """Show the rota of the page, or else the plan's, as it will be printed."""
        from kitplanner.ui.pages.rota_export import print_rota, wall_of  # the planners' records are loaded late

        page, plan = self._bench.answers.page(ROTA_PAGE), self._window.document.plan
        proposal = page.tasks.proposed() if page is not None and page.desk.plan is plan else None
        if wall_of(plan, proposal) is None:
            ask.tell(self._window, self.tr("There is no rota yet. Plan one on the Rota page, then print it."))
        else:
            print_rota(self._window, plan, proposal)
