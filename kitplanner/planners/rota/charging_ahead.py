"""Looking ahead in the dispatch: what each line must still draw by when, and what may be given without harm.

For lines of class c and better, the slack at a later time is what the stores hold and what still comes in by then, less
what those lines must have drawn by then. Where it is below zero, that much use is lost whatever is done; giving energy
now must not make the greatest loss of any class greater. A gift to one line lowers the slack of its class only beyond
what that line needed by then anyway.
"""

from __future__ import annotations

import numpy as np

from kitplanner.planners.rota.charging_inputs import ChargingInputs, FloatArray, IntArray
from kitplanner.planners.rota.grid import BoolArray

# Times looked at ahead: all that can bind in the near future, every few of them beyond.
NEAR_TIMES, FAR_TIMES = 240, 240
# The evening guarantee is seen to this many slots before its last chance.
SPARE_SLOTS = 2
# Bisection steps of the shared fraction: 1e-9 of the use.
_HALVINGS = 30


class Ahead:
    """What lies ahead of a plan's dispatch; `phi` is the share of its use that each line is served."""

    def __init__(self, inputs: ChargingInputs) -> None:
        """Prepare the curves."""
        lines = inputs.lines
        slots = inputs.slots
        # Needs only grow, so slack is least just before energy comes in, or at the end.
        self.times: IntArray = np.append(np.flatnonzero(np.diff(inputs.coming_wh) > 0.0), slots)
        self._far = np.arange(len(self.times))[:: -max(1, len(self.times) // FAR_TIMES)][::-1]
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
        self._slot, self._columns, self._times = -1, self._far, self.times
        self._eta = lines.eta
        # Row 0 sums no line, row 1 + c the lines of class c and better.
        self._up_to = (lines.rank[None, :] < np.arange(int(lines.rank.max(initial=0)) + 2)[:, None]).astype(float)
        self.phi = np.ones(devices)
        self._lights_out = inputs.lights_out
        guaranteed = {line for line in (inputs.calling, inputs.lamp) if line >= 0 and lines.whole_wh[line] > 0.0}
        self._last_before = {
            line: {dark: _end_of_last(lines.chargeable[line], dark) for dark in inputs.lights_out}
            for line in sorted(guaranteed)
        }

    def wanted(self, slot: int, headroom: FloatArray) -> FloatArray:
        """Return what each line must still draw by each later time, at O, shape (devices, columns).

        `headroom` is what each line holds above what must stay in it [Wh at D].
        """
        return self._wanted(slot, headroom, self.phi)

    def _wanted(self, slot: int, headroom: FloatArray, phi: FloatArray) -> FloatArray:
        anchor = self._anchor[:, slot]
        kept = np.maximum(0.0, headroom - phi * (anchor - self.used[:, slot]))
        ahead = phi[:, None] * (self.due[:, self.columns(slot)] - anchor[:, None])
        return np.asarray(np.maximum(0.0, ahead - kept[:, None]) / self._eta[:, None])

    def columns(self, slot: int) -> IntArray:
        """Return which of `times` are looked at from a slot: those after it, all near ones and some far ones."""
        if slot != self._slot:
            first = int(np.searchsorted(self.times, slot, side="right"))
            near = np.arange(first, min(first + NEAR_TIMES, len(self.times)))
            far = self._far[np.searchsorted(self._far, first + NEAR_TIMES) :]
            self._slot, self._columns = slot, np.concatenate((near, far)) if len(far) else near
            self._times = self.times[self._columns]
        return self._columns

    def times_after(self, slot: int) -> IntArray:
        """Return the times looked at from a slot."""
        self.columns(slot)
        return self._times

    def promised(self, slot: int, level: FloatArray, kept: FloatArray) -> dict[int, FloatArray]:
        """Return what the lines of the evening guarantee must still draw for the next lights-out, at O, by line.

        It is due at the end of the last slot before lights-out in which the line may be charged.
        """
        promised: dict[int, FloatArray] = {}
        for line, dark in self._guarantee(slot):
            until = float(self.phi[line] * (self.used[line, dark] - self.used[line, slot]))
            short = float(kept[line]) + until - float(level[line])
            last = self._last_before[line][dark]
            if short > 0.0 and last > slot:
                due = self.times_after(slot) >= last
                promised[line] = np.where(due, short / float(self._eta[line]), 0.0)
        return promised

    def must_now(self, slot: int, promised: FloatArray, wish: float) -> float:
        """Return how much of a promise cannot wait: what later energy will not cover, all of it when time runs short.

        `wish` is what the line takes in one slot.
        """
        whole = float(promised.max(initial=0.0))
        if whole <= 0.0:
            return 0.0
        due = int(self.times_after(slot)[int(np.argmax(promised > 0.0))])
        if wish <= 0.0 or (due - slot) <= whole / wish + SPARE_SLOTS:
            return whole
        return max(0.0, whole - float(self._coming[due] - self._coming[slot + 1]))

    def _guarantee(self, slot: int) -> list[tuple[int, int]]:
        dark = next((each for each in self._lights_out if each > slot), None)
        return [] if dark is None else [(line, dark) for line in self._last_before]

    def slack(self, slot: int, stored_wh: float, wanted: FloatArray, promised: dict[int, FloatArray]) -> FloatArray:
        """Return the slack at each later time, at O: of the evening guarantee first, then of each class and all better.

        `stored_wh` includes what came in during the slot itself; the shape is (1 + classes, times).
        """
        slack = stored_wh + self._coming_then[self.columns(slot)] - self._coming[slot + 1] - self._up_to @ wanted
        for needed in promised.values():
            slack[0] -= needed
        return np.asarray(slack)

    def share_out(self, slot: int, stored_wh: float, headroom: FloatArray) -> None:
        """Set `phi` to the greatest fraction that all lines can be served alike until the end.

        A line whose own charge is worth more than that fraction keeps it.
        """
        rest = self.used[:, -1] - self.used[:, slot]
        own = np.divide(headroom, rest, out=np.ones_like(rest), where=rest > 0.0)
        coming = self._coming_then[self.columns(slot)] - self._coming[slot]

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


def _end_of_last(allowed: BoolArray, dark: int) -> int:
    """Return the end of the last allowed slot before a time, 0 where there is none."""
    found = np.flatnonzero(allowed[:dark])
    return int(found[-1]) + 1 if len(found) else 0


def next_slots(allowed: BoolArray) -> IntArray:
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
