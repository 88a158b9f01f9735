"""A table of a thousand rows pasted, read from a workbook and written: preview, apply, export."""

from __future__ import annotations

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.exchange import apply, preview
from kitplanner.plan.exchange_export import ExportChoices, copied, csv_of, sheet_of, xlsx_of
from kitplanner.plan.exchange_tables import table_of_text, table_of_workbook
from tests.benchmarks.figure import Figure, median_ms

ROWS = 1000


def _line(row: int) -> str:
    window = f"{row % 12:02d}:00-{row % 12 + 2:02d}:30"
    return f"Phone {row}\t{1 + row % 7}\t{row / 10 + 1:.2f}\t{row % 41 / 10}\t{1 + row % 5}\t{window}"


def run() -> list[Figure]:
    """Median times; every row differs from the others."""
    plan = new_plan("shelter")
    header = "Name\tNumber\tOwn battery [Wh]\tUse a day\tPriority\tTimes of use"
    text = "\n".join((header, *map(_line, range(ROWS))))

    def paste() -> object:
        return apply(preview(plan, "devices", table_of_text(text)))(plan)

    pasted = apply(preview(plan, "devices", table_of_text(text)))(plan)
    if len(pasted.devices) != len(plan.devices) + ROWS:
        raise RuntimeError("the paste lost rows")
    sheet = sheet_of(pasted, "devices", ExportChoices(with_names=True))
    book = xlsx_of(sheet)

    def read_book() -> object:
        return apply(preview(plan, "devices", table_of_workbook(book)))(plan)

    def write() -> object:
        made = sheet_of(pasted, "devices", ExportChoices(with_names=True))
        return csv_of(made), copied(made)

    return [
        Figure(name="paste of 1,000 rows, preview and apply", value=median_ms(paste), unit="ms", floor=1000, aim=300),
        Figure(
            name="workbook of 1,000 rows and 27 columns", value=median_ms(read_book, 3), unit="ms", floor=3000, aim=1000
        ),
        Figure(
            name="1,000 rows as CSV and for the clipboard", value=median_ms(write, 3), unit="ms", floor=1000, aim=500
        ),
    ]
