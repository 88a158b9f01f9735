"""Tables in: columns in any order, every cell kept as typed, one edit, and round trips that lose nothing."""

import datetime as dt

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.edits import EditError
from kitplanner.plan.exchange import EXCHANGED, TableChoices, apply, preview
from kitplanner.plan.exchange_columns import specs_of
from kitplanner.plan.exchange_export import ExportChoices, copied, csv_of, sheet_of, xlsx_of
from kitplanner.plan.exchange_tables import ExchangeError, table_of_bytes, table_of_text, table_of_workbook
from kitplanner.plan.quantities import COMMA, POINT, NumberStyle
from kitplanner.plan.records import Device, Group, Person, Plan, Station
from tests.strategies import records

SHELTER = new_plan("shelter")
KIND_OF = {"people": "person", "devices": "device", "stores": "store", "stations": "station"}


def seen(section, text, plan=None, **choices):
    return preview(Plan() if plan is None else plan, section, table_of_text(text), TableChoices(**choices))


def taken(section, text, plan=None, **choices):
    plan = Plan() if plan is None else plan
    return getattr(apply(seen(section, text, plan, **choices))(plan), section)


def plain_fields(section, record):
    return {key: getattr(record, key) for key in ("id", *specs_of(section))}


# Round trips


@pytest.mark.parametrize("kind", ["household", "camp", "shelter", "bench"])
@pytest.mark.parametrize("comma", [False, True])
@pytest.mark.parametrize("names", [False, True])
def test_a_demo_s_tables_come_back_as_the_very_same_plan(kind, comma, names):
    plan = new_plan(kind)
    for section in EXCHANGED:
        if not getattr(plan, section):
            continue
        sheet = sheet_of(plan, section, ExportChoices(with_names=names, decimal_comma=comma))
        for table in (
            table_of_bytes(csv_of(sheet)),
            table_of_workbook(xlsx_of(sheet)),
            table_of_text(copied(sheet).tsv),
        ):
            back = preview(plan, section, table, TableChoices(style=COMMA if comma else POINT))
            assert (back.problems, back.notes) == ((), ())
            assert back.count("same") == len(getattr(plan, section))
            assert apply(back)(plan) is plan


@st.composite
def sections(draw):
    section = draw(st.sampled_from(EXCHANGED))
    ids = {"stations": ["S1", "S2"], "stores": ["B1"], "groups": ["G1", "G2"]}
    base = Plan(
        groups=(Group(id="G1", name="A, B"), Group(id="G2", name="=A")),
        stations=(Station(id="S1", name="Crank"), Station(id="S2", name="Crank")),
    )
    size = draw(st.integers(1, 4))
    made = tuple(draw(records(KIND_OF[section], f"X{place}", ids)) for place in range(1, size + 1))
    return section, structs.replace(base, **{section: made})


@settings(max_examples=40)
@given(sections(), st.sampled_from(["csv", "csv comma", "tsv"]))
def test_any_records_exported_with_names_come_back_into_an_empty_section(case, way):
    section, plan = case
    comma = way == "csv comma"
    sheet = sheet_of(plan, section, ExportChoices(with_names=True, decimal_comma=comma))
    table = table_of_text(copied(sheet).tsv, separator="\t") if way == "tsv" else table_of_bytes(csv_of(sheet))
    # References go to records that are there; the section itself starts empty, but for what it refers to.
    emptied = plan if section in ("stations", "stores") else structs.replace(plan, **{section: ()})
    back = preview(emptied, section, table, TableChoices(style=COMMA if comma else POINT, header=True))
    bad = [problem for problem in back.problems if "not in the plan" not in problem]
    assert bad == []
    if not back.problems:
        after = getattr(apply(back)(emptied), section)
        wanted = [plain_fields(section, one) for one in getattr(plan, section)]
        assert [plain_fields(section, one) for one in after] == wanted


@settings(max_examples=15)
@given(sections())
def test_any_records_come_back_from_a_workbook(case):
    section, plan = case
    table = table_of_workbook(xlsx_of(sheet_of(plan, section, ExportChoices(with_names=True))))
    back = preview(plan, section, table, TableChoices(header=True))
    assert back.problems == ()
    assert apply(back)(plan) is plan


# Columns


def test_columns_by_label_or_key_in_any_order_with_unknown_ones_named():
    table = "Colour;Own battery [kWh];name;Use a day;Number\nred;0,015;Phone;6;3\n"
    shown = seen("devices", table)
    assert [column.key for column in shown.columns] == ["", "battery_wh", "name", "use_wh_per_day", "count"]
    assert shown.notes == ("Column 1 named 'Colour' belongs to no field and is left out.",)
    (device,) = taken("devices", table)
    assert (device.name, device.battery_wh, device.use_wh_per_day, device.count) == ("Phone", 15.0, 6.0, 3)
    assert device.notes["use_wh_per_day"].mark == "own"


def test_a_block_without_header_goes_by_position():
    devices = taken("devices", "Phone\t4\t15,4\t3\t6\nLamp\t2\t\t2\t4,5\n")
    assert [(one.name, one.count, one.battery_wh, one.priority, one.use_wh_per_day) for one in devices] == [
        ("Phone", 4, 15.4, 3, 6.0),
        ("Lamp", 2, None, 2, 4.5),
    ]
    people = taken("people", "Ada\nBo\n", columns=("name",))
    assert [(one.id, one.name) for one in people] == [("P1", "Ada"), ("P2", "Bo")]


def test_more_cells_than_fields_and_double_columns_are_said():
    wide = seen("people", "Ada\t40\t\t\t\t\textra", columns=("name", "age"))
    assert "Column 3 is one more than there are fields and is left out." in wide.notes
    double = seen("people", "Name;Name\nAda;Bo\n")
    assert double.notes == ("Column 2 named 'Name' is there twice and is left out.",)
    wrong = seen("devices", "Name;Own battery [V]\nPhone;3\n")
    assert "left out because this field is in Wh" in wrong.notes[0]


def test_a_header_can_be_denied_or_asked_for():
    assert not seen("people", "Ada\nBo", header=False, columns=("name",)).header
    assert [row.name for row in seen("people", "Name\nAda").rows] == ["Ada"]


# New or update


def test_rows_update_by_id_then_by_name_and_the_rest_is_new():
    plan = Plan(people=(Person(id="P1", name="Ada", age=30), Person(id="P2", name="Bo", age=50)))
    shown = seen("people", "Id,Name,Age\nP1,Ada B,31\n,Bo,50\n,Cy,20\n", plan)
    assert [(row.action, row.record_id) for row in shown.rows] == [("update", "P1"), ("same", "P2"), ("new", "")]
    after = apply(shown)(plan).people
    assert [(one.id, one.name, one.age) for one in after] == [("P1", "Ada B", 31), ("P2", "Bo", 50), ("P3", "Cy", 20)]
    assert after[1] is plan.people[1]


def test_an_empty_cell_clears_an_optional_value_and_is_refused_where_one_is_needed():
    plan = Plan(devices=(Device(id="D1", name="Phone", battery_wh=15.4, use_wh_per_day=6.0),))
    (device,) = taken("devices", "Id,Own battery\nD1,\n", plan)
    assert device.battery_wh is None
    assert seen("devices", "Id,Number\nD1,\n", plan).problems == (
        "Row 2, column Number: Number is empty. Enter a value.",
    )


def test_a_block_can_be_written_onto_chosen_records():
    plan = Plan(people=tuple(Person(id=f"P{i}", name=f"P{i}", age=i) for i in (1, 2, 3)))
    after = taken("people", "71\n72\n73\n", plan, columns=("age",), onto=("P2", "P3"), header=False)
    assert [(one.id, one.age) for one in after] == [("P1", 1), ("P2", 71), ("P3", 72), ("P4", 73)]


def test_the_way_of_giving_use_follows_from_the_filled_cells_and_is_said():
    shown = seen("devices", "Name,Power in use,Hours a day\nLamp,1.5,4\n")
    assert shown.rows[0].notes == ("Use given by: watts and hours.",)
    assert taken("devices", "Name,Power in use,Hours a day\nLamp,1.5,4\n")[0].use_by == "power_hours"
    assert taken("people", "Name,own_legs_w\nAda,80\n")[0].watts_by == "own"
    mixed = seen("devices", "Name,Use a day,Power in use\nLamp,6,1.5\n")
    assert "gives one thing in two ways" in mixed.problems[0]


# Refusals


def test_a_block_with_a_bad_cell_is_refused_unless_its_row_is_left_out():
    shown = seen("people", "Name,Age\nAda,4O\nBo,50\n")
    assert shown.bad_lines == (2,)
    assert shown.rows[0].cells[1].text == "4O"
    with pytest.raises(ExchangeError, match="Row 2, column Age: Age is not a number: 4O"):
        apply(shown)
    assert [one.name for one in apply(shown, leave_out={2})(Plan()).people] == ["Bo"]


def test_names_twice_and_ids_of_others_are_refused_with_their_rows():
    assert "is already in row 2" in seen("people", "Name\nAda\nAda\n", header=True).problems[0]
    assert "is used among the stations" in seen("people", "Id,Name\nC-S1,Ada\n", SHELTER).problems[0]
    plan = Plan(people=(Person(id="P1", name="Ada"), Person(id="P2", name="Ada")))
    assert "belongs to 2 records; add a column Id" in seen("people", "Name,Age\nAda,3\n", plan).problems[0]
    assert "number of an export without names" in seen("people", "Id,Age\n#3,40\n", plan).problems[0]


def test_a_comma_that_may_mean_two_things_is_asked_about_and_can_be_answered():
    table = "Name;Own battery\nPhone;1,500\n"
    assert "could be read in two ways: 1,500" in seen("devices", table).problems[0]
    assert taken("devices", table, style=COMMA)[0].battery_wh == 1.5
    assert taken("devices", table, style=NumberStyle(".", ","))[0].battery_wh == 1500


def test_sections_without_tables_and_tables_without_use_are_refused():
    with pytest.raises(ExchangeError, match="no table goes in here"):
        seen("medical_needs", "Name\nx")
    with pytest.raises(ExchangeError, match="header and no rows"):
        seen("people", "Name\n")
    with pytest.raises(ExchangeError, match="holds no cells"):
        table_of_text(" \n\t\n")
    with pytest.raises(ExchangeError, match="none of its columns is a field"):
        seen("people", "Colour;Shoe\nred;44", header=True)


def test_a_preview_of_a_plan_that_has_changed_since_is_refused():
    plan = Plan(people=(Person(id="P1", name="Ada", age=3),))
    edit = apply(seen("people", "Id,Age\nP1,40\n", plan))
    with pytest.raises(EditError, match="gone by now"):
        edit(Plan())


def test_references_are_read_by_name_or_id():
    plan = structs.replace(SHELTER, start=dt.date(2026, 1, 1))
    (person,) = [one for one in taken("people", "Name,Stations\nZoe,C-S1\n", plan) if one.name == "Zoe"]
    assert person.stations == ("C-S1",)
    assert "not in the plan: Nowhere" in seen("people", "Name,Stations\nZoe,Nowhere\n", plan).problems[0]


def test_a_percent_column_of_a_workbook_that_may_be_shares_is_asked_about():
    sheet = sheet_of(SHELTER, "stores", ExportChoices(keys=("id", "start_fraction")))
    named = table_of_workbook(xlsx_of(sheet))
    assert preview(SHELTER, "stores", named).problems == ()
    unnamed = structs.replace(named, rows=(("Id", "Charge at the start"), ("C-B1", 0.9)), lines=(1, 2))
    assert "could be 0.9 percent or the share 0.9" in preview(SHELTER, "stores", unnamed).problems[0]
