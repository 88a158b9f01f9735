"""Paper sizes, margins, type and pens in millimetres: one ruler for printer, PDF and preview."""

from __future__ import annotations

from typing import Literal

from PySide6.QtCore import QMarginsF, QRectF
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPagedPaintDevice, QPageLayout, QPageSize, QPen

from kitplanner.ui.theme import FAMILY, load_fonts

SheetSize = Literal["A4", "A3", "Letter"]

SIZES: dict[SheetSize, QPageSize.PageSizeId] = {
    "A4": QPageSize.PageSizeId.A4,
    "A3": QPageSize.PageSizeId.A3,
    "Letter": QPageSize.PageSizeId.Letter,
}
MARGIN_MM = 14.0
PT_TITLE, PT_HEADING, PT_TEXT, PT_SMALL = 16.0, 11.5, 9.0, 7.5
# Opaque greys only: what must be told apart is told by words, so a copy of a copy still reads.
INK, GREY, RULE = QColor("#000000"), QColor("#4a4a4a"), QColor("#8c8c8c")


def page_layout(size: SheetSize) -> QPageLayout:
    """Return an upright page of a size with the margins of all papers."""
    margins = QMarginsF(MARGIN_MM, MARGIN_MM, MARGIN_MM, MARGIN_MM)
    return QPageLayout(QPageSize(SIZES[size]), QPageLayout.Orientation.Portrait, margins, QPageLayout.Unit.Millimeter)


class Ruler:
    """Turns millimetres and points into the units of a paint device."""

    def __init__(self, device: QPagedPaintDevice) -> None:
        load_fonts()
        self.device = device
        self.per_mm = device.logicalDpiX() / 25.4
        layout = device.pageLayout()
        full = layout.fullRect(QPageLayout.Unit.Millimeter)
        self.width_mm, self.height_mm = full.width() - 2 * MARGIN_MM, full.height() - 2 * MARGIN_MM
        # A printer's own margins are part of its page: the painter starts inside them.
        inside = layout.paintRect(QPageLayout.Unit.Millimeter)
        self.shift_mm = (MARGIN_MM - inside.left(), MARGIN_MM - inside.top())

    def font(self, points: float, *, bold: bool = False) -> QFont:
        """Return the type family without ligatures, so that printed words can be searched."""
        font = QFont(FAMILY)
        font.setPointSizeF(points)
        font.setBold(bold)
        font.setFeature(QFont.Tag("liga"), 0)
        return font

    def metrics(self, font: QFont) -> QFontMetricsF:
        """Return the measures of a type on this device, in its own units."""
        return QFontMetricsF(font, self.device)

    def line_mm(self, font: QFont) -> float:
        """Return the height of a line."""
        return self.metrics(font).lineSpacing() / self.per_mm

    def box(self, x_mm: float, y_mm: float, width_mm: float, height_mm: float) -> QRectF:
        """Return a box of the printed area in device units."""
        k = self.per_mm
        return QRectF((x_mm + self.shift_mm[0]) * k, (y_mm + self.shift_mm[1]) * k, width_mm * k, height_mm * k)

    def pen(self, width_mm: float, colour: QColor = INK) -> QPen:
        """Return a pen of a width."""
        return QPen(colour, width_mm * self.per_mm)

    def wrapped(self, text: str, font: QFont, width_mm: float) -> tuple[str, ...]:
        """Return a text in lines that fit a width; a word that is too long is cut where it must be."""
        metrics, room = self.metrics(font), width_mm * self.per_mm
        lines: list[str] = []
        for paragraph in text.split("\n"):
            line = ""
            for word in paragraph.split(" "):
                longer = f"{line} {word}" if line else word
                if metrics.horizontalAdvance(longer) <= room:
                    line = longer
                    continue
                if line:
                    lines.append(line)
                line = word
                while metrics.horizontalAdvance(line) > room and len(line) > 1:
                    cut = next(
                        (n for n in range(len(line) - 1, 0, -1) if metrics.horizontalAdvance(line[:n]) <= room), 1
                    )
                    lines.append(line[:cut])
                    line = line[cut:]
            lines.append(line)
        return tuple(lines)
