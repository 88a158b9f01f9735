"""Typed quantities: units exact both ways, comma and point by rule, refusals with field, reason and remedy."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.fields import FIELDS
from kitplanner.plan.quantities import (
    NumberStyle,
    QuantityError,
    TwoWaysError,
    decimal_text,
    format_quantity,
    parse,
    read_number,
)
from kitplanner.plan.unit_factors import exact_factor, is_known_unit, units_for

FIELD_UNITS = sorted({spec.unit for specs in FIELDS.values() for spec in specs})
PAIRS = [(unit, typed) for unit in FIELD_UNITS for typed in units_for(unit)]


@given(st.sampled_from(PAIRS), st.floats(allow_nan=False, allow_infinity=False), st.booleans())
def test_what_is_written_in_any_unit_reads_back_to_the_last_digit(pair, value, comma):
    unit, typed = pair
    text = format_quantity(value, unit, typed, comma)
    assert parse(text, unit, comma).value == value


@given(st.floats(-1e12, 1e12), st.sampled_from([".", ","]))
def test_decimals_of_any_number_read_back_in_either_style(value, sign):
    text = decimal_text(Fraction(repr(value)), sign)
    assert float(read_number(text, NumberStyle(decimal=sign))) == value


def test_every_unit_of_a_field_fits_itself_and_is_known():
    for unit, typed in PAIRS:
        assert exact_factor(typed, unit) is not None, (unit, typed)
        assert typed == "" or is_known_unit(typed) or typed == unit, typed


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        # Definitions: 1 Wh = 3600 J, energy = charge times volts, 1 h = 60 min.
        ("3300 mAh at 3.85 V", "Wh", 12.705),
        ("3300mAh@3.85", "Wh", 12.705),
        ("3300 mAh × 3,85 V", "Wh", 12.705),
        ("4000 mAh at 3.85 V", "Wh", 15.4),
        ("10 000 mAh at 3.7 V", "Wh", 37.0),
        ("20 Ah at 12.8 V", "Wh", 256.0),
        ("10000 mAh at 5 V", "Wh", 50.0),
        ("11 Wh", "Wh", 11.0),
        ("0,5 kWh", "Wh", 500.0),
        ("0,500 kWh", "Wh", 500.0),
        ("3600 J", "Wh", 1.0),
        ("36 kJ", "Wh", 10.0),
        ("40 min", "min", 40.0),
        ("1 h 20", "min", 80.0),
        ("1 h 20 min", "min", 80.0),
        ("1h20", "min", 80.0),
        ("2 min 30 s", "min", 2.5),
        ("1,5 h", "min", 90.0),
        ("90 min", "h", 1.5),
        ("90 min", "h/day", 1.5),
        ("19 %", "%", 19.0),
        ("6 W", "W", 6.0),
        ("0.006 kW", "W", 6.0),
        ("6 watts", "W", 6.0),
        ("165 lb", "kg", 74.84274105),  # NIST Special Publication 811, appendix B
        ("1 500", "Wh", 1500.0),
        ("1 500,5", "Wh", 1500.5),
        ("1’500.5", "Wh", 1500.5),
        ("1.500.000", "Wh", 1_500_000.0),
        ("1,500.5", "Wh", 1500.5),
        ("1.500,5", "Wh", 1500.5),
        (".5", "Wh", 0.5),
        ("−5", "°C", -5.0),
        ("- 5", "°C", -5.0),
        ("٣٫٥", "W", 3.5),
        ("１２", "W", 12.0),
        ("2e3", "Wh", 2000.0),
    ],
)
def test_texts_that_have_one_meaning(text, unit, value):
    assert parse(text, unit).value == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "comma", "value"),
    [("1,500", True, 1.5), ("1.500", False, 1.5), ("1,5", False, 1.5), ("1.5", True, 1.5)],
)
def test_the_style_says_what_a_comma_is(text, comma, value):
    assert parse(text, "Wh", comma).value == value


@pytest.mark.parametrize(("text", "comma"), [("1,500", False), ("1.500", True), ("12,345 Wh", False)])
def test_a_sign_that_may_mean_two_things_is_asked_about(text, comma):
    with pytest.raises(QuantityError, match=r"^Own battery could be read in two ways: .*\. Leave out the "):
        parse(text, "Wh", comma, "Own battery")


def test_a_style_that_names_its_groups_is_not_asked():
    assert read_number("1,500", NumberStyle(".", ",")) == 1500
    assert read_number("1.500", NumberStyle(",", ".")) == 1500
    with pytest.raises(TwoWaysError):
        read_number("1,500", NumberStyle())


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("4O", "Wh", "is not a number: 4O. Enter a number in Wh."),
        ("", "Wh", "is not a number: . Enter a number in Wh."),
        ("12 V", "Wh", "is in Wh, not in V. Enter a number in Wh."),
        ("6 W", "Wh", "is in Wh, not in W."),
        ("6 Wh/day", "Wh", "is in Wh, not in Wh/day."),
        ("4000 mAh", "Wh", "needs the volts of the cell to become energy: write 4000 mAh at 3.7 V"),
        ("5 Mw", "W", "is not a number: 5 Mw."),
        ("1 00", "W", "is not a number: 1 00."),
        ("1.2.3", "W", "is not a number: 1.2.3."),
        ("1,23,4", "W", "is not a number: 1,23,4."),
        ("1 h 20 h", "min", "is not a number: 1 h 20 h."),
        ("20 min 1", "Wh", "is not a number: 20 min 1."),
        ("1e400", "Wh", "is larger than any number that can be used: 1e400."),
        ("9e999", "Wh", "is larger than any number that can be used"),
        ("nan", "Wh", "is not a number: nan."),
        ("inf", "Wh", "is not a number: inf."),
        ("<b>5</b>", "Wh", "is not a number: <b>5</b>."),
        ("5\u200f", "Wh", "holds a hidden sign (U+200F). Delete it and type the value again."),
        ("5\x07 Wh", "Wh", "holds a hidden sign (U+0007)."),
        ("1" * 10_000, "Wh", "is not a number: 1111"),
    ],
)
def test_refusals_say_field_reason_and_remedy(text, unit, words):
    with pytest.raises(QuantityError) as refusal:
        parse(text, unit, field="Own battery")
    sentence = str(refusal.value)
    assert sentence.startswith("Own battery ")
    assert words in sentence
    assert len(sentence) < 260


@given(st.text(max_size=40), st.sampled_from(FIELD_UNITS), st.booleans())
def test_any_text_is_read_or_refused_in_words(text, unit, comma):
    try:
        said = parse(text, unit, comma).value
    except QuantityError as error:
        said = str(error)
    assert isinstance(said, float) or (said.startswith("Value ") and said.endswith("."))


def test_a_unit_of_another_kind_cannot_be_written():
    with pytest.raises(ValueError, match="cannot be written in V"):
        format_quantity(1.0, "Wh", "V")
