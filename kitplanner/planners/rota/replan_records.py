"""Who has other turns than before: the difference of two rotas by person."""

from __future__ import annotations

from collections.abc import Iterable

from msgspec import Struct

from kitplanner.domain.units import clock
from kitplanner.plan.records import Bout
from kitplanner.planners.rota.draft import Draft


class PersonChange(Struct, frozen=True, kw_only=True):
    """One person's turns that were posted and are no more, and those that are new; likewise turns they watch."""

    person: str
    before: tuple[Bout, ...]
    after: tuple[Bout, ...]
    watched_before: tuple[Bout, ...] = ()
    watched_after: tuple[Bout, ...] = ()


def changes_of(before: Iterable[Bout], after: Iterable[Bout]) -> tuple[PersonChange, ...]:
    """Return the difference of two rotas, one row for each person it touches, in order of their first change.

    A turn whose watcher alone changes is a change of the watchers, not of the person who turns.

    Examples
    --------
    >>> old = Bout(id="b", day=1, start="15:20", end="15:40", station="s", person="M4")
    >>> new = Bout(id="c", day=1, start="16:00", end="16:20", station="s", person="M4")
    >>> [(row.person, row.after[0].start) for row in changes_of((old,), (new,))]
    [('M4', '16:00')]
    """
    old, new = tuple(before), tuple(after)
    turns_old, turns_new = {turn_of(bout): bout for bout in old}, {turn_of(bout): bout for bout in new}
    watch_old = {(bout.watcher, *turn_of(bout)): bout for bout in old if bout.watcher}
    watch_new = {(bout.watcher, *turn_of(bout)): bout for bout in new if bout.watcher}
    gone = [bout for key, bout in turns_old.items() if key not in turns_new]
    added = [bout for key, bout in turns_new.items() if key not in turns_old]
    unwatched = [bout for key, bout in watch_old.items() if key not in watch_new]
    watched = [bout for key, bout in watch_new.items() if key not in watch_old]
    first: dict[str, tuple[int, str]] = {}
    for person, bout in (
        *((bout.person, bout) for bout in (*gone, *added)),
        *((str(bout.watcher), bout) for bout in (*unwatched, *watched)),
    ):
        first[person] = min(first.get(person, (bout.day, bout.start)), (bout.day, bout.start))
    return tuple(
        PersonChange(
            person=person,
            before=_in_order(bout for bout in gone if bout.person == person),
            after=_in_order(bout for bout in added if bout.person == person),
            watched_before=_in_order(bout for bout in unwatched if bout.watcher == person),
            watched_after=_in_order(bout for bout in watched if bout.watcher == person),
        )
        for person in sorted(first, key=lambda each: (first[each], each))
    )


def turn_of(bout: Bout) -> tuple[int, str, str, str, int, str]:
    """Return what makes a turn the same turn: when, where and who, not who watches."""
    return (bout.day, bout.start, bout.end, bout.station, bout.unit, bout.person)


def _in_order(bouts: Iterable[Bout]) -> tuple[Bout, ...]:
    return tuple(sorted(bouts, key=lambda bout: (bout.day, bout.start)))


def bout_record(draft: Draft, key: int, bout_id: str) -> Bout:
    """Return a new bout of a draft as the record a rota keeps."""
    problem, bout = draft.problem, draft.bouts[key]
    day, first = divmod(bout.start, problem.per_day)
    return Bout(
        id=bout_id,
        day=day + 1,
        start=clock(first * problem.slot_min),
        end=clock((first + bout.length) * problem.slot_min),
        station=problem.stations[bout.station],
        person=problem.people[bout.person],
        unit=bout.unit + 1,
        watcher=problem.people[bout.watcher] if bout.watcher >= 0 else None,
    )
