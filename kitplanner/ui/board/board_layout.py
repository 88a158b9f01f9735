"""Where everything on the board stands: one mapping of time to x for rows, charging and curves."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QRectF, QSizeF

from kitplanner.ui.board.board_data import Row, ShownBout

DAY_GAP_PX = 10.0
_BLOCK_INSET_PX = 3.0


@dataclass(frozen=True)
class Sizes:
    """Pixels that follow the text size: a row, the names, the minutes at the right, the head, the curves."""

    row_px: float
    names_px: float
    side_px: float
    head_px: float
    foot_px: float


@dataclass(frozen=True)
class BoardLayout:
    """Geometry of one picture; x and y are those of the viewport, scrolled by `across_px` and `down_px`."""

    rows: tuple[Row, ...]
    days: tuple[int, ...]
    low_min: int
    high_min: int
    sizes: Sizes
    view: QSizeF
    px_per_min: float
    across_px: float = 0.0
    down_px: float = 0.0

    @property
    def day_px(self) -> float:
        """Width of one day."""
        return (self.high_min - self.low_min) * self.px_per_min

    @property
    def content_px(self) -> float:
        """Width of all shown days."""
        return len(self.days) * self.day_px + max(0, len(self.days) - 1) * DAY_GAP_PX

    @property
    def rows_px(self) -> float:
        """Height of all rows."""
        return len(self.rows) * self.sizes.row_px

    @property
    def body(self) -> QRectF:
        """The part of the viewport that holds blocks."""
        width = max(1.0, self.view.width() - self.sizes.names_px - self.sizes.side_px)
        height = max(1.0, self.view.height() - self.sizes.head_px - self.sizes.foot_px)
        return QRectF(self.sizes.names_px, self.sizes.head_px, width, height)

    @property
    def foot(self) -> QRectF:
        """The part of the viewport that holds the curves; as wide as the body."""
        body = self.body
        return QRectF(body.left(), body.bottom(), body.width(), self.sizes.foot_px)

    def day_left(self, day: int) -> float:
        """Return where a shown day begins."""
        place = self.days.index(day)
        return self.sizes.names_px - self.across_px + place * (self.day_px + DAY_GAP_PX)

    def x_of(self, day: int, minute: float) -> float:
        """Return the x of a minute of a shown day, kept within the shown hours."""
        inside = min(max(minute, self.low_min), self.high_min)
        return self.day_left(day) + (inside - self.low_min) * self.px_per_min

    def time_at(self, x: float) -> tuple[int, float]:
        """Return day and minute at an x, the nearest where it lies outside."""
        along = x - self.sizes.names_px + self.across_px
        place = int(along // (self.day_px + DAY_GAP_PX))
        place = min(max(0, place), len(self.days) - 1)
        minute = self.low_min + (along - place * (self.day_px + DAY_GAP_PX)) / self.px_per_min
        return self.days[place], min(max(minute, float(self.low_min)), float(self.high_min))

    def row_top(self, place: int) -> float:
        """Return the top of a row."""
        return self.sizes.head_px - self.down_px + place * self.sizes.row_px

    def row_at(self, y: float) -> int:
        """Return the row at a y, the nearest where it lies outside."""
        place = int((y - self.sizes.head_px + self.down_px) // self.sizes.row_px)
        return min(max(0, place), len(self.rows) - 1)

    def rows_between(self, top: float, bottom: float) -> range:
        """Return the rows that a stretch of the viewport touches."""
        first = int((top - self.sizes.head_px + self.down_px) // self.sizes.row_px)
        last = int((bottom - self.sizes.head_px + self.down_px) // self.sizes.row_px)
        return range(max(0, first), min(len(self.rows), last + 1))

    def row_rect(self, place: int) -> QRectF:
        """Return a whole row, names and minutes included."""
        return QRectF(0.0, self.row_top(place), self.view.width(), self.sizes.row_px)

    def block_rect(self, place: int, day: int, start_min: float, end_min: float) -> QRectF:
        """Return the block of a stretch of time in a row, on whole pixels."""
        left, right = round(self.x_of(day, start_min)), round(self.x_of(day, end_min))
        top = round(self.row_top(place) + _BLOCK_INSET_PX)
        return QRectF(left, top, max(3, right - left), round(self.sizes.row_px - 2 * _BLOCK_INSET_PX))

    def place_of(self, bout: ShownBout) -> int:
        """Return the row of a turn, -1 where it has none."""
        for place, row in enumerate(self.rows):
            if row.kind == "person" and row.key == bout.person:
                return place
            if row.kind == "unit" and row.key == bout.station and row.unit == bout.unit:
                return place
        return -1
