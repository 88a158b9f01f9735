"""Edits of many records as one: more like one, one field of many, a section in another order."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from typing import Any

from msgspec import structs

from kitplanner.plan.edits import Edit, EditError, Path, chain, get_value, new_id, set_value
from kitplanner.plan.fields import FIELDS, SECTION_KINDS
from kitplanner.plan.fields_spec import FieldSpec
from kitplanner.plan.places import short
from kitplanner.plan.records import SECTIONS, Plan, Record

MOST_MORE = 1000
_ENDS_IN_NUMBER = re.compile(r"^(.*?)(\d{1,9})$", re.DOTALL)


def add_like(path: Path, count: int) -> Edit:
    """Return the edit that adds copies of a record right behind it, with numbered names and ids of their own.

    A name that ends in a number counts on ("Phone 3": "Phone 4"); any other gets 2, 3 and so on behind it.
    Numbers that names of the section already have are passed over.

    Examples
    --------
    >>> from kitplanner.plan.records import Group
    >>> [one.name for one in add_like(("groups", "G1"), 2)(Plan(groups=(Group(id="G1", name="Team 09"),))).groups]
    ['Team 09', 'Team 10', 'Team 11']
    """

    def edit(plan: Plan) -> Plan:
        if len(path) != 2 or path[0] not in SECTIONS:
            raise EditError(path, "only records of a section can be copied", "choose a record of a table")
        model = get_value(plan, path)
        if not 1 <= count <= MOST_MORE:
            raise EditError(path, f"{count} copies cannot be made", f"choose a number from 1 to {MOST_MORE}")
        section = path[0]
        old = getattr(plan, section)
        names = _counted(*_parts(model.name), [record.name for record in old], count)
        ids = _next_ids(plan, section, count)
        copies = [structs.replace(model, id=one, name=name) for one, name in zip(ids, names, strict=True)]
        at = next(place for place, record in enumerate(old) if record is model) + 1
        return structs.replace(plan, **{section: (*old[:at], *copies, *old[at:])})

    return edit


def set_many(section: str, ids: Sequence[str], key: str, value: Any) -> Edit:
    """Return the edit that sets one field of several records of a section."""
    if not ids:
        raise EditError((section, key), "no record is chosen", "choose at least one row")
    return chain(*(set_value((section, one, key), value) for one in dict.fromkeys(ids)))


def sort_section(section: str, key: str, *, descending: bool = False) -> Edit:
    """Return the edit that puts a section's records in the order of one field; equal ones keep their order.

    Numbers inside texts count as numbers ("Phone 9" before "Phone 10"); records without a value come last
    either way.

    Examples
    --------
    >>> from kitplanner.plan.records import Person
    >>> plan = Plan(people=(Person(id="1", name="B"), Person(id="2", name="A", age=9)))
    >>> [one.id for one in sort_section("people", "name")(plan).people]
    ['2', '1']
    """

    def edit(plan: Plan) -> Plan:
        spec = _spec(section, key)
        records: tuple[Record, ...] = getattr(plan, section)
        rank = _rank(plan, spec)
        given = [record for record in records if getattr(record, key) not in (None, ())]
        left = [record for record in records if getattr(record, key) in (None, ())]
        ordered = (*sorted(given, key=lambda record: rank(getattr(record, key)), reverse=descending), *left)
        same = all(one is other for one, other in zip(records, ordered, strict=True))
        return plan if same else structs.replace(plan, **{section: ordered})

    return edit


def _spec(section: str, key: str) -> FieldSpec:
    if section in SECTION_KINDS:
        for spec in FIELDS[SECTION_KINDS[section]]:
            if spec.key == key:
                return spec
    raise EditError((section, key), "there is no such column", "choose one of the table's columns")


def _rank(plan: Plan, spec: FieldSpec) -> Callable[[Any], Any]:
    if spec.kind == "choice":
        order = {value: place for place, (value, _) in enumerate(spec.choices)}
        return lambda value: order.get(value, len(order))
    if spec.kind in ("ref", "refs"):
        names = {record.id: record.name for record in getattr(plan, spec.refs_to)}
        return lambda value: [_in_order(names.get(one, one)) for one in ((value,) if isinstance(value, str) else value)]
    if spec.kind == "windows":
        return lambda value: [(window.start, window.end) for window in value]
    return _in_order if spec.kind == "text" else lambda value: value


def _in_order(text: str) -> list[tuple[int, int, str]]:
    """Return a text as parts that compare like people sort: numbers by size, letters without their size."""
    parts = re.split(r"(\d{1,18})", text)
    return [(0, int(part), "") if place % 2 else (1, 0, part.casefold()) for place, part in enumerate(parts)]


def _parts(name: str) -> tuple[str, int, int]:
    """Return what stands before the number of a name, the number, and its width."""
    found = _ENDS_IN_NUMBER.match(name)
    if found:
        return found[1], int(found[2]), len(found[2]) if found[2].startswith("0") else 1
    return (f"{name} " if name else ""), 1, 1


def _counted(before: str, number: int, width: int, taken: list[str], count: int) -> list[str]:
    used = set(taken)
    names: list[str] = []
    while len(names) < count:
        number += 1
        name = f"{before}{number:0{width}d}"
        if name not in used:
            names.append(name)
    return names


def _next_ids(plan: Plan, section: str, count: int) -> list[str]:
    first = new_id(plan, section)
    found = _ENDS_IN_NUMBER.match(first)
    if found is None:
        raise EditError((section, short(first)), "no free id can be made", "give its last record another id")
    taken = {record.id for name in SECTIONS for record in getattr(plan, name)}
    ids: list[str] = []
    number = int(found[2])
    while len(ids) < count:
        one = f"{found[1]}{number:0{len(found[2])}d}"
        if one not in taken:
            ids.append(one)
        number += 1
    return ids
