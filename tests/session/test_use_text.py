"""One use said in every way."""

from kitplanner.plan.records import Device
from kitplanner.session.use_text import same_use_text


def test_the_ways_agree(qapp):
    radio = Device(id="r", name="Radio", use_by="power_hours", use_w=0.5, use_h_per_day=3.0, battery_wh=6.0)
    assert same_use_text(radio) == "The same use: 1.5 Wh/day; 25 % of its battery a day; 0.5 W for 3 h."


def test_times_and_minutes_come_to_hours(qapp):
    fan = Device(id="f", name="Fan", use_by="times", use_w=3.0, use_times_per_day=4.0, use_min_each=30.0)
    assert same_use_text(fan) == "The same use: 6 Wh/day; 3 W for 2 h."


def test_nothing_is_said_of_a_use_that_is_not_given(qapp):
    assert same_use_text(Device(id="x", name="X", use_wh_per_day=None)) == ""
