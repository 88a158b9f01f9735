"""The judge on energy: whether stores and bouts can give what the charging table takes, recomputed from the plan.

Part of the judge (`check.py`): imports plan and domain only. The rota does not say from which store a row draws, nor
when within its time, so the judge takes the kindest case: all stores as one, the best way into it, and each row
served at its end, or earlier from what would run over. What does not work even so cannot be worked by any store.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from kitplanner.plan.records import Plan, Station, Store
from kitplanner.planners.rota.check_finding import DAY_MIN, Charging, Part, Turn, Violation, named, parts_of, steps_of
from kitplanner.planners.rota.check_output import made_by

ROUNDING_WH = 1e-6
ROUNDING_FRACTION = 1e-9


@dataclass(frozen=True, slots=True)
class Inflow:
    """Power that reaches the outlet side over some minutes since the start of day 1."""

    since: int
    until: int
    power_w: float


def check_energy(plan: Plan, turns: Iterable[Turn], rows: Iterable[Charging]) -> Iterator[Violation]:
    """Yield charging rows that take more than stores and bouts can have given by their end.

    Each stretch of time: pool = pool + in - out, 0 <= pool <= full, energy above the floor at O. Energy keeps, so a row
    is best served at its end; what would run over goes to the rows that end first.

    Parameters
    ----------
    plan : Plan
        The plan.
    turns : iterable of Turn
        Bouts by time.
    rows : iterable of Charging
        Charging rows by time.
    """
    flows = [*_from_bouts(plan, turns), *_from_sources(plan)]
    waiting = sorted(rows, key=lambda row: row.since)
    edges = {0} | {edge for flow in flows for edge in (flow.since, flow.until)}
    edges |= {edge for row in waiting for edge in (row.since, row.until)}
    pool = sum(_usable_wh(store, store.start_fraction) for store in plan.stores)
    full = max(pool, sum(_usable_wh(store, 1.0) for store in plan.stores))
    power_at = _power_at(flows)
    active: list[tuple[Charging, float]] = []
    power, place = 0.0, 0
    for since, until in steps_of(edges):
        power += power_at.get(since, 0.0)
        while place < len(waiting) and waiting[place].since <= since:
            active.append((waiting[place], waiting[place].energy_wh))
            place += 1
        active.sort(key=lambda pair: pair[0].until)
        pool += max(0.0, power) * (until - since) / 60.0
        # What nobody on charge takes either is wasted.
        _, active = _serve(max(0.0, pool - full), active)
        pool, ended = _serve(min(pool, full), [pair for pair in active if pair[0].until <= until])
        active = [pair for pair in active if pair[0].until > until]
        for row, missing in ended:
            if missing > ROUNDING_WH + ROUNDING_FRACTION * row.energy_wh:
                text = (
                    f"{named(row.device)} is to get {row.energy_wh:.2f} Wh {row.when}; the stores and those who turn "
                    f"can give {missing:.3g} Wh less."
                )
                yield row.broken("energy", text)


def _serve(pool: float, active: list[tuple[Charging, float]]) -> tuple[float, list[tuple[Charging, float]]]:
    """Return what is left of the pool and of each row's wish, served in order."""
    left = []
    for row, wish in active:
        given = min(pool, wish)
        pool -= given
        left.append((row, wish - given))
    return pool, left


def _power_at(flows: Iterable[Inflow]) -> dict[int, float]:
    """Return by how much the power changes at each moment."""
    change: dict[int, float] = {}
    for flow in flows:
        change[flow.since] = change.get(flow.since, 0.0) + flow.power_w
        change[flow.until] = change.get(flow.until, 0.0) - flow.power_w
    return change


def _usable_wh(store: Store, charge_fraction: float) -> float:
    above = max(0.0, charge_fraction - store.floor_fraction)
    return store.count * store.nominal_wh * store.health_fraction * above * store.eta_out


def _best_eta(stores: Iterable[Store]) -> float:
    """Return the best way from a station through a store to an outlet; 1 where a device hangs at the station itself."""
    return max((store.eta_in * store.eta_out for store in stores), default=1.0)


def fed_by(plan: Plan, station: Station) -> tuple[Store, ...]:
    """Return the stores a station feeds; none named means all."""
    return tuple(store for store in plan.stores if not station.feeds or store.id in station.feeds)


def _from_bouts(plan: Plan, turns: Iterable[Turn]) -> Iterator[Inflow]:
    for made in made_by(plan, turns):
        stores = fed_by(plan, made.station)
        limits = [math.inf if each.charge_limit_w is None else each.count * each.charge_limit_w for each in stores]
        power_w = min(made.power_w, sum(limits)) if stores else made.power_w
        yield Inflow(made.since, made.until, power_w * _best_eta(stores))


def _from_sources(plan: Plan) -> Iterator[Inflow]:
    for source in plan.other_sources:
        parts: tuple[Part, ...] = parts_of(source.windows) or ((0, DAY_MIN),)
        power_w = source.wh_per_day * 60.0 / sum(end - start for start, end in parts) * _best_eta(plan.stores)
        for day in range(plan.days):
            for start, end in parts:
                yield Inflow(day * DAY_MIN + start, day * DAY_MIN + end, power_w)
