"""Speed of the vectorised chain against a loop of scipy's brentq over the same law written with `math`."""

from __future__ import annotations

import statistics
import time

import numpy as np

from kitplanner.domain.chain import UsbSink, charging_point, operating_point
from tests.benchmarks.figure import Figure
from tests.domain.chain_sets import A, B
from tests.domain.reference_chain import emf_v, held, with_converter

_POINTS = 100_000
_LOOPED = 1500
_RUNS = 7


def _seconds_per_point(job: object, points: int, runs: int = _RUNS) -> float:
    """Median wall time of a job over its points."""
    assert callable(job)
    job()
    times = []
    for _ in range(runs):
        start = time.perf_counter()
        job()
        times.append(time.perf_counter() - start)
    return statistics.median(times) / points


def run() -> list[Figure]:
    """Measure backward, forward and held questions of 100 000 different points each."""
    random = np.random.default_rng(1)
    rpm, amps = random.uniform(45.0, 80.0, _POINTS), random.uniform(0.2, 1.5, _POINTS)
    linear_rpm = random.uniform(98.0, 150.0, _POINTS)
    human_w = random.uniform(3.0, 25.0, _POINTS)
    sink = UsbSink(limit_a=2.0)
    array = _seconds_per_point(lambda: operating_point(B, rpm, amps), _POINTS)
    forward = _seconds_per_point(lambda: charging_point(B, rpm, sink, human_w=human_w), _POINTS)
    sagging = _seconds_per_point(lambda: charging_point(A, linear_rpm, UsbSink(limit_a=1.0)), _POINTS)

    pairs = list(zip(rpm[:_LOOPED].tolist(), amps[:_LOOPED].tolist(), strict=True))
    few = linear_rpm[:200].tolist()
    half = 0.5 / B.machine.ra_ohm
    loop = _seconds_per_point(lambda: [with_converter(B, n, i) for n, i in pairs], _LOOPED, 3)
    bare = _seconds_per_point(lambda: [with_converter(B, n, i, half * emf_v(B, n)) for n, i in pairs], _LOOPED, 3)
    loop_held = _seconds_per_point(lambda: [held(A, n, 4.40, 1.0) for n in few], len(few), 3)
    return [
        Figure(name="chain_times_faster", value=loop / array, floor=25.0, aim=100.0, better="higher",
               text=f"{array * 1e6:.2f} us against {loop * 1e6:.1f} us a point, both with the collapse test"),
        Figure(name="chain_times_faster_without_collapse_test", value=bare / array, floor=25.0, better="higher",
               text=f"the loop alone skips the test: {bare * 1e6:.1f} us a point"),
        Figure(name="chain_times_faster_held_device", value=loop_held / sagging, floor=25.0, aim=100.0, better="higher",
               text=f"{sagging * 1e6:.2f} us against {loop_held * 1e6:.1f} us a point"),
        Figure(name="chain_points_per_second", value=1.0 / array, unit="1/s", floor=1e5, better="higher"),
        Figure(name="chain_forward_points_per_second", value=1.0 / forward, unit="1/s", floor=1e5, better="higher"),
    ]  # fmt: skip
