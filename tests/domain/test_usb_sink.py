"""USB rules of the planner against the USB 2.0 specification, and the device's net power."""

from __future__ import annotations

import pytest

from kitplanner.domain.usb_sink import (
    CONFIGURED_LOAD_A,
    ENTRY_TEST_A,
    ENTRY_TEST_V,
    LOW_POWER_PORT_V,
    SLOW_CHARGE_W,
    UNIT_LOAD_A,
    USB_HIGH_V,
    USB_LOW_V,
    UsbSink,
    device_net_w,
)


def test_voltages_and_loads_of_usb_2_0() -> None:
    """USB 2.0 section 7.2: 4.75 to 5.25 V, 100 mA unit load, five when configured, 4.40 V at a low-power port."""
    assert (USB_LOW_V, USB_HIGH_V, LOW_POWER_PORT_V) == (4.75, 5.25, 4.40)
    assert pytest.approx(5 * UNIT_LOAD_A) == CONFIGURED_LOAD_A
    assert UsbSink().hold_v == LOW_POWER_PORT_V


def test_entry_test_of_charger_parts() -> None:
    """bq24195 data sheet, poor-source detection: 3.8 V with 30 mA drawn."""
    assert (ENTRY_TEST_V, ENTRY_TEST_A) == (3.8, 0.030)


def test_a_phone_with_its_screen_on_loses_while_cranking() -> None:
    """0.3 A at 4.918 V through a charger of 0.88: 1.298 W, less than a screen at 40 % (1.332 W) takes."""
    assert device_net_w(4.918, 0.3, 0.88, 0.0) == pytest.approx(1.298, abs=5e-4)
    assert device_net_w(4.918, 0.3, 0.88, 1.332) == pytest.approx(-0.034, abs=5e-4)
    assert device_net_w(4.918, 0.3, 0.88, 0.08) == pytest.approx(1.218, abs=5e-4)


def test_slow_charging_threshold() -> None:
    """Android platform source: 5 000 000 microwatts."""
    assert SLOW_CHARGE_W == 5_000_000e-6
