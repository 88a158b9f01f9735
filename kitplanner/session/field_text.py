"""Values of fields as text and back: what stands in a table cell or a form, and what may be typed there.

Three representations of one value: the record's (fractions, watts, minutes, tuples of windows), the text
in the user's locale at display scale (fractions as percent), and the typed text, which may also carry a
unit of the same family ("1.5 kWh" in a field of Wh). Only this module turns one into another.
"""

from __future__ import annotations

import datetime
import math
import re
from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QCoreApplication, QDate, QLocale

from kitplanner.plan.fields import FieldSpec
from kitplanner.plan.records import Window
from kitplanner.session.units_text import factor_of_unit

Names = Mapping[str, str]

translate = QCoreApplication.translate

_NO_NAMES: Names = {}
_CLOCK = re.compile(r"^(\d{1,2})(?:[:.h](\d{2}))?$")
_RANGE_SIGN = re.compile(r"\s*(?:-|–|—|to|until)\s*")  # noqa: RUF001 - typed dashes come in three lengths
_NUMBER = re.compile(r"^([-+−]?\s*[\d.,\s  ']*\d[\d.,]*(?:[eE][-+]?\d+)?|[-+−]?[.,]\d+)\s*(.*)$")  # noqa: RUF001


class FieldTextError(ValueError):
    """A typed text cannot be taken; the message names field, reason and remedy."""


def label_of(spec: FieldSpec) -> str:
    """Return the translated label of a field."""
    return translate("Fields", spec.label)


def choice_label(spec: FieldSpec, value: Any) -> str:
    """Return the translated label of a choice, or the value itself when it is none."""
    for choice, label in spec.choices:
        if choice == value:
            return translate("Fields", label)
    return "" if value is None else str(value)


def unit_of(spec: FieldSpec) -> str:
    """Return the unit as shown: percent for fractions shown as percent."""
    return "%" if spec.display_scale == 100 and spec.unit in ("", "-", "1") else spec.unit  # noqa: PLR2004


def number_text(spec: FieldSpec, value: float, locale: QLocale | None = None, *, exact: bool = True) -> str:
    """Write a number at display scale; `exact` adds digits where the field's decimals would lose some."""
    shown = round(float(value) * spec.display_scale, 12)
    if not math.isfinite(shown):
        return str(shown)
    decimals = 0 if spec.kind == "integer" else spec.decimals
    text = f"{shown:.{decimals}f}"
    if exact and not math.isclose(float(text), shown, rel_tol=1e-9, abs_tol=1e-15):
        text = f"{shown:.12g}"
    elif not exact and shown != 0 and float(text) == 0:
        text = f"{shown:.2g}"
    if "." in text and "e" not in text:
        text = text.rstrip("0").rstrip(".")
    point = (QLocale() if locale is None else locale).decimalPoint()
    return text.replace(".", point)


def windows_text(windows: tuple[Window, ...]) -> str:
    """Write windows as "08:30-10:00, 16:30-18:30"."""
    return ", ".join(f"{window.start}-{window.end}" for window in windows)


def value_text(spec: FieldSpec, value: Any, names: Names = _NO_NAMES, *, exact: bool = True) -> str:
    """Write a value as text without its unit; None and empty collections are empty text."""
    if value is None:
        return ""
    match spec.kind:
        case "number" | "integer":
            return number_text(spec, value, exact=exact)
        case "flag":
            return translate("FieldText", "yes") if value else translate("FieldText", "no")
        case "choice":
            return choice_label(spec, value)
        case "windows":
            return windows_text(value)
        case "date":
            return value.isoformat() if isinstance(value, datetime.date) else str(value)
        case "refs":
            return ", ".join(names.get(one, one) for one in value)
        case "ref":
            return names.get(value, str(value))
        case _:
            return str(value)


def default_text(spec: FieldSpec, names: Names = _NO_NAMES) -> str:
    """Say what an empty optional field means: its default with the unit, or the rule in words."""
    default = spec.default
    if default is None or default == ():
        return ""
    if isinstance(default, str) and spec.kind in ("number", "integer", "windows", "refs", "flag"):
        return translate("Fields", default)
    text = value_text(spec, default, names)
    unit = unit_of(spec)
    return f"{text} {unit}".strip() if spec.kind in ("number", "integer") else text


def parse_value(spec: FieldSpec, text: str, names: Names = _NO_NAMES) -> Any:
    """Read a typed text as a value of the field.

    Raises
    ------
    FieldTextError
        One sentence with field, reason and remedy; the text is never changed silently.
    """
    stripped = text.strip()
    if not stripped and spec.kind not in ("text", "windows", "refs"):
        if spec.optional:
            return None
        raise _error(spec, translate("FieldText", "is empty"), translate("FieldText", "Enter a value."))
    match spec.kind:
        case "number" | "integer":
            return _parse_number(spec, stripped)
        case "flag":
            return _parse_flag(spec, stripped)
        case "choice":
            return _parse_choice(spec, stripped)
        case "windows":
            return _parse_windows(spec, stripped)
        case "date":
            return _parse_date(spec, stripped)
        case "refs":
            return tuple(dict.fromkeys(_parse_ref(spec, one, names) for one in stripped.split(",") if one.strip()))
        case "ref":
            return _parse_ref(spec, stripped, names)
        case _:
            return text


def _error(spec: FieldSpec, reason: str, remedy: str) -> FieldTextError:
    return FieldTextError(f"{label_of(spec)} {reason}. {remedy}")


def _parse_number(spec: FieldSpec, text: str) -> int | float:
    found = _NUMBER.match(text)
    number = None if found is None else _read_number(found.group(1))
    if found is None or number is None or not math.isfinite(number):
        raise _error(spec, translate("FieldText", "is not a number: {text}").format(text=text), _range_remedy(spec))
    value = _to_field_unit(spec, number, found.group(2).strip())
    if spec.kind == "integer":
        if value != round(value):
            raise _error(spec, translate("FieldText", "must be a whole number, not {text}").format(text=text), _range_remedy(spec))
        value = round(value)
    _check_range(spec, value, text)
    return value


def _read_number(text: str) -> float | None:
    """Read digits in the user's locale first, then with a point; a comma may stand for the point."""
    plain = re.sub(r"\s", "", text).replace("−", "-").replace("'", "")  # noqa: RUF001 - a true minus may be pasted
    value, ok = QLocale().toDouble(plain)
    if ok:
        return value
    if plain.count(",") == 1 and "." not in plain:
        plain = plain.replace(",", ".")
    try:
        return float(plain)
    except ValueError:
        return None


def _to_field_unit(spec: FieldSpec, number: float, typed_unit: str) -> float:
    """Bring a number with the unit typed behind it into the field's own."""
    if typed_unit in ("", unit_of(spec), spec.unit):
        return _rescaled(number, spec.display_scale)
    factor = factor_of_unit(typed_unit, spec.unit)
    if factor is None:
        known = unit_of(spec) or translate("FieldText", "no unit")
        raise _error(
            spec, translate("FieldText", "is in {known}, not in {unit}").format(known=known, unit=typed_unit), _range_remedy(spec)
        )
    return number * factor


def _rescaled(number: float, scale: float) -> float:
    """Divide by the display scale so that 15 percent is 0.15 and not its neighbour."""
    return number if scale == 1 else float(f"{number / scale:.15g}")


def _check_range(spec: FieldSpec, value: float, text: str) -> None:
    too_low = spec.low is not None and (value <= spec.low if spec.low_open else value < spec.low)
    too_high = spec.high is not None and (value >= spec.high if spec.high_open else value > spec.high)
    if too_low:
        raise _error(spec, translate("FieldText", "is too low: {text}").format(text=text), _range_remedy(spec))
    if too_high:
        raise _error(spec, translate("FieldText", "is too high: {text}").format(text=text), _range_remedy(spec))


def _range_remedy(spec: FieldSpec) -> str:
    """Say which numbers a field takes."""
    unit = unit_of(spec)
    low = None if spec.low is None else f"{number_text(spec, spec.low)} {unit}".strip()
    high = None if spec.high is None else f"{number_text(spec, spec.high)} {unit}".strip()
    if low is not None and high is not None:
        if spec.low_open:
            return translate("FieldText", "Enter a number above {low}, up to {high}.").format(low=low, high=high)
        return translate("FieldText", "Enter a number from {low} to {high}.").format(low=low, high=high)
    if low is not None:
        sentence = translate("FieldText", "Enter a number above {low}.") if spec.low_open else translate("FieldText", "Enter {low} or more.")
        return sentence.format(low=low)
    if high is not None:
        sentence = translate("FieldText", "Enter a number below {high}.") if spec.high_open else translate("FieldText", "Enter {high} or less.")
        return sentence.format(high=high)
    return translate("FieldText", "Enter a number.")


def _parse_flag(spec: FieldSpec, text: str) -> bool:
    word = text.casefold()
    if word in (translate("FieldText", "yes").casefold(), "yes", "y", "1", "true", "x"):
        return True
    if word in (translate("FieldText", "no").casefold(), "no", "n", "0", "false", "-"):
        return False
    raise _error(spec, translate("FieldText", "is neither yes nor no: {text}").format(text=text), translate("FieldText", "Enter yes or no."))


def _parse_choice(spec: FieldSpec, text: str) -> Any:
    for value, label in spec.choices:
        if text.casefold() in (str(value).casefold(), label.casefold(), choice_label(spec, value).casefold()):
            return value
    known = ", ".join(choice_label(spec, value) for value, _ in spec.choices)
    raise _error(spec, translate("FieldText", "cannot be {text}").format(text=text), translate("FieldText", "Choose one of: {known}.").format(known=known))


def _parse_windows(spec: FieldSpec, text: str) -> tuple[Window, ...]:
    windows = []
    for part in filter(None, (one.strip() for one in re.split(r"[,;]", text))):
        ends = _RANGE_SIGN.split(part)
        clocks = [_parse_clock(end) for end in ends]
        if len(clocks) != 2 or None in clocks:  # noqa: PLR2004 - a window has a start and an end
            raise _error(
                spec,
                translate("FieldText", "has a part that is no time of day: {text}").format(text=part),
                translate("FieldText", "Write windows like 08:30-10:00, 16:30-18:30."),
            )
        start, end = str(clocks[0]), str(clocks[1])
        if start == end:
            raise _error(
                spec,
                translate("FieldText", "has a window without length: {text}").format(text=part),
                translate("FieldText", "For the whole day write 00:00-24:00."),
            )
        windows.append(Window(start=start, end=end))
    return tuple(windows)


def _parse_clock(text: str) -> str | None:
    found = _CLOCK.match(text.strip())
    if found is None:
        return None
    hour, minute = int(found.group(1)), int(found.group(2) or 0)
    if minute > 59 or hour > 24 or (hour == 24 and minute):  # noqa: PLR2004 - hours and minutes of a day
        return None
    return f"{hour:02d}:{minute:02d}"


def _parse_date(spec: FieldSpec, text: str) -> datetime.date:
    try:
        return datetime.date.fromisoformat(text)
    except ValueError:
        day = QLocale().toDate(text, QLocale.FormatType.ShortFormat)
        if isinstance(day, QDate) and day.isValid() and re.search(r"\d{4}", text):
            return datetime.date(day.year(), day.month(), day.day())
        raise _error(
            spec, translate("FieldText", "is no date: {text}").format(text=text), translate("FieldText", "Write year-month-day, like 2026-11-03.")
        ) from None


def _parse_ref(spec: FieldSpec, text: str, names: Names) -> str:
    wanted = text.strip()
    if wanted in names:
        return wanted
    matches = [one for one, name in names.items() if name.casefold() == wanted.casefold()]
    if len(matches) == 1:
        return matches[0]
    known = ", ".join(list(names.values())[:8]) or translate("FieldText", "none yet")
    reason = translate("FieldText", "names more than one: {text}") if matches else translate("FieldText", "names something that is not in the plan: {text}")
    raise _error(spec, reason.format(text=wanted), translate("FieldText", "Known: {known}.").format(known=known))
