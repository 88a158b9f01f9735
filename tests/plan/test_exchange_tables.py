"""Tables from outside: separators, encodings, quotes, workbooks, and what is refused."""

import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.exchange_tables import (
    ExchangeError,
    guarded,
    read_table,
    table_of_bytes,
    table_of_text,
    table_of_workbook,
    unguarded,
)


@pytest.mark.parametrize("separator", [",", ";", "\t", "|"])
def test_any_separator(separator):
    text = f"Name{separator}Age\r\nAda{separator}40\r\n"
    assert table_of_text(text).rows == (("Name", "Age"), ("Ada", "40"))


@pytest.mark.parametrize(
    ("text", "rows"),
    [
        ("Name;Wh\nPhone;15,4\nLamp;7,4", (("Name", "Wh"), ("Phone", "15,4"), ("Lamp", "7,4"))),
        ("1,5;2,5\n3,5;4,5", (("1,5", "2,5"), ("3,5", "4,5"))),
        ('Name,Role\n"Ada ""A"", B","two\nlines"', (("Name", "Role"), ('Ada "A", B', "two\nlines"))),
        ('"A" frame\t3\nB\t4', (('"A" frame', "3"), ("B", "4"))),
        ("sep=;\na;b", (("a", "b"),)),
        ("a,b\n\n,\nc,d\n", (("a", "b"), ("c", "d"))),
        ("a\tb\nc", (("a", "b"), ("c", ""))),
        ("Ada\nBo", (("Ada",), ("Bo",))),
        ("'=x\t'quoted\n=y\t-", (("=x", "'quoted"), ("=y", "-"))),
    ],
)
def test_texts(text, rows):
    assert table_of_text(text).rows == rows


def test_lines_are_those_of_the_source():
    assert table_of_text("a,b\n\n\nc,d\n").lines == (1, 4)


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16"])
def test_encodings_with_and_without_byte_order_mark(encoding):
    assert table_of_bytes("Name;Alter\nJürgen;40".encode(encoding)).rows == (("Name", "Alter"), ("Jürgen", "40"))


def test_an_old_encoding_is_read_and_said():
    table = table_of_bytes("Name;Age\nJürgen;40".encode("cp1252"))
    assert table.rows[1][0] == "Jürgen"
    assert "not in UTF-8" in table.notes[0]


@pytest.mark.parametrize("ending", ["xlsx", "ods"])
def test_workbooks(tmp_path, ending):
    path = tmp_path / f"table.{ending}"
    frame = pd.DataFrame([["Name", "Age", "May watch"], ["NA", 40, True], ["007", 12.5, None]])
    if ending == "xlsx":
        frame.to_excel(path, header=False, index=False, engine="openpyxl")
    else:
        path = write_ods(path, [["Name", "Age"], ["NA", 40.0]])
    rows = read_table(path).rows
    assert rows[1][:2] == ("NA", 40.0)
    if ending == "xlsx":
        assert rows[1][2] == "yes"
        assert rows[2] == ("007", 12.5, "")


def write_ods(path, rows):
    """Write the least that is a spreadsheet by OASIS OpenDocument 1.2."""
    import zipfile

    cells = "".join(
        "<table:table-row>"
        + "".join(
            f'<table:table-cell office:value-type="float" office:value="{cell}"/>'
            if isinstance(cell, float)
            else f'<table:table-cell office:value-type="string"><text:p>{cell}</text:p></table:table-cell>'
            for cell in row
        )
        + "</table:table-row>"
        for row in rows
    )
    names = " ".join(
        f'xmlns:{short}="urn:oasis:names:tc:opendocument:xmlns:{short}:1.0"' for short in ("office", "table", "text")
    )
    content = (
        f'<?xml version="1.0" encoding="UTF-8"?><office:document-content {names} office:version="1.2"><office:body>'
        f'<office:spreadsheet><table:table table:name="A">{cells}</table:table></office:spreadsheet></office:body>'
        "</office:document-content>"
    )
    kind = "application/vnd.oasis.opendocument.spreadsheet"
    manifest = (
        '<?xml version="1.0"?><m:manifest xmlns:m="urn:oasis:names:tc:opendocument:xmlns:manifest:1.0">'
        f'<m:file-entry m:full-path="/" m:media-type="{kind}"/></m:manifest>'
    )
    with zipfile.ZipFile(path, "w") as file:
        file.writestr("mimetype", kind)
        file.writestr("META-INF/manifest.xml", manifest)
        file.writestr("content.xml", content)
    return path


def test_refusals_say_place_reason_and_remedy(tmp_path):
    broken = tmp_path / "broken.xlsx"
    broken.write_bytes(b"PK\x03\x04 not a workbook")
    for make, words in (
        (lambda: read_table(tmp_path / "none.csv"), "none.csv: no such file"),
        (lambda: read_table(tmp_path), "this is not a file"),
        (lambda: read_table(broken), "cannot be read as a workbook"),
        (lambda: table_of_bytes(b"PK\x03\x04xx"), "this is a workbook"),
        (lambda: table_of_text("a\x00b"), "signs that no text has"),
        (lambda: table_of_text("a\n" * 10_002), "more than 10000 rows"),
        (lambda: table_of_text("\t".join("a" * 501)), "501 columns"),
        (lambda: table_of_text('"' + "a" * 200_000 + '"'), "a cell is longer"),
        (lambda: table_of_workbook(b""), "cannot be read as a workbook"),
    ):
        with pytest.raises(ExchangeError, match=words) as refusal:
            make()
        assert "; " in str(refusal.value)


@given(st.text(max_size=12) | st.from_regex(r"'*[=+\-@\t\r].*", fullmatch=True))
def test_the_guard_against_formulas_comes_off_again(text):
    safe = guarded(text)
    assert safe[:1] not in ("=", "+", "-", "@", "\t", "\r")
    assert unguarded(safe) == text
