"""Make a legal rota better, aim by aim: meet what is missed, drop what is too much, share what is left fairly."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.bounds import load_steps, slots_at
from kitplanner.planners.rota.openings import openings
from kitplanner.planners.rota.search import Search

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

_SLACK_WH = 1e-6
_STARTS_TRIED = 4
_PARTNERS_TRIED = 12


class Improver:
    """The passes of one search; each keeps a change only if it improves the whole order of aims."""

    def __init__(self, search: Search, least_load: float) -> None:
        """Take the search and the proven least greatest load to aim for."""
        self.search = search
        self.draft = search.draft
        self.problem = search.draft.problem
        self.least_load = least_load
        self.steps = load_steps(self.problem)
        self.able = np.flatnonzero(self.problem.allowance > 0)

    def run(self) -> None:
        """Run all passes in the order of aims."""
        for stage in (self.fill, self.trim, self.level, self.even, self.turn_round, self.join):
            self.search.run(stage)

    def missing(self) -> FloatArray:
        """Return what is missed of use and margin by each slot, at O, shape (slots + 1,)."""
        need = self.problem.need
        return need.with_margin - need.supply - np.concatenate(([0.0], np.cumsum(self.draft.made)))

    def fill(self) -> None:
        """Add bouts before the first need that is missed, least loaded first, raising loads only where it must be."""
        level = int(np.searchsorted(self.steps, max(self.least_load, self._greatest()) - 1e-9))
        while level < len(self.steps):
            short = self.missing()
            if short.max() <= _SLACK_WH:
                return
            due = int(np.argmax(short > _SLACK_WH))
            # What is missed later may still be made later, even where the first need is lost.
            if not any(self._add_before(limit, self.steps[level]) for limit in {due, len(short) - 1}):
                level += 1

    def _greatest(self) -> float:
        return float(self.draft.relative_load().max(initial=0.0))

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
        problem, draft = self.problem, self.draft
        days = np.arange(min(problem.days, -(-due // problem.per_day)))
        for day in days[np.argsort(draft.day_load[person, days], kind="stable")]:
            longest = min(
                room, int(problem.bout[person, day]), int(problem.cap[person, day] - draft.day_load[person, day])
            )
            for length in range(longest, 0, -1):
                for station, start in self._places(person, length, int(day), due):
                    if self.search.attempt(self._place, person, station, start, length):
                        return True
        return False

    def _places(self, person: int, length: int, day: int, due: int) -> Iterator[tuple[int, int]]:
        """Yield stations, strongest first, with a few start slots before a slot, spread over the day."""
        watts = self.problem.output_w[person]
        for station in np.argsort(-watts, kind="stable"):
            if watts[station] <= 0.0:
                return
            starts = openings(self.draft, person, int(station), length, day)
            starts = starts[starts < due]
            for pick in _spread(starts, _STARTS_TRIED):
                yield int(station), int(pick)

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
        slots = min(bout.length, int((spare_wh + _SLACK_WH) / per_slot))
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
            self.search.report("load", self._greatest(), self.least_load)

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
        for other in people[np.argsort(relative[people], kind="stable")][:_PARTNERS_TRIED]:
            yield int(other)

    def _pass_on(self, key: int, other: int, target: IntArray) -> bool:
        """Give a bout to another person, as long as they may, and make up for what is then missing."""
        draft, problem = self.draft, self.problem
        bout = draft.bouts[key]
        day = bout.start // problem.per_day
        length = min(
            bout.length,
            int(problem.bout[other, day]),
            int(problem.cap[other, day] - draft.day_load[other, day]),
            int(target[other] - draft.load[other]),
        )
        if length <= 0:
            return False

        def change() -> bool:
            return draft.hand_over(key, other, length) is not None and self._make_up(target, bout.end)

        return self.search.attempt(change)

    def _replace(self, key: int, target: IntArray) -> bool:
        """Drop a bout and make up for it elsewhere within the target."""
        bout = self.draft.bouts[key]

        def change() -> bool:
            self.draft.remove(key)
            return self._make_up(target, bout.end, avoid=bout.person)

        return self.search.attempt(change)

    def _make_up(self, target: IntArray, due: int, avoid: int = -1, most: int = 3) -> bool:
        """Add up to a few bouts within the target until nothing new is missed."""
        draft = self.draft
        allowed = self.search.value.unmet_mwh[-1] / 1000.0 + self.search.value.margin_mwh / 1000.0
        for _ in range(most):
            short = self.missing()
            if short.max() <= allowed + 1e-3:
                return True
            limit = max(int(np.argmax(short > allowed + 1e-3)), 1)
            if not self._add_quietly(target, limit, avoid):
                return False
        return bool(self.missing().max() <= allowed + 1e-3) and draft is not None and due >= 0

    def _add_quietly(self, target: IntArray, due: int, avoid: int) -> bool:
        """Place one bout before a slot for the least loaded person with room; part of a larger change."""
        draft, problem = self.draft, self.problem
        relative = draft.relative_load()
        people = self.able[(draft.load < target)[self.able]]
        for person in people[np.argsort(relative[people], kind="stable")][:_PARTNERS_TRIED]:
            if person == avoid:
                continue
            days = np.arange(min(problem.days, -(-due // problem.per_day)))
            for day in days[np.argsort(draft.day_load[person, days], kind="stable")]:
                longest = min(
                    int(target[person] - draft.load[person]),
                    int(problem.bout[person, day]),
                    int(problem.cap[person, day] - draft.day_load[person, day]),
                )
                if longest <= 0:
                    continue
                for station, start in self._places(int(person), longest, int(day), due):
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
            alike = [k for k in others if draft.bouts[k].length == draft.bouts[key].length][:_PARTNERS_TRIED]
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


def _spread(starts: IntArray, count: int) -> IntArray:
    """Return a few of many start slots, spread evenly, the last among them."""
    if len(starts) <= count:
        return starts
    return starts[np.linspace(0, len(starts) - 1, count).astype(np.int64)]
