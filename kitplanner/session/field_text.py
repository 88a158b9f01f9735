"""Values of fields as text: what stands in a table cell, in a form, and what an empty field means.

Three representations of one value: the record's (fractions, watts, minutes, tuples of windows), the text
in the user's locale at display scale (fractions as percent), and the typed text, which
`session/field_parsing.py` reads.
"""

from __future__ import annotations

import datetime
import math
from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QCoreApplication, QLocale

from kitplanner.plan.fields import FieldSpec
from kitplanner.plan.records import Window

Names = Mapping[str, str]

translate = QCoreApplication.translate

_NO_NAMES: Names = {}


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
    """Return the translated unit as shown."""
    return translate("Fields", spec.unit) if spec.unit else ""


def number_text(spec: FieldSpec, value: float, locale: QLocale | None = None, *, exact: bool = True) -> str:
    """Write a number at display scale; `exact` adds digits where the field's decimals would lose some."""
    shown = float(f"{float(value) * spec.display_scale:.15g}")
    if not math.isfinite(shown):
        return str(shown)
    decimals = 0 if spec.kind == "integer" else spec.decimals
    text = f"{shown:.{decimals}f}"
    if exact and not math.isclose(float(text), shown, rel_tol=1e-12):
        text = f"{shown:.15g}"
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


def default_text(spec: FieldSpec, names: Names = _NO_NAMES) -> str:
    """Say what an empty field means: its default with the unit, or the rule in words."""
    default = spec.default
    if default is None or default == ():
        return ""
    if isinstance(default, str) and spec.kind not in ("choice", "text"):
        return translate("Fields", default)
    text = value_text(spec, default, names)
    return f"{text} {unit_of(spec)}".strip() if spec.kind in ("number", "integer") else text


def range_words(spec: FieldSpec) -> str:
    """Say which numbers a field takes."""
    unit = unit_of(spec)
    only_low = spec.high is None
    low = "" if spec.low is None else f"{number_text(spec, spec.low)} {unit if only_low else ''}".strip()
    high = "" if spec.high is None else f"{number_text(spec, spec.high)} {unit}".strip()
    if low and high and spec.low_open:
        sentence = translate("FieldText", "Enter a number above {low}, up to {high}.")
    elif low and high:
        sentence = translate("FieldText", "Enter a number from {low} to {high}.")
    elif low and spec.low_open:
        sentence = translate("FieldText", "Enter a number above {low}.")
    elif low:
        sentence = translate("FieldText", "Enter {low} or more.")
    elif high and spec.high_open:
        sentence = translate("FieldText", "Enter a number below {high}.")
    elif high:
        sentence = translate("FieldText", "Enter {high} or less.")
    else:
        sentence = translate("FieldText", "Enter a number.")
    return sentence.format(low=low, high=high)


def editor_text(spec: FieldSpec, value: Any, names: Names = _NO_NAMES) -> str:
    """Write a value as an editor takes it: choices and references by key, the rest as shown, every digit kept."""
    if value is None:
        return ""
    match spec.kind:
        case "choice" | "ref":
            return str(value)
        case "flag":
            return "yes" if value else "no"
        case _:
            return value_text(spec, value, names)


def help_text(spec: FieldSpec) -> str:
    """Say what a field is, its range and where its default comes from."""
    parts = [translate("Fields", spec.help) if spec.help else label_of(spec)]
    if spec.kind in ("number", "integer"):
        parts.append(range_words(spec))
    default = default_text(spec)
    if default:
        parts.append(translate("FieldText", "Default: {text}.").format(text=default))
    if spec.source:
        parts.append(translate("FieldText", "Source: {text}.").format(text=spec.source.rstrip(".")))
    return "\n".join(parts)
