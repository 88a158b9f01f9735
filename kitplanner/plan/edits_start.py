"""A working plan from five short answers: how many days, who, what devices, what station, what stores.

Whatever the answers do not say is assumed and marked so: default where the field or the catalogue has a source,
guess where it is a judgement to be replaced.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from types import MappingProxyType
from typing import Literal

from msgspec import Struct, structs

from kitplanner.plan.catalogue import PLAN_KINDS, PlanKind
from kitplanner.plan.catalogue_kinds import CatalogueSection, kind, kinds, record_of
from kitplanner.plan.edits import Edit, EditError
from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP
from kitplanner.plan.places import short
from kitplanner.plan.records import Block, ChargingPoint, Conditions, Device, Note, Person, Plan, Station, Store, Window

AgeBand = Literal["under_12", "12", "13_15", "16_17", "18_49", "50_59", "60_64", "65_79", "80_up"]
MOST_PEOPLE = 500
MOST_UNITS = 10_000
MOST_DAYS = 366

# Band -> label and the age that stands for it. The bands are those of the age limits; 40 is the reference adult.
AGE_BANDS: Mapping[AgeBand, tuple[str, int]] = MappingProxyType(
    {
        "under_12": (QT_TRANSLATE_NOOP("Start", "under 12"), 8),
        "12": (QT_TRANSLATE_NOOP("Start", "12"), 12),
        "13_15": (QT_TRANSLATE_NOOP("Start", "13 to 15"), 14),
        "16_17": (QT_TRANSLATE_NOOP("Start", "16 and 17"), 16),
        "18_49": (QT_TRANSLATE_NOOP("Start", "18 to 49"), 40),
        "50_59": (QT_TRANSLATE_NOOP("Start", "50 to 59"), 55),
        "60_64": (QT_TRANSLATE_NOOP("Start", "60 to 64"), 62),
        "65_79": (QT_TRANSLATE_NOOP("Start", "65 to 79"), 70),
        "80_up": (QT_TRANSLATE_NOOP("Start", "80 and over"), 82),
    }
)
_AGE = Note(mark="guess", source="stands for the age group chosen at the start; write the person's own age")
_ASSUMED = Note(mark="guess", source="assumed at the start; replace it by your own")
_TITLES: Mapping[PlanKind, str] = MappingProxyType(
    {"household": "Household", "camp": "Camp", "shelter": "Shelter", "bench": "Bench"}
)


class Chosen(Struct, frozen=True):
    """A kind of the catalogue and how many."""

    key: str
    count: int = 1


class InBand(Struct, frozen=True):
    """People of one age group."""

    band: AgeBand
    count: int = 1


class StartAnswers(Struct, frozen=True, kw_only=True):
    """The five answers, the kind of plan and its first day."""

    kind: PlanKind
    start: dt.date
    days: int
    people: tuple[InBand, ...] = ()
    devices: tuple[Chosen, ...] = ()
    stations: tuple[Chosen, ...] = ()
    stores: tuple[Chosen, ...] = ()


def suggested_answers(plan_kind: PlanKind, start: dt.date) -> StartAnswers:
    """Return answers to begin with for a kind of plan, to be changed by the user.

    Examples
    --------
    >>> suggested_answers("household", dt.date(2026, 1, 1)).days
    3
    """
    match plan_kind:
        case "bench":
            return StartAnswers(
                kind=plan_kind,
                start=start,
                days=1,
                people=(InBand("18_49"),),
                devices=(Chosen("smartphone"),),
                stations=(Chosen("hand_crank"),),
            )
        case "household":
            return StartAnswers(
                kind=plan_kind,
                start=start,
                days=3,
                people=(InBand("18_49", 2),),
                devices=(Chosen("smartphone", 2), Chosen("radio"), Chosen("lamp", 2)),
                stations=(Chosen("hand_crank"),),
                stores=(Chosen("power_bank_20"),),
            )
        case _:
            people, phones = (20, 4) if plan_kind == "camp" else (40, 30)
            return StartAnswers(
                kind=plan_kind,
                start=start,
                days=3 if plan_kind == "camp" else 7,
                people=(InBand("18_49", people),),
                devices=(Chosen("smartphone", phones), Chosen("two_way_radio", 4), Chosen("radio"), Chosen("lamp", 6)),
                stations=(Chosen("pedal_stand", 1 if plan_kind == "camp" else 2),),
                stores=(Chosen("battery_lfp_12v"), Chosen("power_bank_20", 2)),
            )


def start_plan(answers: StartAnswers) -> Plan:
    """Return a plan that calculates at once, made from the answers; every assumed value carries its mark.

    Raises
    ------
    EditError
        An answer cannot be used: place, reason and remedy in one sentence.

    Examples
    --------
    >>> plan = start_plan(suggested_answers("household", dt.date(2026, 1, 1)))
    >>> len(plan.people), plan.people[0].notes["age"].mark
    (2, 'guess')
    """
    _require_sound(answers)
    bench = answers.kind == "bench"
    plan = Plan(
        title=_TITLES[answers.kind],
        start=answers.start,
        days=answers.days,
        margin_fraction=0.0 if bench else 0.15,
        notes={"margin_fraction": _ASSUMED} if bench else {},
        conditions=Conditions(notes={"air_degc": _ASSUMED}),
        people=_people(answers.people),
        stations=tuple(record for record in _records(answers.stations, "stations", "S") if isinstance(record, Station)),
        stores=tuple(record for record in _records(answers.stores, "stores", "B") if isinstance(record, Store)),
        devices=tuple(record for record in _records(answers.devices, "devices", "D") if isinstance(record, Device)),
    )
    return plan if bench else structs.replace(plan, blocks=_blocks(), charging_points=_points(answers.kind))


def restart_from(answers: StartAnswers) -> Edit:
    """Return the edit that puts the plan of the answers in place of the present one, one step to undo."""
    made = start_plan(answers)
    return lambda _plan: made


def _people(groups: tuple[InBand, ...]) -> tuple[Person, ...]:
    ages = [AGE_BANDS[group.band][1] for group in groups for _ in range(group.count)]
    width = len(str(len(ages)))
    return tuple(
        Person(id=f"P{place:0{width}d}", name=f"P{place:0{width}d}", age=age, notes={"age": _AGE})
        for place, age in enumerate(ages, start=1)
    )


def _records(
    chosen: tuple[Chosen, ...], section: CatalogueSection, letter: str
) -> tuple[Device | Store | Station, ...]:
    for one in chosen:
        if kind(one.key).section != section:
            known = ", ".join(other.key for other in kinds(section))
            raise EditError((section,), f"{short(one.key)} is no kind of these", f"choose one of {known}")
    return tuple(record_of(one.key, f"{letter}{place}", one.count) for place, one in enumerate(chosen, start=1))


def _blocks() -> tuple[Block, ...]:
    quiet = Window(start="22:00", end="07:00")
    return (Block(id="Q1", name="Quiet hours", kind="quiet", windows=(quiet,), notes={"windows": _ASSUMED}),)


def _points(plan_kind: PlanKind) -> tuple[ChargingPoint, ...]:
    if plan_kind == "household":
        return ()
    hours = (Window(start="08:00", end="20:00"),)
    notes = {"hours": _ASSUMED, "outlets": _ASSUMED}
    return (ChargingPoint(id="C1", name="Charging point", hours=hours, outlets=8, notes=notes),)


def _require_sound(answers: StartAnswers) -> None:
    if answers.kind not in PLAN_KINDS:
        known = ", ".join(PLAN_KINDS)
        raise EditError(("start",), f"there is no kind of plan {short(answers.kind)}", f"use one of {known}")
    if not 1 <= answers.days <= MOST_DAYS:
        raise EditError(("days",), f"{answers.days} days cannot be planned", f"enter a number from 1 to {MOST_DAYS}")
    for group in answers.people:
        if group.band not in AGE_BANDS:
            known = ", ".join(AGE_BANDS)
            raise EditError(("people",), f"there is no age group {short(group.band)}", f"use one of {known}")
    counts = (("people", sum(group.count for group in answers.people), MOST_PEOPLE, 0),)
    more = tuple(
        (section, one.count, MOST_UNITS, 1)
        for section in ("devices", "stores", "stations")
        for one in getattr(answers, section)
    )
    for section, count, most, least in (*counts, *more):
        if not least <= count <= most:
            raise EditError((section,), f"{count} is not a number that can be planned", f"enter {least} to {most}")
    if any(group.count < 0 for group in answers.people):
        raise EditError(("people",), "an age group has fewer than 0 people", "enter 0 or more")
