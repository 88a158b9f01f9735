"""The first legal rota: walk the slots once, and let whoever is furthest behind their fair share turn."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.bounds import Bounds, slots_at
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.problem import RotaProblem

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

_LEAST_SHARE = 0.02


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

    def __init__(self, draft: Draft, target_wh: FloatArray, share: FloatArray, budget: IntArray) -> None:
        """Take a draft (with what is already fixed in it), a target curve at O and each person's budget."""
        problem = draft.problem
        self.draft = draft
        self.problem = problem
        self.target_wh = target_wh
        self.budget = budget
        self.spaced = False
        self.weight = np.maximum(share, _LEAST_SHARE) * np.maximum(problem.allowance, 1)
        self.person_run = run_lengths(problem.may_turn, problem.per_day)
        self.unit_run = run_lengths(problem.units > 0, problem.per_day)
        # Strongest station first; a person is offered the next one only when that has no unit free.
        self.stations = [
            [int(each) for each in np.argsort(-watts, kind="stable") if watts[each] > 0.0] for watts in problem.output_w
        ]

    def run(self, ahead: int, *, spaced: bool = False) -> None:
        """Walk all slots; a bout starts while what has been started stays below the target `ahead` slots on.

        `spaced` leaves a unit idle for the changeover instead of letting the next bout lose it.
        """
        problem = self.problem
        self.spaced = spaced
        open_ = np.flatnonzero((problem.units > 0).any(axis=0))
        started = float(self.draft.made.sum())
        for slot in open_:
            day_end = (int(slot) // problem.per_day + 1) * problem.per_day
            goal = float(self.target_wh[min(int(slot) + ahead, day_end)])
            if started >= goal:
                continue
            started = self._fill_slot(int(slot), goal, started)

    def _fill_slot(self, slot: int, goal: float, started: float) -> float:
        """Start bouts in one slot until the goal is met or nobody is left."""
        draft, problem = self.draft, self.problem
        day = slot // problem.per_day
        free = problem.may_turn[:, slot] & ~draft.held[:, slot] & ~draft.watching[:, slot]
        free &= (draft.load < self.budget) & (draft.day_load[:, day] < problem.cap[:, day])
        people = np.flatnonzero(free)
        if not len(people):
            return started
        behind = draft.load[people] / self.weight[people] + 1e-3 * draft.day_load[people, day]
        for person in people[np.argsort(behind, kind="stable")]:
            key = self._start(int(person), slot, day)
            if key is not None:
                started += draft.bout_wh(key)
                if started >= goal:
                    break
        return started

    def _start(self, person: int, slot: int, day: int) -> int | None:
        """Start the longest bout a person may turn in this slot at the best free station."""
        draft, problem = self.draft, self.problem
        longest = min(
            int(problem.bout[person, day]),
            int(problem.cap[person, day] - draft.day_load[person, day]),
            int(self.budget[person] - draft.load[person]),
            int(self.person_run[person, slot]),
        )
        for station in self.stations[person]:
            length = min(longest, int(self.unit_run[station, slot]))
            while length > 0:
                unit = draft.free_unit(station, slot, length, person)
                if unit is not None and self.spaced and draft.lost_min(station, unit, slot, person):
                    break
                key = draft.place(person, station, slot, length, unit=unit) if unit is not None else None
                if key is not None:
                    return key
                # Shorter only helps where something fixed lies ahead.
                if not self._blocked_ahead(person, station, slot, length):
                    break
                length -= 1
        return None

    def _blocked_ahead(self, person: int, station: int, slot: int, length: int) -> bool:
        draft, problem = self.draft, self.problem
        rested = slot + length + int(problem.rest[person, slot // problem.per_day])
        if draft.held[person, slot + 1 : rested].any() or draft.watching[person, slot + 1 : slot + length].any():
            return True
        return bool(draft.unit_busy[station][:, slot + 1 : slot + length].any())


def first_rota(
    problem: RotaProblem, limits: Bounds, ahead: int, *, spaced: bool = False, fixed: Draft | None = None
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

    Returns
    -------
    Draft
        Bouts that keep every hard rule.
    """
    draft = Draft(problem) if fixed is None else fixed
    Walk(draft, limits.target_wh, limits.share, slots_at(problem, limits.greatest_load)).run(ahead, spaced=spaced)
    draft.forget()
    return draft
