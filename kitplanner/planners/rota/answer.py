"""A whole rota: solved, its charging table made exactly, judged; then adopted, and read back without being solved."""

from __future__ import annotations

import math
import time
from collections.abc import Callable, Iterable
from importlib import metadata

import numpy as np
from msgspec import structs

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits import Edit
from kitplanner.plan.records import Bout, ChargeSpell, Plan, Rota
from kitplanner.planners.balance_windows import DAY_MIN
from kitplanner.planners.rota.charging import ChargingResult, charging_table
from kitplanner.planners.rota.charging_dispatch import ChargingStoppedError
from kitplanner.planners.rota.check import judge
from kitplanner.planners.rota.problem import build
from kitplanner.planners.rota.result import (
    FloatArray,
    RotaAnswer,
    RotaBout,
    RotaCharge,
    RotaObjective,
    RotaSolution,
    StoreLevels,
    Violation,
)
from kitplanner.planners.rota.solver import Effort, RotaSolver, WalkAndImprove

ROTA_ID = "rota"
SOLVER = "walk-and-improve 1"
_PROVED_WH = 0.0015
# Whoever stops a search waits this long for the charging table, and no more.
GRACE_S = 0.25


def solver_words() -> str:
    """Return the solver and its version, as an adopted rota keeps them."""
    return f"{SOLVER}, highspy {metadata.version('highspy')}"


def rota_answer(plan: Plan, effort: Effort | None = None, *, solver: RotaSolver | None = None) -> RotaAnswer:
    """Return a rota with its charging table, what stays unmet, and the judge's findings.

    Parameters
    ----------
    plan : Plan
        A plan without errors.
    effort : Effort, optional
        Steps and seconds that may be spent; the default work without a ceiling on time.
    solver : RotaSolver, optional
        Another solver.

    Returns
    -------
    RotaAnswer
        Unmet use and margin are those of the exact charging table, not the solver's own estimate.
    """
    allowed = effort or Effort()
    solution = (solver or WalkAndImprove()).solve(plan, allowed)
    try:
        table = charging_table(plan, solution.bouts, solution.slot_min, cancelled=_with_grace(allowed.cancelled))
    except ChargingStoppedError:
        return _without_charging(plan, solution)
    return _answer(plan, solution, table)


def _with_grace(cancelled: Callable[[], bool]) -> Callable[[], bool]:
    """Return a stop question that gives a small plan's table the time to be made."""
    asked: list[float] = []

    def over() -> bool:
        if not cancelled():
            return False
        asked.append(time.monotonic())
        return asked[-1] - asked[0] > GRACE_S

    return over


def _without_charging(plan: Plan, solution: RotaSolution) -> RotaAnswer:
    """Return a rota whose charging table nobody waited for: unmet use and margin are the search's own figures."""
    by_name = {row.name: row.value for row in solution.objectives}
    nothing: FloatArray = np.zeros(0)
    return RotaAnswer(
        solution=structs.replace(solution, cut_off=True),
        charging=(),
        unmet=(),
        unmet_wh=by_name.get("unmet", 0.0),
        unmet_margin_wh=by_name.get("margin", 0.0),
        levels=StoreLevels(slot_min=solution.slot_min, stores_wh={}, devices_wh={}, pooled_wh=nothing, due_wh=nothing),
        violations=judge(plan, saved_rota(plan, solution, (), edition=1)),
        has_charging=False,
    )


def _answer(plan: Plan, solution: RotaSolution, table: ChargingResult) -> RotaAnswer:
    exact_wh = {"unmet": table.unmet_wh, "margin": table.unmet_margin_wh}
    objectives = tuple(_exact(row, exact_wh[row.name]) if row.name in exact_wh else row for row in solution.objectives)
    solution = structs.replace(solution, objectives=objectives)
    rota = saved_rota(plan, solution, table.charging, edition=1)
    return _assembled(solution, table, table.charging, judge(plan, rota))


def _assembled(
    solution: RotaSolution, table: ChargingResult, charging: tuple[RotaCharge, ...], broken: tuple[Violation, ...]
) -> RotaAnswer:
    return RotaAnswer(
        solution=solution,
        charging=charging,
        unmet=table.unmet,
        unmet_wh=table.unmet_wh,
        unmet_margin_wh=table.unmet_margin_wh,
        levels=table.levels,
        violations=broken,
        evening=tuple(
            Violation(rule="evening", text=miss.text, day=miss.day, start_min=miss.start_min) for miss in table.evening
        ),
        wasted_wh=table.wasted_wh,
    )


def _exact(row: RotaObjective, value_wh: float) -> RotaObjective:
    """Return an aim with what the charging table really leaves, against the bound of all stores taken as one."""
    gap = max(0.0, value_wh - row.bound)
    return structs.replace(row, value=value_wh, gap=gap, proved=gap <= _PROVED_WH)


def saved_rota(
    plan: Plan, solution: RotaSolution, charging: Iterable[RotaCharge], *, edition: int, work: int | None = None
) -> Rota:
    """Return bouts and charging table as the record a plan keeps.

    A bout that the plan's present rota has as well keeps its id, so that what is listed as changed is changed.
    """
    known = {_key(bout): bout.id for bout in plan.rota.bouts} if plan.rota else {}
    taken = set(known.values())
    bouts = []
    number = 0
    for row in solution.bouts:
        bout = _bout(row, "")
        bout_id = known.get(_key(bout))
        while bout_id is None:
            number += 1
            bout_id = f"b{number}" if f"b{number}" not in taken else None
        bouts.append(structs.replace(bout, id=bout_id))
    return Rota(
        id=plan.rota.id if plan.rota else ROTA_ID,
        name=plan.rota.name if plan.rota else "",
        edition=edition,
        valid_until_day=plan.days,
        slot_min=solution.slot_min,
        solver=solver_words(),
        work=work,
        bouts=tuple(bouts),
        charging=tuple(_spell(row, f"c{place}") for place, row in enumerate(charging, start=1)),
    )


def _key(bout: Bout) -> tuple[int, str, str, str, int, str]:
    return (bout.day, bout.start, bout.end, bout.station, bout.unit, bout.person)


def _bout(row: RotaBout, bout_id: str) -> Bout:
    return Bout(
        id=bout_id,
        day=row.day,
        start=clock(row.start_min),
        end=clock(row.end_min),
        station=row.station,
        person=row.person,
        unit=row.unit,
        watcher=row.watcher,
        locked=row.locked,
    )


def _spell(row: RotaCharge, spell_id: str) -> ChargeSpell:
    return ChargeSpell(
        id=spell_id,
        day=row.day,
        start=clock(row.start_min),
        end=clock(row.end_min),
        device=row.device,
        count=row.count,
        first_ticket=row.first_ticket,
        energy_wh=row.energy_wh,
    )


def edition_of(plan: Plan, answer: RotaAnswer) -> int:
    """Return the edition an answer would have once adopted: one more, unless the plan has this very rota already."""
    if plan.rota is None:
        return 1
    same = _same(plan.rota, saved_rota(plan, answer.solution, answer.charging, edition=plan.rota.edition))
    return plan.rota.edition if same else plan.rota.edition + 1


def _same(left: Rota, right: Rota) -> bool:
    return left.slot_min == right.slot_min and set(left.bouts) == set(right.bouts) and left.charging == right.charging


def adopt(answer: RotaAnswer, plan: Plan, *, work: int | None = None) -> Edit:
    """Return the edit that makes an answer the plan's rota, as a draft of the next edition.

    Parameters
    ----------
    answer : RotaAnswer
        The answer, found for this plan.
    plan : Plan
        The plan it was found for; its rota gives edition and ids.
    work : int, optional
        Steps that were allowed, kept beside the rota.

    Returns
    -------
    Edit
        An edit that returns the same plan where this very rota is adopted already.
    """
    edition = edition_of(plan, answer)
    rota = saved_rota(plan, answer.solution, answer.charging, edition=edition, work=work)
    unchanged = plan.rota is not None and plan.rota.edition == edition

    def edit(present: Plan) -> Plan:
        return present if unchanged and present.rota is plan.rota else structs.replace(present, rota=rota)

    return edit


def answer_of_adopted(plan: Plan) -> RotaAnswer | None:
    """Return the plan's own rota as an answer, None without one; it is read, never solved again.

    Bouts and charging spells stand as they were saved. What follows from them is worked out with the plan as it is
    now: watts, levels, unmet use and broken rules. Aims and bounds belong to a search and are left out: `objectives` is
    empty and the bound of the made energy is not a number.
    """
    rota = plan.rota
    if rota is None:
        return None
    bouts = rota_bouts(plan, rota)
    solution = RotaSolution(
        slot_min=rota.slot_min,
        bouts=bouts,
        objectives=(),
        made_wh=sum(bout.output_wh for bout in bouts),
        made_bound_wh=math.nan,
        steps=0,
        seconds=0.0,
        cut_off=False,
    )
    charging = tuple(_charge(spell) for spell in rota.charging)
    return _assembled(solution, charging_table(plan, bouts, rota.slot_min), charging, judge(plan, rota))


def _charge(spell: ChargeSpell) -> RotaCharge:
    return RotaCharge(
        day=spell.day,
        start_min=int(minutes_of_day(spell.start)),
        end_min=int(minutes_of_day(spell.end)),
        device=spell.device,
        count=spell.count,
        first_ticket=spell.first_ticket,
        energy_wh=spell.energy_wh,
    )


def rota_bouts(plan: Plan, rota: Rota) -> tuple[RotaBout, ...]:
    """Return the bouts of a saved rota by day, time, station and unit, with the energy they make at S.

    Parameters
    ----------
    plan : Plan
        The plan, for the watts; a person or station it does not know makes nothing.
    rota : Rota
        The rota.

    Returns
    -------
    tuple of RotaBout
        Bouts with energy; what the changeover takes is left out of it.
    """
    problem = build(plan)
    order = {station: place for place, station in enumerate(problem.stations)}
    rows_of = {person: place for place, person in enumerate(problem.people)}
    last: dict[tuple[str, int], tuple[int, str]] = {}
    rows = []
    for bout in sorted(rota.bouts, key=lambda each: (each.day, minutes_of_day(each.start))):
        start, end = int(minutes_of_day(bout.start)), int(minutes_of_day(bout.end))
        begins = (bout.day - 1) * DAY_MIN + start
        before = last.get((bout.station, bout.unit))
        lost = 0
        if before is not None and before[1] != bout.person and bout.station in order:
            lost = max(0, int(problem.changeover_min[order[bout.station]]) - max(0, begins - before[0]))
        last[bout.station, bout.unit] = (begins - start + end, bout.person)
        known = bout.station in order and bout.person in rows_of
        watts = float(problem.output_w[rows_of[bout.person], order[bout.station]]) if known else 0.0
        rows.append(
            RotaBout(
                day=bout.day,
                start_min=start,
                end_min=end,
                station=bout.station,
                unit=bout.unit,
                person=bout.person,
                watcher=bout.watcher,
                output_wh=watts * max(0, end - start - lost) / 60.0,
                locked=bout.locked,
            )
        )
    rows.sort(key=lambda row: (row.day, row.start_min, order.get(row.station, len(order)), row.unit))
    return tuple(rows)


def locked_violations(plan: Plan) -> tuple[Violation, ...]:
    """Return the rules that the locked bouts of the plan's rota break among themselves.

    No rota can keep such locks, so they are told before any is looked for.
    """
    if plan.rota is None:
        return ()
    locked = tuple(bout for bout in plan.rota.bouts if bout.locked)
    if not locked:
        return ()
    alone = structs.replace(plan.rota, bouts=locked, charging=())
    return tuple(found for found in judge(plan, alone) if found.start_min is not None and found.person is not None)
