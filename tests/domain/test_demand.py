"""Demand conversions against measured component currents and data-sheet duties."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.demand import (
    battery_wh_from_label,
    duty_power_w,
    lamp_power_w,
    power_from_loss_w,
    wh_from_battery_fraction,
    wh_from_power,
    wh_from_times,
)


def test_phone_battery_label():
    """4000 mAh at 3.85 V are 15.40 Wh; counted at a plug's 5 V they would be 20 Wh, 30 % too much."""
    assert battery_wh_from_label(4000.0, 3.85) == pytest.approx(15.40)
    assert battery_wh_from_label(10000.0, 3.7) == pytest.approx(37.0)
    assert battery_wh_from_label(4000.0, 5.0) / battery_wh_from_label(4000.0, 3.85) == pytest.approx(1.30, abs=0.01)


@pytest.mark.parametrize(
    ("milliamps", "milliwatts"), [(5.6, 21.56), (98 + 5.4, 398.1), (98 + 188 + 60, 1332), (98 + 470 + 60, 2418)]
)
def test_phone_component_currents(milliamps, milliwatts):
    """An open data set of a phone's component currents (CC BY 4.0), at 3.85 V: asleep, screen at least, 40 %, full."""
    assert 1000.0 * wh_from_power(3.85 * milliamps / 1000.0, 1.0) == pytest.approx(milliwatts, rel=1e-3)


def test_phone_days():
    """An emergency day: 1 h at 406 mA, 23 h at 15.6 mA; a usual day: 5 h at 476 mA, 19 h at 20.6 mA."""
    emergency = wh_from_power([3.85 * 0.406, 3.85 * 0.0156], [1.0, 23.0]).sum()
    usual = wh_from_power([3.85 * 0.476, 3.85 * 0.0206], [5.0, 19.0]).sum()
    assert emergency == pytest.approx(2.944, rel=1e-3)
    assert usual == pytest.approx(10.67, rel=1e-3)


def test_two_way_radio():
    """4 W hand-held at 7.4 V, 1.4 / 0.14 / 0.04 A, duty 5-5-90: 836.2 mW, 6.690 Wh in 8 h."""
    power = duty_power_w([7.4 * 1.4, 7.4 * 0.14, 7.4 * 0.04])
    assert power == pytest.approx(0.8362, rel=1e-3)
    assert wh_from_power(power, 8.0) == pytest.approx(6.690, rel=1e-3)


def test_lamp():
    """40 lm at 80 lm/W behind a driver of 0.85: 588.2 mW, 2.353 Wh in 4 h."""
    assert lamp_power_w(40.0, 80.0, 0.85) == pytest.approx(0.5882, rel=1e-3)
    assert wh_from_power(lamp_power_w(40.0, 80.0, 0.85), 4.0) == pytest.approx(2.353, rel=1e-3)
    assert lamp_power_w(100.0) == 1.0


def test_radio_on_the_hour():
    assert wh_from_times(0.5, 16.0, 5.0) + wh_from_times(0.5, 1.0, 10.0) == pytest.approx(0.75)


def test_hearing_aid():
    """1.1-2.7 mA at 1.3 V for 16 h: 22.88-56.16 mWh."""
    assert 1000.0 * wh_from_power([1.3e-3 * 1.1, 1.3e-3 * 2.7], 16.0) == pytest.approx([22.88, 56.16], rel=1e-3)


@given(fraction=st.floats(0.0, 3.0), battery=st.floats(0.1, 200.0), hours=st.floats(0.5, 48.0))
def test_percent_lost_gives_the_power_that_loses_it(fraction, battery, hours):
    power = power_from_loss_w(fraction, battery, hours)
    assert float(wh_from_power(power, hours)) == pytest.approx(float(wh_from_battery_fraction(fraction, battery)))


@given(power=st.floats(0.0, 100.0), times=st.floats(0.0, 50.0), minutes=st.floats(0.0, 600.0))
def test_times_and_minutes_are_hours(power, times, minutes):
    assert float(wh_from_times(power, times, minutes)) == pytest.approx(
        float(wh_from_power(power, times * minutes / 60.0))
    )
