"""The rota made again from a moment on: what has been stays, what is posted stays where it can, the rest is filled up.

Bouts that began before now are kept as adopted. Of the others each keeps its time, place and people if the rules still
allow it; else another watcher, another unit or a shorter turn; else it falls away. What is then missing of use and
margin is made up by the least loaded people who can, first in the very slots that fell away. Nobody else's turn moves.
"""

from __future__ import annotations

import itertools
import math
import time

from msgspec import Struct, structs

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits import Edit, chain
from kitplanner.plan.edits_replan import Now, events_edit, grid_of, put_rota
from kitplanner.plan.records import Bout, ChargeSpell, Plan, Rota
from kitplanner.planners.rota.check import judge
from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.replan_fill import Filler
from kitplanner.planners.rota.replan_now import problem_from, shortfall_wh, spared_heat
from kitplanner.planners.rota.replan_posted import Posted, place_posted
from kitplanner.planners.rota.replan_records import PersonChange, bout_record, changes_of, turn_of
from kitplanner.planners.rota.replan_remake import remade
from kitplanner.planners.rota.result import ObjectiveName, RotaObjective, RotaSolution
from kitplanner.planners.rota.search import Search
from kitplanner.planners.rota.solver import Effort, bouts_of
from kitplanner.planners.rota.value import excess_step_wh, missed_wh

_PROVED_WH = 0.0015
# People wait at the board: enough for two stands out among 200 people, at about half a millisecond each.
DEFAULT_WORK = 10_000
_NO_ROTA = "No rota is adopted that could be changed; find one and adopt it first."


class ReplanError(ValueError):
    """A rota that cannot be made again: one sentence with reason and remedy."""


class ReplanAnswer(Struct, frozen=True, kw_only=True):
    """A rota from now on.

    `plan` holds what has happened and still the old rota; `bouts` are those of the new one, unchanged ones as the very
    records adopted; `changes` lists who has other turns than before; `lost_locks` are locked bouts that what has
    happened does not allow; `remade` tells that holding on to posted turns would have left more use unserved, so that
    all but begun and locked turns were found afresh. Unmet use and margin are the solver's, at O, before the charging
    table is made.
    """

    plan: Plan
    now: Now
    bouts: tuple[Bout, ...]
    changes: tuple[PersonChange, ...]
    lost_locks: tuple[Bout, ...]
    unmet_wh: float
    unmet_margin_wh: float
    solution: RotaSolution
    remade: bool = False


def replan(plan: Plan, now: Now, effort: Effort | None = None) -> ReplanAnswer:
    """Return the adopted rota made again from a moment on, with the least change.

    Parameters
    ----------
    plan : Plan
        A plan without errors and with an adopted rota; new people and devices are in it already.
    now : Now
        The moment and what has happened.
    effort : Effort, optional
        Steps and seconds that may be spent; `DEFAULT_WORK` steps without it.

    Returns
    -------
    ReplanAnswer
        The new rota and who it changes.

    Raises
    ------
    ReplanError
        No rota is adopted, or locked bouts contradict each other.
    EditError
        The moment or a record named is not in the plan.
    """
    began = time.monotonic()
    allowed = effort or Effort(work=DEFAULT_WORK)
    if plan.rota is None:
        raise ReplanError(_NO_ROTA)
    _refuse_contradictory_locks(plan, plan.rota, now)
    changed = events_edit(now)(plan)
    slot_min = grid_of(plan.rota)
    problem = problem_from(changed, now, slot_min, shortfall_wh(plan, plan.rota, now))
    posted = place_posted(problem, plan.rota, now)
    posted.draft.problem = spared_heat(posted.draft.problem, now)
    search = Search(
        posted.draft,
        excess_step_wh(posted.draft.problem),
        allowed.work,
        max(0.0, allowed.seconds - (time.monotonic() - began)),
        allowed.cancelled,
        allowed.progress,
        lambda draft: len(posted.lost) + len(draft.bouts) - len(posted.kept),
    )
    Filler(search, posted).run()
    afresh = False
    if search.value.unmet_mwh[-1] > 0 and not search.cut_off:
        again, other = remade(problem, plan.rota, now, search)
        if other.value.unmet_mwh < search.value.unmet_mwh:
            posted, search, afresh = again, other, True
    answer = _answer(changed, plan.rota, now, (posted, search), time.monotonic() - began)
    return structs.replace(answer, remade=True) if afresh else answer


def _refuse_contradictory_locks(plan: Plan, rota: Rota, now: Now) -> None:
    """Raise where locked bouts still to come break a rule among themselves, whatever has happened."""
    locked = tuple(bout for bout in rota.bouts if bout.locked and not _begun(bout, now))
    if not locked:
        return
    for found in judge(plan, structs.replace(rota, bouts=locked, charging=())):
        if found.start_min is not None and found.person is not None:
            raise ReplanError(f"Locked turns contradict each other: {found.text.rstrip('.')}; unlock one of them.")


def _begun(bout: Bout, now: Now) -> bool:
    return (bout.day, int(minutes_of_day(bout.start))) < (now.day, now.minute)


def _answer(plan: Plan, rota: Rota, now: Now, found: tuple[Posted, Search], seconds: float) -> ReplanAnswer:
    posted, search = found
    bouts = _records(rota, posted)
    unmet, margin = missed_wh(posted.draft.problem, posted.draft.made)
    return ReplanAnswer(
        plan=plan,
        now=now,
        bouts=bouts,
        changes=changes_of(rota.bouts, bouts),
        lost_locks=posted.lost_locks,
        unmet_wh=float(unmet[-1]),
        unmet_margin_wh=margin,
        solution=_solution(posted, search, rota, bouts, seconds),
    )


def _records(rota: Rota, posted: Posted) -> tuple[Bout, ...]:
    """Return kept bouts as their records and new ones with ids the rota never had, by day and time."""
    draft = posted.draft
    adopted = {turn_of(bout): bout for bout in rota.bouts}
    free = (f"b{number}" for number in itertools.count(1) if f"b{number}" not in {bout.id for bout in rota.bouts})
    records = [*posted.outside, *posted.kept.values()]
    for key in sorted((key for key in draft.bouts if key not in posted.kept), key=lambda key: _place_of(draft, key)):
        found = bout_record(draft, key, "")
        same = adopted.get(turn_of(found))
        # A turn found again is the one that is posted, whoever watches now.
        records.append(
            structs.replace(found, id=next(free)) if same is None else structs.replace(same, watcher=found.watcher)
        )
    return tuple(sorted(records, key=lambda bout: (bout.day, bout.start, bout.station, bout.unit, bout.id)))


def _place_of(draft: Draft, key: int) -> tuple[int, int, int]:
    bout = draft.bouts[key]
    return (bout.start, bout.station, bout.unit)


def _changed_bouts(rota: Rota, bouts: tuple[Bout, ...]) -> int:
    """Return how many bouts differ: gone, new, or with another watcher."""
    return len(set(rota.bouts) ^ set(bouts))


def _solution(posted: Posted, search: Search, rota: Rota, bouts: tuple[Bout, ...], seconds: float) -> RotaSolution:
    """Return the draft as the solver's record; bounds are the plain ones: nothing missed, nothing changed."""
    unmet, margin = missed_wh(posted.draft.problem, posted.draft.made)
    locked = {(bout.person, bout.day, bout.start) for bout in bouts if bout.locked}
    rows = tuple(
        structs.replace(row, locked=(row.person, row.day, clock(row.start_min)) in locked)
        for row in bouts_of(posted.draft)
    )
    return RotaSolution(
        slot_min=posted.draft.problem.slot_min,
        bouts=rows,
        objectives=(
            _aim("unmet", float(unmet[-1]), 0.0, "Wh", "use that cannot be served"),
            _aim("margin", margin, 0.0, "Wh", "part of the margin that is missing"),
            _aim("change", float(_changed_bouts(rota, bouts)), 0.0, "bouts", "bouts gone, new or with another watcher"),
        ),
        made_wh=sum(row.output_wh for row in rows),
        made_bound_wh=math.nan,
        steps=search.steps,
        seconds=seconds,
        cut_off=search.cut_off,
    )


def _aim(name: ObjectiveName, value: float, bound: float, unit: str, words: str) -> RotaObjective:
    gap = max(0.0, value - bound)
    return RotaObjective(
        name=name,
        value=value,
        unit=unit,
        bound=bound,
        gap=gap,
        proved=gap <= _PROVED_WH,
        relaxed=True,
        words=words,
    )


def replanned_rota(answer: ReplanAnswer, charging: tuple[ChargeSpell, ...] = ()) -> Rota:
    """Return the rota to post: the next edition with the new bouts and a charging table."""
    rota = answer.plan.rota
    if rota is None:
        raise ReplanError(_NO_ROTA)
    return structs.replace(rota, edition=rota.edition + 1, bouts=answer.bouts, charging=charging)


def adopt_replan(answer: ReplanAnswer, charging: tuple[ChargeSpell, ...] = ()) -> Edit:
    """Return the one edit that enters what has happened and posts the new rota."""
    return chain(events_edit(answer.now), put_rota(replanned_rota(answer, charging)))
