"""Making up for what a change took away: the least loaded who can turn more, in whole turns, nobody else touched."""

from __future__ import annotations

import dataclasses
from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.draft import Placed
from kitplanner.planners.rota.improve_energy import EnergyPasses
from kitplanner.planners.rota.openings import openings
from kitplanner.planners.rota.replan_posted import Posted, changed_record, may_turn, may_watch, unit_free
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.value import missed_wh

IntArray = npt.NDArray[np.int64]

_SLACK_WH = 1e-6
_STARTS_TRIED = 3
# A new turn is this long at least, or as long as the person's own bout: a posted rota is not filled with scraps.
LEAST_TURN_MIN = 10


class Filler:
    """New bouts in a draft whose posted ones are held fast."""

    def __init__(self, search: Search, posted: Posted) -> None:
        """Take the search on the draft and what fell away from it."""
        self.search = search
        self.draft = search.draft
        self.problem = search.draft.problem
        self.posted = posted
        greatest = float(self.draft.relative_load().max(initial=0.0))
        self.energy = EnergyPasses(search, greatest)
        self.least = -(-LEAST_TURN_MIN // self.problem.slot_min)

    def run(self) -> None:
        """Offer the turns that fell away, then any other opening; drop what of the new ones proves too much."""
        for stage in (self._stand_in, self._fill, self._lengthen, self._fill_scraps, self.energy.trim):
            self.search.run(stage)

    def _stand_in(self) -> None:
        """Offer each turn that fell away to the least loaded who may take it, while anything is missing."""
        for bout in self.posted.gaps:
            if self._met():
                return
            day = bout.start // self.problem.per_day
            free = self.problem.may_turn[:, bout.start] & ~self.draft.held[:, bout.start]
            free &= ~self.draft.watching[:, bout.start] & (self.problem.output_w[:, bout.station] > 0.0)
            for person in self._least_loaded(free):
                most = min(bout.length, self._longest(person, day))
                if most >= min(self.least, bout.length) and self._offer(person, bout.station, bout.start, most):
                    break

    def _fill(self) -> None:
        """Add turns before the first need that is missed, else at any later time, until nothing can be added."""
        # Who finds no opening before a slot finds none before an earlier one either: openings only grow fewer.
        failed = np.full(len(self.problem.people), -1)
        while not self._met():
            short = self.energy.missing()
            due = int(np.argmax(short > _SLACK_WH))
            if not self._add_before(due, failed) and not self._add_before(len(short) - 1, failed):
                return

    def _lengthen(self) -> None:
        """Let posted turns to come go on a little longer, least loaded people first, while anything is missing."""
        bouts = self.draft.bouts
        for person in self._least_loaded(self.problem.allowance > 0):
            mine = [key for key, bout in self.posted.kept.items() if self._may_grow(person, key, bout.locked)]
            for key in sorted(mine, key=lambda each: bouts[each].start):
                if self._met():
                    return
                self._grow(key)

    def _may_grow(self, person: int, key: int, locked: bool) -> bool:
        bout = self.draft.bouts[key]
        return bout.person == person and not locked and bout.start >= self.posted.first

    def _grow(self, key: int) -> None:
        """Lengthen one posted turn as far as bout, cap, unit and watcher allow."""
        old, record = self.draft.bouts[key], self.posted.kept[key]
        day = old.start // self.problem.per_day
        most = min(int(self.problem.bout[old.person, day]), old.length + self._longest(old.person, day))
        for length in range(most, old.length, -1):
            longer = dataclasses.replace(old, length=length)
            if self.search.attempt(lambda longer=longer: self._swap(key, longer)):
                new = next(reversed(self.draft.bouts))
                del self.posted.kept[key]
                self.posted.kept[new] = changed_record(self.problem, record, longer)
                # A turn that was shortened already counts as lost once.
                if record not in self.posted.lost:
                    self.posted.lost.append(record)
                return

    def _swap(self, key: int, longer: Placed) -> bool:
        """Put a longer turn in the place of a posted one; False where a rule forbids it."""
        self.draft.remove(key)
        watched = longer.watcher < 0 or may_watch(self.draft, longer)
        if not (watched and may_turn(self.draft, longer) and unit_free(self.draft, longer)):
            return False
        self.draft.put(longer)
        return True

    def _fill_scraps(self) -> None:
        """Add even the shortest turns where use would go unserved, which is worse than a short turn."""
        unmet, _ = missed_wh(self.problem, self.draft.made)
        if unmet[-1] > _SLACK_WH:
            self.least = 1
            self._fill()

    def _met(self) -> bool:
        return bool(self.energy.missing().max() <= _SLACK_WH)

    def _add_before(self, due: int, failed: IntArray) -> bool:
        """Add one turn before a slot; `failed` holds up to which slot each person had no opening."""
        able = (self.problem.allowance > 0) & (self.draft.load < self.problem.allowance)
        for person in self._least_loaded(able & (failed < due)):
            if self._add_for(person, due):
                return True
            failed[person] = due
        return False

    def _add_for(self, person: int, due: int) -> bool:
        """Add the longest turn a person may take before a slot, on the days that are lightest for them first."""
        days = np.arange(min(self.problem.days, -(-due // self.problem.per_day)))
        for day in days[np.argsort(self.draft.day_load[person, days], kind="stable")]:
            longest = self._longest(person, int(day))
            least = min(self.least, int(self.problem.bout[person, day]))
            for length in range(longest, max(0, least - 1), -1):
                for station, start in self._places(person, length, int(day), due):
                    if self._offer(person, station, start, length):
                        return True
        return False

    def _longest(self, person: int, day: int) -> int:
        left = int(self.problem.cap[person, day] - self.draft.day_load[person, day])
        return min(int(self.problem.bout[person, day]), left)

    def _least_loaded(self, mask: npt.NDArray[np.bool_]) -> Iterator[int]:
        people = np.flatnonzero(mask)
        relative = self.draft.relative_load()[people]
        for person in people[np.argsort(relative, kind="stable")]:
            yield int(person)

    def _places(self, person: int, length: int, day: int, due: int) -> Iterator[tuple[int, int]]:
        """Yield stations, strongest first, with a few starts before a slot, first, middle and last."""
        watts = self.problem.output_w[person]
        for station in np.argsort(-watts, kind="stable"):
            if watts[station] <= 0.0:
                return
            starts = openings(self.draft, person, int(station), length, day)
            starts = starts[starts < due]
            if len(starts):
                picks = np.unique(np.linspace(0, len(starts) - 1, min(_STARTS_TRIED, len(starts))).astype(np.int64))
                for pick in picks:
                    yield int(station), int(starts[pick])

    def _offer(self, person: int, station: int, start: int, length: int) -> bool:
        return self.search.attempt(lambda: self.draft.place(person, station, start, length) is not None)
