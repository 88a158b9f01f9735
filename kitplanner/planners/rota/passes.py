"""What all passes of the search share: the draft, what it misses, and where another bout would fit."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.openings import openings
from kitplanner.planners.rota.search import Search

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

SLACK_WH = 1e-6
PARTNERS_TRIED = 12
_STARTS_TRIED = 4


class Passes:
    """A search with its draft and the people who turn at all."""

    def __init__(self, search: Search) -> None:
        """Take the search whose draft is to be made better."""
        self.search = search
        self.draft = search.draft
        self.problem = search.draft.problem
        self.able = np.flatnonzero(self.problem.allowance > 0)

    def missing(self) -> FloatArray:
        """Return what is missed of use and margin by each slot, at O, shape (slots + 1,)."""
        need = self.problem.need
        return need.with_margin - need.supply - np.concatenate(([0.0], np.cumsum(self.draft.made)))

    def greatest(self) -> float:
        """Return the greatest load."""
        return float(self.draft.relative_load().max(initial=0.0))

    def lightest_days(self, person: int, due: int) -> IntArray:
        """Return the days up to a slot, those on which a person turns least first."""
        days = np.arange(min(self.problem.days, -(-due // self.problem.per_day)))
        return np.asarray(days[np.argsort(self.draft.day_load[person, days], kind="stable")])

    def longest(self, person: int, day: int, room: int) -> int:
        """Return the longest bout a person may still turn on a day within some room."""
        left = int(self.problem.cap[person, day] - self.draft.day_load[person, day])
        return min(room, int(self.problem.bout[person, day]), left)

    def places(self, person: int, length: int, day: int, due: int) -> Iterator[tuple[int, int]]:
        """Yield stations, strongest first, with a few start slots before a slot, spread over the day."""
        watts = self.problem.output_w[person]
        for station in np.argsort(-watts, kind="stable"):
            if watts[station] <= 0.0:
                return
            starts = openings(self.draft, person, int(station), length, day)
            starts = starts[starts < due]
            for pick in _spread(starts, _STARTS_TRIED):
                yield int(station), int(pick)


def _spread(starts: IntArray, count: int) -> IntArray:
    """Return a few of many start slots, spread evenly, the last among them."""
    if len(starts) <= count:
        return starts
    return starts[np.linspace(0, len(starts) - 1, count).astype(np.int64)]
