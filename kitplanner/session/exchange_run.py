"""Reads tables and looks at what they would do; what may take longer than a blink runs on a thread of its own."""

from __future__ import annotations

import functools
from collections.abc import Callable
from pathlib import Path

from msgspec import Struct

from kitplanner.plan.exchange import ExchangeError, Preview, TableChoices, preview
from kitplanner.plan.exchange_tables import Table, read_table, table_of_text
from kitplanner.plan.records import Plan
from kitplanner.session.rota_run import RefusedError

# Cells that are looked at in a few hundredths of a second; more are looked at on the thread.
FEW_CELLS = 20_000


class Source(Struct, frozen=True):
    """Where a table comes from: text that was copied, or one sheet of a file."""

    text: str = ""
    path: Path | None = None
    sheet: int = 0

    @property
    def is_quick(self) -> bool:
        """True where reading takes no time worth telling."""
        return self.path is None and len(self.text) <= FEW_CELLS * 10


class Looked(Struct, frozen=True):
    """A table that was read, and what it would do to the plan."""

    source: Source
    table: Table
    preview: Preview


def look(plan: Plan, section: str, source: Source, choices: TableChoices, table: Table | None = None) -> Looked:
    """Read a table, unless it is at hand already, and say what it would do to a section.

    Raises
    ------
    ExchangeError
        The table cannot be read or taken; one sentence.
    """
    read = _read(source) if table is None else table
    return Looked(source, read, preview(plan, section, read, choices))


def looking(
    plan: Plan, section: str, source: Source, choices: TableChoices, table: Table | None = None
) -> Callable[[object], Looked]:
    """Return the same as a job for the thread."""
    return functools.partial(_look, plan, section, source, choices, table)


def _look(plan: Plan, section: str, source: Source, choices: TableChoices, table: Table | None, _ask: object) -> Looked:
    try:
        return look(plan, section, source, choices, table)
    except ExchangeError as error:
        raise RefusedError(str(error)) from error


def _read(source: Source) -> Table:
    return (
        table_of_text(source.text, "The copied text") if source.path is None else read_table(source.path, source.sheet)
    )
