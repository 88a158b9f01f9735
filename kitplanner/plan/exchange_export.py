"""Tables out of a plan: CSV, xlsx, and copied rows; without names unless they are asked for.

Texts that a spreadsheet would take for formulas get an apostrophe in front, and the result says how many;
reading such a table back takes it away again. Without names people appear by their ids only, and names of
people inside other texts are replaced by their ids.
"""

from __future__ import annotations

import csv
import html
import io
import re
from collections.abc import Mapping, Sequence
from fractions import Fraction
from types import MappingProxyType
from typing import Any

from msgspec import Struct

from kitplanner.plan.exchange_columns import EXCHANGED, ID_HEADER, header_of, specs_of
from kitplanner.plan.exchange_rows import reference_names, written
from kitplanner.plan.exchange_tables import GUARDED, ExchangeError, guarded
from kitplanner.plan.field_reading import Reading
from kitplanner.plan.field_writing import Names
from kitplanner.plan.fields_spec import FieldSpec
from kitplanner.plan.quantities import COMMA, POINT, Say, plain
from kitplanner.plan.records import Plan

# Fields of people that say who somebody is or describe a body; left out unless names are asked for.
PRIVATE = ("name", "role", "mass_kg", "test_legs_w", "test_arms_w")
_XML_CANNOT = re.compile(r"[\x00-\x08\x0b\x0c\r\x0e-\x1f\ufffe\uffff]")


class ExportChoices(Struct, frozen=True, kw_only=True):
    """What goes out: names or not, decimal comma or point, keys and records (empty: all), language."""

    with_names: bool = False
    decimal_comma: bool = False
    keys: tuple[str, ...] = ()
    ids: tuple[str, ...] = ()
    say: Say = plain


class Sheet(Struct, frozen=True, kw_only=True):
    """A table ready to be written: header, rows of texts and numbers, and what was done to keep it safe.

    `guarded_count` is how many texts got an apostrophe; `notes` are sentences for the user.
    """

    section: str
    header: tuple[str, ...]
    rows: tuple[tuple[str | int | float, ...], ...]
    decimal_comma: bool = False
    guarded_count: int = 0
    notes: tuple[str, ...] = ()


class Copied(Struct, frozen=True):
    """Rows for the clipboard: tab-separated, as HTML, and as plain lines."""

    tsv: str
    html: str
    text: str


def sheet_of(plan: Plan, section: str, choices: ExportChoices | None = None) -> Sheet:
    """Return the table of a section, with labels and units in the header.

    Raises
    ------
    ExchangeError
        The section has no table of its own to give.
    """
    how = ExportChoices() if choices is None else choices
    if section not in EXCHANGED:
        raise ExchangeError(section, "no table comes out of here", f"choose one of {', '.join(EXCHANGED)}")
    specs = specs_of(section)
    hidden = PRIVATE if section == "people" and not how.with_names else ()
    keys = [key for key in how.keys or ("id", *specs) if key not in hidden]
    readings = {key: _reading(plan, specs[key], how) for key in keys if key in specs}
    private = {} if how.with_names else _numbers_of(plan)
    pattern = _pattern(private)
    rows, count = [], 0
    for record in getattr(plan, section):
        if how.ids and record.id not in how.ids:
            continue
        row: list[str | int | float] = []
        for key in keys:
            cell = _cell(specs.get(key), key, record, readings)
            if isinstance(cell, str):
                if pattern is not None:
                    cell = _without_names(cell, key, section, private, pattern)
                count += bool(GUARDED.match(cell))
                cell = guarded(cell)
            row.append(cell)
        rows.append(tuple(row))
    header = tuple(ID_HEADER if key == "id" else header_of(specs[key], how.say) for key in keys)
    return Sheet(
        section=section,
        header=header,
        rows=tuple(rows),
        decimal_comma=how.decimal_comma,
        guarded_count=count,
        notes=_notes(section, how, count),
    )


def csv_of(sheet: Sheet) -> bytes:
    """Return a sheet as CSV in UTF-8 with byte order mark; semicolons part the cells where commas are decimal signs."""
    separator = ";" if sheet.decimal_comma else ","
    return _separated(sheet, separator, "\r\n").encode("utf-8-sig")


def xlsx_of(sheet: Sheet) -> bytes:
    """Return a sheet as a workbook, numbers as numbers.

    Raises
    ------
    ExchangeError
        The writer is not installed, or a text holds signs that no workbook can.
    """
    try:
        from openpyxl import Workbook  # type: ignore[import-untyped]
        from openpyxl.cell.cell import WriteOnlyCell  # type: ignore[import-untyped]
    except ImportError as error:
        raise ExchangeError(
            "The workbook",
            "writing one needs the spreadsheets extra",
            "install kitplanner[spreadsheets] or save as CSV",
        ) from error
    _require_writable(sheet)
    book = Workbook(write_only=True)
    page = book.create_sheet(sheet.section)
    page.freeze_panes = "B2"
    page.append(list(sheet.header))
    for row in sheet.rows:
        cells: list[Any] = []
        for value in map(_held_by_workbook, row):
            cell = WriteOnlyCell(page, value=value)
            if isinstance(value, str):
                cell.data_type = "s"
            cells.append(cell)
        page.append(cells)
    out = io.BytesIO()
    book.save(out)
    return out.getvalue()


def copied(sheet: Sheet) -> Copied:
    """Return a sheet for the clipboard; spreadsheets take the first or second, mail the last."""
    lines = [list(sheet.header), *(_texts(row, sheet) for row in sheet.rows)]
    cells = (("th", sheet.header), *(("td", _texts(row, sheet)) for row in sheet.rows))
    body = "".join(f"<tr>{''.join(f'<{tag}>{_in_html(one)}</{tag}>' for one in texts)}</tr>" for tag, texts in cells)
    page = f'<html><head><meta charset="utf-8"></head><body><table>{body}</table></body></html>'
    text = "\n".join("\t".join(" ".join(one.split()) for one in line) for line in lines)
    return Copied(_separated(sheet, "\t", "\n"), page, text)


def _held_by_workbook(value: str | int | float) -> str | int | float:
    """Return a number as text where a workbook's sixteen digits would change it."""
    return value if isinstance(value, (str, int)) or float(f"{value:.16g}") == value else repr(value)


def _require_writable(sheet: Sheet) -> None:
    for row in sheet.rows:
        if any(isinstance(value, str) and _XML_CANNOT.search(value) for value in row):
            raise ExchangeError(
                f"Record {row[0]}", "a text holds control signs that no workbook can hold", "save as CSV"
            )


def _reading(plan: Plan, spec: FieldSpec, how: ExportChoices) -> Reading:
    names = reference_names(plan, spec.refs_to) if spec.refs_to else {}
    return Reading(style=COMMA if how.decimal_comma else POINT, names=names, say=how.say)


def _cell(spec: FieldSpec | None, key: str, record: Any, readings: Mapping[str, Reading]) -> str | int | float:
    if spec is None:
        return str(record.id)
    value = getattr(record, key)
    if value is None or spec.kind not in ("number", "integer"):
        return written(spec, value, readings[key])
    if spec.kind == "integer":
        return int(value)
    shown = float(Fraction(repr(value)) * Fraction(spec.display_scale))
    exact = float(Fraction(repr(shown)) / Fraction(spec.display_scale)) == value
    # A number that a workbook's own precision would change goes out with every digit, as text.
    return shown if exact else written(spec, value, readings[key])


def _texts(row: Sequence[str | int | float], sheet: Sheet) -> list[str]:
    decimal = "," if sheet.decimal_comma else "."
    return [cell if isinstance(cell, str) else _number_text(cell, decimal) for cell in row]


def _number_text(number: float, decimal: str) -> str:
    if isinstance(number, int) or (number.is_integer() and abs(number) < 1e15):
        return str(int(number))
    return repr(number).replace(".", decimal)


def _separated(sheet: Sheet, separator: str, line_end: str) -> str:
    out = io.StringIO(newline="")
    writer = csv.writer(out, delimiter=separator, lineterminator=line_end)
    writer.writerow(sheet.header)
    writer.writerows(_texts(row, sheet) for row in sheet.rows)
    return out.getvalue()


def _in_html(text: str) -> str:
    return html.escape(text).replace("\n", "<br>")


def _numbers_of(plan: Plan) -> Mapping[str, str]:
    """Return display name -> what stands for it; ids that repeat the name give way to the place in the list."""
    numbers: dict[str, str] = {}
    for place, person in enumerate(plan.people, start=1):
        told = len(person.name) > 1 and person.name != person.id and person.name.casefold() in person.id.casefold()
        if person.name and any(sign.isalpha() for sign in person.name) and person.name != person.id:
            numbers.setdefault(person.name.casefold(), f"#{place}" if told else person.id)
    return MappingProxyType(numbers)


def _pattern(private: Names) -> re.Pattern[str] | None:
    names = sorted((name for name in private if len(name) > 1), key=len, reverse=True)
    return re.compile(rf"(?<!\w)(?:{'|'.join(map(re.escape, names))})(?!\w)", re.IGNORECASE) if names else None


def _without_names(text: str, key: str, section: str, private: Names, pattern: re.Pattern[str]) -> str:
    if section == "people" and key == "id":
        return next((number for name, number in private.items() if len(name) > 1 and name in text.casefold()), text)
    return pattern.sub(lambda found: private.get(found[0].casefold(), "#"), text)


def _notes(section: str, how: ExportChoices, count: int) -> tuple[str, ...]:
    notes = []
    if not how.with_names and section == "people":
        notes.append("Names, roles, body masses and self-tests are left out; people stand by their numbers.")
    if count:
        cells = "1 text begins" if count == 1 else f"{count} texts begin"
        notes.append(f"{cells} like a formula and got an apostrophe in front; reading the table back takes it away.")
    return tuple(notes)
