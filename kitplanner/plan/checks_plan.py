"""Checks of the plan as a whole: length, conditions, blocks, evening guarantee, charging points."""

from __future__ import annotations

from collections.abc import Iterator

from kitplanner.plan.problem import Problem, error, note, warning
from kitplanner.plan.records import Plan, TemperaturePart

GUIDANCE_DAYS = 3
HOT_DEGC = 26.0


def check_plan(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of the plan's own values, its conditions, blocks and charging points."""
    return (
        *_check_length(plan),
        *_check_conditions(plan),
        *_check_blocks(plan),
        *_check_charging(plan),
        *_check_evening(plan),
    )


def _check_length(plan: Plan) -> Iterator[Problem]:
    if plan.days < GUIDANCE_DAYS:
        yield note(
            ("days",),
            f"the plan lasts {plan.days * 24} hours and guidance asks for at least 72",
            f"enter {GUIDANCE_DAYS} days or more unless it is meant for a test",
        )


def _check_conditions(plan: Plan) -> Iterator[Problem]:
    conditions = plan.conditions
    for part in conditions.temperatures:
        yield from _check_temperature(plan, part)
    warmest = max(
        (conditions.air_degc, *(part.air_degc for part in conditions.temperatures if part.air_degc is not None))
    )
    if warmest >= HOT_DEGC and not conditions.heat_limits:
        yield note(
            ("conditions", "heat_limits"),
            f"it gets {warmest:g} °C and heat limits are off, so turns are not shortened",
            "switch heat limits on",
        )
    coldest = min(
        (conditions.air_degc, *(part.air_degc for part in conditions.temperatures if part.air_degc is not None))
    )
    if coldest < 0:
        yield warning(
            ("conditions",),
            f"it gets {coldest:g} °C and batteries must not be charged below 0 °C",
            "plan to charge in a warm place",
        )


def _check_temperature(plan: Plan, part: TemperaturePart) -> Iterator[Problem]:
    place = ("conditions", "temperatures", part.id)
    if part.end <= part.start:
        yield error(
            (*place, "end"),
            f"the end {part.end} is not after the start {part.start}",
            "enter a later end, and the part after midnight for the next day",
        )
    if part.day > plan.days:
        yield note((*place, "day"), f"day {part.day} is after the last day {plan.days}", "remove it or plan more days")
    if part.air_degc is None and part.wbgt_degc is None:
        yield note(place, "it holds no temperature", "enter one or remove it")


def _check_blocks(plan: Plan) -> Iterator[Problem]:
    for block in plan.blocks:
        place = ("blocks", block.id)
        if not block.windows:
            yield note(
                (*place, "windows"), "this block has no times and changes nothing", "enter its times or remove it"
            )
        late = [day for day in block.days if day > plan.days]
        if late:
            yield note(
                (*place, "days"), f"day {late[0]} is after the last day {plan.days}", "remove it or plan more days"
            )


def _check_charging(plan: Plan) -> Iterator[Problem]:
    for point in plan.charging_points:
        place = ("charging_points", point.id)
        if not point.hours:
            yield warning(
                (*place, "hours"), "without attended hours nothing can be charged here", "enter when somebody looks on"
            )
        elif any(window.end < window.start for window in point.hours):
            yield note(
                (*place, "hours"), "the attended hours run through midnight", "swap start and end if this is not meant"
            )
    if plan.medical_needs:
        yield note(
            ("medical_needs",),
            "powered medical equipment stays outside the balance and is not covered by this plan",
            "arrange a separate secured supply now",
        )


def _check_evening(plan: Plan) -> Iterator[Problem]:
    if not plan.devices:
        return
    kinds = {device.kind for device in plan.devices if device.evening}
    missing = [
        word
        for word, wanted in (("a phone or radio for calling help", {"phone", "radio"}), ("a lamp", {"light"}))
        if not kinds & wanted
    ]
    if missing:
        yield note(
            ("devices",),
            f"the evening guarantee lacks {' and '.join(missing)}",
            "mark a device that must be ready before lights-out",
        )
