"""The whole window, opened, looked at and closed many times: nothing stays."""

from __future__ import annotations

import gc

import pytest
import shiboken6
from PySide6.QtCore import QCoreApplication, QEvent
from PySide6.QtWidgets import QApplication

from kitplanner.ui.answers import PAGES
from tests.ui.shell import let_go, make_window

MOST_MORE = 10


def once() -> None:
    """One window with its menus, sections and all its pages."""
    window = make_window("camp")
    window.show()
    answers = window.desk.answers
    while any(answers.page(entry.key) is None for entry in PAGES):
        QApplication.processEvents()
    let_go(window)


def counted() -> tuple[int, int]:
    """Living wrappers and windows, after everything that may go has gone."""
    for _ in range(3):
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        QApplication.processEvents()
        gc.collect()
    return len(shiboken6.getAllValidWrappers()), len(QApplication.topLevelWidgets())


# Ten windows already tell a leak of one object each; fifty take the best part of a minute.
@pytest.mark.parametrize("times", [10, pytest.param(50, marks=pytest.mark.long)])
def test_many_windows_leave_nothing(qapp, times):
    for _ in range(2):
        once()
    wrappers, windows = counted()
    for _ in range(times):
        once()
    more_wrappers, more_windows = (after - before for after, before in zip(counted(), (wrappers, windows), strict=True))
    assert more_wrappers < MOST_MORE, f"{more_wrappers} wrappers more after {times} windows"
    assert more_windows < MOST_MORE, f"{more_windows} windows more after {times} windows"
