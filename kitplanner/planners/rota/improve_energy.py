"""Passes for the energy aims: meet what is missed, drop what is too much."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.bounds import load_steps, slots_at
from kitplanner.planners.rota.passes import SLACK_WH, Passes
from kitplanner.planners.rota.search import Search

FloatArray = npt.NDArray[np.float64]


class EnergyPasses(Passes):
    """Fill and trim."""

    def __init__(self, search: Search, least_load: float) -> None:
        """Take the search and the load from which on more may be asked of people, step by step."""
        super().__init__(search)
        self.least_load = least_load
        self.steps = load_steps(self.problem)

    def fill(self) -> None:
        """Add bouts before the first need that is missed, least loaded first, raising loads only where it must be."""
        level = int(np.searchsorted(self.steps, max(self.least_load, self.greatest()) - 1e-9))
        while level < len(self.steps):
            short = self.missing()
            if short.max() <= SLACK_WH:
                return
            due = int(np.argmax(short > SLACK_WH))
            # What is missed later may still be made later, even where the first need is lost.
            if not any(self._add_before(limit, self.steps[level]) for limit in {due, len(short) - 1}):
                level += 1

    def _add_before(self, due: int, load: float) -> bool:
        """Add one bout that helps before a slot, within a greatest load."""
        budget = slots_at(self.problem, load)
        order = self.able[np.argsort(self.draft.relative_load()[self.able], kind="stable")]
        for person in order:
            if self.draft.load[person] < budget[person]:
                room = int(budget[person] - self.draft.load[person])
                if self._add_for(int(person), due, room):
                    return True
        return False

    def _add_for(self, person: int, due: int, room: int) -> bool:
        """Add one bout of a person before a slot, on the days that are lightest for them first."""
        for day in self.lightest_days(person, due):
            for length in range(self.longest(person, int(day), room), 0, -1):
                for station, start in self.places(person, length, int(day), due):
                    if self.search.attempt(self._place, person, station, start, length):
                        return True
        return False

    def trim(self) -> None:
        """Shorten or drop bouts while energy is made beyond use plus margin, heaviest loads first."""
        changed = True
        while changed:
            changed = False
            relative = self.draft.relative_load()
            keys = sorted(
                self.draft.bouts, key=lambda k: (-relative[self.draft.bouts[k].person], -self.draft.bouts[k].start)
            )
            spare = self._spare()
            if spare[0] <= self._least_slot():
                return
            for key in keys:
                bout = self.draft.bouts.get(key)
                if bout is None or bout.locked:
                    continue
                if self._cut(key, float(spare[bout.start + 1])):
                    changed = True
                    spare = self._spare()

    def _spare(self) -> FloatArray:
        """Return the energy that could be left out from each slot on without missing anything more."""
        over = np.maximum(0.0, -self.missing())
        return np.asarray(np.minimum.accumulate(over[::-1])[::-1])

    def _least_slot(self) -> float:
        watts = self.problem.output_w * self.problem.outlet_fraction[None, :]
        positive = watts[watts > 0.0]
        return float(positive.min() * self.problem.slot_min / 60.0) if positive.size else float("inf")

    def _cut(self, key: int, spare_wh: float) -> bool:
        bout = self.draft.bouts[key]
        per_slot = self.problem.slot_wh(bout.person, bout.station)
        slots = min(bout.length, int((spare_wh + SLACK_WH) / per_slot))
        if slots <= 0:
            return False
        if slots == bout.length:
            return self.search.attempt(self._drop, key)
        return self.search.attempt(self._shorten, key, bout.length - slots)

    def _place(self, person: int, station: int, start: int, length: int) -> bool:
        return self.draft.place(person, station, start, length) is not None

    def _drop(self, key: int) -> bool:
        self.draft.remove(key)
        return True

    def _shorten(self, key: int, length: int) -> bool:
        self.draft.shorten(key, length)
        return True
