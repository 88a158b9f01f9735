"""A row of widgets that becomes a column where the width, at the present text size, is too small."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QSizePolicy, QWidget

from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import text_scale


class Columns(QWidget):
    """Lays widgets side by side from `least_px` (at 100 % text) for each on, else one below the other.

    The first takes `first` times the width of each other.
    """

    def __init__(
        self,
        widgets: list[QWidget],
        least_px: int = 330,
        parent: QWidget | None = None,
        *,
        first: int = 1,
        align_top: bool = False,
    ) -> None:
        super().__init__(parent)
        self._least_px = least_px
        self._row = QBoxLayout(QBoxLayout.Direction.TopToBottom, self)
        self._row.setContentsMargins(0, 0, 0, 0)
        self._row.setSpacing(18)
        for place, widget in enumerate(widgets):
            self._row.addWidget(widget, first if place == 0 else 1)
            if align_top:
                self._row.setAlignment(widget, Qt.AlignmentFlag.AlignTop)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)

    @property
    def is_row(self) -> bool:
        """True if the widgets stand side by side."""
        return self._row.direction() == QBoxLayout.Direction.LeftToRight

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Choose row or column."""
        super().resizeEvent(event)
        need = self._least_px * text_scale() * self._row.count()
        wide = QBoxLayout.Direction.LeftToRight if event.size().width() >= need else QBoxLayout.Direction.TopToBottom
        if self._row.direction() != wide:
            self._row.setDirection(wide)
            self.updateGeometry()

    @guarded(QSize(200, 100))
    def minimumSizeHint(self) -> QSize:
        """Return a width that lets the page shrink to one column."""
        hint = super().minimumSizeHint()
        return QSize(min(hint.width(), round(220 * text_scale())), hint.height())
