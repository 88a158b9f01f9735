"""Deleting people from a plan in one edit: their records, every key that names them, and their names in other texts.

Totals without persons stay: how many people there were and how much they turned, as a note at the plan's title and at
each group. A rota without people is none, so it goes when all of them go.
"""

from __future__ import annotations

from collections.abc import Collection
from typing import Any

from msgspec import Struct, structs

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.edits import Edit, EditError, chain, remove_record
from kitplanner.plan.fields import spec_of
from kitplanner.plan.name_search import NameSearch
from kitplanner.plan.records import Note, Plan, Record


class Totals(Struct, frozen=True, kw_only=True):
    """What may stay of people who are deleted: numbers without a person."""

    people: int
    turned: int
    turned_min: float
    by_group: dict[str, int]


def totals_of(plan: Plan) -> Totals:
    """Return the numbers that stay: people, how many turned in the adopted rota and for how long, people by group.

    Parameters
    ----------
    plan : Plan
        The plan before anybody is deleted

    Returns
    -------
    Totals
        Counts and minutes over all days [min]

    Examples
    --------
    >>> from kitplanner.plan.records import Person
    >>> totals_of(Plan(people=(Person(id="p", name="Oruun", group="G"),))).by_group
    {'G': 1}
    """
    bouts = () if plan.rota is None else plan.rota.bouts
    by_group: dict[str, int] = {}
    for person in plan.people:
        if person.group is not None:
            by_group[person.group] = by_group.get(person.group, 0) + 1
    return Totals(
        people=len(plan.people),
        turned=len({bout.person for bout in bouts}),
        turned_min=float(sum(minutes_of_day(bout.end) - minutes_of_day(bout.start) for bout in bouts)),
        by_group=by_group,
    )


def names_of(plan: Plan, people: Collection[str] | None = None) -> tuple[str, ...]:
    """Return the display names to search for, of some people or of all.

    Parameters
    ----------
    plan : Plan
        The plan before anybody is deleted
    people : collection of str, optional
        Ids; None: all

    Returns
    -------
    tuple of str
        Names, without empty ones
    """
    return tuple(person.name for person in plan.people if _is_meant(person.id, people) and person.name.strip())


def _is_meant(person: str, people: Collection[str] | None) -> bool:
    return people is None or person in people


def delete_all_people(summary: str = "") -> Edit:
    """Return the edit that deletes every person and keeps totals.

    Parameters
    ----------
    summary : str
        More totals to keep in words, such as energy made; it must name nobody

    Returns
    -------
    Edit
        Plan without people, without rota, and without their names in any text
    """

    def edit(plan: Plan) -> Plan:
        if not plan.people:
            return plan
        totals, search = totals_of(plan), NameSearch(names_of(plan))
        without = chain(*(remove_record(("people", person.id)) for person in plan.people))(plan)
        without = structs.replace(without, rota=None)
        return _with_totals(blotted_plan(without, search), totals, search.blotted(summary))

    return edit


def delete_people(people: Collection[str]) -> Edit:
    """Return the edit that deletes some people: records, turns, watching, attendance, and their names in texts.

    Parameters
    ----------
    people : collection of str
        Ids of people in the plan

    Returns
    -------
    Edit
        Plan without them; nobody else is touched

    Raises
    ------
    EditError
        When an id is not in the plan
    """

    def edit(plan: Plan) -> Plan:
        known = {person.id for person in plan.people}
        for one in people:
            if one not in known:
                raise EditError(("people", one), "there is no such person", "choose one of the people in the plan")
        # A namesake who stays keeps the name; only texts about the one who goes could be meant, and nobody can tell.
        kept = {person.name for person in plan.people if person.id not in people}
        search = NameSearch(name for name in names_of(plan, people) if name not in kept)
        without = chain(*(remove_record(("people", one)) for one in people))(plan)
        return blotted_plan(without, search)

    return edit


def blotted_plan(plan: Plan, search: NameSearch) -> Plan:
    """Return the plan with the names blotted out of every free text and every source of a note.

    Ids stay, because other records point at them; they are opaque and should never hold a name.
    """
    blotted: Plan = _blotted(plan, search)
    return blotted


def _blotted(node: Any, search: NameSearch) -> Any:
    """Return a record, collection or mapping without the names; the same object where nothing changed."""
    if isinstance(node, tuple):
        items = tuple(_blotted(item, search) for item in node)
        return items if any(new is not old for new, old in zip(items, node, strict=True)) else node
    if isinstance(node, dict):
        found = {key: _blotted(item, search) for key, item in node.items()}
        return found if any(found[key] is not item for key, item in node.items()) else node
    if not isinstance(node, Record):
        return node
    changes = {}
    for key in node.__struct_fields__:
        old = getattr(node, key)
        new = search.blotted(old) if isinstance(old, str) and _is_free_text(node, key) else _blotted(old, search)
        if new is not old:
            changes[key] = new
    return structs.replace(node, **changes) if changes else node


def _is_free_text(record: Record, key: str) -> bool:
    """Tell whether a key holds text that somebody typed, not an id, a choice or a clock time."""
    if isinstance(record, Note):
        return key == "source"
    spec = spec_of(record, key)
    return spec is not None and spec.kind == "text"


def _with_totals(plan: Plan, totals: Totals, summary: str) -> Plan:
    turned = ""
    if totals.turned:
        turned = f", {totals.turned} of them turned {totals.turned_min:.0f} min in the rota"
    words = f"{_people(totals.people)} took part{turned}; persons deleted"
    note = Note(mark="own", source=f"{words}. {summary}".rstrip())
    groups = tuple(
        structs.replace(group, notes={**group.notes, "name": Note(mark="own", source=_people(count))})
        if (count := totals.by_group.get(group.id, 0))
        else group
        for group in plan.groups
    )
    return structs.replace(plan, notes={**plan.notes, "title": note}, groups=groups)


def _people(count: int) -> str:
    return f"{count} {'person' if count == 1 else 'people'}"
