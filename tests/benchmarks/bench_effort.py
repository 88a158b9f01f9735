"""Effort tables: all devices x stations x people of the youth camp, and one edit's worth of a parts station."""

from __future__ import annotations

from pathlib import Path

from kitplanner.plan.files import read_plan
from kitplanner.planners.bench import bench_sweep
from kitplanner.planners.effort import effort
from tests.benchmarks.figure import Figure, median_ms

DEMOS = Path(__file__).parents[2] / "demo_profiles"


def run() -> list[Figure]:
    """Measure the effort of two demos and one bench sweep."""
    camp, bench = read_plan(DEMOS / "camp.kitplan"), read_plan(DEMOS / "bench.kitplan")
    rows = len(effort(camp).rows)
    return [
        Figure(
            name="effort of the youth camp",
            value=median_ms(lambda: effort(camp)),
            unit="ms",
            floor=100.0,
            text=f"{rows} rows with range: all devices x stations x people x routes x charges",
        ),
        Figure(
            name="effort of the bench",
            value=median_ms(lambda: effort(bench)),
            unit="ms",
            text=f"{len(bench.stations)} stations by parts solved with the phone at their plug",
        ),
        Figure(
            name="bench sweep",
            value=median_ms(lambda: bench_sweep(bench, "A")),
            unit="ms",
            text="141 cadences of one station by parts",
        ),
    ]
