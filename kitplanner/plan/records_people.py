"""Records of people and of what surrounds them: conditions, blocks of the day, groups."""

from __future__ import annotations

from typing import Literal

from kitplanner.plan.records_base import ClockTime, Note, Record, Spell, Window

WattsBy = Literal["level", "share", "own", "self_test"]
Level = Literal["light", "usual", "strong"]
BlockKind = Literal["quiet", "meal", "school", "prayer", "duty"]


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
