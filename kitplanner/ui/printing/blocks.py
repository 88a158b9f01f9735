"""Cuts a paper's blocks into pieces that fit pages; every piece knows its height and how to draw itself."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from msgspec import Struct
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QFont, QPainter

from kitplanner.report.content import Cell, Heading, PageBreak, Paper, Paragraph, Table
from kitplanner.ui.printing.sheet import GREY, INK, PT_HEADING, PT_SMALL, PT_TEXT, PT_TITLE, RULE, Ruler

Draw = Callable[[QPainter, float], None]
PAD_MM = 1.0
_ALIGN = {
    "left": Qt.AlignmentFlag.AlignLeft,
    "right": Qt.AlignmentFlag.AlignRight,
    "centre": Qt.AlignmentFlag.AlignHCenter,
}


class Piece(Struct):
    """Something of a fixed height; `keep` says it must not be the last on its page, `repeat` what heads a page."""

    height_mm: float
    draw: Draw
    keep: bool = False
    breaks: bool = False
    repeat: tuple[Piece, ...] = ()
    after_mm: float = 0.0


class Sheet(Struct):
    """One page: pieces with their place from the top of the printed area."""

    pieces: list[tuple[float, Piece]] = []


def text_lines(  # noqa: PLR0917 - place, words and their look
    painter: QPainter,
    ruler: Ruler,
    lines: tuple[str, ...],
    place: tuple[float, float, float],
    font: QFont,
    align: Qt.AlignmentFlag = Qt.AlignmentFlag.AlignLeft,
    colour: QColor = INK,
) -> None:
    """Draw lines below each other; place is x, y and width in millimetres."""
    x_mm, y_mm, width_mm = place
    painter.setFont(font)
    painter.setPen(colour)
    height = ruler.line_mm(font)
    flags = int(align | Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine | Qt.TextFlag.TextDontClip)
    for number, line in enumerate(lines):
        painter.drawText(ruler.box(x_mm, y_mm + number * height, width_mm, height), flags, line)


class Cutter:
    """Makes the pieces of one paper for one device."""

    def __init__(self, paper: Paper, ruler: Ruler) -> None:
        self._paper = paper
        self._ruler = ruler

    def pieces(self) -> Iterator[Piece]:
        """Return the paper's pieces in reading order."""
        yield self._title()
        for block in self._paper.blocks:
            match block:
                case PageBreak():
                    yield Piece(0.0, lambda _painter, _y: None, breaks=True)
                case Heading():
                    yield self._heading(block)
                case Paragraph():
                    yield from self._paragraph(block)
                case Table():
                    yield from self._table(block)

    def _title(self) -> Piece:
        ruler, paper = self._ruler, self._paper
        large, plain = ruler.font(PT_TITLE, bold=True), ruler.font(PT_TEXT)
        title = ruler.wrapped(paper.title, large, ruler.width_mm)
        below = ruler.wrapped(paper.subtitle, plain, ruler.width_mm) if paper.subtitle else ()
        first = len(title) * ruler.line_mm(large)

        def draw(painter: QPainter, y: float) -> None:
            text_lines(painter, ruler, title, (0, y, ruler.width_mm), large)
            text_lines(painter, ruler, below, (0, y + first, ruler.width_mm), plain, colour=GREY)

        return Piece(first + len(below) * ruler.line_mm(plain), draw, keep=True, after_mm=3.0)

    def _heading(self, block: Heading) -> Piece:
        ruler = self._ruler
        font = ruler.font(PT_HEADING if block.level == 1 else PT_TEXT + 0.5, bold=True)
        lines = ruler.wrapped(block.text, font, ruler.width_mm)

        def draw(painter: QPainter, y: float) -> None:
            text_lines(painter, ruler, lines, (0, y + 2.0, ruler.width_mm), font)

        return Piece(2.0 + len(lines) * ruler.line_mm(font), draw, keep=True, after_mm=1.2)

    def _paragraph(self, block: Paragraph) -> Iterator[Piece]:
        """Return one piece a line, so that a long text runs over pages; a caution stands in one piece."""
        ruler = self._ruler
        if block.style == "caution":
            yield self._caution(block)
            return
        font = ruler.font(PT_SMALL if block.style == "note" else PT_TEXT)
        colour = GREY if block.style == "note" else INK
        text = f"{block.label} {block.text}" if block.label else block.text
        lines = ruler.wrapped(text, font, ruler.width_mm)
        for number, line in enumerate(lines):
            last = number == len(lines) - 1
            yield Piece(ruler.line_mm(font), self._line(line, font, colour), after_mm=2.0 if last else 0.0)

    def _line(self, line: str, font: QFont, colour: QColor) -> Draw:
        ruler = self._ruler

        def draw(painter: QPainter, y: float) -> None:
            text_lines(painter, ruler, (line,), (0, y, ruler.width_mm), font, colour=colour)

        return draw

    def _caution(self, block: Paragraph) -> Piece:
        """Return a caution: its mark, a bar beside it, its words."""
        ruler = self._ruler
        bold, plain = ruler.font(PT_TEXT, bold=True), ruler.font(PT_TEXT)
        lead = 12.0 if block.label else 4.0
        lines = ruler.wrapped(block.text, plain, ruler.width_mm - lead)
        height = len(lines) * ruler.line_mm(plain) + 1.6

        def draw(painter: QPainter, y: float) -> None:
            painter.fillRect(ruler.box(0, y, 0.9, height), INK)
            text_lines(painter, ruler, (block.label,), (2.2, y + 0.8, lead), bold)
            text_lines(painter, ruler, lines, (lead, y + 0.8, ruler.width_mm - lead), plain)

        return Piece(height, draw, after_mm=1.6)

    def _table(self, table: Table) -> Iterator[Piece]:
        ruler = self._ruler
        title = (self._heading(Heading(text=table.title, level=2)),) if table.title else ()
        yield from title
        widths = self._widths(table)
        head = tuple(self._row(table, row, widths, is_head=True) for row in table.header)
        for piece in head:
            piece.keep = True
            yield piece
        for row in table.rows:
            piece = self._row(table, row, widths, is_head=False)
            piece.repeat = (*title, *head)
            yield piece
        font = ruler.font(PT_SMALL)
        if table.footnotes:
            yield Piece(0.0, lambda _painter, _y: None, after_mm=1.2)
        for note in table.footnotes:
            for line in ruler.wrapped(note, font, ruler.width_mm):
                yield Piece(ruler.line_mm(font), self._line(line, font, GREY))
        yield Piece(0.0, lambda _painter, _y: None, after_mm=4.0)

    def _widths(self, table: Table) -> tuple[float, ...]:
        """Return column widths in millimetres: room for every line where there is, else the names wrap first."""
        count = max(1, table.column_count)
        relative = table.widths if len(table.widths) == count else (1.0,) * count
        natural, least = self._measured(table, count)
        spare = self._ruler.width_mm - sum(natural)
        if spare >= 0:
            return tuple(wide + spare * part / sum(relative) for wide, part in zip(natural, relative, strict=True))
        heads = range(min(table.head_columns, count))
        give = [max(0.0, natural[n] - max(least[n], 0.45 * natural[n])) if n in heads else 0.0 for n in range(count)]
        if sum(give) < -spare:
            give = [max(0.0, wide - narrow) for wide, narrow in zip(natural, least, strict=True)]
        share = min(1.0, -spare / sum(give)) if sum(give) > 0 else 0.0
        widths = [wide - part * share for wide, part in zip(natural, give, strict=True)]
        return tuple(wide * self._ruler.width_mm / sum(widths) for wide in widths)

    def _measured(self, table: Table, count: int) -> tuple[list[float], list[float]]:
        """Return for each column the width of its longest line and of its longest word."""
        natural, least = [8.0] * count, [6.0] * count
        for is_head, row in [*((True, row) for row in table.header), *((False, row) for row in table.rows)]:
            column = 0
            for item in row:
                if item.span == 1:
                    for number, line in enumerate(item.lines):
                        metrics = self._ruler.metrics(self._cell_font(item.strong or is_head, number))
                        words = max((metrics.horizontalAdvance(word) for word in line.split(" ")), default=0.0)
                        wide = words if is_head else metrics.horizontalAdvance(line)
                        natural[column] = max(natural[column], wide / self._ruler.per_mm + 2 * PAD_MM + 0.3)
                        least[column] = max(least[column], words / self._ruler.per_mm + 2 * PAD_MM + 0.3)
                column += item.span
        return natural, least

    def _row(self, table: Table, row: tuple[Cell, ...], widths: tuple[float, ...], *, is_head: bool) -> Piece:
        ruler, column, x = self._ruler, 0, 0.0
        laid: list[tuple[Cell, float, float, tuple[tuple[str, ...], ...]]] = []
        for item in row:
            wide = sum(widths[column : column + item.span])
            bold = item.strong or is_head
            parts = tuple(
                ruler.wrapped(line, self._cell_font(bold, number), wide - 2 * PAD_MM)
                for number, line in enumerate(item.lines)
            )
            laid.append((item, x, wide, parts))
            column, x = column + item.span, x + wide
        height = max((self._cell_height(parts, item.strong or is_head) for item, _x, _w, parts in laid), default=4.0)

        def draw(painter: QPainter, y: float) -> None:
            for item, left, wide, parts in laid:
                self._draw_cell(painter, (left, y, wide, height), item, parts, is_head=is_head)
            painter.setPen(ruler.pen(0.5 if is_head else 0.12, INK if is_head else RULE))
            line = ruler.box(0, y + height, ruler.width_mm, 0)
            painter.drawLine(line.topLeft(), line.topRight())

        return Piece(height, draw)

    def _cell_font(self, bold: bool, number: int) -> QFont:
        """Return the type of a cell's line: the first in text size, further ones small."""
        return self._ruler.font(PT_TEXT, bold=bold) if number == 0 else self._ruler.font(PT_SMALL)

    def _cell_height(self, parts: tuple[tuple[str, ...], ...], bold: bool) -> float:
        heights = (
            len(lines) * self._ruler.line_mm(self._cell_font(bold, number)) for number, lines in enumerate(parts)
        )
        return max(4.0, sum(heights) + 2 * PAD_MM * 0.8)

    def _draw_cell(
        self,
        painter: QPainter,
        box: tuple[float, float, float, float],
        item: Cell,
        parts: tuple[tuple[str, ...], ...],
        *,
        is_head: bool,
    ) -> None:
        ruler, (left, top, wide, high) = self._ruler, box
        if item.shade_fraction > 0:
            level = round(255 - 56 * min(1.0, item.shade_fraction))
            painter.fillRect(ruler.box(left, top, wide, high), QColor(level, level, level))
        at = top + PAD_MM * 0.8
        for number, lines in enumerate(parts):
            font = self._cell_font(item.strong or is_head, number)
            place = (left + PAD_MM, at, wide - 2 * PAD_MM)
            text_lines(painter, ruler, lines, place, font, _ALIGN[item.align])
            at += len(lines) * ruler.line_mm(font)


def paginate(pieces: Iterator[Piece], room_mm: float) -> list[Sheet]:
    """Put pieces on pages: headings stay with what follows, a table's header comes again on each page."""
    sheets, y = [Sheet()], 0.0
    waiting: list[Piece] = []

    def start_page(repeat: tuple[Piece, ...]) -> float:
        sheets.append(Sheet())
        top = 0.0
        for head in repeat:
            sheets[-1].pieces.append((top, head))
            top += head.height_mm + head.after_mm
        return top

    for piece in pieces:
        if piece.breaks:
            y = start_page(()) if sheets[-1].pieces else y
            continue
        waiting.append(piece)
        if piece.keep:
            continue
        block = sum(one.height_mm + one.after_mm for one in waiting) - waiting[-1].after_mm
        if y + block > room_mm and sheets[-1].pieces:
            y = start_page(piece.repeat if len(waiting) == 1 else ())
        for one in waiting:
            sheets[-1].pieces.append((y, one))
            y += one.height_mm + one.after_mm
        waiting = []
    for one in waiting:
        sheets[-1].pieces.append((y, one))
        y += one.height_mm + one.after_mm
    return sheets
