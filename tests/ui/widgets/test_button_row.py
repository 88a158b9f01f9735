"""Rows of buttons that stay in sight."""

import pytest

from kitplanner.ui.widgets.button_row import ButtonRow
from kitplanner.ui.widgets.small_button import SmallButton


@pytest.mark.parametrize(("share", "rows"), [(1.5, 1), (0.7, 2)])
def test_a_narrow_row_becomes_two(qtbot, share, rows):
    row = ButtonRow([SmallButton(text) for text in ("Add", "Several…", "Copy", "Remove", "↑", "↓")])
    qtbot.addWidget(row)
    row.show()
    row.resize(round(row.needed_width() * share), 60)
    assert row.rows == rows
    assert row.minimumSizeHint().width() < row.needed_width()


def test_a_button_is_never_smaller_than_its_text_or_a_finger_s_target(qtbot):
    button = SmallButton("↑")
    qtbot.addWidget(button)
    assert button.sizeHint().width() >= 24
    assert button.sizeHint().height() >= 24
