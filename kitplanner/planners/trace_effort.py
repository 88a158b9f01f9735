"""Traces of an effort row's other numbers and of its charge curve; ids: device, station, person, route, charge."""

from __future__ import annotations

from collections.abc import Sequence

from msgspec import structs

from kitplanner.plan.records import Device, Plan, Station
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import EffortRow, Trace, TraceStep
from kitplanner.planners.trace_fields import computed, field_step, field_steps, figure, words
from kitplanner.planners.trace_records import effort_row, minutes_p50, station_output

_SAMPLE = "256 evenly spread points (Halton 1960); lognormal factors of median 1; 10 and 90 % points of the sample"


def minutes_p10(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the quick end of the range comes from."""
    return _range_end(plan, results, ids, "10 %", effort_row(results, ids).minutes_p10)


def minutes_p90(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the slow end of the range comes from."""
    return _range_end(plan, results, ids, "90 %", effort_row(results, ids).minutes_p90)


def _range_end(plan: Plan, results: Results, ids: Sequence[str], end: str, value: float | None) -> Trace:
    middle = minutes_p50(plan, results, ids)
    return Trace(
        formula=f"{end} point of the minutes over a fixed sample of person, station, battery, rate and losses",
        words="The same charge again and again, each time with watts, capacity and losses somewhere in their spread.",
        source=_SAMPLE,
        value="-" if value is None else f"{figure(value, 1)} min",
        steps=(words("minutes at central values", middle.value), *_spreads(plan, ids), *middle.steps),
    )


def _spreads(plan: Plan, ids: Sequence[str]) -> tuple[TraceStep, ...]:
    """Return the spreads noted at the device and the station."""
    records: tuple[Device | Station, ...] = (*plan.devices, *plan.stations)
    found = [one for one in records if one.id in ids[:2]]
    return tuple(
        TraceStep(
            label=f"spread noted at {key}",
            value=figure(note.spread_fraction * 100.0, 1),
            unit="%",
            mark=note.mark,
            source=note.source,
            record=record.id,
            key=key,
        )
        for record in found
        for key, note in record.notes.items()
        if note.spread_fraction is not None
    )


def row_output(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the station's output in a row comes from: what the device takes of what the person gives."""
    row = effort_row(results, ids)
    found = station_output(plan, results, (row.person, row.station))
    mean = "mean over the charge of the least of what the station brings and what the device takes"
    return structs.replace(
        found,
        formula=mean if row.chain_from == "M" else found.formula,
        value="-" if row.station_output_w is None else f"{figure(row.station_output_w)} W at S",
        steps=(words("what keeps it from being more", row.limit.replace("_", " ")), *found.steps),
    )


def row_power(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the watts at the crank or pedal in a row come from."""
    row = effort_row(results, ids)
    station = next(one for one in plan.stations if one.id == row.station)
    by_parts = row.chain_from == "M"
    return Trace(
        formula="energy at M over the charge / its time, from the solved chain" if by_parts else "power at M = S / eta",
        words="What the person does at the handle or pedal while this charge runs.",
        source="Conservation of energy; by parts the laws of machine and stages",
        value="-" if row.person_power_w is None else f"{figure(row.person_power_w)} W at M",
        steps=(
            computed("output of the station, at S", row.station_output_w, "W", record=row.station),
            *field_steps("station", station, ("described_by",) if by_parts else ("described_by", "eta_fraction")),
        ),
    )


def row_chain(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the share of the energy that reaches the battery comes from."""
    row = effort_row(results, ids)
    device = next(one for one in plan.devices if one.id == row.device)
    stores = plan.stores if row.route == "store" else ()
    return Trace(
        formula=f"share = energy in the battery / energy at {row.chain_from}",
        words="All losses between the place it is counted from and the device's battery, over the whole charge.",
        source="Conservation of energy, each stage by its efficiency",
        value=figure(row.chain_fraction, 4),
        steps=(
            field_step("device", device, "eta"),
            *(step for store in stores for step in field_steps("store", store, ("eta_in", "eta_out"))),
        ),
    )


def curve_minutes(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the time axis of a charge curve comes from."""
    found = minutes_p50(plan, results, ids)
    return structs.replace(found, words="Minutes of turning from the start of the charge. " + found.words)


def curve_soc(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the state of charge along a curve comes from."""
    found = minutes_p50(plan, results, ids)
    return structs.replace(
        found,
        formula="state of charge = start + integral over time of power into the battery / capacity",
        value="along the curve",
        steps=(words("minutes of the whole charge", found.value), *found.steps),
    )


def curve_soc_range(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the range around a curve comes from."""
    found = curve_soc(plan, results, ids)
    return structs.replace(
        found,
        formula="10 and 90 % points of the state of charge at each minute, over the fixed sample",
        source=_SAMPLE,
        steps=(*_spreads(plan, ids), *found.steps),
    )


def curve_power(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the charging power along a curve comes from."""
    row: EffortRow = effort_row(results, ids)
    found = minutes_p50(plan, results, ids)
    return structs.replace(
        found,
        formula="power into the battery = min(station * efficiency, acceptance at this state of charge)",
        value="along the curve",
        steps=(computed("output of the station, at S", row.station_output_w, "W", record=row.station), *found.steps),
    )
