"""Minutes of many charges at once: a source of constant watts into batteries that accept less and less.

One row per charge, one column per point of the sample (or a single column for the central run). The source
does not depend on the state of charge, because a charger holds its input whatever the cell's voltage; the
device's acceptance does, and its integral has a closed form (`domain/battery.py`).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from kitplanner.domain.battery import Acceptance, crossover_soc, minutes_by_energy, minutes_to_charge
from kitplanner.domain.spread import lognormal_factors
from kitplanner.plan.records import Device
from kitplanner.planners.effort_rows import Span
from kitplanner.planners.effort_spread import (
    CAPACITY_SPREAD,
    RATE_SPREAD,
    STORE_SPREAD,
    Draws,
    field_spread,
    lossy_fraction,
)
from kitplanner.planners.results import FloatArray


@dataclass(frozen=True, slots=True)
class Fill:
    """One charge to be timed: the device, the span, what it may draw, and the way into it.

    Attributes
    ----------
    device : Device
        The device, values per unit.
    span : Span
        States of charge and number of charges.
    rate_per_h : float
        Acceptance in the constant part, cold rules applied [1/h].
    input_w : float
        Most the device draws at its plug, infinite where only its battery limits [W].
    store_fraction : float or None
        Energy at the outlet over energy at the station through stores; None: direct [-].
    """

    device: Device
    span: Span
    rate_per_h: float
    input_w: float
    store_fraction: float | None


@dataclass(frozen=True, slots=True)
class Charges:
    """Columns of shape (cases, 1) or (cases, n); `store` is NaN where the device hangs on the station itself."""

    capacity_wh: FloatArray
    eta: FloatArray
    store: FloatArray
    input_w: FloatArray
    soc_from: FloatArray
    soc_to: FloatArray
    charges: FloatArray
    acceptance: Acceptance
    capacity_spread: FloatArray
    rate_spread: FloatArray
    eta_spread: FloatArray

    @property
    def stored_wh(self) -> FloatArray:
        """Energy that arrives in the battery [Wh]."""
        return self.capacity_wh * (self.soc_to - self.soc_from) * self.charges

    @property
    def through_store(self) -> FloatArray:
        """True where the charge goes through a store."""
        return np.isfinite(self.store)


def _column(values: Sequence[float]) -> FloatArray:
    return np.array(values, dtype=float)[:, None]


def charges_of(fills: Sequence[Fill]) -> Charges:
    """Return the charges as columns of shape (cases, 1)."""
    return Charges(
        capacity_wh=_column([fill.device.battery_wh or 0.0 for fill in fills]),
        eta=_column([fill.device.eta for fill in fills]),
        store=_column([np.nan if fill.store_fraction is None else fill.store_fraction for fill in fills]),
        input_w=_column([fill.input_w for fill in fills]),
        soc_from=_column([fill.span.soc_from for fill in fills]),
        soc_to=_column([fill.span.soc_to for fill in fills]),
        charges=_column([fill.span.charges for fill in fills]),
        acceptance=Acceptance(
            rate_per_h=_column([fill.rate_per_h for fill in fills]),
            taper_end_per_h=_column([fill.device.taper_end_per_h for fill in fills]),
            taper_tau_h=_column([fill.device.taper_tau_h for fill in fills]),
        ),
        capacity_spread=_column([field_spread(fill.device, "device", "battery_wh", CAPACITY_SPREAD) for fill in fills]),
        rate_spread=_column([field_spread(fill.device, "device", "charge_rate_per_h", RATE_SPREAD) for fill in fills]),
        eta_spread=_column([field_spread(fill.device, "device", "eta") for fill in fills]),
    )


def varied(charges: Charges, sample: Draws) -> Charges:
    """Return the charges with capacity, rate and losses drawn from the sample, columns of shape (cases, n)."""
    pace = lognormal_factors(charges.rate_spread, sample.rate)
    return replace(
        charges,
        capacity_wh=charges.capacity_wh * lognormal_factors(charges.capacity_spread, sample.capacity),
        acceptance=replace(charges.acceptance, rate_per_h=np.asarray(charges.acceptance.rate_per_h) * pace),
        eta=lossy_fraction(charges.eta, charges.eta_spread, sample.device),
        store=lossy_fraction(charges.store, np.full_like(charges.store, STORE_SPREAD), sample.store),
    )


def source_rate_per_h(charges: Charges, source_w: FloatArray) -> FloatArray:
    """Rate at which the source would fill the battery on the direct way [1/h]: eta min(P, P_input) / C."""
    return np.asarray(charges.eta * np.minimum(source_w, charges.input_w) / charges.capacity_wh)


def charge_minutes(charges: Charges, source_w: FloatArray) -> FloatArray:
    """Minutes of turning for each charge; infinite where nothing arrives.

    direct: integral of ds / min(source rate, acceptance); through a store: energy only

    Parameters
    ----------
    charges : Charges
        The charges
    source_w : array
        Watts at the station's socket; broadcasts with the columns [W]

    Returns
    -------
    array, shape (cases, columns)
        Minutes [min]

    Examples
    --------
    >>> phone = Device(id="p", name="phone", battery_wh=15.4)
    >>> fill = Fill(phone, Span(soc_from=0.0, soc_to=1.0), 0.5, np.inf, None)
    >>> charge_minutes(charges_of([fill, replace(fill, store_fraction=0.765)]), np.array([[6.0]])).round(1).tolist()
    [[199.9], [236.8]]
    """
    direct = charges.charges * minutes_to_charge(
        charges.soc_from, charges.soc_to, source_rate_per_h(charges, source_w), charges.acceptance
    )
    if not charges.through_store.any():
        return direct
    # An idle factor on the direct rows only keeps NaN out of the arithmetic.
    factor = np.where(charges.through_store, charges.store, 1.0)
    by_energy = minutes_by_energy(charges.stored_wh, np.asarray(source_w, dtype=float), charges.eta * factor)
    return np.where(charges.through_store, by_energy, direct)


def source_bound_fraction(charges: Charges, source_w: FloatArray) -> FloatArray:
    """Share of the time in which the source, not the device, is the lesser [-]; 1 through a store.

    Parameters
    ----------
    charges : Charges
        The charges
    source_w : array
        Watts at the station's socket [W]

    Returns
    -------
    array
        Share of the time [-]
    """
    own = charges.eta * charges.input_w / charges.capacity_wh
    rate = np.asarray(charges.eta * source_w / charges.capacity_wh)
    is_lesser = rate < np.minimum(own, charges.acceptance.rate_per_h)
    s_x = np.clip(crossover_soc(rate, charges.acceptance), charges.soc_from, charges.soc_to)
    steady = minutes_to_charge(charges.soc_from, s_x, rate, charges.acceptance)
    total = minutes_to_charge(charges.soc_from, charges.soc_to, rate, charges.acceptance)
    share = np.divide(steady, total, out=np.ones_like(total), where=np.isfinite(total) & (total > 0.0))
    return np.where(charges.through_store, 1.0, np.where(is_lesser, share, 0.0))
