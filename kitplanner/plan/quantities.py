"""Typed quantities with units: "3300 mAh at 3.85 V", "11 Wh", "1 h 20", "0,5 kWh", "19 %".

Rules for the decimal sign: the sign of the style is always the decimal sign; where the style names a sign for
groups of thousands, that one parts thousands. The other of comma and point is taken as the decimal sign only
where it cannot part thousands; `1,500` in a point style could be either and is asked about. Nothing is
corrected silently: whatever cannot be read comes back as one sentence with field, reason and remedy.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Mapping
from decimal import Context, Decimal, Inexact
from fractions import Fraction
from typing import Any

from msgspec import Struct

from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP
from kitplanner.plan.places import short
from kitplanner.plan.unit_factors import exact_factor, is_known_unit

Say = Callable[[str, str], str]

CONTEXT = "FieldText"
MOST_SIGNS = 200  # a longer text is no number, and reading it costs time
_HOURS = 60
_TIME_UNITS = ("min", "h", "h/day", "min/day")

TWO_WAYS = QT_TRANSLATE_NOOP("FieldText", "could be read in two ways: {text}")
NOT_A_NUMBER = QT_TRANSLATE_NOOP("FieldText", "is not a number: {text}")
WRONG_UNIT = QT_TRANSLATE_NOOP("FieldText", "is in {unit}, not in {text}")
HIDDEN_SIGN = QT_TRANSLATE_NOOP("FieldText", "holds a hidden sign ({text})")
TOO_LARGE = QT_TRANSLATE_NOOP("FieldText", "is larger than any number that can be used: {text}")
_LEAVE_OUT = QT_TRANSLATE_NOOP("FieldText", "Leave out the comma, or write a point for decimals.")
_LEAVE_OUT_POINT = QT_TRANSLATE_NOOP("FieldText", "Leave out the point, or write a comma for decimals.")
_TYPE_AGAIN = QT_TRANSLATE_NOOP("FieldText", "Delete it and type the value again.")
_WRITE_UNIT = QT_TRANSLATE_NOOP("FieldText", "Enter a number in {unit}.")
_WRITE_NUMBER = QT_TRANSLATE_NOOP("FieldText", "Enter a number.")
NAME_VOLTS = QT_TRANSLATE_NOOP(
    "FieldText", "Charge needs the volts of the cell to become energy: write {text} at 3.7 V, or as printed on it."
)
_NO_UNIT = QT_TRANSLATE_NOOP("FieldText", "no unit")


def plain(_context: str, text: str) -> str:
    """Leave a text in English: the translation used where there is none."""
    return text


class NumberStyle(Struct, frozen=True):
    """How numbers are written: the decimal sign, and the sign between thousands where it is known."""

    decimal: str = "."
    group: str = ""


POINT = NumberStyle()
COMMA = NumberStyle(decimal=",")


class Quantity(Struct, frozen=True):
    """A value in the wanted unit, with what was typed behind the number: empty where nothing was."""

    value: float
    unit: str
    typed_unit: str = ""


class QuantityError(ValueError):
    """A text that is no quantity; the message is one sentence with field, reason and remedy."""

    def __init__(self, field: str, reason: str, remedy: str, values: Mapping[str, Any]) -> None:
        self.field = field
        self.reason = reason
        self.remedy = remedy
        self.values = values
        super().__init__(self.said(plain, field))

    def said(self, say: Say, field: str, remedy: str | None = None) -> str:
        """Return the sentence in another language, with the field's translated label."""
        values = {key: say("Fields", value) if key == "unit" else value for key, value in self.values.items()}
        rest = say(CONTEXT, self.remedy).format(**values) if remedy is None else remedy
        return f"{field} {say(CONTEXT, self.reason).format(**values)}. {rest}"


def parse(text: str, unit: str, decimal_comma: bool = False, field: str = "Value") -> Quantity:
    """Read a typed text as a quantity in a unit.

    Parameters
    ----------
    text : str
        What was typed
    unit : str
        The unit wanted; a number without a unit is in this one
    decimal_comma : bool
        Whether the comma is the user's decimal sign
    field : str
        What the value is called in a refusal

    Returns
    -------
    Quantity
        The value in the wanted unit

    Raises
    ------
    QuantityError
        One sentence with field, reason and remedy.

    Examples
    --------
    >>> parse("3300 mAh at 3.85 V", "Wh").value, parse("1 h 20", "min").value, parse("0,5 kWh", "Wh").value
    (12.705, 80.0, 500.0)
    """
    return read_quantity(text, unit, COMMA if decimal_comma else POINT, field)


def read_quantity(text: str, unit: str, style: NumberStyle, field: str = "Value") -> Quantity:
    """Read a typed text as a quantity in a unit, by a style of numbers; QuantityError if it is none."""
    value, typed_unit = read_exact(text, unit, style, field)
    return Quantity(value=float(value), unit=unit, typed_unit=typed_unit)


def read_exact(text: str, unit: str, style: NumberStyle, field: str = "Value") -> tuple[Fraction, str]:
    """Read a typed text as an exact number in a unit and what was typed behind it; QuantityError if it is none.

    Scaling an exact number rounds once only, so that 30.000000000000004 percent is one number and not its neighbour.
    """
    hidden = next((sign for sign in text.strip() if unicodedata.category(sign) in ("Cc", "Cf")), None)
    if hidden is not None:
        raise QuantityError(field, HIDDEN_SIGN, _TYPE_AGAIN, {"text": f"U+{ord(hidden):04X}"})
    body = _plain_signs(text)
    if unit[:1].isdigit():
        # The unit "1/h" would otherwise be read as a second number.
        body = body.removesuffix(f" {unit}")
    found = _NUMBER.match(body) if len(body) <= MOST_SIGNS else None
    if found is None:
        raise QuantityError(field, NOT_A_NUMBER, _remedy_for(unit), {"text": shown(text), "unit": unit})
    number = _number_or_refuse(found[1], style, field, text, unit)
    value, typed_unit = _in_unit(number, found[2].strip(), unit, style)
    if value is None:
        raise _wrong_unit(field, text, typed_unit, unit)
    _require_finite(value, field, text)
    return value, typed_unit


def format_quantity(value: float, unit: str, as_unit: str | None = None, decimal_comma: bool = False) -> str:
    """Write a quantity with its unit so that reading it gives the same number to the last digit.

    Examples
    --------
    >>> format_quantity(1500.0, "Wh", "kWh"), format_quantity(0.1, "h", decimal_comma=True)
    ('1.5 kWh', '0,1 h')
    """
    shown_unit = unit if as_unit is None else as_unit
    factor = exact_factor(shown_unit, unit)
    if factor is None:
        raise ValueError(f"{unit} cannot be written in {shown_unit}; choose one of the units of its kind.")
    exact = Fraction(repr(float(value))) / factor
    text = decimal_text(exact, "," if decimal_comma else ".")
    if float(Fraction(decimal_text(exact)) * factor) != value:
        # The shortest digits of a number may lie midway to its neighbour; its true value never does.
        text = decimal_text(Fraction(value) / factor, "," if decimal_comma else ".")
    return f"{text} {shown_unit}".strip()


def decimal_text(value: Fraction, decimal: str = ".") -> str:
    """Write a fraction in decimals: every digit where they end, else eighteen, more than a number can hold.

    Examples
    --------
    >>> decimal_text(Fraction("0.15") * 100), decimal_text(Fraction(1, 3))
    ('15', '0.333333333333333333')
    """
    exact = Context(prec=60)
    written = exact.divide(Decimal(value.numerator), Decimal(value.denominator))
    if exact.flags[Inexact]:
        written = Context(prec=18).divide(Decimal(value.numerator), Decimal(value.denominator))
    written = exact.normalize(written)
    tiny_or_huge = written != 0 and not -18 <= written.adjusted() <= 18
    text = str(written) if tiny_or_huge else f"{written:f}"
    return ("0" if text in ("-0", "") else text).replace("E+", "e").replace("E", "e").replace(".", decimal)


def shown(text: str) -> str:
    """Return a typed text as it stands in a sentence: its own signs, shortened, without the quotation marks.

    Examples
    --------
    >>> shown(" 4O ")
    '4O'
    """
    return short(text.strip())[1:-1]


def read_number(text: str, style: NumberStyle = POINT) -> Fraction:
    """Read digits as an exact number.

    Raises
    ------
    ValueError
        When it is no number; TwoWaysError when it could be two.

    Examples
    --------
    >>> read_number("1 500,5"), read_number("1,500", NumberStyle(".", ","))
    (Fraction(3001, 2), Fraction(1500, 1))
    """
    body = re.sub(r"^([-+])\s", r"\1", _plain_signs(text))
    mantissa, exponent = (body, "")
    if found := re.fullmatch(r"(.*?)[eE]([-+]?\d{1,3})", body):
        mantissa, exponent = found[1], found[2]
    whole = Fraction(_with_point(mantissa, style))
    return whole * Fraction(10) ** int(exponent or 0)


class TwoWaysError(ValueError):
    """A number whose comma or point may part thousands or decimals."""


_NUMBER = re.compile(r"^([-+]?\s?[.,]?\d[\d.,']*(?: \d[\d.,']*)*(?:[eE][-+]?\d+)?)\s*(.*)$", re.DOTALL)
_SPACED = re.compile(r"^([-+]?)(\d{1,3})(?:([ '])\d{3})(?:\3\d{3})*(?:[.,]\d+)?$")
_GROUPED = re.compile(r"^[-+]?\d{1,3}(?:([.,])\d{2,3})*[.,]\d{3}$")
_ONE_GROUP = re.compile(r"^[-+]?[1-9]\d{0,2}[.,]\d{3}$")
_CHARGE = re.compile(r"^(m?Ah)\s*(?:at|@|x|×|,|\*)?\s*([\d.,]+)\s*V?$")
_PART_OF_TIME = re.compile(r"^(min|h|d|s|[a-zA-Z]+)\s*([\d.,]+)\s*(.*)$")


def _with_point(text: str, style: NumberStyle) -> str:
    """Return the digits with a point for decimals and nothing between thousands."""
    if _SPACED.match(text):
        text = text.replace(" ", "").replace("'", "")
        # Thousands are parted by spaces already, so what is left is the decimal sign.
        return text.replace(",", ".")
    if re.fullmatch(r"[-+]?(\d+([.,]\d*)*|[.,]\d+)", text) is None:
        raise ValueError(text)
    points, commas = text.count("."), text.count(",")
    if points and commas:
        last = max(text.rfind("."), text.rfind(","))
        whole, decimals = text[:last], text[last + 1 :]
        if text[last] in whole or not _GROUPED.match(whole):
            raise ValueError(text)
        return f"{re.sub('[.,]', '', whole)}.{decimals}"
    if points + commas > 1:
        if not _GROUPED.match(text):
            raise ValueError(text)
        return re.sub("[.,]", "", text)
    if points + commas == 0:
        return text
    sign = "." if points else ","
    if sign != style.decimal and _ONE_GROUP.match(text):
        if sign != style.group:
            raise TwoWaysError(text)
        return text.replace(sign, "")
    return text.replace(sign, ".")


def _plain_signs(text: str) -> str:
    """Return a text with plain digits, signs and spaces in place of those of other scripts."""
    if text.isascii():
        return text.strip()
    out = []
    for sign in text.strip():
        digit = unicodedata.decimal(sign, None)
        if digit is not None:
            out.append(str(digit))
        else:
            out.append(" " if unicodedata.category(sign) == "Zs" else _PLAIN_SIGNS.get(sign, sign))
    return "".join(out)


_PLAIN_SIGNS: Mapping[str, str] = {"−": "-", "’": "'", "٫": ".", "٬": ",", "：": ":"}


def _number_or_refuse(digits: str, style: NumberStyle, field: str, text: str, unit: str) -> Fraction:
    try:
        return read_number(digits, style)
    except TwoWaysError as error:
        remedy = _LEAVE_OUT if "," in digits else _LEAVE_OUT_POINT
        raise QuantityError(field, TWO_WAYS, remedy, {"text": shown(text)}) from error
    except (ValueError, OverflowError) as error:
        raise QuantityError(field, NOT_A_NUMBER, _remedy_for(unit), {"text": shown(text), "unit": unit}) from error


def _in_unit(number: Fraction, typed: str, unit: str, style: NumberStyle) -> tuple[Fraction | None, str]:
    """Return the number in the wanted unit, None where the typed unit does not fit, and the typed unit."""
    if not typed:
        return number, ""
    if _base(unit) == "Wh" and (charge := _CHARGE.match(typed)):
        volts = _or_none(charge[2], style)
        milli = Fraction(1, 1000) if charge[1] == "mAh" else Fraction(1)
        return (None if volts is None else number * milli * volts), typed
    if unit in _TIME_UNITS and (part := _PART_OF_TIME.match(typed)):
        return _compound_time(number, part, unit, style), typed
    factor = exact_factor(typed, unit)
    return (None if factor is None else number * factor), typed


def _compound_time(first: Fraction, part: re.Match[str], unit: str, style: NumberStyle) -> Fraction | None:
    """Return "1 h 20", "1 h 20 min" or "2 min 30 s" in the wanted unit; a part without unit is the next smaller."""
    head = exact_factor(part[1], unit)
    second = _or_none(part[2], style)
    smaller = {"h": "min", "min": "s"}.get(next((u for u in ("h", "min") if exact_factor(part[1], u) == 1), ""), "")
    tail = exact_factor(part[3].strip() or smaller, unit)
    if head is None or tail is None or second is None or tail >= head or not smaller:
        return None
    return first * head + (second if first >= 0 else -second) * tail


def _or_none(digits: str, style: NumberStyle) -> Fraction | None:
    try:
        return read_number(digits, style)
    except ValueError:
        return None


def _require_finite(value: Fraction, field: str, text: str) -> None:
    try:
        float(value)
    except OverflowError as error:
        raise QuantityError(field, TOO_LARGE, _WRITE_NUMBER, {"text": shown(text)}) from error


def _wrong_unit(field: str, text: str, typed: str, unit: str) -> QuantityError:
    """Return the refusal of a unit that does not fit: of another kind, charge without volts, or no unit at all."""
    known = unit or _NO_UNIT
    if exact_factor(typed, "Ah") is not None and _base(unit) == "Wh":
        return QuantityError(field, WRONG_UNIT, NAME_VOLTS, {"text": shown(text), "unit": known})
    if is_known_unit(typed) or _CHARGE.match(typed):
        return QuantityError(field, WRONG_UNIT, _remedy_for(unit), {"text": shown(typed), "unit": known})
    return QuantityError(field, NOT_A_NUMBER, _remedy_for(unit), {"text": shown(text), "unit": known})


def _base(unit: str) -> str:
    return unit.removesuffix("/day")


def _remedy_for(unit: str) -> str:
    return _WRITE_UNIT if unit else _WRITE_NUMBER
