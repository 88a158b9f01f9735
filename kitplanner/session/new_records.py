"""What a new record starts as: plain values that calculate at once, each marked as a guess or a default.

A fresh record without watts or watt-hours would stop every answer; a marked starting value keeps the plan
calculating and shows in the form that it still has to be replaced by a measured one.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any

from msgspec.structs import replace
from PySide6.QtCore import QCoreApplication

from kitplanner.plan.edits import Edit, Path, get_value, replace_record
from kitplanner.plan.fields import QT_TRANSLATE_NOOP, RECORD_TYPES
from kitplanner.plan.records import (
    Block,
    CableStage,
    ChargingPoint,
    ConverterStage,
    Device,
    DiodeStage,
    Gear,
    Group,
    Machine,
    MedicalNeed,
    Note,
    OtherSource,
    Person,
    Plan,
    Station,
    Store,
    TemperaturePart,
    TestLoad,
    Window,
)

_GUESS = Note(mark="guess", source="starting value of a new record; replace it by your own")

# One of several of a section, for undo texts ("Add person") and buttons.
_SINGULAR: Mapping[str, str] = MappingProxyType(
    {
        "people": QT_TRANSLATE_NOOP("Fields", "person"),
        "stations": QT_TRANSLATE_NOOP("Fields", "station"),
        "stores": QT_TRANSLATE_NOOP("Fields", "store"),
        "devices": QT_TRANSLATE_NOOP("Fields", "device"),
        "charging_points": QT_TRANSLATE_NOOP("Fields", "charging point"),
        "other_sources": QT_TRANSLATE_NOOP("Fields", "other source"),
        "medical_needs": QT_TRANSLATE_NOOP("Fields", "medical equipment"),
        "blocks": QT_TRANSLATE_NOOP("Fields", "blocked time"),
        "groups": QT_TRANSLATE_NOOP("Fields", "group"),
        "conditions": QT_TRANSLATE_NOOP("Fields", "conditions"),
        "temperature": QT_TRANSLATE_NOOP("Fields", "temperature"),
        "machine": QT_TRANSLATE_NOOP("Fields", "machine"),
        "gear": QT_TRANSLATE_NOOP("Fields", "gear"),
        "test_load": QT_TRANSLATE_NOOP("Fields", "test load"),
    }
)

# Kinds of part that a nested list can add, with their words.
STAGE_WORDS: Mapping[str, str] = MappingProxyType(
    {
        "diode": QT_TRANSLATE_NOOP("Fields", "Diodes"),
        "synchronous": QT_TRANSLATE_NOOP("Fields", "Synchronous rectifier"),
        "linear": QT_TRANSLATE_NOOP("Fields", "Linear regulator"),
        "converter": QT_TRANSLATE_NOOP("Fields", "Switching converter"),
        "cable": QT_TRANSLATE_NOOP("Fields", "Cable and contacts"),
        "loss": QT_TRANSLATE_NOOP("Fields", "Other step, by efficiency"),
    }
)


def singular(section: str) -> str:
    """Return the word for one record of a section, not yet translated."""
    return _SINGULAR.get(section, section)


def stage_word(kind: str) -> str:
    """Return the word for a kind of part, not yet translated."""
    return STAGE_WORDS.get(kind, singular(kind))


def _stage_name(kind: str) -> str:
    return QCoreApplication.translate("Fields", STAGE_WORDS[kind])


def new_record(section: str, record_id: str) -> Any:
    """Make a record of a section with its starting values."""
    match section:
        case "people":
            return Person(id=record_id, name=record_id)
        case "stations":
            return Station(id=record_id, name=record_id, output_w=6.0, notes={"output_w": _GUESS})
        case "stores":
            return Store(id=record_id, name=record_id, notes={"nominal_wh": _GUESS})
        case "devices":
            notes = {"battery_wh": _GUESS, "use_wh_per_day": _GUESS}
            return Device(id=record_id, name=record_id, battery_wh=15.4, use_wh_per_day=6.0, notes=notes)
        case "charging_points":
            return ChargingPoint(id=record_id, name=record_id, hours=(Window(start="08:00", end="20:00"),))
        case "other_sources":
            return OtherSource(id=record_id, name=record_id)
        case "medical_needs":
            return MedicalNeed(id=record_id, name=record_id)
        case "blocks":
            return Block(id=record_id, name=record_id)
        case "groups":
            return Group(id=record_id, name=record_id)
        case _:
            raise ValueError(f"no records can be added to {section}")


def new_part(kind: str, part_id: str) -> Any:
    """Make a part of a nested list: a stage of a kind, or a temperature."""
    if kind == "temperature":
        return TemperaturePart(id=part_id, name="", air_degc=20.0)
    make: Callable[..., Any] = RECORD_TYPES[kind]
    notes = {"loop_ohm": _GUESS} if kind == "cable" else {}
    more = {"loop_ohm": 0.25} if kind == "cable" else {}
    return make(id=part_id, name=_stage_name(kind), notes=notes, **more)


def edit_described_by(path: Path, described_by: str) -> Edit:
    """Give a station that is now described by its parts (or by its label) what it lacks for it."""

    def edit(plan: Plan) -> Plan:
        station = get_value(plan, path)
        changed = _with_parts(station) if described_by == "parts" else _with_watts(station, described_by)
        return plan if changed is station else replace_record(path, changed)(plan)

    return edit


def _with_watts(station: Station, described_by: str) -> Station:
    """Fill in a missing output or label figure."""
    key = "label_w" if described_by == "label" else "output_w"
    if getattr(station, key) is not None:
        return station
    return replace(station, **{key: 6.0}, notes={**station.notes, key: _GUESS})


def _with_parts(station: Station) -> Station:
    """Fill in a missing machine, gear, chain and test load with a small hand crank's typical parts."""
    changes: dict[str, Any] = {}
    if station.machine is None:
        notes = dict.fromkeys(("ke_v_s", "ra_ohm", "tc_nm", "b_nm_s"), _GUESS)
        changes["machine"] = Machine(ke_v_s=0.0215, ra_ohm=4.0, tc_nm=0.001, b_nm_s=1.9e-6, notes=notes)
    if station.gear is None:
        notes = dict.fromkeys(("ratio", "eta", "drag_nm"), _GUESS)
        changes["gear"] = Gear(ratio=30.0, eta=0.75, drag_nm=0.02, notes=notes)
    if not station.stages:
        changes["stages"] = (
            DiodeStage(id="s1", name=_stage_name("diode"), series=2),
            ConverterStage(id="s2", name=_stage_name("converter")),
            CableStage(id="s3", name=_stage_name("cable"), loop_ohm=0.25, notes={"loop_ohm": _GUESS}),
        )
    if station.test_load is None:
        changes["test_load"] = TestLoad()
    return replace(station, **changes) if changes else station
