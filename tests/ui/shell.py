"""Makes the whole window for tests, on a plan and with settings of its own."""

from __future__ import annotations

from PySide6.QtCore import QCoreApplication, QEvent
from PySide6.QtWidgets import QApplication

from kitplanner.plan.catalogue import new_plan
from kitplanner.session.document import PlanDocument
from kitplanner.session.settings import AppSettings
from kitplanner.ui import theme
from kitplanner.ui.main_window import MainWindow


def make_window(kind="camp", plan=None, settings=None) -> MainWindow:
    """A window on a demo, not yet shown."""
    document = PlanDocument(new_plan(kind) if plan is None else plan)
    window = MainWindow(document, settings or AppSettings())
    document.setParent(window)
    return window


def let_go(window) -> None:
    """Close a window without questions and let Qt delete it."""
    window.document.stack.setClean()
    window.close()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    # Colours and text size belong to the application and outlive a window.
    theme.apply(QApplication.instance(), "light", 1.0)


def wait_until_loaded(window, qtbot) -> None:
    """Wait until all pages stand and the slow answers are there."""
    qtbot.waitUntil(
        lambda: all(window.desk.answers.page(key) is not None for key in ("effort", "balance", "bench")), timeout=30000
    )
    qtbot.waitUntil(lambda: not window.recompute.is_busy, timeout=30000)
