"""Nothing a hand can do to the window raises, warns or breaks it; the run names its seed and its slowest steps."""

from __future__ import annotations

import os

import pytest

from kitplanner.ui.answers import PAGES
from kitplanner.ui.dialogs import ask
from kitplanner.ui.panels import section_panel
from tests.ui.monkey import Monkey
from tests.ui.shell import let_go, make_window, wait_until_loaded

SUITE_EVENTS, LONG_EVENTS = 3_000, 100_000
FIRST_SEED = int(os.environ.get("KITPLANNER_MONKEY_SEED", "20261"))
DEMOS = ("camp", "bench", "household", "shelter")


@pytest.fixture(autouse=True)
def _no_questions(monkeypatch):
    """What would open a dialog of the desktop answers at once."""
    for name in ("ask_open_path", "ask_save_path", "ask_pdf_path"):
        monkeypatch.setattr(ask, name, lambda *_: None)
    monkeypatch.setattr(ask, "ask_save", lambda *_: ask.Answer.DISCARD)
    monkeypatch.setattr(ask, "tell", lambda *_: None)
    monkeypatch.setattr(section_panel, "ask_how_many", lambda *_: 2)


def play(qtbot, page: str, seed: int, count: int) -> Monkey:
    """Play on one page of one demo; the window must still answer afterwards."""
    window = make_window(DEMOS[seed % len(DEMOS)])
    window.show()
    wait_until_loaded(window, qtbot)
    window.desk.answers.choose(page)
    for name in ("quit", "print_effort"):
        window.desk.menus.action(name).setEnabled(False)
    monkey = Monkey(window, seed)
    try:
        monkey.play(count)
    finally:
        monkey.stop()
        worst = ", ".join(f"{took * 1000:.0f} ms {what}" for took, what in sorted(monkey.slow, reverse=True)[:5])
        print(f"seed {seed}, {page}, {count} steps, {len(monkey.slow)} over 100 ms; slowest: {worst or 'none'}")
    assert window.isVisible()
    while window.document.stack.canUndo():
        window.document.stack.undo()
    qtbot.waitUntil(lambda: not window.recompute.is_busy, timeout=30000)
    assert window.recompute.results.plan == window.document.plan
    let_go(window)
    return monkey


@pytest.mark.parametrize("number", range(len(PAGES)), ids=[entry.key for entry in PAGES])
def test_a_monkey_finds_nothing(qtbot, number):
    play(qtbot, PAGES[number].key, FIRST_SEED + number, SUITE_EVENTS // len(PAGES))


@pytest.mark.long
@pytest.mark.timeout(10_800)
def test_a_patient_monkey_finds_nothing(qtbot):
    for number in range(50):
        play(qtbot, PAGES[number % len(PAGES)].key, FIRST_SEED + 100 + number, LONG_EVENTS // 50)
