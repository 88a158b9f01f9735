"""Runs the rota's slow work on a thread of its own: newest wins, progress while it runs, an end within half a second.

The thread gets frozen records and a token; never a QObject. The planners load the linear solver, so this module
imports them only when work is asked for.
"""

from __future__ import annotations

import functools
import sys
import threading
import time
from collections.abc import Callable
from concurrent.futures import CancelledError, Future, ThreadPoolExecutor
from dataclasses import dataclass
from typing import TYPE_CHECKING

from msgspec import structs
from PySide6.QtCore import QObject, QTimer, Signal, Slot

from kitplanner.domain.units import clock
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_replan import DAY_MIN, Now
from kitplanner.plan.records import ChargeSpell, Plan
from kitplanner.session.mailbox import Mailbox

if TYPE_CHECKING:
    from kitplanner.planners.levers_records import LeversResult
    from kitplanner.planners.rota.remarks import RotaRemark
    from kitplanner.planners.rota.replan import ReplanAnswer
    from kitplanner.planners.rota.result import RotaAnswer, Violation

# Whoever stops a search gets the window back after this long, whether the thread has ended or not.
PATIENCE_MS = 400
_TELL_EVERY_S = 0.1


class Ask:
    """What a job may ask and tell while it runs: whether it is wanted still, and how far it is."""

    def __init__(self, token: threading.Event, tell: Callable[[object], None]) -> None:
        self._token = token
        self._tell = tell
        self._last = float("-inf")

    def cancelled(self) -> bool:
        """Return True once nobody waits for the answer."""
        return self._token.is_set()

    def tell(self, moment: object) -> None:
        """Tell how far the work is; more often than ten times a second is left out."""
        now = time.monotonic()
        if now - self._last >= _TELL_EVERY_S and not self._token.is_set():
            self._last = now
            self._tell(moment)


Job = Callable[[Ask], object]


class RefusedError(ValueError):
    """Work that cannot be done; the text is one sentence for the user."""


@dataclass(frozen=True)
class Found:
    """A rota that was found, and the plan it was found for."""

    plan: Plan
    answer: RotaAnswer
    work: int
    remarks: tuple[RotaRemark, ...] = ()


@dataclass(frozen=True)
class Replanned:
    """A rota made again from a moment on, with its charging table from then on and what the judge says of it."""

    plan: Plan
    answer: ReplanAnswer
    charging: tuple[ChargeSpell, ...]
    violations: tuple[Violation, ...]


@dataclass(frozen=True)
class Followed:
    """The adopted rota read with the plan as it is now; `charging` is the table that would fit its turns."""

    plan: Plan
    answer: RotaAnswer
    charging: tuple[ChargeSpell, ...]


@dataclass(frozen=True)
class Judged:
    """What the judge says of a plan's rota."""

    plan: Plan
    violations: tuple[Violation, ...]


@dataclass(frozen=True)
class Levered:
    """What would make a plan fit."""

    plan: Plan
    result: LeversResult


def find_rota(plan: Plan, work: int, seconds: float, ask: Ask) -> Found:
    """Return a rota of a plan; refuse locks that contradict each other."""
    from kitplanner.planners.rota.answer import locked_violations, rota_answer
    from kitplanner.planners.rota.remarks import remarks
    from kitplanner.planners.rota.solver import Effort

    broken = locked_violations(plan)
    if broken:
        raise RefusedError(f"The locked turns break a rule among themselves: {broken[0].text} Unlock or change them.")
    effort = Effort(work=work, seconds=seconds, cancelled=ask.cancelled, progress=ask.tell)
    return Found(plan, rota_answer(plan, effort), work, remarks(plan))


def replan_rota(plan: Plan, now: Now, work: int, ask: Ask) -> Replanned:
    """Return the adopted rota made again from a moment on."""
    from kitplanner.planners.rota.check import judge
    from kitplanner.planners.rota.replan import ReplanError, replan, replanned_rota
    from kitplanner.planners.rota.solver import Effort

    try:
        answer = replan(plan, now, Effort(work=work, cancelled=ask.cancelled, progress=ask.tell))
    except ReplanError as error:
        raise RefusedError(str(error)) from error
    rota = replanned_rota(answer)
    after = structs.replace(answer.plan, rota=rota)
    fresh = fitting_charging(after, now, ask.cancelled)
    charging = _continued(plan.rota.charging if plan.rota else (), fresh, now)
    found = judge(after, structs.replace(rota, charging=charging))
    if any(one.person is None and one.station is None for one in found):
        # What was given out by now no longer adds up with the new turns: the table made anew does.
        charging = fresh
        found = judge(after, structs.replace(rota, charging=charging))
    return Replanned(plan, answer, charging, found)


def _continued(past: tuple[ChargeSpell, ...], fresh: tuple[ChargeSpell, ...], now: Now) -> tuple[ChargeSpell, ...]:
    """Return the table as it was until now and as it is made anew from then on."""
    began = (now.day, clock(now.minute))
    return _numbered(
        (
            *(spell for spell in past if (spell.day, spell.start) < began),
            *(spell for spell in fresh if (spell.day, spell.start) >= began),
        )
    )


def _nobody_stops() -> bool:
    return False


def fitting_charging(
    plan: Plan, now: Now | None = None, cancelled: Callable[[], bool] = _nobody_stops
) -> tuple[ChargeSpell, ...]:
    """Return the charging table that fits the turns of the plan's rota, from levels read at a moment on."""
    from kitplanner.planners.rota.answer import rota_bouts, saved_rota
    from kitplanner.planners.rota.charging import StoresRead, charging_table
    from kitplanner.planners.rota.charging_dispatch import ChargingStoppedError
    from kitplanner.planners.rota.result import RotaSolution

    rota = plan.rota
    if rota is None:
        return ()
    bouts = rota_bouts(plan, rota)
    read = None
    if now is not None and now.store_fractions:
        read = StoresRead(minute=(now.day - 1) * DAY_MIN + now.minute, fractions=now.store_fractions)
    try:
        table = charging_table(plan, bouts, rota.slot_min, read=read, cancelled=cancelled)
    except ChargingStoppedError as error:
        raise CancelledError from error
    solution = RotaSolution(
        slot_min=rota.slot_min,
        bouts=(),
        objectives=(),
        made_wh=0.0,
        made_bound_wh=0.0,
        steps=0,
        seconds=0.0,
        cut_off=False,
    )
    return saved_rota(plan, solution, table.charging, edition=rota.edition).charging


def _numbered(spells: tuple[ChargeSpell, ...]) -> tuple[ChargeSpell, ...]:
    return tuple(structs.replace(spell, id=f"c{place}") for place, spell in enumerate(spells, start=1))


def follow_rota(plan: Plan, ask: Ask) -> Followed | None:
    """Return the adopted rota as an answer, never solved again; None without one."""
    from kitplanner.planners.rota.answer import answer_of_adopted

    answer = answer_of_adopted(plan)
    if answer is None or ask.cancelled():
        return None
    return Followed(plan, answer, fitting_charging(plan, None, ask.cancelled))


def judge_rota(plan: Plan, _ask: Ask) -> Judged:
    """Return what the judge says of the plan's rota."""
    from kitplanner.planners.rota.check import judge

    return Judged(plan, judge(plan, plan.rota) if plan.rota is not None else ())


def find_levers(plan: Plan, ask: Ask) -> Levered:
    """Return what would make the plan fit; each combination is tried on a rota too."""
    from kitplanner.planners.levers import levers
    from kitplanner.planners.levers_rota import rota_unmet_wh

    return Levered(plan, levers(plan, functools.partial(rota_unmet_wh, cancelled=ask.cancelled)))


class _Ended:
    """What the thread hands over: which errand, its answer or its fault."""

    def __init__(self, number: int, answer: object, fault: BaseException | None) -> None:
        self.number = number
        self.answer = answer
        self.fault = fault


class _Thread:
    """One worker thread that outlives nobody: closed by its errand's end, whoever ends it."""

    def __init__(self) -> None:
        self.token = threading.Event()
        self._pool: ThreadPoolExecutor | None = None

    def submit(self, job: Job, ask: Ask) -> Future[object]:
        if self._pool is None:
            self._pool = ThreadPoolExecutor(max_workers=1, thread_name_prefix="kitplanner-rota")
        return self._pool.submit(job, ask)

    def close(self) -> None:
        """Tell the work that nobody waits; the thread ends at its next question."""
        self.token.set()
        if self._pool is not None:
            self._pool.shutdown(wait=False, cancel_futures=True)
            self._pool = None


def _close(thread: _Thread, _gone: QObject | None = None) -> None:
    thread.close()


class Errand(QObject):
    """One job at a time on one thread; a new one makes an older one stale.

    Signals
    -------
    answered(answer: object)
        The newest job has its answer.
    progressed(moment: object)
        How far the newest job is, at most ten times a second.
    refused(sentence: str)
        The newest job cannot be done.
    busy_changed(busy: bool)
        Somebody waits, or no more.
    """

    answered = Signal(object)
    progressed = Signal(object)
    refused = Signal(str)
    busy_changed = Signal(bool)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._thread = _Thread()
        self._number = 0
        self._is_busy = False
        self._is_closed = False
        self._patience = QTimer(self)
        self._patience.setSingleShot(True)
        self._patience.setInterval(PATIENCE_MS)
        self._patience.timeout.connect(self._give_up_waiting)
        self._mail = Mailbox(self)
        self._mail.arrived.connect(self._on_arrived)
        # A partial keeps the thread's owner alive until then; a bound method would not.
        self.destroyed.connect(functools.partial(_close, self._thread))

    @property
    def is_busy(self) -> bool:
        """True while somebody waits for an answer."""
        return self._is_busy

    def start(self, job: Job) -> None:
        """Begin a job; an older one is told to stop and its answer is dropped."""
        if self._is_closed:
            return
        self._patience.stop()
        self._thread.token.set()
        self._thread.token = token = threading.Event()
        self._number += 1
        number, post = self._number, self._mail.open()
        future = self._thread.submit(job, Ask(token, lambda moment: post((number, moment))))

        def hand_over(done: Future[object]) -> None:
            # Runs in the worker: it knows the queue, never this object.
            fault = CancelledError() if done.cancelled() else done.exception()
            post(_Ended(number, None if fault is not None else done.result(), fault))

        future.add_done_callback(hand_over)
        self._set_busy(True)

    def stop(self) -> None:
        """End the wait within half a second; what the job has by then still comes as its answer."""
        if self._is_busy:
            self._thread.token.set()
            self._patience.start()

    def drop(self) -> None:
        """End the wait at once; no answer comes any more."""
        self._number += 1
        self._thread.token.set()
        self._give_up_waiting()

    @Slot()
    def close(self) -> None:
        """End all work for good."""
        self._is_closed = True
        self.drop()
        self._thread.close()

    @Slot()
    def _give_up_waiting(self) -> None:
        self._patience.stop()
        self._set_busy(False)

    @Slot(object)
    def _on_arrived(self, value: object) -> None:
        if isinstance(value, _Ended):
            self._mail.done()
            self._on_ended(value)
        elif isinstance(value, tuple):
            self._on_told(*value)

    def _on_told(self, number: int, moment: object) -> None:
        if number == self._number and self._is_busy and not self._thread.token.is_set():
            self.progressed.emit(moment)

    def _on_ended(self, ended: _Ended) -> None:
        if ended.number != self._number or self._is_closed:
            return
        self._give_up_waiting()
        fault = ended.fault
        if fault is None:
            self.answered.emit(ended.answer)
        elif isinstance(fault, ValueError) and _is_sentence(fault):
            self.refused.emit(str(fault))
        elif not isinstance(fault, CancelledError):
            sys.excepthook(type(fault), fault, fault.__traceback__)
            self.refused.emit(self.tr("The work ended because of a fault in the program; the plan is as it was."))

    def _set_busy(self, busy: bool) -> None:
        if busy != self._is_busy:
            self._is_busy = busy
            self.busy_changed.emit(busy)


def _is_sentence(fault: ValueError) -> bool:
    """Return whether a fault is one that speaks to the user: refusals of this module and of edits."""
    return isinstance(fault, (RefusedError, EditError))
