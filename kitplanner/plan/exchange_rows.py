"""Cells of one row read as values of a record: as typed, as value, or as the sentence why it cannot be taken."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Mapping
from fractions import Fraction
from types import MappingProxyType
from typing import Any

from msgspec import Struct

from kitplanner.plan.exchange_columns import Column, specs_of
from kitplanner.plan.exchange_tables import Cell
from kitplanner.plan.field_reading import FieldTextError, Reading, number_in_range, read_value
from kitplanner.plan.field_writing import Names, every_digit, value_text
from kitplanner.plan.fields import RECORD_TYPES, SECTION_KINDS
from kitplanner.plan.fields_spec import FieldSpec
from kitplanner.plan.quantities import NumberStyle, Say
from kitplanner.plan.records import Plan
from kitplanner.plan.unit_factors import exact_factor

# Way of giving a value -> its keys; the first way that has all filled keys is meant.
_WAYS: Mapping[str, tuple[str, Mapping[str, tuple[str, ...]]]] = MappingProxyType(
    {
        "devices": (
            "use_by",
            MappingProxyType(
                {
                    "wh_per_day": ("use_wh_per_day",),
                    "percent": ("use_battery_fraction_per_day",),
                    "power_hours": ("use_w", "use_h_per_day"),
                    "times": ("use_w", "use_times_per_day", "use_min_each"),
                }
            ),
        ),
        "people": (
            "watts_by",
            MappingProxyType(
                {
                    "share": ("share_legs_fraction", "share_arms_fraction"),
                    "own": ("own_legs_w", "own_arms_w"),
                    "self_test": ("test_legs_w", "test_arms_w"),
                }
            ),
        ),
        "stations": ("described_by", MappingProxyType({"measured": ("output_w",), "label": ("label_w",)})),
    }
)


class ReadCell(Struct, frozen=True, kw_only=True):
    """One cell: its column's header, field, text as typed, value, whether it changes the record, or its problem."""

    header: str
    key: str
    text: str
    value: Any = None
    changed: bool = False
    problem: str = ""


class Way(Struct, frozen=True):
    """A way of giving use or watts that follows from the filled cells."""

    values: tuple[tuple[str, Any], ...] = ()
    notes: tuple[str, ...] = ()
    problem: str = ""


def reference_names(plan: Plan, section: str) -> Names:
    """Return names of a section's records by id, told apart by the id where two share a name."""
    records = getattr(plan, section)
    count = Counter(record.name for record in records)

    def shown(record: Any) -> str:
        if not record.name:
            return str(record.id)
        return record.name if count[record.name] == 1 else f"{record.name} ({record.id})"

    return MappingProxyType({record.id: shown(record) for record in records})


def written(spec: FieldSpec, value: Any, reading: Reading) -> str:
    """Return a value as a cell holds it; reading it with the same settings gives the very value back."""
    if spec.kind in ("number", "integer") and value is not None:
        return every_digit(spec, float(value), reading.style.decimal)
    text = value_text(spec, value, "", reading.names, reading.say)
    if spec.kind in ("ref", "refs") and value:
        ids = value if isinstance(value, str) else ", ".join(value)
        try:
            return text if read_value(spec, text, reading) == value else ids
        except FieldTextError:
            return ids
    return text


class Reader:
    """Reads the cells of rows; equal texts of one column are read once."""

    def __init__(self, plan: Plan, section: str, columns: tuple[Column, ...], style: NumberStyle, say: Say) -> None:
        self._columns = columns
        self._specs = specs_of(section)
        self._known: dict[tuple[str, Cell], tuple[Any, str]] = {}
        self._readings = {
            column.key: Reading(
                style=style,
                names=reference_names(plan, spec.refs_to) if spec.refs_to else {},
                unit=column.unit,
                say=say,
            )
            for column in columns
            if (spec := self._specs.get(column.key)) is not None
        }
        make: Callable[..., Any] = RECORD_TYPES[SECTION_KINDS[section]]
        self._empty = make(id="", name="")

    def read(self, cells: tuple[Cell, ...], record: Any) -> tuple[ReadCell, ...]:
        """Return every cell of one row; `record` is the one it changes, None for a new one."""
        return tuple(self._read(column, cell, record) for column, cell in zip(self._columns, cells, strict=True))

    def _read(self, column: Column, cell: Cell, record: Any) -> ReadCell:
        text = cell if isinstance(cell, str) else f"{cell:.15g}"
        spec = self._specs.get(column.key)
        if spec is None:
            return ReadCell(header=column.header, key=column.key, text=text)
        blank = not text.strip()
        if record is None and blank:
            # A new record keeps the field's own starting value where the table says nothing.
            return ReadCell(header=column.header, key=column.key, text=text)
        held = getattr(self._empty if record is None else record, column.key)
        reading = self._readings[column.key]
        if record is not None and isinstance(cell, str) and cell == written(spec, held, reading) and not column.unit:
            return ReadCell(header=column.header, key=column.key, text=text, value=held)
        value, problem = self._value(column, spec, cell, reading)
        changed = not problem and (record is None or value != held or type(value) is not type(held))
        return ReadCell(header=column.header, key=column.key, text=text, value=value, changed=changed, problem=problem)

    def _value(self, column: Column, spec: FieldSpec, cell: Cell, reading: Reading) -> tuple[Any, str]:
        known = self._known.get((column.key, cell))
        if known is None:
            try:
                known = (
                    (_number(column, spec, cell, reading), "")
                    if isinstance(cell, float)
                    else (
                        read_value(spec, cell, reading),
                        "",
                    )
                )
            except FieldTextError as error:
                known = (None, str(error))
            self._known[column.key, cell] = known
        return known


def implied_way(section: str, cells: tuple[ReadCell, ...], record: Any) -> Way:
    """Return the way of giving use or watts that the filled cells mean where the table has no column for it."""
    by, ways = _WAYS.get(section, ("", {}))
    if not by or any(cell.key == by for cell in cells):
        return Way()
    keys = {key for one in ways.values() for key in one}
    filled = {cell.key for cell in cells if cell.changed and cell.key in keys and cell.value is not None}
    now = str(getattr(record, by)) if record is not None else ""
    if not filled or (now in ways and filled <= set(ways[now])):
        return Way()
    meant = [way for way, its in ways.items() if filled <= set(its)]
    if not meant:
        return Way(problem=f"it gives one thing in two ways; add a column {by} or empty one of the cells.")
    label = dict(specs_of(section)[by].choices)[meant[0]]
    return Way(((by, meant[0]),), (f"{specs_of(section)[by].label}: {label}.",))


def _number(column: Column, spec: FieldSpec, cell: float, reading: Reading) -> Any:
    """Take a number that a workbook holds as a number: no text, no decimal sign to ask about."""
    text = every_digit_of(cell)
    if spec.kind not in ("number", "integer"):
        return read_value(spec, text, reading)
    if spec.unit == "%" and not column.named_unit and 0 < cell <= 1:
        raise FieldTextError(
            f"{reading.say('Fields', spec.label)} could be {cell:g} percent or the share {cell:g}. "
            "Write [%] behind the column's name if it is percent, or the sign % behind the number."
        )
    factor = exact_factor(column.unit, spec.unit) if column.unit else None
    return number_in_range(spec, Fraction(repr(cell)) * (factor or 1), reading, text)


def every_digit_of(number: float) -> str:
    """Return a number as people write it: whole numbers without a point.

    Examples
    --------
    >>> every_digit_of(7.0), every_digit_of(0.5)
    ('7', '0.5')
    """
    return f"{int(number)}" if number.is_integer() and abs(number) < 1e15 else repr(number)
