"""Tables as aligned text for terminals: one line a row, numbers to the right, names made harmless."""

from __future__ import annotations

import unicodedata
from collections.abc import Sequence
from typing import Literal

from kitplanner.report.wording import plain

Side = Literal["left", "right"]
GAP = "  "


def columns(text: str) -> int:
    """Return how many terminal columns a text takes: wide letters two, combining marks none."""
    return sum(_sign_columns(sign) for sign in text)


def _sign_columns(sign: str) -> int:
    if unicodedata.category(sign) in ("Mn", "Me", "Cf"):
        return 0
    return 2 if unicodedata.east_asian_width(sign) in "WF" else 1


def aligned(header: Sequence[str], rows: Sequence[Sequence[str]], sides: Sequence[Side]) -> str:
    """Return header, rule and rows as text; `sides` says for each column where its text stands."""
    lines = [[plain(cell) for cell in row] for row in (header, *rows)]
    widths = [max(columns(line[place]) for line in lines) for place in range(len(header))]
    texts = [
        GAP.join(_padded(cell, width, side) for cell, width, side in zip(line, widths, sides, strict=True)).rstrip()
        for line in lines
    ]
    texts.insert(1, "-" * (sum(widths) + len(GAP) * (len(widths) - 1)))
    return "\n".join(texts)


def _padded(text: str, width: int, side: Side) -> str:
    space = " " * (width - columns(text))
    return text + space if side == "left" else space + text


def pairs(rows: Sequence[tuple[str, str]]) -> str:
    """Return labels and values in two columns, without a header."""
    width = max((columns(plain(label)) for label, _ in rows), default=0)
    return "\n".join(f"{_padded(plain(label), width, 'left')}{GAP}{plain(value)}" for label, value in rows)
