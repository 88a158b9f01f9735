"""Every rota of a tiny plan, one after the other: the optimum where there are few enough to look at.

Bouts are tried in order of start, each with every unit and watcher that makes a difference; a branch ends where no
further bout fits. Larger plans are left to the passes of `improve.py`.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from kitplanner.planners.rota.draft import Placed
from kitplanner.planners.rota.problem import RotaProblem
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.value import Value, value_of

# About a second of looking; more candidates than this are more rotas than can be looked at.
MOST_CANDIDATES, MOST_ROTAS = 48, 20_000

Candidate = tuple[int, int, int, int]


def candidates(problem: RotaProblem) -> list[Candidate]:
    """Return every single bout that time allows as (start, person, station, length), at most one too many."""
    found: list[Candidate] = []
    for person in np.flatnonzero(problem.allowance > 0):
        for start in np.flatnonzero(problem.may_turn[person]):
            day = int(start) // problem.per_day
            last = (day + 1) * problem.per_day
            for station in np.flatnonzero(problem.output_w[person] > 0.0):
                for length in range(1, min(int(problem.bout[person, day]), last - int(start)) + 1):
                    span = slice(int(start), int(start) + length)
                    if not problem.may_turn[person, span].all() or not problem.units[station, span].all():
                        break
                    found.append((int(start), int(person), int(station), length))
                    if len(found) > MOST_CANDIDATES:
                        return found
    return sorted(found)


class Enumeration:
    """A walk through all rotas of a tiny problem that remembers the best."""

    def __init__(self, search: Search) -> None:
        """Take a search whose draft holds only what is fixed."""
        self.search = search
        self.draft = search.draft
        self.options = candidates(search.draft.problem)
        self.looked_at = 0
        self.best: Value | None = None
        self.best_bouts: tuple[Placed, ...] = ()

    def run(self) -> bool:
        """Look at every rota and leave the best in the draft; False, the draft untouched, where there are too many."""
        if len(self.options) > MOST_CANDIDATES:
            return False
        start = self.draft.mark()
        whole = self._from(0)
        self.draft.rollback(start)
        if not whole or self.best is None:
            return False
        fixed = set(self.draft.bouts.values())
        for bout in self.best_bouts:
            if bout not in fixed:
                self.draft.put(bout)
        self.draft.forget()
        self.search.value = self.search.now()
        return True

    def _from(self, first: int) -> bool:
        """Look at the rota as it stands and at all with further bouts from an option on."""
        self.looked_at += 1
        if self.looked_at > MOST_ROTAS:
            return False
        value = value_of(self.draft, self.search.step_wh, self.search.changed(self.draft))
        if self.best is None or value < self.best:
            self.best, self.best_bouts = value, tuple(self.draft.bouts.values())
        for index in range(first, len(self.options)):
            for bout in self._ways(self.options[index]):
                mark = self.draft.mark()
                self.draft.put(bout)
                whole = self._from(index + 1)
                self.draft.rollback(mark)
                if not whole:
                    return False
        return True

    def _ways(self, option: Candidate) -> Iterator[Placed]:
        """Yield the ways a bout can be placed now: units that differ, watchers that differ."""
        start, person, station, length = option
        if not self.draft.may_turn(person, start, length):
            return
        watchers = [-1]
        if self.draft.problem.needs_watcher[person, station]:
            watchers = [int(each) for each in self.draft.watchers(person, start, length)]
        for unit in self._units(station, start, length, person):
            for watcher in watchers:
                yield Placed(start, length, station, unit, person, watcher)

    def _units(self, station: int, start: int, length: int, person: int) -> list[int]:
        """Return one free unit for each changeover that would be lost."""
        by_loss: dict[float, int] = {}
        for unit in self.draft.free_units(station, start, length):
            by_loss.setdefault(self.draft.lost_min(station, unit, start, person), unit)
        return list(by_loss.values())
