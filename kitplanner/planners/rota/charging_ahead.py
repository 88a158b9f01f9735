"""Looking ahead in the dispatch: what each line must still draw by when, and what may be given without harm.

For lines of class c and better, the slack at a later time is what the stores hold and what still comes in by then, less
what those lines must have drawn by then. Where it is below zero, that much use is lost whatever is done; giving energy
now must not make the greatest loss of any class greater. A gift to one line lowers the slack of its class only beyond
what that line needed by then anyway.
"""

from __future__ import annotations

import numpy as np

from kitplanner.planners.rota.charging_inputs import ChargingInputs, FloatArray, IntArray

# Times looked at ahead; every slot of short plans, every few of long ones.
MOST_TIMES = 600
# Bisection steps of the shared fraction: 1e-9 of the use.
_HALVINGS = 30


class Ahead:
    """What lies ahead of a plan's dispatch; `phi` is the share of its use that each line is served."""

    def __init__(self, inputs: ChargingInputs) -> None:
        """Prepare the curves."""
        lines = inputs.lines
        slots = inputs.slots
        stride = -(-slots // MOST_TIMES)
        self.times: IntArray = np.unique(np.append(np.arange(stride, slots + 1, stride), slots))
        devices = len(lines.count)
        self.used = np.zeros((devices, slots + 1))
        np.cumsum(lines.use_wh, axis=1, out=self.used[:, 1:])
        self.next = next_slots(lines.chargeable)
        # Use of a gap in which a line cannot be charged must be in it when the gap begins.
        due_at = self.next[:, self.times]
        self.due = np.take_along_axis(self.used, due_at, axis=1)
        self._anchor = np.take_along_axis(self.used, self.next, axis=1)
        self._coming = inputs.coming_wh
        self._coming_then = inputs.coming_wh[self.times]
        self._eta = lines.eta
        self._rank = lines.rank
        self.ranks = int(lines.rank.max(initial=0)) + 1
        self.phi = np.ones(devices)

    def wanted(self, slot: int, headroom: FloatArray) -> FloatArray:
        """Return what each line must still draw by each later time, at O, shape (devices, times from `first`).

        `headroom` is what each line holds above what must stay in it [Wh at D].
        """
        return self._wanted(slot, headroom, self.phi)

    def _wanted(self, slot: int, headroom: FloatArray, phi: FloatArray) -> FloatArray:
        first = self.first(slot)
        anchor = self._anchor[:, slot]
        kept = np.maximum(0.0, headroom - phi * (anchor - self.used[:, slot]))
        ahead = phi[:, None] * (self.due[:, first:] - anchor[:, None])
        return np.asarray(np.maximum(0.0, ahead - kept[:, None]) / self._eta[:, None])

    def first(self, slot: int) -> int:
        """Return the first of `times` after a slot."""
        return int(np.searchsorted(self.times, slot, side="right"))

    def slack(self, slot: int, stored_wh: float, wanted: FloatArray) -> FloatArray:
        """Return the slack of each class and all better ones at each later time, at O, shape (classes, times).

        `stored_wh` includes what came in during the slot itself.
        """
        by_class = np.zeros((self.ranks, wanted.shape[1]))
        np.add.at(by_class, self._rank, wanted)
        coming = self._coming_then[self.first(slot) :] - self._coming[slot + 1]
        return np.asarray(stored_wh + coming - np.cumsum(by_class, axis=0))

    def share_out(self, slot: int, stored_wh: float, headroom: FloatArray) -> None:
        """Set `phi` to the greatest fraction that all lines can be served alike until the end.

        A line whose own charge is worth more than that fraction keeps it.
        """
        rest = self.used[:, -1] - self.used[:, slot]
        own = np.divide(headroom, rest, out=np.ones_like(rest), where=rest > 0.0)
        coming = self._coming_then[self.first(slot) :] - self._coming[slot]

        def served(fraction: float) -> FloatArray:
            return np.maximum(fraction, np.minimum(1.0, own))

        def is_enough(fraction: float) -> bool:
            need = self._wanted(slot, headroom, served(fraction)).sum(axis=0)
            return bool((need <= stored_wh + coming + 1e-9).all())

        low, high = 0.0, 1.0
        if is_enough(1.0):
            low = 1.0
        else:
            for _ in range(_HALVINGS):
                middle = (low + high) / 2.0
                low, high = (middle, high) if is_enough(middle) else (low, middle)
        self.phi = served(low)


def next_slots(allowed: np.ndarray[tuple[int, int], np.dtype[np.bool_]]) -> IntArray:
    """Return for each line and slot the first allowed slot at or after it, the end where there is none.

    Examples
    --------
    >>> next_slots(np.array([[False, True, False]])).tolist()
    [[1, 1, 3, 3]]
    """
    slots = allowed.shape[1]
    marked = np.where(allowed, np.arange(slots), slots)
    with_end = np.concatenate((marked, np.full((len(allowed), 1), slots)), axis=1)
    return np.asarray(np.minimum.accumulate(with_end[:, ::-1], axis=1)[:, ::-1], dtype=np.int64)
