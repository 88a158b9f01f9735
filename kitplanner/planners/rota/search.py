"""The search's account: what has been tried, how long it may go on, and whether a change made things better."""

from __future__ import annotations

import time
from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass, field

from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.result import RotaProgress
from kitplanner.planners.rota.value import Value, value_of


class SearchEndedError(Exception):
    """Work, time or patience is used up; the draft stands as it is."""


@dataclass(slots=True)
class Search:
    """One search on one draft: every trial costs a step, and only a better rota stays.

    Attributes
    ----------
    draft : Draft
        The rota at work.
    step_wh : float
        Step in which energy beyond the need is compared [Wh at O].
    work : int
        Steps that may be spent.
    seconds : float
        Ceiling on time [s].
    """

    draft: Draft
    step_wh: float
    work: int
    seconds: float = float("inf")
    cancelled: Callable[[], bool] = lambda: False
    progress: Callable[[RotaProgress], None] = lambda _: None
    changed: Callable[[Draft], int] = lambda _: 0
    steps: int = 0
    cut_off: bool = False
    began: float = field(default_factory=time.monotonic)
    value: Value = field(init=False)

    def __post_init__(self) -> None:
        """Value the rota the search starts from."""
        self.value = self.now()

    def now(self) -> Value:
        """Value the draft as it stands."""
        return value_of(self.draft, self.step_wh, self.changed(self.draft))

    def spend(self) -> None:
        """Count one step.

        Raises
        ------
        SearchEndedError
            The work, the time or the caller's patience is used up.
        """
        if self.steps >= self.work:
            raise SearchEndedError
        if self.cancelled() or time.monotonic() - self.began > self.seconds:
            self.cut_off = True
            raise SearchEndedError
        self.steps += 1

    def keep_if_better(self, mark: int) -> bool:
        """Keep the changes since a mark if they improve the rota, else undo them."""
        value = self.now()
        if value < self.value:
            self.value = value
            self.draft.forget()
            return True
        self.draft.rollback(mark)
        return False

    def report(self, stage: str, value: float, bound: float) -> None:
        """Tell the caller where the search is."""
        seconds = time.monotonic() - self.began
        self.progress(RotaProgress(seconds=seconds, steps=self.steps, stage=stage, value=value, bound=bound))

    def attempt(self, change: Callable[..., bool], *args: int) -> bool:
        """Try one change: `change(*args)` returns False where it could not be made."""
        self.spend()
        mark = self.draft.mark()
        if not change(*args):
            self.draft.rollback(mark)
            return False
        return self.keep_if_better(mark)

    def run(self, stage: Callable[[], None]) -> None:
        """Run a stage to its end or to the end of the search."""
        with suppress(SearchEndedError):
            stage()
