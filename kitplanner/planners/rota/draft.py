"""A rota in the making: bouts on the slot grid, with every hard rule asked before a bout is placed.

Working state of the solver only; it leaves as frozen records (`solver.py`) and is judged again by `check.py`, which
shares no code with it.
"""

from __future__ import annotations

from bisect import bisect_left, insort
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.problem import RotaProblem

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Placed:
    """One bout: slots `start` to `start + length`, watcher -1 where none is needed."""

    start: int
    length: int
    station: int
    unit: int
    person: int
    watcher: int
    locked: bool = False

    @property
    def end(self) -> int:
        """Slot after the last."""
        return self.start + self.length


class Draft:
    """Bouts with who is busy where; `made` holds the energy of each slot at O."""

    def __init__(self, problem: RotaProblem) -> None:
        """Start without bouts."""
        people, slots = len(problem.people), problem.slots
        self.problem = problem
        self.bouts: dict[int, Placed] = {}
        self.turning = np.zeros((people, slots), dtype=bool)
        self.held = np.zeros((people, slots), dtype=bool)
        self.watching = np.zeros((people, slots), dtype=bool)
        self.load = np.zeros(people, dtype=np.int64)
        self.day_load = np.zeros((people, problem.days), dtype=np.int64)
        self.watched = np.zeros(people, dtype=np.int64)
        self.unpopular = np.zeros(people, dtype=np.int64)
        self.made = np.zeros(slots)
        most = [int(problem.units[station].max(initial=0)) for station in range(len(problem.stations))]
        self.unit_busy = [np.zeros((units, slots), dtype=bool) for units in most]
        # Slots before a bout in which another's bout still costs it a changeover.
        self._pause = [-(-int(each) // problem.slot_min) for each in problem.changeover_min]
        self.unit_day = [np.zeros((units, problem.days), dtype=np.int64) for units in most]
        self._on_unit: dict[tuple[int, int], list[tuple[int, int]]] = {}
        self._energy: dict[int, float] = {}
        self._next = 0
        self._journal: list[tuple[int, Placed, bool]] = []

    def mark(self) -> int:
        """Return a point to which `rollback` can return."""
        return len(self._journal)

    def rollback(self, mark: int) -> None:
        """Undo every change since a mark; keys are those of before."""
        while len(self._journal) > mark:
            key, bout, was_put = self._journal.pop()
            if was_put:
                self._drop(key)
            else:
                self._enter(key, bout)

    def forget(self) -> None:
        """Keep all changes so far for good."""
        self._journal.clear()

    def relative_load(self) -> FloatArray:
        """Share of the own allowance each person turns, 0 without allowance."""
        allowance = np.maximum(self.problem.allowance, 1)
        return np.asarray(self.load / allowance * (self.problem.allowance > 0))

    def total_wh(self) -> float:
        """Energy made at O."""
        return float(self.made.sum())

    def units_free(self, station: int, slot: int, *, rested: bool = False) -> int:
        """Return how many units of a line are free in a slot; `rested`: idle for the changeover before it too."""
        count = int(self.problem.units[station, slot])
        first = slot - (self._pause[station] if rested else 0)
        return count - int(self.unit_busy[station][:count, max(first, 0) : slot + 1].any(axis=1).sum())

    def free_units(self, station: int, start: int, length: int) -> list[int]:
        """Return the units that are free for a whole bout and may still run that long today."""
        problem, end = self.problem, start + length
        units = problem.units[station, start:end]
        if len(units) < length:
            return []
        count = int(units.min())
        free = ~self.unit_busy[station][:count, start:end].any(axis=1)
        limit = problem.daily[station]
        if limit >= 0:
            free &= self.unit_day[station][:count, start // problem.per_day] + length <= limit
        return [int(unit) for unit in np.flatnonzero(free)]

    def free_unit(self, station: int, start: int, length: int, person: int) -> int | None:
        """Return a unit that is free for the whole bout, one without a changeover first."""
        free = self.free_units(station, start, length)
        before = max(0, start - self._pause[station])
        rested = ~self.unit_busy[station][free, before:start].any(axis=1)
        if rested.any():
            return free[int(np.argmax(rested))]
        return min(free, key=lambda unit: self.lost_min(station, unit, start, person), default=None)

    def lost_min(self, station: int, unit: int, start: int, person: int) -> float:
        """Return the minutes a bout loses to the changeover from the bout before it on the same unit."""
        line = self._on_unit.get((station, unit), [])
        place = bisect_left(line, (start, -1))
        if not place:
            return 0.0
        before = self.bouts[line[place - 1][1]]
        if before.person == person:
            return 0.0
        gap = (start - before.end) * self.problem.slot_min
        return float(max(0, int(self.problem.changeover_min[station]) - gap))

    def may_turn(self, person: int, start: int, length: int) -> bool:
        """Return whether a person is free, rested and within bout and cap for a bout."""
        problem = self.problem
        day, end = start // problem.per_day, start + length
        if length > problem.bout[person, day] or end > (day + 1) * problem.per_day:
            return False
        if self.day_load[person, day] + length > problem.cap[person, day]:
            return False
        rested = min(end + int(problem.rest[person, day]), problem.slots)
        return bool(
            problem.may_turn[person, start:end].all()
            and not self.held[person, start:rested].any()
            and not self.watching[person, start:end].any()
        )

    def watchers(self, person: int, start: int, length: int) -> IntArray:
        """Return everybody who is free to watch a bout."""
        span = slice(start, start + length)
        free = self.problem.may_watch[:, span].all(axis=1)
        free &= ~self.turning[:, span].any(axis=1) & ~self.watching[:, span].any(axis=1)
        who = np.flatnonzero(free)
        return np.asarray(who[who != person])

    def find_watcher(self, person: int, start: int, length: int) -> int | None:
        """Return who best watches a bout: people without minutes first, then who is worked most and watched least."""
        candidates = self.watchers(person, start, length)
        if not len(candidates):
            return None
        resting = self.held[candidates, start]
        left = 1.0 - self.relative_load()[candidates]
        order = np.lexsort((self.watched[candidates], left * ~resting, self.problem.allowance[candidates] > 0))
        return int(candidates[order[0]])

    def place(
        self, person: int, station: int, start: int, length: int, *, unit: int | None = None, watcher: int | None = None
    ) -> int | None:
        """Place a bout if every hard rule allows it; return its key, None where one forbids it."""
        if self.problem.output_w[person, station] <= 0.0 or not self.may_turn(person, start, length):
            return None
        chosen = self.free_unit(station, start, length, person) if unit is None else unit
        if chosen is None:
            return None
        beside = -1
        if self.problem.needs_watcher[person, station]:
            found = self.find_watcher(person, start, length) if watcher is None else watcher
            if found is None:
                return None
            beside = found
        return self.put(Placed(start, length, station, chosen, person, beside))

    def put(self, bout: Placed) -> int:
        """Enter a bout without asking; the caller knows it is legal (or frozen)."""
        key, self._next = self._next, self._next + 1
        self._enter(key, bout)
        self._journal.append((key, bout, True))
        return key

    def remove(self, key: int) -> Placed:
        """Take a bout out."""
        bout = self._drop(key)
        self._journal.append((key, bout, False))
        return bout

    def _enter(self, key: int, bout: Placed) -> None:
        self.bouts[key] = bout
        self._mark(bout, present=True)
        line = self._on_unit.setdefault((bout.station, bout.unit), [])
        insort(line, (bout.start, key))
        self._energise(key)
        self._energise_after(bout)

    def _drop(self, key: int) -> Placed:
        bout = self.bouts[key]
        self._take_energy(key)
        self._on_unit[bout.station, bout.unit].remove((bout.start, key))
        del self.bouts[key]
        self._mark(bout, present=False)
        self._energise_after(bout)
        return bout

    def hand_over(self, key: int, person: int, length: int | None = None) -> int | None:
        """Give a bout (or its first `length` slots) to another person; None and no change where a rule forbids it."""
        before = self.mark()
        old = self.remove(key)
        new = self.place(person, old.station, old.start, old.length if length is None else length, unit=old.unit)
        if new is None:
            self.rollback(before)
        return new

    def shorten(self, key: int, length: int) -> int:
        """Cut a bout to its first slots."""
        old = self.remove(key)
        return self.put(replace(old, length=length))

    def bout_wh(self, key: int) -> float:
        """Energy of a bout at O."""
        return self._energy[key]

    def _mark(self, bout: Placed, *, present: bool) -> None:
        problem = self.problem
        day, sign = bout.start // problem.per_day, 1 if present else -1
        span = slice(bout.start, bout.end)
        rested = min(bout.end + int(problem.rest[bout.person, day]), problem.slots)
        self.turning[bout.person, span] = present
        self.held[bout.person, bout.start : rested] = present
        self.load[bout.person] += sign * bout.length
        self.day_load[bout.person, day] += sign * bout.length
        self.unpopular[bout.person] += sign * int(problem.unpopular[span].sum())
        self.unit_busy[bout.station][bout.unit, span] = present
        self.unit_day[bout.station][bout.unit, day] += sign * bout.length
        if bout.watcher >= 0:
            self.watching[bout.watcher, span] = present
            self.watched[bout.watcher] += sign * bout.length

    def _energise(self, key: int) -> None:
        """Book a bout's energy: evenly over its slots, the changeover off its first ones."""
        bout = self.bouts[key]
        problem = self.problem
        per_slot = problem.slot_wh(bout.person, bout.station)
        lost = self.lost_min(bout.station, bout.unit, bout.start, bout.person) / problem.slot_min
        energy = np.full(bout.length, per_slot)
        whole = min(int(lost), bout.length)
        energy[:whole] = 0.0
        if whole < bout.length:
            energy[whole] -= per_slot * (lost - whole)
        self.made[bout.start : bout.end] += energy
        self._energy[key] = float(energy.sum())

    def _take_energy(self, key: int) -> None:
        bout = self.bouts[key]
        problem = self.problem
        per_slot = problem.slot_wh(bout.person, bout.station)
        lost_slots = bout.length - self._energy[key] / per_slot if per_slot else 0.0
        energy = np.full(bout.length, per_slot)
        whole = min(int(lost_slots + 1e-9), bout.length)
        energy[:whole] = 0.0
        if whole < bout.length:
            energy[whole] -= per_slot * (lost_slots - whole)
        self.made[bout.start : bout.end] -= energy
        del self._energy[key]

    def _energise_after(self, bout: Placed) -> None:
        """Book the next bout on the unit again: its changeover may have changed."""
        line = self._on_unit.get((bout.station, bout.unit), [])
        place = bisect_left(line, (bout.start + 1, -1))
        if place < len(line):
            key = line[place][1]
            self._take_energy(key)
            self._energise(key)
