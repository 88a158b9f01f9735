"""The plan as frozen records; each attribute is one key of the plan file.

Records are never changed in place: an edit builds a new plan that shares every untouched record with
the old one (`plan/edits.py`), so undo is a reference and a planner sees by identity what changed.

Units are in the names (`_w _wh _min _v _a _ohm _rpm _nm _degc`); `eta*` and `*_fraction` run from 0 to 1.
`None` always means "use the default", and the default is in `plan/fields.py` with its source, or in the
law that needs it; the file leaves out None and empty collections and spells out everything else, so a
later change of a default never changes an old plan. Clock times are text "HH:MM" from 00:00 to 24:00; a
window whose end is before its start crosses midnight.
"""

from __future__ import annotations

import datetime as dt
from typing import Literal

from kitplanner.plan.records_base import ClockTime, Mark, Note, Record, Spell, Window
from kitplanner.plan.records_energy import (
    ChargingPoint,
    Chemistry,
    Device,
    MedicalNeed,
    OtherSource,
    PackItem,
    Store,
    UseBy,
)
from kitplanner.plan.records_people import Block, BlockKind, Conditions, Group, Level, Person, TemperaturePart, WattsBy
from kitplanner.plan.records_rota import Bout, ChargeSpell, LogEntry, Rota, RotaState
from kitplanner.plan.records_stations import (
    CableStage,
    ConverterStage,
    DescribedBy,
    DiodeStage,
    Gear,
    LinearStage,
    LossStage,
    Machine,
    Stage,
    Station,
    StationKind,
    SynchronousStage,
    TestLoad,
)

__all__ = [
    "FORMAT",
    "SECTIONS",
    "VERSION",
    "Block",
    "BlockKind",
    "Bout",
    "CableStage",
    "ChargeSpell",
    "ChargingPoint",
    "Chemistry",
    "ClockTime",
    "Conditions",
    "ConverterStage",
    "Cut",
    "DescribedBy",
    "Device",
    "DiodeStage",
    "Gear",
    "Group",
    "Level",
    "LinearStage",
    "LogEntry",
    "LossStage",
    "Machine",
    "Mark",
    "MedicalNeed",
    "Note",
    "OtherSource",
    "PackItem",
    "Person",
    "Plan",
    "Record",
    "Rota",
    "RotaState",
    "Spell",
    "Stage",
    "Station",
    "StationKind",
    "Store",
    "SynchronousStage",
    "TemperaturePart",
    "TestLoad",
    "UseBy",
    "WattsBy",
    "Window",
]

FORMAT = "kitplanner-plan"
VERSION = 1

Cut = Literal["strict", "shared"]


class Plan(Record, frozen=True):
    """The whole document: one household, camp, shelter or bench."""

    format: str = FORMAT
    version: int = VERSION
    title: str = ""
    place: str = ""
    start: dt.date = dt.date(2026, 1, 1)
    days: int = 3
    margin_fraction: float = 0.15
    seed: int = 1
    cut: Cut = "strict"
    grid_min: int | None = None
    conditions: Conditions = Conditions()
    blocks: tuple[Block, ...] = ()
    groups: tuple[Group, ...] = ()
    people: tuple[Person, ...] = ()
    stations: tuple[Station, ...] = ()
    stores: tuple[Store, ...] = ()
    devices: tuple[Device, ...] = ()
    charging_points: tuple[ChargingPoint, ...] = ()
    other_sources: tuple[OtherSource, ...] = ()
    medical_needs: tuple[MedicalNeed, ...] = ()
    pack_items: tuple[PackItem, ...] = ()
    rota: Rota | None = None
    log: tuple[LogEntry, ...] = ()
    notes: dict[str, Note] = {}


# Record collections of a plan in file order; every one holds records with `id` and `name`.
SECTIONS = (
    "blocks",
    "groups",
    "people",
    "stations",
    "stores",
    "devices",
    "charging_points",
    "other_sources",
    "medical_needs",
    "pack_items",
    "log",
)
