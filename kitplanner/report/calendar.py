"""A rota as iCalendar (RFC 5545): one calendar for each person and each station, to be imported again after a change.

Times are floating, so they read on any telephone as on the wall. Nothing tells a person's limits; people are numbers
unless names are asked for, and the identifiers of events are made so that no name can be read from them.
"""

from __future__ import annotations

import datetime as dt
import hashlib
import re
from collections.abc import Iterable

from msgspec import Struct

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.records import Bout, Plan, Rota
from kitplanner.report.wording import plain
from kitplanner.report.wording_rota import day_date, display_names, person_numbers, unit_words

PRODUCT = "-//Kitplanner//Rota//EN"
_UNSAFE = re.compile(r"[^A-Za-z0-9.-]+")
_LONGEST_NAME = 60

TURN_TEXT = (
    "Be there at the start and check the guard. Turn at a pace at which you can talk, drink afterwards. You may say no "
    "or stop at any time, no reason needed; stop at once and tell someone if you feel unwell or anything hurts. If you "
    "cannot come, tell the supervisor."
)
WATCH_TEXT = (
    "Stay beside the one who turns from start to end and watch moving parts and children near by. If you cannot come, "
    "tell the supervisor: nobody turns unwatched."
)
STATION_TEXT = "Check guard, clamp and cables before each turn. If nobody comes, tell the supervisor; nobody has to."


class CalendarOf(Struct, frozen=True, kw_only=True):
    """What calendars are made of: the rota, the rota they replace, when they are made, names or numbers."""

    rota: Rota
    before: Rota | None = None
    stamp: dt.datetime
    names: bool = False


class _Entry(Struct, frozen=True, kw_only=True):
    """One event before it is written."""

    bout: Bout
    role: str
    person: str = ""
    summary: str
    text: str


def calendar_files(plan: Plan, made_of: CalendarOf) -> dict[str, bytes]:
    """Return calendars by file name: one for each person and each station that has anything to do.

    An event that the rota before had and this one has no more is written as cancelled, so that importing the file
    again takes it out.

    Parameters
    ----------
    plan : Plan
        The plan of the rota.
    made_of : CalendarOf
        The rota, the one before it, the moment [UTC], and whether names are shown.

    Returns
    -------
    dict
        File name to file content.
    """
    who = display_names(plan) if made_of.names else person_numbers(plan)
    present = _entries(plan, made_of.rota, who)
    gone = _entries(plan, made_of.before, who) if made_of.before is not None else {}
    files: dict[str, bytes] = {}
    for key in [*present, *(key for key in gone if key not in present)]:
        now, past = present.get(key, []), gone.get(key, [])
        kept = {_uid(plan, entry) for entry in now}
        dropped = [entry for entry in past if _uid(plan, entry) not in kept]
        if now or dropped:
            files[_file_name(key, files)] = _calendar(plan, made_of, _title(plan, key, who), (now, dropped))
    return files


_Owner = tuple[str, str]


def _entries(plan: Plan, rota: Rota | None, who: dict[str, str]) -> dict[_Owner, list[_Entry]]:
    """Return the events of each person and each station, in the order of the plan."""
    owners: dict[_Owner, list[_Entry]] = {("person", one.id): [] for one in plan.people}
    owners |= {("station", one.id): [] for one in plan.stations}
    stations = {one.id: one for one in plan.stations}
    for bout in sorted(rota.bouts if rota else (), key=lambda each: (each.day, each.start, each.station, each.unit)):
        station = stations.get(bout.station)
        if station is None or ("person", bout.person) not in owners:
            continue
        place, turns = unit_words(station, bout.unit), who[bout.person]
        watcher = who.get(bout.watcher or "", "")
        with_watcher = f"Watched by {watcher}. " if watcher else ""
        owners["person", bout.person].append(
            _Entry(bout=bout, role="turn", person=bout.person, summary=f"Turn: {place}", text=with_watcher + TURN_TEXT)
        )
        if watcher:
            owners["person", bout.watcher or ""].append(
                _Entry(
                    bout=bout,
                    role="watch",
                    person=bout.watcher or "",
                    summary=f"Watch: {place}",
                    text=f"{turns} turns. {WATCH_TEXT}",
                )
            )
        summary = f"{turns} turns, {watcher} watches" if watcher else f"{turns} turns"
        if station.count > 1:
            summary = f"Unit {bout.unit}: {summary}"
        owners["station", bout.station].append(_Entry(bout=bout, role="station", summary=summary, text=STATION_TEXT))
    return owners


def _uid(plan: Plan, entry: _Entry) -> str:
    """Return an identifier that stays the same for the same bout and from which nothing can be read back.

    At a station the place and time make the event, so that a hand-over to another person updates it.
    """
    bout = entry.bout
    parts = (
        plan.title,
        plan.place,
        plan.start.isoformat(),
        entry.role,
        entry.person,
        str(bout.day),
        bout.start,
        bout.station,
        str(bout.unit),
    )
    return f"{hashlib.sha256(chr(31).join(parts).encode()).hexdigest()[:40]}@kitplanner"


def _title(plan: Plan, key: _Owner, who: dict[str, str]) -> str:
    kind, owner = key
    if kind == "person":
        return f"Rota, {who.get(owner, plain(owner))}"
    name = next((plain(station.name) for station in plan.stations if station.id == owner), "")
    return f"Rota, {name or plain(owner)}"


def _file_name(key: _Owner, taken: Iterable[str]) -> str:
    """Return a file name that any system takes; ids that would collide are told apart by a short sum."""
    kind, owner = key
    safe = _UNSAFE.sub("_", owner).strip("._")[:_LONGEST_NAME]
    if safe != owner or f"{kind}-{safe}.ics".casefold() in {name.casefold() for name in taken}:
        safe = f"{safe}-{hashlib.sha256(owner.encode()).hexdigest()[:8]}".lstrip("-")
    return f"{kind}-{safe}.ics"


def _calendar(plan: Plan, made_of: CalendarOf, title: str, events: tuple[list[_Entry], list[_Entry]]) -> bytes:
    # Loaded late: no other answer needs it.
    import icalendar

    calendar = icalendar.Calendar()
    calendar.add("prodid", PRODUCT)
    calendar.add("version", "2.0")
    calendar.add("method", "PUBLISH")
    # RFC 7986 gives a calendar its name.
    calendar.add("name", title)
    places = {station.id: plain(station.place) for station in plan.stations}
    for cancelled, entries in zip((False, True), events, strict=True):
        for entry in entries:
            event = icalendar.Event()
            start, end = _moment(plan, entry.bout, entry.bout.start), _moment(plan, entry.bout, entry.bout.end)
            event.add("uid", _uid(plan, entry))
            event.add("dtstamp", made_of.stamp)
            event.add("sequence", made_of.rota.edition)
            event.add("dtstart", start)
            event.add("dtend", end)
            event.add("summary", entry.summary)
            event.add("description", entry.text)
            event.add("status", "CANCELLED" if cancelled else "CONFIRMED")
            location = ", ".join(part for part in (places.get(entry.bout.station), plain(plan.place)) if part)
            if location:
                event.add("location", location)
            calendar.add_component(event)
    return bytes(calendar.to_ical())


def _moment(plan: Plan, bout: Bout, clock_time: str) -> dt.datetime:
    """Return a moment without a zone: what the clock on the wall shows."""
    midnight = dt.datetime.combine(day_date(plan, bout.day), dt.time())
    return midnight + dt.timedelta(minutes=int(minutes_of_day(clock_time)))
