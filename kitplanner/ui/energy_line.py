"""The energy line: Wh a day from people through stations and stores to devices, always in sight.

Signals: `section_requested(str)` people, stations, stores or devices; `station_requested(str)` a station's id;
`day_requested()` the user left a station's own chain.
"""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, QSize, Qt, Signal
from PySide6.QtGui import (
    QFontMetricsF,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
    QResizeEvent,
)
from PySide6.QtWidgets import QSizePolicy, QWidget

from kitplanner.planners.results import BenchPoint, EnergyFlow
from kitplanner.ui import energy_line_access
from kitplanner.ui.energy_line_chain import chain_picture
from kitplanner.ui.energy_line_layout import day_picture
from kitplanner.ui.energy_line_paint import paint_picture
from kitplanner.ui.energy_line_picture import Frame, Measure, Picture, Spot
from kitplanner.ui.energy_line_text import empty_text
from kitplanner.ui.guard import guarded
from kitplanner.ui.spotted_widget import SpottedWidget
from kitplanner.ui.theme import colours, type_font

_STEPS = {Qt.Key.Key_Right: 1, Qt.Key.Key_Left: -1}
_SIDE_STEPS = {Qt.Key.Key_Down: 1, Qt.Key.Key_Up: -1}
_CHOOSE = (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space)


def measure() -> Measure:
    """Return what tells the width of a text in one of the type sizes, as they are now."""
    known: dict[tuple[str, bool], QFontMetricsF] = {}

    def width(text: str, size: str, bold: bool) -> float:
        metrics = known.get((size, bold))
        if metrics is None:
            metrics = known[size, bold] = QFontMetricsF(type_font(size, bold=bold))  # type: ignore[arg-type]
        return metrics.horizontalAdvance(text) + 1.0

    return width


class EnergyLine(SpottedWidget):
    """Custom-painted flow of an average day, or of one station's own chain in watts."""

    section_requested = Signal(str)
    station_requested = Signal(str)
    day_requested = Signal()

    ready = False

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        energy_line_access.install()
        self.setObjectName("energy_line")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setAccessibleName(self.tr("Energy line"))
        self._flow: EnergyFlow | None = None
        self._has_stores = True
        self._point: BenchPoint | None = None
        self._point_name = ""
        self._stage = 0
        self._spot: int | None = None
        self.ready = True
        self._lay_out()

    def set_flow(self, flow: EnergyFlow | None, *, has_stores: bool = True) -> None:
        """Show another day; None shows how to begin."""
        self._flow, self._has_stores = flow, has_stores
        self._lay_out()

    def set_station_point(self, point: BenchPoint | None, name: str = "") -> None:
        """Show one station's own chain in watts; None returns to the day."""
        self._point, self._point_name = point, name
        self._stage, self._spot = 0, None
        self._lay_out()

    def current_spot(self) -> Spot | None:
        """Return the stage or band that the keyboard stands on."""
        if self._spot is not None and self._spot < len(self._stage_spots()):
            return self._stage_spots()[self._spot]
        return self._picture.stages[self._stage] if self._stage < len(self._picture.stages) else None

    def sentences(self) -> tuple[str, ...]:
        """Return the sentence of every stage, in reading order."""
        return tuple(spot.sentence for spot in self._picture.stages)

    @property
    def stage(self) -> int:
        """Number of the stage the keyboard stands on."""
        return self._stage

    def move_to_stage(self, index: int) -> None:
        """Put the keyboard on a stage."""
        if self._picture.stages:
            self._stage = max(0, min(index, len(self._picture.stages) - 1))
            self._spot = None
            self._tell()

    def _stage_spots(self) -> list[Spot]:
        stages = self._picture.stages
        section = stages[self._stage].section if self._stage < len(stages) else ""
        if section not in ("stations", "devices"):
            return []
        return [spot for spot in self._picture.spots if spot.section == section]

    def _lay_out(self) -> None:
        if not self.ready:
            return
        text, small = QFontMetricsF(type_font("text")), QFontMetricsF(type_font("small"))
        frame = Frame(float(self.width()), float(self.height()), text.height(), small.height(), measure())
        if self._point is not None:
            self._picture = chain_picture(self._point, self._point_name, frame)
        elif self._flow is not None:
            self._picture = day_picture(self._flow, frame, has_stores=self._has_stores)
        else:
            self._picture = Picture()
        self._stage = min(self._stage, max(0, len(self._picture.stages) - 1))
        self._tell(announce=False)
        self.update()

    def _tell(self, *, announce: bool = True) -> None:
        whole = " ".join(self.sentences()) or empty_text()
        spot = self.current_spot()
        now = f"{spot.sentence} — " if spot is not None and announce else ""
        self.setAccessibleDescription(now + whole)
        self.update()

    def _choose(self, spot: Spot | None) -> None:
        if spot is None:
            return
        if spot.station_ids:
            self.station_requested.emit(spot.station_ids[0])
        self.section_requested.emit(spot.section)

    @guarded()
    def paintEvent(self, event: QPaintEvent) -> None:
        """Paint paper, flow and the focus ring."""
        scheme = colours()
        painter = QPainter(self)
        try:
            painter.fillRect(event.rect(), scheme.color("paper"))
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            if self._flow is None and self._point is None:
                painter.setFont(type_font())
                painter.setPen(scheme.color("muted"))
                flags = int(Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextWordWrap)
                painter.drawText(self.rect().adjusted(16, 4, -16, -4), flags, empty_text())
            if self._hover is not None:
                painter.setPen(Qt.PenStyle.NoPen)
                painter.setBrush(scheme.color("panel"))
                painter.drawRoundedRect(self.frame_box(self._hover), 6, 6)
            paint_picture(painter, self._picture, scheme, mirror_width=self.mirror_width())
            spot = self.current_spot()
            if self.hasFocus() and spot is not None:
                painter.setPen(QPen(scheme.color("accent"), 2))
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.drawRoundedRect(self.frame_box(spot), 6, 6)
            painter.setPen(QPen(scheme.color("rule"), 1))
            painter.drawLine(QPointF(0, self.height() - 0.5), QPointF(self.width(), self.height() - 0.5))
        finally:
            painter.end()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Lay out again for the new size."""
        super().resizeEvent(event)
        self._lay_out()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of font, palette or direction."""
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange, QEvent.Type.LayoutDirectionChange):
            if self.ready:
                self.updateGeometry()
            self._lay_out()

    @guarded()
    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Open the section of what was clicked."""
        if event.button() == Qt.MouseButton.LeftButton:
            spot = self.spot_at(event.position())
            keys = [stage.section for stage in self._picture.stages]
            if spot is not None and spot.section in keys:
                stages = self._picture.stages
                self.move_to_stage(stages.index(spot) if spot in stages else keys.index(spot.section))
            self._choose(spot)

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Left and right go from stage to stage, up and down within one, Return opens, Esc leaves a station."""
        key = Qt.Key(event.key())
        if key in _STEPS:
            step = -_STEPS[key] if self.mirror_width() else _STEPS[key]
            self.move_to_stage(self._stage + step)
        elif key in _SIDE_STEPS and self._stage_spots():
            now = -1 if self._spot is None else self._spot
            at = now + _SIDE_STEPS[key]
            self._spot = None if at < 0 else min(at, len(self._stage_spots()) - 1)
            self._tell()
        elif key in _CHOOSE:
            self._choose(self.current_spot())
        elif key == Qt.Key.Key_Escape and self._point is not None:
            self.set_station_point(None)
            self.day_requested.emit()
        else:
            super().keyPressEvent(event)

    @guarded(QSize(900, 170))
    def sizeHint(self) -> QSize:
        """Return a height that follows the text size; any width will do."""
        text, small = QFontMetricsF(type_font("text")), QFontMetricsF(type_font("small"))
        return QSize(900, round(text.height() + 3.2 * small.height() + 112))

    @guarded(QSize(480, 170))
    def minimumSizeHint(self) -> QSize:
        """Return the least size at which the flow can be read."""
        return QSize(480, self.sizeHint().height())
