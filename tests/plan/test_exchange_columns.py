"""Columns by label, key and unit."""

import pytest

from kitplanner.plan.exchange_columns import EXCHANGED, columns_by_header, has_header, header_of, specs_of, visible_keys
from kitplanner.plan.quantities import plain


@pytest.mark.parametrize("section", EXCHANGED)
def test_every_field_is_found_by_its_label_its_key_and_its_own_header(section):
    specs = specs_of(section)
    for spec in specs.values():
        for header in (spec.label, spec.key, spec.label.upper(), spec.key.replace("_", " "), header_of(spec, plain)):
            (column,) = columns_by_header(section, (header,), plain)
            assert (column.key, column.problem) == (spec.key, ""), header
    assert set(visible_keys(section)) <= set(specs)


def test_a_header_in_another_language():
    words = {"Own battery": "Eigener Akku"}
    (column,) = columns_by_header("devices", ("eigener  akku (kWh)",), lambda _, text: words.get(text, text))
    assert (column.key, column.unit) == ("battery_wh", "kWh")


@pytest.mark.parametrize(
    ("row", "header"),
    [
        (("Name", "Age"), True),
        (("Name", "Shoe", "Hat"), True),
        (("Name", "Shoe", "Hat", "Coat"), False),
        (("Ada", "40"), False),
        (("Name", "40"), False),
        (("Name", 40.0), False),
        (("", ""), False),
    ],
)
def test_what_counts_as_a_header(row, header):
    assert has_header("people", row, plain) is header
