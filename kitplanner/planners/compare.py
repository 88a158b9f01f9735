"""Two plans side by side: what differs, field by field, and what their answers are.

Records are matched by section and id, so another order of records is no difference; the order of a station's stages
is one, because current passes them in turn.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from statistics import median
from typing import Any, Literal

from msgspec import Struct

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.fields import FIELDS, NESTED, SECTION_KINDS, kind_of
from kitplanner.plan.records import Note, Plan, Record, Rota, Spell
from kitplanner.planners.balance import balance
from kitplanner.planners.effort import effort
from kitplanner.planners.people import person_limits
from kitplanner.planners.results import BalanceResult, EffortRow
from kitplanner.planners.station_error import StationError

Aspect = Literal["value", "note", "presence", "order"]
AnswerName = Literal[
    "coverage",
    "need",
    "have",
    "short_per_day",
    "first_empty_day",
    "limit",
    "phone_minutes",
    "rota_turned",
    "rota_greatest_load",
]


class Difference(Struct, frozen=True, kw_only=True):
    """One field that differs; `left` and `right` are the values as the plan holds them.

    `path` leads to the field from the plan's top as edits know it; `kind` and `key` name its FieldSpec. Aspect
    "presence": the record stands in one plan only (the other side is None, the record itself on this side); "order":
    the ids of stages in their order; "note": mark, source or spread of an equal or unequal value.
    """

    section: str
    record: str
    path: tuple[str, ...]
    kind: str
    key: str
    aspect: Aspect
    left: Any
    right: Any


class AnswerPair(Struct, frozen=True, kw_only=True):
    """One answer of both plans; None where a plan has none."""

    name: AnswerName
    unit: str
    left: float | str | None
    right: float | str | None


class Comparison(Struct, frozen=True, kw_only=True):
    """Two plans side by side: differences in the order of the file, then answers."""

    differences: tuple[Difference, ...]
    answers: tuple[AnswerPair, ...]


def compare(left: Plan, right: Plan) -> Comparison:
    """Return what differs between two plans and what both answer.

    Parameters
    ----------
    left, right : Plan
        Two plans; one with errors has no answers

    Returns
    -------
    Comparison
        Differences and answers; no difference for equal plans

    Examples
    --------
    >>> [(one.key, one.left, one.right) for one in compare(Plan(days=3), Plan(days=4)).differences]
    [('days', 3, 4)]
    """
    return Comparison(differences=tuple(differences(left, right)), answers=_answers(left, right))


def differences(left: Plan, right: Plan) -> Iterator[Difference]:
    """Yield what differs: the plan's own fields, conditions, every section's records, the adopted rota.

    Parameters
    ----------
    left, right : Plan
        Two plans

    Yields
    ------
    Difference
        In the order of the file
    """
    if left == right:
        return
    yield from _fields("", (), left, right)
    yield from _fields("conditions", ("conditions",), left.conditions, right.conditions)
    yield from _collection(
        "conditions", ("conditions", "temperatures"), left.conditions.temperatures, right.conditions.temperatures
    )
    for section in SECTION_KINDS:
        yield from _collection(section, (section,), getattr(left, section), getattr(right, section))
    yield from _single("rota", ("rota",), left.rota, right.rota)


def _collection(section: str, path: tuple[str, ...], left: Sequence[Any], right: Sequence[Any]) -> Iterator[Difference]:
    """Yield the differences of two collections of records with ids."""
    lefts = {record.id: record for record in left}
    rights = {record.id: record for record in right}
    for key in [*lefts, *(key for key in rights if key not in lefts)]:
        yield from _single(section, (*path, key), lefts.get(key), rights.get(key))


def _single(section: str, path: tuple[str, ...], left: Any, right: Any) -> Iterator[Difference]:
    """Yield the differences of two records, either of which may be absent or of another kind."""
    if left is right or left == right:
        return
    if left is None or right is None or type(left) is not type(right):
        yield Difference(
            section=section,
            record=_record_of(path),
            path=path,
            kind=_kind_of_both(left, right),
            key="",
            aspect="presence",
            left=left,
            right=right,
        )
        return
    yield from _fields(section, path, left, right)
    yield from _nested(section, path, left, right)


def _kind_of_both(left: Record | None, right: Record | None) -> str:
    """Return the kind both have, empty where FIELDS does not know it or a stage became one of another kind."""
    kinds = {_kind(record) for record in (left, right) if record is not None}
    return kinds.pop() if len(kinds) == 1 else ""


def _kind(record: Record) -> str:
    try:
        return kind_of(record)
    except KeyError:
        return ""


def _record_of(path: tuple[str, ...]) -> str:
    """Return the id of the section's record a path leads through; empty for the plan, its conditions and rota."""
    return path[1] if len(path) > 1 and path[0] in SECTION_KINDS else ""


def _fields(section: str, path: tuple[str, ...], left: Record, right: Record) -> Iterator[Difference]:
    kind = _kind(left)
    # Turns and charging of a rota have no form and therefore no FieldSpec.
    keys = [spec.key for spec in FIELDS[kind]] if kind else [key for key in left.__struct_fields__ if key != "id"]
    for key in keys:
        values = getattr(left, key), getattr(right, key)
        if not _alike(*values):
            yield _difference(section, (*path, key), kind, "value", *values)
    yield from _notes(section, path, kind, getattr(left, "notes", {}), getattr(right, "notes", {}))


def _alike(left: object, right: object) -> bool:
    """Return True for equal values of the same type; True is not 1 and 1 is not "1"."""
    return left == right and isinstance(left, bool) == isinstance(right, bool)


def _notes(
    section: str, path: tuple[str, ...], kind: str, left: dict[str, Note], right: dict[str, Note]
) -> Iterator[Difference]:
    for key in [*left, *(key for key in right if key not in left)]:
        if left.get(key) != right.get(key):
            yield _difference(section, (*path, key), kind, "note", left.get(key), right.get(key))


def _difference(
    section: str, path: tuple[str, ...], kind: str, aspect: Aspect, left: object, right: object
) -> Difference:
    return Difference(
        section=section,
        record=_record_of(path),
        path=path,
        kind=kind,
        key=path[-1],
        aspect=aspect,
        left=left,
        right=right,
    )


def _nested(section: str, path: tuple[str, ...], left: Record, right: Record) -> Iterator[Difference]:
    """Yield the differences of records inside a record: parts of a station, absences, turns of a rota."""
    kind = _kind(left)
    for name in NESTED.get(kind, ()):
        old, new = getattr(left, name), getattr(right, name)
        if isinstance(old, tuple) and any(isinstance(one, Spell) for one in (*old, *new)):
            if sorted(map(_spell, old)) != sorted(map(_spell, new)):
                yield _difference(section, (*path, name), kind, "value", old, new)
        elif isinstance(old, tuple):
            yield from _collection(section, (*path, name), old, new)
            yield from _order(section, (*path, name), kind, old, new)
        else:
            yield from _single(section, (*path, name), old, new)


def _spell(spell: Spell) -> tuple[int, str, str, int]:
    return spell.day, spell.start, spell.end, spell.count


def _order(section: str, path: tuple[str, ...], kind: str, left: Any, right: Any) -> Iterator[Difference]:
    if path[-1] != "stages":
        return
    both = {stage.id for stage in left} & {stage.id for stage in right}
    orders = tuple(tuple(stage.id for stage in stages if stage.id in both) for stages in (left, right))
    if orders[0] != orders[1]:
        yield _difference(section, path, kind, "order", *orders)


def _answers(left: Plan, right: Plan) -> tuple[AnswerPair, ...]:
    pairs = zip(plan_answers(left), plan_answers(right), strict=True)
    return tuple(
        AnswerPair(name=name, unit=unit, left=value, right=other) for (name, unit, value), (_, _, other) in pairs
    )


def plan_answers(plan: Plan) -> tuple[tuple[AnswerName, str, float | str | None], ...]:
    """Return the answers that stand in a comparison: name, unit and value of each, None where there is none.

    Parameters
    ----------
    plan : Plan
        A plan

    Returns
    -------
    tuple of (name, unit, value)
        Coverage [-], need, have and short a day at O [Wh], first empty day, limit, minutes for one full charge
        of a phone by the turner in the middle [min], and of an adopted rota the minutes a day and the greatest load
    """
    found = _balance(plan)
    phone = None if found is None else phone_minutes(plan)
    turned, load = (None, None) if found is None or plan.rota is None else rota_load(plan, plan.rota)
    return (
        ("coverage", "%", None if found is None else found.coverage_fraction),
        ("need", "Wh", None if found is None else found.need_wh),
        ("have", "Wh", None if found is None else found.have_wh),
        ("short_per_day", "Wh a day", None if found is None else found.short_wh_per_day),
        ("first_empty_day", "", None if found is None else _as_float(found.first_empty_day)),
        ("limit", "", None if found is None else found.limit),
        ("phone_minutes", "min", phone),
        ("rota_turned", "min a day", turned),
        ("rota_greatest_load", "%", load),
    )


def _as_float(day: int | None) -> float | None:
    return None if day is None else float(day)


def _balance(plan: Plan) -> BalanceResult | None:
    if has_errors(check(plan)):
        return None
    try:
        return balance(plan)
    except StationError:
        # The checks of the window name this problem; here a plan without answers is compared by its fields alone.
        return None


def phone_minutes(plan: Plan) -> float | None:
    """Return the minutes of one full charge of a phone by the turner in the middle, None without one.

    The phone of which there are most (then the first by id) stands for all; every station and person who can charge it
    directly counts, and through a store only where nobody can.

    Parameters
    ----------
    plan : Plan
        A plan without errors

    Returns
    -------
    float or None
        Median minutes of turning [min]
    """
    phones = [one for one in plan.devices if one.kind == "phone" and one.battery_wh and one.count]
    if not phones:
        return None
    phone = min(phones, key=lambda one: (-one.count, one.id))
    rows = [row for row in effort(plan, device=phone.id).rows if row.charge == "full"]
    for route in ("direct", "store"):
        known = _minutes([row for row in rows if row.route == route])
        if known:
            return median(known)
    return None


def _minutes(rows: Sequence[EffortRow]) -> list[float]:
    return [row.minutes_p50 for row in rows if row.minutes_p50 is not None]


def rota_load(plan: Plan, rota: Rota) -> tuple[float, float | None]:
    """Return the minutes turned a day in an adopted rota and the greatest share of a person's cap over its days.

    load = minutes of a person / (days * cap)

    Parameters
    ----------
    plan : Plan
        The plan
    rota : Rota
        Its adopted rota

    Returns
    -------
    tuple of float
        Minutes a day [min], greatest load [-] (None where nobody with a cap turns)
    """
    turned: dict[str, float] = {}
    for bout in rota.bouts:
        length = float(minutes_of_day(bout.end) - minutes_of_day(bout.start))
        turned[bout.person] = turned.get(bout.person, 0.0) + length
    caps = {person.id: person_limits(plan, person).cap_min for person in plan.people}
    loads = [minutes / (plan.days * caps[one]) for one, minutes in turned.items() if caps.get(one)]
    return sum(turned.values()) / plan.days, max(loads, default=None)
