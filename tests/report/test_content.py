"""The content model holds together: shapes of tables, frozen records, no Qt."""

from __future__ import annotations

import subprocess
import sys

import pytest

from kitplanner.report.content import Cell, Paper, Table, cell, check_tables


def a_table(*rows: tuple[Cell, ...]) -> Table:
    return Table(title="Minutes", header=((cell("device"), cell("crank")),), rows=rows)


def test_columns_count_spans() -> None:
    table = a_table((Cell(lines=("all",), span=2),), (cell("phone"), cell("200")))
    assert table.column_count == 2
    check_tables(Paper(key="effort", title="Effort", blocks=(table,)))


def test_a_ragged_table_is_named_with_its_row() -> None:
    paper = Paper(key="effort", title="Effort", blocks=(a_table((cell("phone"),)),))
    with pytest.raises(ValueError, match="'Minutes': row 2 has 1 columns, the table has 2"):
        check_tables(paper)


def test_records_are_frozen() -> None:
    with pytest.raises(AttributeError):
        cell("a").lines = ("b",)  # type: ignore[misc]


def test_a_cells_text_joins_its_lines_without_empty_ones() -> None:
    assert cell("200 min", "", "150 to 300").text == "200 min; 150 to 300"


def test_content_and_twins_load_no_qt() -> None:
    code = (
        "import sys, kitplanner.report.content, kitplanner.report.twins;"
        "print([name for name in sys.modules if name.startswith(('PySide6', 'pandas', 'pyqtgraph'))])"
    )
    found = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert found.strip() == "[]"
