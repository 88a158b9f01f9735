"""Labels and tool tips that show user text literally; Qt would read it as markup otherwise."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QLabel, QWidget

from kitplanner.ui import theme


def plain_label(text: str = "", parent: QWidget | None = None, *, wrap: bool = False) -> QLabel:
    """Make a label that shows its text literally."""
    label = QLabel(text, parent)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setWordWrap(wrap)
    return label


def colour_label(label: QLabel, name: str) -> None:
    """Colour a label's text with a colour of the theme."""
    palette = label.palette()
    wanted = QColor(getattr(theme.colours(), name))
    if palette.color(QPalette.ColorRole.WindowText) != wanted:
        palette.setColor(QPalette.ColorRole.WindowText, wanted)
        label.setPalette(palette)


def as_tool_tip(text: str) -> str:
    """Escape a text for a tool tip, which Qt may read as markup, and keep its lines."""
    safe = text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;").replace("\n", "<br>")
    return f"<qt>{safe}</qt>"
