"""Traces of one device, store, station, person or effort row."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType
from typing import TypeVar

from kitplanner.plan.records import Device, Person, Plan, Record, Station
from kitplanner.planners.balance_output import station_outputs
from kitplanner.planners.demand import device_need, outlet_to_device_fraction, use_wh_per_day
from kitplanner.planners.people import person_limits
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import EffortRow, Trace, TraceStep
from kitplanner.planners.supply import station_minutes, store_wh
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure, words

CONSERVATION = "Conservation of energy, each stage by its efficiency"
RecordT = TypeVar("RecordT", bound=Record)

_USE_KEYS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "power_hours": ("use_by", "use_w", "use_h_per_day", "use_windows"),
        "wh_per_day": ("use_by", "use_wh_per_day"),
        "percent": ("use_by", "battery_wh", "use_battery_fraction_per_day"),
        "times": ("use_by", "use_w", "use_times_per_day", "use_min_each"),
    }
)
_WATTS_KEYS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "level": ("age", "level", "mass_kg"),
        "share": ("share_legs_fraction", "share_arms_fraction"),
        "own": ("own_legs_w", "own_arms_w"),
        "self_test": ("age", "level", "test_legs_w", "test_arms_w"),
    }
)
_STATION_KEYS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "measured": ("output_w", "eta_fraction", "drag_fraction"),
        "label": ("label_w", "eta_fraction"),
        "parts": ("comfort_low_rpm", "comfort_high_rpm", "torque_max_nm"),
    }
)


def _found(records: Sequence[RecordT], ids: Sequence[str], place: int, what: str) -> RecordT:
    """Return the record an id names."""
    key = ids[place] if place < len(ids) else ""
    for record in records:
        if getattr(record, "id", None) == key:
            return record
    raise TraceError(f'There is no {what} "{key}" in the plan.')


def device_use(plan: Plan, _results: Results, ids: Sequence[str]) -> Trace:
    """Return where a device line's use a day comes from."""
    device = _found(plan.devices, ids, 0, "device")
    need = device_need(plan, device)
    battery = ("eta",) if device.battery_wh else ()
    return Trace(
        formula="use at O = count * use of one at D / efficiency (1 without own battery)",
        words="What the devices use themselves, and what an outlet must give for it through their charging.",
        source=CONSERVATION,
        value=f"{figure(need.day_o_wh)} Wh a day at O",
        steps=(
            *field_steps("device", device, ("count", *_USE_KEYS[device.use_by], *battery)),
            computed("use of one, at D", use_wh_per_day(device), "Wh a day", record=device.id),
            computed("outlet to device", outlet_to_device_fraction(device), "", 4, record=device.id),
        ),
    )


def device_credit(plan: Plan, _results: Results, ids: Sequence[str]) -> Trace:
    """Return where a device line's start credit comes from."""
    device = _found(plan.devices, ids, 0, "device")
    need = device_need(plan, device)
    keys = ("count", "battery_wh", "start_fraction", "floor_fraction", "eta")
    return Trace(
        formula="credit at O = min(count * capacity * (start - floor), use at D with margin) / efficiency",
        words="Charge that is in the devices at the start need not come from an outlet; never more than their own use.",
        source=CONSERVATION,
        value=f"{figure(need.credit_wh)} Wh at O",
        steps=(
            *field_steps("device", device, keys),
            computed("use over all days with margin, at O", need.use_wh, "Wh", record=device.id),
        ),
    )


def store_usable(plan: Plan, _results: Results, ids: Sequence[str]) -> Trace:
    """Return where a store line's usable energy comes from."""
    store = _found(plan.stores, ids, 0, "store")
    keys = ("count", "nominal_wh", "health_fraction", "start_fraction", "floor_fraction", "eta_out")
    return Trace(
        formula="usable at O = count * nominal * health * (start - floor) * efficiency out",
        words="What a store can give at its outlet before it reaches its floor.",
        source=CONSERVATION,
        value=f"{figure(store_wh(store, store.start_fraction))} Wh at O",
        steps=field_steps("store", store, keys),
    )


def station_time(plan: Plan, _results: Results, ids: Sequence[str]) -> Trace:
    """Return where a station line's minutes a day come from."""
    station = _found(plan.stations, ids, 0, "station")
    keys: tuple[str, ...] = ("count", "in_service", "guarded")
    keys += ("daily_min",) if station.daily_min is not None else ("hours", "slot_min", "changeover_min")
    return Trace(
        formula="time = count * minutes a day, or count * floor((window + changeover) / (slot + changeover)) * slot",
        words="Whole slots that fit into the station's windows, each followed by a changeover except the last.",
        source="Counting of whole slots",
        value=f"{figure(station_minutes(plan, station))} min a day",
        steps=field_steps("station", station, keys),
    )


def station_made(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where a station line's energy a day comes from."""
    station = _found(plan.stations, ids, 0, "station")
    if results.balance is None:
        raise TraceError("There is no balance: the plan has problems that stop the calculation.")
    row = next(row for row in results.balance.stations if row.station == station.id)
    names = {person.id: person.name for person in plan.people}
    steps: list[TraceStep] = [
        computed("time of the station", row.available_min, "min a day", record=station.id),
        computed("minutes offered", row.offered_min, "min a day", record=station.id),
    ]
    for turn in results.balance.people:
        if turn.station == station.id:
            steps.append(computed(f"turned by {names[turn.person]}", turn.used_min, "min a day", record=turn.person))
            steps.append(computed(f"output of {names[turn.person]}, at S", turn.output_w, "W", record=turn.person))
    return Trace(
        formula="made at S = sum over people of minutes / 60 * watts; cut alike where too much is offered",
        words="Every offered minute is worked, as far as the station has time for it.",
        source=CONSERVATION,
        value=f"{figure(row.made_wh_per_day)} Wh a day at S",
        steps=tuple(steps),
    )


def station_output(plan: Plan, _results: Results, ids: Sequence[str]) -> Trace:
    """Return where a person's output at a station comes from."""
    person = _found(plan.people, ids, 0, "person")
    station = _found(plan.stations, ids, 1, "station")
    output_w, human_w = station_outputs(plan, station, [person])
    limits = person_limits(plan, person)
    return Trace(
        formula=_output_formula(person, station),
        words=_output_words(station),
        source=_output_source(person, station),
        value=f"{figure(float(output_w[0]))} W at S",
        steps=(
            *field_steps("person", person, ("watts_by", *_WATTS_KEYS[person.watts_by])),
            computed("longest bout", limits.bout_min, "min", record=person.id),
            computed("turning time a day", limits.cap_min, "min", record=person.id),
            *field_steps("station", station, ("kind", "described_by", *_STATION_KEYS[station.described_by])),
            computed("power at the crank or pedal, at M", float(human_w[0]), "W", record=person.id),
        ),
    )


def _output_formula(person: Person, station: Station) -> str:
    if station.described_by == "parts":
        return "greatest plug watts in the comfort band that the person's watts at that pace and the torque allow"
    if station.described_by == "label":
        return "output = min(label, efficiency * person's watts)"
    if person.watts_by == "share":
        return "output = rated output * share"
    return "output = rated * (P - P0) / (P_ref - P0), kept between 0 and rated; P0 the station's own drag"


def _output_words(station: Station) -> str:
    if station.described_by == "parts":
        return "The chain of machine, gear and stages is solved with a store's charger on its socket."
    return "A fixed drag takes the same watts from everybody, so a weaker person's share is less than in proportion."


def _output_source(person: Person, station: Station) -> str:
    if station.described_by == "parts":
        return "Laws of the machine and its stages, each with its own source"
    if person.watts_by == "level":
        return "ACSM work equations and FRIEND oxygen uptake (Myers et al. 2017) for the person's watts"
    return "The person's own statement"


def minutes_p50(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the minutes of one effort row come from."""
    device = _found(plan.devices, ids, 0, "device")
    station = _found(plan.stations, ids, 1, "station")
    person = _found(plan.people, ids, 2, "person")
    row = effort_row(results, ids)
    return Trace(
        formula="minutes = integral over state of charge of capacity / power into the battery",
        words="At every state of charge the battery takes the least of what the station brings and what it accepts.",
        source="Charge in two parts, constant and tapering current; acceptance of lithium-ion cells",
        value="-" if row.minutes_p50 is None else f"{figure(row.minutes_p50, 1)} min",
        steps=(
            *field_steps("device", device, _charge_keys(device, row)),
            *_store_steps(plan, row),
            field_step("station", station, "described_by"),
            field_step("person", person, "watts_by"),
            computed("output of the station, at S", row.station_output_w, "W", record=station.id),
            computed("power at the crank or pedal, at M", row.person_power_w, "W", record=person.id),
            computed(f"share of the energy at {row.chain_from} that reaches the battery", row.chain_fraction, "", 4),
            words("what keeps it from being faster", row.limit.replace("_", " ")),
        ),
    )


def _charge_keys(device: Device, row: EffortRow) -> tuple[str, ...]:
    keys: tuple[str, ...] = ("battery_wh", "eta")
    if row.charge == "plan":
        keys += ("start_fraction", "target_fraction")
    if row.charge == "day":
        keys += _USE_KEYS[device.use_by]
    return (*keys, "charge_w") if device.charge_w else (*keys, "charge_rate_per_h", "taper_end_per_h", "taper_tau_h")


def _store_steps(plan: Plan, row: EffortRow) -> tuple[TraceStep, ...]:
    if row.route != "store":
        return ()
    return tuple(step for store in plan.stores for step in field_steps("store", store, ("eta_in", "eta_out")))


def effort_row(results: Results, ids: Sequence[str]) -> EffortRow:
    """Return the effort row with these ids: device, station, person, route, charge."""
    if results.effort is None:
        raise TraceError("The minutes are not computed yet.")
    wanted = tuple(ids)
    for row in results.effort.rows:
        if (row.device, row.station, row.person, row.route, row.charge) == wanted:
            return row
    raise TraceError("There is no such row in the effort table.")
