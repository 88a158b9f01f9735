"""What batteries of different chemistry give and take: labels, losses, cold, ageing and shelf life."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from kitplanner.domain.units import MINUTES_PER_HOUR, wh_from_j

FloatArray = npt.NDArray[np.float64]

# A Li-ion cell takes a little more energy than its label says: mean charge volts lie above the nominal ones (own runs
# of PyBaMM's DFN model: 0.971 at 0.1 C, 0.944 at 0.5 C).
ETA_CELL = 0.97
NIMH_ENERGY_ETA = 0.66  # IEC 61951-2, lower end
NIMH_STANDARD_RATE_PER_H, NIMH_STANDARD_HOURS = 0.1, 16.0  # standard charge of IEC 61951-2
LEAD_ACID_ENERGY_ETA, LEAD_ACID_CHARGE_ETA = 0.70, 0.85
PEUKERT_EXPONENT = 1.2
AGEING_FACTOR, DESIGN_MARGIN = 1.25, 1.1

# Taper time constant of a cell when old, and at 4 degC, over its value new at 25 degC: 0.39 h and 0.51 h over 0.30 h
# (own fits to the NASA PCoE battery data set, cells B0025 at 24 degC and B0046 at 4 degC).
AGED_TAU_FACTOR, COLD_TAU_FACTOR = 1.3, 1.7
_COLD_DEGC, _WARM_DEGC = 4.0, 25.0

# Stationary-battery sizing, factor by cell temperature; from memory of IEEE 485 practice.
_SIZING_DEGC = np.array([4.4, 10.0, 15.6, 25.0])
_SIZING_FACTOR = np.array([1.30, 1.19, 1.11, 1.00])


def tau_factor(degc: npt.ArrayLike, *, aged: bool = False) -> FloatArray:
    """Factor on the taper's time constant for a cold or an old Li-ion cell.

    1.7^((25 - T)/21), 1 from 25 degC up; times 1.3 for an old cell

    Parameters
    ----------
    degc : array_like
        Cell temperature [degC].
    aged : bool
        True for an old cell.

    Returns
    -------
    ndarray
        Factor [-].

    References
    ----------
    End points fitted to the NASA PCoE battery data set (cells B0025, B0046); the curve between is a judgement.

    Examples
    --------
    >>> float(tau_factor(30.0)), round(float(tau_factor(4.0)), 2), round(float(tau_factor(25.0, aged=True)), 2)
    (1.0, 1.7, 1.3)
    """
    cold = np.maximum(0.0, (_WARM_DEGC - np.asarray(degc, dtype=float)) / (_WARM_DEGC - _COLD_DEGC))
    return np.asarray(COLD_TAU_FACTOR**cold * (AGED_TAU_FACTOR if aged else 1.0))


def charge_left_fraction(
    months: npt.ArrayLike, loss_fraction_per_month: npt.ArrayLike = 0.02, degc: npt.ArrayLike = 25.0
) -> FloatArray:
    """Share of the charge left after storage.

    (1 - r 2^((T - 25)/10))^months, never below 0

    Parameters
    ----------
    months : array_like
        Time in storage [months].
    loss_fraction_per_month : array_like
        Self-discharge at 25 degC, r [-].
    degc : array_like
        Storage temperature [degC].

    Returns
    -------
    ndarray
        Share left [-].

    References
    ----------
    Doubling per 10 degC: common practice, no source. 2 % a month for packs with electronics: common practice.

    Examples
    --------
    >>> round(float(charge_left_fraction(12.0)), 3), round(float(charge_left_fraction(12.0, degc=35.0)), 3)
    (0.785, 0.613)
    """
    doublings = (np.asarray(degc, dtype=float) - _WARM_DEGC) / 10.0
    kept = 1.0 - np.asarray(loss_fraction_per_month, dtype=float) * 2.0**doublings
    return np.asarray(np.clip(kept, 0.0, 1.0) ** np.asarray(months, dtype=float))


def shelf_fraction(years: npt.ArrayLike, fraction_at: float = 0.85, at_years: float = 4.0) -> FloatArray:
    """Share of a primary cell's charge left after years on the shelf.

    f^(t/t_f)

    Parameters
    ----------
    years : array_like
        Time on the shelf [years].
    fraction_at : float
        Share left after `at_years` [-].
    at_years : float
        Time of that share [years].

    Returns
    -------
    ndarray
        Share left [-].

    References
    ----------
    Alkaline: 85 % after 4 years at 21 degC, a maker's application manual; beyond it is extrapolated.

    Examples
    --------
    >>> round(float(shelf_fraction(10.0)), 4)
    0.6661
    """
    return np.asarray(fraction_at ** (np.asarray(years, dtype=float) / at_years))


def energy_to_store_wh(stored_wh: npt.ArrayLike, eta: npt.ArrayLike) -> FloatArray:
    """Energy that must go into a battery for an energy to come to rest in it.

    E_in = E/eta

    Parameters
    ----------
    stored_wh : array_like
        Energy stored, by the label's volts [Wh].
    eta : array_like
        Energy efficiency of the charge, e.g. ETA_CELL or NIMH_ENERGY_ETA [-].

    Returns
    -------
    ndarray
        Energy into the terminals [Wh].

    References
    ----------
    Conservation of energy.

    Examples
    --------
    >>> round(float(energy_to_store_wh(9.6, NIMH_ENERGY_ETA)), 2)
    14.55
    """
    return np.asarray(np.asarray(stored_wh, dtype=float) / np.asarray(eta, dtype=float))


def outlet_mah(
    label_mah: npt.ArrayLike, cell_v: float = 3.7, outlet_v: float = 5.0, eta_out: float = 0.88
) -> FloatArray:
    """Charge a power bank delivers at its outlet: its label counts at the cell's volts.

    Q_out = Q_label V_cell eta/V_out

    Parameters
    ----------
    label_mah : array_like
        Charge on the label [mAh].
    cell_v : float
        Nominal volts of the cell [V].
    outlet_v : float
        Volts at the outlet [V].
    eta_out : float
        Efficiency of the converter [-].

    Returns
    -------
    ndarray
        Charge at the outlet [mAh].

    References
    ----------
    Conservation of energy; GB/T 35590-2017 states capacity and effective output apart for the same reason.

    Examples
    --------
    >>> round(float(outlet_mah(10000.0)))
    6512
    """
    return np.asarray(np.asarray(label_mah, dtype=float) * cell_v / outlet_v * eta_out)


def peukert_hours(
    current_a: npt.ArrayLike, capacity_ah: float, rated_hours: float = 20.0, exponent: float = PEUKERT_EXPONENT
) -> FloatArray:
    """Hours a lead-acid battery lasts at a current.

    t = H (C/(I H))^k

    Parameters
    ----------
    current_a : array_like
        Current drawn [A].
    capacity_ah : float
        Capacity at the rated discharge time [Ah].
    rated_hours : float
        Rated discharge time, H [h].
    exponent : float
        k, 1.1 to 1.3 [-].

    Returns
    -------
    ndarray
        Time [h].

    References
    ----------
    Peukert W., Elektrotechnische Zeitschrift 20 (1897) 287-288; good to about 10 %.

    Examples
    --------
    >>> round(float(peukert_hours(2.0, 7.0)), 3), round(2.0 * float(peukert_hours(2.0, 7.0)), 2)
    (2.47, 4.94)
    """
    return np.asarray(rated_hours * (capacity_ah / (np.asarray(current_a, dtype=float) * rated_hours)) ** exponent)


def sizing_temperature_factor(degc: npt.ArrayLike) -> FloatArray:
    """Factor on a lead-acid battery's size for the cold, 1 from 25 degC, held at 1.30 below 4.4 degC.

    Parameters
    ----------
    degc : array_like
        Cell temperature [degC].

    Returns
    -------
    ndarray
        Factor [-].

    References
    ----------
    Practice of IEEE 485 and IEEE 1013, from memory.

    Examples
    --------
    >>> float(sizing_temperature_factor(10.0))
    1.19
    """
    return np.asarray(np.interp(np.asarray(degc, dtype=float), _SIZING_DEGC, _SIZING_FACTOR))


def lead_acid_size_ah(
    wh_per_day: npt.ArrayLike, days: float, volts_v: float = 12.0, usable_fraction: float = 0.5, degc: float = 25.0
) -> FloatArray:
    """Capacity of a lead-acid battery for some days of use.

    Q = E_day days/(V DoD) 1.25 1.1 K_T

    Parameters
    ----------
    wh_per_day : array_like
        Energy a day at the battery [Wh].
    days : float
        Days without charge [d].
    volts_v : float
        Nominal volts [V].
    usable_fraction : float
        Depth of discharge allowed [-].
    degc : float
        Cell temperature [degC].

    Returns
    -------
    ndarray
        Capacity [Ah].

    References
    ----------
    Practice of IEEE 485 and IEEE 1013 (ageing 1.25, design margin 1.1), from memory.

    Examples
    --------
    >>> round(float(lead_acid_size_ah(20.0, 2.0, degc=10.0)), 2)
    10.91
    """
    bare_ah = np.asarray(wh_per_day, dtype=float) * days / (volts_v * usable_fraction)
    return np.asarray(bare_ah * AGEING_FACTOR * DESIGN_MARGIN * sizing_temperature_factor(degc))


def supercapacitor_wh(capacitance_f: npt.ArrayLike, from_v: npt.ArrayLike, to_v: npt.ArrayLike) -> FloatArray:
    """Energy between two voltages of a capacitor.

    E = C (V1^2 - V2^2)/2

    Parameters
    ----------
    capacitance_f : array_like
        Capacitance [F].
    from_v, to_v : array_like
        Voltages at start and end [V].

    Returns
    -------
    ndarray
        Energy given [Wh].

    References
    ----------
    Electrostatics; charging straight from a fixed voltage wastes as much again.

    Examples
    --------
    >>> round(float(supercapacitor_wh(100.0, 2.7, 1.35)), 5)
    0.07594
    """
    squares = np.square(np.asarray(from_v, dtype=float)) - np.square(np.asarray(to_v, dtype=float))
    return np.asarray(wh_from_j(0.5 * np.asarray(capacitance_f, dtype=float) * squares))


def minutes_of_supply(energy_wh: npt.ArrayLike, load_w: npt.ArrayLike, eta: npt.ArrayLike = 1.0) -> FloatArray:
    """Minutes an energy feeds a load.

    t = eta E/P

    Parameters
    ----------
    energy_wh : array_like
        Energy held [Wh].
    load_w : array_like
        Power of the load, above 0 [W].
    eta : array_like
        Efficiency from the energy to the load [-].

    Returns
    -------
    ndarray
        Time [min].

    References
    ----------
    Conservation of energy.

    Examples
    --------
    >>> round(60.0 * float(minutes_of_supply(supercapacitor_wh(100.0, 2.7, 1.35), 1.5, 0.85)), 1)
    154.9
    """
    given_wh = np.asarray(energy_wh, dtype=float) * np.asarray(eta, dtype=float)
    return np.asarray(MINUTES_PER_HOUR * given_wh / np.asarray(load_w, dtype=float))
