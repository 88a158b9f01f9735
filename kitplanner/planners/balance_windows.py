"""Parts of a day as minutes: windows that cross midnight, quiet hours, minutes in each hour.

A window whose end is before its start crosses midnight and counts in its two parts in every calendar day.
"""

from __future__ import annotations

import math
from collections.abc import Iterable

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.records import Block, Plan, Window

DAY_MIN = 1440
HOUR_MIN = 60
MINUTES_PER_HOUR = 60.0

Part = tuple[int, int]
WHOLE_DAY: tuple[Part, ...] = ((0, DAY_MIN),)


def day_parts(windows: Iterable[Window]) -> tuple[Part, ...]:
    """Return windows as (start, end) minutes inside one calendar day, in the order given.

    Parameters
    ----------
    windows : iterable of Window
        Clock windows; one that crosses midnight gives two parts, one that ends when it starts gives none.

    Returns
    -------
    tuple of (int, int)
        Start and end of each part [min]

    Examples
    --------
    >>> day_parts((Window(start="22:00", end="07:00"), Window(start="12:00", end="13:30")))
    ((0, 420), (1320, 1440), (720, 810))
    """
    parts: list[Part] = []
    for window in windows:
        start, end = int(minutes_of_day(window.start)), int(minutes_of_day(window.end))
        if start < end:
            parts.append((start, end))
        elif end < start:
            parts.extend(part for part in ((0, end), (start, DAY_MIN)) if part[0] < part[1])
    return tuple(parts)


def merged(parts: Iterable[Part]) -> tuple[Part, ...]:
    """Return the parts in order, overlapping and touching ones joined.

    Examples
    --------
    >>> merged(((60, 120), (100, 180), (300, 360)))
    ((60, 180), (300, 360))
    """
    joined: list[Part] = []
    for start, end in sorted(parts):
        if joined and start <= joined[-1][1]:
            joined[-1] = (joined[-1][0], max(joined[-1][1], end))
        else:
            joined.append((start, end))
    return tuple(joined)


def outside(parts: Iterable[Part]) -> tuple[Part, ...]:
    """Return the rest of the day.

    Examples
    --------
    >>> outside(((0, 420), (1320, 1440)))
    ((420, 1320),)
    """
    rest: list[Part] = []
    last = 0
    for start, end in merged(parts):
        if start > last:
            rest.append((last, start))
        last = end
    if last < DAY_MIN:
        rest.append((last, DAY_MIN))
    return tuple(rest)


def total_min(parts: Iterable[Part]) -> int:
    """Return the minutes covered by parts that do not overlap [min].

    Examples
    --------
    >>> total_min(((0, 420), (1320, 1440)))
    540
    """
    return sum(end - start for start, end in parts)


def quiet_parts(blocks: Iterable[Block]) -> tuple[Part, ...]:
    """Return the quiet hours that hold for everybody on every day."""
    quiet = (block for block in blocks if block.kind == "quiet" and not block.groups and not block.days)
    return merged(part for block in quiet for part in day_parts(block.windows))


def waking_parts(plan: Plan) -> tuple[Part, ...]:
    """Return the day outside quiet hours: when a place without hours of its own is open."""
    return outside(quiet_parts(plan.blocks))


def share_by_hour(parts: Iterable[Part]) -> tuple[float, ...]:
    """Return which share of the parts' minutes lies in each of the 24 hours; all zero for no parts [-].

    Examples
    --------
    >>> share_by_hour(((90, 150),))[1:3]
    (0.5, 0.5)
    """
    pieces = tuple(parts)
    whole = total_min(pieces)
    if not whole:
        return (0.0,) * 24
    return tuple(
        sum(max(0, min(end, (hour + 1) * HOUR_MIN) - max(start, hour * HOUR_MIN)) for start, end in pieces) / whole
        for hour in range(24)
    )


def slot_minutes(parts: Iterable[Part], slot_min: int, changeover_min: int) -> int:
    """Return the minutes of whole slots that fit, each followed by a changeover except a window's last.

    minutes = sum over windows of floor((window + changeover) / (slot + changeover)) * slot

    Parameters
    ----------
    parts : iterable of (int, int)
        Windows as start and end [min]
    slot_min, changeover_min : int
        Length of a slot and of the pause between two slots [min]

    Returns
    -------
    int
        Slot time of one unit in a day [min]

    Examples
    --------
    >>> slot_minutes(((510, 600), (990, 1110)), 20, 2)
    180
    """
    if slot_min <= 0:
        return 0
    step = slot_min + max(0, changeover_min)
    return sum(math.floor((end - start + max(0, changeover_min)) / step) * slot_min for start, end in parts)
