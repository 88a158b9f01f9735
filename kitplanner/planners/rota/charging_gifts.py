"""Sharing out one slot's energy when there is not enough for all: nobody may add to what a better class must lose."""

from __future__ import annotations

import numpy as np

from kitplanner.planners.rota.charging_inputs import FloatArray, IntArray


class Gifts:
    """What lines are given in one slot, at O, and the slack that is left by it.

    Row 0 of the slack is the evening guarantee, row 1 + c holds class c and all better ones. What is lost already is
    lost: each row is lifted by its greatest loss, so that it starts at zero there and from then on may only stay above.
    """

    def __init__(
        self,
        stored_wh: float,
        slack: FloatArray,
        wanted: FloatArray,
        promised: dict[int, FloatArray],
        rank: IntArray,
    ) -> None:
        """Start with nothing given."""
        self.given = np.zeros(len(rank))
        self._stored = stored_wh
        self._spare = slack + np.maximum(0.0, -slack.min(axis=1, initial=0.0))[:, None]
        self._wanted = wanted
        self._promised = promised
        self._row = rank + 1

    def give_promised(self, line: int, wish: float) -> None:
        """Give a line what the evening guarantee needs, whatever its class."""
        promised = self._promised[line]
        most = float((self._spare[0] + promised).min(initial=np.inf))
        self._give(line, min(wish, float(promised.max(initial=0.0)), most))

    def give_needed(self, line: int, wish: float) -> None:
        """Give a line what it needs until the end, as far as its own class and the better ones can spare it."""
        row = int(self._row[line])
        above = float(self._spare[1:row].min(initial=np.inf))
        if above <= 0.0 or self._stored <= 0.0:
            return
        left = self._left(line)
        need = min(wish - float(self.given[line]), float(left[-1]) if len(left) else 0.0)
        if need > 0.0:
            most = min(above, float((self._spare[row:] + left).min(initial=np.inf)))
            self._give(line, min(need, most, self._first_row(line)))

    def give_beyond(self, line: int, wish: float) -> None:
        """Fill a line further, from what nobody needs."""
        most = float(self._spare[1:].min(initial=np.inf))
        if most > 0.0 and wish > self.given[line]:
            self._give(line, min(wish - float(self.given[line]), most, self._first_row(line)))

    def _left(self, line: int) -> FloatArray:
        return np.asarray(np.maximum(0.0, self._wanted[line] - self.given[line]))

    def _first_row(self, line: int) -> float:
        """Return the most that the evening guarantee lets a line have."""
        return float((self._spare[0] + self._promised_left(line)).min(initial=np.inf))

    def _promised_left(self, line: int) -> FloatArray | float:
        return np.maximum(0.0, self._promised[line] - self.given[line]) if line in self._promised else 0.0

    def _give(self, line: int, part: float) -> None:
        part = min(part, self._stored)
        if part <= 0.0:
            return
        row = int(self._row[line])
        gain = np.minimum(part, self._left(line))
        first_gain = np.minimum(part, self._promised_left(line))
        self._spare -= part
        self._spare[row:] += gain
        self._spare[0] += first_gain
        self._stored -= part
        self.given[line] += part
