"""Tables out: labels and units above, no names unless asked for, nothing a spreadsheet takes for a formula."""

import html.parser
import io

import openpyxl
import pytest
from msgspec import structs

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.exchange_export import ExportChoices, copied, csv_of, sheet_of, xlsx_of
from kitplanner.plan.exchange_tables import ExchangeError
from kitplanner.plan.records import Device, Person, Plan

GUARD_NOTE = "1 text begins like a formula and got an apostrophe in front; reading the table back takes it away."
NAMED = Plan(
    people=(Person(id="P1", name="Oruun", role="cooks with Sefwe"), Person(id="Sefwe-2", name="Sefwe", age=39)),
    devices=(Device(id="D1", name="Phone of Oruun (oruun's)", battery_wh=15.4, use_wh_per_day=6.0),),
)


@pytest.mark.parametrize("kind", ["household", "camp", "shelter", "bench"])
def test_the_default_export_holds_none_of_the_display_names(kind):
    plan = new_plan(kind)
    for section in ("people", "devices", "stores", "stations"):
        sheet = sheet_of(plan, section)
        out = csv_of(sheet).decode("utf-8-sig")
        for person in plan.people:
            assert person.name == person.id or person.name not in out


def test_names_of_people_inside_other_texts_and_ids_become_numbers():
    assert sheet_of(NAMED, "devices").rows[0][1] == "Phone of P1 (P1's)"
    out = csv_of(sheet_of(NAMED, "people")).decode()
    assert "efwe" not in out
    assert "ruun" not in out
    assert "#2" in out
    assert "Sefwe" in csv_of(sheet_of(NAMED, "people", ExportChoices(with_names=True))).decode()
    assert "left out" in sheet_of(NAMED, "people").notes[0]


def test_headers_have_labels_and_units_and_numbers_are_numbers():
    sheet = sheet_of(new_plan("household"), "stores")
    assert sheet.header[:6] == ("Id", "Name", "Number", "Chemistry", "Energy on the label [Wh]", "Outlets")
    page = openpyxl.load_workbook(io.BytesIO(xlsx_of(sheet))).active
    cells = {header.value: cell for header, cell in zip(page[1], page[2], strict=True)}
    assert cells["Energy on the label [Wh]"].value == 74
    assert cells["Health [%]"].value == 90
    assert cells["Health [%]"].data_type == "n"


@pytest.mark.parametrize("name", ["=1+1", "+49 1", "-x", "@home", "\tx", "\rx", "'=x", '=HYPERLINK("a","b")'])
def test_texts_like_formulas_are_guarded_and_said(name):
    plan = Plan(devices=(Device(id="D1", name=name),))
    sheet = sheet_of(plan, "devices")
    assert sheet.rows[0][1] == f"'{name}"
    assert sheet.guarded_count == 1
    assert sheet.notes == (GUARD_NOTE,)
    if "\r" not in name:
        page = openpyxl.load_workbook(io.BytesIO(xlsx_of(sheet))).active
        assert page["B2"].data_type == "s"


def test_a_workbook_refuses_what_it_cannot_hold():
    plan = Plan(devices=(Device(id="D1", name="a\x07"),))
    with pytest.raises(ExchangeError, match="Record D1: a text holds control signs"):
        xlsx_of(sheet_of(plan, "devices"))
    with pytest.raises(ExchangeError, match="no table comes out of here"):
        sheet_of(plan, "medical_needs")


def test_decimal_commas_come_with_semicolons():
    out = csv_of(sheet_of(new_plan("household"), "devices", ExportChoices(decimal_comma=True))).decode("utf-8-sig")
    assert out.startswith("Id;Name;")
    assert ";15,4;" in out


class Cells(html.parser.HTMLParser):
    def __init__(self):
        super().__init__()
        self.texts, self.tags = [], set()

    def handle_starttag(self, tag, attrs):
        self.tags.add(tag)

    def handle_data(self, data):
        self.texts.append(data)


def test_copied_rows_as_tabs_html_and_lines():
    plan = Plan(devices=(Device(id="D1", name="<b>A</b>\n& co"), Device(id="D2", name="B")))
    out = copied(sheet_of(plan, "devices", ExportChoices(keys=("name", "count"), ids=("D1",))))
    assert out.tsv == 'Name\tNumber\n"<b>A</b>\n& co"\t1\n'
    assert out.text == "Name\tNumber\n<b>A</b> & co\t1"
    page = Cells()
    page.feed(out.html)
    assert page.texts == ["Name", "Number", "<b>A</b>", "& co", "1"]
    assert page.tags == {"html", "head", "meta", "body", "table", "tr", "th", "td", "br"}


def test_every_digit_goes_out():
    plan = new_plan("household")
    store = structs.replace(plan.stores[0], health_fraction=0.1 + 0.2)
    sheet = sheet_of(structs.replace(plan, stores=(store,)), "stores", ExportChoices(keys=("health_fraction",)))
    assert float(sheet.rows[0][0]) == 30.000000000000004
