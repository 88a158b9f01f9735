"""What stores, people and other sources bring to the outlet.

Levels: M at the crank, S at the station's socket, O at the outlet. A person's cap is offered once: to the
allowed station where they give most watts, and what is cut there to the next.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from msgspec import Struct

from kitplanner.plan.records import Person, Plan, Station, Store
from kitplanner.planners.balance_windows import MINUTES_PER_HOUR, Part, day_parts, slot_minutes, waking_parts
from kitplanner.planners.people import allowed_stations, person_limits, person_output
from kitplanner.planners.results import BalancePerson, BalanceStation, FloatArray

# The one to whom station output refers: 40 years, usual effort, no limit stated.
REFERENCE_ADULT = Person(id="", name="Adult average", age=40)

_SETTLED_MIN = 1e-10
_MOST_ROUNDS = 10_000


class Supply(Struct, frozen=True, kw_only=True):
    """What is made in an average day, by station line and person, and what other sources add, at O."""

    stations: tuple[BalanceStation, ...]
    people: tuple[BalancePerson, ...]
    station_o_wh_per_day: tuple[float, ...]
    source_o_wh_per_day: tuple[float, ...]

    @property
    def human_o_wh_per_day(self) -> float:
        """What people make, at O [Wh a day]."""
        return sum(self.station_o_wh_per_day)

    @property
    def other_o_wh_per_day(self) -> float:
        """What other sources add, at O [Wh a day]."""
        return sum(self.source_o_wh_per_day)

    @property
    def made_o_wh_per_day(self) -> float:
        """All that comes in, at O [Wh a day]."""
        return self.human_o_wh_per_day + self.other_o_wh_per_day


def store_wh(store: Store, charge_fraction: float) -> float:
    """Return what a store line can give at the outlet from one state of charge.

    usable = n * nominal * health * (charge - floor) * eta_out, not below 0

    Parameters
    ----------
    store : Store
        One store line; values are per unit
    charge_fraction : float
        State of charge [-]

    Returns
    -------
    float
        Usable energy at O [Wh]

    Examples
    --------
    >>> round(store_wh(Store(id="b", name="bank", count=2, nominal_wh=74.0, health_fraction=0.9), 1.0), 1)
    101.9
    """
    above = max(0.0, charge_fraction - store.floor_fraction)
    return store.count * store.nominal_wh * store.health_fraction * above * store.eta_out


def station_to_outlet_fraction(stores: Iterable[Store]) -> float:
    """Return the share of a station's output that reaches the outlet through these stores.

    factor = sum(w * eta_in * eta_out) / sum(w), w = n * nominal * health * (1 - floor); 1 without stores

    The weight is capacity in the cells, not at the outlet: a better outlet then never lowers the factor.

    Parameters
    ----------
    stores : iterable of Store
        The stores that share what comes in

    Returns
    -------
    float
        Energy at O over energy at S [-]

    Examples
    --------
    >>> round(station_to_outlet_fraction([Store(id="b", name="bank")]), 6), station_to_outlet_fraction([])
    (0.765, 1.0)
    """
    lines = tuple(stores)
    return _weighted(lines, [line.eta_in * line.eta_out for line in lines])


def station_to_store_fraction(stores: Iterable[Store]) -> float:
    """Return the share of a station's output that arrives in the cells of these stores; 1 without stores [-].

    Examples
    --------
    >>> station_to_store_fraction([Store(id="b", name="bank", eta_in=0.9)])
    0.9
    """
    lines = tuple(stores)
    return _weighted(lines, [line.eta_in for line in lines])


def _weighted(lines: tuple[Store, ...], fractions: list[float]) -> float:
    """Return the mean of the fractions, weighted by usable capacity at full."""
    weights = [line.count * line.nominal_wh * line.health_fraction * (1.0 - line.floor_fraction) for line in lines]
    whole = sum(weights)
    if whole <= 0.0:
        return 1.0
    return sum(weight / whole * fraction for weight, fraction in zip(weights, fractions, strict=True))


def fed_stores(plan: Plan, station: Station) -> tuple[Store, ...]:
    """Return the stores a station feeds; none named means all."""
    if not station.feeds:
        return plan.stores
    return tuple(store for store in plan.stores if store.id in station.feeds)


def open_parts(plan: Plan, station: Station) -> tuple[Part, ...]:
    """Return when a station may be used: its hours, or the day outside quiet hours if it has none."""
    return day_parts(station.hours) or waking_parts(plan)


def station_minutes(plan: Plan, station: Station) -> float:
    """Return the minutes all units of a station line offer in a day; 0 out of service or unguarded.

    minutes = count * daily_min, or count * sum over windows of whole slots with their changeover

    Parameters
    ----------
    plan : Plan
        The plan, for its quiet hours
    station : Station
        One station line

    Returns
    -------
    float
        Station time a day [min]
    """
    if not (station.in_service and station.guarded):
        return 0.0
    if station.daily_min is not None:
        return float(station.count * station.daily_min)
    return float(station.count * slot_minutes(open_parts(plan, station), station.slot_min, station.changeover_min))


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
    return np.minimum(1.0, np.divide(available_min, total, out=np.ones_like(total), where=total > 0.0))


def supply(plan: Plan) -> Supply:
    """Return what people and other sources bring in an average day when every offered minute is worked.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    Supply
        Minutes and energy by station line and person; energy at O [Wh a day]
    """
    index = {station.id: place for place, station in enumerate(plan.stations)}
    output_w = np.zeros((len(plan.people), len(plan.stations)))
    human_w = np.zeros_like(output_w)
    cap_min = np.array([float(person_limits(plan, person).cap_min) for person in plan.people])
    choices = []
    for row, person in enumerate(plan.people):
        given = [(station.id, person_output(plan, person, station)) for station in _may_use(plan, person, cap_min[row])]
        useful = [(key, output) for key, output in given if output.station_output_w > 0.0]
        for key, output in useful:
            output_w[row, index[key]] = output.station_output_w
            human_w[row, index[key]] = output.person_power_w
        # Equal watts: by id, so that the order of the records decides nothing.
        useful.sort(key=lambda pair: (-pair[1].station_output_w, pair[0]))
        choices.append(tuple(index[key] for key, _ in useful))
    available = np.array([station_minutes(plan, station) for station in plan.stations])
    offered = share_out(cap_min, tuple(choices), available)
    used = offered * kept_fraction(offered, available)
    made = (used * output_w).sum(axis=0) / MINUTES_PER_HOUR
    human = (used * human_w).sum(axis=0) / MINUTES_PER_HOUR
    return Supply(
        stations=_station_rows(plan, available, offered, used, np.stack((made, human))),
        people=_person_rows(plan, cap_min, offered, used, output_w),
        station_o_wh_per_day=tuple(
            float(wh) * station_to_outlet_fraction(fed_stores(plan, station))
            for wh, station in zip(made, plan.stations, strict=True)
        ),
        source_o_wh_per_day=tuple(
            source.wh_per_day * station_to_outlet_fraction(plan.stores) for source in plan.other_sources
        ),
    )


def _may_use(plan: Plan, person: Person, cap_min: float) -> tuple[Station, ...]:
    """Return the stations where a person with minutes to give may work."""
    return tuple(allowed_stations(plan, person)) if cap_min > 0.0 else ()


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


def reference_output_w(plan: Plan, station: Station) -> float:
    """Return what the reference adult gets out of a station [W], at S."""
    return float(person_output(plan, REFERENCE_ADULT, station).station_output_w)
