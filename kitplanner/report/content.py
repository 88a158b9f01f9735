"""What a paper says, without saying how it is drawn.

A paper is a frozen list of blocks. One painter draws them for the printer, the PDF and the preview, and
`twins.py` writes the same content as plain text, HTML and CSV, so no copy can say something else.
Meaning never hangs on colour: a cell's shade only repeats what its text says, and prints in black and white.
"""

from __future__ import annotations

from typing import Literal

from msgspec import Struct

Align = Literal["left", "right", "centre"]
TextStyle = Literal["body", "lead", "note", "caution"]


class Paragraph(Struct, frozen=True, kw_only=True, tag="paragraph"):
    """Running text; `label` is a short mark in front of it, such as the number of a caution."""

    text: str
    style: TextStyle = "body"
    label: str = ""


class Heading(Struct, frozen=True, kw_only=True, tag="heading"):
    """Title of a part of the paper; level 1 is the largest below the paper's own title."""

    text: str
    level: int = 1


class Cell(Struct, frozen=True, kw_only=True):
    """One cell: its lines of text, and a shade from 0 (white) to 1 (darkest grey) that repeats the text."""

    lines: tuple[str, ...] = ()
    align: Align = "left"
    strong: bool = False
    shade_fraction: float = 0.0
    span: int = 1

    @property
    def text(self) -> str:
        """Return the lines as one text."""
        return "; ".join(line for line in self.lines if line)


class Table(Struct, frozen=True, kw_only=True, tag="table"):
    """A table; the header rows repeat on every page, the first `head_columns` columns name the row.

    `widths` are relative (empty: all alike). Footnotes stand below the last row.
    """

    title: str
    header: tuple[tuple[Cell, ...], ...]
    rows: tuple[tuple[Cell, ...], ...]
    head_columns: int = 1
    widths: tuple[float, ...] = ()
    footnotes: tuple[str, ...] = ()

    @property
    def column_count(self) -> int:
        """Return the number of columns, cells that span several counted as often."""
        return max((sum(cell.span for cell in row) for row in (*self.header, *self.rows)), default=0)


class PageBreak(Struct, frozen=True, kw_only=True, tag="page_break"):
    """The next block starts a new page."""


Block = Paragraph | Heading | Table | PageBreak


class Paper(Struct, frozen=True, kw_only=True):
    """One printable paper: its key on the command line, what it says, and the line on every page.

    `foot` stands at the bottom of every page; the painter adds the page number to it.
    """

    key: str
    title: str
    subtitle: str = ""
    blocks: tuple[Block, ...] = ()
    foot: str = ""


def cell(*lines: str, align: Align = "left", strong: bool = False, shade_fraction: float = 0.0) -> Cell:
    """Return a cell with the given lines."""
    return Cell(lines=lines, align=align, strong=strong, shade_fraction=shade_fraction)


def check_tables(paper: Paper) -> None:
    """Raise ValueError when a row of a table has another number of columns than the table."""
    for block in paper.blocks:
        if not isinstance(block, Table):
            continue
        for number, row in enumerate((*block.header, *block.rows), start=1):
            width = sum(item.span for item in row)
            if width != block.column_count:
                raise ValueError(
                    f"table '{block.title}': row {number} has {width} columns, the table has {block.column_count}"
                )
