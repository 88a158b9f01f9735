"""Proven bounds for every aim, from a linear program on classes of alike people and blocks of time.

The program is a relaxation: it lets minutes be split, counts the changeover of a window as if every bout were as long
as may be, and watchers only in sum over a block. No rota can do better than its values.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.classes import Classes, classes_of
from kitplanner.planners.rota.linear import INFINITE, LinearModel
from kitplanner.planners.rota.problem import RotaProblem

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

_SLACK_WH = 1e-6
_SLACK_SLOTS = 1e-6


def never() -> bool:
    """Never stop."""
    return False


@dataclass(frozen=True, slots=True)
class Bounds:
    """Bounds and the coarse rota that reaches them.

    Attributes
    ----------
    unmet_wh : ndarray, shape (classes of use,)
        Least use missed up to each class, at O [Wh].
    margin_wh, made_wh : float
        Least margin missed and least energy made beyond that, at O [Wh].
    greatest_load : float
        Least greatest share of one's own minutes, in whole slots of people [-].
    target_wh : ndarray, shape (slots + 1,)
        Energy made by each slot in the coarse rota, at O [Wh].
    share : ndarray, shape (people, stations)
        Turning of each person at each station line in the coarse rota over the allowance [-].
    group : ndarray of int, shape (people,)
        Class of each person, -1 for people who never turn.
    """

    unmet_wh: FloatArray
    margin_wh: float
    made_wh: float
    greatest_load: float
    target_wh: FloatArray
    share: FloatArray
    group: IntArray


class CoarseRota:
    """The linear program of one problem, kept open for one aim after another."""

    def __init__(self, problem: RotaProblem) -> None:
        """Build columns and rows."""
        self.problem = problem
        self.classes = classes_of(problem)
        self.model = LinearModel()
        self._work = self._add_work()
        blocks = len(self.classes.first)
        self._made = self.model.add_columns(np.full(blocks, INFINITE))
        self._unmet = self.model.add_columns(np.full(len(problem.need.priorities), INFINITE))
        self._margin = int(self.model.add_columns([INFINITE])[0])
        self._over = int(self.model.add_columns([INFINITE])[0])
        self._least = int(self.model.add_columns([1.0])[0])
        self._busiest = int(self.model.add_columns([1.0])[0])
        self._load_rows: list[int] = []
        self._least_rows: list[int] = []
        self._day_rows: list[int] = []
        self._add_people_rows()
        self._add_station_rows()
        self._add_changeover_rows()
        self._add_watcher_rows()
        self._add_energy_rows()
        self._room_rows = self._add_need_rows()
        self.model.load()

    def _add_work(self) -> dict[tuple[int, int], tuple[IntArray, npt.NDArray[np.int32]]]:
        """Add one column for each class, station line and block in which it can turn [slots]."""
        work = {}
        for row, who in enumerate(self.classes.members):
            for station in range(len(self.problem.stations)):
                if self.problem.output_w[who[0], station] <= 0.0:
                    continue
                most = np.minimum(self.classes.turn[row] * len(who), self.classes.units[station])
                blocks = np.flatnonzero(most > 0.0)
                work[row, station] = (blocks, self.model.add_columns(most[blocks]))
        return work

    def _columns_of(self, row: int) -> tuple[IntArray, npt.NDArray[np.int32]]:
        """Return blocks and columns of one class over all its stations."""
        parts = [pair for (each, _), pair in self._work.items() if each == row]
        if not parts:
            return np.zeros(0, dtype=np.int64), np.zeros(0, dtype=np.int32)
        return np.concatenate([pair[0] for pair in parts]), np.concatenate([pair[1] for pair in parts])

    def _add_people_rows(self) -> None:
        """Block time, day caps, and the rows that compare loads."""
        problem = self.problem
        for row, who in enumerate(self.classes.members):
            blocks, columns = self._columns_of(row)
            if len(np.unique(blocks)) < len(blocks):
                for block in np.unique(blocks):
                    here = columns[blocks == block]
                    if len(here) > 1:
                        self.model.add_row(here, np.ones(len(here)), 0.0, self.classes.turn[row, block] * len(who))
            allowance = float(problem.allowance[who].sum())
            for day in range(problem.days):
                here = columns[self.classes.day[blocks] == day]
                if len(here):
                    cap = float(problem.cap[who, day].sum())
                    self.model.add_row(here, np.ones(len(here)), 0.0, cap)
                    both = np.append(here, self._busiest).astype(np.int32)
                    self._day_rows.append(
                        self.model.add_row(both, np.append(np.ones(len(here)), -cap), -INFINITE, INFINITE)
                    )
            self._load_rows.append(self.model.add_row(columns, np.ones(len(columns)), 0.0, INFINITE))
            both = np.append(columns, self._least).astype(np.int32)
            self._least_rows.append(
                self.model.add_row(both, np.append(np.ones(len(columns)), -allowance), -INFINITE, INFINITE)
            )

    def _add_station_rows(self) -> None:
        """Unit time in each block and the day's minutes of each unit."""
        problem, classes = self.problem, self.classes
        for station in range(len(problem.stations)):
            parts = [pair for (_, each), pair in self._work.items() if each == station]
            if not parts:
                continue
            blocks = np.concatenate([pair[0] for pair in parts])
            columns = np.concatenate([pair[1] for pair in parts])
            order = np.argsort(blocks, kind="stable")
            blocks, columns = blocks[order], columns[order]
            edges = np.flatnonzero(np.diff(blocks)) + 1
            for where, here in zip(np.split(blocks, edges), np.split(columns, edges), strict=True):
                if len(here):
                    self.model.add_row(here, np.ones(len(here)), 0.0, float(classes.units[station, where[0]]))
            if problem.daily[station] >= 0:
                units = problem.units[station].reshape(problem.days, -1).max(axis=1)
                for day in range(problem.days):
                    here = columns[classes.day[blocks] == day]
                    if len(here):
                        most = float(problem.daily[station] * units[day])
                        self.model.add_row(here, np.ones(len(here)), 0.0, most)

    def _add_changeover_rows(self) -> None:
        """Each bout on a unit costs its turning and one changeover, but for a window's first.

        sum of turning (1 + changeover/bout) <= units (window + changeover)
        """
        problem, classes = self.problem, self.classes
        for station in np.flatnonzero(problem.changeover_min > 0):
            changeover = float(problem.changeover_min[station]) / problem.slot_min
            for window in _windows(classes, int(station)):
                columns, factors = [], []
                for (row, each), (blocks, places) in self._work.items():
                    if each != station:
                        continue
                    here = places[np.isin(blocks, window)]
                    longest = int(problem.bout[classes.members[row][0], classes.day[window[0]]])
                    columns.append(here)
                    factors.append(np.full(len(here), 1.0 + changeover / max(1, longest)))
                if columns:
                    span = slice(int(classes.first[window[0]]), int(classes.last[window[-1]]))
                    most = float(problem.units[station, span].sum() + changeover * problem.units[station, span].max())
                    self.model.add_row(np.concatenate(columns), np.concatenate(factors), 0.0, most)

    def _add_watcher_rows(self) -> None:
        """In a block, watched turning and the watchers' own turning share the watchers' time."""
        problem, classes = self.problem, self.classes
        columns: list[list[int]] = [[] for _ in classes.first]
        factors: list[list[float]] = [[] for _ in classes.first]
        for (row, station), (blocks, places) in self._work.items():
            person = classes.members[row][0]
            watched = bool(problem.needs_watcher[person, station])
            own = problem.may_watch[person].any()
            if not watched and not own:
                continue
            for block, place in zip(blocks, places, strict=True):
                columns[block].append(int(place))
                factors[block].append(float(watched) + float(own))
        for block, here in enumerate(columns):
            if here:
                row_columns = np.array(here, dtype=np.int32)
                self.model.add_row(row_columns, factors[block], 0.0, float(classes.watch[block]))

    def _add_energy_rows(self) -> None:
        """Made so far = made before + this block's turning."""
        blocks = len(self.classes.first)
        columns: list[list[int]] = [[] for _ in range(blocks)]
        values: list[list[float]] = [[] for _ in range(blocks)]
        for (row, station), (where, places) in self._work.items():
            energy = self.problem.slot_wh(int(self.classes.members[row][0]), station)
            for block, place in zip(where, places, strict=True):
                columns[block].append(int(place))
                values[block].append(-energy)
        for block in range(blocks):
            here = [int(self._made[block]), *columns[block]]
            factors = [1.0, *values[block]]
            if block:
                here.append(int(self._made[block - 1]))
                factors.append(-1.0)
            self.model.add_row(np.array(here, dtype=np.int32), factors, 0.0, 0.0)

    def _add_need_rows(self) -> list[int]:
        """Made + missed >= due - stored, for each class of use and with margin; and the room for more."""
        need = self.problem.need
        for order, unmet in enumerate(self._unmet):
            self._due_rows(need.plain[order] - need.supply, [int(unmet)])
        self._due_rows(need.with_margin - need.supply, [int(self._unmet[-1]), self._margin])
        rows = []
        for block, last in enumerate(self.classes.last):
            pair = np.array([self._made[block], self._over], dtype=np.int32)
            rows.append(self.model.add_row(pair, [1.0, -1.0], -INFINITE, float(max(0.0, need.room[last]))))
        return rows

    def _due_rows(self, due: FloatArray, missed: list[int]) -> None:
        """Add the rows of one cumulative need; a need due before the first block can only be missed."""
        first = int(self.classes.first[0]) if len(self.classes.first) else self.problem.slots
        before = float(max(0.0, due[: first + 1].max(initial=0.0)))
        columns = np.array(missed, dtype=np.int32)
        if before > 0.0:
            self.model.add_row(columns, np.ones(len(columns)), before, INFINITE)
        reached = before
        for block, (start, until) in enumerate(zip(self.classes.first, self.classes.until, strict=True)):
            worst = float(due[start + 1 : until + 1].max(initial=0.0))
            # Made never falls, so a need no greater than an earlier one adds nothing.
            if worst > reached:
                both = np.append(columns, self._made[block]).astype(np.int32)
                self.model.add_row(both, np.ones(len(both)), worst, INFINITE)
                reached = worst

    def solve(self, over: Callable[[], bool] = never) -> Bounds:
        """Return bounds in the order of aims, and the even coarse rota that reaches them.

        Once `over` says so the search for the least greatest load ends with what is proven by then.
        """
        unmet = np.array([self._least_of(int(column)) for column in self._unmet])
        margin = self._least_of(self._margin)
        total = int(self._made[-1]) if len(self._made) else None
        made = self._least_of(total) if total is not None else 0.0
        if total is not None:
            # Whole bouts overshoot a little; fairness is judged with that much room.
            self.model.set_column_upper(total, made * 1.01 + _SLACK_WH)
        load = self._least_load(over)
        solution = self._even()
        return Bounds(
            unmet_wh=unmet,
            margin_wh=margin,
            made_wh=made,
            greatest_load=load,
            target_wh=self._target(solution),
            share=self._share(solution),
            group=self._group(),
        )

    def _least_of(self, column: int) -> float:
        """Minimise one column and hold it there."""
        solution = self.model.minimise({column: 1.0})
        if solution is None:
            raise AssertionError("the coarse rota has slack for every need and cannot be infeasible")
        least = float(solution[column])
        self.model.set_column_upper(column, least + _SLACK_WH)
        return max(0.0, least)

    def _least_load(self, over: Callable[[], bool]) -> float:
        """Return the least greatest load among whole slots of people, by bisection over its steps."""
        steps = load_steps(self.problem)
        low, high = 0, len(steps) - 1
        while low < high and not over():
            middle = (low + high) // 2
            self._hold_load(steps[middle])
            if self.model.minimise({}) is None:
                low = middle + 1
            else:
                high = middle
        self._hold_load(steps[high])
        return float(steps[low])

    def _hold_load(self, load: float) -> None:
        for row, who in zip(self._load_rows, self.classes.members, strict=True):
            self.model.set_row(row, 0.0, float(slots_at(self.problem, load)[who].sum()))

    def _even(self) -> FloatArray:
        """Return the coarse rota with the greatest least load, the calmest busiest day and no running over."""
        for row in self._least_rows:
            self.model.set_row(row, 0.0, INFINITE)
        for row in self._day_rows:
            self.model.set_row(row, -INFINITE, 0.0)
        solution = self.model.minimise({self._over: 1.0, self._least: -1.0, self._busiest: 1.0})
        if solution is None:
            raise AssertionError("evening out a coarse rota keeps it feasible")
        return solution

    def _target(self, solution: FloatArray) -> FloatArray:
        """Return the energy made by each slot, even within a block."""
        target = np.zeros(self.problem.slots + 1)
        before = 0.0
        for block, (start, last) in enumerate(zip(self.classes.first, self.classes.last, strict=True)):
            after = float(solution[self._made[block]])
            target[start : last + 1] = np.linspace(before, after, last - start + 1)
            target[last + 1 :] = after
            before = after
        return target

    def _group(self) -> IntArray:
        group = np.full(len(self.problem.people), -1, dtype=np.int64)
        for row, who in enumerate(self.classes.members):
            group[who] = row
        return group

    def _share(self, solution: FloatArray) -> FloatArray:
        share = np.zeros(self.problem.output_w.shape)
        for (row, station), (_, columns) in self._work.items():
            who = self.classes.members[row]
            share[who, station] = solution[columns].sum() / max(1.0, float(self.problem.allowance[who].sum()))
        return share


def _windows(classes: Classes, station: int) -> list[IntArray]:
    """Return the runs of touching blocks in which a station line is open."""
    open_ = np.flatnonzero(classes.units[station] > 0.0)
    if not len(open_):
        return []
    apart = (classes.last[open_[:-1]] != classes.first[open_[1:]]) | (classes.day[open_[:-1]] != classes.day[open_[1:]])
    return np.split(open_, np.flatnonzero(apart) + 1)


def load_steps(problem: RotaProblem) -> FloatArray:
    """Return every load a person can have in whole slots, in order, from 0 to 1."""
    allowances = np.unique(problem.allowance[problem.allowance > 0])
    steps = [np.arange(each + 1) / each for each in allowances]
    return np.unique(np.round(np.concatenate([[0.0], *steps]), 12))


def slots_at(problem: RotaProblem, load: float) -> IntArray:
    """Return the whole slots each person may turn at a load."""
    return np.asarray(np.floor(problem.allowance * load + _SLACK_SLOTS), dtype=np.int64)


def bounds(problem: RotaProblem, over: Callable[[], bool] = never) -> Bounds:
    """Return the proven bounds of a problem; one without people or stations has nothing to turn."""
    return CoarseRota(problem).solve(over)


__all__ = ["Bounds", "Classes", "CoarseRota", "bounds", "load_steps", "slots_at"]
