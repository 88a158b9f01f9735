"""Labels and tool tips that show user text literally; Qt would read it as markup otherwise."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QLabel, QWidget

from kitplanner.ui import theme


def plain_label(
    text: str = "",
    parent: QWidget | None = None,
    *,
    wrap: bool = False,
    size: theme.TypeSize = "text",
    bold: bool = False,
) -> QLabel:
    """Make a label that shows its text literally, in one of the type sizes."""
    label = QLabel(text, parent)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setWordWrap(wrap)
    if size != "text" or bold:
        label.setProperty("type_size", size)
        label.setProperty("type_bold", bold)
        label.setFont(theme.type_font(size, bold=bold))
    return label


def restyle_labels(root: QWidget) -> None:
    """Give labels of their own size or weight the present text size; a new style sheet puts their old fonts back."""
    for label in root.findChildren(QLabel):
        size = label.property("type_size")
        if size:
            label.setFont(theme.type_font(size, bold=bool(label.property("type_bold"))))


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
