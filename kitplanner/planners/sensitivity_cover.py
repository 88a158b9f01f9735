"""The balance's coverage of one plan with a few values changed, without computing the rest again.

What people and stations make is kept as watts and minutes; a changed device or store then costs one sum.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from msgspec import structs

from kitplanner.domain.spread import lognormal_factors
from kitplanner.domain.usb_sink import UsbSink
from kitplanner.plan.records import Person, Plan, Station, Store
from kitplanner.planners.balance_offers import caps_by_day, choices_of, kept_fraction, share_out
from kitplanner.planners.balance_output import output_table, station_outputs
from kitplanner.planners.balance_windows import MINUTES_PER_HOUR
from kitplanner.planners.demand import device_need, device_needs
from kitplanner.planners.effort_chain import chain_sources
from kitplanner.planners.effort_source import STORE_HOLD_FRACTION, measured_source, nominal_v, person_factors
from kitplanner.planners.effort_spread import Draws
from kitplanner.planners.people import PersonOutput, allowed_stations, person_limits, person_output
from kitplanner.planners.results import FloatArray
from kitplanner.planners.sensitivity_records import P90_Z
from kitplanner.planners.supply import fed_stores, station_minutes, station_to_outlet_fraction, store_wh

_ROUNDING_WH = 1e-9
# Points of the small sample: the middle, then person, station and chain each low and high, the others in the middle.
_PERSON_LOW, _PERSON_HIGH, _STATION_LOW, _STATION_HIGH, _CHAIN_LOW, _CHAIN_HIGH = range(1, 7)


@dataclass(frozen=True, slots=True)
class Cover:
    """One plan's balance in parts: watts (people, stations), the caps of each kind of day, need line by line."""

    plan: Plan
    output_w: FloatArray
    day_caps: tuple[tuple[FloatArray, int], ...]
    available_min: FloatArray
    need_wh: tuple[float, ...]
    made_wh: FloatArray

    def made_by(self, output_w: FloatArray, attendance_fraction: float = 1.0) -> FloatArray:
        """Return what each station makes over the horizon at S when watts or attendance are others [Wh]."""
        choices = choices_of(self.plan, output_w)
        made = np.zeros(len(self.plan.stations))
        for cap_min, days in self.day_caps:
            offered = share_out(cap_min * attendance_fraction, choices, self.available_min)
            used = offered * kept_fraction(offered, self.available_min)
            made += days * (used * output_w).sum(axis=0) / MINUTES_PER_HOUR
        return made

    def fraction(
        self,
        *,
        plan: Plan | None = None,
        made_wh: FloatArray | None = None,
        device: int | None = None,
        has_new_margin: bool = False,
    ) -> float | None:
        """Return the coverage with the stores, sources, margin and one device line of a changed plan.

        Parameters
        ----------
        plan : Plan, optional
            The changed plan; None: as it is
        made_wh : array, optional
            What stations make at S; None: as it is [Wh]
        device : int, optional
            The only device line that changed
        has_new_margin : bool
            True where all device lines change with the margin

        Returns
        -------
        float or None
            Coverage [-], None without need
        """
        changed = self.plan if plan is None else plan
        made = self.made_wh if made_wh is None else made_wh
        if has_new_margin:
            need = sum(_net_wh(changed, place) for place in range(len(changed.devices)))
        elif device is not None:
            need = sum(self.need_wh) - self.need_wh[device] + _net_wh(changed, device)
        else:
            need = sum(self.need_wh)
        return self._have_wh(changed, made) / need if need > _ROUNDING_WH else None

    def _have_wh(self, plan: Plan, made_wh: FloatArray) -> float:
        stored = sum(store_wh(store, store.start_fraction) for store in plan.stores)
        to_outlet = _to_outlet(plan)
        other = plan.days * sum(source.wh_per_day for source in plan.other_sources)
        return stored + float(made_wh @ to_outlet) + other * station_to_outlet_fraction(plan.stores)


def _to_outlet(plan: Plan) -> FloatArray:
    known: dict[tuple[str, ...], float] = {}
    found = []
    for station in plan.stations:
        stores: tuple[Store, ...] = fed_stores(plan, station)
        key = tuple(store.id for store in stores)
        if key not in known:
            known[key] = station_to_outlet_fraction(stores)
        found.append(known[key])
    return np.array(found)


def _net_wh(plan: Plan, place: int) -> float:
    need = device_need(plan, plan.devices[place])
    return need.use_wh - need.credit_wh


def cover_of(plan: Plan) -> Cover:
    """Return the parts of a plan's balance; its `fraction()` is the balance's coverage.

    Examples
    --------
    >>> from kitplanner.plan.records import Device
    >>> plan = Plan(days=1, margin_fraction=0.0, stores=(Store(id="b", name="bank", floor_fraction=0.0),),
    ...             devices=(Device(id="l", name="lamp", use_wh_per_day=37.0),))
    >>> cover_of(plan).fraction()
    0.85
    """
    output_w, _ = output_table(plan)
    empty = np.zeros(len(plan.stations))
    bare = Cover(
        plan=plan,
        output_w=output_w,
        day_caps=tuple(caps_by_day(plan)),
        available_min=np.array([station_minutes(plan, station) for station in plan.stations]),
        need_wh=tuple(need.use_wh - need.credit_wh for need in device_needs(plan)),
        made_wh=empty,
    )
    return Cover(
        plan=plan,
        output_w=output_w,
        day_caps=bare.day_caps,
        available_min=bare.available_min,
        need_wh=bare.need_wh,
        made_wh=bare.made_by(output_w),
    )


@dataclass(frozen=True, slots=True)
class Swings:
    """Watts at S of shape (people, stations) with each person, each station or its chain at both ends."""

    person: tuple[FloatArray, FloatArray]
    station: tuple[FloatArray, FloatArray]
    chain: tuple[FloatArray, FloatArray]


def small_sample() -> Draws:
    """Return seven points: the middle, and person, station and chain at their 10 % and 90 % points."""
    points = np.zeros((3, 7))
    for dim in range(3):
        points[dim, 1 + 2 * dim], points[dim, 2 + 2 * dim] = -P90_Z, P90_Z
    still = np.zeros(7)
    return Draws(
        person=points[0], station=points[1], chain=points[2], capacity=still, rate=still, device=still, store=still
    )


def swings(plan: Plan, output_w: FloatArray) -> Swings:
    """Return everybody's watts at every station with one spread at a time at its ends.

    Parameters
    ----------
    plan : Plan
        The plan
    output_w : array, shape (people, stations)
        Watts at central values [W]

    Returns
    -------
    Swings
        Watts at S [W]
    """
    sample = small_sample()
    varied = np.repeat(output_w[:, :, None], 7, axis=2)
    for column, station in enumerate(plan.stations):
        rows = np.flatnonzero(_turns_at(plan, station))
        if rows.size:
            found = _sampled(plan, station, [plan.people[row] for row in rows], sample)
            varied[rows, column] = _scaled(output_w[rows, column], found)
    return Swings(
        person=(varied[:, :, _PERSON_LOW], varied[:, :, _PERSON_HIGH]),
        station=(varied[:, :, _STATION_LOW], varied[:, :, _STATION_HIGH]),
        chain=(varied[:, :, _CHAIN_LOW], varied[:, :, _CHAIN_HIGH]),
    )


def _turns_at(plan: Plan, station: Station) -> list[bool]:
    return [
        person_limits(plan, person).cap_min > 0 and any(one.id == station.id for one in allowed_stations(plan, person))
        for person in plan.people
    ]


def _scaled(central_w: FloatArray, sample_w: FloatArray) -> FloatArray:
    """Return the sample so that its middle is the balance's own figure, also where a store's charger takes less."""
    middle = sample_w[:, :1]
    ratio = np.divide(central_w[:, None], middle, out=np.ones_like(middle), where=middle > 0.0)
    return np.asarray(sample_w * ratio)


def _sampled(plan: Plan, station: Station, people: Sequence[Person], sample: Draws) -> FloatArray:
    """Return the watts of people at a station over the small sample, shape (people, 7)."""
    if station.described_by != "parts":
        return np.array([measured_source(plan, person, station, sample).sample_w for person in people])
    outputs = [person_output(plan, person, station) for person in people]
    factors = [
        person_factors(plan, person, station, output, sample) for person, output in zip(people, outputs, strict=True)
    ]
    sink = UsbSink(hold_v=STORE_HOLD_FRACTION * nominal_v(station))
    return np.array([source.sample_w for source in chain_sources(station, sink, outputs, factors, sample)])


def person_ends(plan: Plan, person: Person, station: Station, output: PersonOutput) -> tuple[float, float]:
    """Return the factors on a person's watts at the ends of their range."""
    factors = person_factors(plan, person, station, output, small_sample())
    return float(factors[_PERSON_LOW]), float(factors[_PERSON_HIGH])


def with_efficiency(plan: Plan, output_w: FloatArray, column: int, eta: float) -> FloatArray:
    """Return everybody's watts with another efficiency of one station, for those described by their label."""
    station = structs.replace(plan.stations[column], eta_fraction=eta)
    changed = output_w.copy()
    rows = np.flatnonzero(output_w[:, column] > 0.0)
    if rows.size:
        changed[rows, column] = station_outputs(plan, station, [plan.people[row] for row in rows])[0]
    return changed


def shared_factors(spread_fraction: float) -> tuple[float, float]:
    """Return the factors by which all people together are below and above their estimate.

    Examples
    --------
    >>> [round(factor, 3) for factor in shared_factors(0.20)]
    [0.776, 1.289]
    """
    low, high = lognormal_factors(spread_fraction, [-P90_Z, P90_Z])
    return float(low), float(high)
