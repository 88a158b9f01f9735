"""What a device does at the end of the cable: it takes its limit, or cuts its current to hold its input voltage."""

from __future__ import annotations

import math
from dataclasses import dataclass

from kitplanner.domain.units import Values

# USB 2.0 specification, section 7.2: source 4.75 to 5.25 V, unit load 100 mA, five unit loads after configuration.
USB_LOW_V, USB_HIGH_V = 4.75, 5.25
UNIT_LOAD_A = 0.100
CONFIGURED_LOAD_A = 0.500
# USB 2.0, section 7.2.2: lowest voltage at a low-power port.
LOW_POWER_PORT_V = 4.40
# Charger data sheets (Texas Instruments bq24195, "poor source" test): the input stays above 3.8 V with 30 mA drawn.
ENTRY_TEST_V, ENTRY_TEST_A = 3.8, 0.030
# Below these plug watts phones call a charge slow (threshold in the Android platform source).
SLOW_CHARGE_W = 5.0
# Least current that is worth connecting: common practice, no source.
WORTHWHILE_A = 0.300
# How far below the held voltage a sink counts as sagging, when it holds exactly that voltage.
HOLD_TOLERANCE_V = 1e-3


@dataclass(frozen=True)
class UsbSink:
    """Greatest current [A], held input voltage [V], least current that charges [A]; numbers or arrays."""

    limit_a: Values = math.inf
    hold_v: Values = LOW_POWER_PORT_V
    least_a: Values = 0.10


def device_net_w(plug_v: Values, plug_a: Values, eta_charger: Values, system_w: Values) -> Values:
    """Power that reaches the battery while the device itself draws some: eta V I - P_system.

    Parameters
    ----------
    plug_v : float or array
        Voltage at the device's plug [V].
    plug_a : float or array
        Current into the device [A].
    eta_charger : float or array
        Efficiency of the device's charger [-].
    system_w : float or array
        What the running device draws [W].

    Returns
    -------
    float or array
        Power into the battery; negative when the battery drains in spite of the cable [W].

    References
    ----------
    Charger data sheets with input-voltage regulation (Texas Instruments bq24195, bq25601D): the battery helps when
    the input does not suffice.

    Examples
    --------
    >>> round(device_net_w(4.918, 0.3, 0.88, 0.08), 3)
    1.218
    """
    return eta_charger * plug_v * plug_a - system_w


def dummy_load_a(output_v: Values, load_ohm: Values) -> Values:
    """Current of a resistor that stands in for a device: I = V / R.

    Parameters
    ----------
    output_v : float or array
        Voltage across the resistor [V].
    load_ohm : float or array
        Resistance [ohm].

    Returns
    -------
    float or array
        Current [A].

    Examples
    --------
    >>> round(dummy_load_a(5.148, 15.0), 4)
    0.3432
    """
    return output_v / load_ohm
