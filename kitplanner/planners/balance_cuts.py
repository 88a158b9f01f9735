"""Who gets what when energy is short: in order of priority, or one share for all.

Start charge inside a device serves nobody else: in strict order it stays out of the pool that higher classes
draw from, in a shared cut a class (or device) whose own credit is more than the share keeps it.
"""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.planners.demand import DeviceNeed
from kitplanner.planners.results import CutClass, Cuts


def shared_fraction(needs_wh: Sequence[float], credits_wh: Sequence[float], have_wh: float) -> float:
    """Return the one share of need that all can have, each keeping at least its own credit.

    f with sum(max(f * need, credit)) = have + sum(credit), at most 1

    Parameters
    ----------
    needs_wh, credits_wh : sequence of float
        Need and own start credit of each, credit not above need [Wh]
    have_wh : float
        Energy that can go to any of them [Wh]

    Returns
    -------
    float
        The common share [-]

    Examples
    --------
    >>> shared_fraction([100.0, 100.0], [0.0, 80.0], 40.0)
    0.4
    >>> shared_fraction([100.0, 100.0], [0.0, 10.0], 110.0)
    0.6
    """
    pairs = [(need, own) for need, own in zip(needs_wh, credits_wh, strict=True) if need > 0.0]
    pairs.sort(key=lambda pair: pair[1] / pair[0])
    need_sum, own_sum, share = 0.0, 0.0, 1.0
    for place, (need, own) in enumerate(pairs):
        need_sum += need
        own_sum += own
        share = (have_wh + own_sum) / need_sum
        following = pairs[place + 1] if place + 1 < len(pairs) else None
        if following is None or share <= following[1] / following[0]:
            break
    return min(1.0, max(0.0, share))


def cuts(needs: Sequence[DeviceNeed], have_wh: float) -> Cuts:
    """Return what each priority class gets in strict order and in a shared cut.

    Parameters
    ----------
    needs : sequence of DeviceNeed
        Need with margin and credit of each device line
    have_wh : float
        Stores and made energy over the horizon, at O [Wh]

    Returns
    -------
    Cuts
        Both cuts, classes in order of priority
    """
    classes = _classes(needs)
    return Cuts(strict=_strict(classes, have_wh), shared=_shared(classes, have_wh))


def _classes(needs: Sequence[DeviceNeed]) -> tuple[tuple[int, float, float], ...]:
    """Return (priority, need, credit) of each class that has devices."""
    found = sorted({need.priority for need in needs})
    return tuple(
        (
            priority,
            sum(need.use_wh for need in needs if need.priority == priority),
            sum(need.credit_wh for need in needs if need.priority == priority),
        )
        for priority in found
    )


def _strict(classes: Sequence[tuple[int, float, float]], have_wh: float) -> tuple[CutClass, ...]:
    left = have_wh + sum(own for _, _, own in classes)
    stranded = sum(own for _, _, own in classes)
    rows = []
    for priority, need, own in classes:
        stranded -= own
        given = min(need, max(0.0, left - stranded))
        left -= given
        rows.append(_row(priority, need, given))
    return tuple(rows)


def _shared(classes: Sequence[tuple[int, float, float]], have_wh: float) -> tuple[CutClass, ...]:
    share = shared_fraction([need for _, need, _ in classes], [own for _, _, own in classes], have_wh)
    return tuple(_row(priority, need, max(share * need, min(own, need))) for priority, need, own in classes)


def _row(priority: int, need_wh: float, have_wh: float) -> CutClass:
    covered = min(1.0, have_wh / need_wh) if need_wh > 0.0 else 1.0
    return CutClass(priority=priority, need_wh=need_wh, have_wh=have_wh, covered_fraction=covered)
