"""Values of fields as text, in any language and with either decimal sign; `field_reading.py` reads them back.

The words come through a translation function `say(context, text)`; without one they are English.
"""

from __future__ import annotations

import datetime
import math
from collections.abc import Mapping
from fractions import Fraction
from types import MappingProxyType
from typing import Any

from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP, FieldSpec
from kitplanner.plan.quantities import CONTEXT, Say, decimal_text, plain
from kitplanner.plan.records import Window

Names = Mapping[str, str]
NO_NAMES: Names = MappingProxyType({})

YES = QT_TRANSLATE_NOOP("FieldText", "yes")
NO = QT_TRANSLATE_NOOP("FieldText", "no")
_ABOVE_UP_TO = QT_TRANSLATE_NOOP("FieldText", "Enter a number above {low}, up to {high}.")
_FROM_TO = QT_TRANSLATE_NOOP("FieldText", "Enter a number from {low} to {high}.")
_ABOVE = QT_TRANSLATE_NOOP("FieldText", "Enter a number above {low}.")
_OR_MORE = QT_TRANSLATE_NOOP("FieldText", "Enter {low} or more.")
_BELOW = QT_TRANSLATE_NOOP("FieldText", "Enter a number below {high}.")
_OR_LESS = QT_TRANSLATE_NOOP("FieldText", "Enter {high} or less.")
_ANY = QT_TRANSLATE_NOOP("FieldText", "Enter a number.")


def choice_label(spec: FieldSpec, value: Any, say: Say = plain) -> str:
    """Return the label of a choice, or the value itself when it is none."""
    for choice, label in spec.choices:
        if choice == value:
            return say("Fields", label)
    return "" if value is None else str(value)


def unit_of(spec: FieldSpec, say: Say = plain) -> str:
    """Return the unit as shown."""
    return say("Fields", spec.unit) if spec.unit else ""


def number_text(spec: FieldSpec, value: float, decimal: str = ".", *, exact: bool = True) -> str:
    """Write a number at display scale; `exact` adds digits where the field's decimals would lose some.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> number_text(field("plan", "margin_fraction"), 0.15), number_text(field("linear", "adjust_a"), 50e-6)
    ('15', '0.00005')
    """
    number = float(f"{float(value) * spec.display_scale:.15g}")
    if not math.isfinite(number):
        return str(number)
    decimals = 0 if spec.kind == "integer" else spec.decimals
    text = f"{number:.{decimals}f}"
    if exact and not math.isclose(float(text), number, rel_tol=1e-12):
        text = f"{number:.15g}"
    elif not exact and number != 0 and float(text) == 0:
        text = f"{number:.2g}"
    if "." in text and "e" not in text:
        text = text.rstrip("0").rstrip(".")
    return text.replace(".", decimal)


def every_digit(spec: FieldSpec, value: float, decimal: str = ".") -> str:
    """Write a number at display scale so that reading it gives the same number to the last digit.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> every_digit(field("plan", "margin_fraction"), 0.1 + 0.2)
    '30.000000000000004'
    """
    if not math.isfinite(value):
        return str(value)
    return decimal_text(Fraction(repr(value)) * Fraction(spec.display_scale), decimal)


def windows_text(windows: tuple[Window, ...]) -> str:
    """Write windows as "08:30-10:00, 16:30-18:30"."""
    return ", ".join(f"{window.start}-{window.end}" for window in windows)


def value_text(spec: FieldSpec, value: Any, number: str, names: Names = NO_NAMES, say: Say = plain) -> str:
    """Write a value without its unit; `number` is the text of a number. None and empty collections are empty."""
    if value is None:
        return ""
    match spec.kind:
        case "number" | "integer":
            return number
        case "flag":
            return say(CONTEXT, YES if value else NO)
        case "choice":
            return choice_label(spec, value, say)
        case "windows":
            return windows_text(value)
        case "days":
            return ", ".join(str(day) for day in value)
        case "date":
            return value.isoformat() if isinstance(value, datetime.date) else str(value)
        case "refs":
            return ", ".join(names.get(one, one) for one in value)
        case "ref":
            return names.get(value, str(value))
        case _:
            return str(value)


def range_words(spec: FieldSpec, decimal: str = ".", say: Say = plain) -> str:
    """Say which numbers a field takes.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> range_words(field("person", "age"))
    'Enter a number from 0 to 120 years.'
    """
    unit = unit_of(spec, say)
    low = "" if spec.low is None else number_text(spec, spec.low, decimal)
    high = "" if spec.high is None else f"{number_text(spec, spec.high, decimal)} {unit}".strip()
    if low and not high:
        low = f"{low} {unit}".strip()
    if low and high:
        sentence = _ABOVE_UP_TO if spec.low_open else _FROM_TO
    elif low:
        sentence = _ABOVE if spec.low_open else _OR_MORE
    elif high:
        sentence = _BELOW if spec.high_open else _OR_LESS
    else:
        sentence = _ANY
    return say(CONTEXT, sentence).format(low=low, high=high)
