"""Passes for the shape of a rota: unpopular slots go round, a person's short bouts of a day are joined."""

from __future__ import annotations

import numpy as np

from kitplanner.planners.rota.passes import PARTNERS_TRIED, Passes


class ShapePasses(Passes):
    """Turn round and join."""

    def turn_round(self) -> None:
        """Let unpopular slots go round: swap them with the ordinary bouts of people who had none."""
        while True:
            worst = int(np.argmax(self.draft.unpopular)) if len(self.able) else 0
            if not len(self.able) or not self.draft.unpopular[worst] or not self._swap_away(worst):
                return

    def _swap_away(self, person: int) -> bool:
        draft, problem = self.draft, self.problem
        mine = [k for k, b in draft.bouts.items() if b.person == person and not b.locked and problem.unpopular[b.start]]
        others = [
            k for k, b in draft.bouts.items() if b.person != person and not b.locked and not problem.unpopular[b.start]
        ]
        others.sort(key=lambda k: (draft.unpopular[draft.bouts[k].person], draft.bouts[k].start))
        for key in mine:
            alike = [k for k in others if draft.bouts[k].length == draft.bouts[key].length][:PARTNERS_TRIED]
            for other in alike:
                if self.search.attempt(self._swap, key, other):
                    return True
        return False

    def _swap(self, first: int, second: int) -> bool:
        """Let two people change places."""
        draft = self.draft
        one, two = draft.bouts[first], draft.bouts[second]
        draft.remove(first)
        draft.remove(second)
        return (
            draft.place(two.person, one.station, one.start, one.length, unit=one.unit) is not None
            and draft.place(one.person, two.station, two.start, two.length, unit=two.unit) is not None
        )

    def join(self) -> None:
        """Make fewer and longer bouts: lengthen one bout of a day and drop or shorten another of the same person."""
        by_day: dict[tuple[int, int], list[int]] = {}
        for key, bout in self.draft.bouts.items():
            if not bout.locked:
                by_day.setdefault((bout.person, bout.start // self.problem.per_day), []).append(key)
        for (person, day), mine in by_day.items():
            if len(mine) > 1:
                self._join_day(person, day, mine)

    def _join_day(self, person: int, day: int, mine: list[int]) -> None:
        draft, problem = self.draft, self.problem
        mine.sort(key=lambda k: draft.bouts[k].length)
        for place, short in enumerate(mine):
            for longer in mine[place + 1 :]:
                total = draft.bouts[short].length + draft.bouts[longer].length
                if total <= problem.bout[person, day] and self.search.attempt(self._merge, short, longer, total):
                    return

    def _merge(self, short: int, longer: int, length: int) -> bool:
        draft = self.draft
        draft.remove(short)
        bout = draft.remove(longer)
        return any(
            draft.place(bout.person, bout.station, start, length) is not None
            for start in (bout.start, bout.end - length)
            if start >= 0
        )
