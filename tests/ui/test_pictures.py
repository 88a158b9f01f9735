"""Every page looks as it did, in light and dark, at 100 and 200 % text."""

from __future__ import annotations

import pytest
from PySide6.QtGui import QColor, QImage
from PySide6.QtWidgets import QApplication

from kitplanner.ui.answers import PAGES
from tests.ui.pictures import compared, difference
from tests.ui.shell import let_go, make_window, wait_until_loaded

# Which demo and which section stand beside a page.
SCENES = {
    "effort": ("household", "devices"),
    "balance": ("shelter", "people"),
    "rota": ("camp", "stations"),
    "bench": ("bench", "stations"),
}
LOOKS = (("light", 100), ("dark", 100), ("dark", 200), ("light", 200))


@pytest.mark.parametrize("page", [entry.key for entry in PAGES])
def test_a_page_looks_as_it_did(qtbot, tmp_path, page):
    kind, section = SCENES.get(page, ("camp", "people"))
    window = make_window(kind)
    window.resize(1280, 800)
    window.show()
    wait_until_loaded(window, qtbot)
    window.desk.sections.show_section(section)
    window.desk.answers.choose(page)
    wrong = []
    for scheme, percent in LOOKS:
        window.desk.view.choose_scheme(scheme)
        window.desk.view.choose_text_percent(percent)
        window.resize(1280, 800)
        settle(window, qtbot, page)
        wrong.append(compared(window, f"{page}-{scheme}-{percent}", tmp_path))
    let_go(window)
    assert not any(wrong), "\n".join(filter(None, wrong))


def settle(window, qtbot, page) -> None:
    """Wait for slow answers, charts and the last layout, and take the keyboard to a place that shows it steadily."""
    qtbot.waitUntil(lambda: getattr(window.desk.answers.page(page), "is_loaded", True), timeout=30000)
    qtbot.waitUntil(lambda: not window.recompute.is_busy, timeout=30000)
    window.energy_line.setFocus()
    for _ in range(3):
        qtbot.wait(120)
        QApplication.processEvents()


def test_a_changed_picture_is_noticed_and_rounding_is_not():
    kept = QImage(100, 100, QImage.Format.Format_RGB888)
    kept.fill(QColor("#808080"))
    rounded, changed = kept.copy(), kept.copy()
    rounded.fill(QColor("#828282"))
    for x in range(20):
        for y in range(10):
            changed.setPixelColor(x, y, QColor("#ffffff"))
    assert difference(kept, kept) == ""
    assert difference(rounded, kept) == ""
    assert "2.0%" in difference(changed, kept)
    assert "instead of" in difference(kept.copy(0, 0, 50, 50), kept)
