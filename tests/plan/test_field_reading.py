"""Texts as values without a window: any language through a translation, any text read or refused in words."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.field_reading import FieldTextError, Reading, read_value
from kitplanner.plan.fields import FIELDS, field
from kitplanner.plan.quantities import COMMA

SPECS = [spec for specs in FIELDS.values() for spec in specs]
GERMAN = {
    "Own battery": "Eigener Akku",
    "Wh": "Wattstunden",
    "is in {unit}, not in {text}": "ist in {unit}, nicht {text}",
}


def german(_context, text):
    return GERMAN.get(text, text)


@given(st.sampled_from(SPECS), st.text(max_size=30))
def test_any_text_is_taken_or_refused_with_the_field_s_name(spec, text):
    refused = ""
    try:
        read_value(spec, text)
    except FieldTextError as error:
        refused = str(error)
    assert refused == "" or (refused.startswith(spec.label) and refused.endswith("."))


def test_refusals_and_units_in_another_language():
    spec = field("device", "battery_wh")
    how = Reading(style=COMMA, say=german)
    assert read_value(spec, "15,4 Wattstunden", how) == 15.4
    with pytest.raises(
        FieldTextError, match=r"^Eigener Akku ist in Wattstunden, nicht V. Enter a number above 0, up to"
    ):
        read_value(spec, "3 V", how)


def test_bare_numbers_may_be_in_the_unit_of_a_header():
    spec = field("device", "battery_wh")
    how = Reading(unit="kWh")
    assert read_value(spec, "0.0154", how) == 15.4
    assert read_value(spec, "15.4 Wh", how) == 15.4


@pytest.mark.parametrize(
    ("kind", "key", "text", "value"),
    [
        ("plan", "margin_fraction", "30.000000000000004", 0.1 + 0.2),
        ("device", "use_battery_fraction_per_day", "39 %", 0.39),
        ("device", "use_battery_fraction_per_day", "39 %/day", 0.39),
        ("store", "self_discharge_fraction_per_month", "2%", 0.02),
        ("person", "bout_min", "1 h 20", 80),
        ("device", "charge_rate_per_h", "0.5 1/h", 0.5),
        ("person", "name", "  two  words ", "  two  words "),
    ],
)
def test_values(kind, key, text, value):
    assert read_value(field(kind, key), text) == value


def test_names_that_hold_commas_are_found_whole():
    names = {"S1": "Crank, clamped", "S2": "Crank", "S3": "Stand"}
    spec = field("person", "stations")
    assert read_value(spec, "Crank, clamped, Stand", Reading(names=names)) == ("S1", "S3")
    assert read_value(spec, "crank, S1", Reading(names=names)) == ("S2", "S1")
