"""Speed of the vectorised chain against a loop of scipy's brentq over the same law written with `math`."""

from __future__ import annotations

import math
import time
from collections.abc import Callable, Sequence

import numpy as np

from kitplanner.domain.chain import UsbSink, charging_point, operating_point
from tests.benchmarks.figure import Figure
from tests.domain.chain_sets import A, B
from tests.domain.reference_chain import emf_v, held, with_converter

_POINTS = 100_000
_LOOPED, _LOOPED_HELD = 1500, 200
_ROUNDS = 7


def _least_seconds(jobs: Sequence[tuple[Callable[[], object], int]]) -> list[float]:
    """Least wall time per point of every job; the jobs take turns, so that a busy machine disturbs all alike."""
    least = [math.inf] * len(jobs)
    for _ in range(_ROUNDS):
        for place, (job, points) in enumerate(jobs):
            start = time.perf_counter()
            job()
            least[place] = min(least[place], (time.perf_counter() - start) / points)
    return least


def run() -> list[Figure]:
    """Measure backward, forward and held questions of 100 000 different points each."""
    random = np.random.default_rng(1)
    rpm, amps = random.uniform(45.0, 80.0, _POINTS), random.uniform(0.2, 1.5, _POINTS)
    linear_rpm = random.uniform(98.0, 150.0, _POINTS)
    human_w = random.uniform(3.0, 25.0, _POINTS)
    pairs = list(zip(rpm[:_LOOPED].tolist(), amps[:_LOOPED].tolist(), strict=True))
    few = linear_rpm[:_LOOPED_HELD].tolist()
    half = 0.5 / B.machine.ra_ohm
    array, loop, bare, forward, sagging, loop_held = _least_seconds(
        [
            (lambda: operating_point(B, rpm, amps), _POINTS),
            (lambda: [with_converter(B, n, i) for n, i in pairs], _LOOPED),
            (lambda: [with_converter(B, n, i, half * emf_v(B, n)) for n, i in pairs], _LOOPED),
            (lambda: charging_point(B, rpm, UsbSink(limit_a=2.0), human_w=human_w), _POINTS),
            (lambda: charging_point(A, linear_rpm, UsbSink(limit_a=1.0)), _POINTS),
            (lambda: [held(A, n, 4.40, 1.0) for n in few], _LOOPED_HELD),
        ]
    )
    return [
        Figure(name="chain_times_faster", value=loop / array, floor=25.0, aim=100.0, better="higher",
               text=f"{array * 1e6:.2f} us against {loop * 1e6:.1f} us a point, both with the collapse test"),
        Figure(name="chain_times_faster_held_device", value=loop_held / sagging, floor=25.0, aim=100.0, better="higher",
               text=f"{sagging * 1e6:.2f} us against {loop_held * 1e6:.1f} us a point"),
        Figure(name="chain_times_faster_bare_root", value=bare / array, better="higher",
               text=f"a loop that is told a bracket and skips the collapse test: {bare * 1e6:.1f} us a point"),
        Figure(name="chain_points_per_second", value=1.0 / array, unit="1/s", floor=1e5, better="higher"),
        Figure(name="chain_forward_points_per_second", value=1.0 / forward, unit="1/s", floor=1e5, better="higher"),
    ]  # fmt: skip
