"""The board's time: hours shown, and store level and needs along them."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from kitplanner.planners.balance_windows import DAY_MIN, outside
from kitplanner.planners.rota.result import FloatArray, RotaAnswer
from kitplanner.planners.supply import open_parts
from kitplanner.ui.board.board_data import BoardData, Curves, named_blocks


def hours_shown(data: BoardData) -> tuple[int, int]:
    """Return the whole hours of a day that hold all turns and all times when a station may be used."""
    parts = [(bout.start_min, bout.end_min) for bout in data.bouts]
    for station in data.plan.stations:
        parts += open_parts(data.plan, station)
    if not parts:
        parts = list(outside([part for _name, part in named_blocks(data.plan, 1)])) or [(0, DAY_MIN)]
    low = min(start for start, _end in parts) // 60 * 60
    high = -(-max(end for _start, end in parts) // 60) * 60
    return (low, high) if high - low >= 240 else (max(0, low - 120), min(DAY_MIN, high + 120))


def curves_of(data: BoardData, days: Sequence[int]) -> Curves | None:
    """Return store level, what there is to give and what must be given by then, counted from the first shown day.

    have(t) = level(t) + given out since the day's start;  due(t) = due by t - given out before the day's start
    """
    if data.answer is None or not days:
        return None
    levels = data.answer.levels
    per_day = DAY_MIN // levels.slot_min
    first, last = (days[0] - 1) * per_day, days[-1] * per_day
    if len(levels.pooled_wh) <= last:
        return None
    given = _given_by_slot(data.answer, levels.slot_min, len(levels.pooled_wh))
    level = levels.pooled_wh[first : last + 1]
    have = level + given[first : last + 1] - given[first]
    due = (levels.due_wh[first : last + 1] - given[first]).clip(min=0.0)
    return Curves(levels.slot_min, level.tolist(), have.tolist(), due.tolist())


def _given_by_slot(answer: RotaAnswer, slot_min: int, count: int) -> FloatArray:
    """Return energy given out by the start of each slot, at O: each row of the table spread evenly over its time."""
    rate = np.zeros(count)
    for charge in answer.charging:
        first = ((charge.day - 1) * DAY_MIN + charge.start_min) // slot_min
        last = ((charge.day - 1) * DAY_MIN + charge.end_min) // slot_min
        if last > first:
            rate[first:last] += charge.energy_wh / (last - first)
    return np.concatenate(([0.0], np.cumsum(rate)[:-1]))
