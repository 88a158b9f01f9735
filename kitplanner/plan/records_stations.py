"""Records of stations: machine, gear, stages in the order of the current, test load of the bench."""

from __future__ import annotations

from typing import Literal

from kitplanner.plan.records_base import Note, Record, Spell, Window

StationKind = Literal["crank", "pocket_crank", "pedal", "treadle", "rocker"]
DescribedBy = Literal["measured", "label", "parts"]


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
