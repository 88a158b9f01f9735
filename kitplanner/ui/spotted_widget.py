"""A painted widget with places that answer to the pointer: tool tips, cursor, the stage under the pointer."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, QRect, QRectF, Qt
from PySide6.QtGui import QHelpEvent, QMouseEvent
from PySide6.QtWidgets import QToolTip, QWidget

from kitplanner.ui.energy_line_paint import mirrored
from kitplanner.ui.energy_line_picture import Picture, Spot
from kitplanner.ui.guard import guarded
from kitplanner.ui.widgets.plain import as_tool_tip


class SpottedWidget(QWidget):
    """Shows what lies under the pointer of a laid-out picture, mirrored where text runs from right to left."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._picture = Picture()
        self._hover: Spot | None = None
        self.setMouseTracking(True)

    @property
    def picture(self) -> Picture:
        """What is laid out now."""
        return self._picture

    def mirror_width(self) -> float:
        """Return the width to mirror in, 0 where text runs from left to right."""
        return float(self.width()) if self.layoutDirection() == Qt.LayoutDirection.RightToLeft else 0.0

    def stage_rect(self, index: int) -> QRect:
        """Return the box of a stage in the widget."""
        return mirrored(self._picture.stages[index].box, self.mirror_width()).toAlignedRect()

    def frame_box(self, spot: Spot) -> QRectF:
        """Return the box to draw around a place, inside the widget."""
        box = mirrored(spot.box, self.mirror_width()).adjusted(-1, -1, 1, 1)
        return box & QRectF(self.rect()).adjusted(2, 2, -2, -2)

    def spot_at(self, place: QPointF) -> Spot | None:
        """Return what lies under a point: a band before its stage."""
        width = self.mirror_width()
        for spot in (*self._picture.spots, *self._picture.stages):
            if mirrored(spot.box, width).contains(place):
                return spot
        return None

    @guarded(True)
    def event(self, event: QEvent) -> bool:
        """Show the sentence of what lies under the pointer."""
        if event.type() == QEvent.Type.ToolTip and isinstance(event, QHelpEvent):
            spot = self.spot_at(QPointF(event.pos()))
            if spot is None:
                QToolTip.hideText()
            else:
                QToolTip.showText(event.globalPos(), as_tool_tip(spot.sentence), self)
            return True
        return bool(super().event(event))

    @guarded()
    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        """Mark the stage under the pointer."""
        spot = self.spot_at(event.position())
        stage = spot if spot is None or spot in self._picture.stages else None
        self.setCursor(Qt.CursorShape.ArrowCursor if spot is None else Qt.CursorShape.PointingHandCursor)
        if stage is not self._hover:
            self._hover = stage
            self.update()

    @guarded()
    def leaveEvent(self, event: QEvent) -> None:
        """Forget the stage under the pointer."""
        super().leaveEvent(event)
        self._hover = None
        self.update()
