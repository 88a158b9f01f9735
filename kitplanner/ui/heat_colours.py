"""The cividis colour map for shaded tables: even steps for every kind of colour vision, and in grey."""

from __future__ import annotations

from PySide6.QtGui import QColor

# Nine stops of cividis: Nunez, Anderton, Renslow 2018, PLOS ONE 13(7) e0199239; values of the CC0 table.
CIVIDIS = ("#00204d", "#06366e", "#414d6b", "#61646f", "#7d7c78", "#9b9477", "#bcaf6f", "#e0cb5e", "#ffea46")


def cividis(fraction: float) -> QColor:
    """Return the colour at 0 (dark blue) to 1 (yellow)."""
    place = min(1.0, max(0.0, fraction)) * (len(CIVIDIS) - 1)
    first = min(int(place), len(CIVIDIS) - 2)
    low, high, part = QColor(CIVIDIS[first]), QColor(CIVIDIS[first + 1]), place - first
    return QColor.fromRgbF(
        low.redF() + part * (high.redF() - low.redF()),
        low.greenF() + part * (high.greenF() - low.greenF()),
        low.blueF() + part * (high.blueF() - low.blueF()),
    )
