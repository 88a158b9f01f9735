"""Traces of a rota: bouts, charging, what stays unmet, aims with their bounds, levels, and how the search went."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from types import MappingProxyType

from kitplanner.domain.units import MINUTES_PER_HOUR, clock
from kitplanner.plan.records import Plan
from kitplanner.planners.balance_output import station_outputs
from kitplanner.planners.results import Trace, TraceStep
from kitplanner.planners.rota.result import RotaAnswer, RotaBout, RotaCharge, RotaObjective, UnmetUse
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure, words

_RULES = "The rota's rules: caps, rests, hours, blocks, stations, watchers; checked again by an independent judge"
_TABLE = "Simulation of stores and devices on the rota's grid, each device by its own acceptance"
_ORDER = "Order of aims: each is kept while the next is improved; bounds from a linear model without whole numbers"

OfRota = Callable[[Plan, RotaAnswer, Sequence[str]], Trace]


def trace_rota(plan: Plan, answer: RotaAnswer, formula_id: str, ids: Sequence[str] = ()) -> Trace:
    """Return where a number of a rota comes from.

    Parameters
    ----------
    plan : Plan
        The plan the rota belongs to
    answer : RotaAnswer
        The rota on the screen
    formula_id : str
        One of `ROTA_FORMULAS`
    ids : sequence of str
        Place of the row (from 0) for bouts, charging and unmet use; the aim's name; the store's or device's id

    Returns
    -------
    Trace
        Formula, words, source, value and steps

    Raises
    ------
    TraceError
        For an unknown formula, row or aim
    """
    if formula_id not in ROTA_FORMULAS:
        raise TraceError(f'There is no trace for "{formula_id}".')
    return ROTA_FORMULAS[formula_id](plan, answer, ids)


def _place(ids: Sequence[str], count: int, what: str) -> int:
    place = int(ids[0]) if ids and ids[0].isdigit() else -1
    if not 0 <= place < count:
        raise TraceError(f"Name the place of the {what}, from 0.")
    return place


def _bout(answer: RotaAnswer, ids: Sequence[str]) -> RotaBout:
    return answer.solution.bouts[_place(ids, len(answer.solution.bouts), "turn")]


def bout_energy(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the energy of a turn comes from."""
    bout = _bout(answer, ids)
    person = next(one for one in plan.people if one.id == bout.person)
    station = next(one for one in plan.stations if one.id == bout.station)
    watts = float(station_outputs(plan, station, [person])[0][0])
    return Trace(
        formula="energy at S = watts * (length - changeover lost after another person) / 60",
        words="What leaves the station's socket in this turn.",
        source=_RULES,
        value=f"{figure(bout.output_wh)} Wh at S",
        steps=(
            computed("output of the person there, at S", watts, "W", record=person.id),
            computed("length of the turn", float(bout.end_min - bout.start_min), "min"),
            computed("time of turning behind it", bout.output_wh / watts * MINUTES_PER_HOUR if watts else None, "min"),
            field_step("station", station, "changeover_min"),
        ),
    )


def bout_time(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return why a turn stands at its time."""
    bout = _bout(answer, ids)
    person = next(one for one in plan.people if one.id == bout.person)
    station = next(one for one in plan.stations if one.id == bout.station)
    return Trace(
        formula="a time on the grid inside the person's and the station's hours, outside blocked times",
        words="The search may choose any time that breaks no rule; a locked turn stays where it is.",
        source=_RULES,
        value=f"day {bout.day}, {clock(bout.start_min)} to {clock(bout.end_min)}",
        steps=(
            *field_steps("person", person, ("hours", "bout_min", "rest_min", "cap_min")),
            *field_steps("station", station, ("hours", "count")),
            words("locked", "yes" if bout.locked else "no"),
        ),
    )


def _charge(answer: RotaAnswer, ids: Sequence[str]) -> RotaCharge:
    return answer.charging[_place(ids, len(answer.charging), "charging row")]


def charge_energy(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the energy of a charging row comes from."""
    row = _charge(answer, ids)
    device = next(one for one in plan.devices if one.id == row.device)
    return Trace(
        formula="energy at O = integral over its time of min(outlet, acceptance / efficiency) * units",
        words="What these units take from the outlet, each at its own state of charge.",
        source=_TABLE,
        value=f"{figure(row.energy_wh)} Wh at O",
        steps=(
            computed("units on charge", float(row.count), "", record=device.id),
            computed("time on charge", float(row.end_min - row.start_min), "min"),
            *field_steps("device", device, ("battery_wh", "eta", "charge_rate_per_h", "charge_w")),
        ),
    )


def charge_tickets(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the tickets of a charging row come from."""
    row = _charge(answer, ids)
    device = next(one for one in plan.devices if one.id == row.device)
    return Trace(
        formula="tickets run from 1 to the number of devices, in turn",
        words="Alike devices share one state of charge; tickets only say whose turn it is.",
        source="Counting",
        value=f"{row.first_ticket} to {row.first_ticket + row.count - 1}",
        steps=(field_step("device", device, "count"), computed("units on charge", float(row.count), "")),
    )


def charge_time(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return why a charging row stands at its time."""
    row = _charge(answer, ids)
    device = next(one for one in plan.devices if one.id == row.device)
    points = (field_steps("charging_point", point, ("hours", "outlets")) for point in plan.charging_points)
    return Trace(
        formula="a time at which the device may charge and an outlet is free, before its use needs it",
        words="Inside charging times and attended hours, outside quiet hours; higher priority first.",
        source=_TABLE,
        value=f"day {row.day}, {clock(row.start_min)} to {clock(row.end_min)}",
        steps=(
            *field_steps("device", device, ("charge_windows", "use_windows", "priority")),
            *(step for steps in points for step in steps),
        ),
    )


def unmet_row(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where one amount of unmet use comes from."""
    row: UnmetUse = answer.unmet[_place(ids, len(answer.unmet), "row of unmet use")]
    device = next(one for one in plan.devices if one.id == row.device)
    return Trace(
        formula="unmet at O = use that neither the device's battery nor an outlet could give at its time",
        words=f"From day {row.day}, {clock(row.start_min)}: {row.why}.".replace("..", "."),
        source=_TABLE,
        value=f"{figure(row.wh)} Wh at O",
        steps=field_steps("device", device, ("priority", "use_windows", "start_fraction", "floor_fraction", "eta")),
    )


def unmet_total(plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the unmet use in all comes from."""
    names = {device.id: device.name for device in plan.devices}
    return Trace(
        formula="unmet = sum over devices and times of use that could not be given",
        words="Over all days, at the outlet, without margin.",
        source=_TABLE,
        value=f"{figure(answer.unmet_wh)} Wh at O",
        steps=tuple(
            computed(f"{names.get(row.device, row.device)}, day {row.day}", row.wh, "Wh", record=row.device)
            for row in answer.unmet
        )
        or (words("unmet use", "none"),),
    )


def unmet_margin(plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the missing margin comes from."""
    return Trace(
        formula="missing margin = unmet with the margin on every use - unmet without",
        words="The same simulation once more with the margin on top of all use.",
        source=_TABLE,
        value=f"{figure(answer.unmet_margin_wh)} Wh at O",
        steps=(
            computed("unmet without margin, at O", answer.unmet_wh, "Wh"),
            field_step("plan", plan, "margin_fraction"),
        ),
    )


def wasted(_plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the energy that found no room comes from."""
    return Trace(
        formula="wasted at S = energy made while every store was full and no device took it",
        words="Turning later in the day, or a larger store, would keep it.",
        source=_TABLE,
        value=f"{figure(answer.wasted_wh)} Wh at S",
        steps=(computed("made in the whole rota, at S", answer.solution.made_wh, "Wh"),),
    )


def made(_plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the made energy of a rota comes from."""
    bouts = answer.solution.bouts
    minutes = float(sum(bout.end_min - bout.start_min for bout in bouts))
    return Trace(
        formula="made at S = sum over turns of their energy",
        words="What leaves all stations over all days.",
        source=_RULES,
        value=f"{figure(answer.solution.made_wh)} Wh at S",
        steps=(computed("turns", float(len(bouts)), ""), computed("minutes of all turns", minutes, "min")),
    )


def made_bound(_plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the least energy that any rota must make comes from."""
    return Trace(
        formula="bound = least energy that a rota with these aims can make, by the linear model",
        words="No rota that meets as much can turn less; a rota that was only read has no bound.",
        source=_ORDER,
        value=f"{figure(answer.solution.made_bound_wh)} Wh",
        steps=(computed("made, at S", answer.solution.made_wh, "Wh"),),
    )


def _aim(answer: RotaAnswer, ids: Sequence[str]) -> RotaObjective:
    found = next((row for row in answer.solution.objectives if ids and row.name == ids[0]), None)
    if found is None:
        raise TraceError("Name one of the rota's aims.")
    return found


def aim_value(_plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the value of an aim comes from (ids: the aim's name)."""
    row = _aim(answer, ids)
    return Trace(
        formula=f"{row.name.replace('_', ' ')} = counted over the turns of this rota",
        words=row.words if row.words.endswith(".") else f"{row.words}.",
        source=_ORDER,
        value=f"{figure(row.value, 4)} {row.unit}".strip(),
        steps=_aim_steps(row),
    )


def aim_bound(_plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the bound of an aim comes from (ids: the aim's name)."""
    row = _aim(answer, ids)
    left_out = "; it leaves out watchers and changeover" if row.relaxed else ""
    return Trace(
        formula="bound = the best value any rota could reach with the aims before it kept",
        words=f"From the linear model, which allows parts of turns{left_out}.",
        source=_ORDER,
        value=f"{figure(row.bound, 4)} {row.unit}".strip(),
        steps=_aim_steps(row),
    )


def aim_gap(_plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the gap of an aim comes from (ids: the aim's name)."""
    row = _aim(answer, ids)
    return Trace(
        formula="gap = value - bound",
        words="How much better a rota could be at most; 0 means proven best.",
        source=_ORDER,
        value=f"{figure(row.gap, 4)} {row.unit}".strip(),
        steps=_aim_steps(row),
    )


def _aim_steps(row: RotaObjective) -> tuple[TraceStep, ...]:
    return (
        computed("value", row.value, row.unit, 4),
        computed("bound", row.bound, row.unit, 4),
        words("proven", "yes" if row.proved else "no"),
    )


def grid(plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the grid of the rota comes from."""
    return Trace(
        formula="grid = greatest common divisor of the turns' lengths, at least 5 min; or as given",
        words="Turns start and end on whole steps.",
        source="Counting",
        value=f"{answer.solution.slot_min} min",
        steps=(field_step("plan", plan, "grid_min"), *(field_step("person", one, "bout_min") for one in plan.people)),
    )


def search(_plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return what the figures about the search mean."""
    solution = answer.solution
    return Trace(
        formula="steps and seconds counted while searching",
        words="More work may find a better rota; the bounds say how much better it could be at most.",
        source="Counting",
        value=f"{solution.steps} steps, {figure(solution.seconds, 1)} s",
        steps=(words("ended before its end", "yes" if solution.cut_off else "no"),),
    )


def store_level(plan: Plan, answer: RotaAnswer, ids: Sequence[str]) -> Trace:
    """Return where the level of a store or device over time comes from (ids: the record)."""
    key = ids[0] if ids else ""
    known = {**answer.levels.stores_wh, **answer.levels.devices_wh}
    if key not in known:
        raise TraceError(f'There is no level of "{key}" in this rota.')
    level = known[key]
    store = next((one for one in plan.stores if one.id == key), None)
    device = next((one for one in plan.devices if one.id == key), None)
    fields: tuple[TraceStep, ...] = ()
    if store is not None:
        fields = field_steps("store", store, ("nominal_wh", "health_fraction", "start_fraction", "floor_fraction"))
    elif device is not None:
        fields = field_steps("device", device, ("battery_wh", "start_fraction", "floor_fraction"))
    return Trace(
        formula="level at the next step = level + what comes in - what goes out, above the floor",
        words="Energy above the floor at the start of each step of the grid.",
        source=_TABLE,
        value="along the curve",
        steps=(
            computed("at the start", float(level[0]), "Wh", record=key),
            computed("at the end", float(level[-1]), "Wh", record=key),
            *fields,
        ),
    )


def pooled_level(_plan: Plan, answer: RotaAnswer, _ids: Sequence[str]) -> Trace:
    """Return where the level of all stores together, and what is still due from them, come from."""
    pooled, due = answer.levels.pooled_wh, answer.levels.due_wh
    return Trace(
        formula="pooled = sum of the stores' levels at O; due = use still to be charged from them",
        words="Where the pooled level falls below what is due, something will stay unmet.",
        source=_TABLE,
        value="along the curve",
        steps=(
            computed("pooled at the start, at O", float(pooled[0]) if len(pooled) else None, "Wh"),
            computed("due at the start, at O", float(due[0]) if len(due) else None, "Wh"),
        ),
    )


ROTA_FORMULAS: Mapping[str, OfRota] = MappingProxyType(
    {
        "rota_bout_energy": bout_energy,
        "rota_bout_time": bout_time,
        "rota_charge_energy": charge_energy,
        "rota_charge_time": charge_time,
        "rota_charge_tickets": charge_tickets,
        "rota_unmet_row": unmet_row,
        "rota_unmet": unmet_total,
        "rota_unmet_margin": unmet_margin,
        "rota_wasted": wasted,
        "rota_made": made,
        "rota_made_bound": made_bound,
        "rota_aim_value": aim_value,
        "rota_aim_bound": aim_bound,
        "rota_aim_gap": aim_gap,
        "rota_grid": grid,
        "rota_search": search,
        "rota_level": store_level,
        "rota_pooled": pooled_level,
    }
)
