"""Why a raw plan does not fit the records, in words for people."""

from __future__ import annotations

import difflib
import re
import types
import typing
from collections.abc import Sequence
from typing import Any

import msgspec

from kitplanner.plan.places import Part, short
from kitplanner.plan.records import Note, Plan

_AT = re.compile(r"^(?P<what>.*?)(?: - at `(?P<path>\$.*)`)?$", re.DOTALL)
_STEP = re.compile(r"\.([^.\[\]]+)|\[(\d+|\.\.\.)\]")
_WORDS = {
    "int": "a whole number",
    "float": "a number",
    "str": "text",
    "bool": "true or false",
    "array": "a list in brackets",
    "object": "a group of keys in braces",
    "date": "a date",
    "null": "nothing",
}


def explain_refusal(message: str, raw: object) -> tuple[list[Part], str, str]:
    """Return place, reason and remedy for a message of the record builder.

    Parameters
    ----------
    message : the builder's message, with the place in its own notation at the end.
    raw : the mapping that was refused; used to tell which value stands there.
    """
    match = _AT.match(message)
    what = match["what"] if match else message
    parts = _parts(match["path"] if match and match["path"] else "", raw)
    if found := re.search(r"unknown field `(.*)`", what, re.DOTALL):
        return [*parts, found[1]], "this key is unknown", _unknown_remedy(parts, found[1], raw)
    if found := re.search(r"missing required field `(.*)`", what):
        return parts, f"the key {found[1]} is missing", f"add {found[1]}"
    if what.startswith("Expected `str` matching regex"):
        return parts, f"{short(_value_at(raw, parts))} is not a clock time", "write it as HH:MM from 00:00 to 24:00"
    if "date" in what:
        return parts, f"{short(_value_at(raw, parts))} is not a date", "write it as year-month-day such as 2026-10-05"
    if what.startswith("Invalid"):
        allowed = ", ".join(allowed_values(parts, raw))
        remedy = f"use one of {allowed}" if allowed else "use one of the known values"
        return parts, f"{short(_value_at(raw, parts))} is not known here", remedy
    if found := re.search(r"Expected `(.*)`, got `(.*)`", what):
        wanted = _type_words(found[1])
        return parts, f"{wanted} is expected, not {_type_words(found[2])}", f"write {wanted} or leave the key out"
    return parts, f"{what[0].lower()}{what[1:]}", "correct this value"


def _parts(path: str, raw: object) -> list[Part]:
    """Return the steps of a path such as `$.people[2].notes[...].mark`, finding the note that was refused."""
    steps: list[Part] = []
    here = raw
    for key, index in _STEP.findall(path):
        part: Part | None = key or (int(index) if index != "..." else _refused_note(here))
        if part is not None:
            steps.append(part)
            here = _child(here, part)
    return steps


def _refused_note(notes: object) -> str | None:
    """Return the key of the first entry that is no note; the builder's message does not name it."""
    for key, raw_note in notes.items() if isinstance(notes, dict) else ():
        try:
            msgspec.convert(raw_note, Note, strict=True)
        except msgspec.ValidationError:
            return str(key)
    return None


def _type_words(names: str) -> str:
    known = [_WORDS.get(name.strip(), name.strip()) for name in names.split("|")]
    useful = [word for word in known if word != "nothing"] or known
    return " or ".join(useful)


def _value_at(raw: object, parts: Sequence[Part]) -> object:
    here = raw
    for part in parts:
        if isinstance(here, dict) and isinstance(part, str):
            here = here.get(part, "")
        elif isinstance(here, list) and isinstance(part, int) and part < len(here):
            here = here[part]
    return here if isinstance(here, (str, int, float, bool)) else "the value"


def _unknown_remedy(parts: Sequence[Part], key: str, raw: object) -> str:
    record = record_type(parts, raw)
    names = record.__struct_fields__ if record is not None else ()
    near = difflib.get_close_matches(key, names, n=1)
    return f"write {near[0]} if that is what was meant, otherwise remove it" if near else "remove it"


def record_type(parts: Sequence[Part], raw: object) -> type[msgspec.Struct] | None:
    """Return the record type that stands at a place of the file, None where that is not a record."""
    found = _type_at(parts, raw)
    return found if isinstance(found, type) and issubclass(found, msgspec.Struct) else None


def allowed_values(parts: Sequence[Part], raw: object) -> tuple[str, ...]:
    """Return the words a key may hold, empty where it is not one of a fixed list.

    Examples
    --------
    >>> allowed_values(["people", 0, "level"], {})
    ('light', 'usual', 'strong')
    """
    if parts and parts[-1] == "kind" and record_type(parts[:-1], raw) is None:
        here = _type_at(parts[:-1], raw)
        return tuple(
            str(option.__struct_config__.tag) for option in _options(here) if hasattr(option, "__struct_config__")
        )
    found = _type_at(parts, raw)
    literals = [option for option in _options(found) if typing.get_origin(option) is typing.Literal]
    return tuple(str(value) for option in literals for value in typing.get_args(option))


def _options(kind: Any) -> tuple[Any, ...]:
    return typing.get_args(kind) if isinstance(kind, types.UnionType) else (kind,)


def _type_at(parts: Sequence[Part], raw: object) -> Any:
    """Walk the record types along a path; a union of tagged records is resolved by the tag in the file."""
    kind: Any = Plan
    here = raw
    for part in parts:
        here = _child(here, part)
        kind = _child_type(kind, part)
        tags = {getattr(getattr(item, "__struct_config__", None), "tag", None): item for item in _options(kind)}
        if len(tags) > 1 and isinstance(here, dict) and here.get("kind") in tags:
            kind = tags[here["kind"]]
    return kind


def _child(here: object, part: Part) -> object:
    if isinstance(here, dict):
        return here.get(part)
    return here[part] if isinstance(here, list) and isinstance(part, int) and part < len(here) else None


def _child_type(kind: Any, part: Part) -> Any:
    for option in _options(kind):
        if isinstance(part, int) and typing.get_origin(option) is tuple:
            return typing.get_args(option)[0]
        if typing.get_origin(option) is dict:
            return typing.get_args(option)[1]
        if isinstance(part, str) and isinstance(option, type) and issubclass(option, msgspec.Struct):
            hints = typing.get_type_hints(option)
            if part in hints:
                return hints[part]
    return None
