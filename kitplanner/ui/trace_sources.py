"""The numbers that each part of the window shows, for the guide that traces them."""

from __future__ import annotations

from typing import Any

from PySide6.QtWidgets import QWidget

from kitplanner.planners.results import EffortRow
from kitplanner.ui.pages.effort_matrix import EffortMatrix
from kitplanner.ui.panels.cell_questions import chosen_place
from kitplanner.ui.panels.section_panel import SectionPanel
from kitplanner.ui.trace_guide import Seen, TraceGuide
from kitplanner.ui.trace_refs import FIELD, PLAN_REFS, TraceRef
from kitplanner.ui.widgets.record_form import FieldRow, RecordForm

Refs = tuple[TraceRef, ...]


def plan_refs(seen: Seen, _widget: QWidget, _row: int) -> Refs:
    """Return the plan's own answers."""
    if seen.results is None or seen.results.balance is None:
        return ()
    return tuple(TraceRef(formula) for formula in PLAN_REFS)


def store_refs(seen: Seen, widget: QWidget, row: int) -> Refs:
    """Return the plan's answers and what each store can give."""
    found = plan_refs(seen, widget, row)
    return (*found, *(TraceRef("store_usable", (store.id,)) for store in seen.plan.stores)) if found else ()


def device_refs(seen: Seen, _widget: QWidget, row: int) -> Refs:
    """Return use and start charge of the device in a row of the balance."""
    balance = seen.results.balance if seen.results is not None else None
    if balance is None or not 0 <= row < len(balance.devices):
        return ()
    key = balance.devices[row].device
    return (TraceRef("device_use", (key,)), TraceRef("device_credit", (key,)))


def station_refs(seen: Seen, _widget: QWidget, row: int) -> Refs:
    """Return time and energy of the station in a row of the balance."""
    balance = seen.results.balance if seen.results is not None else None
    if balance is None or not 0 <= row < len(balance.stations):
        return ()
    key = balance.stations[row].station
    return (TraceRef("station_made", (key,)), TraceRef("station_time", (key,)))


def matrix_refs(_seen: Seen, widget: QWidget, _row: int) -> Refs:
    """Return minutes and output of the chosen cell of the effort table."""
    return row_refs(widget.chosen_row()) if isinstance(widget, EffortMatrix) else ()


def row_refs(row: EffortRow | None) -> Refs:
    """Return the numbers of one effort row."""
    if row is None:
        return ()
    minutes = TraceRef("minutes_p50", (row.device, row.station, row.person, row.route, row.charge))
    return (minutes, TraceRef("station_output", (row.person, row.station)))


def effort_refs(_seen: Seen, widget: QWidget, _row: int) -> Refs:
    """Return the numbers of the effort page's chosen cell."""
    matrix: Any = getattr(widget, "matrix", None)
    return row_refs(matrix.chosen_row()) if matrix is not None else ()


def field_refs(_seen: Seen, widget: QWidget, _row: int) -> Refs:
    """Return the field of a row of a form."""
    form = widget.parentWidget()
    while form is not None and not isinstance(form, RecordForm):
        form = form.parentWidget()
    if form is None or not isinstance(widget, FieldRow):
        return ()
    return (TraceRef(FIELD, (*form.path, widget.spec.key)),)


def cell_refs(_seen: Seen, widget: QWidget, _row: int) -> Refs:
    """Return the field of the chosen cell of a section's table."""
    table = widget.table if isinstance(widget, SectionPanel) else None
    place = chosen_place(table) if table is not None and table.hasFocus() else ()
    return (TraceRef(FIELD, place),) if place else ()


def watch_entries(guide: TraceGuide) -> None:
    """Know the fields of every form and table, also of those that come later."""
    guide.watch_kind(FieldRow, field_refs)
    guide.watch_kind(SectionPanel, cell_refs)


def watch_page(guide: TraceGuide, key: str, page: Any) -> None:
    """Watch the parts of an answer page that show numbers."""
    if key == "balance":
        guide.watch(page.devices, device_refs)
        guide.watch(page.stations, station_refs)
        guide.watch(page, store_refs)
    elif key == "effort":
        guide.watch(page.matrix, matrix_refs)
        guide.watch(page, effort_refs)
    elif key == "matters":
        guide.watch(page, plan_refs)
