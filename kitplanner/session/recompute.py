"""Answers that follow the plan: quick ones at once, slow ones on one worker, newest wins."""

from __future__ import annotations

import sys
import threading
from collections.abc import Callable
from concurrent.futures import CancelledError, Future, ThreadPoolExecutor

from PySide6.QtCore import QObject, QTimer, Signal, Slot

from kitplanner.plan.records import Plan
from kitplanner.planners import pipeline
from kitplanner.planners.pipeline import Results
from kitplanner.session.document import PlanDocument
from kitplanner.session.mailbox import Mailbox

DEBOUNCE_MS = 100

QuickRun = Callable[[Plan, Results | None], Results]
SlowRun = Callable[[Plan, Results | None, Callable[[], bool]], Results]


class _Finished:
    """What the worker hands over: the generation it worked for, and its results or its fault."""

    def __init__(self, generation: int, results: Results | None, fault: BaseException | None) -> None:
        self.generation = generation
        self.results = results
        self.fault = fault


class Recompute(QObject):
    """Runs the pipeline after every change of the plan.

    The worker gets the frozen plan, the earlier results and a question "cancelled?"; never a QObject.

    Signals
    -------
    results_changed(results: Results)
        Frozen results of the newest plan; first the quick answers, later the same with the slow ones.
    busy_changed(busy: bool)
        Slow answers are being computed, or no more.
    """

    results_changed = Signal(object)
    busy_changed = Signal(bool)

    def __init__(
        self,
        document: PlanDocument,
        *,
        run_quick: QuickRun = pipeline.run_quick,
        run_slow: SlowRun = pipeline.run_slow,
        debounce_ms: int = DEBOUNCE_MS,
        parent: QObject | None = None,
    ) -> None:
        super().__init__(parent)
        self._run_quick = run_quick
        self._run_slow = run_slow
        self._plan = document.plan
        self._results: Results | None = None
        self._generation = 0
        self._token = threading.Event()
        self._executor: ThreadPoolExecutor | None = None
        self._is_busy = False
        self._is_closed = False
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(debounce_ms)
        self._timer.timeout.connect(self._start_slow)
        self._mail = Mailbox(self)
        self._mail.arrived.connect(self._on_finished)
        document.plan_changed.connect(self._on_plan_changed)

    @property
    def results(self) -> Results | None:
        """Newest results, None before the first run."""
        return self._results

    @property
    def generation(self) -> int:
        """Number of the newest change."""
        return self._generation

    @property
    def is_busy(self) -> bool:
        """True while slow answers are awaited."""
        return self._is_busy

    def run_now(self) -> None:
        """Compute the quick answers for the current plan, and start waiting for the slow ones."""
        if self._is_closed:
            return
        self._generation += 1
        self._token.set()
        try:
            self._results = self._run_quick(self._plan, self._results)
        except Exception as error:  # noqa: BLE001 - reported by the hook, never lost
            sys.excepthook(type(error), error, error.__traceback__)
            self._set_busy(False)
            return
        self.results_changed.emit(self._results)
        self._set_busy(True)
        self._timer.start()

    @Slot()
    def close(self) -> None:
        """Stop all work and wait for the worker; call it before the program ends."""
        self._is_closed = True
        self._timer.stop()
        self._token.set()
        if self._executor is not None:
            self._executor.shutdown(wait=True, cancel_futures=True)
            self._executor = None
        self._set_busy(False)

    @Slot(object, object)
    def _on_plan_changed(self, before: Plan, after: Plan) -> None:
        self._plan = after
        self.run_now()

    @Slot()
    def _start_slow(self) -> None:
        if self._is_closed:
            return
        if self._executor is None:
            self._executor = ThreadPoolExecutor(max_workers=1, thread_name_prefix="kitplanner-answers")
        self._token.set()
        self._token = token = threading.Event()
        generation = self._generation
        future = self._executor.submit(self._run_slow, self._plan, self._results, token.is_set)
        post = self._mail.open()

        def hand_over(done: Future[Results]) -> None:
            # Runs in the worker: it knows the queue, never this object.
            fault = CancelledError() if done.cancelled() else done.exception()
            post(_Finished(generation, None if fault is not None else done.result(), fault))

        future.add_done_callback(hand_over)

    @Slot(object)
    def _on_finished(self, finished: _Finished) -> None:
        self._mail.done()
        if finished.generation != self._generation or self._is_closed:
            return
        self._set_busy(False)
        if finished.fault is not None:
            if not isinstance(finished.fault, CancelledError):
                sys.excepthook(type(finished.fault), finished.fault, finished.fault.__traceback__)
            return
        self._results = finished.results
        self.results_changed.emit(self._results)

    def _set_busy(self, busy: bool) -> None:
        if busy != self._is_busy:
            self._is_busy = busy
            self.busy_changed.emit(busy)
