"""What a rota cannot help: nobody to turn, nothing to turn at, no common time, nobody to watch, no room to store."""

from __future__ import annotations

from typing import Literal

import numpy as np
from msgspec import Struct

from kitplanner.plan.records import Plan
from kitplanner.planners.rota.problem import RotaProblem, build
from kitplanner.planners.supply import station_to_outlet_fraction, store_wh

RemarkKind = Literal[
    "no_people", "nobody_turns", "no_stations", "stations_shut", "blocked", "no_watcher", "one_person", "small_store"
]


class RotaRemark(Struct, frozen=True, kw_only=True):
    """One thing about a plan that shapes every rota of it; energies at O.

    Attributes: `people` ids concerned; for a small store `bout_wh` made in one bout and `room_wh` of all stores.
    """

    kind: RemarkKind
    people: tuple[str, ...] = ()
    bout_wh: float = 0.0
    room_wh: float = 0.0


def remarks(plan: Plan) -> tuple[RotaRemark, ...]:
    """Return what a coordinator should know before reading any rota of a plan.

    Parameters
    ----------
    plan : Plan
        A plan without errors.

    Returns
    -------
    tuple of RotaRemark
        At most one of those that leave nothing to turn, then the others.

    Examples
    --------
    >>> [remark.kind for remark in remarks(Plan())]
    ['no_people']
    """
    problem = build(plan)
    stop = _stop(problem)
    if stop is not None:
        return (stop,)
    found = [_unwatched(problem), _alone(problem), _small_store(plan, problem)]
    return tuple(remark for remark in found if remark is not None)


def _stop(problem: RotaProblem) -> RotaRemark | None:
    """Return the reason why nothing can be turned at all."""
    if not problem.people:
        return RotaRemark(kind="no_people")
    if not problem.stations:
        return RotaRemark(kind="no_stations")
    if not problem.units.any():
        return RotaRemark(kind="stations_shut")
    if not problem.allowance.any():
        return RotaRemark(kind="nobody_turns")
    return None if _common(problem).any() else RotaRemark(kind="blocked")


def _common(problem: RotaProblem) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
    """Return in which slots each person may turn at an open station, shape (people, slots)."""
    able = problem.output_w > 0.0
    open_ = problem.units > 0
    return np.asarray(problem.may_turn & (able.astype(np.int64) @ open_.astype(np.int64) > 0))


def _unwatched(problem: RotaProblem) -> RotaRemark | None:
    """Name the people who need a watcher everywhere and never have one."""
    common = _common(problem)
    watchers = problem.may_watch.sum(axis=0)
    alone = []
    for row, name in enumerate(problem.people):
        able = problem.output_w[row] > 0.0
        if not common[row].any() or not problem.needs_watcher[row, able].all():
            continue
        others = watchers - problem.may_watch[row]
        if not (common[row] & (others > 0)).any():
            alone.append(name)
    return RotaRemark(kind="no_watcher", people=tuple(alone)) if alone else None


def _alone(problem: RotaProblem) -> RotaRemark | None:
    turning = np.flatnonzero(problem.allowance > 0)
    if len(turning) != 1:
        return None
    return RotaRemark(kind="one_person", people=(problem.people[int(turning[0])],))


def _small_store(plan: Plan, problem: RotaProblem) -> RotaRemark | None:
    """Return a remark where all stores together hold less than one bout brings."""
    if not plan.stores:
        return None
    room_wh = sum(store_wh(store, 1.0) for store in plan.stores)
    longest_min = problem.bout.max(axis=1, initial=0) * problem.slot_min
    bout_wh = float((problem.output_w.max(axis=1, initial=0.0) * longest_min).max(initial=0.0)) / 60.0
    bout_wh *= station_to_outlet_fraction(plan.stores)
    return RotaRemark(kind="small_store", bout_wh=bout_wh, room_wh=room_wh) if bout_wh > room_wh else None
