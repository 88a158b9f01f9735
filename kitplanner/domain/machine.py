"""Permanent-magnet DC machine as a generator.

The machine is linear: no saturation, inductance ignored, steady current, brushes not sparking, winding
within its thermal limit. Current out of the generator is positive, torque and speed are those the person
puts in.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from kitplanner.domain.gear import GearBox
from kitplanner.domain.units import Values, rad_s_from_rpm, rpm_from_rad_s


@dataclass(frozen=True)
class DcMachine:
    """Constants of one machine: Ke [V.s/rad], Ra [ohm], brush drop [V], Coulomb drag [N.m], viscous drag [N.m.s].

    Raises
    ------
    ValueError
        When Ke or Ra is not above zero or a drag is negative.
    """

    ke_v_s: float
    ra_ohm: float
    vb_v: float = 0.0
    tc_nm: float = 0.0
    b_nm_s: float = 0.0

    def __post_init__(self) -> None:
        """Refuse constants for which the equations have no meaning."""
        if not (self.ke_v_s > 0 and self.ra_ohm > 0):
            raise ValueError("A machine needs a voltage constant and a winding resistance above zero.")
        if not (self.vb_v >= 0 and self.tc_nm >= 0 and self.b_nm_s >= 0):
            raise ValueError("Brush drop and drag of a machine cannot be negative.")


def ke_from_kv(kv_rpm_per_v: Values) -> Values:
    """Voltage constant from the speed constant of motor lists: Ke = 60 / (2 pi kV).

    Parameters
    ----------
    kv_rpm_per_v : float or array
        Speed constant [rpm/V].

    Returns
    -------
    float or array
        Voltage constant, equal to the torque constant in N.m/A [V.s/rad].

    Examples
    --------
    >>> round(ke_from_kv(461.5), 5)
    0.02069
    """
    return 1.0 / rad_s_from_rpm(kv_rpm_per_v)


def emf_v(ke_v_s: Values, speed_rad_s: Values) -> Values:
    """Electromotive force of the turning armature: E = Ke w.

    Parameters
    ----------
    ke_v_s : float or array
        Voltage constant [V.s/rad].
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Electromotive force [V].

    References
    ----------
    Fitzgerald, Kingsley, Umans, Electric Machinery, 6th edition, 2003, section 7.3 (from memory).

    Examples
    --------
    >>> round(emf_v(0.045, rad_s_from_rpm(2400.0)), 2)
    11.31
    """
    return ke_v_s * speed_rad_s


def terminal_v(machine: DcMachine, speed_rad_s: Values, current_a: Values) -> Values:
    """Terminal voltage of the loaded generator: V = Ke w - Ra I - Vb.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed [rad/s].
    current_a : float or array
        Current out of the generator [A].

    Returns
    -------
    float or array
        Terminal voltage [V].

    References
    ----------
    Fitzgerald, Kingsley, Umans, Electric Machinery, 6th edition, 2003, section 7.4 (from memory).

    Examples
    --------
    >>> round(terminal_v(DcMachine(0.045, 1.5), rad_s_from_rpm(2400.0), 0.5298), 2)
    10.52
    """
    return machine.ke_v_s * speed_rad_s - machine.ra_ohm * current_a - machine.vb_v


def drag_torque_nm(machine: DcMachine, speed_rad_s: Values) -> Values:
    """Torque that turns the unloaded machine: T0 = Tc + B w.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Drag torque at the machine's shaft [N.m].

    Examples
    --------
    >>> drag_torque_nm(DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6), 100.0)
    0.004
    """
    return machine.tc_nm + machine.b_nm_s * speed_rad_s


def shaft_torque_nm(machine: DcMachine, speed_rad_s: Values, current_a: Values) -> Values:
    """Torque at the machine's shaft: T = Ke I + Tc + B w, affine in current and not in speed.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed [rad/s].
    current_a : float or array
        Current out of the generator [A].

    Returns
    -------
    float or array
        Shaft torque [N.m].

    References
    ----------
    Fitzgerald, Kingsley, Umans, Electric Machinery, 6th edition, 2003, section 7.3 (from memory); Kt = Ke follows
    from the balance E I = Kt I w.

    Examples
    --------
    >>> round(shaft_torque_nm(DcMachine(0.045, 1.5, 0.0, 0.004), 0.0, 0.6), 3)
    0.031
    """
    return machine.ke_v_s * current_a + drag_torque_nm(machine, speed_rad_s)


def short_circuit_a(machine: DcMachine, speed_rad_s: Values) -> Values:
    """Current into a short circuit at a speed: Isc = (E - Vb) / Ra, not below zero.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Short-circuit current; running there overheats and demagnetises the machine [A].

    Examples
    --------
    >>> round(float(short_circuit_a(DcMachine(0.045, 1.5), rad_s_from_rpm(2400.0))), 3)
    7.54
    """
    amps: Values = np.maximum(machine.ke_v_s * speed_rad_s - machine.vb_v, 0.0) / machine.ra_ohm
    return amps


def greatest_power_w(machine: DcMachine, speed_rad_s: Values) -> Values:
    """Greatest electrical power at a speed: Pmax = (E - Vb)^2 / (4 Ra), at half the short-circuit current.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Greatest power at the terminals, where no more than half the mechanical power arrives [W].

    References
    ----------
    Maximum power transfer theorem, Jacobi 1840 (general knowledge).

    Examples
    --------
    >>> round(float(greatest_power_w(DcMachine(0.045, 1.5), rad_s_from_rpm(2400.0))), 2)
    21.32
    """
    return machine.ra_ohm * short_circuit_a(machine, speed_rad_s) ** 2 / 4.0


def best_current_a(machine: DcMachine, speed_rad_s: Values) -> Values:
    """Current at which the machine is most efficient at a speed.

    I0 = T0 / Ke, u = sqrt(1 + Isc / I0), I_best = I0 (u - 1); exact for a brush drop of zero.

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine; its drag must be above zero.
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Most efficient current [A].

    References
    ----------
    Derived here from d(eta)/dI = 0 with T0 constant; the generator's twin of the motor result
    eta = (1 - sqrt(I0 / Istall))^2.

    Examples
    --------
    >>> round(float(best_current_a(DcMachine(0.045, 1.5, 0.0, 0.004), rad_s_from_rpm(2400.0))), 4)
    0.7346
    """
    drag_a = drag_torque_nm(machine, speed_rad_s) / machine.ke_v_s
    u = np.sqrt(1.0 + short_circuit_a(machine, speed_rad_s) / drag_a)
    best: Values = drag_a * (u - 1.0)
    return best


def best_eta(machine: DcMachine, speed_rad_s: Values) -> Values:
    """Efficiency of the machine at its most efficient current: (u - 1) / (u + 1).

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine; its drag must be above zero.
    speed_rad_s : float or array
        Shaft speed [rad/s].

    Returns
    -------
    float or array
        Electrical power out over mechanical power in [-].

    References
    ----------
    Derived here, see `best_current_a`.

    Examples
    --------
    >>> round(float(best_eta(DcMachine(0.045, 1.5, 0.0, 0.004), rad_s_from_rpm(2400.0))), 4)
    0.8051
    """
    drag_a = drag_torque_nm(machine, speed_rad_s) / machine.ke_v_s
    u = np.sqrt(1.0 + short_circuit_a(machine, speed_rad_s) / drag_a)
    eta: Values = (u - 1.0) / (u + 1.0)
    return eta


def eta_at(machine: DcMachine, speed_rad_s: Values, current_a: Values) -> Values:
    """Efficiency of the machine at a speed and a current: V I / (T w).

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    speed_rad_s : float or array
        Shaft speed, above zero [rad/s].
    current_a : float or array
        Current out of the generator [A].

    Returns
    -------
    float or array
        Electrical power out over mechanical power in [-].

    Examples
    --------
    >>> round(eta_at(DcMachine(0.045, 1.5, 0.0, 0.004), rad_s_from_rpm(2400.0), 0.8), 4)
    0.8045
    """
    out_w = terminal_v(machine, speed_rad_s, current_a) * current_a
    return out_w / (shaft_torque_nm(machine, speed_rad_s, current_a) * speed_rad_s)


def regulating_speed_rpm(machine: DcMachine, gear: GearBox, terminal_volts_v: Values, current_a: Values) -> Values:
    """Crank speed at which the loaded machine gives a terminal voltage: n = 60 (V + Ra I + Vb) / (2 pi N Ke).

    Parameters
    ----------
    machine : DcMachine
        Constants of the machine.
    gear : GearBox
        Gear between crank and machine.
    terminal_volts_v : float or array
        Wanted terminal voltage [V].
    current_a : float or array
        Current out of the generator [A].

    Returns
    -------
    float or array
        Turning speed of the crank [rpm].

    Examples
    --------
    >>> round(regulating_speed_rpm(DcMachine(0.045, 1.5), GearBox(40.0), 10.51, 0.5298), 1)
    60.0
    """
    emf = terminal_volts_v + machine.ra_ohm * current_a + machine.vb_v
    return rpm_from_rad_s(emf / machine.ke_v_s) / gear.ratio
