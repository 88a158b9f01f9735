"""FIELDS: every editable key of every record kind, the one table that forms, columns, checks, help and print read.

Labels and help texts are marked for translation in the context "Fields". Record kinds are named as in
`RECORD_TYPES`; the kind of a stage is the tag it has in the file.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from msgspec import NODEFAULT, Struct, structs

from kitplanner.plan import (
    fields_devices,
    fields_machine,
    fields_people,
    fields_plan,
    fields_stages,
    fields_station,
    fields_stores,
    records,
)
from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP, FieldKind, FieldSpec, ShownWhen

__all__ = [
    "FIELDS",
    "NESTED",
    "QT_TRANSLATE_NOOP",
    "RECORD_TYPES",
    "SECTION_KINDS",
    "STAGE_KINDS",
    "FieldKind",
    "FieldSpec",
    "ShownWhen",
    "field",
    "is_shown",
    "kind_of",
    "spec_of",
]

RECORD_TYPES: Mapping[str, type[records.Record]] = MappingProxyType(
    {
        "plan": records.Plan,
        "conditions": records.Conditions,
        "temperature": records.TemperaturePart,
        "block": records.Block,
        "group": records.Group,
        "person": records.Person,
        "station": records.Station,
        "machine": records.Machine,
        "gear": records.Gear,
        "diode": records.DiodeStage,
        "synchronous": records.SynchronousStage,
        "linear": records.LinearStage,
        "converter": records.ConverterStage,
        "cable": records.CableStage,
        "loss": records.LossStage,
        "test_load": records.TestLoad,
        "store": records.Store,
        "other_source": records.OtherSource,
        "device": records.Device,
        "charging_point": records.ChargingPoint,
        "medical_need": records.MedicalNeed,
        "pack_item": records.PackItem,
        "log_entry": records.LogEntry,
        "rota": records.Rota,
    }
)

# Section of the plan -> kind of its records.
SECTION_KINDS: Mapping[str, str] = MappingProxyType(
    {
        "blocks": "block",
        "groups": "group",
        "people": "person",
        "stations": "station",
        "stores": "store",
        "devices": "device",
        "charging_points": "charging_point",
        "other_sources": "other_source",
        "medical_needs": "medical_need",
        "pack_items": "pack_item",
        "log": "log_entry",
    }
)

STAGE_KINDS = ("diode", "synchronous", "linear", "converter", "cable", "loss")

# Keys that hold records of their own and therefore no FieldSpec, besides `id` and `notes`.
NESTED: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "plan": ("format", "version", "conditions", "rota", *records.SECTIONS),
        "conditions": ("temperatures",),
        "person": ("absences",),
        "station": ("machine", "gear", "stages", "test_load", "outages"),
        "rota": ("bouts", "charging"),
    }
)

_TABLE: Mapping[str, tuple[FieldSpec, ...]] = MappingProxyType(
    {
        "plan": fields_plan.PLAN,
        "conditions": fields_plan.CONDITIONS,
        "temperature": fields_plan.TEMPERATURE,
        "block": fields_plan.BLOCK,
        "group": fields_plan.GROUP,
        "person": fields_people.PERSON,
        "station": fields_station.STATION,
        "machine": fields_machine.MACHINE,
        "gear": fields_machine.GEAR,
        "test_load": fields_machine.TEST_LOAD,
        "diode": fields_stages.DIODE,
        "synchronous": fields_stages.SYNCHRONOUS,
        "linear": fields_stages.LINEAR,
        "converter": fields_stages.CONVERTER,
        "cable": fields_stages.CABLE,
        "loss": fields_stages.LOSS,
        "store": fields_stores.STORE,
        "other_source": fields_stores.OTHER_SOURCE,
        "device": fields_devices.DEVICE,
        "charging_point": fields_stores.CHARGING_POINT,
        "medical_need": fields_stores.MEDICAL_NEED,
        "pack_item": fields_stores.PACK_ITEM,
        "log_entry": fields_stores.LOG_ENTRY,
        "rota": fields_stores.ROTA,
    }
)


def _with_record_defaults(kind: str, specs: tuple[FieldSpec, ...]) -> tuple[FieldSpec, ...]:
    """Return the specs with the record's own default filled in, so that it is written down only once."""
    record_defaults = {
        one.name: one.default
        for one in structs.fields(RECORD_TYPES[kind])
        if one.default not in (NODEFAULT, None, "", ())
    }
    return tuple(
        structs.replace(spec, default=record_defaults[spec.key])
        if spec.default is None and spec.key in record_defaults
        else spec
        for spec in specs
    )


FIELDS: Mapping[str, tuple[FieldSpec, ...]] = MappingProxyType(
    {kind: _with_record_defaults(kind, specs) for kind, specs in _TABLE.items()}
)

_BY_KEY: Mapping[tuple[str, str], FieldSpec] = MappingProxyType(
    {(kind, spec.key): spec for kind, specs in FIELDS.items() for spec in specs}
)
_KIND_BY_TYPE: Mapping[type[Struct], str] = MappingProxyType({made: kind for kind, made in RECORD_TYPES.items()})


def field(kind: str, key: str) -> FieldSpec:
    """Return the spec of one key of one record kind; KeyError if there is none.

    Examples
    --------
    >>> field("person", "cap_min").unit
    'min'
    """
    return _BY_KEY[kind, key]


def kind_of(record: records.Record) -> str:
    """Return the kind of a record as FIELDS names it.

    Examples
    --------
    >>> kind_of(records.CableStage(id="s1", name="Lead"))
    'cable'
    """
    return _KIND_BY_TYPE[type(record)]


def spec_of(record: records.Record, key: str) -> FieldSpec | None:
    """Return the spec of a key of a record, None where it has none (ids, nested records, parts of a rota).

    Examples
    --------
    >>> spec_of(records.Group(id="G", name="Leaders"), "id") is None
    True
    """
    return _BY_KEY.get((_KIND_BY_TYPE.get(type(record), ""), key))


def is_shown(spec: FieldSpec, record: records.Record) -> bool:
    """Tell whether a field matters for a record as it is described now.

    Examples
    --------
    >>> is_shown(field("station", "label_w"), records.Station(id="S", name="Crank"))
    False
    """
    return spec.shown_when is None or getattr(record, spec.shown_when[0]) in spec.shown_when[1]
