"""Where a number comes from: its formula in words, its inputs with their marks, its source.

A formula id names what is traced, `ids` the records it belongs to:
coverage, need, have, short, first_empty_day, limit, needed_min (no ids); device_use, device_credit (device);
store_usable (store); station_time, station_made (station); station_output (person, station);
minutes_p50 (device, station, person, route, charge); days, hours, shares and cuts in `trace_balance`, the other numbers
of an effort row in `trace_effort`, the energy line in `trace_flow`. Bench and rota have their own entries
(`trace_bench`, `trace_rota`), because their answers are not among the results. `trace_ids` says which id belongs to
which number.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from types import MappingProxyType

from kitplanner.plan.records import Plan
from kitplanner.planners import trace_balance, trace_effort, trace_flow
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import BalanceResult, Trace, TraceStep
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure, words
from kitplanner.planners.trace_records import (
    device_credit,
    device_use,
    minutes_p50,
    station_made,
    station_output,
    station_time,
    store_usable,
)

OWN_FORMULA = "Energy balance at the outlet: conservation of energy, each stage by its efficiency"

OfPlan = Callable[[Plan, BalanceResult], Trace]
OfRecords = Callable[[Plan, Results, Sequence[str]], Trace]


def trace(plan: Plan, results: Results, formula_id: str, ids: Sequence[str] = ()) -> Trace:
    """Return where a number comes from.

    Parameters
    ----------
    plan : Plan
        The plan the results belong to
    results : Results
        Answers of the pipeline
    formula_id : str
        What is traced, see the module
    ids : sequence of str
        Records it belongs to

    Returns
    -------
    Trace
        Formula, words, source, value and steps

    Raises
    ------
    TraceError
        For an unknown formula or record, or where there is no answer yet
    """
    if formula_id in OF_PLAN:
        return OF_PLAN[formula_id](plan, _answer(results))
    if formula_id in OF_RECORDS:
        return OF_RECORDS[formula_id](plan, results, ids)
    raise TraceError(f'There is no trace for "{formula_id}".')


def _answer(results: Results) -> BalanceResult:
    if results.balance is None:
        raise TraceError("There is no balance: the plan has problems that stop the calculation.")
    return results.balance


def _plan_steps(plan: Plan) -> tuple[TraceStep, ...]:
    return field_steps("plan", plan, ("days", "margin_fraction"))


def _coverage(plan: Plan, answer: BalanceResult) -> Trace:
    return Trace(
        formula="coverage = have / need",
        words="What can be had over what is needed, both at the outlet over all days, margin included.",
        source=OWN_FORMULA,
        value=figure(answer.coverage_fraction, 4),
        steps=(
            computed("have, at O", answer.have_wh, "Wh"),
            computed("need, at O", answer.need_wh, "Wh"),
            *_plan_steps(plan),
        ),
    )


def _need(plan: Plan, answer: BalanceResult) -> Trace:
    names = {device.id: device.name for device in plan.devices}
    uses = (
        computed(f"use of {names[row.device]}, at O with margin", row.use_wh, "Wh", record=row.device)
        for row in answer.devices
    )
    credits_ = (
        computed(f"start charge of {names[row.device]}, at O", row.credit_wh, "Wh", record=row.device)
        for row in answer.devices
        if row.credit_wh
    )
    return Trace(
        formula="need = sum of use a day at O * days * (1 + margin) - sum of start credits",
        words="All use over all days with the margin, less what the devices' own start charge already holds.",
        source=OWN_FORMULA,
        value=f"{figure(answer.need_wh)} Wh",
        steps=(*_plan_steps(plan), *uses, *credits_),
    )


def _have(plan: Plan, answer: BalanceResult) -> Trace:
    stores = {store.id: store.name for store in plan.stores}
    stations = {station.id: station.name for station in plan.stations}
    return Trace(
        formula="have = stores at the start + days * (made at S + other sources) * station to outlet",
        words="What the stores can give from their start charge, and what comes in on all days, at the outlet.",
        source=OWN_FORMULA,
        value=f"{figure(answer.have_wh)} Wh",
        steps=(
            field_step("plan", plan, "days"),
            *(
                computed(f"usable in {stores[row.store]}, at O", row.usable_wh, "Wh", record=row.store)
                for row in answer.stores
            ),
            *(
                computed(f"made at {stations[row.station]}, at S", row.made_wh_per_day, "Wh a day", record=row.station)
                for row in answer.stations
            ),
            *(field_step("other_source", source, "wh_per_day") for source in plan.other_sources),
            computed("station to outlet", answer.station_to_outlet_fraction, "", 4),
        ),
    )


def _short(plan: Plan, answer: BalanceResult) -> Trace:
    return Trace(
        formula="short a day = max(0, need - have) / days",
        words="What is missing at the outlet, spread over the days.",
        source=OWN_FORMULA,
        value=f"{figure(answer.short_wh_per_day)} Wh a day",
        steps=(
            computed("need, at O", answer.need_wh, "Wh"),
            computed("have, at O", answer.have_wh, "Wh"),
            field_step("plan", plan, "days"),
        ),
    )


def _first_empty_day(_plan: Plan, answer: BalanceResult) -> Trace:
    return Trace(
        formula="level at the end of day n = stores + start charges + n * (made - use); empty where it is below 0",
        words="The first day that ends with less than nothing above the floors, without margin.",
        source=OWN_FORMULA,
        value="never" if answer.first_empty_day is None else f"day {answer.first_empty_day}",
        steps=tuple(computed(f"end of day {row.day}, at O", row.end_wh, "Wh") for row in answer.days),
    )


def _limit(plan: Plan, answer: BalanceResult) -> Trace:
    names = {station.id: station.name for station in plan.stations}
    steps: list[TraceStep] = []
    for row in answer.stations:
        steps.append(computed(f"offered at {names[row.station]}", row.offered_min, "min a day", record=row.station))
        steps.append(computed(f"time at {names[row.station]}", row.available_min, "min a day", record=row.station))
        steps.append(computed(f"made at {names[row.station]}, at S", row.made_wh_per_day, "Wh a day"))
    return Trace(
        formula="storage if the level passes full; else, where most is made: station time if offered > available",
        words="Energy that fits nowhere points to storage, a full station to station time, anything else to people.",
        source=OWN_FORMULA,
        value=answer.limit or "none",
        steps=(*steps, words("level at the end of the last day, at O", f"{figure(answer.days[-1].end_wh)} Wh")),
    )


def _needed_min(plan: Plan, answer: BalanceResult) -> Trace:
    stored = sum(row.usable_wh for row in answer.stores)
    return Trace(
        formula="minutes = sum of share * (need - stores - other) / days * 60 / (reference W * to outlet)",
        words="How long a reference adult would turn a day, at the present mix of stations, to just meet the need.",
        source=OWN_FORMULA,
        value="-" if answer.needed_min_per_day is None else f"{figure(answer.needed_min_per_day, 0)} min a day",
        steps=(
            computed("need, at O", answer.need_wh, "Wh"),
            computed("stores at the start, at O", stored, "Wh"),
            computed("station to outlet", answer.station_to_outlet_fraction, "", 4),
            field_step("plan", plan, "days"),
        ),
    )


OF_PLAN: Mapping[str, OfPlan] = MappingProxyType(
    {
        "coverage": _coverage,
        "need": _need,
        "have": _have,
        "short": _short,
        "first_empty_day": _first_empty_day,
        "limit": _limit,
        "needed_min": _needed_min,
    }
)
OF_RECORDS: Mapping[str, OfRecords] = MappingProxyType(
    {
        "device_use": device_use,
        "device_credit": device_credit,
        "store_usable": store_usable,
        "station_time": station_time,
        "station_made": station_made,
        "station_output": station_output,
        "minutes_p50": minutes_p50,
        "station_to_outlet": trace_balance.station_to_outlet,
        "day_use": trace_balance.day_use,
        "day_made": trace_balance.day_made,
        "day_end": trace_balance.day_end,
        "hour_use": trace_balance.hour_use,
        "hour_made": trace_balance.hour_made,
        "device_covered": trace_balance.device_covered,
        "station_offered": trace_balance.station_offered,
        "station_used": trace_balance.station_used,
        "station_human": trace_balance.station_human,
        "person_cap": trace_balance.person_cap,
        "person_used": trace_balance.person_used,
        "cut_need": trace_balance.cut_need,
        "cut_have": trace_balance.cut_have,
        "cut_covered": trace_balance.cut_covered,
        "minutes_p10": trace_effort.minutes_p10,
        "minutes_p90": trace_effort.minutes_p90,
        "row_output": trace_effort.row_output,
        "row_power": trace_effort.row_power,
        "row_chain": trace_effort.row_chain,
        "curve_minutes": trace_effort.curve_minutes,
        "curve_soc": trace_effort.curve_soc,
        "curve_soc_range": trace_effort.curve_soc_range,
        "curve_power": trace_effort.curve_power,
        "flow_people": trace_flow.flow_people,
        "flow_station": trace_flow.flow_station,
        "flow_source": trace_flow.flow_source,
        "flow_b": trace_flow.flow_b,
        "flow_o": trace_flow.flow_o,
        "flow_start": trace_flow.flow_start,
        "flow_device": trace_flow.flow_device,
        "flow_loss": trace_flow.flow_loss,
        "flow_missing": trace_flow.flow_missing,
        "flow_margin": trace_flow.flow_margin,
        "flow_spare": trace_flow.flow_spare,
    }
)
