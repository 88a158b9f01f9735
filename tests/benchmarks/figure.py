"""One measured figure with its floor (must hold) and its aim (would be good)."""

from __future__ import annotations

import dataclasses
import statistics
import time
from collections.abc import Callable
from typing import Literal


@dataclasses.dataclass(frozen=True, kw_only=True)
class Figure:
    """A measured value; `floor` and `aim` are None where the figure only informs.

    `better` says which side of the floor is good: "lower" for times and ratios of times, "higher" for speed-ups.
    """

    name: str
    value: float
    unit: str = ""
    floor: float | None = None
    aim: float | None = None
    better: Literal["lower", "higher"] = "lower"
    text: str = ""

    @property
    def holds(self) -> bool | None:
        """Whether the floor is kept; None where there is none."""
        return self._reaches(self.floor)

    @property
    def reaches_aim(self) -> bool | None:
        """Whether the aim is reached; None where there is none."""
        return self._reaches(self.aim)

    def _reaches(self, bound: float | None) -> bool | None:
        if bound is None:
            return None
        return self.value <= bound if self.better == "lower" else self.value >= bound


def median_ms(job: Callable[[], object], runs: int = 7, warm_up: int = 1) -> float:
    """Median wall time of one call in milliseconds."""
    for _ in range(warm_up):
        job()
    times = []
    for _ in range(runs):
        start = time.perf_counter()
        job()
        times.append((time.perf_counter() - start) * 1000.0)
    return statistics.median(times)
