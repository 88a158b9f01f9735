"""Where another bout would fit: start slots that every rule on time allows, found for many slots at once."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.draft import Draft

IntArray = npt.NDArray[np.int64]
BoolArray = npt.NDArray[np.bool_]


def _clear(blocked: BoolArray, length: int) -> BoolArray:
    """Return for each slot whether it and the following `length` - 1 are all clear; past the end counts as clear."""
    total = np.concatenate(([0], np.cumsum(blocked)))
    last = np.minimum(np.arange(len(blocked)) + length, len(blocked))
    return np.asarray(total[last] == total[:-1])


def openings(draft: Draft, person: int, station: int, length: int, day: int) -> IntArray:
    """Return the slots of a day in which a bout could start, watchers not asked, shape (starts,).

    Parameters
    ----------
    draft : Draft
        The rota so far.
    person, station, length, day : int
        Whose bout, where, how many slots, on which day from 0.

    Returns
    -------
    ndarray of int
        Start slots over the horizon.
    """
    problem = draft.problem
    first, last = day * problem.per_day, (day + 1) * problem.per_day
    here = slice(first, last)
    if length > problem.bout[person, day] or draft.day_load[person, day] + length > problem.cap[person, day]:
        return np.zeros(0, dtype=np.int64)
    taken = ~problem.may_turn[person, here] | draft.watching[person, here]
    # The bout itself must end within the day.
    taken = np.append(taken, True)
    free = _clear(taken, length)[:-1]
    reach = length + int(problem.rest[person, day])
    held = draft.held[person, first : min(last + reach, problem.slots)]
    free &= _clear(held, reach)[: problem.per_day]
    return np.flatnonzero(free & _unit_free(draft, station, length, day)) + first


def _unit_free(draft: Draft, station: int, length: int, day: int) -> BoolArray:
    """Return in which slots of a day some unit is free for a whole bout."""
    problem = draft.problem
    here = slice(day * problem.per_day, (day + 1) * problem.per_day)
    units = problem.units[station, here]
    busy = draft.unit_busy[station][:, here]
    limit = int(problem.daily[station])
    some = np.zeros(problem.per_day, dtype=bool)
    for unit in range(busy.shape[0]):
        if limit >= 0 and draft.unit_day[station][unit, day] + length > limit:
            continue
        blocked = np.append(busy[unit] | (units <= unit), True)
        some |= _clear(blocked, length)[:-1]
    return some
