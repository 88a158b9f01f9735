"""Live answers: quick at once, slow on one worker, the newest wins, nothing left behind."""

import sys
import threading
import time

import pytest
from msgspec.structs import replace

from kitplanner.plan.edits import set_value
from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.session.document import PlanDocument
from kitplanner.session.recompute import Recompute


class Bench:
    """Counts what the pipeline is asked for; the slow run waits for its cue."""

    def __init__(self):
        self.quick, self.slow, self.cancelled, self.threads = [], [], [], set()
        self.go = threading.Event()

    def run_quick(self, plan, before):
        self.quick.append(plan)
        return Results(plan=plan, problems=())

    def run_slow(self, plan, before, cancelled):
        self.threads.add(threading.current_thread().name)
        self.slow.append(plan)
        while not self.go.wait(0.002):
            if cancelled():
                self.cancelled.append(plan)
                return before
        return replace(before, effort_plan=plan)


@pytest.fixture
def desk(qapp):
    document, bench = PlanDocument(Plan()), Bench()
    recompute = Recompute(document, run_quick=bench.run_quick, run_slow=bench.run_slow, debounce_ms=30)
    yield document, bench, recompute
    bench.go.set()
    recompute.close()


def set_days(document, days):
    document.apply(set_value(("days",), days), "Change days")


def test_quick_answers_are_there_when_the_edit_returns(desk):
    document, bench, recompute = desk
    seen = []
    recompute.results_changed.connect(seen.append)
    set_days(document, 4)
    assert [results.plan.days for results in seen] == [4]
    assert recompute.is_busy
    assert bench.slow == []


def test_many_edits_start_one_slow_run_off_the_window_thread(desk, qtbot):
    document, bench, recompute = desk
    bench.go.set()
    for days in range(4, 24):
        set_days(document, days)
    qtbot.waitUntil(lambda: not recompute.is_busy, timeout=5000)
    assert [plan.days for plan in bench.slow] == [23]
    assert recompute.results.effort_plan is document.plan
    assert threading.current_thread().name not in bench.threads


def test_a_later_edit_cancels_the_run_and_only_the_newest_arrives(desk, qtbot):
    document, bench, recompute = desk
    seen = []
    set_days(document, 4)
    qtbot.waitUntil(lambda: len(bench.slow) == 1, timeout=5000)
    recompute.results_changed.connect(seen.append)
    set_days(document, 5)
    qtbot.waitUntil(lambda: len(bench.cancelled) == 1, timeout=5000)
    bench.go.set()
    qtbot.waitUntil(lambda: not recompute.is_busy, timeout=5000)
    assert [results.plan.days for results in seen] == [5, 5]
    assert [results.effort_plan is not None for results in seen] == [False, True]


def test_undo_recomputes_too(desk):
    document, bench, _ = desk
    set_days(document, 4)
    document.stack.undo()
    assert [plan.days for plan in bench.quick] == [4, 3]


def test_a_fault_in_a_quick_answer_reaches_the_hook_and_keeps_the_earlier_results(desk, monkeypatch):
    document, _bench, recompute = desk
    set_days(document, 4)
    before, caught = recompute.results, []
    monkeypatch.setattr(sys, "excepthook", lambda _kind, error, _trace: caught.append(str(error)))
    recompute._run_quick = lambda _plan, _results: 1 / 0
    set_days(document, 5)
    assert caught == ["division by zero"]
    assert recompute.results is before
    assert document.plan.days == 5


def test_a_fault_in_a_slow_answer_reaches_the_hook(desk, qtbot, monkeypatch):
    document, _bench, recompute = desk
    caught = []
    monkeypatch.setattr(sys, "excepthook", lambda _kind, error, _trace: caught.append(str(error)))

    def fail(plan, before, cancelled):
        raise ValueError("worn out")

    recompute._run_slow = fail
    set_days(document, 4)
    qtbot.waitUntil(lambda: caught == ["worn out"], timeout=5000)
    assert not recompute.is_busy


def test_closing_in_the_middle_of_a_run_stops_it_and_leaves_no_thread(desk, qtbot):
    document, bench, recompute = desk
    set_days(document, 4)
    qtbot.waitUntil(lambda: len(bench.slow) == 1, timeout=5000)
    recompute.close()
    assert len(bench.cancelled) == 1
    assert not any(thread.name.startswith("kitplanner-answers") for thread in threading.enumerate())
    set_days(document, 5)
    time.sleep(0.05)
    assert len(bench.slow) == 1


def test_the_real_pipeline_answers_a_demo(qapp, qtbot):
    from kitplanner.plan.catalogue import new_plan

    document = PlanDocument(new_plan("camp"))
    recompute = Recompute(document)
    recompute.run_now()
    assert recompute.results.balance.verdict == "tight"
    qtbot.waitUntil(lambda: recompute.results.effort is not None, timeout=20000)
    assert recompute.results.is_effort_current
    recompute.close()
