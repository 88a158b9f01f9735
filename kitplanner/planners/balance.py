"""The balance: does what can be had cover what is needed, and if not, what is missing and why.

Everything is counted at the outlet (O) over the horizon, all offered minutes worked. Need and coverage carry
the margin; the pooled level at the end of a day and the first empty day do not.
"""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import Plan
from kitplanner.planners.balance_cuts import cuts, shared_fraction
from kitplanner.planners.balance_offers import Supply, supply
from kitplanner.planners.balance_output import reference_output_w
from kitplanner.planners.balance_windows import (
    MINUTES_PER_HOUR,
    WHOLE_DAY,
    day_parts,
    merged,
    share_by_hour,
)
from kitplanner.planners.demand import DeviceNeed, device_needs
from kitplanner.planners.results import (
    BalanceDay,
    BalanceDevice,
    BalanceHour,
    BalanceLimit,
    BalanceResult,
    BalanceStore,
    Verdict,
)
from kitplanner.planners.supply import fed_stores, open_parts, station_to_outlet_fraction, store_wh

FITS_FROM_FRACTION = 1.05
TIGHT_FROM_FRACTION = 1.0
_ROUNDING_WH = 1e-9


def balance(plan: Plan) -> BalanceResult:
    """Return the balance of a plan.

    need = sum of use * (1 + margin) - start credits; have = stores + days * made; coverage = have / need

    Parameters
    ----------
    plan : Plan
        A plan without errors

    Returns
    -------
    BalanceResult
        Coverage, what limits, days, hours, devices, stores, stations, people and cuts
    """
    needs = device_needs(plan)
    brought = supply(plan)
    stores = tuple(BalanceStore(store=line.id, usable_wh=store_wh(line, line.start_fraction)) for line in plan.stores)
    stored_wh = sum(line.usable_wh for line in stores)
    need_wh = max(0.0, sum(need.use_wh - need.credit_wh for need in needs))
    have_wh = stored_wh + sum(brought.made_o_wh_by_day)
    coverage = have_wh / need_wh if need_wh > _ROUNDING_WH else None
    days = _days(needs, brought, stored_wh)
    return BalanceResult(
        coverage_fraction=coverage,
        need_wh=need_wh,
        have_wh=have_wh,
        short_wh_per_day=max(0.0, need_wh - have_wh) / plan.days,
        first_empty_day=next((day.day for day in days if day.end_wh < -_ROUNDING_WH), None),
        limit=_limit(plan, needs, brought, days) if coverage is not None else None,
        verdict=verdict_of(coverage),
        station_to_outlet_fraction=station_to_outlet_fraction(plan.stores),
        needed_min_per_day=_needed_min_per_day(plan, brought, need_wh - stored_wh),
        days=days,
        hours=_hours(plan, needs, brought),
        devices=_devices(needs, have_wh),
        stores=stores,
        stations=brought.stations,
        people=brought.people,
        cuts=cuts(needs, have_wh),
    )


def verdict_of(coverage_fraction: float | None) -> Verdict:
    """Return "fits" from 1.05, "tight" from 1, else "short"; a plan without need fits.

    Examples
    --------
    >>> verdict_of(1.05), verdict_of(1.0), verdict_of(0.999), verdict_of(None)
    ('fits', 'tight', 'short', 'fits')
    """
    if coverage_fraction is None or coverage_fraction >= FITS_FROM_FRACTION:
        return "fits"
    return "tight" if coverage_fraction >= TIGHT_FROM_FRACTION else "short"


def _days(needs: Sequence[DeviceNeed], brought: Supply, stored_wh: float) -> tuple[BalanceDay, ...]:
    """Return the pooled level at the end of each day: stores and start charges, without margin."""
    use_wh = sum(need.day_o_wh for need in needs)
    level_wh = stored_wh + sum(need.credit_plain_wh for need in needs)
    days = []
    for day, made_wh in enumerate(brought.made_o_wh_by_day, start=1):
        level_wh += made_wh - use_wh
        days.append(BalanceDay(day=day, use_wh=use_wh, made_wh=made_wh, end_wh=level_wh))
    return tuple(days)


def _limit(plan: Plan, needs: Sequence[DeviceNeed], brought: Supply, days: Sequence[BalanceDay]) -> BalanceLimit | None:
    """Return what stands in the way of more: storage, the stations' time or the people's minutes."""
    if not plan.stations:
        return None
    # Full: stores at 100 %, devices at their target or as much as they will use, whichever is less.
    full_wh = sum(store_wh(store, 1.0) for store in plan.stores) + sum(need.full_plain_wh for need in needs)
    if any(wh > 0.0 for wh in brought.made_o_wh_by_day) and any(day.end_wh > full_wh + _ROUNDING_WH for day in days):
        return "storage"
    if not any(station.available_min > 0.0 for station in brought.stations):
        return "station-minutes"
    # By id among equals, so that the order of the records decides nothing.
    most = min(brought.stations, key=lambda station: (-station.made_wh_per_day, station.station))
    return "station-minutes" if most.offered_min > most.available_min + _ROUNDING_WH else "people-minutes"


def _needed_min_per_day(plan: Plan, brought: Supply, people_wh: float) -> float | None:
    """Return minutes a day a reference adult would turn so that need is just met, at today's mix of stations.

    minutes = sum over stations of share * needed at O / (reference watts * station to outlet)
    """
    needed_o = max(0.0, people_wh / plan.days - brought.other_o_wh_per_day)
    if needed_o <= 0.0:
        return 0.0
    rate = [
        reference_output_w(plan, station) * station_to_outlet_fraction(fed_stores(plan, station)) / MINUTES_PER_HOUR
        if station.in_service and station.guarded
        else 0.0
        for station in plan.stations
    ]
    whole = brought.human_o_wh_per_day
    if whole > 0.0:
        shares = [made / whole for made in brought.station_o_wh_per_day]
    else:
        best = max(rate, default=0.0)
        shares = [1.0 if place == rate.index(best) else 0.0 for place in range(len(rate))]
    parts = [(share, per_min) for share, per_min in zip(shares, rate, strict=True) if share > 0.0]
    if not parts or any(per_min <= 0.0 for _, per_min in parts):
        return None
    return sum(share * needed_o / per_min for share, per_min in parts)


def _hours(plan: Plan, needs: Sequence[DeviceNeed], brought: Supply) -> tuple[BalanceHour, ...]:
    """Return use and made energy in each hour of an average day, spread evenly over their windows."""
    use = [0.0] * 24
    made = [0.0] * 24
    for device, need in zip(plan.devices, needs, strict=True):
        _spread(use, need.day_o_wh, merged(day_parts(device.use_windows)))
    for station, wh in zip(plan.stations, brought.station_o_wh_per_day, strict=True):
        _spread(made, wh, merged(open_parts(plan, station)))
    for source, wh in zip(plan.other_sources, brought.source_o_wh_per_day, strict=True):
        _spread(made, wh, merged(day_parts(source.windows)))
    return tuple(BalanceHour(hour=hour, use_wh=use[hour], made_wh=made[hour]) for hour in range(24))


def _spread(hours: list[float], wh: float, parts: Sequence[tuple[int, int]]) -> None:
    for hour, share in enumerate(share_by_hour(parts or WHOLE_DAY)):
        hours[hour] += wh * share


def _devices(needs: Sequence[DeviceNeed], have_wh: float) -> tuple[BalanceDevice, ...]:
    """Return use, credit and the share each device line gets if the shortage is shared line by line."""
    share = shared_fraction([need.use_wh for need in needs], [need.credit_wh for need in needs], have_wh)
    return tuple(
        BalanceDevice(
            device=need.device,
            use_wh=need.use_wh,
            credit_wh=need.credit_wh,
            covered_fraction=min(1.0, max(share, need.credit_wh / need.use_wh)) if need.use_wh > 0.0 else 1.0,
        )
        for need in needs
    )
