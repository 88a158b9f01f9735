"""The first legal rota: walk the slots once, and let whoever is furthest behind their fair share turn."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.bounds import Bounds, never, slots_at
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.problem import RotaProblem

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

_LEAST_SHARE, _LEAST_PART = 0.02, 1e-6
# Among equally loaded people, who has turned less today goes first.
_DAY_WEIGHT = 1e-3


def run_lengths(free: npt.NDArray[np.bool_], per_day: int) -> IntArray:
    """Return for each slot how many slots from it on are free within the day, along the last axis.

    Examples
    --------
    >>> run_lengths(np.array([True, True, False, True]), 4).tolist()
    [2, 1, 0, 1]
    """
    runs = np.zeros(free.shape, dtype=np.int64)
    following = np.zeros(free.shape[:-1], dtype=np.int64)
    for slot in range(free.shape[-1] - 1, -1, -1):
        if (slot + 1) % per_day == 0:
            following = np.zeros_like(following)
        following = np.where(free[..., slot], following + 1, 0)
        runs[..., slot] = following
    return runs


class Walk:
    """One pass over the slots that fills a draft up to an energy target."""

    def __init__(self, draft: Draft, limits: Bounds, budget: IntArray, *, spaced: bool) -> None:
        """Take a draft (with what is already fixed in it), the coarse rota and each person's budget.

        `spaced` leaves a unit idle for the changeover instead of letting the next bout lose it.
        """
        problem = draft.problem
        self.draft = draft
        self.problem = problem
        self.target_wh = limits.target_wh
        self.budget = budget
        self.spaced = spaced
        self.group = limits.group
        self.weight = np.maximum(limits.share.sum(axis=1), _LEAST_SHARE) * np.maximum(problem.allowance, 1)
        self.person_run = run_lengths(problem.may_turn, problem.per_day)
        self.unit_run = run_lengths(problem.units > 0, problem.per_day)
        # Minutes spent at a weak station are lost to a strong one, so each class keeps to its part at each station.
        self.quota = np.zeros((int(self.group.max(initial=-1)) + 1, len(problem.stations)))
        able = np.flatnonzero(self.group >= 0)
        np.add.at(self.quota, self.group[able], limits.share[able] * problem.allowance[able, None])
        self.order = np.argsort(-problem.output_w.max(axis=0, initial=0.0), kind="stable")
        self.started = float(draft.made.sum())
        self.unwatched = -1

    def run(self, ahead: int, over: Callable[[], bool] = never) -> None:
        """Walk all slots; a bout starts while what has been started stays below the target `ahead` slots on.

        Once `over` says so the walk ends where it is: what stands is legal.
        """
        problem = self.problem
        for slot in np.flatnonzero((problem.units > 0).any(axis=0)):
            day_end = (int(slot) // problem.per_day + 1) * problem.per_day
            goal = float(self.target_wh[min(int(slot) + ahead, day_end)])
            if over():
                return
            if self.started < goal:
                self._fill_slot(int(slot), goal)

    def _fill_slot(self, slot: int, goal: float) -> None:
        """Start bouts in one slot, at the strongest stations first, until the goal is met or nobody is left."""
        draft, problem = self.draft, self.problem
        day = slot // problem.per_day
        free: npt.NDArray[np.bool_] | None = None
        for station in self.order:
            if draft.units_free(int(station), slot, rested=self.spaced) <= 0:
                continue
            if free is None:
                free = problem.may_turn[:, slot] & ~draft.held[:, slot] & ~draft.watching[:, slot] & (self.group >= 0)
                free &= (draft.load < self.budget) & (draft.day_load[:, day] < problem.cap[:, day])
            people = np.flatnonzero(free & (problem.output_w[:, station] > 0.0))
            people = people[self.quota[self.group[people], station] > _LEAST_PART]
            behind = draft.load[people] / self.weight[people] + _DAY_WEIGHT * draft.day_load[people, day]
            for person in people[np.argsort(behind, kind="stable")]:
                if self.started >= goal or draft.units_free(int(station), slot, rested=self.spaced) <= 0:
                    break
                if self.unwatched == slot and problem.needs_watcher[person, station]:
                    continue
                if self._start(int(person), int(station), slot, day):
                    free[person] = False
                    free &= ~draft.watching[:, slot]

    def _start(self, person: int, station: int, slot: int, day: int) -> bool:
        """Start the longest bout a person may turn in this slot at a station."""
        draft, problem = self.draft, self.problem
        longest = min(
            int(problem.bout[person, day]),
            int(problem.cap[person, day] - draft.day_load[person, day]),
            int(self.budget[person] - draft.load[person]),
            int(self.person_run[person, slot]),
            int(self.unit_run[station, slot]),
        )
        for length in range(longest, 0, -1):
            unit = draft.free_unit(station, slot, length, person)
            watcher = None
            if problem.needs_watcher[person, station]:
                watcher = draft.find_watcher(person, slot, length)
                if watcher is None:
                    # Nobody is left to watch in this slot: no use asking again for the next minor.
                    self.unwatched = slot
                    return False
            key = draft.place(person, station, slot, length, unit=unit, watcher=watcher) if unit is not None else None
            if key is not None:
                self.started += draft.bout_wh(key)
                self.quota[self.group[person], station] -= length
                return True
            # Shorter only helps where something fixed lies ahead.
            if not self._blocked_ahead(person, station, slot, length):
                return False
        return False

    def _blocked_ahead(self, person: int, station: int, slot: int, length: int) -> bool:
        draft, problem = self.draft, self.problem
        rested = slot + length + int(problem.rest[person, slot // problem.per_day])
        if draft.held[person, slot + 1 : rested].any() or draft.watching[person, slot + 1 : slot + length].any():
            return True
        return bool(draft.unit_busy[station][:, slot + 1 : slot + length].any())


def first_rota(
    problem: RotaProblem,
    limits: Bounds,
    ahead: int,
    *,
    spaced: bool = False,
    fixed: Draft | None = None,
    over: Callable[[], bool] = never,
) -> Draft:
    """Return a legal rota that follows the coarse one.

    Parameters
    ----------
    problem : RotaProblem
        The problem.
    limits : Bounds
        Its bounds, for the target and the fair shares.
    ahead : int
        How many slots before it is due energy is started [slots].
    spaced : bool
        Leave units idle for the changeover.
    fixed : Draft, optional
        Bouts that stand already; the draft is filled in place.
    over : callable
        Asked at every slot; True ends the walk with what stands.

    Returns
    -------
    Draft
        Bouts that keep every hard rule.
    """
    draft = Draft(problem) if fixed is None else fixed
    Walk(draft, limits, slots_at(problem, limits.greatest_load), spaced=spaced).run(ahead, over)
    draft.forget()
    return draft
