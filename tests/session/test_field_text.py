"""Values as text and back: nothing rounded, nothing corrected, every refusal with field, reason and remedy."""

import datetime

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtCore import QLocale

from kitplanner.plan.fields import FIELDS, field
from kitplanner.plan.records import Window
from kitplanner.session.field_parsing import FieldTextError, parse_value
from kitplanner.session.field_text import (
    default_text,
    editor_text,
    help_text,
    number_text,
    range_words,
    value_text,
    windows_text,
)

NUMERIC = [spec for specs in FIELDS.values() for spec in specs if spec.kind in ("number", "integer")]


@given(st.sampled_from(NUMERIC), st.floats(0, 1))
def test_what_an_editor_shows_reads_back_as_the_same_value(spec, share):
    low = spec.low if spec.low is not None else -1e6
    high = spec.high if spec.high is not None else 1e6
    value = low + share * (high - low)
    value = round(value) if spec.kind == "integer" else float(f"{value:.9g}")
    at_open_end = (spec.low_open and value <= low) or (spec.high_open and value >= high)
    if at_open_end or not low <= value <= high:
        return
    assert parse_value(spec, editor_text(spec, value)) == pytest.approx(value, rel=1e-12, abs=0)


def test_digits_beyond_the_field_s_decimals_are_not_lost():
    spec = field("linear", "adjust_a")
    assert number_text(spec, 50e-6) == "0.00005"
    assert number_text(field("station", "output_w"), 3.14159) == "3.14159"
    assert number_text(field("station", "output_w"), 3.14159, exact=False) == "3.1"
    assert number_text(field("machine", "b_nm_s"), 1.9e-6) == "0.0000019"


def test_a_fraction_is_shown_and_typed_as_percent():
    spec = field("plan", "margin_fraction")
    assert value_text(spec, 0.15) == "15"
    assert parse_value(spec, "15") == 0.15
    assert parse_value(spec, "7.5 %") == 0.075


@pytest.mark.parametrize(
    ("kind", "key", "typed", "value"),
    [
        ("device", "battery_wh", "4000 mAh at 3.85 V", 15.4),
        ("device", "battery_wh", "1,5 kWh", 1500.0),
        ("device", "battery_wh", "15.4 Wh", 15.4),
        ("device", "battery_wh", "", None),
        ("device", "battery_wh", "1 000", 1000.0),
        ("person", "age", "40", 40),
        ("person", "age", " 40 years ", 40),
        ("person", "bout_min", "0.5 h", 30),
        (
            "person",
            "hours",
            "8-10, 16:30–18:30",
            (Window(start="08:00", end="10:00"), Window(start="16:30", end="18:30")),
        ),
        ("person", "hours", "22:00-06:00;", (Window(start="22:00", end="06:00"),)),
        ("person", "hours", "00:00-24:00", (Window(start="00:00", end="24:00"),)),
        ("person", "hours", "", ()),
        ("person", "may_watch", "", None),
        ("person", "may_watch", "No", False),
        ("station", "guarded", "yes", True),
        ("station", "kind", "pedal stand", "pedal"),
        ("station", "kind", "PEDAL", "pedal"),
        ("device", "kind", "", ""),
        ("plan", "start", "2026-11-03", datetime.date(2026, 11, 3)),
        ("block", "days", "1, 3 3", (1, 3)),
        ("person", "name", " Ada ", " Ada "),
    ],
)
def test_typed_texts_that_are_taken(qapp, kind, key, typed, value):
    taken = parse_value(field(kind, key), typed)
    assert taken == value
    assert type(taken) is type(value)


@pytest.mark.parametrize(
    ("kind", "key", "typed"),
    [
        ("person", "age", "4O"),
        ("person", "age", "-1"),
        ("person", "age", "40.5"),
        ("person", "age", "1e99"),
        ("person", "age", "nan"),
        ("device", "battery_wh", "0"),
        ("device", "battery_wh", "15 V"),
        ("device", "battery_wh", "1.2.3"),
        ("device", "battery_wh", "1e400"),
        ("device", "count", ""),
        ("station", "eta_fraction", "120"),
        ("station", "kind", "windmill"),
        ("station", "guarded", "perhaps"),
        ("person", "hours", "8"),
        ("person", "hours", "25:00-26:00"),
        ("person", "hours", "08:00-08:00"),
        ("person", "hours", "8-9-10"),
        ("person", "stations", "Nowhere"),
        ("plan", "start", "03.11.26"),
        ("plan", "start", "2026-02-30"),
        ("block", "days", "0"),
        ("block", "days", "Monday"),
    ],
)
def test_a_text_that_cannot_be_taken_is_answered_with_field_reason_and_remedy(qapp, kind, key, typed):
    spec = field(kind, key)
    with pytest.raises(FieldTextError) as refusal:
        parse_value(spec, typed)
    sentence = str(refusal.value)
    assert sentence.startswith(spec.label)
    assert sentence.count(". ") >= 1
    assert sentence.endswith(".")


def test_references_by_name_or_id(qapp):
    spec = field("person", "stations")
    names = {"S1": "Pedal stand", "S2": "Crank", "S3": "crank"}
    assert parse_value(spec, "pedal stand, S2", names) == ("S1", "S2")
    assert value_text(spec, ("S1", "S9"), names) == "Pedal stand, S9"
    with pytest.raises(FieldTextError, match="more than one"):
        parse_value(spec, "CRANK", names)


def test_numbers_follow_the_user_s_locale(qapp):
    before = QLocale()
    spec = field("device", "battery_wh")
    try:
        QLocale.setDefault(QLocale("de_DE"))
        assert value_text(spec, 15.4) == "15,4"
        assert parse_value(spec, "15,4") == 15.4
        assert parse_value(spec, "1.500,5") == 1500.5
        assert parse_value(spec, "1,500") == 1.5
        QLocale.setDefault(QLocale("en_US"))
        assert parse_value(spec, "1,500") == 1500
        QLocale.setDefault(QLocale("de_CH"))
        with pytest.raises(FieldTextError, match="two ways"):
            parse_value(spec, "1,500")
        QLocale.setDefault(QLocale("ar_EG"))
        assert parse_value(spec, "3.5") == 3.5
    finally:
        QLocale.setDefault(before)


def test_every_field_can_say_what_it_is_and_what_its_default_means(qapp):
    for specs in FIELDS.values():
        for spec in specs:
            assert help_text(spec)
            assert "None" not in default_text(spec)
            if spec.kind in ("number", "integer"):
                assert range_words(spec).startswith("Enter")


def test_windows_are_written_as_people_write_them():
    assert windows_text((Window(start="08:30", end="10:00"), Window(start="16:30", end="18:30"))) == (
        "08:30-10:00, 16:30-18:30"
    )
