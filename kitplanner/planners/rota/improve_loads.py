"""Passes for the fairness aims: bring the greatest load down to its bound, then even out all loads."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.bounds import slots_at
from kitplanner.planners.rota.passes import PARTNERS_TRIED, Passes
from kitplanner.planners.rota.search import Search

IntArray = npt.NDArray[np.int64]

_ROUNDING_WH = 1e-3


class LoadPasses(Passes):
    """Level and even."""

    def __init__(self, search: Search, least_load: float) -> None:
        """Take the search and the proven least greatest load to aim for."""
        super().__init__(search)
        self.least_load = least_load

    def level(self) -> None:
        """Bring the greatest load down to its proven bound, one most loaded person after the other."""
        stuck: set[int] = set()
        while True:
            relative = self.draft.relative_load()
            relative[list(stuck)] = 0.0
            person = int(np.argmax(relative)) if len(relative) else 0
            if not len(relative) or relative[person] <= self.least_load + 1e-9:
                return
            if self._relieve(person, float(relative[person])):
                stuck.clear()
            else:
                stuck.add(person)
            self.search.report()

    def _relieve(self, person: int, load: float) -> bool:
        """Move some of one person's turning to others so that the greatest load of the two falls."""
        draft = self.draft
        mine = sorted(
            (k for k, b in draft.bouts.items() if b.person == person and not b.locked),
            key=lambda k: draft.bouts[k].length,
        )
        target = slots_at(self.problem, np.nextafter(load, 0.0) - 1e-9)
        for key in mine:
            for other in self._partners(key, target):
                if self._pass_on(key, other, target):
                    return True
        return any(self._replace(key, target) for key in mine)

    def _partners(self, key: int, target: IntArray) -> Iterator[int]:
        """Yield people with room below the target who can turn at the bout's station and time, least loaded first."""
        bout = self.draft.bouts[key]
        relative = self.draft.relative_load()
        fit = self.problem.output_w[:, bout.station] > 0.0
        fit &= self.draft.load < target
        fit &= (
            self.problem.may_turn[:, bout.start] & ~self.draft.held[:, bout.start] & ~self.draft.watching[:, bout.start]
        )
        fit[bout.person] = False
        people = np.flatnonzero(fit)
        for other in people[np.argsort(relative[people], kind="stable")][:PARTNERS_TRIED]:
            yield int(other)

    def _pass_on(self, key: int, other: int, target: IntArray) -> bool:
        """Give a bout to another person, as long as they may, and make up for what is then missing."""
        draft = self.draft
        bout = draft.bouts[key]
        room = min(bout.length, int(target[other] - draft.load[other]))
        length = self.longest(other, bout.start // self.problem.per_day, room)
        if length <= 0:
            return False

        def change() -> bool:
            return draft.hand_over(key, other, length) is not None and self._make_up(target)

        return self.search.attempt(change)

    def _replace(self, key: int, target: IntArray) -> bool:
        """Drop a bout and make up for it elsewhere within the target."""
        bout = self.draft.bouts[key]

        def change() -> bool:
            self.draft.remove(key)
            return self._make_up(target, avoid=bout.person)

        return self.search.attempt(change)

    def _make_up(self, target: IntArray, avoid: int = -1, most: int = 3) -> bool:
        """Add up to a few bouts within the target until nothing new is missed."""
        allowed = self.search.value.unmet_mwh[-1] / 1000.0 + self.search.value.margin_mwh / 1000.0
        for _ in range(most):
            short = self.missing()
            if short.max() <= allowed + _ROUNDING_WH:
                return True
            limit = max(int(np.argmax(short > allowed + _ROUNDING_WH)), 1)
            if not self._add_quietly(target, limit, avoid):
                return False
        return bool(self.missing().max() <= allowed + _ROUNDING_WH)

    def _add_quietly(self, target: IntArray, due: int, avoid: int) -> bool:
        """Place one bout before a slot for the least loaded person with room; part of a larger change."""
        draft = self.draft
        relative = draft.relative_load()
        people = self.able[(draft.load < target)[self.able]]
        for person in people[np.argsort(relative[people], kind="stable")][:PARTNERS_TRIED]:
            if person == avoid:
                continue
            for day in self.lightest_days(int(person), due):
                longest = self.longest(int(person), int(day), int(target[person] - draft.load[person]))
                if longest <= 0:
                    continue
                for station, start in self.places(int(person), longest, int(day), due):
                    if draft.place(int(person), station, start, longest) is not None:
                        return True
        return False

    def even(self) -> None:
        """Hand bouts from the more to the less loaded while that evens out the loads."""
        progress = True
        while progress:
            progress = False
            relative = self.draft.relative_load()
            mean = float(relative[self.able].mean()) if len(self.able) else 0.0
            for person in self.able[np.argsort(-relative[self.able], kind="stable")]:
                if self.draft.relative_load()[person] <= mean:
                    break
                progress |= self._hand_down(int(person))

    def _hand_down(self, person: int) -> bool:
        load = float(self.draft.relative_load()[person])
        target = slots_at(self.problem, np.nextafter(load, 0.0) - 1e-9)
        for key in [k for k, b in self.draft.bouts.items() if b.person == person and not b.locked]:
            for other in self._partners(key, target):
                if self._pass_on(key, other, target):
                    return True
        return False
