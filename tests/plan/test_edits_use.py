"""The ways of giving a device's use: whatever way follows, the energy of a day stays."""

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.checks import check
from kitplanner.plan.device_use import device_use_wh_per_day, window_hours
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_use import WAY_KEYS, change_use_way, set_use, use_in_ways
from kitplanner.plan.records import Device, Note, Plan, Window
from kitplanner.planners.demand import use_wh_per_day
from tests.strategies import records

WAYS = tuple(WAY_KEYS)


def changed(device, *ways):
    plan = Plan(devices=(device,))
    for way in ways:
        plan = change_use_way(device.id, way)(plan)
    return plan.devices[0]


@given(records("device"), st.lists(st.sampled_from(WAYS), min_size=1, max_size=5))
def test_the_energy_of_a_day_stays_through_any_chain_of_ways(device, ways):
    energy = use_wh_per_day(device)
    # Percent needs a battery that this use does not empty ten times a day.
    assume("percent" not in ways or (device.battery_wh and energy <= 10 * device.battery_wh))
    assume(energy == 0 or energy > 1e-6)
    assume(energy <= 24 * 1e4)
    after = changed(device, *ways)
    assert after.use_by == ways[-1]
    assert use_wh_per_day(after) == pytest.approx(energy, rel=1e-9, abs=1e-12)


@given(records("device"))
def test_the_use_read_here_is_the_planners(device):
    energy = device_use_wh_per_day(device)
    if energy is not None:
        assert use_wh_per_day(device) == pytest.approx(energy, rel=1e-12)


@pytest.mark.parametrize("way", WAYS)
def test_a_demo_like_phone_calculates_in_every_way(way):
    phone = Device(id="D1", name="Phone", battery_wh=15.4, use_wh_per_day=6.0)
    after = changed(phone, way)
    # The same device entered in every way: 6 Wh a day, 39 % of 15.4 Wh, 0.25 W through 24 hours.
    assert use_wh_per_day(after) == pytest.approx(6.0, rel=1e-12)
    assert not [one for one in check(Plan(devices=(after,))) if one.severity == "error"]


def test_known_watts_and_hours_are_kept():
    lamp = Device(id="D1", name="Lamp", use_by="power_hours", use_w=1.5, use_h_per_day=4.0)
    assert changed(lamp, "wh_per_day").use_wh_per_day == 6.0
    back = changed(lamp, "wh_per_day", "power_hours")
    assert (back.use_w, back.use_h_per_day) == (1.5, 4.0)
    timed = Device(id="D1", name="R", use_wh_per_day=1.0, use_windows=(Window(start="20:00", end="22:00"),))
    assert changed(timed, "power_hours").use_w == 0.5
    often = Device(id="D1", name="R", use_by="times", use_w=0.5, use_times_per_day=16.0, use_min_each=5.0)
    assert changed(often, "power_hours").use_h_per_day == pytest.approx(4 / 3)


def test_a_guess_stays_a_guess_and_an_own_value_own():
    guess = Note(mark="guess", source="from memory", spread_fraction=0.4)
    phone = Device(id="D1", name="Phone", battery_wh=15.0, use_wh_per_day=6.0, notes={"use_wh_per_day": guess})
    assert changed(phone, "percent").notes["use_battery_fraction_per_day"] == guess
    own = structs.replace(phone, notes={"use_wh_per_day": Note(mark="own")})
    assert changed(own, "percent").notes["use_battery_fraction_per_day"].mark == "own"


def test_percent_without_a_battery_or_far_beyond_it_is_refused():
    with pytest.raises(EditError, match="percent needs a battery and none is given; enter its Wh"):
        changed(Device(id="D1", name="Router", use_wh_per_day=72.0), "percent")
    with pytest.raises(EditError, match="more than 10 times its battery"):
        changed(Device(id="D1", name="Laptop", battery_wh=5.0, use_wh_per_day=90.0), "percent")
    with pytest.raises(EditError, match="no such way"):
        changed(Device(id="D1", name="Laptop"), "guessing")


def test_a_use_not_given_yet_stays_so():
    after = changed(Device(id="D1", name="Lamp"), "power_hours")
    assert (after.use_by, after.use_w, after.use_h_per_day) == ("power_hours", None, None)


def test_the_same_way_again_changes_nothing():
    plan = Plan(devices=(Device(id="D1", name="Lamp", use_wh_per_day=1.0),))
    assert change_use_way("D1", "wh_per_day")(plan) is plan


def test_setting_one_number_makes_its_way_count():
    plan = Plan(devices=(Device(id="D1", name="Lamp", use_wh_per_day=6.0),))
    (lamp,) = set_use("D1", "use_h_per_day", 2.0)(plan).devices
    assert (lamp.use_by, lamp.use_w, lamp.use_h_per_day) == ("power_hours", 0.25, 2.0)
    with pytest.raises(EditError, match="no number of its use"):
        set_use("D1", "battery_wh", 2.0)(plan)


def test_the_other_ways_can_be_shown_beside():
    ways = use_in_ways(Device(id="D1", name="Phone", battery_wh=12.0, use_by="power_hours", use_w=0.5, use_h_per_day=6))
    assert (ways.wh_per_day, ways.battery_fraction_per_day, ways.use_w, ways.h_per_day) == (3.0, 0.25, 0.5, 6.0)
    assert (ways.times_per_day, ways.min_each) == (1.0, 360.0)
    assert use_in_ways(Device(id="D1", name="Lamp")).wh_per_day is None


def test_overlapping_windows_count_once():
    assert window_hours(()) == 0
    assert window_hours((Window(start="23:00", end="01:00"), Window(start="00:30", end="24:00"))) == 24
