"""What the judge hands out, and a rota's bouts and charging rows with their records looked up.

Part of the judge (`check.py`): imports plan and domain only, so that no slip of the planners can hide a broken rule.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from msgspec import Struct

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.records import Bout, ChargeSpell, Device, Person, Plan, Rota, Station, Window

Part = tuple[int, int]
DAY_MIN = 1440


class Violation(Struct, frozen=True, kw_only=True):
    """One broken rule: which, in words, and where; `start_min` None where it concerns a whole day or the plan."""

    rule: str
    text: str
    day: int
    start_min: int | None = None
    person: str | None = None
    station: str | None = None


@dataclass(frozen=True, slots=True)
class Turn:
    """One bout with its records; minutes of its day."""

    day: int
    start: int
    end: int
    unit: int
    person: Person
    station: Station
    watcher: Person | None

    @property
    def length(self) -> int:
        """Minutes of turning."""
        return self.end - self.start

    @property
    def since(self) -> int:
        """Start in minutes since the start of day 1."""
        return (self.day - 1) * DAY_MIN + self.start

    @property
    def until(self) -> int:
        """End in minutes since the start of day 1."""
        return (self.day - 1) * DAY_MIN + self.end

    @property
    def when(self) -> str:
        """Day and times in words."""
        return f"on day {self.day} from {clock(self.start)} to {clock(self.end)}"

    def broken(self, rule: str, text: str, person: Person | None = None) -> Violation:
        """Return a violation at this bout."""
        who = self.person if person is None else person
        return Violation(
            rule=rule, text=text, day=self.day, start_min=self.start, person=who.id, station=self.station.id
        )


@dataclass(frozen=True, slots=True)
class Charging:
    """One row of the charging table with its device; minutes of its day."""

    day: int
    start: int
    end: int
    device: Device
    count: int
    first_ticket: int
    energy_wh: float

    @property
    def since(self) -> int:
        """Start in minutes since the start of day 1."""
        return (self.day - 1) * DAY_MIN + self.start

    @property
    def until(self) -> int:
        """End in minutes since the start of day 1."""
        return (self.day - 1) * DAY_MIN + self.end

    @property
    def when(self) -> str:
        """Day and times in words."""
        return f"on day {self.day} from {clock(self.start)} to {clock(self.end)}"

    def broken(self, rule: str, text: str) -> Violation:
        """Return a violation at this row."""
        return Violation(rule=rule, text=text, day=self.day, start_min=self.start)


def named(record: Person | Station | Device) -> str:
    """Return what a record is called in a sentence."""
    return record.name or record.id


def parts_of(windows: tuple[Window, ...]) -> tuple[Part, ...]:
    """Return windows as parts of one day, in order and joined; one across midnight counts in its two parts.

    Examples
    --------
    >>> parts_of((Window(start="22:00", end="07:00"), Window(start="06:00", end="08:00")))
    ((0, 480), (1320, 1440))
    """
    pieces: list[Part] = []
    for window in windows:
        start, end = minutes_of_day(window.start), minutes_of_day(window.end)
        pieces += [(start, end)] if start <= end else [(0, end), (start, DAY_MIN)]
    return joined([piece for piece in pieces if piece[0] < piece[1]])


def joined(pieces: list[Part]) -> tuple[Part, ...]:
    """Return parts in order, touching ones joined."""
    whole: list[Part] = []
    for start, end in sorted(pieces):
        if whole and start <= whole[-1][1]:
            whole[-1] = (whole[-1][0], max(whole[-1][1], end))
        else:
            whole.append((start, end))
    return tuple(whole)


def is_inside(start: int, end: int, parts: tuple[Part, ...]) -> bool:
    """Tell whether a time lies wholly in one of the parts."""
    return any(first <= start and end <= last for first, last in parts)


def overlap_min(start: int, end: int, parts: tuple[Part, ...]) -> int:
    """Return how many minutes of a time lie in the parts."""
    return sum(max(0, min(end, last) - max(start, first)) for first, last in parts)


def words(parts: tuple[Part, ...]) -> str:
    """Return parts of a day in words."""
    return ", ".join(f"{clock(start)}-{clock(end)}" for start, end in parts) or "never"


def quiet_parts(plan: Plan, day: int) -> tuple[Part, ...]:
    """Return the quiet hours that hold for the whole place on a day."""
    here = [
        block
        for block in plan.blocks
        if block.kind == "quiet" and not block.groups and (not block.days or day in block.days)
    ]
    return joined([part for block in here for part in parts_of(block.windows)])


def read_turns(plan: Plan, rota: Rota) -> tuple[list[Turn], list[Violation]]:
    """Return the bouts that can be read, and what is wrong with the others."""
    people = {person.id: person for person in plan.people}
    stations = {station.id: station for station in plan.stations}
    turns, broken = [], []
    for bout in rota.bouts:
        start, end = minutes_of_day(bout.start), minutes_of_day(bout.end)
        found = _unreadable_time(plan, bout, (start, end)) + _unknown(bout, people, stations)
        broken += found
        if not found:
            watcher = None if bout.watcher is None else people[bout.watcher]
            person, station = people[bout.person], stations[bout.station]
            turns.append(Turn(bout.day, start, end, bout.unit, person, station, watcher))
    turns.sort(key=lambda turn: (turn.since, turn.until))
    return turns, broken


def _unknown(bout: Bout, people: dict[str, Person], stations: dict[str, Station]) -> list[Violation]:
    named_ids = ((bout.person, people, "person"), (bout.station, stations, "station"))
    missing = [(key, what) for key, known, what in named_ids if key not in known]
    if bout.watcher is not None and bout.watcher not in people:
        missing.append((bout.watcher, "person to watch"))
    return [
        Violation(
            rule="unknown",
            text=f"The bout on day {bout.day} at {bout.start} names {key} as its {what}, which the plan does not hold.",
            day=bout.day,
            start_min=minutes_of_day(bout.start),
            person=bout.person,
            station=bout.station,
        )
        for key, what in missing
    ]


def _unreadable_time(plan: Plan, row: Bout | ChargeSpell, times: Part) -> list[Violation]:
    """Return what is wrong with the day and times of a row."""
    start, end = times
    who = row.person if isinstance(row, Bout) else None
    station = row.station if isinstance(row, Bout) else None
    found = []
    if not 1 <= row.day <= plan.days:
        text = f"A row at {row.start} is on day {row.day}; the plan has days 1 to {plan.days}."
        found.append(("day", text))
    if end <= start:
        text = f"A row on day {row.day} runs from {row.start} to {row.end}; it may not cross midnight or be empty."
        found.append(("midnight", text))
    return [
        Violation(rule=rule, text=text, day=row.day, start_min=start, person=who, station=station)
        for rule, text in found
    ]


def read_charging(plan: Plan, rota: Rota) -> tuple[list[Charging], list[Violation]]:
    """Return the charging rows that can be read, and what is wrong with the others."""
    devices = {device.id: device for device in plan.devices}
    rows, broken = [], []
    for spell in rota.charging:
        start, end = minutes_of_day(spell.start), minutes_of_day(spell.end)
        found = _unreadable_time(plan, spell, (start, end))
        if spell.device not in devices:
            text = f"The charging row on day {spell.day} at {spell.start} names the device {spell.device}, "
            found.append(
                Violation(rule="unknown", text=text + "which the plan does not hold.", day=spell.day, start_min=start)
            )
        broken += found
        if not found:
            device = devices[spell.device]
            rows.append(Charging(spell.day, start, end, device, spell.count, spell.first_ticket, spell.energy_wh))
    rows.sort(key=lambda row: (row.since, row.until, row.device.id, row.first_ticket))
    return rows, broken


def steps_of(edges: set[int]) -> list[Part]:
    """Return the stretches between the edges, in order."""
    return list(pairwise(sorted(edges)))
