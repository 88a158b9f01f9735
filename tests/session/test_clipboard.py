"""Rows to the clipboard and back."""

import pytest
from PySide6.QtGui import QGuiApplication

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.exchange import ExchangeError, preview
from kitplanner.plan.exchange_tables import table_of_text
from kitplanner.session.clipboard import TABBED, put_rows, rows_on


@pytest.fixture
def board(qapp):
    board = QGuiApplication.clipboard()
    yield board
    board.clear()


def test_rows_go_out_in_three_forms_and_in_the_order_given(board):
    plan = new_plan("camp")
    put_rows(board, plan, "people", ("L3", "L1"), ("name", "age"))
    data = board.mimeData()
    lines = rows_on(board).splitlines()
    assert lines[0].split("\t")[:2] == ["Id", "Name"]
    assert [line.split("\t")[0] for line in lines[1:]] == ["L3", "L1"]
    assert data.hasFormat(TABBED)
    assert data.text() == rows_on(board)
    assert "<table>" in data.html()


def test_rows_with_every_field_come_back_unchanged(board):
    plan = new_plan("camp")
    for section in ("people", "devices", "stores", "stations"):
        put_rows(board, plan, section, tuple(record.id for record in getattr(plan, section)))
        seen = preview(plan, section, table_of_text(rows_on(board)))
        assert seen.problems == (), section
        assert seen.count("same") == len(getattr(plan, section)), section


def test_a_section_without_a_table_says_so(board):
    with pytest.raises(ExchangeError, match="no table comes out"):
        put_rows(board, new_plan("camp"), "blocks", ("Q1",))


def test_an_empty_clipboard_holds_no_rows(board):
    board.clear()
    assert rows_on(board) == ""


def test_text_of_another_program_is_taken_as_it_is(board):
    board.setText("Name\tAge\nAda\t40\n")
    assert rows_on(board) == "Name\tAge\nAda\t40\n"
