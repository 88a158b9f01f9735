"""The strip's way to what would make a plan fit, the rota in the File menu, and the board's keys in the list."""

from __future__ import annotations

from PySide6.QtWidgets import QApplication

from kitplanner.ui.dialogs import ask
from kitplanner.ui.dialogs.about import board_keys, keys_text
from kitplanner.ui.pages.rota_levers_dialog import LeversDialog
from tests.ui.shell import let_go, make_window, wait_until_loaded


def test_the_strip_leads_to_what_would_make_it_fit(qtbot):
    window = make_window("shelter")
    window.show()
    wait_until_loaded(window, qtbot)
    assert window.verdict.fit.isVisible()
    window.verdict.fit.click()
    assert window.desk.answers.current == "rota"
    qtbot.waitUntil(
        lambda: any(isinstance(each, LeversDialog) for each in QApplication.topLevelWidgets()), timeout=30000
    )
    for each in QApplication.topLevelWidgets():
        if isinstance(each, LeversDialog):
            each.close()
    let_go(window)


def test_a_plan_that_fits_offers_no_such_way_and_without_a_rota_printing_says_so(qtbot, monkeypatch):
    window = make_window("household")
    window.show()
    wait_until_loaded(window, qtbot)
    assert not window.verdict.fit.isVisible()
    told = []
    monkeypatch.setattr(ask, "tell", lambda _parent, sentence: told.append(sentence))
    window.desk.rota_links.print_rota()
    assert told == ["There is no rota yet. Plan one on the Rota page, then print it."]
    assert all(line in keys_text(window.menuBar()) for line in board_keys())
    let_go(window)
