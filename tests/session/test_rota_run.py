"""Slow work of the rota on a thread: newest wins, progress, an end in time, refusals as sentences."""

from __future__ import annotations

import functools
import threading
import time

import pytest
from msgspec import structs

from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.edits_rota import lock_bout, move_bout
from kitplanner.plan.records import Bout, Device, Person, Plan, Rota, Station, Store, Window
from kitplanner.session import rota_run
from kitplanner.session.rota_run import Errand, RefusedError


@pytest.fixture
def errand(qapp):
    made = Errand()
    yield made
    made.close()


@pytest.fixture
def plan():
    """One crank, two adults, one lamp: solved in a blink."""
    return Plan(
        days=1,
        margin_fraction=0.0,
        people=tuple(
            Person(id=key, name=key.upper(), age=40, cap_min=60, hours=(Window(start="08:00", end="12:00"),))
            for key in ("p", "q")
        ),
        stations=(Station(id="s", name="Crank", output_w=12.0),),
        stores=(Store(id="b", name="Bank", nominal_wh=40.0, start_fraction=0.1),),
        devices=(
            Device(
                id="l",
                name="Lamp",
                use_by="wh_per_day",
                use_wh_per_day=6.0,
                use_windows=(Window(start="18:00", end="21:00"),),
            ),
        ),
    )


def answer_to(qtbot, errand, job):
    with qtbot.waitSignal(errand.answered, timeout=20_000) as caught:
        errand.start(job)
    return caught.args[0]


def adopted(plan, found):
    from kitplanner.planners.rota.answer import adopt

    return adopt(found.answer, found.plan)(plan)


def test_an_answer_comes_in_this_thread(qtbot, errand):
    seen = []
    errand.answered.connect(lambda _answer: seen.append(threading.current_thread()))
    worker = answer_to(qtbot, errand, lambda _ask: threading.current_thread())
    assert worker is not threading.main_thread()
    assert seen == [threading.main_thread()]
    assert not errand.is_busy


def test_only_the_newest_job_answers(qtbot, errand):
    gate, got = threading.Event(), []
    errand.answered.connect(got.append)
    errand.start(lambda _ask: gate.wait(5) and "old")
    errand.start(lambda _ask: "new")
    gate.set()
    qtbot.waitUntil(lambda: bool(got), timeout=5000)
    qtbot.wait(50)
    assert got == ["new"]


def test_an_older_job_is_told_that_nobody_waits(qtbot, errand):
    stopped = threading.Event()

    def patient(ask):
        while not ask.cancelled():
            time.sleep(0.002)
        stopped.set()

    errand.start(patient)
    assert answer_to(qtbot, errand, lambda _ask: 2) == 2
    assert stopped.is_set()


def test_stop_gives_the_window_back_even_when_the_job_does_not_listen(qtbot, errand):
    gate = threading.Event()
    errand.start(lambda _ask: gate.wait(20))
    began = time.monotonic()
    with qtbot.waitSignal(errand.busy_changed, timeout=5000) as caught:
        errand.stop()
    assert caught.args == [False]
    assert (time.monotonic() - began) * 1000 >= rota_run.PATIENCE_MS * 0.5
    assert rota_run.PATIENCE_MS < 500
    gate.set()


def test_what_a_stopped_job_found_still_comes(qtbot, errand):
    def listens(ask):
        while not ask.cancelled():
            time.sleep(0.002)
        return "best so far"

    errand.start(listens)
    with qtbot.waitSignal(errand.answered, timeout=5000) as caught:
        errand.stop()
    assert caught.args == ["best so far"]


def test_a_dropped_job_never_answers(qtbot, errand):
    got = []
    errand.answered.connect(got.append)
    errand.start(lambda _ask: 1)
    errand.drop()
    qtbot.wait(80)
    assert got == []
    assert not errand.is_busy


def test_progress_is_thinned_and_ends_with_the_job(qtbot, errand):
    got = []
    errand.progressed.connect(got.append)

    def talks(ask):
        end = time.monotonic() + 0.35
        count = 0
        while time.monotonic() < end:
            ask.tell(count)
            count += 1
            time.sleep(0.001)
        return count

    told = answer_to(qtbot, errand, talks)
    assert 1 <= len(got) <= 5 < told


def test_a_refusal_is_one_sentence(qtbot, errand):
    def refuses(_ask):
        raise RefusedError("Nothing can be turned; add people.")

    with qtbot.waitSignal(errand.refused, timeout=5000) as caught:
        errand.start(refuses)
    assert caught.args == ["Nothing can be turned; add people."]


def test_a_fault_reaches_the_hook(qtbot, errand, monkeypatch):
    seen = []
    monkeypatch.setattr("sys.excepthook", lambda kind, *_rest: seen.append(kind))
    with qtbot.waitSignal(errand.refused, timeout=5000) as caught:
        errand.start(lambda _ask: 1 // 0)
    assert seen == [ZeroDivisionError]
    assert "fault in the program" in caught.args[0]


def test_nothing_starts_after_the_end(qtbot, errand):
    errand.close()
    errand.start(lambda _ask: 1)
    assert not errand.is_busy


def test_a_destroyed_errand_leaves_no_thread(qtbot, qapp):
    from PySide6.QtCore import QCoreApplication, QEvent

    errand, ended = Errand(), threading.Event()

    def patient(ask):
        while not ask.cancelled():
            time.sleep(0.002)
        ended.set()

    errand.start(patient)
    errand.deleteLater()
    del errand
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    assert ended.wait(3)


def test_find_follow_judge_and_renew(qtbot, errand, plan):
    found = answer_to(qtbot, errand, functools.partial(rota_run.find_rota, plan, 500, 30.0))
    assert found.plan is plan
    assert found.answer.violations == ()
    assert found.answer.unmet_wh == 0.0
    rota = adopted(plan, found)
    followed = answer_to(qtbot, errand, functools.partial(rota_run.follow_rota, rota))
    assert [b.person for b in followed.answer.solution.bouts] == [b.person for b in found.answer.solution.bouts]
    assert followed.charging == rota.rota.charging
    late = move_bout(rota.rota.bouts[0].id, 1, 720)(rota)
    judged = answer_to(qtbot, errand, functools.partial(rota_run.judge_rota, late))
    assert "hours" in {one.rule for one in judged.violations}
    assert answer_to(qtbot, errand, functools.partial(rota_run.judge_rota, plan)).violations == ()


def test_locks_that_contradict_each_other_are_refused(plan):
    both = tuple(
        Bout(id=key, day=1, start="09:00", end="09:20", station="s", person=key, locked=True) for key in ("p", "q")
    )
    crowded = structs.replace(plan, rota=Rota(id="rota", bouts=both))
    with pytest.raises(RefusedError, match="Unlock or change"):
        rota_run.find_rota(crowded, 10, 5.0, rota_run.Ask(threading.Event(), lambda _moment: None))


def test_replan_keeps_the_past_and_a_sound_charging_table(plan):
    ask = rota_run.Ask(threading.Event(), lambda _moment: None)
    rota = adopted(plan, rota_run.find_rota(plan, 500, 30.0, ask))
    first = rota.rota.bouts[0]
    rota = lock_bout(first.id, True)(rota)
    away = next(bout.person for bout in rota.rota.bouts if bout.id != first.id and bout.person != first.person)
    now = Now(day=1, minute=int(minutes_of_day(first.end)), absent=(away,))
    again = rota_run.replan_rota(rota, now, 500, ask)
    assert all(bout.person != away for bout in again.answer.bouts if bout.start >= first.end)
    assert len({spell.id for spell in again.charging}) == len(again.charging)
    assert [one.rule for one in again.violations] == []


def test_replan_without_a_rota_is_refused(plan):
    ask = rota_run.Ask(threading.Event(), lambda _moment: None)
    with pytest.raises(RefusedError, match="No rota is adopted"):
        rota_run.replan_rota(plan, Now(day=1, minute=0), 10, ask)


def test_levers_come_for_a_plan_that_does_not_fit(plan):
    hungry = structs.replace(plan, devices=(structs.replace(plan.devices[0], use_wh_per_day=60.0),))
    levered = rota_run.find_levers(hungry, rota_run.Ask(threading.Event(), lambda _moment: None))
    assert not levered.result.fits
    assert levered.result.singles


def test_the_module_loads_without_the_solver():
    import subprocess
    import sys

    program = "import kitplanner.session.rota_run, sys; print('highspy' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"
