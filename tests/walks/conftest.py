"""A display and a program for each walk; both end with it."""

from __future__ import annotations

import pytest

from tests.walks.walker import Display, Walker, why_not


@pytest.fixture
def walker(tmp_path):
    """The program at its first start, its ways to begin on the screen, the clock just started."""
    missing = why_not()
    if missing:
        pytest.skip(missing)
    display = Display()
    try:
        with Walker(display, tmp_path / "home") as walker:
            walker.find("Button", "Household", "Start")
            walker.begin()
            yield walker
    finally:
        display.close()
