"""From slots to rows of the charging table: consecutive slots become one row, the units of a batch take turns."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from kitplanner.plan.records import Device
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.charging_dispatch import Dispatch
from kitplanner.planners.rota.charging_inputs import FloatArray, IntArray
from kitplanner.planners.rota.result import RotaCharge

# Units of a batch that do not all find an outlet change places after this long.
TURN_MIN = 60


@dataclass(frozen=True, slots=True)
class _Stretch:
    """Slots `first` to `last` (not included) of one day with the same units on charge."""

    first: int
    last: int
    units: int


def rows_of(devices: Sequence[Device], done: Dispatch, slot_min: int, *, has_stores: bool) -> tuple[RotaCharge, ...]:
    """Return the charging table of a dispatch by day, time and device.

    Parameters
    ----------
    devices : sequence of Device
        Device lines in the order of the dispatch.
    done : Dispatch
        The dispatch.
    slot_min : int
        Length of a slot [min].
    has_stores : bool
        False where devices hang at the stations themselves.

    Returns
    -------
    tuple of RotaCharge
        Rows; energy at O.
    """
    rows: list[RotaCharge] = []
    for place, device in enumerate(devices):
        ticket = 1
        for stretch in _stretches(done.units[place], done.given_wh[place], slot_min, device.count):
            energy = float(done.given_wh[place, stretch.first : stretch.last].sum())
            for first, count in _tickets(ticket, stretch.units, device.count):
                rows.append(
                    RotaCharge(
                        day=stretch.first * slot_min // DAY_MIN + 1,
                        start_min=stretch.first * slot_min % DAY_MIN,
                        end_min=(stretch.last * slot_min - 1) % DAY_MIN + 1,
                        device=device.id,
                        count=count,
                        first_ticket=first,
                        energy_wh=energy * count / stretch.units,
                        at_station=not has_stores,
                    )
                )
            ticket = (ticket - 1 + stretch.units) % device.count + 1
    order = {device.id: place for place, device in enumerate(devices)}
    rows.sort(key=lambda row: (row.day, row.start_min, order[row.device], row.first_ticket))
    return tuple(rows)


def _stretches(units: IntArray, given: FloatArray, slot_min: int, count: int) -> Iterator[_Stretch]:
    """Yield runs of slots with the same units, cut at midnight and, where not all units are on, at each turn."""
    per_day = DAY_MIN // slot_min
    busy = np.where(given > 0.0, units, 0)
    edges = np.flatnonzero(np.diff(np.concatenate(([0], busy, [0]))))
    for first, last in pairwise(edges):
        on = int(busy[first])
        if not on:
            continue
        turn = max(1, TURN_MIN // slot_min) if on < count else per_day
        begin = int(first)
        while begin < last:
            end = min(int(last), begin + turn, (begin // per_day + 1) * per_day)
            yield _Stretch(begin, end, on)
            begin = end


def _tickets(first: int, units: int, count: int) -> Iterator[tuple[int, int]]:
    """Yield first ticket and number of units; two pieces where the numbers begin anew."""
    if units >= count:
        yield 1, count
        return
    before_end = min(units, count - first + 1)
    yield first, before_end
    if before_end < units:
        yield 1, units - before_end
