"""The rota's state between page, plan and worker threads: proposal, adopted rota, what the judge says, work under way.

Answers never change the plan; whatever is to hold goes out as an edit.
"""

from __future__ import annotations

import functools
from collections.abc import Sequence

from msgspec import structs
from PySide6.QtCore import QObject, QTimer, Signal, Slot

from kitplanner.plan import edits_rota
from kitplanner.plan.edits import Edit, EditError
from kitplanner.plan.edits_levers import LeverChange, levers_edit
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Bout, ChargeSpell, Plan
from kitplanner.planners.rota.result import RotaAnswer, Violation
from kitplanner.session import rota_run
from kitplanner.session.rota_run import Ask, Errand, Followed, Found, Judged, Levered, Replanned
from kitplanner.ui.board.board_data import (
    BoardData,
    energies,
    placed_breaks,
    proposed_bouts,
    proposed_charges,
    shown_bouts,
    shown_charges,
)

# What a rota does not read; a change there leaves answers valid.
_UNREAD = frozenset({"rota", "title", "place", "log", "notes", "pack_items", "start"})
_FOLLOW_MS, _GHOST_MS = 150, 40
_ROUNDING_WH = 0.01


def same_problem(one: Plan, other: Plan) -> bool:
    """Return whether two plans ask for the same rota."""
    if one is other:
        return True
    names = (name for name in one.__struct_fields__ if name not in _UNREAD)
    return all(getattr(one, name) == getattr(other, name) for name in names)


def same_rota(one: Plan, other: Plan) -> bool:
    """Return whether two plans hold the same rota for the same problem."""
    return same_problem(one, other) and one.rota == other.rota


def same_charging(one: tuple[ChargeSpell, ...], other: tuple[ChargeSpell, ...]) -> bool:
    """Return whether two charging tables say the same to whoever reads them; rounding is no difference."""
    if len(one) != len(other):
        return False
    plain = (structs.replace(spell, id="", energy_wh=0.0) for spell in one)
    others = (structs.replace(spell, id="", energy_wh=0.0) for spell in other)
    return all(left == right for left, right in zip(plain, others, strict=True)) and all(
        abs(left.energy_wh - right.energy_wh) <= _ROUNDING_WH for left, right in zip(one, other, strict=True)
    )


def _tagged(tag: str, plan: Plan, ask: Ask) -> tuple[str, Judged]:
    return tag, rota_run.judge_rota(plan, ask)


class RotaDesk(QObject):
    """What the rota page shows and asks for.

    Signals
    -------
    changed()
        Something to show is different.
    began(what: str), progressed(moment: RotaProgress), ended()
        Work the user waits for.
    replanned(answer: Replanned), levered(answer: Levered)
        Answers that a dialog shows.
    told(text: str)
        One sentence for the user.
    ghost_judged(sentences: tuple[str, ...])
        What the turn in the hand would break.
    edit_requested(edit: Edit, text: str, merge_key: str)
        A change of the plan.
    """

    changed = Signal()
    began = Signal(str)
    progressed = Signal(object)
    ended = Signal()
    replanned = Signal(object)
    levered = Signal(object)
    told = Signal(str)
    ghost_judged = Signal(object)
    edit_requested = Signal(object, str, str)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.plan = Plan()
        self.has_errors = False
        self.proposal: Found | None = None
        self.shows_proposal = False
        self.now: tuple[int, int] | None = None
        self._kept: tuple[tuple[Bout, ...], Found] | None = None
        self._followed: Followed | None = None
        self._judged: Judged | None = None
        self._tentative: Edit | None = None
        self.run, self.follow, self.judge = Errand(self), Errand(self), Errand(self)
        self._follow_timer, self._ghost_timer = self._timer(_FOLLOW_MS), self._timer(_GHOST_MS)
        self._follow_timer.timeout.connect(self._start_follow)
        self._ghost_timer.timeout.connect(self._start_ghost)
        self.run.answered.connect(self._on_answered)
        self.run.progressed.connect(self.progressed)
        self.run.busy_changed.connect(self._on_busy)
        self.follow.answered.connect(self._on_followed)
        self.judge.answered.connect(self._on_judged)
        for errand in (self.run, self.follow, self.judge):
            errand.refused.connect(self.told)

    def _timer(self, after_ms: int) -> QTimer:
        timer = QTimer(self)
        timer.setSingleShot(True)
        timer.setInterval(after_ms)
        return timer

    def set_plan(self, plan: Plan, *, has_errors: bool) -> None:
        """Work on another state of the plan; what is no longer true is asked anew."""
        if plan is self.plan and has_errors == self.has_errors:
            return
        before, self.plan, self.has_errors = self.plan, plan, has_errors
        self.now = self.now if plan.rota is not None and before.rota is not None else None
        if plan.rota is None:
            self._followed = self._judged = None
        elif not has_errors and not same_rota(before, plan) and self._known() is None:
            self.judge.start(functools.partial(_tagged, "plan", plan))
            self._follow_timer.start()
        self.changed.emit()

    def _known(self) -> RotaAnswer | None:
        """Return the answer that was adopted as it stands, with its aims; None after any change."""
        if self._kept is None or self.plan.rota is None:
            return None
        bouts, found = self._kept
        return found.answer if self.plan.rota.bouts == bouts and same_problem(found.plan, self.plan) else None

    @property
    def is_proposal(self) -> bool:
        """True while a proposal is shown instead of the adopted rota."""
        return self.proposal is not None and (self.shows_proposal or self.plan.rota is None)

    @property
    def is_stale(self) -> bool:
        """True if the proposal was found for a plan that has changed since."""
        return self.proposal is not None and not same_problem(self.proposal.plan, self.plan)

    @property
    def is_followed(self) -> bool:
        """True if the adopted rota's answer belongs to the plan as it is now."""
        return self._known() is not None or (self._followed is not None and same_rota(self._followed.plan, self.plan))

    @property
    def answer(self) -> RotaAnswer | None:
        """The answer shown; of the adopted rota possibly one from before the last change."""
        if self.is_proposal and self.proposal is not None:
            return self.proposal.answer
        if self.plan.rota is None:
            return None
        known = self._known()
        return known if known is not None else self._followed.answer if self._followed is not None else None

    @property
    def violations(self) -> tuple[Violation, ...]:
        """What the judge says of the rota shown."""
        if self.is_proposal and self.proposal is not None:
            return self.proposal.answer.violations
        if self.plan.rota is None:
            return ()
        known = self._known()
        if known is not None:
            return known.violations
        return self._judged.violations if self._judged is not None else ()

    @property
    def is_judged(self) -> bool:
        """True if the judge has seen the rota shown as it is now."""
        known = self.is_proposal or self.plan.rota is None or self._known() is not None
        return known or (self._judged is not None and same_rota(self._judged.plan, self.plan))

    @property
    def charging_is_older(self) -> bool:
        """True if the adopted charging table is not the one that fits the turns now."""
        if self.is_proposal or self._followed is None or self.plan.rota is None:
            return False
        if self._known() is not None or not same_rota(self._followed.plan, self.plan):
            return False
        return not same_charging(self._followed.charging, self.plan.rota.charging)

    def board_data(self) -> BoardData:
        """Return what the board shows."""
        answer = self.answer
        if self.is_proposal and answer is not None:
            bouts = proposed_bouts(answer.solution.bouts)
            charges = proposed_charges(answer.charging)
            grid = answer.solution.slot_min
        elif self.plan.rota is not None:
            wh = energies(answer.solution.bouts) if answer is not None else {}
            bouts = shown_bouts(self.plan.rota.bouts, wh)
            charges = shown_charges(self.plan.rota.charging)
            grid = self.plan.rota.slot_min
        else:
            bouts, charges, grid = (), (), self.plan.grid_min or 5
        turns, rows, spells = placed_breaks(bouts, self.violations)
        return BoardData(
            plan=self.plan,
            bouts=bouts,
            charges=charges,
            answer=answer,
            breaks=turns,
            row_breaks=rows,
            charge_breaks=spells,
            grid_min=grid,
            editable=not self.is_proposal and not self.has_errors,
            now=self.now,
            is_older=answer is not None and not self.is_proposal and not self.is_followed,
        )

    def find(self, work: int) -> None:
        """Look for a rota; it is shown as a proposal."""
        if self._may_work():
            self.run.start(functools.partial(rota_run.find_rota, self.plan, work, float("inf")))
            self.began.emit(self.tr("Looking for a rota:"))

    def replan(self, now: Now, work: int) -> None:
        """Make the adopted rota again from a moment on."""
        if self._may_work():
            self.run.start(functools.partial(rota_run.replan_rota, self.plan, now, work))
            self.began.emit(self.tr("Re-planning:"))

    def find_levers(self) -> None:
        """Look for what would make the plan fit."""
        if self._may_work():
            self.run.start(functools.partial(rota_run.find_levers, self.plan))
            self.began.emit(self.tr("Trying what would make it fit:"))

    def _may_work(self) -> bool:
        if self.has_errors:
            self.told.emit(self.tr("The plan has problems that stop the calculation; put them right first."))
        return not self.has_errors

    def adopt(self) -> None:
        """Make the proposal the plan's rota: one step to undo."""
        from kitplanner.planners.rota.answer import adopt  # the solver's records; loaded by the search already

        found = self.proposal
        if found is None:
            self.told.emit(self.tr("There is no proposal; plan the rota first."))
            return
        if self.is_stale:
            self.told.emit(self.tr("The plan has changed since this proposal; plan the rota anew."))
            return
        edit = adopt(found.answer, self.plan, work=found.work)
        adopted = edit(self.plan)
        if adopted.rota is not None:
            self._kept = (adopted.rota.bouts, found)
        self.proposal, self.shows_proposal = None, False
        self.edit_requested.emit(edit, self.tr("Adopt the rota"), "")
        self.changed.emit()

    def post(self, valid_until_day: int) -> None:
        """Post the adopted rota."""
        text = self.tr("Post the rota, valid to day {day}").format(day=valid_until_day)
        self.edit_requested.emit(edits_rota.post_rota(valid_until_day), text, "")

    def take_replan(self, replanned: Replanned) -> None:
        """Let a re-planned rota hold: one step to undo."""
        from kitplanner.planners.rota.replan import adopt_replan  # as above

        if replanned.plan is not self.plan:
            self.told.emit(self.tr("The plan has changed since; re-plan once more."))
            return
        now = replanned.answer.now
        self.now = (now.day, now.minute)
        self.shows_proposal = False
        text = self.tr("Re-plan from day {day}, {hour:02d}:{minute:02d}")
        text = text.format(day=now.day, hour=now.minute // 60, minute=now.minute % 60)
        self.edit_requested.emit(adopt_replan(replanned.answer, replanned.charging), text, "")

    def renew_charging(self) -> None:
        """Put the charging table that fits the turns beside them."""
        if self.charging_is_older and self._followed is not None:
            edit = edits_rota.put_charging(self._followed.charging)
            self.edit_requested.emit(edit, self.tr("Renew the charging table"), "")

    def pull_levers(self, changes: Sequence[LeverChange], text: str) -> None:
        """Change the plan by levers: one step to undo."""
        self.edit_requested.emit(levers_edit(changes), text, "")

    def show_proposal(self, shown: bool) -> None:
        """Show the proposal, or the adopted rota."""
        if shown != self.shows_proposal:
            self.shows_proposal = shown
            self.changed.emit()

    def try_edit(self, edit: Edit | None) -> None:
        """Judge what the plan would become; None ends the trial."""
        self._tentative = edit
        if edit is None:
            self._ghost_timer.stop()
        elif not self._ghost_timer.isActive():
            self._ghost_timer.start()

    def close(self) -> None:
        """End all work for good."""
        for errand in (self.run, self.follow, self.judge):
            errand.close()

    @Slot()
    def _start_ghost(self) -> None:
        if self._tentative is None:
            return
        try:
            plan = self._tentative(self.plan)
        except EditError as error:
            self.ghost_judged.emit((str(error),))
            return
        self.judge.start(functools.partial(_tagged, "ghost", plan))

    @Slot()
    def _start_follow(self) -> None:
        if not self.has_errors and self.plan.rota is not None and self._known() is None:
            self.follow.start(functools.partial(rota_run.follow_rota, self.plan))

    @Slot(object)
    def _on_answered(self, answer: object) -> None:
        match answer:
            case Found():
                if same_problem(answer.plan, self.plan):
                    self.proposal, self.shows_proposal = answer, True
                    self.changed.emit()
                else:
                    self.told.emit(self.tr("The plan changed while the rota was looked for; plan it anew."))
            case Replanned():
                self.replanned.emit(answer)
            case Levered():
                self.levered.emit(answer)

    @Slot(bool)
    def _on_busy(self, busy: bool) -> None:
        if not busy:
            self.ended.emit()

    @Slot(object)
    def _on_followed(self, answer: object) -> None:
        if isinstance(answer, Followed) and same_rota(answer.plan, self.plan):
            self._followed = answer
            self._judged = Judged(answer.plan, answer.answer.violations)
            self.changed.emit()

    @Slot(object)
    def _on_judged(self, answer: tuple[str, Judged]) -> None:
        tag, judged = answer
        if tag == "ghost":
            if self._tentative is not None:
                now = {found.text for found in self.violations}
                self.ghost_judged.emit(tuple(one.text for one in judged.violations if one.text not in now))
        elif same_rota(judged.plan, self.plan):
            self._judged = judged
            self.changed.emit()
