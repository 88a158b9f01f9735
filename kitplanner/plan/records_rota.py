"""Records of an adopted rota and of the paper log."""

from __future__ import annotations

from typing import Literal

from kitplanner.plan.records_base import ClockTime, Note, Record

RotaState = Literal["draft", "posted"]


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


class LogEntry(Record, frozen=True):
    """One line of the day's paper log."""

    id: str
    name: str = ""
    notes: dict[str, Note] = {}
