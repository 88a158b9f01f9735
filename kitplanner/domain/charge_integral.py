"""Charging from a source that changes with the state of charge: the time as an integral, good to 1e-6.

A cell's voltage climbs while it fills, so a crank chain may deliver a different rate at every state of charge. The
integral of ds/c(s) is taken by an adaptive Gauss-Kronrod rule that halves only the pieces that need it, for many
charges at once; kinks, where the battery instead of the source takes over, are found by the halving.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.domain.battery import (
    DEFAULT_ACCEPTANCE,
    MINUTES_PER_HOUR,
    Acceptance,
    charge_rate_per_h,
    minutes_to_charge,
    soc_after,
    taper_rate_per_h,
)

FloatArray = npt.NDArray[np.float64]
IndexArray = npt.NDArray[np.intp]
# Rate of the source [1/h] at states of charge, shape (pieces, nodes), for the charges numbered by shape (pieces, 1).
SourceRate = Callable[[FloatArray, IndexArray], FloatArray]

# Nodes and weights of the 15-point Kronrod rule with its 7-point Gauss rule (QUADPACK, Piessens et al. 1983).
_NODES = np.array(
    [
        0.991455371120812639206854697526329,
        0.949107912342758524526189684047851,
        0.864864423359769072789712788640926,
        0.741531185599394439863864773280788,
        0.586087235467691130294144691258380,
        0.405845151377397166906606412076961,
        0.207784955007898467600689403773245,
        0.0,
    ]
)
_KRONROD = np.array(
    [
        0.022935322010529224963732008058970,
        0.063092092629978553290700663189204,
        0.104790010322250183839876322541518,
        0.140653259715525918745189590510238,
        0.169004726639267902826583426598550,
        0.190350578064785409913256402421014,
        0.204432940075298892414161999234649,
        0.209482141084727828012999174891714,
    ]
)
_GAUSS = np.array(
    [
        0.0,
        0.129484966168869693270611432679082,
        0.0,
        0.279705391489276667901467771423780,
        0.0,
        0.381830050505118944950369775488975,
        0.0,
        0.417959183673469387755102040816327,
    ]
)
# Both ends join without weight: they tell whether the battery takes over between an outer node and the end.
_END = np.zeros(1)
_X = np.concatenate((-np.ones(1), -_NODES[:-1], _NODES[::-1], np.ones(1)))
_WK = np.concatenate((_END, _KRONROD[:-1], _KRONROD[::-1], _END))
_WG = np.concatenate((_END, _GAUSS[:-1], _GAUSS[::-1], _END))
_MOST_HALVINGS = 40
RELATIVE_TOLERANCE = 1e-7


def minutes_to_charge_varying(
    soc_from: npt.ArrayLike,
    soc_to: npt.ArrayLike,
    source_rate_per_h: SourceRate,
    acceptance: Acceptance = DEFAULT_ACCEPTANCE,
    tolerance: float = RELATIVE_TOLERANCE,
) -> FloatArray:
    """Minutes from one state of charge to another under a source whose rate depends on the state of charge.

    t = integral of ds/c(s), c the lesser of source and acceptance

    Parameters
    ----------
    soc_from, soc_to : array_like
        States of charge, broadcast together: one entry per charge [-].
    source_rate_per_h : callable
        (soc, charge) -> rate; `soc` has shape (pieces, nodes) and `charge` shape (pieces, 1) with the flat number
        of the charge each piece belongs to [1/h].
    acceptance : Acceptance
        The battery's acceptance, scalars or one entry per charge.
    tolerance : float
        Relative error aimed at [-].

    Returns
    -------
    ndarray
        Time [min], infinite where the source fails on the way.

    References
    ----------
    Gauss-Kronrod rule: Piessens R. et al., QUADPACK, Springer 1983.

    Examples
    --------
    >>> steady = minutes_to_charge_varying(0.0, 1.0, lambda soc, charge: 6.0 * 0.85 / 15.4 + 0.0 * soc)
    >>> round(float(steady), 1)
    199.9
    """
    s0, s1 = np.broadcast_arrays(np.asarray(soc_from, dtype=float), np.asarray(soc_to, dtype=float))
    shape, start, end = s0.shape, s0.ravel(), np.maximum(s1, s0).ravel()
    flat = _FlatAcceptance(acceptance, shape)
    hours = np.zeros(start.size)
    charge = np.arange(start.size)
    low, high = start.copy(), end.copy()
    share = tolerance / np.maximum(end - start, 1e-300)
    for halving in range(_MOST_HALVINGS):
        fine, error = _rule(low, high, charge, source_rate_per_h, flat)
        # A piece may keep its width's share of the whole error; the whole is at least the time at full acceptance.
        allowed = share[charge] * (high - low) * (end - start)[charge] / flat.fastest(charge)
        open_piece = np.isfinite(fine) & (error > allowed)
        if halving == _MOST_HALVINGS - 1:
            open_piece[:] = False
        np.add.at(hours, charge[~open_piece], fine[~open_piece])
        if not np.any(open_piece):
            break
        low, high, charge = _halved(low[open_piece], high[open_piece], charge[open_piece])
    return np.asarray(MINUTES_PER_HOUR * hours.reshape(shape))


class _FlatAcceptance:
    """Acceptance with one entry per charge, so that a piece can look up its own."""

    def __init__(self, acceptance: Acceptance, shape: tuple[int, ...]) -> None:
        fields = (acceptance.rate_per_h, acceptance.taper_end_per_h, acceptance.taper_tau_h, acceptance.tail_factor)
        self._fields = [np.broadcast_to(np.asarray(field, dtype=float), shape).ravel() for field in fields]

    def of(self, charge: IndexArray) -> Acceptance:
        """Return the acceptance of some charges, in their shape."""
        return Acceptance(*(field[charge] for field in self._fields))

    def fastest(self, charge: IndexArray) -> FloatArray:
        """Return the greatest rate of some charges [1/h]."""
        return np.asarray(self._fields[0][charge])


def _rule(
    low: FloatArray, high: FloatArray, charge: IndexArray, source: SourceRate, acceptance: _FlatAcceptance
) -> tuple[FloatArray, FloatArray]:
    """Integral of 1/c over each piece by the fine rule, and its distance from the coarse one, in hours."""
    half = 0.5 * (high - low)
    soc = (0.5 * (high + low))[:, None] + half[:, None] * _X
    number = charge[:, None]
    own = acceptance.of(number)
    offered = np.asarray(source(soc, number), dtype=float)
    rate = charge_rate_per_h(soc, offered, own)
    moving = rate > 0.0
    slowness = np.divide(1.0, rate, out=np.zeros(rate.shape), where=moving)
    stuck = ~np.all(moving, axis=1) & (half > 0.0)
    fine, coarse = half * (slowness @ _WK), half * (slowness @ _WG)
    by_source = np.minimum(offered, np.asarray(own.rate_per_h)) <= taper_rate_per_h(soc, own)
    has_kink = np.any(by_source, axis=1) & ~np.all(by_source, axis=1)
    kink_error = np.where(has_kink, 2.0 * half * np.ptp(slowness, axis=1), 0.0)
    error = np.where(stuck, 0.0, np.maximum(np.abs(fine - coarse), kink_error))
    return np.where(stuck, np.inf, fine), error


def _halved(low: FloatArray, high: FloatArray, charge: IndexArray) -> tuple[FloatArray, FloatArray, IndexArray]:
    """Cut each piece in two."""
    middle = 0.5 * (low + high)
    return np.concatenate((low, middle)), np.concatenate((middle, high)), np.concatenate((charge, charge))


@dataclass(frozen=True, slots=True)
class ChargeTrajectory:
    """One charge over time; arrays of one length.

    Attributes
    ----------
    minutes : ndarray
        Time since the start [min].
    soc : ndarray
        State of charge [-].
    power_w : ndarray
        Power into the battery [W].
    """

    minutes: FloatArray
    soc: FloatArray
    power_w: FloatArray


def charge_trajectory(
    soc_from: float,
    soc_to: float,
    source_rate_per_h: float,
    capacity_wh: float,
    acceptance: Acceptance = DEFAULT_ACCEPTANCE,
    points: int = 121,
) -> ChargeTrajectory:
    """State of charge and power over even minutes under a source of constant rate.

    Parameters
    ----------
    soc_from, soc_to : float
        States of charge [-].
    source_rate_per_h : float
        What the source can deliver into the battery [1/h], above 0.
    capacity_wh : float
        Capacity of the battery [Wh].
    acceptance : Acceptance
        The battery's acceptance.
    points : int
        Number of points.

    Returns
    -------
    ChargeTrajectory
        Minutes, state of charge and power.

    References
    ----------
    `soc_after`, `charge_rate_per_h`.

    Examples
    --------
    >>> run = charge_trajectory(0.0, 1.0, 6.0 * 0.85 / 15.4, 15.4)
    >>> round(float(run.minutes[-1]), 1), round(float(run.soc[-1]), 6), round(float(run.power_w[0]), 2)
    (199.9, 1.0, 5.1)
    """
    total = float(minutes_to_charge(soc_from, soc_to, source_rate_per_h, acceptance))
    if not np.isfinite(total):
        raise ValueError("a source without power never charges: give it a rate above 0")
    minutes = np.linspace(0.0, total, points)
    soc = soc_after(minutes, soc_from, source_rate_per_h, acceptance)
    return ChargeTrajectory(minutes, soc, capacity_wh * charge_rate_per_h(soc, source_rate_per_h, acceptance))


def charge_trajectory_varying(
    soc_from: float,
    soc_to: float,
    source_rate_per_h: SourceRate,
    capacity_wh: float,
    acceptance: Acceptance = DEFAULT_ACCEPTANCE,
    points: int = 121,
) -> ChargeTrajectory:
    """State of charge and power over time under a source whose rate depends on the state of charge.

    Parameters
    ----------
    soc_from, soc_to : float
        States of charge [-].
    source_rate_per_h : callable
        As in `minutes_to_charge_varying`; every charge number is 0 to `points` - 2 and means the same charge [1/h].
    capacity_wh : float
        Capacity of the battery [Wh].
    acceptance : Acceptance
        The battery's acceptance, scalars.
    points : int
        Number of points, even in state of charge.

    Returns
    -------
    ChargeTrajectory
        Minutes, state of charge and power.

    References
    ----------
    As `minutes_to_charge_varying`.

    Examples
    --------
    >>> run = charge_trajectory_varying(0.0, 1.0, lambda soc, charge: 6.0 * 0.85 / 15.4 + 0.0 * soc, 15.4)
    >>> round(float(run.minutes[-1]), 1), round(float(run.power_w[-1]), 2)
    (199.9, 0.77)
    """
    soc = np.linspace(soc_from, soc_to, points)
    steps = minutes_to_charge_varying(soc[:-1], soc[1:], source_rate_per_h, acceptance)
    minutes = np.concatenate((np.zeros(1), np.cumsum(steps)))
    source = np.asarray(source_rate_per_h(soc[:, None], np.zeros((points, 1), dtype=np.intp)), dtype=float)
    return ChargeTrajectory(minutes, soc, capacity_wh * charge_rate_per_h(soc, source[:, 0], acceptance))
