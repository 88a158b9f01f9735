"""Checks that follow from FIELDS alone: ranges, finite numbers, known choices, clock times, windows."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from typing import Any

from kitplanner.plan.fields import FIELDS, SECTION_KINDS, FieldSpec, kind_of
from kitplanner.plan.places import short
from kitplanner.plan.problem import Place, Problem, error, warning
from kitplanner.plan.records import Note, Plan, Record, Window

_CLOCK = re.compile(r"([01][0-9]|2[0-3]):[0-5][0-9]|24:00")
WIDEST_SPREAD = 2.0
# The kind of a device groups it in pictures only; a word of one's own does no harm there.
_FREE_CHOICES = frozenset({("device", "kind")})


def check_fields(plan: Plan) -> tuple[Problem, ...]:
    """Return a problem for every value outside what its FieldSpec allows."""
    return tuple(problem for place, record in every_record(plan) for problem in _check_record(place, record))


def _check_record(place: Place, record: Record) -> Iterator[Problem]:
    kind = kind_of(record)
    for spec in FIELDS[kind]:
        yield from _check_value((*place, spec.key), kind, spec, getattr(record, spec.key))
    notes: dict[str, Note] = getattr(record, "notes", {})
    for key, note in notes.items():
        if key not in record.__struct_fields__:
            yield warning((*place, "notes", key), "this note is about a key the record does not have", "remove it")
        if note.spread_fraction is not None and not 0 <= note.spread_fraction <= WIDEST_SPREAD:
            yield error(
                (*place, "notes", key),
                f"the spread is {note.spread_fraction:g}",
                f"enter a share from 0 to {WIDEST_SPREAD:g}",
            )


def every_record(plan: Plan) -> Iterator[tuple[Place, Record]]:
    """Yield every record of a plan with its place, in file order."""
    yield (), plan
    yield ("conditions",), plan.conditions
    for part in plan.conditions.temperatures:
        yield ("conditions", "temperatures", part.id), part
    for section in SECTION_KINDS:
        for record in getattr(plan, section):
            yield (section, record.id), record
            if section == "stations":
                yield from _parts_of_station((section, record.id), record)
    if plan.rota is not None:
        yield ("rota",), plan.rota


def _parts_of_station(place: Place, station: Any) -> Iterator[tuple[Place, Record]]:
    for key in ("machine", "gear", "test_load"):
        if (part := getattr(station, key)) is not None:
            yield (*place, key), part
    for stage in station.stages:
        yield (*place, "stages", stage.id), stage


def _check_value(place: Place, kind: str, spec: FieldSpec, value: Any) -> Iterator[Problem]:
    if value is None:
        if not spec.optional:
            yield error(place, f"{spec.label} is missing", "enter a value")
    elif spec.kind in ("number", "integer"):
        yield from _check_number(place, spec, value)
    elif spec.kind == "choice":
        yield from _check_choice(place, kind, spec, value)
    elif spec.kind == "windows":
        yield from (problem for window in value for problem in check_window(place, window))
    elif spec.kind == "days":
        yield from (problem for day in value for problem in _check_number(place, spec, day))
    elif kind == "temperature" and spec.key in ("start", "end"):
        yield from check_clock(place, value)


def _check_choice(place: Place, kind: str, spec: FieldSpec, value: Any) -> Iterator[Problem]:
    known = [choice for choice, _ in spec.choices]
    if value not in known and (kind, spec.key) not in _FREE_CHOICES:
        yield error(place, f"{short(value)} is not known here", f"use one of {', '.join(known)}")


def _check_number(place: Place, spec: FieldSpec, value: float) -> Iterator[Problem]:
    if not math.isfinite(value):
        yield error(place, f"{spec.label} is not a finite number ({value})", f"enter a value {allowed(spec)}")
    elif spec.kind == "integer" and value != int(value):
        yield error(place, f"{spec.label} is {value:g} and must be a whole number", f"enter a value {allowed(spec)}")
    elif _is_outside(spec, value):
        yield error(place, f"{spec.label} is {shown(spec, value)}", f"enter a value {allowed(spec)}")


def _is_outside(spec: FieldSpec, value: float) -> bool:
    too_low = spec.low is not None and (value < spec.low or (spec.low_open and value == spec.low))
    too_high = spec.high is not None and (value > spec.high or (spec.high_open and value == spec.high))
    return too_low or too_high


def shown(spec: FieldSpec, value: float) -> str:
    """Return a value at display scale with its unit.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> shown(field("store", "eta_in"), 1.2)
    '120 %'
    """
    return f"{value * spec.display_scale:.10g} {spec.unit}".strip()


def allowed(spec: FieldSpec) -> str:
    """Return the range of a field in words.

    Examples
    --------
    >>> from kitplanner.plan.fields import field
    >>> allowed(field("store", "eta_in"))
    'of at least 1 and at most 100 %'
    """
    words = []
    if spec.low is not None:
        words.append(f"{'above' if spec.low_open else 'of at least'} {spec.low * spec.display_scale:.10g}")
    if spec.high is not None:
        words.append(f"{'below' if spec.high_open else 'at most'} {spec.high * spec.display_scale:.10g}")
    return f"{' and '.join(words)} {spec.unit}".strip() if words else "that is a finite number"


def check_window(place: Place, window: Window) -> Iterator[Problem]:
    """Yield what is wrong with one window; an end before the start is allowed, it crosses midnight."""
    wrong = [*check_clock(place, window.start), *check_clock(place, window.end)]
    yield from wrong
    if not wrong and window.start in (window.end, "24:00"):
        yield error(
            place,
            f"the window {window.start}-{window.end} has no length",
            "write 00:00-24:00 for the whole day or remove the window",
        )


def check_clock(place: Place, text: str) -> Iterator[Problem]:
    """Yield what is wrong with one clock time."""
    if not _CLOCK.fullmatch(text):
        yield error(place, f"{short(text)} is not a clock time", "write it as HH:MM from 00:00 to 24:00")
