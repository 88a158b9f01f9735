"""Tables from outside as rows of cells: CSV of any separator, workbooks, and text from the clipboard.

A cell is text, or a number where a workbook holds one; nothing is interpreted here. Text that an export guarded
against being taken for a formula gets its own first sign back.
"""

from __future__ import annotations

import csv
import datetime
import io
import math
import re
from collections import Counter
from collections.abc import Sequence
from pathlib import Path

from msgspec import Struct

Cell = str | float

MOST_BYTES = 20_000_000
MOST_ROWS = 10_000
MOST_COLUMNS = 500
SEPARATORS = ("\t", ";", ",", "|")
WORKBOOKS = (".xlsx", ".xlsm", ".xls", ".xlsb", ".ods")
# What a spreadsheet takes for a formula at the start of a cell, behind any number of guards.
GUARDED = re.compile(r"^'*[=+\-@\t\r]")
_SNIFFED_ROWS = 200


class ExchangeError(ValueError):
    """A table that cannot be read or taken: one sentence with place, reason and remedy."""

    def __init__(self, place: str, reason: str, remedy: str) -> None:
        super().__init__(f"{place}: {reason}; {remedy}.")


class Table(Struct, frozen=True, kw_only=True):
    """Rows of cells, all of the same length; `lines` are the rows' numbers in the source, from 1."""

    rows: tuple[tuple[Cell, ...], ...]
    lines: tuple[int, ...]
    separator: str = ""
    notes: tuple[str, ...] = ()


def read_table(path: Path, sheet: int | str = 0) -> Table:
    """Read a table from a CSV file or a workbook.

    Raises
    ------
    ExchangeError
        The file cannot be read, is no table, or is too large.
    """
    try:
        size = path.stat().st_size
        if not path.is_file():
            raise ExchangeError(path.name, "this is not a file", "choose a CSV, xlsx or ods file")
        if size > MOST_BYTES:
            raise ExchangeError(path.name, f"it has {size} bytes, more than {MOST_BYTES}", "split the table")
        data = path.read_bytes()
    except OSError as error:
        reason = error.strerror or "it cannot be read"
        raise ExchangeError(path.name, reason.lower(), "check the file and who may read it") from error
    if path.suffix.lower() in WORKBOOKS:
        return table_of_workbook(data, path.name, sheet)
    return table_of_bytes(data, path.name)


def table_of_bytes(data: bytes, name: str = "The table") -> Table:
    """Read a table from the bytes of a text file, with or without byte order mark."""
    notes: tuple[str, ...] = ()
    if data.startswith(b"PK\x03\x04"):
        raise ExchangeError(name, "this is a workbook, not plain text", "give its file name the ending xlsx or ods")
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        text = _decoded(data, "utf-16", name)
    else:
        try:
            text = data.decode("utf-8-sig")
        except UnicodeDecodeError:
            text = _decoded(data, "cp1252", name)
            notes = ("The file is not in UTF-8 and was read as Western European; look at letters with accents.",)
    table = table_of_text(text, name)
    return Table(rows=table.rows, lines=table.lines, separator=table.separator, notes=notes + table.notes)


def table_of_text(text: str, name: str = "The table", separator: str = "") -> Table:
    r"""Read a table from text: the separator is the one that parts the lines most evenly.

    Examples
    --------
    >>> table_of_text("Name;Age\nAda;40").rows
    (('Name', 'Age'), ('Ada', '40'))
    """
    if "\x00" in text:
        raise ExchangeError(name, "it holds signs that no text has", "save it as CSV or copy the cells again")
    text = text.removeprefix("\ufeff")
    named = re.match(r"^sep=(.)\r?\n", text)
    if named:
        text = text[named.end() :]
    separator = named[1] if named else separator or _separator_of(text)
    return _squared(_split(text, separator), separator, name)


def table_of_workbook(data: bytes, name: str = "The workbook", sheet: int | str = 0) -> Table:
    """Read the cells of one sheet of a workbook; formulas count as the values saved with them."""
    try:
        import pandas as pd  # type: ignore[import-untyped]
        import python_calamine  # noqa: F401  (pandas loads it by name; asked for here to say so early)
    except ImportError as error:
        raise ExchangeError(
            name, "reading workbooks needs the spreadsheets extra", "install kitplanner[spreadsheets] or save as CSV"
        ) from error
    try:
        frame = pd.read_excel(
            io.BytesIO(data), sheet_name=sheet, header=None, dtype=object, engine="calamine", na_filter=False
        )
    except Exception as error:  # the reader has errors of its own that it does not export
        raise ExchangeError(
            name, "it cannot be read as a workbook", "open it in a spreadsheet and save it again"
        ) from error
    rows = [[_workbook_cell(value) for value in row] for row in frame.itertuples(index=False, name=None)]
    return _squared(rows, "", name)


def guarded(text: str) -> str:
    """Return a text so that no spreadsheet takes it for a formula.

    Examples
    --------
    >>> guarded("=1+1"), guarded("'=x"), guarded("Ada")
    ("'=1+1", "''=x", 'Ada')
    """
    return f"'{text}" if GUARDED.match(text) else text


def unguarded(text: str) -> str:
    """Return what a guarded text was; every other text stays as it is.

    Examples
    --------
    >>> unguarded("'=1+1"), unguarded("'s lamp")
    ('=1+1', "'s lamp")
    """
    return text[1:] if text.startswith("'") and GUARDED.match(text) else text


def _decoded(data: bytes, encoding: str, name: str) -> str:
    try:
        return data.decode(encoding)
    except UnicodeDecodeError as error:
        raise ExchangeError(name, "its letters are in no known encoding", "save it as CSV in UTF-8") from error


def _separator_of(text: str) -> str:
    """Return the separator that parts most lines into the same number of cells."""
    best, best_score = "\t", (0.0, 0)
    for separator in SEPARATORS:
        if separator not in text:
            continue
        widths = [len(row) for row in _split(text, separator, most=_SNIFFED_ROWS) if any(row)]
        if not widths:
            continue
        width, count = Counter(widths).most_common(1)[0]
        score = (count / len(widths) if width > 1 else 0.0, width)
        # Decimal commas part lines unevenly; a semicolon or tab that parts them evenly comes first.
        if score > best_score and (best_score[0] < 0.9 or score[0] > best_score[0]):
            best, best_score = separator, score
    return best


def _split(text: str, separator: str, most: int = MOST_ROWS + 1) -> list[list[str]]:
    """Split strictly by the rules of quotes; where a quote is only a sign of the text, plainly at the separators."""
    rows: list[list[str]] = []
    try:
        for row in csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True):
            rows.append(row)
            if len(rows) >= most:
                break
    except csv.Error as error:
        if "field limit" in str(error):
            raise ExchangeError(
                "The table", "a cell is longer than any text here", "shorten it or mend the quotes"
            ) from error
        lines = re.split(r"\r\n|\n|\r", text)
        return [line.split(separator) if line else [] for line in lines[:most]]
    return rows


def _workbook_cell(value: object) -> Cell:
    if value is None or (isinstance(value, float) and math.isnan(value)):
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, (int, float)):
        return float(value)
    if isinstance(value, datetime.time):
        return value.strftime("%H:%M")
    if isinstance(value, datetime.datetime):
        return value.date().isoformat() if value.time() == datetime.time() else value.isoformat(sep=" ")
    if isinstance(value, datetime.date):
        return value.isoformat()
    return str(value)


def _squared(rows: Sequence[Sequence[Cell]], separator: str, name: str) -> Table:
    """Return the rows without empty ones at any place, all as wide as the widest."""
    kept = [(line, row) for line, row in enumerate(rows, start=1) if any(not _is_blank(cell) for cell in row)]
    if not kept:
        raise ExchangeError(name, "it holds no cells", "copy or choose a table with at least one row")
    width = max(len(row) for _, row in kept)
    if len(kept) > MOST_ROWS or width > MOST_COLUMNS:
        size = f"{len(kept)} rows and {width} columns" if len(kept) <= MOST_ROWS else f"more than {MOST_ROWS} rows"
        raise ExchangeError(name, f"it has {size}", f"split it; {MOST_ROWS} rows and {MOST_COLUMNS} columns are taken")
    squared = tuple(
        tuple(unguarded(cell) if isinstance(cell, str) else cell for cell in (*row, *[""] * (width - len(row))))
        for _, row in kept
    )
    return Table(rows=squared, lines=tuple(line for line, _ in kept), separator=separator)


def _is_blank(cell: Cell) -> bool:
    return isinstance(cell, str) and not cell.strip()
