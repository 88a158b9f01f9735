"""Plan file text: JSON in a stable order on the way out, one clear sentence for anything wrong on the way in.

Three representations meet here: bytes of the file, the raw mapping (which migrations lift), and the frozen
records. None and empty collections are left out of the file; everything else is spelled out, so that a
later change of a default never changes an old plan.
"""

from __future__ import annotations

import codecs
import json
import math
import re
from typing import Any, NoReturn

import msgspec

from kitplanner.plan.migrations import migrate
from kitplanner.plan.places import Part, place_in_file, short
from kitplanner.plan.records import FORMAT, VERSION, Plan
from kitplanner.plan.refusal import explain_refusal

LARGEST_BYTES = 20_000_000
# The records nest seven levels deep; anything far beyond is no plan and would only exhaust the reader.
DEEPEST = 60
_RESTORE = "open the backup copy (the same name with ~ at its end) or a recovered copy"


class PlanFileError(ValueError):
    """A plan file that cannot be read or written: place, reason and remedy in one sentence."""

    def __init__(self, place: str, reason: str, remedy: str) -> None:
        self.place = place
        self.reason = reason
        self.remedy = remedy
        super().__init__(f"{place}: {reason}; {remedy}.")


def encode(plan: Plan) -> bytes:
    """Return the plan as file text: UTF-8, indented, keys in record order, a newline at the end.

    Raises
    ------
    PlanFileError
        If a number is not finite or a text holds half a character pair, which no file can carry.

    Examples
    --------
    >>> decode(encode(Plan(title="Hut"))).title
    'Hut'
    """
    raw = _without_empty(msgspec.to_builtins(plan))
    try:
        text = json.dumps(raw, indent=2, ensure_ascii=False, allow_nan=False)
        return (text + "\n").encode("utf-8")
    except ValueError as error:
        what = "a text holds half a character pair" if isinstance(error, UnicodeError) else "a number is not finite"
        raise PlanFileError(
            "The plan", f"{what}, which a file cannot hold", "correct that value and save again"
        ) from error


def _without_empty(value: Any) -> Any:
    """Return builtins without None and empty collections inside mappings."""
    if isinstance(value, dict):
        kept = ((key, _without_empty(item)) for key, item in value.items())
        return {
            key: item for key, item in kept if item is not None and item != [] and (item != {} or key == "conditions")
        }
    if isinstance(value, (list, tuple)):
        return [_without_empty(item) for item in value]
    return value


def decode(data: bytes) -> Plan:
    """Return the plan held by the bytes of a file, lifted to the present version.

    Raises
    ------
    PlanFileError
        With place, reason and remedy, for anything that is not a complete plan of a known version.
    """
    raw = read_raw(data)
    _refuse_foreign(raw)
    lifted = migrate(raw)
    try:
        return msgspec.convert(lifted, Plan, strict=True)
    except msgspec.ValidationError as error:
        parts, reason, remedy = explain_refusal(str(error), lifted)
        raise PlanFileError(place_in_file(lifted, parts), reason, remedy) from error


def read_raw(data: bytes) -> dict[str, Any]:
    """Return the JSON object in the bytes, refusing what JSON readers usually let pass.

    Doubled keys, NaN, infinities, numbers beyond the range of a float and half character pairs are
    refused, because each would be changed or lost without a word.
    """
    refuse_size(len(data))
    text = _text_of(data)
    if not text.strip():
        raise PlanFileError("The file", "it is empty", f"{_RESTORE}")
    try:
        raw = json.loads(
            text,
            object_pairs_hook=_object,
            parse_constant=_refuse_constant,
            parse_float=_finite_float,
            parse_int=_bounded_int,
        )
    except json.JSONDecodeError as error:
        raise _malformed(text, error) from error
    except RecursionError as error:
        raise _too_deep() from error
    if not isinstance(raw, dict):
        raise PlanFileError(
            "The file", "it holds no plan: a plan is one JSON object in braces", "choose a .kitplan file"
        )
    _walk(raw, raw, [])
    return raw


def refuse_size(size_bytes: int) -> None:
    """Raise if a file is larger than any plan can be; called before the file is read."""
    if size_bytes > LARGEST_BYTES:
        raise PlanFileError(
            "The file",
            f"it has {size_bytes / 1e6:.0f} MB and a plan has at most {LARGEST_BYTES // 1_000_000} MB",
            "check that this is the file you meant",
        )


def _text_of(data: bytes) -> str:
    """Return the bytes as text; only plain UTF-8 without a byte order mark is a plan file."""
    if data and not data.strip(b"\x00"):
        raise PlanFileError("The file", "it holds nothing but zero bytes, as after a power cut while writing", _RESTORE)
    if data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)) or b"\x00" in data[:4]:
        raise PlanFileError(
            "The file", "it is not written in UTF-8 (it looks like UTF-16)", "save it as UTF-8 text again"
        )
    if data.startswith(codecs.BOM_UTF8):
        raise PlanFileError(
            "The file", "it begins with a byte order mark", "save it as UTF-8 without a byte order mark"
        )
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise PlanFileError(
            f"Line {line}", "the bytes are not UTF-8 text", f"save it as UTF-8 text, or {_RESTORE}"
        ) from error


def _malformed(text: str, error: json.JSONDecodeError) -> PlanFileError:
    """Return the refusal of text that is not JSON, telling half-written from foreign."""
    if not text.lstrip().startswith(("{", "[")):
        return PlanFileError("The file", "it is not a plan (its text is not JSON)", "choose a .kitplan file")
    if error.pos >= len(text.rstrip()) or error.msg.startswith("Unterminated string"):
        reason = "the text ends in the middle, as if the file had been written only in part"
    else:
        reason = f"the text is damaged ({error.msg[0].lower()}{error.msg[1:]})"
    return PlanFileError(f"Line {error.lineno}, column {error.colno}", reason, _RESTORE)


def _too_deep() -> PlanFileError:
    return PlanFileError("The file", "its lists and braces are nested deeper than in a plan", "choose a .kitplan file")


class _Doubled(str):
    """A key that stood twice in one JSON object; marked while parsing, reported with its place later."""

    __slots__ = ()


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """Return the pairs of one JSON object, marking a key that stands twice."""
    found = dict(pairs)
    if len(found) != len(pairs):
        seen: set[str] = set()
        for key, _ in pairs:
            if key in seen:
                return {**{name: item for name, item in found.items() if name != key}, _Doubled(key): None}
            seen.add(key)
    return found


class _BadNumber:
    """A number no plan can hold; kept with its text so that its place can be told."""

    def __init__(self, text: str) -> None:
        self.text = text


def _refuse_constant(text: str) -> _BadNumber:
    return _BadNumber(text)


def _finite_float(text: str) -> float | _BadNumber:
    value = float(text)
    return value if math.isfinite(value) else _BadNumber(text)


def _bounded_int(text: str) -> int | _BadNumber:
    # Beyond 15 digits an integer no longer survives its way through a float.
    return int(text) if len(text) <= 16 else _BadNumber(text)


def _walk(raw: dict[str, Any], value: object, path: list[Part]) -> None:
    """Raise with the place of the first value that JSON allowed and a plan does not."""
    if len(path) > DEEPEST:
        raise _too_deep()
    if isinstance(value, dict):
        for key, item in value.items():
            if isinstance(key, _Doubled):
                _refuse(raw, [*path, key], "the key stands twice", "keep one of the two")
            _walk_text(raw, key, path)
            _walk(raw, item, [*path, key])
    elif isinstance(value, list):
        for index, item in enumerate(value):
            _walk(raw, item, [*path, index])
    elif isinstance(value, _BadNumber):
        _refuse(raw, path, f"{short(value.text, 20)} is not a number a plan can use", "write a plain finite number")
    elif isinstance(value, str):
        _walk_text(raw, value, path)


_HALF_PAIR = re.compile("[\ud800-\udfff]")


def _walk_text(raw: dict[str, Any], text: str, path: list[Part]) -> None:
    if _HALF_PAIR.search(text):
        _refuse(raw, path, "the text holds half a character pair", "write that text again")


def _refuse(raw: dict[str, Any], path: list[Part], reason: str, remedy: str) -> NoReturn:
    raise PlanFileError(place_in_file(raw, path), reason, remedy)


def _refuse_foreign(raw: dict[str, Any]) -> None:
    """Raise unless the mapping says that it is a plan of a version known here."""
    if raw.get("format") != FORMAT:
        found = f"its format is {short(raw['format'])}" if "format" in raw else "its format is not given"
        raise PlanFileError("The file", f"it is not a plan ({found}, not '{FORMAT}')", "choose a .kitplan file")
    version = raw.get("version")
    if isinstance(version, bool) or not isinstance(version, int) or version < 1:
        raise PlanFileError("Key version", "a whole number from 1 is expected", f"{_RESTORE}")
    if version > VERSION:
        raise PlanFileError(
            "Key version",
            f"the file was written by a newer kitplanner (version {version}; this program reads up to {VERSION})",
            "open it with that newer program",
        )
