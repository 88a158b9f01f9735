"""Typed texts read as values of fields; nothing is corrected silently, and every refusal says how to do better."""

from __future__ import annotations

import datetime
import math
import re
from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any

from PySide6.QtCore import QDate, QLocale

from kitplanner.plan.fields import FieldSpec
from kitplanner.plan.records import Window
from kitplanner.session.field_text import Names, choice_label, label_of, range_words, translate, unit_of
from kitplanner.session.units_text import factor_of_unit, is_unit

_NO_NAMES: Names = {}
_CLOCK = re.compile(r"^(\d{1,2})(?:[:.h](\d{2}))?$")
_RANGE_SIGN = re.compile(r"\s*(?:-|–|—|to|until)\s*")
_NUMBER = re.compile(r"^([-+−]?\s*[\d.,\s']*\d[\d.,]*(?:[eE][-+]?\d+)?|[-+−]?[.,]\d+)\s*(.*)$")
_COMMA_OF_THOUSANDS = re.compile(r"^[-+]?[1-9]\d{0,2},\d{3}$")
_MAY_BE_EMPTY = ("text", "windows", "days", "refs", "choice")
_YES = ("yes", "y", "1", "true", "x")
_NO = ("no", "n", "0", "false", "-")
_LONGEST_DAY = 366
_KNOWN_SHOWN = 8


class FieldTextError(ValueError):
    """A typed text cannot be taken; the message names field, reason and remedy."""


def parse_value(spec: FieldSpec, text: str, names: Names = _NO_NAMES) -> Any:
    """Read a typed text as a value of the field.

    Raises
    ------
    FieldTextError
        One sentence with field, reason and remedy; the text is never changed silently.
    """
    stripped = text.strip()
    if not stripped and spec.optional:
        return None
    if not stripped and spec.kind not in _MAY_BE_EMPTY:
        raise _refusal(spec, translate("FieldText", "is empty"), translate("FieldText", "Enter a value."))
    if spec.kind == "text":
        return text
    return _READERS[spec.kind](spec, stripped, names)


def _refusal(spec: FieldSpec, reason: str, remedy: str, text: str = "") -> FieldTextError:
    return FieldTextError(f"{label_of(spec)} {reason.format(text=text)}. {remedy}")


def _read_numeric(spec: FieldSpec, text: str, _names: Names) -> int | float:
    digits, typed_unit = _parts_of(spec, text)
    if _is_ambiguous(digits):
        remedy = translate("FieldText", "Leave out the comma, or write a point for decimals.")
        raise _refusal(spec, translate("FieldText", "could be read in two ways: {text}"), remedy, text)
    number = _read_digits(digits)
    if number is None or not math.isfinite(number):
        raise _refusal(spec, translate("FieldText", "is not a number: {text}"), range_words(spec), text)
    value = _in_field_unit(spec, number, typed_unit)
    if spec.kind == "integer" and value != round(value):
        raise _refusal(spec, translate("FieldText", "must be a whole number, not {text}"), range_words(spec), text)
    _check_range(spec, value, text)
    return round(value) if spec.kind == "integer" else value


def _parts_of(spec: FieldSpec, text: str) -> tuple[str, str]:
    """Part the digits from a unit behind them."""
    found = _NUMBER.match(text)
    if found is not None:
        unit = found.group(2).strip()
        if unit in ("", unit_of(spec), spec.unit) or is_unit(unit):
            return found.group(1), unit
    raise _refusal(spec, translate("FieldText", "is not a number: {text}"), range_words(spec), text)


def _is_ambiguous(text: str) -> bool:
    """Tell whether a comma may part thousands or decimals, and the user's locale does not say which."""
    plain = text.strip()
    return bool(_COMMA_OF_THOUSANDS.match(plain)) and not QLocale().toDouble(plain)[1]


def _read_digits(text: str) -> float | None:
    """Read digits in the user's locale first, then with a point; a comma may stand for the point."""
    plain = re.sub(r"\s", "", text).replace("−", "-").replace("'", "")
    value, ok = QLocale().toDouble(plain)
    if ok:
        return value
    if plain.count(",") == 1 and "." not in plain:
        plain = plain.replace(",", ".")
    try:
        return float(plain)
    except ValueError:
        return None


def _in_field_unit(spec: FieldSpec, number: float, typed_unit: str) -> float:
    """Bring a number with the unit typed behind it into the field's own."""
    if typed_unit in ("", unit_of(spec), spec.unit) or (typed_unit == "%" and spec.display_scale != 1):
        # Dividing by the scale and rounding makes 15 percent 0.15 and not its neighbour.
        return number if spec.display_scale == 1 else float(f"{number / spec.display_scale:.15g}")
    factor = factor_of_unit(typed_unit, spec.unit)
    if factor is not None:
        return float(f"{number * factor:.15g}")
    reason = translate("FieldText", "is in {unit}, not in {text}")
    known = unit_of(spec) or translate("FieldText", "no unit")
    raise _refusal(spec, reason.replace("{unit}", known), range_words(spec), typed_unit)


def _check_range(spec: FieldSpec, value: float, text: str) -> None:
    if spec.low is not None and (value <= spec.low if spec.low_open else value < spec.low):
        raise _refusal(spec, translate("FieldText", "is too low: {text}"), range_words(spec), text)
    if spec.high is not None and (value >= spec.high if spec.high_open else value > spec.high):
        raise _refusal(spec, translate("FieldText", "is too high: {text}"), range_words(spec), text)


def _read_flag(spec: FieldSpec, text: str, _names: Names) -> bool:
    word = text.casefold()
    if word in (translate("FieldText", "yes").casefold(), *_YES):
        return True
    if word in (translate("FieldText", "no").casefold(), *_NO):
        return False
    remedy = translate("FieldText", "Enter yes or no.")
    raise _refusal(spec, translate("FieldText", "is neither yes nor no: {text}"), remedy, text)


def _read_choice(spec: FieldSpec, text: str, _names: Names) -> Any:
    for value, label in spec.choices:
        if text.casefold() in (str(value).casefold(), label.casefold(), choice_label(spec, value).casefold()):
            return value
    known = ", ".join(choice_label(spec, value) for value, _ in spec.choices)
    remedy = translate("FieldText", "Choose one of: {known}.").format(known=known)
    raise _refusal(spec, translate("FieldText", "cannot be {text}"), remedy, text)


def _read_windows(spec: FieldSpec, text: str, _names: Names) -> tuple[Window, ...]:
    parts = [part for part in (one.strip() for one in re.split(r"[,;]", text)) if part]
    return tuple(_read_window(spec, part) for part in parts)


def _read_window(spec: FieldSpec, text: str) -> Window:
    clocks = [clock for clock in map(_read_clock, _RANGE_SIGN.split(text)) if clock is not None]
    if len(clocks) != 2 or len(_RANGE_SIGN.split(text)) != 2:
        remedy = translate("FieldText", "Write windows like 08:30-10:00, 16:30-18:30.")
        raise _refusal(spec, translate("FieldText", "has a part that is no window: {text}"), remedy, text)
    if clocks[0] == clocks[1]:
        remedy = translate("FieldText", "For the whole day write 00:00-24:00.")
        raise _refusal(spec, translate("FieldText", "has a window without length: {text}"), remedy, text)
    return Window(start=clocks[0], end=clocks[1])


def _read_clock(text: str) -> str | None:
    found = _CLOCK.match(text.strip())
    if found is None:
        return None
    hour, minute = int(found.group(1)), int(found.group(2) or 0)
    if minute > 59 or hour > 24 or (hour == 24 and minute):
        return None
    return f"{hour:02d}:{minute:02d}"


def _read_days(spec: FieldSpec, text: str, _names: Names) -> tuple[int, ...]:
    parts = [one for one in re.split(r"[,;\s]+", text) if one]
    for part in parts:
        if not (part.isascii() and part.isdigit() and 1 <= int(part) <= _LONGEST_DAY):
            remedy = translate("FieldText", "Write numbers of days like 1, 3; day 1 is the first.")
            raise _refusal(spec, translate("FieldText", "has a part that is no day: {text}"), remedy, part)
    return tuple(dict.fromkeys(int(part) for part in parts))


def _read_date(spec: FieldSpec, text: str, _names: Names) -> datetime.date:
    try:
        return datetime.date.fromisoformat(text)
    except ValueError:
        day: QDate = QLocale().toDate(text, QLocale.FormatType.ShortFormat)
        # A year of two digits could be of any century.
        if day.isValid() and re.search(r"\d{4}", text):
            return datetime.date(day.year(), day.month(), day.day())
        remedy = translate("FieldText", "Write year-month-day, like 2026-11-03.")
        raise _refusal(spec, translate("FieldText", "is no date: {text}"), remedy, text) from None


def _read_refs(spec: FieldSpec, text: str, names: Names) -> tuple[str, ...]:
    parts = [one.strip() for one in text.split(",") if one.strip()]
    return tuple(dict.fromkeys(_read_ref(spec, part, names) for part in parts))


def _read_ref(spec: FieldSpec, text: str, names: Names) -> str:
    if text in names:
        return text
    matches = [one for one, name in names.items() if name.casefold() == text.casefold()]
    if len(matches) == 1:
        return matches[0]
    known = ", ".join(list(names.values())[:_KNOWN_SHOWN]) or translate("FieldText", "none yet")
    remedy = translate("FieldText", "Known: {known}.").format(known=known)
    if matches:
        raise _refusal(spec, translate("FieldText", "names more than one: {text}"), remedy, text)
    raise _refusal(spec, translate("FieldText", "names something that is not in the plan: {text}"), remedy, text)


_READERS: Mapping[str, Callable[[FieldSpec, str, Names], Any]] = MappingProxyType(
    {
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
