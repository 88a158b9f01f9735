"""Traces of the balance's rows: days, hours, devices, stations, people and cuts."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from kitplanner.plan.records import Plan, Record
from kitplanner.planners.people import person_limits
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import BalanceResult, CutClass, Trace
from kitplanner.planners.supply import fed_stores, station_to_outlet_fraction
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure, words

CONSERVATION = "Conservation of energy, each stage by its efficiency"
COUNTING = "Counting of minutes; what is too much for a station is cut alike"
_AGE_RULES = "Age limits: ILO C138 and EU 94/33/EC as a yardstick for minors; adults by this program's own proposal"


def answer_of(results: Results) -> BalanceResult:
    """Return the balance, or say why there is none."""
    if results.balance is None:
        raise TraceError("There is no balance: the plan has problems that stop the calculation.")
    return results.balance


def row_of(rows: Sequence[Any], key: str, ids: Sequence[str], what: str) -> Any:
    """Return the row whose key, as text, is the first id."""
    wanted = ids[0] if ids else ""
    found = next((row for row in rows if str(getattr(row, key)) == wanted), None)
    if found is None:
        raise TraceError(f'There is no {what} "{wanted}" in this answer.')
    return found


def record_of(records: Sequence[Record], key: str, what: str) -> Any:
    """Return a record by its id."""
    found = next((record for record in records if getattr(record, "id", None) == key), None)
    if found is None:
        raise TraceError(f'There is no {what} "{key}" in the plan.')
    return found


def station_to_outlet(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the factor from station to outlet comes from."""
    steps = (
        step
        for store in plan.stores
        for step in field_steps(
            "store", store, ("count", "nominal_wh", "health_fraction", "floor_fraction", "eta_in", "eta_out")
        )
    )
    return Trace(
        formula="factor = sum(w * in * out) / sum(w), w = count * nominal * health * (1 - floor); 1 without stores",
        words="What is made goes into all stores, weighted by what each can hold, and loses on the way in and out.",
        source=CONSERVATION,
        value=figure(answer_of(results).station_to_outlet_fraction, 4),
        steps=tuple(steps) or (words("stores", "none"),),
    )


def day_use(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the use of a day comes from."""
    day = row_of(answer_of(results).days, "day", ids, "day")
    with_margin = plan.days * (1.0 + plan.margin_fraction)
    return Trace(
        formula="use of a day at O = sum over device lines of count * use at D / efficiency",
        words="The same every day, without margin.",
        source=CONSERVATION,
        value=f"{figure(day.use_wh)} Wh",
        steps=tuple(
            computed(f"use of {_name(plan.devices, row.device)} a day, at O", row.use_wh / with_margin, "Wh")
            for row in answer_of(results).devices
        ),
    )


def day_made(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the made energy of a day comes from."""
    answer = answer_of(results)
    day = row_of(answer.days, "day", ids, "day")
    steps = [
        step
        for row in answer.stations
        for step in (
            computed(f"made at {_name(plan.stations, row.station)} on an average day, at S", row.made_wh_per_day, "Wh"),
            computed("its stores: station to outlet", _to_outlet(plan, row.station), "", 4),
        )
    ]
    return Trace(
        formula="made on a day at O = sum over stations of made at S * to outlet + other sources * to outlet",
        words="Every offered minute is worked. With the ramp-up in the heat the first days are smaller.",
        source=CONSERVATION,
        value=f"{figure(day.made_wh)} Wh",
        steps=(
            *steps,
            *(field_step("other_source", source, "wh_per_day") for source in plan.other_sources),
            field_step("conditions", plan.conditions, "ramp_up"),
        ),
    )


def _to_outlet(plan: Plan, station_id: str) -> float:
    return float(station_to_outlet_fraction(fed_stores(plan, record_of(plan.stations, station_id, "station"))))


def day_end(_plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the level at the end of a day comes from."""
    answer = answer_of(results)
    day = row_of(answer.days, "day", ids, "day")
    before = answer.days[day.day - 2].end_wh if day.day > 1 else day.end_wh - day.made_wh + day.use_wh
    label = f"level at the end of day {day.day - 1}, at O" if day.day > 1 else "stores and start charges, at O"
    return Trace(
        formula="level at the end = level before + made - use",
        words="Stores and the devices' start charges together, above their floors, without margin.",
        source=CONSERVATION,
        value=f"{figure(day.end_wh)} Wh",
        steps=(
            computed(label, before, "Wh"),
            computed("made on this day, at O", day.made_wh, "Wh"),
            computed("used on this day, at O", day.use_wh, "Wh"),
        ),
    )


def hour_use(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the use in an hour comes from."""
    row = row_of(answer_of(results).hours, "hour", ids, "hour")
    return Trace(
        formula="use in an hour = sum over devices of use a day * share of the use windows in this hour",
        words="Use is spread evenly over a device's times of use, over the whole day without any.",
        source=CONSERVATION,
        value=f"{figure(row.use_wh)} Wh",
        steps=tuple(field_step("device", device, "use_windows") for device in plan.devices),
    )


def hour_made(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the made energy in an hour comes from."""
    row = row_of(answer_of(results).hours, "hour", ids, "hour")
    return Trace(
        formula="made in an hour = sum over stations of made a day at O * share of the open hours in this hour",
        words="What is made in a day is spread evenly over a station's hours; the rota places it.",
        source=CONSERVATION,
        value=f"{figure(row.made_wh)} Wh",
        steps=(
            *(field_step("station", station, "hours") for station in plan.stations),
            *(field_step("other_source", source, "windows") for source in plan.other_sources),
        ),
    )


def device_covered(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the share a device gets under a shared cut comes from."""
    answer = answer_of(results)
    row = row_of(answer.devices, "device", ids, "device")
    return Trace(
        formula="covered = max(f, own credit / need), at most 1; f with sum of max(f * need, credit) = have + credits",
        words="One share for all device lines; a line whose own start charge is more keeps it.",
        source=CONSERVATION,
        value=figure(row.covered_fraction, 4),
        steps=(
            computed("its use with margin, at O", row.use_wh, "Wh", record=row.device),
            computed("its own start credit, at O", row.credit_wh, "Wh", record=row.device),
            computed("have, at O", answer.have_wh, "Wh"),
            *field_steps("plan", plan, ("days", "margin_fraction")),
        ),
    )


def station_offered(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the minutes offered to a station come from."""
    answer = answer_of(results)
    row = row_of(answer.stations, "station", ids, "station")
    return Trace(
        formula="offered = sum over people of their cap at the station where they give most, then what was cut there",
        words="A person's minutes are offered once; what a station has no time for passes to the next choice.",
        source=COUNTING,
        value=f"{figure(row.offered_min)} min a day",
        steps=tuple(
            computed(f"cap of {_name(plan.people, turn.person)}", turn.cap_min, "min a day", record=turn.person)
            for turn in answer.people
            if turn.station == row.station
        ),
    )


def station_used(_plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the minutes turned at a station come from."""
    row = row_of(answer_of(results).stations, "station", ids, "station")
    return Trace(
        formula="turned = min(offered, time of the station)",
        words="Where more is offered than the station has time for, everybody is cut alike.",
        source=COUNTING,
        value=f"{figure(row.used_min)} min a day",
        steps=(
            computed("minutes offered", row.offered_min, "min a day", record=row.station),
            computed("time of the station", row.available_min, "min a day", record=row.station),
        ),
    )


def station_human(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the mechanical energy at a station comes from."""
    answer = answer_of(results)
    row = row_of(answer.stations, "station", ids, "station")
    station = record_of(plan.stations, row.station, "station")
    by_parts = station.described_by == "parts"
    return Trace(
        formula="energy at M = sum over people of minutes / 60 * watts at the crank or pedal",
        words="By parts from the solved chain; else the output divided by the station's efficiency.",
        source=CONSERVATION,
        value=f"{figure(row.human_wh_per_day)} Wh a day at M",
        steps=(
            computed("made, at S", row.made_wh_per_day, "Wh a day", record=row.station),
            computed("minutes turned", row.used_min, "min a day", record=row.station),
            *field_steps("station", station, ("described_by",) if by_parts else ("described_by", "eta_fraction")),
        ),
    )


def person_cap(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where a person's minutes a day come from."""
    row = row_of(answer_of(results).people, "person", ids, "person")
    person = record_of(plan.people, row.person, "person")
    return Trace(
        formula="cap = min(age's limit, own minutes); light effort halves the age's; less in the heat's first days",
        words="Own minutes only ever lower what the age allows; limits carry no reasons.",
        source=_AGE_RULES,
        value=f"{figure(row.cap_min)} min a day",
        steps=(
            *field_steps("person", person, ("age", "level", "cap_min")),
            computed("longest turn", person_limits(plan, person).bout_min, "min", record=person.id),
            *field_steps("conditions", plan.conditions, ("heat_limits", "ramp_up")),
        ),
    )


def person_used(_plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the minutes a person turns at a station come from (ids: person, station)."""
    answer = answer_of(results)
    rows = [row for row in answer.people if len(ids) < 2 or row.station == ids[1]]
    row = row_of(rows, "person", ids, "person")
    station = row_of(answer.stations, "station", (row.station,), "station")
    return Trace(
        formula="turned = offered * min(1, time of the station / all that is offered there)",
        words="Everybody at a station is cut by the same share; nobody is preferred for giving more.",
        source=COUNTING,
        value=f"{figure(row.used_min)} min a day",
        steps=(
            computed("cap of the person", row.cap_min, "min a day", record=row.person),
            computed("offered at the station by all", station.offered_min, "min a day", record=row.station),
            computed("time of the station", station.available_min, "min a day", record=row.station),
        ),
    )


def cut_need(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where a class's need comes from (ids: "strict" or "shared", priority)."""
    row = _cut(results, ids)
    rows = {one.device: one.use_wh for one in answer_of(results).devices}
    return Trace(
        formula="need of a class = sum of use with margin of its device lines",
        words="All use of the devices with this priority over all days.",
        source=CONSERVATION,
        value=f"{figure(row.need_wh)} Wh",
        steps=tuple(
            computed(f"use of {device.name}, at O with margin", rows[device.id], "Wh", record=device.id)
            for device in plan.devices
            if device.priority == row.priority
        ),
    )


_CUT_FORMULA = {
    "strict": "have = min(need, all energy left - start charge that lower classes hold), class after class",
    "shared": "have = max(f * need, own credit), one share f for all classes",
}


def cut_have(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where what a class gets comes from (ids: "strict" or "shared", priority)."""
    row, answer = _cut(results, ids), answer_of(results)
    credits_ = {one.device: one.credit_wh for one in answer.devices}
    own = sum(credits_[device.id] for device in plan.devices if device.priority == row.priority)
    return Trace(
        formula=_CUT_FORMULA[ids[0]],
        words="Start charge inside a device serves nobody else.",
        source=CONSERVATION,
        value=f"{figure(row.have_wh)} Wh",
        steps=(
            computed("need of the class, at O", row.need_wh, "Wh"),
            computed("own start credit of the class, at O", own, "Wh"),
            computed("have, at O", answer.have_wh, "Wh"),
        ),
    )


def cut_covered(_plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where a class's covered share comes from (ids: "strict" or "shared", priority)."""
    row = _cut(results, ids)
    return Trace(
        formula="covered = have / need, at most 1",
        words="What the class gets of what it needs.",
        source=CONSERVATION,
        value=figure(row.covered_fraction, 4),
        steps=(
            computed("have of the class, at O", row.have_wh, "Wh"),
            computed("need of the class, at O", row.need_wh, "Wh"),
        ),
    )


def _cut(results: Results, ids: Sequence[str]) -> CutClass:
    if len(ids) != 2 or ids[0] not in _CUT_FORMULA:
        raise TraceError('Name the cut ("strict" or "shared") and the priority.')
    found: CutClass = row_of(getattr(answer_of(results).cuts, ids[0]), "priority", ids[1:], "priority")
    return found


def _name(records: Sequence[Record], key: str) -> str:
    return str(getattr(record_of(records, key, "record"), "name", key))
