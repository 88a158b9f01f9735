"""Distinct charges of an effort table, timed at central values and over the sample."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from kitplanner.domain.battery import charge_ceiling_rate_per_h
from kitplanner.domain.spread import lognormal_factors
from kitplanner.plan.records import Device, Person, Plan, Station, TemperaturePart, Window
from kitplanner.planners.balance_windows import day_parts, total_min
from kitplanner.planners.effort_minutes import Charges, Fill, charge_minutes, charges_of, source_bound_fraction, varied
from kitplanner.planners.effort_rows import Case, EffortError, Span
from kitplanner.planners.effort_source import BUS_V, Source
from kitplanner.planners.effort_spread import Draws, field_spread
from kitplanner.planners.results import FloatArray
from kitplanner.planners.supply import fed_stores, station_to_outlet_fraction

# Below this cell temperature the steps of the charging rule apply; above it the device's own rate does, up to where a
# hot cell must not be charged at all.
COLD_BELOW_DEGC = 15.0


@dataclass(frozen=True, slots=True)
class Timed:
    """Distinct charges with their sources and central minutes; rows point into it.

    `sample_min` has shape (distinct, n), the other arrays (distinct,).
    """

    fills: tuple[Fill, ...]
    sources: tuple[Source, ...]
    charges: Charges
    central_min: FloatArray
    sample_min: FloatArray
    bound_fraction: FloatArray


def timed_charges(
    plan: Plan, rows: Sequence[Case], sources: Sequence[Source], sample: Draws
) -> tuple[Timed, list[int]]:
    """Return the distinct charges of the rows, timed, and each row's place among them."""
    factors = {station.id: _store_fraction(plan, station) for station in plan.stations}
    air_degc = cell_degc(plan)
    place_of: dict[tuple[int, str, str, str], int] = {}
    fills: list[Fill] = []
    used: list[Source] = []
    places = []
    for case, source in zip(rows, sources, strict=True):
        # A store's way is the same for stations that feed the same stores, but the source tells stations apart.
        key = (id(source), case.device.id, case.route, case.charge)
        if key not in place_of:
            place_of[key] = len(fills)
            fraction = factors[case.station.id] if case.route == "store" else None
            fills.append(fill_of(case.device, case.span, air_degc, fraction, source))
            used.append(source)
        places.append(place_of[key])
    return time_all(tuple(fills), tuple(used), sample), places


def fill_of(device: Device, span: Span, air_degc: float, store_fraction: float | None, source: Source) -> Fill:
    """Return one charge as the timing needs it: cold rule and the device's own limits applied."""
    battery_wh = device.battery_wh or 0.0
    rate_per_h = device.charge_rate_per_h if device.charge_w is None else device.charge_w / battery_wh
    ceiling_per_h = float(charge_ceiling_rate_per_h(air_degc, "li_ion"))
    if air_degc < COLD_BELOW_DEGC or ceiling_per_h <= 0.0:
        rate_per_h = min(rate_per_h, ceiling_per_h)
    is_limited_by_parts = source.work is not None
    input_w = math.inf if device.input_limit_a is None or is_limited_by_parts else device.input_limit_a * BUS_V
    return Fill(device=device, span=span, rate_per_h=rate_per_h, input_w=input_w, store_fraction=store_fraction)


def time_all(fills: tuple[Fill, ...], sources: tuple[Source, ...], sample: Draws) -> Timed:
    """Return the minutes of charges, at least one, at central values and over the sample."""
    charges = charges_of(fills)
    source_w = np.array([source.output_w for source in sources])[:, None]
    sample_w = np.array([source.sample_w for source in sources])
    return Timed(
        fills=fills,
        sources=sources,
        charges=charges,
        central_min=charge_minutes(charges, source_w)[:, 0],
        sample_min=charge_minutes(varied(charges, sample), sample_w),
        bound_fraction=source_bound_fraction(charges, source_w)[:, 0],
    )


def _store_fraction(plan: Plan, station: Station) -> float | None:
    stores = fed_stores(plan, station)
    return float(station_to_outlet_fraction(stores)) if stores else None


def cell_degc(plan: Plan) -> float:
    """Return the temperature at which devices are charged: the mean of the day parts given, else the plan's air.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    float
        Temperature [degC]

    Examples
    --------
    >>> cell_degc(Plan())
    20.0
    """
    known = [(_length_min(part), part.air_degc) for part in plan.conditions.temperatures if part.air_degc is not None]
    total = sum(length for length, _ in known)
    if total <= 0.0:
        return plan.conditions.air_degc
    return sum(length * degc for length, degc in known) / total


def _length_min(part: TemperaturePart) -> float:
    return float(total_min(day_parts((Window(start=part.start, end=part.end),))))


def one_charge_timed(wh: float, station_w: float, sample: Draws) -> tuple[Case, Timed]:
    """Return the case and timing behind `one_charge`."""
    for value, what, example in ((wh, "the battery's energy in Wh", "15.4"), (station_w, "the station's watts", "6")):
        if not math.isfinite(value) or value <= 0.0:
            raise EffortError(f"{value:g} is no value for {what}: give a number above 0, such as {example}.")
    device = Device(id="", name="phone", battery_wh=wh)
    station = Station(id="", name="station", output_w=station_w)
    spread = field_spread(station, "station", "output_w")
    source = Source(
        output_w=station_w,
        human_w=station_w / station.eta_fraction,
        limit="person",
        sample_w=station_w * lognormal_factors(spread, sample.station),
    )
    span = Span(soc_from=0.0, soc_to=1.0)
    case = Case(device=device, station=station, person=Person(id="", name=""), route="direct", charge="full", span=span)
    return case, time_all((fill_of(device, span, COLD_BELOW_DEGC, None, source),), (source,), sample)
