"""All rotas of a tiny plan by plain loops over minutes: written apart from the solver, to check it."""

from __future__ import annotations

import itertools
import math
import random
from collections.abc import Iterator
from typing import NamedTuple

from kitplanner.plan.records import Device, Person, Plan, Station, Store, Window

BOUT = {14: 15, 16: 20, 30: 20, 45: 20}
REST = {14: 45, 16: 40, 30: 40, 45: 40}
CAP = {14: 30, 16: 40, 30: 60, 45: 60}


class Turn(NamedTuple):
    """One bout in minutes of the horizon."""

    start: int
    end: int
    person: int
    station: int
    unit: int
    watcher: int | None


def tiny_plan(seed: int) -> Plan:
    """Return a random plan small enough to look at all its rotas."""
    rng = random.Random(seed)
    grid = rng.choice((10, 20))
    days = 1 if grid == 10 else rng.choice((1, 2))
    slots = 6 if days == 1 else 3
    first = rng.choice((7 * 60, 9 * 60, 20 * 60 - 40))
    hours = Window(start=clock(first), end=clock(first + slots * grid))
    people = tuple(tiny_person(rng, place) for place in range(rng.choice((2, 3) if days == 1 else (2,))))
    stations = tuple(
        Station(
            id=f"S{place}",
            name=f"Station {place}",
            output_w=rng.choice((5.0, 8.0)),
            count=rng.choice((1, 1, 2)),
            changeover_min=rng.choice((0, 2, 5)),
            needs_watcher=rng.random() < 0.2,
            hours=(hours,),
        )
        for place in range(rng.choice((1, 1, 2) if days == 1 and len(people) == 2 else (1,)))
    )
    evening = Window(start=clock(first), end="23:00")
    devices = tuple(
        Device(
            id=f"D{place}",
            name=f"Lamp {place}",
            priority=rng.choice((1, 2, 4)),
            use_wh_per_day=rng.choice((0.5, 1.0, 2.0)),
            use_windows=(evening,) if rng.random() < 0.5 else (),
        )
        for place in range(rng.choice((1, 2)))
    )
    return Plan(
        title=f"tiny {seed}",
        days=days,
        grid_min=grid,
        margin_fraction=rng.choice((0.0, 0.2)),
        cut=rng.choice(("strict", "shared")),
        people=people,
        stations=stations,
        stores=(Store(id="B", name="Store", nominal_wh=10.0, start_fraction=rng.choice((0.1, 0.2, 0.3))),),
        devices=devices,
    )


def tiny_person(rng: random.Random, place: int) -> Person:
    """Return a person who gives a share, perhaps a minor."""
    return Person(
        id=f"P{place}",
        name=f"P{place}",
        age=rng.choice((14, 16, 30, 45)),
        watts_by="share",
        share_arms_fraction=rng.choice((0.5, 0.75, 1.0)),
        cap_min=rng.choice((None, 20, 40)),
    )


def clock(minute: int) -> str:
    """Return minutes of the day as HH:MM."""
    return f"{minute // 60:02d}:{minute % 60:02d}"


def minute_of(text: str) -> int:
    """Return HH:MM as minutes of the day."""
    return int(text[:2]) * 60 + int(text[3:])


def rotas(plan: Plan) -> Iterator[tuple[Turn, ...]]:
    """Yield every legal set of bouts."""
    grid = plan.grid_min or 5
    options = list(single_turns(plan, grid))
    options.sort()

    def grow(chosen: tuple[Turn, ...], first: int) -> Iterator[tuple[Turn, ...]]:
        yield chosen
        for index in range(first, len(options)):
            if fits(plan, chosen, options[index]):
                yield from grow((*chosen, options[index]), index + 1)

    yield from grow((), 0)


def single_turns(plan: Plan, grid: int) -> Iterator[Turn]:
    """Yield every bout that would be legal alone."""
    for row, person in enumerate(plan.people):
        bout, cap = BOUT[person.age], min(CAP[person.age], person.cap_min if person.cap_min is not None else 999)
        young = person.age < 18
        first_h, last_h = {14: (480, 1140), 16: (420, 1260)}.get(person.age, (0, 1440))
        for column, station in enumerate(plan.stations):
            window = station.hours[0]
            opened, closed = minute_of(window.start), minute_of(window.end)
            adults = [other for other, each in enumerate(plan.people) if each.age >= 18 and other != row]
            watchers = adults if young or station.needs_watcher else [None]
            lengths = [grid * n for n in range(1, 9) if grid * n <= min(bout, cap)]
            starts = range(opened, closed, grid)
            for day, start, length, unit, watcher in itertools.product(
                range(plan.days), starts, lengths, range(station.count), watchers
            ):
                if start + length <= closed and start >= first_h and start + length <= last_h:
                    moment = day * 1440 + start
                    yield Turn(moment, moment + length, row, column, unit, watcher)


def fits(plan: Plan, chosen: tuple[Turn, ...], new: Turn) -> bool:
    """Return whether a bout may join a legal set of earlier or simultaneous ones."""
    person = plan.people[new.person]
    grid = plan.grid_min or 5
    rest = math.ceil(REST[person.age] / grid) * grid
    cap = min(CAP[person.age], person.cap_min if person.cap_min is not None else 999)
    today = sum(t.end - t.start for t in chosen if t.person == new.person and t.start // 1440 == new.start // 1440)
    if today + new.end - new.start > cap:
        return False
    for old in chosen:
        together = old.start < new.end and new.start < old.end
        if old.person == new.person and not (old.end + rest <= new.start or new.end + rest <= old.start):
            return False
        if together and (old.station, old.unit) == (new.station, new.unit):
            return False
        busy = {each for each in (old.person, old.watcher) if each is not None}
        if together and busy & {each for each in (new.person, new.watcher) if each is not None}:
            return False
    return True


def energies(plan: Plan, chosen: tuple[Turn, ...]) -> list[tuple[int, int, float]]:
    """Return (first turning minute, end, watts at O) of each bout, the changeover taken off its beginning."""
    store = plan.stores[0]
    found = []
    for turn in chosen:
        station = plan.stations[turn.station]
        before = [t for t in chosen if (t.station, t.unit) == (turn.station, turn.unit) and t.end <= turn.start]
        last = max(before, key=lambda t: t.end, default=None)
        lost = 0
        if last is not None and last.person != turn.person:
            lost = max(0, station.changeover_min - (turn.start - last.end))
        watts = station.output_w * min(1.0, plan.people[turn.person].share_arms_fraction) * store.eta_in * store.eta_out
        found.append((min(turn.start + lost, turn.end), turn.end, watts))
    return found


def use_by(plan: Plan, device: Device, moment: int) -> float:
    """Return what a device without battery has used by a minute of the horizon."""
    whole, part = divmod(moment, 1440)
    if device.use_windows:
        start, end = minute_of(device.use_windows[0].start), minute_of(device.use_windows[0].end)
    else:
        start, end = 0, 1440
    today = min(max(part - start, 0), end - start) / (end - start)
    return device.use_wh_per_day * (whole + today)


class Score(NamedTuple):
    """The aims in order, energies in mWh."""

    unmet: tuple[int, ...]
    margin: int
    excess_steps: int
    greatest: float
    spread: float
    unpopular: int
    bouts: int


def score(plan: Plan, chosen: tuple[Turn, ...], step_wh: float) -> Score:
    """Return the value of a set of bouts, all curves read at the grid's slots."""
    grid = plan.grid_min or 5
    moments = range(0, plan.days * 1440 + 1, grid)
    store = plan.stores[0]
    stored = store.nominal_wh * max(0.0, store.start_fraction - store.floor_fraction) * store.eta_out
    parts = energies(plan, chosen)
    made = [sum(max(0, min(m, end) - begin) / 60.0 * watts for begin, end, watts in parts) for m in moments]
    classes = sorted({device.priority for device in plan.devices})
    if plan.cut == "shared":
        classes = classes[-1:]
    factor = 1.0 + plan.margin_fraction
    unmet = []
    for each in classes:
        due = [sum(use_by(plan, d, m) for d in plan.devices if d.priority <= each) for m in moments]
        unmet.append(max(0.0, *(d - stored - got for d, got in zip(due, made, strict=True))))
    whole = [factor * sum(use_by(plan, d, m) for d in plan.devices) for m in moments]
    missed = max(0.0, *(d - stored - got for d, got in zip(whole, made, strict=True)))
    margin = max(0.0, missed - unmet[-1])
    excess = made[-1] - max(0.0, whole[-1] - stored - unmet[-1] - margin)
    shares = [share for row in range(len(plan.people)) if (share := own_share(plan, chosen, row)) is not None]
    mean = sum(shares) / len(shares) if shares else 0.0
    spread = math.sqrt(sum((share - mean) ** 2 for share in shares) / len(shares)) if shares else 0.0
    odd = [sum(unpopular_slots(t, grid) for t in chosen if t.person == row) for row in range(len(plan.people))]
    return Score(
        tuple(round(each * 1000) for each in unmet),
        round(margin * 1000),
        math.ceil(max(0.0, excess) / step_wh - 1e-6),
        round(max(shares, default=0.0), 9),
        round(spread, 9),
        max(odd),
        len(chosen),
    )


def own_share(plan: Plan, chosen: tuple[Turn, ...], row: int) -> float | None:
    """Return the part of a person's whole grid slots that is turned, None for somebody who has none."""
    grid = plan.grid_min or 5
    person = plan.people[row]
    cap = min(CAP[person.age], person.cap_min if person.cap_min is not None else 999)
    slots = cap // grid * plan.days
    if not slots or min(BOUT[person.age], cap) < grid:
        return None
    return sum(t.end - t.start for t in chosen if t.person == row) / grid / slots


def unpopular_slots(turn: Turn, grid: int) -> int:
    """Return the slots of a bout before 8 and from 20 o'clock."""
    starts = range(turn.start % 1440, turn.start % 1440 + turn.end - turn.start, grid)
    return sum(1 for start in starts if start < 480 or start + grid > 1200)
