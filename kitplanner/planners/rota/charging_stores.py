"""Stores in the dispatch: what comes in goes to the lowest first, what goes out comes from the fullest first.

Few stores, so plain numbers: faster than arrays of two or three.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from kitplanner.planners.rota.charging_inputs import ChargingInputs, Feed
from kitplanner.planners.rota.grid import BoolArray

_NOTHING_WH = 1e-12


class Stores:
    """Levels above the floor of each store line [Wh in the cells], and what was lost because all were full.

    `direct_wh` is energy at O that no store takes in this slot: devices may have it, else it is wasted.
    """

    def __init__(self, inputs: ChargingInputs) -> None:
        """Start at the plan's levels."""
        self.level: list[float] = [float(each) for each in inputs.start_wh]
        self._full = [float(each) for each in inputs.full_wh]
        self._eta_in = [float(each) for each in inputs.eta_in]
        self._eta_out = [float(each) for each in inputs.eta_out]
        self._limit = [float(each) for each in inputs.limit_wh]
        self._taken = [0.0] * len(self.level)
        self._spilled: list[tuple[Feed, float]] = []
        self.direct_wh = 0.0
        self.wasted_wh = 0.0

    def read(self, level_wh: Sequence[float | None]) -> None:
        """Go on from levels that were read; what a store holds beyond the plan stays a reserve nobody counts on."""
        for store, level in enumerate(level_wh):
            if level is not None:
                self.level[store] = min(self.level[store], level)

    def outlet_wh(self) -> float:
        """Return what the stores can give, at O."""
        return sum(level * eta for level, eta in zip(self.level, self._eta_out, strict=True))

    def outlet_each_wh(self) -> list[float]:
        """Return what each store can give, at O."""
        return [level * eta for level, eta in zip(self.level, self._eta_out, strict=True)]

    def fill(self, feeds: Sequence[Feed], slot: int) -> None:
        """Take in what arrives in a slot; what finds no room waits for draws of the same slot."""
        self._taken = [0.0] * len(self.level)
        self._spilled = []
        self.direct_wh = 0.0
        for feed in feeds:
            energy = float(feed.socket_wh[slot])
            if energy <= 0.0:
                continue
            if not feed.stores:
                self.direct_wh += energy
                continue
            left = self._put(feed, energy)
            if left > _NOTHING_WH:
                self._spilled.append((feed, left))

    def _put(self, feed: Feed, energy: float) -> float:
        """Put energy at S into the lowest stores of a feed; return what finds no room."""
        for store in sorted(feed.stores, key=self._fullness):
            if energy <= 0.0:
                break
            room = max(0.0, self._full[store] - self.level[store]) / self._eta_in[store]
            part = min(energy, room, self._limit[store] - self._taken[store])
            if part > 0.0:
                self.level[store] = min(self._full[store], self.level[store] + part * self._eta_in[store])
                self._taken[store] += part
                energy -= part
        return energy

    def _fullness(self, store: int) -> float:
        return self.level[store] / self._full[store] if self._full[store] > 0.0 else 1.0

    def draw(self, energy: float, fits: BoolArray | None = None) -> float:
        """Give energy at O, from the fullest store first; return what could be given."""
        given = min(energy, self.direct_wh)
        self.direct_wh -= given
        for store in sorted(range(len(self.level)), key=self._fullness, reverse=True):
            if given >= energy:
                break
            if fits is None or fits[store]:
                part = min(energy - given, self.level[store] * self._eta_out[store])
                self.level[store] = max(0.0, self.level[store] - part / self._eta_out[store])
                given += part
        return given

    def close(self) -> None:
        """Put what waited into the room that draws made; the rest is wasted."""
        for feed, energy in self._spilled:
            self.wasted_wh += self._put(feed, energy)
        self.wasted_wh += self.direct_wh
        self.direct_wh = 0.0

    def is_spilling(self) -> bool:
        """Tell whether energy of this slot found no room so far."""
        return bool(self._spilled) or self.direct_wh > 0.0

    def levels_wh(self) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
        """Return what each store can give at O as an array."""
        return np.array(self.outlet_each_wh())
