"""Hypothesis strategies for plans, built from the field table so that they follow every later field.

`plans()` gives plans without errors; `records(kind)` single records with values inside their ranges.
"""

from __future__ import annotations

import datetime as dt
from typing import Any

from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.fields import FIELDS, RECORD_TYPES, SECTION_KINDS, STAGE_KINDS, FieldSpec
from kitplanner.plan.records import Bout, ChargeSpell, Conditions, Note, Plan, Rota, Spell, Window

NAMES = st.text(st.characters(codec="utf-8", exclude_categories=("Cs", "Cc")), max_size=12)
MINUTES = st.integers(0, 1439)


def clock(minutes: int) -> str:
    return f"{minutes // 60:02d}:{minutes % 60:02d}"


@st.composite
def a_window(draw: st.DrawFn) -> Window:
    start = draw(MINUTES)
    length = draw(st.integers(1, 1439))
    end = (start + length) % 1440
    return Window(start=clock(start), end="24:00" if end == 0 else clock(end))


WINDOWS = st.lists(a_window(), max_size=3).map(tuple)


def numbers(spec: FieldSpec) -> st.SearchStrategy[Any]:
    low = -1e6 if spec.low is None else spec.low
    high = 1e6 if spec.high is None else spec.high
    if spec.kind == "integer":
        return st.integers(int(low), int(high))
    return st.floats(low, high, exclude_min=spec.low_open, exclude_max=spec.high_open, allow_subnormal=False)


def values(kind: str, spec: FieldSpec, ids: dict[str, list[str]]) -> st.SearchStrategy[Any]:
    """Strategy of values one field may hold; `ids` names the records that references may point to."""
    known = ids.get(spec.refs_to, [])
    made: st.SearchStrategy[Any]
    if kind == "temperature" and spec.key in ("start", "end"):
        made = st.just("00:00" if spec.key == "start" else "24:00")
    elif (kind, spec.key) in (("plan", "grid_min"), ("rota", "slot_min")):
        # A rota's grid divides the day.
        made = st.sampled_from([step for step in range(5, 61) if 1440 % step == 0])
    else:
        made = {
            "text": lambda: NAMES,
            "number": lambda: numbers(spec),
            "integer": lambda: numbers(spec),
            "flag": st.booleans,
            "choice": lambda: st.sampled_from([value for value, _ in spec.choices]),
            "windows": lambda: WINDOWS,
            "days": lambda: st.lists(st.integers(1, 366), max_size=3).map(tuple),
            "date": lambda: st.dates(dt.date(2000, 1, 1), dt.date(2100, 1, 1)),
            "refs": lambda: st.lists(st.sampled_from(known), unique=True).map(tuple) if known else st.just(()),
            "ref": lambda: st.sampled_from(known) if known else st.none(),
        }[spec.kind]()
    return st.none() | made if spec.optional else made


@st.composite
def records(draw: st.DrawFn, kind: str, own_id: str = "X1", ids: dict[str, list[str]] | None = None) -> Any:
    """A record of a kind with sound values; a fraction of the fields stays at its default."""
    made = RECORD_TYPES[kind]
    chosen: dict[str, Any] = {"id": own_id} if "id" in made.__struct_fields__ else {}
    required = {one.name for one in structs.fields(made) if one.required}
    for spec in FIELDS[kind]:
        if spec.key in required or draw(st.integers(0, 2)) == 0:
            chosen[spec.key] = draw(values(kind, spec, ids or {}))
    if kind == "station":
        chosen |= draw(station_parts())
    noted = draw(st.none() | st.sampled_from([spec.key for spec in FIELDS[kind]]))
    if noted is not None:
        spread = draw(st.none() | st.floats(0, 1))
        chosen["notes"] = {noted: Note(mark="measured", source=draw(NAMES), spread_fraction=spread)}
    return made_sound(made(**chosen))


@st.composite
def station_parts(draw: st.DrawFn) -> dict[str, Any]:
    kinds = draw(st.lists(st.sampled_from(STAGE_KINDS), max_size=3))
    return {
        "machine": draw(st.none() | records("machine")),
        "gear": draw(st.none() | records("gear")),
        "test_load": draw(st.none() | records("test_load")),
        "stages": tuple(draw(records(kind, f"s{index}")) for index, kind in enumerate(kinds)),
    }


def made_sound(record: Any) -> Any:
    """Return the record with what the checks ask of fields that belong together."""
    kind = type(record).__name__
    changes: dict[str, Any] = {}
    if kind == "Station":
        changes = sound_station(record)
    elif kind == "Device":
        changes = sound_device(record)
    elif kind == "Person" and record.watts_by == "self_test":
        changes = {"age": 40}
    return structs.replace(record, **changes)


def sound_station(station: Any) -> dict[str, Any]:
    changes: dict[str, Any] = {}
    if station.described_by == "measured" and station.output_w is None:
        changes["output_w"] = 6.0
    if station.described_by == "label" and station.label_w is None:
        changes["label_w"] = 6.0
    if station.described_by == "parts":
        changes["machine"] = station.machine or RECORD_TYPES["machine"](ke_v_s=0.05, ra_ohm=1.0)
        changes["gear"] = station.gear or RECORD_TYPES["gear"](ratio=30.0)
    low, high = station.comfort_low_rpm, station.comfort_high_rpm
    if low is not None and high is not None and low > high:
        changes |= {"comfort_low_rpm": high, "comfort_high_rpm": low}
    return changes


def sound_device(device: Any) -> dict[str, Any]:
    fallback = {
        "use_w": 1.0,
        "use_h_per_day": 2.0,
        "use_wh_per_day": 3.0,
        "use_battery_fraction_per_day": 0.3,
        "use_times_per_day": 4.0,
        "use_min_each": 5.0,
    }
    changes: dict[str, Any] = {key: value for key, value in fallback.items() if getattr(device, key) is None}
    if device.use_by == "times":
        changes |= {"use_times_per_day": 4.0, "use_min_each": 5.0}
    if device.use_by == "percent" and device.battery_wh is None:
        changes["battery_wh"] = 10.0
    if device.floor_fraction >= device.target_fraction:
        changes |= {"floor_fraction": 0.1, "target_fraction": 1.0}
    return changes


@st.composite
def a_spell(draw: st.DrawFn) -> Spell:
    start, end = sorted(draw(st.lists(st.integers(0, 1440), min_size=2, max_size=2, unique=True)))
    return Spell(day=draw(st.integers(1, 366)), start=clock(start), end=clock(end), count=draw(st.integers(1, 5)))


SPELLS = st.lists(a_spell(), max_size=2).map(tuple)


@st.composite
def adopted_rotas(draw: st.DrawFn, ids: dict[str, list[str]]) -> Rota:
    """An adopted rota that names only records which are there; legal or not."""
    bouts, charging = [], []
    for number in range(draw(st.integers(0, 3)) if ids["people"] and ids["stations"] else 0):
        part = draw(a_spell())
        person, station = draw(st.sampled_from(ids["people"])), draw(st.sampled_from(ids["stations"]))
        watcher = draw(st.none() | st.sampled_from(ids["people"]))
        when = {"day": part.day, "start": part.start, "end": part.end}
        bouts.append(Bout(id=f"b{number}", **when, station=station, person=person, watcher=watcher))
    for number in range(draw(st.integers(0, 2)) if ids["devices"] else 0):
        part = draw(a_spell())
        when = {"day": part.day, "start": part.start, "end": part.end}
        device = draw(st.sampled_from(ids["devices"]))
        charging.append(ChargeSpell(id=f"c{number}", **when, device=device, energy_wh=draw(st.floats(0, 1e3))))
    rota: Rota = draw(records("rota", "rota-1"))
    return structs.replace(rota, bouts=tuple(bouts), charging=tuple(charging))


@st.composite
def plans(draw: st.DrawFn, most: int = 3) -> Plan:
    """A plan without errors, with at most `most` records in each section."""
    counts = {section: draw(st.integers(0, most)) for section in SECTION_KINDS}
    ids = {section: [f"{section}-{number}" for number in range(count)] for section, count in counts.items()}
    sections = {
        section: tuple(draw(records(kind, own_id, ids)) for own_id in ids[section])
        for section, kind in SECTION_KINDS.items()
    }
    conditions: Conditions = draw(records("conditions"))
    parts = tuple(draw(records("temperature", f"T{number}")) for number in range(draw(st.integers(0, 2))))
    top: Plan = draw(records("plan"))
    sections["people"] = tuple(structs.replace(one, absences=draw(SPELLS)) for one in sections["people"])
    sections["stations"] = tuple(structs.replace(one, outages=draw(SPELLS)) for one in sections["stations"])
    rota = draw(st.none() | adopted_rotas(ids))
    return structs.replace(top, conditions=structs.replace(conditions, temperatures=parts), rota=rota, **sections)
