"""Seeded plans of growing size for the rota's figures: household, camps, shelter, town.

People, watts and needs are invented; caps, bouts and hours are the program's own defaults. Bouts of 15 minutes keep
the grid at 15 minutes, so that loads can be read in quarter-hour slots a week.
"""

from __future__ import annotations

import random

from kitplanner.plan.records import Block, Device, Person, Plan, Station, Store, Window

# name: people, pedal stands, cranks, days, share of the offered energy that is needed
SIZES: dict[str, tuple[int, int, int, int, float]] = {
    "house4": (4, 0, 1, 7, 0.55),
    "camp24": (24, 2, 1, 3, 0.40),
    "camp60": (60, 4, 2, 7, 0.40),
    "shelter200": (200, 12, 4, 7, 0.36),
    "city500": (500, 32, 8, 14, 0.34),
}
WAKING = (Window(start="08:00", end="12:00"), Window(start="13:30", end="17:30"), Window(start="18:30", end="20:30"))


def instance(
    name: str, *, watchers: bool = True, own_hours: bool = False, days: int | None = None, seed: int = 7
) -> Plan:
    """Return one seeded plan; without `watchers` nobody is a minor and no changeover is lost."""
    people, pedals, cranks, usual_days, part = SIZES[name]
    rng = random.Random(f"{name} {seed}")
    crowd = tuple(_person(rng, place, watchers=watchers, own_hours=own_hours) for place in range(people))
    stations = (
        Station(id="PE", name="Pedal stand", kind="pedal", count=max(1, pedals), output_w=40.0, hours=WAKING),
        Station(id="CR", name="Crank", kind="crank", count=cranks, output_w=8.0, hours=WAKING),
    )
    if not pedals:
        stations = stations[1:]
    if watchers:
        stations = tuple(
            Station(**{**{key: getattr(each, key) for key in each.__struct_fields__}, "changeover_min": 2})
            for each in stations
        )
    offered = _offered_wh(crowd, stations)
    return Plan(
        title=name,
        days=days or usual_days,
        margin_fraction=0.0,
        people=crowd,
        stations=stations,
        stores=(
            Store(id="B", name="Store", nominal_wh=max(10.0, offered * 2), start_fraction=0.5, floor_fraction=0.1),
        ),
        devices=_devices(offered * 0.765 * part),
        blocks=(Block(id="Q", name="Quiet", kind="quiet", windows=(Window(start="21:30", end="07:00"),)),),
    )


def _person(rng: random.Random, place: int, *, watchers: bool, own_hours: bool) -> Person:
    age = rng.choice((14, 16, 24, 31, 38, 45, 52, 58, 63) if watchers else (24, 31, 38, 45, 52, 58, 63))
    share = round(rng.choice((0.6, 0.8, 1.0)), 2)
    hours = ()
    if own_hours:
        start = rng.randrange(8, 14)
        hours = (Window(start=f"{start:02d}:00", end=f"{start + rng.randrange(4, 7):02d}:00"),)
    return Person(
        id=f"P{place + 1:03d}",
        name=f"P{place + 1:03d}",
        age=age,
        watts_by="share",
        share_legs_fraction=share,
        share_arms_fraction=share,
        bout_min=15,
        hours=hours,
    )


def _offered_wh(people: tuple[Person, ...], stations: tuple[Station, ...]) -> float:
    """Return what everybody can make in a day at S, station time allowing, as a rough scale for the need."""
    cap = {14: 30, 16: 40, 52: 40, 58: 40, 63: 30}
    minutes = sum(cap.get(person.age or 40, 60) for person in people)
    best = max(station.output_w or 0.0 for station in stations)
    station_min = sum(station.count * 600 for station in stations)
    return min(minutes, station_min) * best * 0.8 / 60.0


def _devices(wh_per_day: float) -> tuple[Device, ...]:
    """Return three device lines that share a day's need: a radio, lamps in the evening, phones."""
    evening = (Window(start="17:00", end="21:00"),)
    return (
        Device(id="R", name="Radio", priority=1, use_wh_per_day=wh_per_day * 0.2, evening=True),
        Device(id="L", name="Lamps", priority=2, use_wh_per_day=wh_per_day * 0.3, use_windows=evening, evening=True),
        Device(
            id="F",
            name="Phones",
            priority=3,
            battery_wh=wh_per_day * 1.5,
            eta=1.0,
            start_fraction=0.2,
            floor_fraction=0.2,
            use_wh_per_day=wh_per_day * 0.5,
        ),
    )
