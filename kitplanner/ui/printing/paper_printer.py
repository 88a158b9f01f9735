"""Draws a paper on anything with pages: the printer, a PDF, the preview; all three look alike."""

from __future__ import annotations

import errno
import os
import tempfile
from pathlib import Path

from PySide6.QtCore import QBuffer, QByteArray, QCoreApplication, QIODevice, Qt
from PySide6.QtGui import QPagedPaintDevice, QPainter, QPdfWriter

from kitplanner.report.content import Paper
from kitplanner.ui.printing.blocks import Cutter, Sheet, paginate
from kitplanner.ui.printing.sheet import GREY, PT_SMALL, RULE, Ruler, SheetSize, page_layout

PDF_DPI = 300
_FOOT_MM = 9.0
_HEAD_MM = 7.0


class PrintError(RuntimeError):
    """The paper could not be drawn or written; the message is one sentence."""


def _page_words(number: int, count: int) -> str:
    return QCoreApplication.translate("Printing", "page {number} of {count}").format(number=number, count=count)


def print_paper(paper: Paper, device: QPagedPaintDevice) -> int:
    """Draw a paper on a device; return the number of pages."""
    painter = QPainter()
    if not painter.begin(device):
        raise PrintError("The printer or file cannot be written to; choose another one.")
    try:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        ruler = Ruler(device)
        room = ruler.height_mm - _FOOT_MM
        sheets = paginate(Cutter(paper, ruler).pieces(), room - _HEAD_MM)
        for number, sheet in enumerate(sheets, start=1):
            if number > 1 and not device.newPage():
                raise PrintError("The printer stopped before the last page; check it and print again.")
            _draw_sheet(painter, ruler, paper, sheet, (number, len(sheets)))
        return len(sheets)
    finally:
        painter.end()


def _draw_sheet(painter: QPainter, ruler: Ruler, paper: Paper, sheet: Sheet, page: tuple[int, int]) -> None:
    """Draw one page with its header, its pieces and its foot."""
    small = ruler.font(PT_SMALL)
    number, count = page
    line = ruler.line_mm(small)
    flags = int(Qt.TextFlag.TextSingleLine)
    painter.setFont(small)
    painter.setPen(GREY)
    top = 0.0
    if number > 1:
        text = " · ".join(part for part in (paper.title, paper.subtitle) if part)
        shown = ruler.metrics(small).elidedText(text, Qt.TextElideMode.ElideRight, ruler.width_mm * ruler.per_mm)
        painter.drawText(ruler.box(0, 0, ruler.width_mm, line), flags, shown)
        top = _HEAD_MM
    for y, piece in sheet.pieces:
        piece.draw(painter, top + y)
    foot = ruler.height_mm - line
    painter.setPen(ruler.pen(0.12, RULE))
    rule = ruler.box(0, foot - 1.2, ruler.width_mm, 0)
    painter.drawLine(rule.topLeft(), rule.topRight())
    painter.setFont(small)
    painter.setPen(GREY)
    pages = _page_words(number, count)
    wide = ruler.metrics(small).horizontalAdvance(pages) / ruler.per_mm + 4
    room = (ruler.width_mm - wide) * ruler.per_mm
    left = ruler.metrics(small).elidedText(paper.foot, Qt.TextElideMode.ElideRight, room)
    painter.drawText(ruler.box(0, foot, ruler.width_mm - wide, line), flags, left)
    right = int(Qt.AlignmentFlag.AlignRight | Qt.TextFlag.TextSingleLine)
    painter.drawText(ruler.box(ruler.width_mm - wide, foot, wide, line), right, pages)


def pdf_bytes(paper: Paper, size: SheetSize = "A4") -> bytes:
    """Return a paper as PDF."""
    data = QByteArray()
    buffer = QBuffer(data)
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    writer = QPdfWriter(buffer)
    writer.setResolution(PDF_DPI)
    writer.setPageLayout(page_layout(size))
    writer.setTitle(paper.title)
    writer.setCreator("Kitplanner")
    print_paper(paper, writer)
    del writer
    buffer.close()
    return bytes(data.data())


def write_pdf(paper: Paper, path: Path, size: SheetSize = "A4") -> None:
    """Write a paper as a PDF file, whole or not at all.

    Raises
    ------
    OSError
        When the file cannot be written; what stood there before stays.
    """
    data = pdf_bytes(paper, size)
    place = Path(os.path.realpath(path))
    if place.exists() and not place.is_file():
        raise OSError(errno.EINVAL, "it is no ordinary file", str(path))
    mode = place.stat().st_mode & 0o777 if place.exists() else 0o644
    handle, name = tempfile.mkstemp(prefix=f".{place.name}.", dir=place.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        Path(name).chmod(mode)
        Path(name).replace(place)
    except OSError:
        Path(name).unlink(missing_ok=True)
        raise
