"""Records of what holds, brings and uses energy: stores, other sources, devices, where they are charged."""

from __future__ import annotations

from typing import Literal

from kitplanner.plan.records_base import Note, Record, Window

Chemistry = Literal["li_ion", "lfp", "nimh", "lead_acid", "supercapacitor", "alkaline"]
UseBy = Literal["power_hours", "wh_per_day", "percent", "times"]


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
