"""Typed texts read as values of fields in the user's language and locale; `plan/field_reading.py` has the rules."""

from __future__ import annotations

import datetime
import re
from typing import Any

from PySide6.QtCore import QDate, QLocale

from kitplanner.plan.field_reading import FieldTextError, Reading, read_value
from kitplanner.plan.field_writing import NO_NAMES
from kitplanner.plan.fields import FieldSpec
from kitplanner.plan.quantities import NumberStyle
from kitplanner.session.field_text import Names, translate

__all__ = ["FieldTextError", "number_style", "parse_value"]

# Signs of the Arabic script are read as point and comma before the style is looked at.
_PLAIN = {"\u066b": ".", "\u066c": ","}


def number_style(locale: QLocale | None = None) -> NumberStyle:
    """Return how numbers are written in the user's locale."""
    where = QLocale() if locale is None else locale
    decimal, group = where.decimalPoint(), where.groupSeparator()
    never_written = QLocale.NumberOption.OmitGroupSeparator | QLocale.NumberOption.RejectGroupSeparator
    if where.numberOptions() & never_written:
        group = ""
    return NumberStyle(decimal=_PLAIN.get(decimal, decimal), group=_PLAIN.get(group, group))


def parse_value(spec: FieldSpec, text: str, names: Names = NO_NAMES) -> Any:
    """Read a typed text as a value of the field.

    Raises
    ------
    FieldTextError
        One sentence with field, reason and remedy; the text is never changed silently.
    """
    reading = Reading(style=number_style(), names=names, say=translate)
    try:
        return read_value(spec, text, reading)
    except FieldTextError:
        day = _locale_date(text.strip()) if spec.kind == "date" else None
        if day is None:
            raise
        return day


def _locale_date(text: str) -> datetime.date | None:
    day: QDate = QLocale().toDate(text, QLocale.FormatType.ShortFormat)
    # A year of two digits could be of any century.
    if day.isValid() and re.search(r"\d{4}", text):
        return datetime.date(day.year(), day.month(), day.day())
    return None
