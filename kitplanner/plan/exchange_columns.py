"""Which column of a table is which field: by label or key in any order, with units in the header, or by position."""

from __future__ import annotations

import re
from collections.abc import Mapping
from types import MappingProxyType

from msgspec import Struct

from kitplanner.plan.exchange_tables import Cell
from kitplanner.plan.fields import FIELDS, SECTION_KINDS
from kitplanner.plan.fields_spec import FieldSpec
from kitplanner.plan.places import short
from kitplanner.plan.quantities import Say
from kitplanner.plan.unit_factors import exact_factor

# Sections whose tables go in and out.
EXCHANGED = ("people", "devices", "stores", "stations")
ID_HEADER = "Id"
_UNIT_IN_HEADER = re.compile(r"^(.*?)\s*[\[(]([^\[\]()]*)[\])]\s*$", re.DOTALL)
_SPACES = re.compile(r"[\s_]+")


class Column(Struct, frozen=True, kw_only=True):
    """One column of a table: its place from 1, header as typed, field, and unit of bare numbers.

    `key` is empty where no field has this name; `problem` says why the column cannot be used.
    """

    place: int
    header: str
    key: str = ""
    unit: str = ""
    named_unit: bool = False
    problem: str = ""


def specs_of(section: str) -> Mapping[str, FieldSpec]:
    """Return the fields that go in and out, by key.

    Examples
    --------
    >>> list(specs_of("stores"))[:3]
    ['name', 'count', 'chemistry']
    """
    return MappingProxyType({spec.key: spec for spec in FIELDS[SECTION_KINDS[section]]})


def visible_keys(section: str) -> tuple[str, ...]:
    """Return the keys a table shows as columns, the places of a block without header."""
    return tuple(spec.key for spec in FIELDS[SECTION_KINDS[section]] if spec.column)


def has_header(section: str, row: tuple[Cell, ...], say: Say) -> bool:
    """Tell whether a row names columns: at least one name is known, and no cell is a number."""
    names = _names_of(section, say)
    texts = [cell for cell in row if isinstance(cell, str) and cell.strip()]
    if not texts or any(isinstance(cell, float) for cell in row):
        return False
    known = sum(_split_header(text)[0] in names for text in texts)
    numbers = sum(text.strip()[0].isdigit() for text in texts)
    return known > 0 and numbers == 0 and known * 3 >= len(texts)


def columns_by_header(section: str, row: tuple[Cell, ...], say: Say) -> tuple[Column, ...]:
    """Return the columns a header row names."""
    names = _names_of(section, say)
    specs = specs_of(section)
    columns: list[Column] = []
    for place, cell in enumerate(row, start=1):
        header = str(cell).strip()
        plain_name, unit = _split_header(header)
        key = names.get(plain_name, "") or names.get(_plain(header), "")
        column = Column(place=place, header=header, key=key)
        if not key:
            said = f"column {place} named {short(header, 60)} belongs to no field and is left out"
            column = Column(place=place, header=header, problem=said if header else "")
        elif any(other.key == key for other in columns):
            said = f"column {place} named {short(header, 60)} is there twice and is left out"
            column = Column(place=place, header=header, problem=said)
        elif unit and key in specs:
            column = _with_unit(column, specs[key], unit, say)
        columns.append(column)
    return tuple(columns)


def columns_by_place(section: str, width: int, keys: tuple[str, ...], say: Say) -> tuple[Column, ...]:
    """Return the columns of a block without header: the given keys from the first one on."""
    specs = specs_of(section)
    columns = []
    for place in range(1, width + 1):
        key = keys[place - 1] if place <= len(keys) else ""
        header = ID_HEADER if key == "id" else say("Fields", specs[key].label) if key else ""
        problem = "" if key else f"column {place} is one more than there are fields and is left out"
        columns.append(Column(place=place, header=header, key=key, problem=problem))
    return tuple(columns)


def header_of(spec: FieldSpec, say: Say) -> str:
    """Return a field's label with its unit, as it stands above a column.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> from kitplanner.plan.quantities import plain
    >>> header_of(field("device", "battery_wh"), plain)
    'Own battery [Wh]'
    """
    label = say("Fields", spec.label)
    return f"{label} [{say('Fields', spec.unit)}]" if spec.unit else label


def _with_unit(column: Column, spec: FieldSpec, unit: str, say: Say) -> Column:
    if unit in (spec.unit, say("Fields", spec.unit)):
        return Column(place=column.place, header=column.header, key=column.key, named_unit=True)
    if spec.kind in ("number", "integer") and spec.unit and exact_factor(unit, spec.unit) is not None:
        return Column(place=column.place, header=column.header, key=column.key, unit=unit, named_unit=True)
    if spec.kind not in ("number", "integer"):
        return column
    own = f"in {spec.unit}" if spec.unit else "without a unit"
    said = f"column {column.place} named {short(column.header, 60)} is left out because this field is {own}"
    return Column(place=column.place, header=column.header, problem=said)


def _names_of(section: str, say: Say) -> dict[str, str]:
    """Return field keys by every name a header may have."""
    names = {"id": "id"}
    for key, spec in specs_of(section).items():
        for name in (key, spec.label, say("Fields", spec.label), f"{say('Fields', spec.label)} {spec.unit}"):
            names.setdefault(_plain(name), key)
    return names


def _split_header(header: str) -> tuple[str, str]:
    found = _UNIT_IN_HEADER.match(header.strip())
    return (_plain(found[1]), found[2].strip()) if found else (_plain(header), "")


def _plain(name: str) -> str:
    return _SPACES.sub(" ", name).strip().casefold()
