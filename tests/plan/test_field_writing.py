"""Values as text: every digit, ranges in words, windows, names."""

import datetime as dt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.field_reading import Reading, read_value
from kitplanner.plan.field_writing import every_digit, range_words, value_text
from kitplanner.plan.fields import FIELDS, field
from kitplanner.plan.quantities import COMMA
from kitplanner.plan.records import Window
from tests.strategies import numbers

NUMERIC = [spec for specs in FIELDS.values() for spec in specs if spec.kind in ("number", "integer")]


@given(st.data(), st.sampled_from(NUMERIC))
def test_every_digit_reads_back_as_the_very_same_number(data, spec):
    value = data.draw(numbers(spec))
    text = every_digit(spec, float(value), ",")
    assert read_value(spec, text, Reading(style=COMMA)) == value


@pytest.mark.parametrize(
    ("kind", "key", "value", "text"),
    [
        (
            "person",
            "hours",
            (Window(start="08:00", end="10:00"), Window(start="16:00", end="18:00")),
            "08:00-10:00, 16:00-18:00",
        ),
        ("person", "days_off", (1, 3), "1, 3"),
        ("person", "may_watch", True, "yes"),
        ("person", "may_watch", None, ""),
        ("station", "kind", "pedal", "pedal stand"),
        ("plan", "start", dt.date(2026, 11, 3), "2026-11-03"),
        ("person", "stations", ("S1", "S9"), "Crank, S9"),
        ("person", "group", "S1", "Crank"),
        ("person", "name", "=1", "=1"),
    ],
)
def test_texts(kind, key, value, text):
    assert value_text(field(kind, key), value, "", {"S1": "Crank"}) == text


def test_ranges_in_words():
    assert range_words(field("person", "age")) == "Enter a number from 0 to 120 years."
    assert range_words(field("device", "battery_wh")) == "Enter a number above 0, up to 100000 Wh."
