"""Checks of what names a day and a part of it: absences, outages, and an adopted rota's bouts and charging.

Only what no calculation could use is an error here; whether a rota is legal is for the rota's own judge.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Any, Protocol

from kitplanner.plan.checks_fields import check_clock
from kitplanner.plan.places import short
from kitplanner.plan.problem import Place, Problem, error, note, warning
from kitplanner.plan.records import Bout, ChargeSpell, Plan, Spell

DAY_MIN = 1440


class _PartOfDay(Protocol):
    """What absences, outages, bouts and charging have in common."""

    @property
    def day(self) -> int: ...
    @property
    def start(self) -> str: ...
    @property
    def end(self) -> str: ...


def check_spells(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of absences and outages."""
    absences = (
        problem
        for person in plan.people
        for spell in person.absences
        for problem in check_part_of_day(plan, ("people", person.id, "absences"), spell)
    )
    outages = (
        problem
        for station in plan.stations
        for spell in station.outages
        for problem in _check_outage(plan, ("stations", station.id, "outages"), spell, station.count)
    )
    return (*absences, *outages)


def check_part_of_day(plan: Plan, place: Place, part: _PartOfDay) -> Iterator[Problem]:
    """Yield what is wrong with one part of one day; it never crosses midnight."""
    if part.day < 1:
        yield error(place, f"day {part.day} is before the first day", "enter a day from 1")
    elif part.day > plan.days:
        yield note(place, f"day {part.day} is after the last day {plan.days}", "remove it or plan more days")
    wrong = [*check_clock(place, part.start), *check_clock(place, part.end)]
    yield from wrong
    if not wrong and part.end <= part.start:
        yield error(
            place,
            f"the end {short(part.end)} is not after the start {short(part.start)}",
            "enter a later end, and the part after midnight for the next day",
        )


def _check_outage(plan: Plan, place: Place, spell: Spell, count: int) -> Iterator[Problem]:
    yield from check_part_of_day(plan, place, spell)
    if spell.count < 1:
        yield error(place, f"{spell.count} units are out of service", "enter at least 1 or remove it")
    elif spell.count > count:
        yield note(
            place, f"{spell.count} units are out of service and there are only {count}", f"enter at most {count}"
        )


def check_grid(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of the rota's grid: a day must be a whole number of steps."""
    wrong = []
    for place, step in ((("grid_min",), plan.grid_min), (("rota", "slot_min"), plan.rota and plan.rota.slot_min)):
        if step and step > 0 and DAY_MIN % step:
            wrong.append(
                error(place, f"a day is not a whole number of {step} min steps", "enter 5, 10, 15, 20, 30 or 60 min")
            )
    return tuple(wrong)


def check_rota(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of the adopted rota that no calculation could live with."""
    if plan.rota is None:
        return ()
    bouts = (problem for bout in plan.rota.bouts for problem in _check_bout(plan, bout))
    charging = (problem for spell in plan.rota.charging for problem in _check_charging(plan, spell))
    return (*bouts, *charging)


def _check_bout(plan: Plan, bout: Bout) -> Iterator[Problem]:
    place = ("rota", "bouts", bout.id)
    yield from check_part_of_day(plan, place, bout)
    units = {station.id: station.count for station in plan.stations}
    if bout.unit < 1 or bout.unit > units.get(bout.station, bout.unit):
        yield warning((*place, "unit"), f"there is no unit {bout.unit} of this station", "turn at another unit")
    if bout.watcher is not None and bout.watcher == bout.person:
        yield warning((*place, "watcher"), "nobody watches over their own turn", "choose another watcher")


def _check_charging(plan: Plan, spell: ChargeSpell) -> Iterator[Problem]:
    place = ("rota", "charging", spell.id)
    yield from check_part_of_day(plan, place, spell)
    if spell.count < 1 or spell.first_ticket < 1:
        yield error(
            place, f"{spell.count} devices from ticket {spell.first_ticket} are on charge", "enter numbers from 1"
        )
    if not math.isfinite(spell.energy_wh) or spell.energy_wh < 0:
        yield error((*place, "energy_wh"), f"the energy is {spell.energy_wh:g} Wh", "enter 0 or more")


def rota_collections(plan: Plan) -> tuple[tuple[Place, tuple[Any, ...]], ...]:
    """Return the collections of the adopted rota with their places."""
    if plan.rota is None:
        return ()
    return ((("rota", "bouts"), plan.rota.bouts), (("rota", "charging"), plan.rota.charging))
