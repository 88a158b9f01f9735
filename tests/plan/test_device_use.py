"""Use of a day by its way, by hand."""

import pytest

from kitplanner.plan.device_use import device_use_wh_per_day, hours_of_use
from kitplanner.plan.records import Device, Window


@pytest.mark.parametrize(
    ("fields", "energy"),
    [
        ({"use_by": "power_hours", "use_w": 0.54, "use_h_per_day": 12.0}, 6.48),
        ({"use_by": "power_hours", "use_w": 2.0, "use_windows": (Window(start="20:00", end="23:00"),)}, 6.0),
        ({"use_by": "percent", "battery_wh": 15.4, "use_battery_fraction_per_day": 0.39}, 6.006),
        ({"use_by": "times", "use_w": 0.5, "use_times_per_day": 16.0, "use_min_each": 5.0}, 2 / 3),
        ({"use_wh_per_day": 6.0}, 6.0),
        ({"use_by": "times", "use_w": 0.5}, None),
        ({"use_by": "percent", "use_battery_fraction_per_day": 0.39}, None),
        ({"use_by": "power_hours"}, None),
        ({}, None),
    ],
)
def test_use_of_a_day(fields, energy):
    found = device_use_wh_per_day(Device(id="D", name="D", **fields))
    assert found == (None if energy is None else pytest.approx(energy, rel=1e-12))


def test_hours_given_come_before_the_times_of_use():
    windows = (Window(start="20:00", end="23:00"),)
    assert hours_of_use(Device(id="D", name="D", use_h_per_day=1.0, use_windows=windows)) == 1.0
