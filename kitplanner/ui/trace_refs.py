"""Which numbers the window can trace: what they are called, where their inputs stand, how they are worked out."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Any

from msgspec import Struct

from kitplanner.plan.edits import Path, get_value
from kitplanner.plan.fields import FIELDS, QT_TRANSLATE_NOOP, SECTION_KINDS, kind_of
from kitplanner.plan.fields_spec import FieldSpec
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import BenchPoint, Trace, TraceStep
from kitplanner.planners.trace import trace
from kitplanner.planners.trace_bench import trace_bench
from kitplanner.planners.trace_fields import TraceError, field_step
from kitplanner.report.wording import plain
from kitplanner.session.field_text import help_text, label_of, range_words, translate

FIELD = "field"
BENCH = "bench_"
PLAN_REFS = (
    "coverage",
    "need",
    "have",
    "short",
    "first_empty_day",
    "limit",
    "needed_min",
    "station_to_outlet",
)
ROW_REFS = ("minutes_p50", "minutes_p10", "minutes_p90", "row_output", "row_power", "row_chain")
# What a formula answers; {0} to {4} are the names of its records.
_WORDS: Mapping[str, str] = MappingProxyType(
    {
        "coverage": QT_TRANSLATE_NOOP("Trace", "Coverage, have over need"),
        "need": QT_TRANSLATE_NOOP("Trace", "Need at the outlet"),
        "have": QT_TRANSLATE_NOOP("Trace", "What can be had at the outlet"),
        "short": QT_TRANSLATE_NOOP("Trace", "Short a day"),
        "first_empty_day": QT_TRANSLATE_NOOP("Trace", "First day that ends empty"),
        "limit": QT_TRANSLATE_NOOP("Trace", "What limits"),
        "needed_min": QT_TRANSLATE_NOOP("Trace", "Minutes of turning needed a day"),
        "device_use": QT_TRANSLATE_NOOP("Trace", "Use of {0}"),
        "device_credit": QT_TRANSLATE_NOOP("Trace", "Start charge of {0}"),
        "store_usable": QT_TRANSLATE_NOOP("Trace", "Usable in {0}"),
        "station_time": QT_TRANSLATE_NOOP("Trace", "Time of {0}"),
        "station_made": QT_TRANSLATE_NOOP("Trace", "Made at {0}"),
        "station_output": QT_TRANSLATE_NOOP("Trace", "Output of {0} at {1}"),
        "minutes_p50": QT_TRANSLATE_NOOP("Trace", "Minutes for {0} at {1}, {2} turning"),
        "minutes_p10": QT_TRANSLATE_NOOP("Trace", "Quick end of the range for {0}"),
        "minutes_p90": QT_TRANSLATE_NOOP("Trace", "Slow end of the range for {0}"),
        "row_output": QT_TRANSLATE_NOOP("Trace", "Output of the station for {0}"),
        "row_power": QT_TRANSLATE_NOOP("Trace", "Watts at the crank or pedal for {0}"),
        "row_chain": QT_TRANSLATE_NOOP("Trace", "Share that reaches the battery of {0}"),
        "station_to_outlet": QT_TRANSLATE_NOOP("Trace", "Station to outlet, share that arrives"),
        "device_covered": QT_TRANSLATE_NOOP("Trace", "Covered share of {0} in a shared cut"),
        "station_offered": QT_TRANSLATE_NOOP("Trace", "Minutes offered at {0}"),
        "station_used": QT_TRANSLATE_NOOP("Trace", "Minutes turned at {0}"),
        "station_human": QT_TRANSLATE_NOOP("Trace", "Human energy at {0}"),
        "cut_need": QT_TRANSLATE_NOOP("Trace", "Need of priority {1}"),
        "cut_have": QT_TRANSLATE_NOOP("Trace", "What priority {1} gets, {0} cut"),
        "cut_covered": QT_TRANSLATE_NOOP("Trace", "Covered share of priority {1}, {0} cut"),
        "flow_people": QT_TRANSLATE_NOOP("Trace", "Energy of people, {0}"),
        "flow_station": QT_TRANSLATE_NOOP("Trace", "Out of stations, {0}"),
        "flow_source": QT_TRANSLATE_NOOP("Trace", "From another source, {0}"),
        "flow_b": QT_TRANSLATE_NOOP("Trace", "Into the stores"),
        "flow_o": QT_TRANSLATE_NOOP("Trace", "Out of the stores"),
        "flow_start": QT_TRANSLATE_NOOP("Trace", "Stored at the start, a day"),
        "flow_device": QT_TRANSLATE_NOOP("Trace", "Into devices, {0}"),
        "flow_loss": QT_TRANSLATE_NOOP("Trace", "Loss from {0} to {1}"),
        "flow_missing": QT_TRANSLATE_NOOP("Trace", "Missing energy"),
        "flow_margin": QT_TRANSLATE_NOOP("Trace", "Margin kept back"),
        "flow_spare": QT_TRANSLATE_NOOP("Trace", "Spare beyond the margin"),
        "bench_rpm": QT_TRANSLATE_NOOP("Trace", "Cadence"),
        "bench_human_w": QT_TRANSLATE_NOOP("Trace", "Human watts"),
        "bench_torque_nm": QT_TRANSLATE_NOOP("Trace", "Torque at the handle"),
        "bench_stored_w": QT_TRANSLATE_NOOP("Trace", "Watts that stay in the cell"),
        "bench_crank_to_usb_fraction": QT_TRANSLATE_NOOP("Trace", "Crank to socket, share that arrives"),
        "bench_crank_to_battery_fraction": QT_TRANSLATE_NOOP("Trace", "Crank to battery, share that arrives"),
        "bench_regulator_degc": QT_TRANSLATE_NOOP("Trace", "Temperature of the regulator"),
        "bench_meter_low_v": QT_TRANSLATE_NOOP("Trace", "Lower end of the band of volts"),
        "bench_meter_high_v": QT_TRANSLATE_NOOP("Trace", "Upper end of the band of volts"),
        "bench_plug_v": QT_TRANSLATE_NOOP("Trace", "Volts at the plug"),
        "bench_plug_a": QT_TRANSLATE_NOOP("Trace", "Amps at the plug"),
        "bench_stage_in_w": QT_TRANSLATE_NOOP("Trace", "Watts into {0}"),
        "bench_stage_out_w": QT_TRANSLATE_NOOP("Trace", "Watts out of {0}"),
        "bench_stage_loss_w": QT_TRANSLATE_NOOP("Trace", "Loss in {0}"),
    }
)
# A formula's records, in the order of its ids.
_SECTIONS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "device_use": ("devices",),
        "device_credit": ("devices",),
        "store_usable": ("stores",),
        "station_time": ("stations",),
        "station_made": ("stations",),
        "device_covered": ("devices",),
        "station_offered": ("stations",),
        "station_used": ("stations",),
        "station_human": ("stations",),
        "station_output": ("people", "stations"),
        **dict.fromkeys(ROW_REFS, ("devices", "stations", "people")),
    }
)


class TraceRef(Struct, frozen=True):
    """A number that can be traced: a formula and its records, or FIELD and a field's path.

    `said` names what the ids stand for, where they are no records of the plan.
    """

    formula: str
    ids: tuple[str, ...] = ()
    said: tuple[str, ...] = ()


def ref_words(plan: Plan, ref: TraceRef) -> str:
    """Return what a number is called."""
    if ref.formula == FIELD:
        spec = _spec_at(plan, ref.ids)
        owner = get_value(plan, ref.ids[:-1])
        name = plain(getattr(owner, "name", "") or getattr(owner, "id", ""))
        return f"{label_of(spec)}, {name}" if name else label_of(spec)
    if ref.said:
        return translate("Trace", _WORDS[ref.formula]).format(*ref.said)
    sections = _SECTIONS.get(ref.formula)
    names = ref.ids if sections is None else [_name(plan, *pair) for pair in zip(sections, ref.ids, strict=False)]
    return translate("Trace", _WORDS[ref.formula]).format(*names)


def traced(plan: Plan, results: Results, ref: TraceRef, point: BenchPoint | None = None) -> Trace:
    """Return where a number comes from; numbers of the bench need the point that is shown.

    Raises
    ------
    TraceError
        Where there is no answer yet, or the record has gone
    """
    if ref.formula == FIELD:
        return _field_trace(plan, ref.ids)
    if ref.formula.startswith(BENCH):
        if point is None:
            raise TraceError("The bench has no answer yet.")
        return trace_bench(plan, point, ref.formula, ref.ids)
    if ref.formula in ROW_REFS and results.effort_plan is not None:
        # Minutes arrive a moment after an edit; until then they belong to the plan before it.
        return trace(results.effort_plan, results, ref.formula, ref.ids)
    return trace(plan, results, ref.formula, ref.ids)


def place_of(plan: Plan, step: TraceStep) -> Path:
    """Return the field or record a step of a trace stands for, empty when it is none."""
    if not step.record:
        known = step.key and any(spec.key == step.key for spec in FIELDS["plan"])
        return (step.key,) if known else ()
    for section, kind in SECTION_KINDS.items():
        keys = {spec.key for spec in FIELDS[kind]}
        if (not step.key or step.key in keys) and any(one.id == step.record for one in getattr(plan, section)):
            return (section, step.record, step.key) if step.key else (section, step.record)
    return ()


def _field_trace(plan: Plan, path: Path) -> Trace:
    """Return where a field's own value comes from: given or default, its mark and source."""
    spec, record = _spec_at(plan, path), get_value(plan, path[:-1])
    step = field_step(kind_of(record), record, path[-1])
    given = getattr(record, path[-1]) is not None
    words = translate("Trace", "This value is entered, not computed.")
    if not given:
        words = translate("Trace", "The field is empty; its default counts.")
    return Trace(
        formula=range_words(spec) if spec.kind in ("number", "integer") else "",
        words=f"{words} {translate('Fields', spec.help)}".strip(),
        source=step.source,
        value=f"{step.value} {step.unit}".strip(),
        steps=(step,),
    )


def _spec_at(plan: Plan, path: Path) -> FieldSpec:
    record: Any = get_value(plan, path[:-1])
    found = next((spec for spec in FIELDS[kind_of(record)] if spec.key == path[-1]), None)
    if found is None:
        raise TraceError(f'There is no field "{path[-1]}".')
    return found


def _name(plan: Plan, section: str, key: str) -> str:
    found = (one for one in getattr(plan, section) if one.id == key)
    return next((plain(one.name) or plain(key) for one in found), plain(key))


def field_help(plan: Plan, path: Path) -> tuple[str, str]:
    """Return a field's label and what it means."""
    spec = _spec_at(plan, path)
    return label_of(spec), help_text(spec)
