"""Tables of people, devices, stores and stations into a plan: preview first, then one edit.

A preview shows every cell as typed with its value or the sentence that says why it cannot be taken, and which
rows are new or change a record, found by its id, else by its name. Nothing is guessed silently: unknown columns
are named, a way of giving use or watts that follows from the filled cells stands in the row's notes.
"""

from __future__ import annotations

import itertools
import re
from collections import Counter
from collections.abc import Callable, Collection, Mapping
from typing import Any, Literal

from msgspec import Struct, structs

from kitplanner.plan.edits import Edit, EditError, new_id, set_value
from kitplanner.plan.exchange_columns import (
    EXCHANGED,
    Column,
    columns_by_header,
    columns_by_place,
    has_header,
    visible_keys,
)
from kitplanner.plan.exchange_rows import ReadCell, Reader, implied_way
from kitplanner.plan.exchange_tables import Cell, ExchangeError, Table
from kitplanner.plan.fields import RECORD_TYPES, SECTION_KINDS
from kitplanner.plan.places import short
from kitplanner.plan.quantities import POINT, NumberStyle, Say, plain
from kitplanner.plan.records import SECTIONS, Plan

__all__ = [
    "EXCHANGED",
    "Action",
    "Column",
    "ExchangeError",
    "Preview",
    "PreviewRow",
    "ReadCell",
    "TableChoices",
    "apply",
    "preview",
    "visible_keys",
]

Action = Literal["new", "update", "same"]

_BAD_SHOWN = 3
_LONGEST_ID = 64


class TableChoices(Struct, frozen=True, kw_only=True):
    """How a table is taken: style of its numbers, header or not (None: look), places, records to write onto, language.

    `columns` are the keys of a block without header, the visible ones if empty; `onto` are ids of records that
    the rows of such a block are written onto in their order, further rows being new.
    """

    style: NumberStyle = POINT
    header: bool | None = None
    columns: tuple[str, ...] = ()
    onto: tuple[str, ...] = ()
    say: Say = plain


class PreviewRow(Struct, frozen=True, kw_only=True):
    """One row: its line in the source, what becomes of it, cells, and why it cannot be taken as a whole.

    `implied` are keys set because filled cells make no sense otherwise, with `notes` that say so.
    """

    line: int
    action: Action
    record_id: str
    name: str
    cells: tuple[ReadCell, ...]
    problem: str = ""
    implied: tuple[tuple[str, Any], ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def problems(self) -> tuple[str, ...]:
        """Every reason why this row cannot be taken, with row and column named."""
        own = (f"Row {self.line}: {self.problem}",) if self.problem else ()
        cells = (f"Row {self.line}, column {cell.header}: {cell.problem}" for cell in self.cells if cell.problem)
        return (*own, *cells)

    @property
    def changes(self) -> tuple[tuple[str, Any], ...]:
        """Keys and values this row sets."""
        return (*((cell.key, cell.value) for cell in self.cells if cell.changed), *self.implied)


class Preview(Struct, frozen=True, kw_only=True):
    """What a table would do to a section of a plan, before anything is done."""

    section: str
    header: bool
    columns: tuple[Column, ...]
    rows: tuple[PreviewRow, ...]
    notes: tuple[str, ...] = ()

    @property
    def bad_lines(self) -> tuple[int, ...]:
        """Lines of rows that cannot be taken."""
        return tuple(row.line for row in self.rows if row.problems)

    @property
    def problems(self) -> tuple[str, ...]:
        """Every problem of every row, in order."""
        return tuple(problem for row in self.rows for problem in row.problems)

    def count(self, action: Action) -> int:
        """Return how many good rows are new, change a record, or change nothing."""
        return sum(row.action == action and not row.problems for row in self.rows)


def preview(plan: Plan, section: str, table: Table, choices: TableChoices | None = None) -> Preview:
    """Return what a table would do to a section; no cell is lost and nothing is changed.

    Raises
    ------
    ExchangeError
        The section takes no tables, or the table has no row or no known column.
    """
    how = TableChoices() if choices is None else choices
    if section not in EXCHANGED:
        raise ExchangeError(section, "no table goes in here", f"choose one of {', '.join(EXCHANGED)}")
    header = has_header(section, table.rows[0], how.say) if how.header is None else how.header
    columns = _columns(section, table, header, how)
    if not any(column.key for column in columns):
        raise ExchangeError("The table", "none of its columns is a field", "name the columns as the fields are named")
    start = 1 if header else 0
    if len(table.rows) == start:
        raise ExchangeError("The table", "it has a header and no rows", "add at least one row")
    rows = _rows(plan, section, columns, table, (start, how))
    unknown = tuple(f"{column.problem[0].upper()}{column.problem[1:]}." for column in columns if column.problem)
    return Preview(section=section, header=header, columns=columns, rows=rows, notes=(*table.notes, *unknown))


def apply(seen: Preview, leave_out: Collection[int] = ()) -> Edit:
    """Return the one edit that takes the rows of a preview, without those whose lines are left out.

    Raises
    ------
    ExchangeError
        A row that cannot be taken is not left out; the message names the first ones.
    """
    taken = tuple(row for row in seen.rows if row.line not in leave_out)
    bad = [problem for row in taken for problem in row.problems]
    if bad:
        more = f" (and {len(bad) - _BAD_SHOWN} more)" if len(bad) > _BAD_SHOWN else ""
        raise ExchangeError(
            "The table", f"{' '.join(bad[:_BAD_SHOWN])}{more}", "correct these cells or leave their rows out"
        )

    def edit(plan: Plan) -> Plan:
        kept = {record.id: record for record in getattr(plan, seen.section)}
        free = _free_ids(plan, seen.section, {row.record_id for row in taken if row.action == "new"})
        make: Callable[..., Any] = RECORD_TYPES[SECTION_KINDS[seen.section]]
        for row in taken:
            if row.action == "new":
                record_id = row.record_id or free()
                if record_id in kept:
                    raise EditError((seen.section, record_id), "this id is taken by now", "read the table again")
                kept[record_id] = _with_changes(seen.section, make(id=record_id, name=_first_name(row, record_id)), row)
            elif row.record_id not in kept:
                raise EditError((seen.section, row.record_id), "this record is gone by now", "read the table again")
            else:
                kept[row.record_id] = _with_changes(seen.section, kept[row.record_id], row)
        old = getattr(plan, seen.section)
        records = tuple(kept.values())
        same = len(old) == len(records) and all(map(_is, old, records))
        return plan if same else structs.replace(plan, **{seen.section: records})

    return edit


def _first_name(row: PreviewRow, record_id: str) -> str:
    """Return the name of a new record before its cells are set: its id, but nothing where the table says so."""
    said = bool(row.record_id) and any(cell.key == "name" for cell in row.cells)
    return "" if said else record_id


def _is(one: object, other: object) -> bool:
    return one is other


def _columns(section: str, table: Table, header: bool, how: TableChoices) -> tuple[Column, ...]:
    if header:
        return columns_by_header(section, table.rows[0], how.say)
    return columns_by_place(section, len(table.rows[0]), how.columns or visible_keys(section), how.say)


def _rows(
    plan: Plan, section: str, columns: tuple[Column, ...], table: Table, rest: tuple[int, TableChoices]
) -> tuple[PreviewRow, ...]:
    start, how = rest
    reader = Reader(plan, section, columns, how.style, how.say)
    finder = _Finder(plan, section)
    rows: list[PreviewRow] = []
    for index, cells in enumerate(table.rows[start:]):
        line = table.lines[start + index]
        onto = how.onto[index] if index < len(how.onto) else ""
        found = finder.find(_text_of(columns, cells, "id"), _text_of(columns, cells, "name"), onto, line)
        record = finder.records.get(found.record_id)
        read = reader.read(cells, record)
        way = implied_way(section, read, record)
        changed = any(cell.changed for cell in read) or bool(way.values)
        rows.append(
            PreviewRow(
                line=line,
                action="new" if record is None else "update" if changed else "same",
                record_id=found.record_id,
                name=_text_of(columns, cells, "name") or (record.name if record is not None else ""),
                cells=read,
                problem=found.problem or way.problem,
                implied=way.values,
                notes=way.notes,
            )
        )
    return tuple(rows)


def _text_of(columns: tuple[Column, ...], cells: tuple[Cell, ...], key: str) -> str:
    for column, cell in zip(columns, cells, strict=True):
        if column.key == key:
            return cell if isinstance(cell, str) else f"{cell:.15g}"
    return ""


class _Found(Struct, frozen=True):
    """Which record a row is about: its id (empty: a new one gets its own), and why the row is refused."""

    record_id: str
    problem: str = ""


class _Finder:
    """Finds the record of each row: by the place written onto, by id, else by name."""

    def __init__(self, plan: Plan, section: str) -> None:
        self._section = section
        self.records: Mapping[str, Any] = {record.id: record for record in getattr(plan, section)}
        self._names = Counter(record.name for record in self.records.values())
        self._by_name = {record.name: record.id for record in self.records.values()}
        self._elsewhere = {
            record.id: other for other in SECTIONS if other != section for record in getattr(plan, other)
        }
        self._lines: dict[tuple[str, str], int] = {}

    def find(self, typed_id: str, name: str, onto: str, line: int) -> _Found:
        """Return the record of one row."""
        found = self._found(typed_id.strip(), name, onto)
        if found.problem:
            return found
        key = ("id", found.record_id) if found.record_id else ("name", name)
        first = self._lines.setdefault(key, line) if key[1] else line
        if first != line:
            what = f"the id {short(key[1])}" if key[0] == "id" and typed_id else f"the name {short(name)}"
            return _Found(found.record_id, f"{what} is already in row {first}; change it or leave one row out.")
        return found

    def _found(self, typed_id: str, name: str, onto: str) -> _Found:
        if onto:
            return _Found(onto)
        if typed_id:
            return _Found(typed_id, "" if typed_id in self.records else self._why_no_id(typed_id))
        if name and self._names[name] > 1:
            said = f"the name {short(name)} belongs to {self._names[name]} records; add a column Id to tell them apart."
            return _Found("", said)
        return _Found(self._by_name.get(name, "") if name else "")

    def _why_no_id(self, typed_id: str) -> str:
        if typed_id.startswith("#"):
            return f"{short(typed_id)} is a number of an export without names; write the id or export with names."
        if typed_id in self._elsewhere:
            return f"the id {short(typed_id)} is used among the {self._elsewhere[typed_id]}; write another one."
        if len(typed_id) > _LONGEST_ID or not typed_id.isprintable():
            return f"the id {short(typed_id)} is too long or holds hidden signs; write a short one such as P1."
        return ""


def _with_changes(section: str, record: Any, row: PreviewRow) -> Any:
    """Return the record with the row's values, each checked and marked as the generic edit does it."""
    small = structs.replace(Plan(), **{section: (record,)})
    for key, value in row.changes:
        small = set_value((section, record.id, key), value)(small)
    return getattr(small, section)[0]


def _free_ids(plan: Plan, section: str, given: set[str]) -> Callable[[], str]:
    """Return a giver of ids that are free in the whole plan and not given by the table itself."""
    first = new_id(plan, section)
    prefix, digits = re.fullmatch(r"(.*?)(\d+)", first, re.DOTALL).groups()  # type: ignore[union-attr]
    taken = {record.id for name in SECTIONS for record in getattr(plan, name)} | given
    numbers = itertools.count(int(digits))
    free = (one for number in numbers if (one := f"{prefix}{number:0{len(digits)}d}") not in taken)
    return lambda: next(free)
