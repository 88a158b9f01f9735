"""What every record is made of: frozen, with keys known; notes, clock times, windows and spells."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta, Struct

ClockTime = Annotated[str, Meta(pattern=r"^(([01][0-9]|2[0-3]):[0-5][0-9]|24:00)$")]
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
