"""Who turns where and how long when every offered minute is worked, and what that brings to the outlet.

A person's cap is offered once: to the allowed station where they give most watts, and what is cut there to the
next. Levels: M at the crank, S at the station's socket, O at the outlet.
"""

from __future__ import annotations

import numpy as np
from msgspec import Struct

from kitplanner.plan.records import Plan
from kitplanner.planners.balance_output import output_table
from kitplanner.planners.balance_windows import MINUTES_PER_HOUR
from kitplanner.planners.people import person_limits
from kitplanner.planners.results import BalancePerson, BalanceStation, FloatArray
from kitplanner.planners.supply import fed_stores, station_minutes, station_to_outlet_fraction

# In the heat the share of the cap grows day by day and is whole from the fifth (`domain.heat.ramp_up_fraction`).
RAMP_UP_DAYS = 5
_SETTLED_MIN = 1e-10
_MOST_ROUNDS = 10_000


class Supply(Struct, frozen=True, kw_only=True):
    """What is made in an average day, by station line and person, and what other sources add, at O."""

    stations: tuple[BalanceStation, ...]
    people: tuple[BalancePerson, ...]
    station_o_wh_per_day: tuple[float, ...]
    source_o_wh_per_day: tuple[float, ...]
    human_o_wh_by_day: tuple[float, ...]

    @property
    def human_o_wh_per_day(self) -> float:
        """What people make, at O [Wh a day]."""
        return sum(self.station_o_wh_per_day)

    @property
    def other_o_wh_per_day(self) -> float:
        """What other sources add, at O [Wh a day]."""
        return sum(self.source_o_wh_per_day)

    @property
    def made_o_wh_by_day(self) -> tuple[float, ...]:
        """All that comes in on each day, at O [Wh]."""
        other = self.other_o_wh_per_day
        return tuple(human + other for human in self.human_o_wh_by_day)


def share_out(cap_min: FloatArray, choices: tuple[tuple[int, ...], ...], available_min: FloatArray) -> FloatArray:
    """Return the minutes each person offers at each station, what is cut passing to the next choice.

    used = offered * min(1, available / sum of offered); offered at the next choice = offered - used

    Parameters
    ----------
    cap_min : array, shape (people,)
        Daily cap of each person [min]
    choices : tuple of tuples of int
        Station indices of each person, best first
    available_min : array, shape (stations,)
        Station time a day [min]

    Returns
    -------
    array, shape (people, stations)
        Offered minutes; used minutes follow by the cut [min]

    Examples
    --------
    >>> share_out(np.array([100.0, 60.0]), ((0, 1), (1,)), np.array([60.0, 60.0])).tolist()
    [[100.0, 40.0], [0.0, 60.0]]
    """
    offered = np.zeros((len(cap_min), len(available_min)))
    rank_station = _by_rank(choices)
    for _ in range(_MOST_ROUNDS):
        kept = kept_fraction(offered, available_min)
        passed = np.array(cap_min, dtype=float)
        following = np.zeros_like(offered)
        for rows, stations in rank_station:
            following[rows, stations] = passed[rows]
            passed[rows] *= 1.0 - kept[stations]
        # Offers only grow from round to round and never exceed the cap, so this settles.
        if np.allclose(following, offered, rtol=0.0, atol=_SETTLED_MIN):
            return following
        offered = following
    return offered


def _by_rank(choices: tuple[tuple[int, ...], ...]) -> tuple[tuple[np.ndarray, np.ndarray], ...]:
    """Return for first, second ... choices the people that have one and the station it is."""
    ranks = max((len(stations) for stations in choices), default=0)
    ordered = []
    for rank in range(ranks):
        pairs = [(person, stations[rank]) for person, stations in enumerate(choices) if rank < len(stations)]
        ordered.append((np.array([pair[0] for pair in pairs]), np.array([pair[1] for pair in pairs])))
    return tuple(ordered)


def kept_fraction(offered_min: FloatArray, available_min: FloatArray) -> FloatArray:
    """Return what share of the offered minutes each station has time for [-].

    Examples
    --------
    >>> kept_fraction(np.array([[100.0, 0.0], [20.0, 0.0]]), np.array([60.0, 60.0])).tolist()
    [0.5, 1.0]
    """
    total = offered_min.sum(axis=0)
    kept: FloatArray = np.divide(available_min, total, out=np.ones_like(total), where=total > available_min)
    return kept


def supply(plan: Plan) -> Supply:
    """Return what people and other sources bring when every offered minute is worked.

    made a day = sum over people and stations of used minutes / 60 * watts

    Minutes and energy by station and person are those of an average day; with the ramp-up in the heat the first
    days have smaller caps.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    Supply
        Minutes and energy by station line and person; energy at O [Wh a day]
    """
    output_w, human_w = output_table(plan)
    choices = choices_of(plan, output_w)
    available = np.array([station_minutes(plan, station) for station in plan.stations])
    to_outlet = np.array([station_to_outlet_fraction(fed_stores(plan, station)) for station in plan.stations])
    day_caps = caps_by_day(plan)
    offers = [share_out(cap, choices, available) for cap, _ in day_caps]
    worked = [offered * kept_fraction(offered, available) for offered in offers]
    weights = [days / plan.days for _, days in day_caps]
    caps = _mean([cap for cap, _ in day_caps], weights)
    offered, used = _mean(offers, weights), _mean(worked, weights)
    made = (used * output_w).sum(axis=0) / MINUTES_PER_HOUR
    human = (used * human_w).sum(axis=0) / MINUTES_PER_HOUR
    by_day = [float(((minutes * output_w).sum(axis=0) / MINUTES_PER_HOUR) @ to_outlet) for minutes in worked]
    return Supply(
        stations=_station_rows(plan, available, offered, used, np.stack((made, human))),
        people=_person_rows(plan, caps, offered, used, output_w),
        station_o_wh_per_day=tuple((made * to_outlet).tolist()),
        source_o_wh_per_day=tuple(
            source.wh_per_day * station_to_outlet_fraction(plan.stores) for source in plan.other_sources
        ),
        human_o_wh_by_day=tuple(wh for wh, (_, days) in zip(by_day, day_caps, strict=True) for _ in range(days)),
    )


def _mean(arrays: list[FloatArray], weights: list[float]) -> FloatArray:
    """Return the mean over the kinds of day."""
    mean = np.zeros_like(arrays[0])
    for array, weight in zip(arrays, weights, strict=True):
        mean += array * weight
    return mean


def caps_by_day(plan: Plan) -> list[tuple[FloatArray, int]]:
    """Return each different day's caps in order, with how many days it lasts."""
    if not plan.conditions.ramp_up:
        return [(_caps(plan, None), plan.days)]
    early = [(_caps(plan, day), 1) for day in range(1, min(plan.days, RAMP_UP_DAYS) + 1)]
    later = plan.days - len(early)
    return [*early, (_caps(plan, plan.days), later)] if later else early


def _caps(plan: Plan, day: int | None) -> FloatArray:
    return np.array([float(person_limits(plan, person, day=day).cap_min) for person in plan.people])


def choices_of(plan: Plan, output_w: FloatArray) -> tuple[tuple[int, ...], ...]:
    """Return for each person the stations where they give something, most watts first.

    Equal watts go by id, so that the order of the records decides nothing.
    """
    return tuple(
        tuple(
            sorted(
                (column for column in range(len(plan.stations)) if output_w[row, column] > 0.0),
                key=lambda column: (-output_w[row, column], plan.stations[column].id),
            )
        )
        for row in range(len(plan.people))
    )


def _station_rows(
    plan: Plan, available: FloatArray, offered: FloatArray, used: FloatArray, wh: FloatArray
) -> tuple[BalanceStation, ...]:
    return tuple(
        BalanceStation(
            station=station.id,
            available_min=float(available[column]),
            offered_min=float(offered[:, column].sum()),
            used_min=float(used[:, column].sum()),
            made_wh_per_day=float(wh[0, column]),
            human_wh_per_day=float(wh[1, column]),
        )
        for column, station in enumerate(plan.stations)
    )


def _person_rows(
    plan: Plan, cap_min: FloatArray, offered: FloatArray, used: FloatArray, output_w: FloatArray
) -> tuple[BalancePerson, ...]:
    return tuple(
        BalancePerson(
            person=plan.people[row].id,
            station=plan.stations[column].id,
            cap_min=float(cap_min[row]),
            used_min=float(used[row, column]),
            output_w=float(output_w[row, column]),
        )
        for row, column in np.argwhere(offered > _SETTLED_MIN)
    )
