"""What stores hold and what stations have room for.

Levels: S at the station's socket, B in store, O at the outlet.
"""

from __future__ import annotations

from collections.abc import Iterable

from kitplanner.plan.records import Plan, Station, Store
from kitplanner.planners.balance_windows import Part, day_parts, slot_minutes, waking_parts


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
