"""Speed of the vectorised chain against a loop of scipy's brentq over the same law written with `math`."""

from __future__ import annotations

import math
import time
from collections.abc import Callable, Sequence

import numpy as np
from scipy.optimize import brentq

from kitplanner.domain.chain import Chain, UsbSink, charging_point, operating_point
from tests.benchmarks.figure import Figure
from tests.domain.chain_sets import A, B
from tests.domain.reference_chain import VT, held, parts, with_converter

_POINTS = 100_000
_LOOPED, _LOOPED_HELD = 1500, 200
_ROUNDS = 7


def plain_loop(chain: Chain, pairs: Sequence[tuple[float, float]]) -> list[float]:
    """Human watts at (cadence, plug current) pairs: brentq over the law as anybody would write it for speed.

    Every constant is a local number, the bracket ends at half the short-circuit current, and a load that is too
    great there counts as collapsed without a search for the peak.
    """
    diode, converter, _ = parts(chain)
    machine, gear = chain.machine, chain.gear
    ke, ra, series, rs = machine.ke_v_s, machine.ra_ohm, diode.series, diode.series_ohm
    nvt, i_s = diode.ideality * VT, diode.saturation_a
    vo, a0, a1 = converter.output_v, converter.a0_w, converter.a1_w_per_v
    b0, b1, c = converter.b0_v, converter.b1_v_per_v, converter.c_ohm
    watts = []
    for rpm, amps in pairs:
        crank = rpm * math.pi / 30.0
        emf = ke * gear.ratio * crank - machine.vb_v

        def surplus(i: float, emf: float = emf, amps: float = amps) -> float:
            v = emf - ra * i - series * (nvt * math.log1p(i / i_s) + rs * i)
            return i * v - (vo * amps + a0 + a1 * v + (b0 + b1 * v) * amps + c * amps * amps)

        top = 0.5 * emf / ra
        if surplus(top) < 0.0:
            watts.append(math.nan)
            continue
        i = brentq(surplus, 0.0, top)
        torque = gear.ratio * (ke * i + machine.tc_nm + machine.b_nm_s * gear.ratio * crank) / gear.eta + gear.drag_nm
        watts.append(torque * crank)
    return watts


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
    array, plain, searched, forward, sagging, loop_held = _least_seconds(
        [
            (lambda: operating_point(B, rpm, amps), _POINTS),
            (lambda: plain_loop(B, pairs), _LOOPED),
            (lambda: [with_converter(B, n, i) for n, i in pairs], _LOOPED),
            (lambda: charging_point(B, rpm, UsbSink(limit_a=2.0), human_w=human_w), _POINTS),
            (lambda: charging_point(A, linear_rpm, UsbSink(limit_a=1.0)), _POINTS),
            (lambda: [held(A, n, 4.40, 1.0) for n in few], _LOOPED_HELD),
        ]
    )
    return [
        Figure(name="chain_times_faster", value=plain / array, floor=25.0, aim=100.0, better="higher",
               text=f"{array * 1e6:.2f} us against {plain * 1e6:.1f} us a point in a bare loop of brentq"),
        Figure(name="chain_times_faster_with_peak", value=searched / array, better="higher",
               text=f"against a loop that searches the peak for its collapse test: {searched * 1e6:.1f} us a point"),
        Figure(name="chain_times_faster_held_device", value=loop_held / sagging, better="higher",
               text=f"{sagging * 1e6:.2f} us against {loop_held * 1e6:.1f} us a point in two nested loops of brentq"),
        Figure(name="chain_points_per_second", value=1.0 / array, unit="1/s", floor=1e5, better="higher"),
        Figure(name="chain_forward_points_per_second", value=1.0 / forward, unit="1/s", floor=1e5, better="higher"),
    ]  # fmt: skip
