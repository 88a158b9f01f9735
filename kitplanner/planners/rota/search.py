"""The search's account: what has been tried, how long it may go on, and whether a change made things better."""

from __future__ import annotations

import time
from collections.abc import Callable, Mapping
from contextlib import suppress
from dataclasses import dataclass, field

from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.result import RotaProgress
from kitplanner.planners.rota.value import MWH_PER_WH, Value, value_of

_TELL_EVERY_STEPS = 10


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
    bounds : mapping of str to float
        Proven bound of an aim, where one is known.
    aim : str
        The aim at work.
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
    bounds: Mapping[str, float] = field(default_factory=dict)
    aim: str = "unmet"
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
        if self.steps % _TELL_EVERY_STEPS == 0:
            self.report()

    def keep_if_better(self, mark: int) -> bool:
        """Keep the changes since a mark if they improve the rota, else undo them."""
        value = self.now()
        if value < self.value:
            self.value = value
            self.draft.forget()
            return True
        self.draft.rollback(mark)
        return False

    def report(self) -> None:
        """Tell the caller where the search is: the aim at work, its value and its bound."""
        self.progress(
            RotaProgress(
                seconds=time.monotonic() - self.began,
                steps=self.steps,
                stage=self.aim,
                value=self._value_at(self.aim),
                bound=self.bounds.get(self.aim, 0.0),
            )
        )

    def _value_at(self, aim: str) -> float:
        value = self.value
        by_aim = {
            "unmet": value.unmet_mwh[-1] / MWH_PER_WH,
            "margin": value.margin_mwh / MWH_PER_WH,
            "excess": value.excess_steps * self.step_wh,
            "greatest_load": value.greatest_load,
            "spread": value.spread,
            "unpopular": float(value.unpopular),
            "handovers": float(value.bouts),
        }
        return by_aim.get(aim, 0.0)

    def begin(self, aim: str) -> None:
        """Turn to another aim and say so."""
        self.aim = aim
        self.report()

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
