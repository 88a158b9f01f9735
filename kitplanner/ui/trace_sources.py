"""The numbers that each part of the window shows, for the guide that traces them."""

from __future__ import annotations

from typing import Any

from PySide6.QtWidgets import QWidget

from kitplanner.planners.results import EffortRow
from kitplanner.ui.pages.effort_matrix import EffortMatrix
from kitplanner.ui.panels.cell_questions import chosen_place
from kitplanner.ui.panels.section_panel import SectionPanel
from kitplanner.ui.trace_guide import Seen, TraceGuide
from kitplanner.ui.trace_refs import BENCH, FIELD, PLAN_REFS, ROW_REFS, TraceRef
from kitplanner.ui.widgets.record_form import FieldRow, RecordForm

Refs = tuple[TraceRef, ...]
BENCH_KEYS = (
    "rpm",
    "human_w",
    "torque_nm",
    "stored_w",
    "crank_to_usb_fraction",
    "crank_to_battery_fraction",
    "regulator_degc",
    "meter_low_v",
    "meter_high_v",
    "plug_v",
    "plug_a",
)


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
    return tuple(TraceRef(formula, (key,)) for formula in ("device_use", "device_credit", "device_covered"))


def station_refs(seen: Seen, _widget: QWidget, row: int) -> Refs:
    """Return time and energy of the station in a row of the balance."""
    balance = seen.results.balance if seen.results is not None else None
    if balance is None or not 0 <= row < len(balance.stations):
        return ()
    key = balance.stations[row].station
    formulas = ("station_made", "station_time", "station_offered", "station_used", "station_human")
    return tuple(TraceRef(formula, (key,)) for formula in formulas)


def cut_refs(seen: Seen, _widget: QWidget, row: int) -> Refs:
    """Return need and share of the priority in a row of the cuts."""
    balance = seen.results.balance if seen.results is not None else None
    if balance is None or not 0 <= row < len(balance.cuts.strict):
        return ()
    priority = str(balance.cuts.strict[row].priority)
    ways = [(formula, way) for way in ("strict", "shared") for formula in ("cut_have", "cut_covered")]
    need = TraceRef("cut_need", ("strict", priority))
    return (need, *(TraceRef(formula, (way, priority)) for formula, way in ways))


def flow_refs(seen: Seen, _widget: QWidget, _row: int) -> Refs:
    """Return the bands and losses of the energy line, from people to devices."""
    flow = seen.results.flow if seen.results is not None else None
    if flow is None:
        return ()
    found = [
        TraceRef(formula, (band.key,), (band.label,))
        for formula, bands in (
            ("flow_people", flow.people_m),
            ("flow_station", flow.stations_s),
            ("flow_source", flow.sources_s),
        )
        for band in bands
    ]
    found += [TraceRef(formula) for formula in ("flow_b", "flow_start", "flow_o")]
    found += [TraceRef("flow_device", (band.key,), (band.label,)) for band in flow.devices_d]
    found += [TraceRef("flow_loss", (loss.level_from, loss.level_to)) for loss in flow.losses]
    gaps = (("flow_missing", flow.missing_o_wh), ("flow_margin", flow.margin_o_wh), ("flow_spare", flow.spare_o_wh))
    return (*found, *(TraceRef(formula) for formula, amount in gaps if amount))


def bench_refs(seen: Seen, _widget: QWidget, _row: int) -> Refs:
    """Return the numbers of the bench's point."""
    point = seen.point
    if point is None:
        return ()
    return tuple(TraceRef(f"{BENCH}{key}") for key in BENCH_KEYS if getattr(point, key) is not None)


def stage_refs(seen: Seen, _widget: QWidget, row: int) -> Refs:
    """Return the watts of the stage in a row of the bench."""
    point = seen.point
    if point is None or not 0 <= row < len(point.stages):
        return ()
    keys = ("stage_in_w", "stage_out_w", "stage_loss_w")
    return tuple(TraceRef(f"{BENCH}{key}", (str(row),), (point.stages[row].name,)) for key in keys)


def matrix_refs(_seen: Seen, widget: QWidget, _row: int) -> Refs:
    """Return minutes and output of the chosen cell of the effort table."""
    return row_refs(widget.chosen_row()) if isinstance(widget, EffortMatrix) else ()


def row_refs(row: EffortRow | None) -> Refs:
    """Return the numbers of one effort row."""
    if row is None:
        return ()
    ids = (row.device, row.station, row.person, row.route, row.charge)
    found = tuple(TraceRef(formula, ids) for formula in ROW_REFS)
    return (*found, TraceRef("station_output", (row.person, row.station)))


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
        guide.watch(page.cut_table, cut_refs)
        guide.watch(page, store_refs)
    elif key == "effort":
        guide.watch(page.matrix, matrix_refs)
        guide.watch(page, effort_refs)
    elif key == "bench":
        page.point_changed.connect(guide.seen.set_point)
        guide.watch(page.stages, stage_refs)
        guide.watch(page, bench_refs)
    elif key == "matters":
        guide.watch(page, plan_refs)
