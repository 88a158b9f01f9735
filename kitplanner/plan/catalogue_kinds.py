"""Catalogue of generic kinds of devices, stores and stations, each value with mark, source and spread.

The kinds stand in `resources/catalogue/*.json`; a record made from one carries its notes, so that forms, traces
and papers show where each figure comes from until somebody writes an own one.
"""

from __future__ import annotations

from functools import cache
from typing import Any, Literal

import msgspec
from msgspec import Struct, structs

from kitplanner.plan.edits import Edit, EditError, add_record, new_id
from kitplanner.plan.fields import RECORD_TYPES, SECTION_KINDS
from kitplanner.plan.places import short
from kitplanner.plan.records import Device, Note, Plan, Station, Store
from kitplanner.plan.shipped import resource

CatalogueSection = Literal["devices", "stores", "stations"]
CATALOGUE_SECTIONS: tuple[CatalogueSection, ...] = ("devices", "stores", "stations")


class CatalogueKind(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """One generic kind: what it is called, one line of help, values of a record and where they come from."""

    key: str
    section: CatalogueSection
    name: str
    help: str
    values: dict[str, Any]
    notes: dict[str, Note]


class _CatalogueFile(Struct, frozen=True, forbid_unknown_fields=True):
    kinds: tuple[CatalogueKind, ...]


@cache
def kinds(section: CatalogueSection) -> tuple[CatalogueKind, ...]:
    """Return the kinds of a section in the order of the catalogue.

    Examples
    --------
    >>> [kind.key for kind in kinds("stations")]
    ['hand_crank', 'pocket_crank', 'pedal_stand', 'treadle']
    """
    data = resource(f"catalogue/{section}.json").read_bytes()
    return msgspec.json.decode(data, type=_CatalogueFile).kinds


def kind(key: str) -> CatalogueKind:
    """Return a kind by its key.

    Raises
    ------
    EditError
        There is no such kind.

    Examples
    --------
    >>> kind("power_bank_10").values["nominal_wh"]
    37.0
    """
    for section in CATALOGUE_SECTIONS:
        for one in kinds(section):
            if one.key == key:
                return one
    raise EditError(("catalogue",), f"there is no kind {short(key)}", "choose one of the catalogue")


def record_of(key: str, record_id: str, count: int = 1) -> Device | Store | Station:
    """Return a record of a kind with its notes; `count` units alike.

    Examples
    --------
    >>> record_of("smartphone", "D1", 3).notes["battery_wh"].mark
    'default'
    """
    what = kind(key)
    made = RECORD_TYPES[SECTION_KINDS[what.section]]
    values = {"id": record_id, "name": what.name, "count": count, **what.values}
    record = msgspec.convert(values, made, strict=True)
    return structs.replace(record, notes=what.notes)  # type: ignore[return-value]


def add_kind(key: str, count: int = 1) -> Edit:
    """Return the edit that adds a record of a kind at the end of its section."""

    def edit(plan: Plan) -> Plan:
        section = kind(key).section
        record = record_of(key, new_id(plan, section), count)
        return add_record((section,), record)(plan)

    return edit
