"""Forty bad inputs: each stays as typed and is answered with row, field, reason and remedy; nothing else changes."""

import pytest

from kitplanner.plan.exchange import apply, preview
from kitplanner.plan.exchange_tables import ExchangeError, Table
from kitplanner.plan.field_reading import FieldTextError, read_value
from kitplanner.plan.fields import field
from kitplanner.plan.records import Person, Plan, Station

PLAN = Plan(
    people=(Person(id="P1", name="Ada"), Person(id="P2", name="Ada")), stations=(Station(id="S1", name="Crank"),)
)

CELLS = [
    # Text in numbers
    ("people", "age", "forty", "is not a number"),
    ("people", "age", "4O", "is not a number"),
    ("people", "age", "12-15", "is not a number"),
    ("people", "age", "~40", "is not a number"),
    ("people", "age", "40.5", "must be a whole number"),
    ("people", "age", "1.2.3", "is not a number"),
    ("devices", "battery_wh", "=15+4", "is not a number"),
    ("devices", "battery_wh", "15 or 16", "is not a number"),
    ("devices", "battery_wh", "1,500", "could be read in two ways"),
    # Wrong units
    ("devices", "battery_wh", "15 V", "is in Wh, not in V"),
    ("devices", "battery_wh", "4000 mAh", "needs the volts of the cell"),
    ("devices", "use_w", "6 Wh", "is in W, not in Wh"),
    ("devices", "use_wh_per_day", "6 W", "is in Wh/day, not in W"),
    ("people", "bout_min", "20 W", "is in min, not in W"),
    ("people", "mass_kg", "75 min", "is in kg, not in min"),
    ("stores", "health_fraction", "90 Wh", "is in %, not in Wh"),
    # Negative, zero and huge
    ("people", "age", "-1", "is too low: -1"),
    ("devices", "battery_wh", "0", "is too low: 0"),
    ("devices", "count", "-3", "is too low: -3"),
    ("people", "age", "1e99", "is too high"),
    ("devices", "battery_wh", "1e400", "is larger than any number"),
    ("devices", "count", "9" * 400, "is not a number"),
    ("stores", "start_fraction", "120 %", "is too high: 120 %"),
    ("stores", "nominal_wh", "nan", "is not a number"),
    # Times
    ("people", "hours", "25:00-26:00", "has a part that is no window"),
    ("people", "hours", "08:00", "has a part that is no window"),
    ("people", "hours", "09:00-09:00", "has a window without length"),
    ("people", "days_off", "Monday", "has a part that is no day"),
    ("people", "days_off", "0", "has a part that is no day"),
    # Choices, flags and references
    ("people", "level", "superhuman", "cannot be superhuman"),
    ("people", "may_watch", "perhaps", "is neither yes nor no"),
    ("people", "stations", "Windmill", "names something that is not in the plan"),
    # HTML, control characters, marks that turn the writing, endless names
    ("people", "age", "<b>40</b>", "is not a number: <b>40</b>"),
    ("people", "age", "40\u200f", "holds a hidden sign (U+200F)"),
    ("people", "age", "4\x070", "holds a hidden sign (U+0007)"),
    ("people", "name", "A\x1bda", "holds a hidden sign (U+001B)"),
    ("people", "name", "Ada\u202eadA", "holds a hidden sign (U+202E)"),
    ("people", "name", "A" * 10_000, "has 10000 signs, more than 200"),
    ("people", "name", "Ada", "belongs to 2 records"),
    ("devices", "kind", "<img src=x>", "cannot be <img src=x>"),
]


def test_there_are_forty():
    assert len({(key, text) for _, key, text, _ in CELLS}) >= 40


@pytest.mark.parametrize(("section", "key", "text", "reason"), CELLS)
def test_a_bad_cell_stays_as_typed_and_says_row_field_reason_and_remedy(section, key, text, reason):
    table = Table(rows=((key, "connector") if section == "devices" else (key, "role"), (text, "")), lines=(1, 2))
    shown = preview(PLAN, section, table)
    assert shown.rows[0].cells[0].text == text
    assert shown.bad_lines == (2,)
    sentence = shown.problems[0]
    assert sentence.startswith("Row 2")
    assert reason in sentence
    assert sentence.endswith(".")
    assert len(sentence) < 400
    with pytest.raises(ExchangeError):
        apply(shown)
    assert apply(shown, leave_out={2})(PLAN) is PLAN


@pytest.mark.parametrize(
    ("kind", "key", "text", "reason"),
    [
        ("plan", "start", "2026-02-30", "First day is no date"),
        ("plan", "start", "03.11.26", "First day is no date"),
        ("plan", "days", "0", "Days is too low"),
    ],
)
def test_dates_and_lengths_that_cannot_be(kind, key, text, reason):
    with pytest.raises(FieldTextError, match=reason):
        read_value(field(kind, key), text)


def test_html_in_a_name_is_a_name():
    table = Table(rows=(("Name", "Age"), ("<b>Bo</b> & co", "40")), lines=(1, 2))
    assert apply(preview(Plan(), "people", table))(Plan()).people[0].name == "<b>Bo</b> & co"
