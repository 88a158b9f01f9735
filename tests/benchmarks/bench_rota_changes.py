"""Figures of what follows a rota: made again from a moment on, what would make a plan fit, and stopping a search."""

from __future__ import annotations

import threading
import time

from kitplanner.plan.codec import decode
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Plan
from kitplanner.plan.shipped import demo
from kitplanner.planners.levers import levers
from kitplanner.planners.rota.answer import adopt, rota_answer
from kitplanner.planners.rota.replan import replan
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from tests.benchmarks.figure import Figure
from tests.benchmarks.rota_instances import instance

ABSENT_FRACTION = 0.08


def run() -> list[Figure]:
    """Measure a re-plan at 200 people, the shelter's levers, and how long a stop takes at 500."""
    plan = instance("shelter200")
    adopted = adopt(rota_answer(plan, Effort(work=2000)), plan)(plan)
    return [_replan(adopted), _levers(), _stop()]


def _replan(plan: Plan) -> Figure:
    absent = tuple(person.id for person in plan.people[:: round(1 / ABSENT_FRACTION)])
    began = time.perf_counter()
    answer = replan(plan, Now(day=2, minute=660, absent=absent))
    seconds = time.perf_counter() - began
    return Figure(
        name="replan_200",
        value=seconds,
        unit="s",
        floor=3.0,
        text=f"{len(absent)} of {len(plan.people)} drop out on day 2 at 11:00, {len(answer.changes)} people change",
    )


def _levers() -> Figure:
    shelter = decode(demo("shelter").read_bytes())
    began = time.perf_counter()
    found = levers(shelter)
    seconds = time.perf_counter() - began
    text = f"{len(found.singles)} levers alone, {len(found.combinations)} combinations"
    return Figure(name="levers_60", value=seconds, unit="s", floor=5.0, text=text)


def _stop() -> Figure:
    """Stop a search of the largest plan after a moment; the rota it leaves is legal and says it was cut off."""
    stopped = threading.Event()
    asked: list[float] = []

    def ask() -> None:
        asked.append(time.perf_counter())
        stopped.set()

    timer = threading.Timer(2.0, ask)
    timer.start()
    solution = WalkAndImprove().solve(instance("city500"), Effort(cancelled=stopped.is_set))
    late = time.perf_counter() - asked[0] if asked else 0.0
    timer.cancel()
    assert solution.cut_off or not asked
    return Figure(name="stop_500", value=late, unit="s", floor=0.5, text="from the wish to stop to the rota in hand")
