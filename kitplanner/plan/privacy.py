"""What is stored about a person: every value, where it stands, and which papers show it.

A plan holds display names, what a person offers, and limits without reasons. Health questions are never stored.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping
from types import MappingProxyType
from typing import Any, Literal

from msgspec import Struct

from kitplanner.plan.fields import FIELDS, RECORD_TYPES, SECTION_KINDS
from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP
from kitplanner.plan.name_search import NameSearch
from kitplanner.plan.records import Bout, Note, Person, Plan, Record

Role = Literal["value", "note", "turn", "watch", "attendant", "named", "mention"]

# Which papers show what of a person; every other paper shows nothing about anybody.
_NAME_PAPERS = ("rota", "slips", "handover", "sign")
_SHOWN_ON: Mapping[tuple[Role, str], tuple[str, ...]] = MappingProxyType(
    {
        ("value", "name"): _NAME_PAPERS,
        ("value", "role"): (),
        ("turn", "bouts"): ("rota", "slips"),
        ("watch", "bouts"): ("rota", "slips"),
        ("attendant", "attendant"): ("sign",),
    }
)
ABSENCES = QT_TRANSLATE_NOOP("Privacy", "Absences")
TURNS = QT_TRANSLATE_NOOP("Privacy", "Turns in the adopted rota")
WATCHING = QT_TRANSLATE_NOOP("Privacy", "Turns watched in the adopted rota")
SPREADS = QT_TRANSLATE_NOOP("Privacy", "Where a value comes from")


class StoredItem(Struct, frozen=True, kw_only=True):
    """One thing that is stored about a person.

    `path` leads to it from the plan's top as edits know it; `value` is what stands there; `papers` show it. Role
    "named": another record's key points at the person; "mention": a text elsewhere holds the display name.
    """

    role: Role
    label: str
    path: tuple[str, ...]
    value: Any
    papers: tuple[str, ...]


def stored_about(plan: Plan, person_id: str, papers: Collection[str] | None = None) -> tuple[StoredItem, ...]:
    """Return everything a plan holds about one person; empty values and defaults are not stored and left out.

    Parameters
    ----------
    plan : Plan
        The plan
    person_id : str
        Whose
    papers : collection of str, optional
        Papers that exist; None: all that are planned

    Returns
    -------
    tuple of StoredItem
        Own values first, then turns, other records, mentions

    Raises
    ------
    KeyError
        When the person is not in the plan

    Examples
    --------
    >>> plan = Plan(people=(Person(id="p", name="Oruun", age=41),))
    >>> [(item.label, item.value) for item in stored_about(plan, "p")][:2]
    [('Name', 'Oruun'), ('Age', 41)]
    """
    person = next((one for one in plan.people if one.id == person_id), None)
    if person is None:
        raise KeyError(person_id)
    items = (*_values(person), *_turns(plan, person_id), *_pointers(plan, person_id), *_mentions(plan, person))
    if papers is None:
        return items
    kept = frozenset(papers)
    return tuple(
        StoredItem(
            role=item.role,
            label=item.label,
            path=item.path,
            value=item.value,
            papers=tuple(paper for paper in item.papers if paper in kept),
        )
        for item in items
    )


def persons_on_paper(paper: str) -> tuple[str, ...]:
    """Return the labels of what a paper shows about persons, for its preview; empty if nothing.

    Examples
    --------
    >>> persons_on_paper("effort"), persons_on_paper("rota")
    ((), ('Name', 'Turns in the adopted rota', 'Turns watched in the adopted rota'))
    """
    labels = {
        ("value", "name"): next(spec.label for spec in FIELDS["person"] if spec.key == "name"),
        ("turn", "bouts"): TURNS,
        ("watch", "bouts"): WATCHING,
        ("attendant", "attendant"): next(spec.label for spec in FIELDS["charging_point"] if spec.key == "attendant"),
    }
    return tuple(label for key, label in labels.items() if paper in _SHOWN_ON[key])  # type: ignore[index]


def _papers(role: Role, key: str) -> tuple[str, ...]:
    return _SHOWN_ON.get((role, key), ())


def _values(person: Person) -> Iterator[StoredItem]:
    path = ("people", person.id)
    for spec in FIELDS["person"]:
        value = getattr(person, spec.key)
        if value in (None, "", ()):
            continue
        yield StoredItem(
            role="value", label=spec.label, path=(*path, spec.key), value=value, papers=_papers("value", spec.key)
        )
    if person.absences:
        yield StoredItem(role="value", label=ABSENCES, path=(*path, "absences"), value=person.absences, papers=())
    for key, note in person.notes.items():
        yield StoredItem(role="note", label=SPREADS, path=(*path, "notes", key), value=note, papers=())


def _turns(plan: Plan, person_id: str) -> Iterator[StoredItem]:
    bouts = () if plan.rota is None else plan.rota.bouts
    kinds: tuple[tuple[Role, str, tuple[Bout, ...]], ...] = (
        ("turn", TURNS, tuple(bout for bout in bouts if bout.person == person_id)),
        ("watch", WATCHING, tuple(bout for bout in bouts if bout.watcher == person_id)),
    )
    for role, label, found in kinds:
        if found:
            yield StoredItem(role=role, label=label, path=("rota", "bouts"), value=found, papers=_papers(role, "bouts"))


def _pointers(plan: Plan, person_id: str) -> Iterator[StoredItem]:
    """Yield keys of other records that name the person, by the table of fields."""
    for section, kind in SECTION_KINDS.items():
        for spec in FIELDS[kind]:
            if spec.refs_to != "people":
                continue
            role: Role = "attendant" if spec.key == "attendant" else "named"
            for record in getattr(plan, section):
                value = getattr(record, spec.key)
                if value == person_id or (isinstance(value, tuple) and person_id in value):
                    yield StoredItem(
                        role=role,
                        label=spec.label,
                        path=(section, record.id, spec.key),
                        value=record.name,
                        papers=_papers(role, spec.key),
                    )


def _mentions(plan: Plan, person: Person) -> Iterator[StoredItem]:
    """Yield texts outside the person's own record that hold the display name."""
    search = NameSearch([person.name])
    for path, label, text in _texts(plan, ()):
        if path[:2] != ("people", person.id) and search.in_text(text):
            yield StoredItem(role="mention", label=label, path=path, value=text, papers=())


def _texts(node: Any, path: tuple[str, ...]) -> Iterator[tuple[tuple[str, ...], str, str]]:
    """Yield every free text of a plan with its path and label."""
    if isinstance(node, tuple):
        for item in node:
            if isinstance(item, Record):
                yield from _texts(item, (*path, str(getattr(item, "id", ""))))
        return
    if isinstance(node, dict):
        for key, item in node.items():
            if isinstance(item, Note) and item.source:
                yield (*path, key), SPREADS, item.source
        return
    if not isinstance(node, Record):
        return
    labels = _text_labels(node)
    for key in node.__struct_fields__:
        value = getattr(node, key)
        if isinstance(value, str) and key in labels:
            yield (*path, key), labels[key], value
        else:
            yield from _texts(value, (*path, key))


def _text_labels(record: Record) -> Mapping[str, str]:
    kind = next((kind for kind, made in RECORD_TYPES.items() if made is type(record)), "")
    return {spec.key: spec.label for spec in FIELDS.get(kind, ()) if spec.kind == "text"}
