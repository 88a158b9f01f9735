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
from typing import Annotated, Literal

from msgspec import Meta, Struct

FORMAT = "kitplanner-plan"
VERSION = 1

ClockTime = Annotated[str, Meta(pattern=r"^(([01][0-9]|2[0-3]):[0-5][0-9]|24:00)$")]

WattsBy = Literal["level", "share", "own", "self_test"]
Level = Literal["light", "usual", "strong"]
StationKind = Literal["crank", "pocket_crank", "pedal", "treadle", "rocker"]
DescribedBy = Literal["measured", "label", "parts"]
Chemistry = Literal["li_ion", "lfp", "nimh", "lead_acid", "supercapacitor", "alkaline"]
UseBy = Literal["power_hours", "wh_per_day", "percent", "times"]
BlockKind = Literal["quiet", "meal", "school", "prayer", "duty"]
Cut = Literal["strict", "shared"]
RotaState = Literal["draft", "posted"]
Mark = Literal["measured", "default", "guidance", "guess", "own", "demo"]


class Record(Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """Base of every record: frozen, unknown keys refused."""


class Note(Record, frozen=True):
    """Where one value of a record comes from, kept only where it differs from its FieldSpec."""

    mark: Mark = "own"
    source: str = ""
    spread_fraction: float | None = None


class Window(Record, frozen=True):
    """A part of the day; an end before the start crosses midnight."""

    start: ClockTime
    end: ClockTime


class Spell(Record, frozen=True):
    """Part of one day of the plan in which somebody is away or `count` units are out of service."""

    day: int
    start: ClockTime = "00:00"
    end: ClockTime = "24:00"
    count: int = 1


class TemperaturePart(Record, frozen=True):
    """Temperature in one part of one day (day 0: every day), overriding `Conditions.air_degc`."""

    id: str
    name: str = ""
    day: int = 0
    start: ClockTime = "00:00"
    end: ClockTime = "24:00"
    air_degc: float | None = None
    wbgt_degc: float | None = None
    notes: dict[str, Note] = {}


class Conditions(Record, frozen=True):
    """Surroundings and the switches for rules that depend on them."""

    air_degc: float = 20.0
    temperatures: tuple[TemperaturePart, ...] = ()
    dark: tuple[Window, ...] = ()
    heat_limits: bool = False
    ramp_up: bool = False
    minors_hours: tuple[Window, ...] = ()
    notes: dict[str, Note] = {}


class Block(Record, frozen=True):
    """Time in which nobody of the named groups works (empty `groups`: all; empty `days`: every day)."""

    id: str
    name: str
    kind: BlockKind = "duty"
    groups: tuple[str, ...] = ()
    days: tuple[int, ...] = ()
    windows: tuple[Window, ...] = ()
    notes: dict[str, Note] = {}


class Group(Record, frozen=True):
    """A set of people that blocks can name."""

    id: str
    name: str
    notes: dict[str, Note] = {}


class Person(Record, frozen=True):
    """One person: how many watts, for how long, when and where; never a reason for a limit."""

    id: str
    name: str
    group: str | None = None
    age: int | None = None
    watts_by: WattsBy = "level"
    level: Level = "usual"
    share_legs_fraction: float | None = None
    share_arms_fraction: float | None = None
    own_legs_w: float | None = None
    own_arms_w: float | None = None
    test_legs_w: float | None = None
    test_arms_w: float | None = None
    mass_kg: float | None = None
    bout_min: int | None = None
    rest_min: int | None = None
    cap_min: int | None = None
    hours: tuple[Window, ...] = ()
    stations: tuple[str, ...] = ()
    role: str = ""
    may_watch: bool | None = None
    watch_hours: tuple[Window, ...] = ()
    days_off: tuple[int, ...] = ()
    absences: tuple[Spell, ...] = ()
    notes: dict[str, Note] = {}


class Machine(Record, frozen=True):
    """Permanent-magnet DC machine used as a generator."""

    ke_v_s: float
    ra_ohm: float
    vb_v: float = 0.0
    tc_nm: float = 0.0
    b_nm_s: float = 0.0
    notes: dict[str, Note] = {}


class Gear(Record, frozen=True):
    """Step-up gear between handle and machine."""

    ratio: float
    eta: float = 0.85
    drag_nm: float = 0.0
    notes: dict[str, Note] = {}


class DiodeStage(Record, frozen=True, tag_field="kind", tag="diode"):
    """One or more diodes in series with the current (1 blocking diode, 2 a bridge)."""

    id: str
    name: str
    series: int = 1
    saturation_a: float = 1.2e-6
    ideality: float = 1.05
    series_ohm: float = 0.08
    notes: dict[str, Note] = {}


class SynchronousStage(Record, frozen=True, tag_field="kind", tag="synchronous"):
    """Transistors that replace diodes."""

    id: str
    name: str
    series: int = 2
    on_ohm: float = 0.010
    quiescent_a: float = 0.0
    notes: dict[str, Note] = {}


class LinearStage(Record, frozen=True, tag_field="kind", tag="linear"):
    """Adjustable three-terminal linear regulator set by a divider."""

    id: str
    name: str
    r1_ohm: float = 120.0
    r2_ohm: float = 360.0
    reference_v: float = 1.25
    adjust_a: float = 50e-6
    dropout_v: float = 1.6
    dropout_ohm: float = 0.35
    theta_c_per_w: float = 50.0
    air_degc: float = 25.0
    rating_v: float = 40.0
    resistor_tolerance_fraction: float = 0.01
    notes: dict[str, Note] = {}


class ConverterStage(Record, frozen=True, tag_field="kind", tag="converter"):
    """Switching converter with the loss law (a0 + a1 V) + (b0 + b1 V) I + c I^2."""

    id: str
    name: str
    output_v: float = 5.10
    a0_w: float = 0.02
    a1_w_per_v: float = 0.002
    b0_v: float = 0.08
    b1_v_per_v: float = 0.008
    c_ohm: float = 0.06
    headroom_v: float = 0.5
    lockout_v: float = 6.0
    rating_v: float = 40.0
    notes: dict[str, Note] = {}


class CableStage(Record, frozen=True, tag_field="kind", tag="cable"):
    """Cable and contacts: a resistance, or a wire size and length it follows from."""

    id: str
    name: str
    loop_ohm: float | None = None
    awg: int | None = None
    area_mm2: float | None = None
    length_m: float = 1.0
    contacts: int = 4
    contact_ohm: float = 0.030
    copper_degc: float = 20.0
    notes: dict[str, Note] = {}


class LossStage(Record, frozen=True, tag_field="kind", tag="loss"):
    """Any other step known only by its efficiency; volts pass, amps shrink."""

    id: str
    name: str
    eta: float = 0.9
    notes: dict[str, Note] = {}


Stage = DiodeStage | SynchronousStage | LinearStage | ConverterStage | CableStage | LossStage


class TestLoad(Record, frozen=True):
    """What the bench hangs on the station: a charger and a cell. Effort uses the device's own."""

    charger_eta: float = 0.90
    cell_eta: float = 0.97
    hold_v: float = 4.40
    limit_a: float = 1.0
    least_a: float = 0.10
    cell_degc: float = 20.0
    notes: dict[str, Note] = {}


class Station(Record, frozen=True):
    """A crank or pedal place with an output socket, described by measurement, label or parts."""

    id: str
    name: str
    kind: StationKind = "crank"
    count: int = 1
    place: str = ""
    hours: tuple[Window, ...] = ()
    slot_min: int = 20
    daily_min: int | None = None
    changeover_min: int = 0
    needs_watcher: bool = False
    guarded: bool = True
    in_service: bool = True
    outages: tuple[Spell, ...] = ()
    feeds: tuple[str, ...] = ()
    connector: str = ""
    described_by: DescribedBy = "measured"
    output_w: float | None = None
    label_w: float | None = None
    eta_fraction: float = 0.50
    drag_fraction: float | None = None
    on_min: int | None = None
    off_min: int | None = None
    crank_radius_m: float | None = None
    comfort_low_rpm: float | None = None
    comfort_high_rpm: float | None = None
    torque_max_nm: float | None = None
    machine: Machine | None = None
    gear: Gear | None = None
    stages: tuple[Stage, ...] = ()
    test_load: TestLoad | None = None
    notes: dict[str, Note] = {}


class Store(Record, frozen=True):
    """A battery between stations and devices; values are per unit, `count` units alike."""

    id: str
    name: str
    count: int = 1
    chemistry: Chemistry = "li_ion"
    nominal_wh: float = 37.0
    health_fraction: float = 1.0
    start_fraction: float = 1.0
    floor_fraction: float = 0.10
    eta_in: float = 0.90
    eta_out: float = 0.85
    outlets: int = 2
    charge_limit_w: float | None = None
    self_discharge_fraction_per_month: float = 0.02
    connector: str = ""
    place: str = ""
    notes: dict[str, Note] = {}


class OtherSource(Record, frozen=True):
    """Energy that reaches the stores' input without anybody turning."""

    id: str
    name: str
    wh_per_day: float = 0.0
    windows: tuple[Window, ...] = ()
    notes: dict[str, Note] = {}


class Device(Record, frozen=True):
    """Devices of one kind, `count` alike; `battery_wh` None means it runs only while fed."""

    id: str
    name: str
    count: int = 1
    kind: str = ""
    battery_wh: float | None = None
    use_by: UseBy = "wh_per_day"
    use_w: float | None = None
    use_h_per_day: float | None = None
    use_wh_per_day: float | None = None
    use_battery_fraction_per_day: float | None = None
    use_times_per_day: float | None = None
    use_min_each: float | None = None
    use_windows: tuple[Window, ...] = ()
    charge_w: float | None = None
    charge_rate_per_h: float = 0.5
    taper_end_per_h: float = 0.05
    taper_tau_h: float = 0.30
    input_limit_a: float | None = None
    input_hold_v: float = 4.40
    input_least_a: float = 0.10
    charge_windows: tuple[Window, ...] = ()
    start_fraction: float = 1.0
    target_fraction: float = 1.0
    floor_fraction: float = 0.10
    eta: float = 0.85
    priority: int = 3
    connector: str = ""
    evening: bool = False
    planning_computer: bool = False
    notes: dict[str, Note] = {}


class ChargingPoint(Record, frozen=True):
    """An attended place where devices are charged."""

    id: str
    name: str
    hours: tuple[Window, ...] = ()
    outlets: int = 4
    attendant: str | None = None
    place: str = ""
    notes: dict[str, Note] = {}


class MedicalNeed(Record, frozen=True):
    """Powered medical equipment: power and hours only, kept outside the balance, never a person."""

    id: str
    name: str
    power_w: float = 0.0
    hours_per_day: float = 0.0
    count: int = 1
    notes: dict[str, Note] = {}


class PackItem(Record, frozen=True):
    """Something that could be packed."""

    id: str
    name: str
    notes: dict[str, Note] = {}


class LogEntry(Record, frozen=True):
    """One line of the day's paper log."""

    id: str
    name: str = ""
    notes: dict[str, Note] = {}


class Bout(Record, frozen=True):
    """One unbroken stretch of turning in an adopted rota; a locked one stays where it is."""

    id: str
    day: int
    start: ClockTime
    end: ClockTime
    station: str
    person: str
    unit: int = 1
    watcher: str | None = None
    locked: bool = False


class ChargeSpell(Record, frozen=True):
    """Units of one device line on charge in an adopted rota; energy at the outlet."""

    id: str
    day: int
    start: ClockTime
    end: ClockTime
    device: str
    count: int = 1
    first_ticket: int = 1
    energy_wh: float = 0.0


class Rota(Record, frozen=True):
    """An adopted rota: saved as it was found, never computed again."""

    id: str
    name: str = ""
    edition: int = 1
    state: RotaState = "draft"
    valid_until_day: int | None = None
    slot_min: int = 5
    solver: str = ""
    work: int | None = None
    bouts: tuple[Bout, ...] = ()
    charging: tuple[ChargeSpell, ...] = ()
    notes: dict[str, Note] = {}


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
