"""Generic edits: each returns a function from plan to plan that shares every untouched record.

A path is a tuple of attribute names and record ids, such as `("stations", "A", "stages", "s2", "loop_ohm")`.
An edit that changes nothing returns the very same plan. Values are taken only if a file could hold them;
whether they make sense is for `plan/checks.py` to say, so that nothing is corrected silently.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from functools import cache
from types import MappingProxyType
from typing import Any

import msgspec
from msgspec import structs

from kitplanner.plan.fields import spec_of
from kitplanner.plan.places import place_of_path, short
from kitplanner.plan.records import SECTIONS, Note, Plan, Record
from kitplanner.plan.references import without_references
from kitplanner.plan.refusal import explain_refusal

Path = tuple[str, ...]
Edit = Callable[[Plan], Plan]

# Keys that identify a record or the file; changing them would tear references apart.
_FIXED = ("id", "format", "version")
_LETTERS = {
    "blocks": "Q",
    "groups": "G",
    "people": "P",
    "stations": "S",
    "stores": "B",
    "devices": "D",
    "charging_points": "C",
    "other_sources": "O",
    "medical_needs": "N",
    "pack_items": "K",
    "log": "L",
    "stages": "s",
    "temperatures": "T",
    "bouts": "b",
    "charging": "c",
}


class EditError(ValueError):
    """An edit that cannot be made: place, reason and remedy in one sentence."""

    def __init__(self, path: Path, reason: str, remedy: str) -> None:
        self.path = path
        super().__init__(f"{place_of_path(path)}: {reason}; {remedy}.")


def get_value(plan: Plan, path: Path) -> Any:
    """Return what stands at a path: a value, a record or a tuple of records.

    Examples
    --------
    >>> get_value(Plan(days=4), ("days",))
    4
    """
    here: Any = plan
    for depth, part in enumerate(path):
        here = _child(here, part, path[: depth + 1])
    return here


def set_value(path: Path, value: Any) -> Edit:
    """Return the edit that sets one value and notes that it is the user's own.

    A note is kept only where the mark differs from the field's usual one. Setting an equal value of the
    same type returns the same plan. A path that ends in `("notes", key)` sets or, with None, drops a note.
    """

    def edit(plan: Plan) -> Plan:
        if not path or path[-1] in _FIXED:
            raise EditError(path, "this key cannot be changed", "change another one")
        if len(path) > 1 and path[-2] == "notes":
            return _edited(plan, path[:-2], path, lambda record: _with_note(record, path[-1], value, path))
        return _edited(plan, path[:-1], path, lambda record: _with_value(record, path[-1], value, path))

    return edit


def add_record(path: Path, record: Record, index: int | None = None) -> Edit:
    """Return the edit that puts a record into the collection at a path, at its end or at an index."""

    def edit(plan: Plan) -> Plan:
        def insert(records: tuple[Record, ...]) -> tuple[Record, ...]:
            _require_collection(records, path)
            own_id = getattr(record, "id", "")
            if not own_id or own_id in (getattr(other, "id", None) for other in records):
                raise EditError(path, f"the id {short(own_id)} is empty or already taken", "use a new id")
            _require_holdable(record, path)
            at = len(records) if index is None else index
            if not 0 <= at <= len(records):
                raise EditError(path, f"there is no place {at} in a list of {len(records)}", "use a smaller number")
            return (*records[:at], record, *records[at:])

        return _checked_types(_edited(plan, path, path, insert), path)

    return edit


def remove_record(path: Path) -> Edit:
    """Return the edit that takes a record out, together with every reference to it.

    A person left without any station is set to 0 minutes and a block left without any group goes with
    its last group, because an empty list means "all" and would put people where nobody put them.
    """

    def edit(plan: Plan) -> Plan:
        record = get_value(plan, path)
        if not isinstance(record, Record):
            raise EditError(path, "there is no record to remove", "choose a record")
        if path[-1] != getattr(record, "id", None):
            return set_value(path, None)(plan)

        def drop(records: tuple[Record, ...]) -> tuple[Record, ...]:
            return tuple(other for other in records if getattr(other, "id", None) != path[-1])

        smaller = _edited(plan, path[:-1], path, drop)
        return without_references(smaller, path[0], path[-1]) if len(path) == 2 else smaller

    return edit


def move_record(path: Path, index: int) -> Edit:
    """Return the edit that moves a record to another place in its collection."""

    def edit(plan: Plan) -> Plan:
        moved = get_value(plan, path)

        def reorder(records: tuple[Record, ...]) -> tuple[Record, ...]:
            _require_collection(records, path)
            if not 0 <= index < len(records):
                raise EditError(path, f"there is no place {index} in a list of {len(records)}", "use a smaller number")
            if records[index] is moved:
                return records
            others = [other for other in records if other is not moved]
            return (*others[:index], moved, *others[index:])

        return _edited(plan, path[:-1], path, reorder)

    return edit


def replace_record(path: Path, record: Record) -> Edit:
    """Return the edit that puts another record of the same id in a record's place."""

    def edit(plan: Plan) -> Plan:
        def swap(old: Any) -> Record:
            if old is not None and not isinstance(old, Record):
                raise EditError(path, "there is no record to replace", "choose a record")
            if getattr(record, "id", "") != getattr(old, "id", getattr(record, "id", "")):
                raise EditError(path, "the new record has another id", "keep the id")
            _require_holdable(record, path)
            return old if old == record and type(old) is type(record) else record

        return _checked_types(_edited(plan, path, path, swap), path)

    return edit


def chain(*edits: Edit) -> Edit:
    """Return one edit that makes several one after the other."""

    def edit(plan: Plan) -> Plan:
        for one in edits:
            plan = one(plan)
        return plan

    return edit


def new_id(plan: Plan, section: str | Path) -> str:
    """Return an id that is free, in the manner of the last one of that collection.

    Examples
    --------
    >>> from kitplanner.plan.records import Store
    >>> new_id(Plan(stores=(Store(id="A-B1", name="Bank"),)), "stores")
    'A-B2'
    >>> new_id(Plan(), "people")
    'P1'
    """
    path = (section,) if isinstance(section, str) else section
    records = get_value(plan, path)
    _require_collection(records, path)
    taken = {record.id for record in records}
    if len(path) == 1:
        taken |= {record.id for name in SECTIONS for record in getattr(plan, name)}
    match = re.fullmatch(r"(.*?)(\d+)", records[-1].id) if records else None
    prefix, width = (match[1], len(match[2])) if match else (_LETTERS.get(path[-1], "X"), 1)
    numbers = [int(found[1]) for one in taken if (found := re.fullmatch(re.escape(prefix) + r"(\d{1,9})", one))]
    return f"{prefix}{max(numbers, default=0) + 1:0{width}d}"


def _child(here: Any, part: str, path: Path) -> Any:
    if isinstance(here, tuple):
        for record in here:
            if getattr(record, "id", None) == part:
                return record
    elif isinstance(here, dict) and part in here:
        return here[part]
    elif isinstance(here, Record) and part in here.__struct_fields__:
        return getattr(here, part)
    raise EditError(path, "there is nothing at this place", "choose something that is in the plan")


def _edited(plan: Plan, path: Path, whole: Path, change: Callable[[Any], Any]) -> Plan:
    """Return the plan with `change` made at a path; the very same plan if nothing changed."""
    changed: Plan = _rewrite(plan, path, whole, change)
    return changed


def _rewrite(node: Any, path: Path, whole: Path, change: Callable[[Any], Any]) -> Any:
    """Return the node with `change` made at a path below it; the node itself if nothing changed."""
    if not path:
        return change(node)
    child = _child(node, path[0], whole)
    changed = _rewrite(child, path[1:], whole, change)
    if changed is child:
        return node
    if isinstance(node, tuple):
        return tuple(changed if record is child else record for record in node)
    return structs.replace(node, **{path[0]: changed})


def _with_value(record: Any, key: str, value: Any, path: Path) -> Any:
    if not isinstance(record, Record):
        raise EditError(path, "there is no such key", "choose a key of a record")
    old = _child(record, key, path)
    held = _holdable(record, key, value, path)
    if held == old and type(held) is type(old):
        return record
    changes: dict[str, Any] = {key: held}
    spec = spec_of(record, key)
    if spec is not None and "notes" in record.__struct_fields__:
        notes = {name: note for name, note in record.notes.items() if name != key}  # type: ignore[attr-defined]
        changes["notes"] = notes if spec.mark == "own" else {**notes, key: Note(mark="own")}
    return structs.replace(record, **changes)


def _with_note(record: Any, key: str, note: Any, path: Path) -> Any:
    known = isinstance(record, Record) and key in record.__struct_fields__ and key not in (*_FIXED, "notes")
    if not known or not (note is None or isinstance(note, Note)):
        raise EditError(path, "this is not a note about a key of the record", "give a note for one of its keys")
    others = {name: other for name, other in record.notes.items() if name != key}
    changed = others if note is None else {**others, key: note}
    return record if changed == record.notes else structs.replace(record, notes=changed)


@cache
def _types_of(kind: type[Record]) -> Mapping[str, Any]:
    """Return the types of a record's keys; read once, because the annotations are text."""
    return MappingProxyType({one.name: one.type for one in structs.fields(kind)})


def _holdable(record: Record, key: str, value: Any, path: Path) -> Any:
    """Return the value as a file would give it back; EditError if no file could hold it."""
    wanted = _types_of(type(record))[key]
    try:
        held = msgspec.convert(msgspec.to_builtins(value), wanted, strict=True)
    except (msgspec.ValidationError, TypeError, OverflowError) as error:
        raise _unfit(path, value, error) from error
    _require_writable(held, path)
    # The given object is kept where it is just as good, so that unchanged parts stay the same objects.
    return value if value == held and type(value) is type(held) else held


def _unfit(path: Path, value: Any, error: Exception) -> EditError:
    raw: Any = value if isinstance(value, (str, int, float, bool)) else {}
    _, reason, remedy = explain_refusal(str(error), raw)
    return EditError(path, reason, remedy)


def _require_writable(value: Any, path: Path) -> None:
    """Raise for numbers that are not finite and texts that are not whole characters."""
    if isinstance(value, float) and not math.isfinite(value):
        raise EditError(path, f"{value} is not a number a plan can use", "write a plain finite number")
    if isinstance(value, str) and not value.isascii():
        try:
            value.encode("utf-8")
        except UnicodeEncodeError as error:
            raise EditError(path, "the text holds half a character pair", "write that text again") from error
    if isinstance(value, Record):
        for key in value.__struct_fields__:
            _require_writable(getattr(value, key), (*path, key))
    elif isinstance(value, tuple):
        for item in value:
            _require_writable(item, path)


def _require_holdable(record: Record, path: Path) -> None:
    """Raise unless a file could hold this record."""
    try:
        msgspec.convert(msgspec.to_builtins(record), type(record), strict=True)
    except (msgspec.ValidationError, TypeError, OverflowError) as error:
        raise _unfit(path, None, error) from error
    _require_writable(record, path)


def _require_collection(records: Any, path: Path) -> None:
    if not isinstance(records, tuple):
        raise EditError(path, "this is not a list of records", "choose a list such as people or stations")


def _checked_types(plan: Plan, path: Path) -> Plan:
    """Return the plan if the record that holds the end of the path still has the right kinds of records."""
    holder_path = path[:-1] if path[-1] in _names_of(plan, path[:-1]) else path[:-2]
    holder = get_value(plan, holder_path)
    key = path[len(holder_path)]
    wanted = next(one.type for one in structs.fields(holder) if one.name == key)
    try:
        msgspec.convert(msgspec.to_builtins(getattr(holder, key)), wanted, strict=True)
    except (msgspec.ValidationError, TypeError) as error:
        raise EditError(path, "a record of this kind does not belong here", "use the right kind of record") from error
    return plan


def _names_of(plan: Plan, path: Path) -> tuple[str, ...]:
    holder = get_value(plan, path)
    return holder.__struct_fields__ if isinstance(holder, Record) else ()
