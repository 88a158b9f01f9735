"""People who are alike, and the horizon in blocks: the coarse picture on which bounds are proven."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.problem import RotaProblem

IntArray = npt.NDArray[np.int64]
FloatArray = npt.NDArray[np.float64]

# Households are decided slot by slot; larger groups hour by hour.
FINE_PEOPLE, BLOCK_MIN = 10, 60


@dataclass(frozen=True, slots=True)
class Classes:
    """Groups of identical people and blocks of slots.

    Attributes
    ----------
    members : tuple of ndarray
        Indices of the people of each class; people who never turn are in none.
    first, last : ndarray, shape (blocks,)
        First slot of each block and the slot after its last.
    until : ndarray, shape (blocks,)
        First slot of the next block: until then nothing more is made.
    day : ndarray, shape (blocks,)
        Day of each block from 0.
    turn : ndarray, shape (classes, blocks)
        Most slots one member can turn in a block, by availability, bout and rest.
    units : ndarray, shape (stations, blocks)
        Unit-slots of each station line in a block.
    watch : ndarray, shape (blocks,)
        Person-slots of everybody who may watch in a block.
    """

    members: tuple[IntArray, ...]
    first: IntArray
    last: IntArray
    until: IntArray
    day: IntArray
    turn: FloatArray
    units: FloatArray
    watch: FloatArray


def most_turning(window: IntArray, bout: int, rest: int) -> IntArray:
    """Return the most slots of turning in windows of some slots, bouts at both ends.

    n = floor((window + rest)/(bout + rest)); n bout + min(bout, remainder - rest)

    Examples
    --------
    >>> most_turning(np.array([3, 12, 16]), 4, 8).tolist()
    [3, 4, 8]
    """
    cycle = bout + rest
    whole = (window + rest) // cycle
    part = np.clip((window + rest) % cycle - rest, 0, bout)
    return np.asarray(np.minimum(window, whole * bout + part))


def classes_of(problem: RotaProblem) -> Classes:
    """Return the classes and blocks of a problem."""
    first, last, day = _blocks(problem)
    members = _members(problem)
    until = np.append(first[1:], problem.slots) if len(first) else first
    turn = np.zeros((len(members), len(first)))
    cumulative = np.concatenate(
        (np.zeros((len(problem.people), 1), dtype=np.int64), np.cumsum(problem.may_turn, axis=1)), axis=1
    )
    for row, who in enumerate(members):
        person = who[0]
        free = cumulative[person, last] - cumulative[person, first]
        for index, slots in enumerate(free):
            bout, rest = int(problem.bout[person, day[index]]), int(problem.rest[person, day[index]])
            if slots and bout:
                turn[row, index] = most_turning(np.array([slots]), bout, rest)[0]
    units = np.concatenate(
        (np.zeros((len(problem.stations), 1), dtype=np.int64), np.cumsum(problem.units, axis=1)), axis=1
    )
    watchers = np.concatenate(([0], np.cumsum(problem.may_watch.sum(axis=0))))
    return Classes(
        members=members,
        first=first,
        last=last,
        until=until,
        day=day,
        turn=turn,
        units=(units[:, last] - units[:, first]).astype(float),
        watch=(watchers[last] - watchers[first]).astype(float),
    )


def _members(problem: RotaProblem) -> tuple[IntArray, ...]:
    groups: dict[tuple[bytes, ...], list[int]] = {}
    for person in np.flatnonzero(problem.allowance > 0):
        key = tuple(
            part.tobytes()
            for part in (
                problem.output_w[person],
                problem.bout[person],
                problem.rest[person],
                problem.cap[person],
                np.packbits(problem.may_turn[person]),
                np.packbits(problem.may_watch[person]),
                problem.needs_watcher[person],
            )
        )
        groups.setdefault(key, []).append(int(person))
    return tuple(np.array(each, dtype=np.int64) for each in groups.values())


def _blocks(problem: RotaProblem) -> tuple[IntArray, IntArray, IntArray]:
    """Return first slot, end and day of the blocks in which any station is open."""
    open_ = (problem.units > 0).any(axis=0) if len(problem.stations) else np.zeros(problem.slots, dtype=bool)
    fine = len(problem.people) <= FINE_PEOPLE
    step = 1 if fine else max(1, BLOCK_MIN // problem.slot_min)
    slot = np.arange(problem.slots)
    bucket = slot // problem.per_day * (problem.per_day + 1) + slot % problem.per_day // step
    starts: list[int] = []
    ends: list[int] = []
    for each in slot[open_]:
        if ends and ends[-1] == each and bucket[each] == bucket[starts[-1]]:
            ends[-1] = each + 1
        else:
            starts.append(each)
            ends.append(each + 1)
    first = np.array(starts, dtype=np.int64)
    return first, np.array(ends, dtype=np.int64), first // problem.per_day
