"""Calendars of a rota, read back with the icalendar library: RFC 5545 is what they are held to."""

from __future__ import annotations

import datetime as dt
import re

import icalendar
import pytest
from msgspec.structs import replace

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Bout, Plan, Rota
from kitplanner.plan.shipped import demo
from kitplanner.report.calendar import CalendarOf, calendar_files

STAMP = dt.datetime(2026, 3, 4, 9, 30, tzinfo=dt.UTC)


def bout(name: str, person: str, start: str, end: str, **more) -> Bout:
    fields = {"day": 1, "station": "B-S2", "unit": 1, "watcher": None} | more
    return Bout(id=name, person=person, start=start, end=end, **fields)


FIRST = Rota(
    id="rota",
    edition=1,
    slot_min=5,
    bouts=(
        bout("b1", "L1", "08:30", "08:50"),
        bout("b2", "Y01", "09:00", "09:15", watcher="L2", unit=2),
        bout("b3", "L2", "23:40", "24:00", day=3, station="B-S1"),
    ),
)


@pytest.fixture(scope="module")
def plan() -> Plan:
    return read_plan(demo("camp"))


def files_of(plan: Plan, rota: Rota = FIRST, before: Rota | None = None, *, names: bool = False) -> dict[str, bytes]:
    return calendar_files(plan, CalendarOf(rota=rota, before=before, stamp=STAMP, names=names))


def events_of(data: bytes) -> list[icalendar.Event]:
    return list(icalendar.Calendar.from_ical(data).walk("VEVENT"))


def test_a_calendar_for_each_person_and_station_with_something_to_do(plan: Plan) -> None:
    assert sorted(files_of(plan)) == [
        "person-L1.ics",
        "person-L2.ics",
        "person-Y01.ics",
        "station-B-S1.ics",
        "station-B-S2.ics",
    ]


def test_calendars_keep_the_required_properties(plan: Plan) -> None:
    for name, data in files_of(plan).items():
        calendar = icalendar.Calendar.from_ical(data)
        assert (str(calendar["version"]), str(calendar["method"])) == ("2.0", "PUBLISH"), name
        assert str(calendar["prodid"])
        assert not calendar.errors
        for event in calendar.walk("VEVENT"):
            # RFC 5545 3.6.1: UID and DTSTAMP are required, and DTSTAMP is in UTC (3.8.7.2).
            assert str(event["uid"])
            assert event["dtstamp"].dt == STAMP
            assert str(event["summary"])
            assert str(event["description"]).endswith(".")
            assert not event.errors
        assert all(len(line) <= 75 for line in data.split(b"\r\n")), "lines are folded at 75 octets (3.1)"


def test_times_float_and_midnight_is_the_next_day(plan: Plan) -> None:
    first, last = events_of(files_of(plan)["station-B-S2.ics"])
    assert first["dtstart"].dt.isoformat() == "2026-07-14T08:30:00"
    assert first["dtend"].dt.isoformat() == "2026-07-14T08:50:00"
    assert "TZID" not in first["dtstart"].params
    assert last["dtstart"].dt.tzinfo is None
    (late,) = events_of(files_of(plan)["station-B-S1.ics"])
    assert late["dtstart"].dt.isoformat() == "2026-07-16T23:40:00"
    assert late["dtend"].dt.isoformat() == "2026-07-17T00:00:00"


def test_people_are_numbers_unless_names_are_asked_for(plan: Plan) -> None:
    names = [person.name for person in plan.people]
    by_number = b"".join(files_of(plan).values()).replace(b"\r\n ", b"").decode()
    assert not any(re.search(rf"\b{name}\b", by_number) for name in names)
    assert "no. 5 turns" in by_number
    shown = files_of(plan, names=True)
    turn, watch = events_of(shown["person-L2.ics"])[::-1]
    assert str(watch["summary"]) == "Watch: Table crank, unit 2"
    assert "Arvik turns" in str(watch["description"])
    assert str(turn["summary"]) == "Turn: Pedal stand, chain enclosed"
    assert str(events_of(shown["station-B-S2.ics"])[1]["summary"]) == "Unit 2: Arvik turns, Tolvae watches"


def test_nothing_tells_limits_or_ages(plan: Plan) -> None:
    limited = replace(
        plan, people=tuple(replace(one, age=57, cap_min=43, bout_min=17, role="ill") for one in plan.people)
    )
    text = b"".join(files_of(limited, names=True).values()).replace(b"\r\n ", b"").decode()
    for word in ("57", "43", "17 min", "ill."):
        assert word not in re.sub(r"(UID|DTSTAMP):.*", "", text), word


def test_identifiers_are_stable_unique_and_without_names(plan: Plan) -> None:
    files = files_of(plan)
    uids = [str(event["uid"]) for data in files.values() for event in events_of(data)]
    assert len(uids) == len(set(uids)) == 7
    assert all(re.fullmatch(r"[0-9a-f]{40}@kitplanner", uid) for uid in uids)
    renamed = replace(plan, people=tuple(replace(one, name="Somebody else") for one in plan.people))
    for chosen in (plan, renamed):
        again = files_of(chosen, names=True)
        assert [str(event["uid"]) for data in again.values() for event in events_of(data)] == uids
    later = replace(plan, start=dt.date(2027, 1, 1))
    assert not {str(event["uid"]) for data in files_of(later).values() for event in events_of(data)} & set(uids)


def test_a_second_import_updates_and_takes_out_what_is_gone(plan: Plan) -> None:
    second = replace(
        FIRST, edition=2, bouts=(FIRST.bouts[0], bout("b4", "Y02", "09:00", "09:15", watcher="L2", unit=2))
    )
    before = {str(event["uid"]) for data in files_of(plan).values() for event in events_of(data)}
    files = files_of(plan, second, FIRST)
    for event in (event for data in files.values() for event in events_of(data)):
        assert int(event["sequence"]) == 2
        if str(event["status"]) == "CANCELLED":
            assert str(event["uid"]) in before
    (dropped,) = events_of(files["person-Y01.ics"])
    assert str(dropped["status"]) == "CANCELLED"
    kept, gone = events_of(files["person-L2.ics"])
    assert (str(kept["summary"]), str(kept["status"])) == ("Watch: Table crank, unit 2", "CONFIRMED")
    assert (str(gone["summary"]), str(gone["status"])) == ("Turn: Pedal stand, chain enclosed", "CANCELLED")
    # The watcher and the unit keep their events though somebody else turns.
    assert str(kept["uid"]) in before
    handed_over = events_of(files["station-B-S2.ics"])[1]
    assert (str(handed_over["uid"]) in before, str(handed_over["status"])) == (True, "CONFIRMED")


def test_file_names_are_safe_whatever_the_ids(plan: Plan) -> None:
    odd = ("../../etc/passwd", "a/b", "A", "a", "é" * 200, " ", "con.", "x\x00y")
    people = tuple(replace(plan.people[0], id=key) for key in odd)
    bouts = tuple(bout(f"b{n}", key, f"{8 + n:02d}:00", f"{8 + n:02d}:20") for n, key in enumerate(odd))
    files = files_of(replace(plan, people=people), replace(FIRST, bouts=bouts))
    own = [name for name in files if name.startswith("person-")]
    assert len({name.casefold() for name in own}) == len(odd)
    assert all(re.fullmatch(r"[A-Za-z0-9._-]{5,90}\.ics", name) for name in files)


def test_signs_with_a_meaning_in_the_format_come_back_whole(plan: Plan) -> None:
    name = 'Ann; Bo, C\\D: "x" é' + "long " * 40
    renamed = replace(plan, people=(replace(plan.people[0], name=name), *plan.people[1:]))
    event = events_of(files_of(renamed, names=True)["station-B-S2.ics"])[0]
    assert str(event["summary"]) == f"Unit 1: {name.strip()} turns"


def test_a_rota_without_bouts_gives_no_file(plan: Plan) -> None:
    assert files_of(plan, replace(FIRST, bouts=())) == {}


def test_people_and_stations_that_are_gone_are_left_out(plan: Plan) -> None:
    assert "person-L1.ics" not in files_of(replace(plan, people=plan.people[1:]))
    without = replace(plan, people=tuple(one for one in plan.people if one.id != "L2"))
    assert "Watched by" not in files_of(without)["person-Y01.ics"].decode()
