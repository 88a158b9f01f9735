"""Which keys name other records, and what becomes of them when such a record goes."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from msgspec import structs

from kitplanner.plan.fields import FIELDS, SECTION_KINDS
from kitplanner.plan.records import Note, Person, Plan, Rota

# Path of the key, section it points into, id it names.
Reference = tuple[tuple[str, ...], str, str]


def references(plan: Plan) -> Iterator[Reference]:
    """Yield every reference as (path of the key, section it points into, id it names)."""
    for section, kind in SECTION_KINDS.items():
        specs = [spec for spec in FIELDS[kind] if spec.refs_to]
        for record in getattr(plan, section) if specs else ():
            for spec in specs:
                for named in _named(getattr(record, spec.key)):
                    yield (section, record.id, spec.key), spec.refs_to, named
    yield from _rota_references(plan)


def _rota_references(plan: Plan) -> Iterator[Reference]:
    """Yield every reference of the adopted rota as (path of the key, section, id)."""
    if plan.rota is None:
        return
    for bout in plan.rota.bouts:
        place = ("rota", "bouts", bout.id)
        yield (*place, "person"), "people", bout.person
        yield (*place, "station"), "stations", bout.station
        if bout.watcher is not None:
            yield (*place, "watcher"), "people", bout.watcher
    for spell in plan.rota.charging:
        yield ("rota", "charging", spell.id, "device"), "devices", spell.device


def _named(value: Any) -> tuple[str, ...]:
    if value is None:
        return ()
    return value if isinstance(value, tuple) else (value,)


def without_references(plan: Plan, section: str, gone: str) -> Plan:
    """Return the plan without any key that names the record `gone` of a section."""
    for holder_section, kind in SECTION_KINDS.items():
        keys = [spec.key for spec in FIELDS[kind] if spec.refs_to == section]
        if not keys:
            continue
        old = getattr(plan, holder_section)
        new = tuple(kept for record in old if (kept := _freed(record, keys, gone)) is not None)
        if len(new) != len(old) or any(left is not right for left, right in zip(new, old, strict=True)):
            plan = structs.replace(plan, **{holder_section: new})
    rota = plan.rota if plan.rota is None else _freed_rota(plan.rota, section, gone)
    return plan if rota is plan.rota else structs.replace(plan, rota=rota)


def _freed_rota(rota: Rota, section: str, gone: str) -> Rota:
    """Return the adopted rota without the turns and charging of a record that goes.

    A turn whose watcher goes stays and has none, so that the rota's judge can say so.
    """
    bouts, charging = rota.bouts, rota.charging
    if section == "people":
        kept = (bout for bout in bouts if bout.person != gone)
        bouts = tuple(structs.replace(bout, watcher=None) if bout.watcher == gone else bout for bout in kept)
    elif section == "stations":
        bouts = tuple(bout for bout in bouts if bout.station != gone)
    elif section == "devices":
        charging = tuple(spell for spell in charging if spell.device != gone)
    if bouts == rota.bouts and charging == rota.charging:
        return rota
    return structs.replace(rota, bouts=bouts, charging=charging)


def _freed(record: Any, keys: list[str], gone: str) -> Any:
    """Return the record without the id in these keys, None if the record goes with it."""
    changes: dict[str, Any] = {}
    for key in keys:
        value = getattr(record, key)
        if value == gone:
            changes[key] = None
        elif isinstance(value, tuple) and gone in value:
            changes[key] = tuple(one for one in value if one != gone)
    if not changes:
        return record
    if changes.get("groups") == ():
        return None
    if isinstance(record, Person) and changes.get("stations") == ():
        changes |= {"cap_min": 0, "notes": {**record.notes, "cap_min": Note(mark="own")}}
    return structs.replace(record, **changes)
