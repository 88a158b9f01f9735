"""How large a dialog opens: by its text, never larger than the screen."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QWidget

_SHARE_OF_SCREEN = 0.92


def fair_size(widget: QWidget, chars: int, lines: int) -> QSize:
    """Return the room for so many characters and lines of the present text, bounded by the screen."""
    metrics, screen = widget.fontMetrics(), widget.screen().availableSize()
    most = QSize(round(_SHARE_OF_SCREEN * screen.width()), round(_SHARE_OF_SCREEN * screen.height()))
    return QSize(chars * metrics.averageCharWidth(), lines * metrics.height()).boundedTo(most)
