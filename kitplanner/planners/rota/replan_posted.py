"""The adopted bouts put back into a draft: begun ones as they are, the others as far as the rules still allow."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, replace

from msgspec import structs

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Bout, Rota
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.draft import Draft, Placed
from kitplanner.planners.rota.problem import RotaProblem
from kitplanner.planners.rota.replan_now import now_slot


@dataclass(slots=True)
class Posted:
    """The draft after the adopted bouts were put back.

    Attributes
    ----------
    draft : Draft
        Begun and kept bouts, all held fast.
    first : int
        First slot that has not begun before now.
    kept : dict of int to Bout
        The record of each bout in the draft, unchanged or shortened.
    lost : list of Bout
        Adopted bouts to come that do not stand as adopted.
    gaps : list of Placed
        Times and places that fell free, whole turns only.
    outside : list of Bout
        Begun bouts that the plan no longer knows a place or person for; they stay in the rota.
    """

    draft: Draft
    first: int
    kept: dict[int, Bout] = field(default_factory=dict)
    lost: list[Bout] = field(default_factory=list)
    gaps: list[Placed] = field(default_factory=list)
    outside: list[Bout] = field(default_factory=list)

    @property
    def lost_locks(self) -> tuple[Bout, ...]:
        """Locked bouts that what has happened does not allow."""
        return tuple(bout for bout in self.lost if bout.locked)


def place_posted(problem: RotaProblem, rota: Rota, now: Now, *, locked_only: bool = False) -> Posted:
    """Return a draft with the adopted bouts: intact ones first, so that no stand-in takes a place that is still held.

    Parameters
    ----------
    problem : RotaProblem
        The problem from now on, with what has happened.
    rota : Rota
        The adopted rota.
    now : Now
        The moment.
    locked_only : bool
        Of the bouts to come put back only the locked ones.

    Returns
    -------
    Posted
        The draft and what became of each bout.
    """
    first = now_slot(now, problem.slot_min)
    posted = Posted(Draft(problem), first)
    to_come: list[tuple[Placed, Bout]] = []
    for bout in rota.bouts:
        placed = _placed(problem, bout)
        begun = ((bout.day - 1) * DAY_MIN + int(minutes_of_day(bout.start))) // problem.slot_min < first
        if begun:
            _enter_begun(posted, placed, bout, now, first)
        elif placed is None or (locked_only and not bout.locked):
            posted.lost.append(bout)
        else:
            to_come.append((placed, bout))
    to_come.sort(key=lambda pair: (not pair[1].locked, pair[0].start))
    broken = [(placed, bout) for placed, bout in to_come if not _keep_intact(posted, placed, bout)]
    for placed, bout in broken:
        _keep_changed(posted, placed, bout)
    posted.draft.forget()
    return posted


def _placed(problem: RotaProblem, bout: Bout) -> Placed | None:
    """Return a bout in slots; None where the plan has no such person, station, unit or day."""
    if bout.person not in problem.people or bout.station not in problem.stations or not 1 <= bout.day <= problem.days:
        return None
    station = problem.stations.index(bout.station)
    if not 1 <= bout.unit <= int(problem.units[station].max(initial=0)):
        return None
    start_min, end_min = int(minutes_of_day(bout.start)), int(minutes_of_day(bout.end))
    start = (bout.day - 1) * problem.per_day + start_min // problem.slot_min
    watcher = problem.people.index(bout.watcher) if bout.watcher in problem.people else -1
    length = (end_min - start_min) // problem.slot_min
    return Placed(start, length, station, bout.unit - 1, problem.people.index(bout.person), watcher, locked=True)


def _enter_begun(posted: Posted, placed: Placed | None, bout: Bout, now: Now, first: int) -> None:
    """Enter a bout that began before now as it is; one that somebody had to leave ends now."""
    if placed is None:
        posted.outside.append(bout)
        return
    if placed.end > first and _left(posted.draft.problem, placed, now, first):
        posted.lost.append(bout)
        ended = ((now.day - 1) * DAY_MIN + now.minute) // posted.draft.problem.slot_min
        placed = replace(placed, length=ended - placed.start)
        if placed.length <= 0:
            return
        bout = structs.replace(bout, end=_end_clock(posted.draft.problem, bout, placed))
    posted.kept[posted.draft.put(placed)] = bout


def _end_clock(problem: RotaProblem, bout: Bout, placed: Placed) -> str:
    return clock((placed.end - (bout.day - 1) * problem.per_day) * problem.slot_min)


def _left(problem: RotaProblem, placed: Placed, now: Now, first: int) -> bool:
    """Tell whether a bout under way cannot go on: person or watcher has left, its unit is out, or it is too hot."""
    rest = slice(first, placed.end)
    if int(problem.units[placed.station, rest].min()) <= placed.unit:
        return True
    if not problem.may_turn[placed.person, rest].all():
        return True
    if placed.watcher >= 0 and not problem.may_watch[placed.watcher, rest].all():
        return True
    return now.air_degc is not None and placed.length > problem.bout[placed.person, placed.start // problem.per_day]


def _keep_intact(posted: Posted, placed: Placed, bout: Bout) -> bool:
    """Put a bout back just as it was, if every rule allows it."""
    draft = posted.draft
    if not may_turn(draft, placed) or not unit_free(draft, placed):
        return False
    needed = bool(draft.problem.needs_watcher[placed.person, placed.station])
    if needed and placed.watcher < 0:
        return False
    if bout.watcher is not None and (placed.watcher < 0 or not may_watch(draft, placed)):
        return False
    posted.kept[draft.put(placed)] = bout
    return True


def _keep_changed(posted: Posted, placed: Placed, bout: Bout) -> None:
    """Put a bout back with another watcher, at another unit or shorter; else it falls away and leaves a gap."""
    draft, problem = posted.draft, posted.draft.problem
    posted.lost.append(bout)
    for candidate in _alternatives(draft, placed):
        if not may_turn(draft, candidate):
            continue
        watcher = candidate.watcher if candidate.watcher >= 0 and may_watch(draft, candidate) else -1
        if watcher < 0 and problem.needs_watcher[candidate.person, candidate.station]:
            found = draft.find_watcher(candidate.person, candidate.start, candidate.length)
            if found is None:
                continue
            watcher = found
        changed = replace(candidate, watcher=watcher)
        posted.kept[draft.put(changed)] = changed_record(problem, bout, changed)
        return
    posted.gaps.append(placed)


def _alternatives(draft: Draft, placed: Placed) -> Iterator[Placed]:
    """Yield the same turn, then ever shorter ones, at its own unit or else at another free one."""
    for length in range(placed.length, 0, -1):
        shorter = replace(placed, length=length)
        if unit_free(draft, shorter):
            yield shorter
            continue
        unit = draft.free_unit(placed.station, placed.start, length, placed.person)
        if unit is not None:
            yield replace(shorter, unit=unit)


def changed_record(problem: RotaProblem, bout: Bout, placed: Placed) -> Bout:
    """Return an adopted bout with the end, unit and watcher it now has."""
    watcher = problem.people[placed.watcher] if placed.watcher >= 0 else None
    return structs.replace(bout, end=_end_clock(problem, bout, placed), unit=placed.unit + 1, watcher=watcher)


def may_turn(draft: Draft, placed: Placed) -> bool:
    """Tell whether a bout's person may turn it there and then."""
    able = draft.problem.output_w[placed.person, placed.station] > 0.0
    return bool(able) and draft.may_turn(placed.person, placed.start, placed.length)


def unit_free(draft: Draft, placed: Placed) -> bool:
    """Tell whether a bout's own unit is open and free for all of it."""
    problem = draft.problem
    span = slice(placed.start, placed.end)
    if int(problem.units[placed.station, span].min(initial=0 if placed.length <= 0 else 1 << 30)) <= placed.unit:
        return False
    limit = int(problem.daily[placed.station])
    day = placed.start // problem.per_day
    if limit >= 0 and draft.unit_day[placed.station][placed.unit, day] + placed.length > limit:
        return False
    return not draft.unit_busy[placed.station][placed.unit, span].any()


def may_watch(draft: Draft, placed: Placed) -> bool:
    """Tell whether a bout's watcher is there, not turning and not watching another one."""
    span = slice(placed.start, placed.end)
    watcher = placed.watcher
    return bool(
        watcher != placed.person
        and draft.problem.may_watch[watcher, span].all()
        and not draft.turning[watcher, span].any()
        and not draft.watching[watcher, span].any()
    )
