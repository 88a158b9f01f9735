"""What matters most: for the verdict of the shelter and of the bench, and for one charge; and two plans compared."""

from __future__ import annotations

from kitplanner.plan.files import read_plan
from kitplanner.plan.shipped import demo
from kitplanner.planners.compare import compare
from kitplanner.planners.effort import effort
from kitplanner.planners.sensitivity import coverage_sensitivity
from kitplanner.planners.sensitivity_minutes import minutes_sensitivity
from tests.benchmarks.figure import Figure, median_ms


def run() -> list[Figure]:
    """Measure the answers."""
    shelter, bench, household = (read_plan(demo(name)) for name in ("shelter", "bench", "household"))
    inputs = len(coverage_sensitivity(shelter).rows)
    row = effort(bench).rows[0]
    return [
        Figure(
            name="what moves the shelter's verdict",
            value=median_ms(lambda: coverage_sensitivity(shelter)),
            unit="ms",
            floor=300.0,
            text=f"{inputs} inputs at both ends, {len(shelter.people)} people",
        ),
        Figure(
            name="what moves the bench's verdict",
            value=median_ms(lambda: coverage_sensitivity(bench)),
            unit="ms",
            text=f"{len(bench.stations)} stations by parts",
        ),
        Figure(
            name="what moves the minutes of one charge, by parts",
            value=median_ms(lambda: minutes_sensitivity(bench, row)),
            unit="ms",
            floor=300.0,
        ),
        Figure(
            name="household and shelter compared",
            value=median_ms(lambda: compare(household, shelter)),
            unit="ms",
        ),
    ]
