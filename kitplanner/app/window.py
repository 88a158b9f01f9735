"""Puts the window together: application, look, document, exception hooks, collector."""

from __future__ import annotations

import os
import sys
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QLibraryInfo, QObject, QStandardPaths, Qt, Signal, Slot
from PySide6.QtWidgets import QApplication, QMessageBox

from kitplanner import __version__
from kitplanner.app.collector import WindowCollector
from kitplanner.app.crash import CrashHooks
from kitplanner.app.qt_check import missing_plugin_library
from kitplanner.session.document import DocumentError, PlanDocument
from kitplanner.session.settings import AppSettings
from kitplanner.ui import theme
from kitplanner.ui.main_window import MainWindow

APPLICATION = "Kitplanner"
DESKTOP_FILE = "org.kitplanner.Kitplanner"
EXIT_CANNOT_OPEN = 2


class FaultReporter(QObject):
    """Shows one sentence about a fault, from whatever thread it came.

    Signals
    -------
    told(sentence: str)
        A fault is to be shown.
    """

    told = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.told.connect(self._on_told, Qt.ConnectionType.QueuedConnection)

    def tell(self, sentence: str) -> None:
        """Ask for the sentence to be shown; may be called from any thread."""
        self.told.emit(sentence)

    @Slot(object)
    def _on_told(self, sentence: object) -> None:
        box = QMessageBox(QApplication.activeWindow())
        box.setIcon(QMessageBox.Icon.Warning)
        box.setWindowTitle(APPLICATION)
        box.setTextFormat(Qt.TextFormat.PlainText)
        box.setText(str(sentence))
        box.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        box.open()


def make_application(arguments: list[str]) -> QApplication:
    """The application object with its names; sharp on any scale of the screen."""
    QApplication.setHighDpiScaleFactorRoundingPolicy(Qt.HighDpiScaleFactorRoundingPolicy.PassThrough)
    app = QApplication(arguments)
    app.setOrganizationName(APPLICATION)
    app.setApplicationName(APPLICATION)
    app.setApplicationDisplayName(APPLICATION)
    app.setApplicationVersion(__version__)
    app.setDesktopFileName(DESKTOP_FILE)
    return app


@dataclass(frozen=True)
class Desk:
    """Everything that must live as long as the window."""

    app: QApplication
    document: PlanDocument
    window: MainWindow
    collector: WindowCollector


def prepare(path: Path | None) -> Desk:
    """Build the window on a plan, not yet shown.

    Raises
    ------
    DocumentError
        With one sentence, when the plan cannot be opened.
    """
    app = make_application([APPLICATION])
    reporter = FaultReporter(app)
    notes = Path(QStandardPaths.writableLocation(QStandardPaths.StandardLocation.AppLocalDataLocation))
    CrashHooks(notes, reporter.tell).install()
    settings = AppSettings()
    theme.apply(app, settings.scheme, settings.text_percent / 100)
    document = PlanDocument()
    if path is not None:
        document.open_file(path)
    collector = WindowCollector(app)
    collector.start()
    return Desk(app, document, MainWindow(document, settings), collector)


def run(path: Path | None) -> int:
    """Open the window on a plan and stay until it is closed; return the exit code."""
    plugins = Path(QLibraryInfo.path(QLibraryInfo.LibraryPath.PluginsPath)) / "platforms"
    refusal = missing_plugin_library(os.environ, plugins)
    if refusal is not None:
        return _refuse(refusal)
    try:
        desk = prepare(path)
    except DocumentError as error:
        return _refuse(str(error))
    desk.window.show()
    code = desk.app.exec()
    desk.collector.stop()
    desk.document.close()
    return code


def _refuse(sentence: str) -> int:
    print(f"kitplanner: {sentence}", file=sys.stderr)
    return EXIT_CANNOT_OPEN
