"""Effort: minutes of turning per charge for every device, station and person, with a range and a reason.

The device's acceptance is integrated over its state of charge; a station by parts is solved with the device's
own sink. Minutes are turning time without rests. Levels: M at the crank or pedal, S at the station's socket.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.plan.records import Plan, Store
from kitplanner.planners.effort_chain import chain_sources
from kitplanner.planners.effort_curve import curve_of
from kitplanner.planners.effort_rows import Case, Chosen, EffortError, cases
from kitplanner.planners.effort_source import find_sources
from kitplanner.planners.effort_spread import draws, ordered_range
from kitplanner.planners.effort_timing import Timed, one_charge_timed, timed_charges
from kitplanner.planners.effort_work import human_wh
from kitplanner.planners.results import ChargeCurve, EffortLimit, EffortResult, EffortRow
from kitplanner.planners.supply import fed_stores

__all__ = ["EffortError", "charge_curve", "effort", "one_charge", "one_charge_curve"]


def effort(
    plan: Plan,
    *,
    station: str | None = None,
    device: str | None = None,
    person: str | None = None,
    cancelled: Callable[[], bool] | None = None,
) -> EffortResult:
    """Return minutes of turning for every charge that makes sense in a plan.

    Parameters
    ----------
    plan : Plan
        A plan without errors
    station, device, person : str, optional
        Ids to answer for; None: all
    cancelled : callable, optional
        Asked between stations; True ends the work

    Returns
    -------
    EffortResult
        Rows in the plan's order: device, station, person, route, charge

    Raises
    ------
    EffortError
        When an id is not in the plan
    CancelledError
        When `cancelled` says so
    """
    rows = cases(plan, Chosen(station=station, device=device, person=person))
    if not rows:
        return EffortResult(rows=())
    sample = draws()
    sources = find_sources(plan, rows, sample, chain_sources, cancelled)
    timed, places = timed_charges(plan, rows, sources, sample)
    answers = _answers(timed)
    return EffortResult(
        rows=tuple(_row(plan, case, timed, place, answers) for case, place in zip(rows, places, strict=True))
    )


@dataclass(frozen=True, slots=True)
class _Answer:
    """What a distinct charge says in every row it stands for; None where it cannot be made."""

    p10: float | None
    p50: float | None
    p90: float | None
    station_w: float | None
    human_w: float | None
    chain_fraction: float | None
    limit: EffortLimit


def _answers(timed: Timed) -> list[_Answer]:
    low, high = ordered_range(timed.sample_min, timed.central_min)
    return [_answer(timed, place, float(low[place]), float(high[place])) for place in range(len(timed.fills))]


def _answer(timed: Timed, place: int, low: float, high: float) -> _Answer:
    fill, source = timed.fills[place], timed.sources[place]
    minutes = float(timed.central_min[place])
    limit = _limit(timed, place)
    if limit in ("too_little_current", "connector") or not math.isfinite(minutes):
        return _Answer(None, None, None, source.output_w, source.human_w, None, limit)
    stored_wh = float(timed.charges.stored_wh[place, 0])
    way = fill.device.eta * (1.0 if fill.store_fraction is None else fill.store_fraction)
    p90 = high if math.isfinite(high) else None
    if source.work is None:
        return _Answer(low, minutes, p90, source.output_w, source.human_w, way, limit)
    hours = minutes / MINUTES_PER_HOUR
    plug_wh = stored_wh / way
    spent_wh = source.human_w * hours if fill.store_fraction is not None else human_wh(fill, source)
    return _Answer(low, minutes, p90, plug_wh / hours, spent_wh / hours, stored_wh / spent_wh, limit)


def _limit(timed: Timed, place: int) -> EffortLimit:
    """Return what binds for the greater part of the time, or why there is no charge."""
    fill, source = timed.fills[place], timed.sources[place]
    if fill.rate_per_h <= 0.0:
        return "acceptance"
    least_w = 0.0 if fill.store_fraction is not None else fill.device.input_least_a * source.volts_v
    if source.output_w <= 0.0 or source.output_w < least_w * (1.0 - 1e-9):
        return "too_little_current"
    return source.limit if timed.bound_fraction[place] >= 0.5 else "acceptance"


def _row(plan: Plan, case: Case, timed: Timed, place: int, answers: Sequence[_Answer]) -> EffortRow:
    answer = answers[place]
    fits = connectors_fit(case, fed_stores(plan, case.station) if case.route == "store" else ())
    known = answer if fits else _Answer(None, None, None, answer.station_w, answer.human_w, None, "connector")
    return EffortRow(
        device=case.device.id,
        station=case.station.id,
        person=case.person.id,
        route=case.route,
        charge=case.charge,
        minutes_p10=known.p10,
        minutes_p50=known.p50,
        minutes_p90=known.p90,
        station_output_w=known.station_w,
        person_power_w=known.human_w,
        chain_fraction=known.chain_fraction,
        chain_from=timed.sources[place].chain_from,
        limit=known.limit,
    )


def connectors_fit(case: Case, stores: Sequence[Store]) -> bool:
    """Return False where both ends name a connector and the names differ; an empty one fits everything."""
    plug = _plain(case.device.connector)
    sockets = (
        [_plain(store.connector) for store in stores] if case.route == "store" else [_plain(case.station.connector)]
    )
    return not plug or any(not socket or socket == plug for socket in sockets)


def _plain(connector: str) -> str:
    return " ".join(connector.casefold().split())


def one_charge(wh: float, station_w: float) -> EffortResult:
    """Return the minutes of one full charge of a default phone, without a plan.

    Parameters
    ----------
    wh : float
        Energy of the phone's battery [Wh]
    station_w : float
        Watts at the station's socket [W]

    Returns
    -------
    EffortResult
        One row with empty ids

    Raises
    ------
    EffortError
        When a value is not a number above 0

    Examples
    --------
    >>> round(one_charge(15.4, 6.0).rows[0].minutes_p50, 1)
    199.9
    """
    case, timed = one_charge_timed(wh, station_w, draws())
    return EffortResult(rows=(_row(Plan(), case, timed, 0, _answers(timed)),))


def charge_curve(plan: Plan, row: EffortRow) -> ChargeCurve:
    """Return the charge of one effort row over its minutes; empty arrays where the row has none.

    A day's use above 80 % of the battery is several charges: the curve shows one of them.

    Parameters
    ----------
    plan : Plan
        The plan the row belongs to
    row : EffortRow
        A row of `effort`

    Returns
    -------
    ChargeCurve
        State of charge from the start to the end of the central run

    Raises
    ------
    EffortError
        When the plan has no such row any more
    """
    chosen = Chosen(station=row.station, device=row.device, person=row.person)
    same = [case for case in cases(plan, chosen) if (case.route, case.charge) == (row.route, row.charge)]
    if not same:
        raise EffortError(f"The plan has no charge '{row.charge}' of '{row.device}' at '{row.station}' any more.")
    sample = draws()
    sources = find_sources(plan, same, sample, chain_sources, None)
    timed, _ = timed_charges(plan, same, sources, sample)
    return curve_of(row, timed, sample)


def one_charge_curve(wh: float, station_w: float) -> ChargeCurve:
    """Return the charge behind `one_charge` over its minutes.

    Parameters
    ----------
    wh : float
        Energy of the phone's battery [Wh]
    station_w : float
        Watts at the station's socket [W]

    Returns
    -------
    ChargeCurve
        State of charge from 0 to 1

    Examples
    --------
    >>> curve = one_charge_curve(15.4, 6.0)
    >>> round(float(curve.minutes[-1]), 1), round(float(curve.power_w[0]), 2)
    (199.9, 5.1)
    """
    sample = draws()
    _, timed = one_charge_timed(wh, station_w, sample)
    return curve_of(one_charge(wh, station_w).rows[0], timed, sample)
