"""The time grid of a rota: global slots over the horizon, and parts of days as slot masks."""

from __future__ import annotations

import math
from collections.abc import Iterable

import numpy as np
import numpy.typing as npt

from kitplanner.plan.records import Plan
from kitplanner.planners.balance_windows import DAY_MIN, Part
from kitplanner.planners.people import person_limits
from kitplanner.planners.supply import open_parts

LEAST_GRID_MIN = 5
# Steps of which a whole number makes a day.
GRID_STEPS_MIN = (60, 30, 20, 15, 12, 10, 6, 5)

BoolArray = npt.NDArray[np.bool_]


def grid_min(plan: Plan) -> int:
    """Return the grid of a plan: the greatest common divisor of bouts and station windows, at least 5 min.

    Parameters
    ----------
    plan : Plan
        The plan; `grid_min` of its own wins.

    Returns
    -------
    int
        Length of one slot, a divisor of a day [min].

    Examples
    --------
    >>> from kitplanner.plan.records import Person, Station
    >>> people = (Person(id="a", name="A", age=30, bout_min=20), Person(id="b", name="B", age=30, bout_min=15))
    >>> grid_min(Plan(people=people, stations=(Station(id="s", name="S", output_w=6.0),)))
    5
    """
    if plan.grid_min:
        return plan.grid_min
    bouts = [person_limits(plan, person).bout_min for person in plan.people]
    edges = [edge for station in plan.stations for part in open_parts(plan, station) for edge in part]
    common = math.gcd(*(bout for bout in bouts if bout > 0), *edges) if any(bouts) else LEAST_GRID_MIN
    return next((step for step in GRID_STEPS_MIN if common % step == 0), LEAST_GRID_MIN)


def day_mask(parts: Iterable[Part], slot_min: int) -> BoolArray:
    """Return which slots of one day lie wholly inside the parts, shape (slots a day,).

    Examples
    --------
    >>> np.flatnonzero(day_mask(((510, 600),), 30)).tolist()
    [17, 18, 19]
    """
    mask = np.zeros(DAY_MIN // slot_min, dtype=bool)
    for start, end in parts:
        mask[math.ceil(start / slot_min) : end // slot_min] = True
    return mask


def touched_mask(parts: Iterable[Part], slot_min: int) -> BoolArray:
    """Return which slots of one day the parts touch at all: for times that must stay free.

    Examples
    --------
    >>> np.flatnonzero(touched_mask(((515, 560),), 30)).tolist()
    [17, 18]
    """
    mask = np.zeros(DAY_MIN // slot_min, dtype=bool)
    for start, end in parts:
        mask[start // slot_min : math.ceil(end / slot_min)] = True
    return mask
