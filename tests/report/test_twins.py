"""The twins of a paper say the same, and user text stays text.

CSV form: RFC 4180. Formula cells: OWASP, "CSV Injection" (cells that start with = + - @, tab or return).
HTML is parsed by the standard library, an independent reader.
"""

from __future__ import annotations

import csv
import io
from html.parser import HTMLParser

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.report.content import Cell, Heading, PageBreak, Paper, Paragraph, Table, cell
from kitplanner.report.twins import csv_safe, csv_text, html_text, plain_text

NASTY = '<img src="x" onerror="1">&=HYPERLINK("a")'

texts = st.text(st.characters(codec="utf-8", exclude_categories=["Cs", "Cc"]), max_size=30)


def a_paper(name: str = "phone", minutes: str = "199.9") -> Paper:
    table = Table(
        title="Minutes of turning",
        header=((cell("device"), cell("crank", align="right")),),
        rows=(
            (cell(name), cell(minutes, "150 to 300", align="right", strong=True)),
            (Cell(lines=("no more",), span=2),),
        ),
        footnotes=("Full charge.",),
    )
    blocks = (
        Heading(text="Effort"),
        Paragraph(label="C5", text="Turn at a pace at which you can talk.", style="caution"),
        PageBreak(),
        table,
    )
    return Paper(key="effort", title="Effort table", subtitle=name, blocks=blocks, foot="plan 1")


class Reader(HTMLParser):
    """Collects the tags and the texts of a page."""

    def __init__(self) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.texts: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)

    def handle_data(self, data: str) -> None:
        self.texts.append(data)


def read_html(paper: Paper) -> Reader:
    reader = Reader()
    reader.feed(html_text(paper))
    return reader


def test_html_escapes_what_people_typed() -> None:
    reader = read_html(a_paper(NASTY))
    assert "img" not in reader.tags
    assert NASTY in reader.texts


@given(texts.filter(bool))
def test_user_text_adds_no_tag(name: str) -> None:
    assert read_html(a_paper(name)).tags == read_html(a_paper("x")).tags


def test_html_names_rows_and_columns_for_readers_aloud() -> None:
    page = html_text(a_paper())
    assert '<th scope="col">device</th>' in page
    assert '<th scope="row">phone</th>' in page
    assert 'colspan="2"' in page
    assert "http" not in page


@pytest.mark.parametrize("text", ["=1+1", "+x", "-x", "@SUM(A1)", "\t=1", "\r=1", "  =1", "\uff1d1"])
def test_csv_keeps_formulas_from_running(text: str) -> None:
    assert csv_safe(text) == f"'{text}"


@pytest.mark.parametrize("text", ["199.9", "-3.5", "+2", "phone", "a=b", "2-3", ""])
def test_csv_leaves_numbers_and_plain_text(text: str) -> None:
    assert csv_safe(text) == text


@given(texts, texts)
def test_csv_reads_back_cell_by_cell(name: str, minutes: str) -> None:
    rows = list(csv.reader(io.StringIO(csv_text(a_paper(name, minutes)), newline="")))
    row = rows[rows.index(["device", "crank"]) + 1]
    second = "; ".join(line for line in (minutes, "150 to 300") if line)
    assert row == [csv_safe(name), csv_safe(second)]
    assert not any(text.lstrip(" ").startswith(("=", "@")) for line in rows for text in line)


def test_csv_rows_of_a_table_share_one_width() -> None:
    rows = list(csv.reader(io.StringIO(csv_text(a_paper()), newline="")))
    start = rows.index(["device", "crank"])
    assert [len(row) for row in rows[start : start + 3]] == [2, 2, 2]


def test_plain_text_aligns_columns_and_keeps_the_order() -> None:
    text = plain_text(a_paper())
    lines = text.splitlines()
    head = next(line for line in lines if line.startswith("device"))
    row = next(line for line in lines if line.startswith("phone "))
    assert len(head) == len(row)
    assert text.index("C5: Turn at a pace") < text.index("Minutes of turning") < text.index("Full charge.")


def test_plain_text_counts_wide_letters_as_two_columns() -> None:
    lines = plain_text(a_paper("電話機")).splitlines()
    row = next(line for line in lines if line.startswith("電話機 "))
    head = next(line for line in lines if line.startswith("device"))
    assert len(row) + 3 == len(head)


@given(texts)
def test_all_twins_hold_every_word(name: str) -> None:
    paper = a_paper(name)
    words = ["Effort table", "Turn at a pace at which you can talk.", "199.9", "150 to 300", "Full charge.", "plan 1"]
    for twin in (plain_text(paper), html_text(paper), csv_text(paper)):
        assert all(word in twin for word in words)
