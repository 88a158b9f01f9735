"""One look and one clean desk for every test.

Qt runs offscreen with a pinned style, font and locale, so pictures and texts are the same on every machine; settings
and standard paths never touch the user's own. A test fails if it leaves a thread or a top-level window behind.
"""

from __future__ import annotations

import gc
import os
import sys
import threading
import time
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import settings

# No time limit per example: the speed of a shared machine is no property of the code.
settings.register_profile("kitplanner", deadline=None)
settings.load_profile("kitplanner")

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
os.environ["QT_SCALE_FACTOR"] = "1"
os.environ["LC_ALL"] = "C.UTF-8"
os.environ["LANGUAGE"] = "C"

THREAD_PATIENCE_S = 3.0
# Qt keeps one tool tip label alive after the first tip; it belongs to the application.
KEPT_BY_QT = ("QTipLabel",)


@pytest.fixture(scope="session")
def qapp_args() -> list[str]:
    return ["kitplanner-tests", "-style", "Fusion"]


@pytest.fixture(scope="session")
def qapp(qapp_args: list[str], pytestconfig: pytest.Config, tmp_path_factory: pytest.TempPathFactory):
    """The application with the pinned look; named like the real one, in test-mode paths."""
    from PySide6.QtCore import QLocale, QStandardPaths
    from PySide6.QtGui import QFont, QFontDatabase
    from PySide6.QtWidgets import QApplication

    from kitplanner.plan.shipped import resource

    QStandardPaths.setTestModeEnabled(True)
    QLocale.setDefault(QLocale.c())
    app = QApplication.instance() or QApplication(qapp_args)
    app.setOrganizationName("kitplanner-tests")
    app.setApplicationName("kitplanner-tests")
    app.setCursorFlashTime(0)
    for name in ("fonts/DejaVuSans.ttf", "fonts/DejaVuSans-Bold.ttf"):
        assert QFontDatabase.addApplicationFont(str(resource(name))) >= 0, name
    app.setFont(QFont("DejaVu Sans", 10))
    assert ".qttest" in QStandardPaths.writableLocation(QStandardPaths.StandardLocation.AppDataLocation)
    return app


@pytest.fixture(autouse=True)
def _no_thread_left() -> Iterator[None]:
    before = set(threading.enumerate())
    yield
    end = time.monotonic() + THREAD_PATIENCE_S
    left = [thread for thread in threading.enumerate() if thread not in before and thread.is_alive()]
    while left and time.monotonic() < end:
        time.sleep(0.01)
        left = [thread for thread in left if thread.is_alive()]
    assert not left, f"the test left threads running: {', '.join(thread.name for thread in left)}"


@pytest.fixture(autouse=True)
def _clean_desk(request: pytest.FixtureRequest) -> Iterator[None]:
    """For tests that use Qt: fresh settings, collection in this thread only, no window left behind."""
    if not {"qapp", "qtbot", "qtmodeltester"} & set(request.fixturenames):
        yield
        return
    request.getfixturevalue("qapp")
    _fresh_settings(request.getfixturevalue("tmp_path"))
    before = {id(widget) for widget in _windows()}
    # The cyclic collector runs in whatever thread allocates; freeing a widget in a worker kills the process.
    gc.disable()
    try:
        yield
    finally:
        _settle()
        gc.collect()
        _settle()
        gc.enable()
    left = [widget for widget in _windows() if id(widget) not in before]
    names = [f"{type(widget).__name__} {widget.objectName()!r} {widget.windowTitle()!r}" for widget in left]
    for widget in left:
        widget.close()
        widget.deleteLater()
    _settle()
    assert not names, f"the test left windows: {'; '.join(names)}"


def _fresh_settings(folder: Path) -> None:
    from PySide6.QtCore import QSettings

    for kind in (QSettings.Format.NativeFormat, QSettings.Format.IniFormat):
        QSettings.setPath(kind, QSettings.Scope.UserScope, str(folder / "settings"))
        QSettings.setPath(kind, QSettings.Scope.SystemScope, str(folder / "system-settings"))


def _windows() -> list:
    from PySide6.QtWidgets import QApplication

    return [
        widget
        for widget in QApplication.topLevelWidgets()
        if widget.parent() is None and widget.metaObject().className() not in KEPT_BY_QT
    ]


def _settle() -> None:
    """Deliver the deletions that processing events alone leaves waiting."""
    from PySide6.QtCore import QCoreApplication, QEvent

    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    QCoreApplication.processEvents()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)


@pytest.fixture(autouse=True)
def _no_unraisable_in_hooks() -> Iterator[None]:
    """The hooks that the program sets at start-up never outlive a test."""
    before = (sys.excepthook, threading.excepthook)
    yield
    sys.excepthook, threading.excepthook = before
