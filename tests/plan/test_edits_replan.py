"""What has happened as an edit: absences, outages, heat, and refusals in a sentence."""

from __future__ import annotations

import doctest

import pytest
from msgspec import structs

from kitplanner.plan import edits_replan
from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_replan import Now, StationOut, events_edit
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Rota, Spell
from kitplanner.plan.shipped import demo


@pytest.fixture(scope="module")
def camp():
    return read_plan(demo("camp"))


def person(plan, key):
    return next(each for each in plan.people if each.id == key)


def test_doctests():
    assert doctest.testmod(edits_replan).failed == 0


def test_absent_is_for_the_rest_of_today_and_gone_for_good(camp):
    plan = events_edit(Now(day=2, minute=725, absent=("L1",), gone=("L3",)))(camp)
    assert person(plan, "L1").absences == (Spell(day=2, start="12:05", end="24:00"),)
    assert person(plan, "L3").absences == (Spell(day=2, start="12:05", end="24:00"), Spell(day=3))
    assert person(plan, "L2") is person(camp, "L2")
    assert not has_errors(check(plan))


def test_what_happens_holds_from_the_end_of_the_slot_that_has_begun(camp):
    plan = structs.replace(camp, rota=Rota(id="rota", slot_min=5))
    now = Now(day=2, minute=723, absent=("L1",), stations_out=(StationOut(station="B-S1"),), air_degc=33)
    after = events_edit(now)(plan)
    assert person(after, "L1").absences[0].start == "12:05"
    assert next(each for each in after.stations if each.id == "B-S1").outages[0].start == "12:05"
    assert after.conditions.temperatures[-1].start == "12:05"


def test_in_the_last_slot_nothing_is_left_of_today(camp):
    plan = structs.replace(camp, rota=Rota(id="rota", slot_min=5))
    after = events_edit(Now(day=2, minute=1438, absent=("L1",), gone=("L3",), air_degc=33))(plan)
    assert person(after, "L1").absences == ()
    assert person(after, "L3").absences == (Spell(day=3),)
    assert after.conditions.temperatures == plan.conditions.temperatures
    assert not has_errors(check(after))


def test_a_station_is_out_to_the_day_named(camp):
    plan = events_edit(Now(day=2, minute=0, stations_out=(StationOut(station="B-S2", units=1, last_day=9),)))(camp)
    crank = next(station for station in plan.stations if station.id == "B-S2")
    assert [(spell.day, spell.count) for spell in crank.outages] == [(2, 1), (3, 1)]
    assert not has_errors(check(plan))


def test_heat_is_a_part_of_today_with_its_limits_on(camp):
    plan = events_edit(Now(day=3, minute=720, air_degc=33))(camp)
    part = plan.conditions.temperatures[-1]
    assert (part.day, part.start, part.end, part.air_degc) == (3, "12:00", "24:00", 33)
    assert plan.conditions.heat_limits
    assert not has_errors(check(plan))


def test_nothing_happened_changes_nothing(camp):
    assert events_edit(Now(day=1, minute=0, store_fractions={"B-B1": 0.4}))(camp) is camp


@pytest.mark.parametrize(
    "now",
    [
        Now(day=0, minute=0),
        Now(day=4, minute=0),
        Now(day=1, minute=1440),
        Now(day=1, minute=0, absent=("nobody",)),
        Now(day=1, minute=0, stations_out=(StationOut(station="none"),)),
        Now(day=1, minute=0, stations_out=(StationOut(station="B-S1", units=2),)),
        Now(day=1, minute=0, store_fractions={"none": 0.5}),
        Now(day=1, minute=0, store_fractions={"B-B1": 50.0}),
    ],
)
def test_what_is_not_in_the_plan_is_refused_in_a_sentence(camp, now):
    with pytest.raises(EditError, match=r"; .*\.$"):
        events_edit(now)(camp)
