"""Values of fields as text: what stands in a table cell, in a form, and what an empty field means.

Three representations of one value: the record's (fractions, watts, minutes, tuples of windows), the text
in the user's locale at display scale (fractions as percent), and the typed text, which
`session/field_parsing.py` reads.
"""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QCoreApplication, QLocale

from kitplanner.plan import field_writing
from kitplanner.plan.field_writing import NO_NAMES, Names, windows_text
from kitplanner.plan.fields import FieldSpec

__all__ = [
    "Names",
    "choice_label",
    "default_text",
    "editor_text",
    "help_text",
    "label_of",
    "number_text",
    "range_words",
    "translate",
    "unit_of",
    "value_text",
    "windows_text",
]

translate = QCoreApplication.translate


def label_of(spec: FieldSpec) -> str:
    """Return the translated label of a field."""
    return translate("Fields", spec.label)


def choice_label(spec: FieldSpec, value: Any) -> str:
    """Return the translated label of a choice, or the value itself when it is none."""
    return field_writing.choice_label(spec, value, translate)


def unit_of(spec: FieldSpec) -> str:
    """Return the translated unit as shown."""
    return field_writing.unit_of(spec, translate)


def number_text(spec: FieldSpec, value: float, locale: QLocale | None = None, *, exact: bool = True) -> str:
    """Write a number at display scale; `exact` adds digits where the field's decimals would lose some."""
    point = (QLocale() if locale is None else locale).decimalPoint()
    return field_writing.number_text(spec, value, point, exact=exact)


def value_text(spec: FieldSpec, value: Any, names: Names = NO_NAMES, *, exact: bool = True) -> str:
    """Write a value as text without its unit; None and empty collections are empty text."""
    numeric = value is not None and spec.kind in ("number", "integer")
    number = number_text(spec, value, exact=exact) if numeric else ""
    return field_writing.value_text(spec, value, number, names, translate)


def default_text(spec: FieldSpec, names: Names = NO_NAMES) -> str:
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
    return field_writing.range_words(spec, QLocale().decimalPoint(), translate)


def editor_text(spec: FieldSpec, value: Any, names: Names = NO_NAMES) -> str:
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
