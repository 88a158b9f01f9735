"""The fixed sample behind every effort range: one draw per named spread, the same draws for every row.

Same draws everywhere keep rows comparable: where one phone turns out larger than its label, it is larger at
every station. Factors are lognormal with median 1, so the central run is the middle of the sample.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from kitplanner.domain.spread import DEFAULT_POINTS, lognormal_factors, percentiles, quasi_normal
from kitplanner.plan.fields import FIELDS
from kitplanner.plan.records import Record
from kitplanner.planners.results import FloatArray

# Judgements: how far a chain by parts may be from its laws (brush film, gear drag, warm copper), a battery from
# its label, a charger from its rate, a store's way in and out from its efficiencies. A spread noted at the record's
# battery, rate or efficiency takes its place.
CHAIN_LOSS_SPREAD = 0.10
CAPACITY_SPREAD = 0.07
RATE_SPREAD = 0.10
STORE_SPREAD = 0.05
_DIMS = 7


@dataclass(frozen=True, slots=True)
class Draws:
    """Standard-normal points, one array of shape (n,) per named spread [-]."""

    person: FloatArray
    station: FloatArray
    chain: FloatArray
    capacity: FloatArray
    rate: FloatArray
    device: FloatArray
    store: FloatArray


def draws(n: int = DEFAULT_POINTS) -> Draws:
    """Return the sample: n points in seven dimensions, the same at every call.

    Examples
    --------
    >>> draws(16).person.shape, bool((draws(16).person == draws(16).person).all())
    ((16,), True)
    """
    points = quasi_normal(n, _DIMS)
    return Draws(*(points[:, i] for i in range(_DIMS)))


def field_spread(record: Record, kind: str, key: str, otherwise: float = 0.0) -> float:
    """Return the relative spread of a field: the record's own note, else the field's, else the given one [-].

    Examples
    --------
    >>> from kitplanner.plan.records import Device, Note
    >>> field_spread(Device(id="p", name="phone", notes={"eta": Note(spread_fraction=0.02)}), "device", "eta")
    0.02
    """
    note = getattr(record, "notes", {}).get(key)
    if note is not None and note.spread_fraction is not None:
        return float(note.spread_fraction)
    spec = next((spec for spec in FIELDS[kind] if spec.key == key), None)
    return otherwise if spec is None or spec.spread_fraction is None else spec.spread_fraction


def lossy_fraction(eta: FloatArray, spread_fraction: FloatArray, normals: FloatArray) -> FloatArray:
    """Return efficiencies with a spread that comes from their losses; they stay from 0 to 1.

    eta' = 1 - (1 - eta) k, k lognormal, median 1, with the losses' spread: spread * eta / (1 - eta)

    Parameters
    ----------
    eta : array
        Central efficiency [-]
    spread_fraction : array
        Relative standard deviation of the efficiency [-]
    normals : array
        Standard-normal points; broadcasts with `eta` [-]

    Returns
    -------
    array
        Efficiencies [-]

    Examples
    --------
    >>> lossy_fraction(np.array(0.85), np.array(0.05), np.array([-1.0, 0.0, 1.0])).round(3).tolist()
    [0.802, 0.85, 0.886]
    """
    loss = 1.0 - eta
    loss_spread = np.divide(spread_fraction * eta, loss, out=np.zeros_like(eta), where=loss > 0.0)
    return np.clip(1.0 - loss * lognormal_factors(loss_spread, -normals), 0.0, 1.0)


def ordered_range(samples: FloatArray, central: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the 10th and 90th percentile of samples (cases, n), never on the wrong side of the central run.

    Parameters
    ----------
    samples : array, shape (cases, n)
        Values of the sample
    central : array, shape (cases,)
        The run at central values

    Returns
    -------
    tuple of arrays, shape (cases,)
        Quick and slow end

    Examples
    --------
    >>> low, high = ordered_range(np.array([[1.0, 2.0, 3.0]]), np.array([0.5]))
    >>> low.tolist(), high.tolist()
    ([0.5], [3.0])
    """
    low, _, high = percentiles(samples, axis=-1)
    return np.minimum(low, central), np.maximum(high, central)
