"""What the board shows, without saying how: rows, turns, charging, shaded hours, broken rules at their places.

Built from a plan and bouts, those of the adopted rota or of a proposal; no Qt, and nothing is solved here.
"""

from __future__ import annotations

import functools
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.records import Bout, ChargeSpell, Person, Plan, Station
from kitplanner.planners.balance_windows import DAY_MIN, Part, day_parts, merged, outside
from kitplanner.planners.people import person_limits
from kitplanner.planners.rota.check_finding import Violation
from kitplanner.planners.rota.result import RotaAnswer, RotaBout, RotaCharge
from kitplanner.planners.supply import open_parts
from kitplanner.report.wording import plain
from kitplanner.report.wording_rota import unit_words

Mode = Literal["people", "stations"]
RowKind = Literal["person", "unit", "heading", "device"]
_HATCHES_PER_FILL = 6


@dataclass(frozen=True)
class ShownBout:
    """One turn on the board; minutes of its day; energy at S, None while it is not known."""

    id: str
    day: int
    start_min: int
    end_min: int
    station: str
    unit: int
    person: str
    watcher: str | None = None
    locked: bool = False
    output_wh: float | None = None

    @property
    def length_min(self) -> int:
        """Minutes of turning."""
        return self.end_min - self.start_min


@dataclass(frozen=True)
class ShownCharge:
    """Units of a device line on charge; energy at O."""

    day: int
    start_min: int
    end_min: int
    device: str
    count: int
    first_ticket: int
    energy_wh: float


@dataclass(frozen=True)
class Look:
    """How turns at a station are told apart: fill and hatch by number, and two letters."""

    fill: int
    hatch: int
    code: str


@dataclass(frozen=True)
class Row:
    """One row: whom or what it belongs to, and what stands at its ends."""

    kind: RowKind
    key: str
    name: str
    note: str = ""
    unit: int = 0
    used_min: int = 0
    cap_min: int = 0
    text: str = ""


@dataclass(frozen=True)
class Curves:
    """Wh at O over the shown slots since the first shown day's start; one value for each edge of a slot."""

    slot_min: int
    level_wh: Sequence[float]
    have_wh: Sequence[float]
    due_wh: Sequence[float]


@dataclass(frozen=True)
class BoardData:
    """Everything the board draws; `breaks` maps ids of turns to sentences, `row_breaks` (row key, day).

    `is_older`: the answer behind the curves was made before the last change.
    """

    plan: Plan = field(default_factory=Plan)
    bouts: tuple[ShownBout, ...] = ()
    charges: tuple[ShownCharge, ...] = ()
    answer: RotaAnswer | None = None
    breaks: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    row_breaks: Mapping[tuple[str, int], tuple[str, ...]] = field(default_factory=dict)
    charge_breaks: Mapping[tuple[int, int], tuple[str, ...]] = field(default_factory=dict)
    grid_min: int = 5
    editable: bool = False
    now: tuple[int, int] | None = None
    is_older: bool = False

    @functools.cached_property
    def looks(self) -> dict[str, Look]:
        """Fill, hatch and letters of each station."""
        return looks_of(self.plan.stations)

    @functools.cached_property
    def person_names(self) -> dict[str, str]:
        """Names of people by id, the id where there is none; the planner's own screen shows them whole."""
        return {one.id: plain(one.name) or one.id for one in self.plan.people}

    @functools.cached_property
    def by_person(self) -> dict[str, list[ShownBout]]:
        """Turns of each person."""
        found: dict[str, list[ShownBout]] = {}
        for bout in self.bouts:
            found.setdefault(bout.person, []).append(bout)
        return found

    @functools.cached_property
    def by_watcher(self) -> dict[str, list[ShownBout]]:
        """Turns each person watches."""
        found: dict[str, list[ShownBout]] = {}
        for bout in self.bouts:
            if bout.watcher:
                found.setdefault(bout.watcher, []).append(bout)
        return found

    @functools.cached_property
    def by_unit(self) -> dict[tuple[str, int], list[ShownBout]]:
        """Turns at each unit of each station."""
        found: dict[tuple[str, int], list[ShownBout]] = {}
        for bout in self.bouts:
            found.setdefault((bout.station, bout.unit), []).append(bout)
        return found

    def station_words(self, bout: ShownBout) -> str:
        """Return a turn's station with its unit."""
        station = next((one for one in self.plan.stations if one.id == bout.station), None)
        return bout.station if station is None else unit_words(station, bout.unit)

    def sentence(self, bout: ShownBout) -> str:
        """Return a turn in words, as a screen reader says it."""
        who = self.person_names.get(bout.person, bout.person)
        text = f"{who}, {self.station_words(bout)}, day {bout.day}, {clock(bout.start_min)} to {clock(bout.end_min)}"
        if bout.watcher:
            text += f", watched by {self.person_names.get(bout.watcher, bout.watcher)}"
        if bout.locked:
            text += ", locked"
        broken = self.breaks.get(bout.id, ())
        return f"{text}. Broken rule: {' '.join(broken)}" if broken else text


def looks_of(stations: Sequence[Station]) -> dict[str, Look]:
    """Return a look for each station; letters are never the same for two.

    Examples
    --------
    >>> [look.code for look in looks_of((Station(id="a", name="Crank"), Station(id="b", name="Crank"))).values()]
    ['CR', 'C2']
    """
    looks: dict[str, Look] = {}
    taken: set[str] = set()
    for place, station in enumerate(stations):
        letters = "".join(sign for sign in plain(station.name or station.id).upper() if sign.isalnum()) or "S"
        wanted = [letters[:2].ljust(2, letters[0]), *(f"{letters[0]}{number}" for number in range(2, 10))]
        spare = (f"{chr(65 + one)}{chr(65 + two)}" for one in range(26) for two in range(26))
        code = next(one for one in (*wanted, *spare) if one not in taken)
        taken.add(code)
        turn = place + place // _HATCHES_PER_FILL
        looks[station.id] = Look(place % _HATCHES_PER_FILL, turn % _HATCHES_PER_FILL, code)
    return looks


def shown_bouts(bouts: Iterable[Bout], wh: Mapping[tuple[int, int, str, int, str], float]) -> tuple[ShownBout, ...]:
    """Return the turns of an adopted rota; energy where it is known for the very same turn."""
    return tuple(
        ShownBout(
            id=bout.id,
            day=bout.day,
            start_min=int(minutes_of_day(bout.start)),
            end_min=int(minutes_of_day(bout.end)),
            station=bout.station,
            unit=bout.unit,
            person=bout.person,
            watcher=bout.watcher,
            locked=bout.locked,
            output_wh=wh.get(
                (bout.day, int(minutes_of_day(bout.start)), bout.station, bout.unit, bout.person),
            ),
        )
        for bout in bouts
    )


def energies(bouts: Iterable[RotaBout]) -> dict[tuple[int, int, str, int, str], float]:
    """Return the energy of turns by what tells them apart."""
    return {(b.day, b.start_min, b.station, b.unit, b.person): b.output_wh for b in bouts}


def proposed_bouts(bouts: Iterable[RotaBout]) -> tuple[ShownBout, ...]:
    """Return the turns of a proposal, numbered."""
    return tuple(
        ShownBout(
            id=f"p{place}",
            day=bout.day,
            start_min=bout.start_min,
            end_min=bout.end_min,
            station=bout.station,
            unit=bout.unit,
            person=bout.person,
            watcher=bout.watcher,
            locked=bout.locked,
            output_wh=bout.output_wh,
        )
        for place, bout in enumerate(bouts, start=1)
    )


def shown_charges(spells: Iterable[ChargeSpell]) -> tuple[ShownCharge, ...]:
    """Return the charging table of an adopted rota."""
    return tuple(
        ShownCharge(
            spell.day,
            int(minutes_of_day(spell.start)),
            int(minutes_of_day(spell.end)),
            spell.device,
            spell.count,
            spell.first_ticket,
            spell.energy_wh,
        )
        for spell in spells
    )


def proposed_charges(charging: Iterable[RotaCharge]) -> tuple[ShownCharge, ...]:
    """Return the charging table of a proposal."""
    return tuple(
        ShownCharge(row.day, row.start_min, row.end_min, row.device, row.count, row.first_ticket, row.energy_wh)
        for row in charging
    )


Breaks = tuple[
    dict[str, tuple[str, ...]], dict[tuple[str, int], tuple[str, ...]], dict[tuple[int, int], tuple[str, ...]]
]


def placed_breaks(bouts: Sequence[ShownBout], found: Iterable[Violation]) -> Breaks:
    """Return broken rules by turn, by row and day, and by day and start of a charging row."""
    turns: dict[str, tuple[str, ...]] = {}
    rows: dict[tuple[str, int], tuple[str, ...]] = {}
    charges: dict[tuple[int, int], tuple[str, ...]] = {}
    for one in found:
        here = [bout for bout in bouts if _is_at(bout, one)]
        for bout in here:
            turns[bout.id] = (*turns.get(bout.id, ()), one.text)
        if not here and (one.person or one.station):
            key = (str(one.person or one.station), one.day)
            rows[key] = (*rows.get(key, ()), one.text)
        elif not here and one.start_min is not None:
            place = (one.day, one.start_min)
            charges[place] = (*charges.get(place, ()), one.text)
    return turns, rows, charges


def _is_at(bout: ShownBout, found: Violation) -> bool:
    if found.start_min is None or bout.day != found.day or bout.start_min != found.start_min:
        return False
    if found.person is not None and found.person not in (bout.person, bout.watcher):
        return False
    if found.person is None and found.station is None:
        return False
    return found.station is None or found.station == bout.station


def cap_of(plan: Plan, person: Person, day: int) -> int:
    """Return how many minutes a person may be asked for on a day; 0 on a day off."""
    return 0 if day in person.days_off else person_limits(plan, person, day=day).cap_min


def rows_of(data: BoardData, mode: Mode, days: Sequence[int], words: Mapping[str, str]) -> tuple[Row, ...]:
    """Return the rows of the board: people or units, then what is on charge.

    `words` gives the texts with figures: "of" for minutes used of a cap, "zero" for people who do not turn, "turned"
    for a unit's minutes, "charge" for the heading.
    """
    rows = _people_rows(data, days, words) if mode == "people" else _unit_rows(data, days, words)
    charging = {charge.device for charge in data.charges}
    devices = [device for device in data.plan.devices if device.id in charging]
    if devices:
        rows.append(Row("heading", "charge", words["charge"]))
    for device in devices:
        name = plain(device.name) or device.id
        given = sum(one.energy_wh for one in data.charges if one.device == device.id and one.day in days)
        text = words["given"].format(wh=f"{given:.0f}") if given else ""
        rows.append(Row("device", device.id, name, f"×{device.count}" if device.count > 1 else "", text=text))
    return tuple(rows)


def _people_rows(data: BoardData, days: Sequence[int], words: Mapping[str, str]) -> list[Row]:
    rows = []
    for person in data.plan.people:
        used = sum(bout.length_min for bout in data.by_person.get(person.id, ()) if bout.day in days)
        cap = sum(cap_of(data.plan, person, day) for day in days)
        text = words["of"].format(used=used, cap=cap) if cap or used else words["zero"]
        rows.append(Row("person", person.id, data.person_names[person.id], plain(person.role), 0, used, cap, text))
    return rows


def _unit_rows(data: BoardData, days: Sequence[int], words: Mapping[str, str]) -> list[Row]:
    rows = []
    for station in data.plan.stations:
        code = data.looks[station.id].code
        room = sum(end - start for start, end in open_parts(data.plan, station)) * len(days)
        if station.daily_min is not None:
            room = min(room, station.daily_min * len(days))
        for unit in range(1, station.count + 1):
            used = sum(bout.length_min for bout in data.by_unit.get((station.id, unit), ()) if bout.day in days)
            text = words["turned"].format(used=used)
            rows.append(Row("unit", station.id, unit_words(station, unit), code, unit, used, room, text))
    return rows


def shut_parts(data: BoardData, row: Row, day: int) -> tuple[Part, ...]:
    """Return the parts of a day in which nobody may turn in a row: own hours, blocks, absence, station hours."""
    plan = data.plan
    if row.kind == "person":
        person = next(one for one in plan.people if one.id == row.key)
        away = [(int(minutes_of_day(s.start)), int(minutes_of_day(s.end))) for s in person.absences if s.day == day]
        if day in person.days_off:
            away.append((0, DAY_MIN))
        own = outside(list(person_limits(plan, person, day=day).hours)) if cap_of(plan, person, day) else ()
        return merged([*own, *away, *block_parts(plan, person.group, day)])
    if row.kind == "unit":
        station = next(one for one in plan.stations if one.id == row.key)
        out = [
            (int(minutes_of_day(s.start)), int(minutes_of_day(s.end)))
            for s in station.outages
            if s.day == day and row.unit > station.count - s.count
        ]
        shut = [(0, DAY_MIN)] if not (station.in_service and station.guarded) else []
        return merged([*outside(list(open_parts(plan, station))), *out, *shut, *block_parts(plan, None, day)])
    return ()


def block_parts(plan: Plan, group: str | None, day: int) -> tuple[Part, ...]:
    """Return the blocks of a day that hold for a group; those for everybody where the group is None."""
    return merged(
        [
            part
            for block in plan.blocks
            if (not block.groups or (group is not None and group in block.groups))
            and (not block.days or day in block.days)
            for part in day_parts(block.windows)
        ]
    )


def named_blocks(plan: Plan, day: int) -> tuple[tuple[str, Part], ...]:
    """Return the blocks for everybody on a day with their names."""
    return tuple(
        (plain(block.name) or block.kind, part)
        for block in plan.blocks
        if not block.groups and (not block.days or day in block.days)
        for part in day_parts(block.windows)
    )
