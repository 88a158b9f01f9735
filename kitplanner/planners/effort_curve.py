"""State of charge over the minutes of turning, with its 10-90 % range, for the chart of one effort row."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from kitplanner.domain.battery import charge_rate_per_h, soc_after
from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.planners.effort_minutes import Charges, source_rate_per_h, varied
from kitplanner.planners.effort_spread import Draws
from kitplanner.planners.effort_timing import Timed
from kitplanner.planners.results import ChargeCurve, EffortRow, FloatArray

POINTS = 121


def curve_of(row: EffortRow, timed: Timed, sample: Draws) -> ChargeCurve:
    """Return the curve of the only charge in `timed`."""
    total_min = float(timed.central_min[0]) / timed.fills[0].span.charges
    if row.minutes_p50 is None or not math.isfinite(total_min):
        none: FloatArray = np.empty(0)
        return ChargeCurve(
            row=row, minutes=none, soc_p10_fraction=none, soc_p50_fraction=none, soc_p90_fraction=none, power_w=none
        )
    minutes = np.linspace(0.0, total_min, POINTS)
    source = timed.sources[0]
    central, rate = _soc(timed.charges, np.array([[source.output_w]]), minutes)
    tries, _ = _soc(varied(timed.charges, sample), source.sample_w[:, None], minutes)
    low, high = np.quantile(tries, (0.1, 0.9), axis=0)
    capacity_wh = timed.fills[0].device.battery_wh or 0.0
    return ChargeCurve(
        row=row,
        minutes=_fixed(minutes),
        soc_p10_fraction=_fixed(np.minimum(low, central[0])),
        soc_p50_fraction=_fixed(central[0]),
        soc_p90_fraction=_fixed(np.maximum(high, central[0])),
        power_w=_fixed(capacity_wh * rate[0]),
    )


def _fixed(values: FloatArray) -> FloatArray:
    """Return the array read-only, because answers cross threads."""
    values.setflags(write=False)
    return values


def _soc(charges: Charges, source_w: FloatArray, minutes: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return state of charge [-] and charge rate [1/h], one row per point of the sample."""
    # The sample runs down the rows here.
    acceptance = replace(charges.acceptance, rate_per_h=np.asarray(charges.acceptance.rate_per_h).T)
    turned = replace(
        charges, capacity_wh=charges.capacity_wh.T, eta=charges.eta.T, store=charges.store.T, acceptance=acceptance
    )
    start, end = float(charges.soc_from[0, 0]), float(charges.soc_to[0, 0])
    if charges.through_store.any():
        per_h = turned.eta * turned.store * source_w / turned.capacity_wh
        soc = start + per_h * minutes / MINUTES_PER_HOUR
        return np.minimum(soc, end), np.broadcast_to(per_h, soc.shape)
    source_rate = source_rate_per_h(turned, source_w)
    soc = np.minimum(soc_after(minutes, start, source_rate, acceptance), end)
    return soc, np.broadcast_to(charge_rate_per_h(soc, source_rate, acceptance), soc.shape)
