"""Typed texts read as values of fields; nothing is corrected silently, and every refusal says how to do better."""

from __future__ import annotations

import datetime
import re
import unicodedata
from collections.abc import Callable, Mapping
from fractions import Fraction
from types import MappingProxyType
from typing import Any

from msgspec import Struct

from kitplanner.plan.field_writing import NO, NO_NAMES, YES, Names, choice_label, range_words
from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP, FieldSpec
from kitplanner.plan.quantities import (
    CONTEXT,
    HIDDEN_SIGN,
    NAME_VOLTS,
    NOT_A_NUMBER,
    POINT,
    WRONG_UNIT,
    NumberStyle,
    QuantityError,
    Say,
    plain,
    read_exact,
    shown,
)
from kitplanner.plan.records import Window
from kitplanner.plan.unit_factors import exact_factor

LONGEST_TEXT = 2000
LONGEST_NAME = 200
_CLOCK = re.compile(r"^(\d{1,2})(?:[:.h](\d{2}))?$")
_RANGE_SIGN = re.compile(r"\s*(?:-|–|—|to|until)\s*")
_MAY_BE_EMPTY = ("text", "windows", "days", "refs", "choice")
_YES_WORDS = ("yes", "y", "1", "true", "x")
_NO_WORDS = ("no", "n", "0", "false", "-")
_LONGEST_DAY = 366
_KNOWN_SHOWN = 8
# Signs that turn the direction of writing over whole stretches and can make a text look like another one.
_TURNING_SIGNS = frozenset("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")

_EMPTY = QT_TRANSLATE_NOOP("FieldText", "is empty")
_ENTER = QT_TRANSLATE_NOOP("FieldText", "Enter a value.")
_WHOLE = QT_TRANSLATE_NOOP("FieldText", "must be a whole number, not {text}")
_TOO_LOW = QT_TRANSLATE_NOOP("FieldText", "is too low: {text}")
_TOO_HIGH = QT_TRANSLATE_NOOP("FieldText", "is too high: {text}")
_YES_OR_NO = QT_TRANSLATE_NOOP("FieldText", "is neither yes nor no: {text}")
_ENTER_YES = QT_TRANSLATE_NOOP("FieldText", "Enter yes or no.")
_CANNOT_BE = QT_TRANSLATE_NOOP("FieldText", "cannot be {text}")
_CHOOSE = QT_TRANSLATE_NOOP("FieldText", "Choose one of: {known}.")
_NO_WINDOW = QT_TRANSLATE_NOOP("FieldText", "has a part that is no window: {text}")
_WRITE_WINDOWS = QT_TRANSLATE_NOOP("FieldText", "Write windows like 08:30-10:00, 16:30-18:30.")
_NO_LENGTH = QT_TRANSLATE_NOOP("FieldText", "has a window without length: {text}")
_WHOLE_DAY = QT_TRANSLATE_NOOP("FieldText", "For the whole day write 00:00-24:00.")
_NO_DAY = QT_TRANSLATE_NOOP("FieldText", "has a part that is no day: {text}")
_WRITE_DAYS = QT_TRANSLATE_NOOP("FieldText", "Write numbers of days like 1, 3; day 1 is the first.")
_NO_DATE = QT_TRANSLATE_NOOP("FieldText", "is no date: {text}")
_WRITE_DATE = QT_TRANSLATE_NOOP("FieldText", "Write year-month-day, like 2026-11-03.")
_NONE_YET = QT_TRANSLATE_NOOP("FieldText", "none yet")
_KNOWN = QT_TRANSLATE_NOOP("FieldText", "Known: {known}.")
_NAMES_MANY = QT_TRANSLATE_NOOP("FieldText", "names more than one: {text}")
_NAMES_NONE = QT_TRANSLATE_NOOP("FieldText", "names something that is not in the plan: {text}")
_TOO_LONG = QT_TRANSLATE_NOOP("FieldText", "has {count} signs, more than {most}")
_SHORTEN = QT_TRANSLATE_NOOP("FieldText", "Shorten it.")
_DELETE_SIGN = QT_TRANSLATE_NOOP("FieldText", "Delete it; it cannot be seen and would change what others read.")


class FieldTextError(ValueError):
    """A typed text cannot be taken; the message names field, reason and remedy."""


class Reading(Struct, frozen=True, kw_only=True):
    """How texts are read: style of numbers, names of records that may be referred to, unit of bare numbers, language.

    `unit` is the unit of numbers typed without one; empty is the field's own.
    """

    style: NumberStyle = POINT
    names: Names = NO_NAMES
    unit: str = ""
    say: Say = plain


def read_value(spec: FieldSpec, text: str, reading: Reading | None = None) -> Any:
    """Read a typed text as a value of the field.

    Raises
    ------
    FieldTextError
        One sentence with field, reason and remedy; the text is never changed silently.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> read_value(field("plan", "margin_fraction"), "7.5 %"), read_value(field("person", "bout_min"), "0.5 h")
    (0.075, 30)
    """
    how = Reading() if reading is None else reading
    stripped = text.strip()
    if not stripped and spec.optional:
        return None
    if not stripped and spec.kind not in _MAY_BE_EMPTY:
        raise _refusal(spec, how, _EMPTY, _ENTER)
    return _READERS[spec.kind](spec, text if spec.kind == "text" else stripped, how)


def _refusal(spec: FieldSpec, how: Reading, reason: str, remedy: str, text: str = "") -> FieldTextError:
    return _said(spec, how, how.say(CONTEXT, reason).format(text=shown(text)), how.say(CONTEXT, remedy))


def _out_of_range(spec: FieldSpec, how: Reading, reason: str, text: str) -> FieldTextError:
    remedy = range_words(spec, how.style.decimal, how.say)
    return _said(spec, how, how.say(CONTEXT, reason).format(text=shown(text)), remedy)


def _said(spec: FieldSpec, how: Reading, reason: str, remedy: str) -> FieldTextError:
    return FieldTextError(f"{how.say('Fields', spec.label)} {reason}. {remedy}")


def _read_text(spec: FieldSpec, text: str, how: Reading) -> str:
    most = LONGEST_NAME if spec.key == "name" else LONGEST_TEXT
    if len(text) > most:
        raise _said(
            spec, how, how.say(CONTEXT, _TOO_LONG).format(count=len(text), most=most), how.say(CONTEXT, _SHORTEN)
        )
    if not text.isprintable():
        for sign in text:
            if sign in _TURNING_SIGNS or (unicodedata.category(sign) in ("Cc", "Cs") and sign not in "\n\t\r"):
                raise _refusal(spec, how, HIDDEN_SIGN, _DELETE_SIGN, f"U+{ord(sign):04X}")
    return text


def _read_numeric(spec: FieldSpec, text: str, how: Reading) -> int | float:
    label = how.say("Fields", spec.label)
    # The unit shown may be a translated one; typed behind the number it is the field's own.
    translated = how.say("Fields", spec.unit) if spec.unit else ""
    typed = text.removesuffix(translated) if translated != spec.unit else text
    if spec.unit.startswith("%/"):
        typed = typed.removesuffix("%")
    try:
        value, typed_unit = read_exact(typed, spec.unit, how.style, label)
    except QuantityError as error:
        own = error.reason in (NOT_A_NUMBER, WRONG_UNIT) and error.remedy != NAME_VOLTS
        remedy = range_words(spec, how.style.decimal, how.say) if own else None
        raise FieldTextError(error.said(how.say, label, remedy)) from error
    if how.unit and not typed_unit:
        value *= exact_factor(how.unit, spec.unit) or 1
    return number_in_range(spec, value, how, text)


def number_in_range(spec: FieldSpec, shown_value: Fraction, how: Reading, text: str) -> int | float:
    """Return a number at display scale as the record's value; FieldTextError outside its range."""
    exact = shown_value / Fraction(spec.display_scale)
    if spec.kind == "integer" and exact.denominator != 1:
        raise _out_of_range(spec, how, _WHOLE, text)
    value = int(exact) if spec.kind == "integer" else float(exact)
    if spec.low is not None and (value <= spec.low if spec.low_open else value < spec.low):
        raise _out_of_range(spec, how, _TOO_LOW, text)
    if spec.high is not None and (value >= spec.high if spec.high_open else value > spec.high):
        raise _out_of_range(spec, how, _TOO_HIGH, text)
    return value


def _read_flag(spec: FieldSpec, text: str, how: Reading) -> bool:
    word = text.casefold()
    if word in (how.say(CONTEXT, YES).casefold(), *_YES_WORDS):
        return True
    if word in (how.say(CONTEXT, NO).casefold(), *_NO_WORDS):
        return False
    raise _refusal(spec, how, _YES_OR_NO, _ENTER_YES, text)


def _read_choice(spec: FieldSpec, text: str, how: Reading) -> Any:
    word = text.casefold()
    for value, label in spec.choices:
        if word in (str(value).casefold(), label.casefold(), choice_label(spec, value, how.say).casefold()):
            return value
    known = ", ".join(choice_label(spec, value, how.say) for value, _ in spec.choices)
    reason = how.say(CONTEXT, _CANNOT_BE).format(text=shown(text))
    raise _said(spec, how, reason, how.say(CONTEXT, _CHOOSE).format(known=known))


def _read_windows(spec: FieldSpec, text: str, how: Reading) -> tuple[Window, ...]:
    parts = [part for part in (one.strip() for one in re.split(r"[,;]", text)) if part]
    return tuple(_read_window(spec, part, how) for part in parts)


def _read_window(spec: FieldSpec, text: str, how: Reading) -> Window:
    ends = _RANGE_SIGN.split(text)
    clocks = [clock for clock in map(_read_clock, ends) if clock is not None]
    if len(clocks) != 2 or len(ends) != 2:
        raise _refusal(spec, how, _NO_WINDOW, _WRITE_WINDOWS, text)
    if clocks[0] == clocks[1]:
        raise _refusal(spec, how, _NO_LENGTH, _WHOLE_DAY, text)
    return Window(start=clocks[0], end=clocks[1])


def _read_clock(text: str) -> str | None:
    found = _CLOCK.match(text.strip())
    if found is None:
        return None
    hour, minute = int(found.group(1)), int(found.group(2) or 0)
    if minute > 59 or hour > 24 or (hour == 24 and minute):
        return None
    return f"{hour:02d}:{minute:02d}"


def _read_days(spec: FieldSpec, text: str, how: Reading) -> tuple[int, ...]:
    parts = [one for one in re.split(r"[,;\s]+", text) if one]
    for part in parts:
        if not (part.isascii() and part.isdigit() and len(part) <= 9 and 1 <= int(part) <= _LONGEST_DAY):
            raise _refusal(spec, how, _NO_DAY, _WRITE_DAYS, part)
    return tuple(dict.fromkeys(int(part) for part in parts))


def _read_date(spec: FieldSpec, text: str, how: Reading) -> datetime.date:
    try:
        return datetime.date.fromisoformat(text)
    except ValueError as error:
        raise _refusal(spec, how, _NO_DATE, _WRITE_DATE, text) from error


def _read_refs(spec: FieldSpec, text: str, how: Reading) -> tuple[str, ...]:
    whole = _matches(text, how.names)
    if len(whole) == 1:
        return whole
    return tuple(dict.fromkeys(_read_ref(spec, part, how) for part in _parts_of(text, how.names)))


def _parts_of(text: str, names: Names) -> list[str]:
    """Part a list at its commas; a name that holds commas itself stays whole, the longest one first."""
    pieces = [one.strip() for one in text.split(",")]
    parts: list[str] = []
    while pieces:
        length = next((n for n in range(len(pieces), 1, -1) if _matches(", ".join(pieces[:n]), names)), 1)
        parts.append(", ".join(pieces[:length]))
        pieces = pieces[length:]
    return [part for part in parts if part]


def _matches(text: str, names: Names) -> tuple[str, ...]:
    if text in names:
        return (text,)
    exact = tuple(one for one, name in names.items() if name == text)
    return exact or tuple(one for one, name in names.items() if name.casefold() == text.casefold())


def _read_ref(spec: FieldSpec, text: str, how: Reading) -> str:
    matches = _matches(text, how.names)
    if len(matches) == 1:
        return matches[0]
    known = ", ".join(list(how.names.values())[:_KNOWN_SHOWN]) or how.say(CONTEXT, _NONE_YET)
    reason = how.say(CONTEXT, _NAMES_MANY if matches else _NAMES_NONE).format(text=shown(text))
    raise _said(spec, how, reason, how.say(CONTEXT, _KNOWN).format(known=known))


_READERS: Mapping[str, Callable[[FieldSpec, str, Reading], Any]] = MappingProxyType(
    {
        "text": _read_text,
        "number": _read_numeric,
        "integer": _read_numeric,
        "flag": _read_flag,
        "choice": _read_choice,
        "windows": _read_windows,
        "days": _read_days,
        "date": _read_date,
        "refs": _read_refs,
        "ref": _read_ref,
    }
)
