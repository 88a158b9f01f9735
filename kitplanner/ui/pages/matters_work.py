"""Works out what matters most beside the window: one question at a time, the newest wins."""

from __future__ import annotations

import sys
from concurrent.futures import Future, ThreadPoolExecutor
from contextlib import suppress

from msgspec import Struct
from PySide6.QtCore import QObject, Signal, Slot

from kitplanner.plan.records import Plan
from kitplanner.planners.effort_rows import EffortError
from kitplanner.planners.results import EffortRow
from kitplanner.planners.sensitivity import coverage_sensitivity, joined_people
from kitplanner.planners.sensitivity_minutes import minutes_sensitivity
from kitplanner.planners.sensitivity_records import Sensitivity
from kitplanner.session.mailbox import Mailbox


class Wanted(Struct, frozen=True):
    """A plan, and the charge whose minutes are asked for, if any."""

    plan: Plan
    row: EffortRow | None = None
    row_plan: Plan | None = None


class Answered(Struct, frozen=True):
    """What moves the coverage and what moves the minutes; None where there is no such answer."""

    wanted: Wanted
    coverage: Sensitivity | None
    minutes: Sensitivity | None


def answer(wanted: Wanted) -> Answered:
    """Return both answers; nobody is ranked: single persons are one row."""
    coverage = joined_people(coverage_sensitivity(wanted.plan))
    minutes = None
    if wanted.row is not None and wanted.row_plan is not None:
        with suppress(EffortError):  # the row went with an edit; the next answers bring another
            minutes = minutes_sensitivity(wanted.row_plan, wanted.row)
    return Answered(wanted, coverage if coverage.rows else None, minutes)


class MattersWork(QObject):
    """One worker thread that lives as long as its question.

    Signals
    -------
    answered(found: Answered)
        The newest question has its answer.
    """

    answered = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._running = False
        self._waiting: Wanted | None = None
        self._mail = Mailbox(self)
        self._mail.arrived.connect(self._on_finished)

    @property
    def is_busy(self) -> bool:
        """True while a question is open."""
        return self._running

    def ask(self, wanted: Wanted) -> None:
        """Ask; a question that still waits is forgotten."""
        self._waiting = wanted
        if not self._running:
            self._start()

    def _start(self) -> None:
        wanted, self._waiting = self._waiting, None
        if wanted is None:
            return
        self._running = True
        post = self._mail.open()
        executor = ThreadPoolExecutor(max_workers=1, thread_name_prefix="kitplanner-matters")
        executor.submit(answer, wanted).add_done_callback(post)
        executor.shutdown(wait=False)

    @Slot(object)
    def _on_finished(self, done: Future[Answered]) -> None:
        self._mail.done()
        self._running = False
        error = done.exception()
        if error is not None:
            sys.excepthook(type(error), error, error.__traceback__)
        elif self._waiting is None:
            self.answered.emit(done.result())
        self._start()
