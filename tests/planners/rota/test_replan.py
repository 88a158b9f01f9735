"""Re-planning: the past stands, the rest changes least, and the independent judge finds nothing.

The events are those of three invented sites: a sprained ankle, an ill teenager, a broken stand, heat, new arrivals.
"""

from __future__ import annotations

import doctest

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits import add_record
from kitplanner.plan.edits_replan import Now, StationOut
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Bout, Person, Plan, Rota
from kitplanner.plan.shipped import demo
from kitplanner.planners.rota import replan_now, replan_records
from kitplanner.planners.rota.answer import rota_bouts
from kitplanner.planners.rota.charging import charging_table
from kitplanner.planners.rota.check import judge
from kitplanner.planners.rota.replan import ReplanError, adopt_replan, replan, replanned_rota
from kitplanner.planners.rota.replan_now import shortfall_wh
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from kitplanner.planners.supply import store_wh


def adopted(plan, work=3000):
    """The plan with a solver's rota adopted."""
    found = WalkAndImprove().solve(plan, Effort(work=work))
    bouts = tuple(
        Bout(
            id=f"b{number}",
            day=row.day,
            start=clock(row.start_min),
            end=clock(row.end_min),
            station=row.station,
            person=row.person,
            unit=row.unit,
            watcher=row.watcher,
        )
        for number, row in enumerate(found.bouts, start=1)
    )
    return replace(plan, rota=Rota(id="rota", slot_min=found.slot_min, bouts=bouts))


@pytest.fixture(scope="module")
def camp():
    return adopted(read_plan(demo("camp")))


@pytest.fixture(scope="module")
def house():
    return adopted(read_plan(demo("household")))


@pytest.fixture(scope="module")
def shelter():
    return adopted(read_plan(demo("shelter")), work=100)


def begun(bout, now):
    return (bout.day, minutes_of_day(bout.start)) < (now.day, now.minute)


def ended(bout, now):
    return (bout.day, minutes_of_day(bout.end)) <= (now.day, now.minute)


def with_locks(plan, *ids):
    bouts = tuple(replace(bout, locked=bout.id in ids) for bout in plan.rota.bouts)
    return replace(plan, rota=replace(plan.rota, bouts=bouts))


def broken_rules(answer):
    return [found.text for found in judge(answer.plan, replanned_rota(answer))]


@pytest.mark.parametrize("module", [replan_now, replan_records])
def test_doctests(module):
    assert doctest.testmod(module).failed == 0


def test_nothing_happened_changes_nothing(camp):
    answer = replan(camp, Now(day=2, minute=720))
    assert set(answer.bouts) == set(camp.rota.bouts)
    assert answer.changes == ()


def test_a_leader_sprains_an_ankle(camp):
    now = Now(day=2, minute=720, gone=("L3",))
    answer = replan(camp, now)
    assert broken_rules(answer) == []
    assert answer.unmet_wh == 0.0
    assert answer.unmet_margin_wh == pytest.approx(0.0, abs=0.1)
    assert not answer.remade
    assert not any(bout.person == "L3" or bout.watcher == "L3" for bout in answer.bouts if not begun(bout, now))
    # Only the leader's own turns, and turns of those who stand in, differ.
    mine = [bout for bout in camp.rota.bouts if bout.person == "L3" and not begun(bout, now)]
    assert mine
    dropped = [bout for row in answer.changes for bout in row.before]
    assert sorted(bout.id for bout in dropped) == sorted(bout.id for bout in mine)


def test_who_is_not_needed_keeps_every_turn(camp):
    now = Now(day=2, minute=720, gone=("L3",))
    answer = replan(camp, now)
    touched = {row.person for row in answer.changes}
    for person in camp.people:
        if person.id not in touched:
            old = [bout for bout in camp.rota.bouts if person.id == bout.person]
            new = [bout for bout in answer.bouts if person.id == bout.person]
            assert [replace(b, watcher=None) for b in old] == [replace(b, watcher=None) for b in new]
    assert len(touched) <= 8


def test_a_teenager_is_ill_from_day_two(house):
    now = Now(day=2, minute=0, gone=("M3",))
    answer = replan(house, now)
    assert broken_rules(answer) == []
    assert answer.unmet_wh == 0.0
    # By hand 1.1 Wh are to spare with all minutes worked; whole turns leave up to that much of the margin missing.
    assert answer.unmet_margin_wh < 1.1
    assert {row.person for row in answer.changes} <= {"M1", "M2", "M3", "M4"}


def test_a_stand_breaks_and_the_rest_is_made_afresh_where_that_serves_more(shelter):
    now = Now(day=2, minute=540, stations_out=(StationOut(station="C-S1", units=1, last_day=7),))
    answer = replan(shelter, now)
    assert broken_rules(answer) == []
    assert all(bout.unit == 1 for bout in answer.bouts if bout.station == "C-S1" and not begun(bout, now))
    assert answer.remade
    posted_wh = WalkAndImprove().solve(replace(answer.plan, rota=None), Effort(work=100)).objectives[0].value
    assert answer.unmet_wh <= posted_wh * 1.02


def test_heat_stops_the_afternoon_and_adds_no_turn_to_it(camp):
    now = Now(day=3, minute=720, air_degc=33.0)
    answer = replan(camp, now)
    assert broken_rules(answer) == []
    later = [bout for bout in answer.bouts if not begun(bout, now)]
    assert not [bout for bout in later if bout.station == "B-S1"]
    assert set(later) <= set(camp.rota.bouts)
    # By hand the use is still met and about 32 Wh of the margin are missing.
    assert answer.unmet_wh == 0.0
    assert answer.unmet_margin_wh == pytest.approx(32.0, abs=6.0)


def test_arrivals_stand_in_first(camp):
    new = Person(
        id="L5", name="Vendra", age=28, watts_by="share", share_legs_fraction=1.0, cap_min=60, stations=("B-S1",)
    )
    more = add_record(("people",), new)(camp)
    more = replace(more, devices=tuple(replace(d, count=d.count + 2) if d.id == "B-D2" else d for d in more.devices))
    now = Now(day=2, minute=600, gone=("L3",))
    answer = replan(more, now)
    assert broken_rules(answer) == []
    assert any(bout.person == "L5" for bout in answer.bouts)


def test_store_levels_below_plan_bring_more_turns_and_levels_as_planned_none(house):
    planned = charging_table(house, rota_bouts(house, house.rota), house.rota.slot_min).levels
    bank = house.stores[0]
    full_wh = store_wh(bank, 1.0)
    level = float(planned.stores_wh[bank.id][(1440 + 600) // planned.slot_min])
    as_planned = bank.floor_fraction + level / full_wh * (1.0 - bank.floor_fraction)
    now = Now(day=2, minute=600, store_fractions={bank.id: as_planned})
    assert shortfall_wh(house, house.rota, now) == pytest.approx(0.0, abs=1e-6)
    assert set(replan(house, now).bouts) == set(house.rota.bouts)
    low = replace(now, store_fractions={bank.id: as_planned - 0.10})
    assert shortfall_wh(house, house.rota, low) == pytest.approx(full_wh / 9.0, rel=1e-6)
    answer = replan(house, low)
    assert broken_rules(answer) == []
    assert len(answer.bouts) > len(house.rota.bouts)


def test_locked_turns_stay_where_they_may(camp):
    now = Now(day=2, minute=720, gone=("L3",))
    coming = [bout for bout in camp.rota.bouts if not begun(bout, now)]
    kept, lost = next(b for b in coming if b.person == "L4"), next(b for b in coming if b.person == "L3")
    answer = replan(with_locks(camp, kept.id, lost.id), now)
    assert replace(kept, locked=True) in answer.bouts
    assert [bout.id for bout in answer.lost_locks] == [lost.id]


def test_contradictory_locks_are_one_sentence(camp):
    now = Now(day=2, minute=720)
    one = next(bout for bout in camp.rota.bouts if not begun(bout, now) and bout.station == "B-S1")
    twice = replace(one, id="twice", unit=1, locked=True)
    plan = with_locks(camp, one.id)
    plan = replace(plan, rota=replace(plan.rota, bouts=(*plan.rota.bouts, twice)))
    with pytest.raises(ReplanError, match=r"^Locked turns contradict each other: .*; unlock one of them\.$"):
        replan(plan, now)


def test_a_plan_without_a_rota_is_refused():
    with pytest.raises(ReplanError, match="No rota is adopted"):
        replan(Plan(), Now(day=1, minute=0))


def test_adopting_is_one_edit_with_the_next_edition(camp):
    now = Now(day=2, minute=720, gone=("L3",))
    answer = replan(camp, now)
    plan = adopt_replan(answer)(camp)
    assert plan.rota.edition == camp.rota.edition + 1
    assert plan.rota.bouts == answer.bouts
    assert len({bout.id for bout in plan.rota.bouts}) == len(plan.rota.bouts)
    assert plan.people == answer.plan.people


def test_the_same_call_gives_the_same_rota(shelter):
    now = Now(day=3, minute=615, absent=("R23", "R30"))
    assert replan(shelter, now).bouts == replan(shelter, now).bouts


def test_a_turn_under_way_ends_when_its_person_leaves(camp):
    bout = next(each for each in camp.rota.bouts if each.day == 2 and each.station == "B-S1" and each.end >= "17:00")
    now = Now(day=2, minute=int(minutes_of_day(bout.start)) + 5, absent=(bout.person,))
    answer = replan(camp, now)
    assert broken_rules(answer) == []
    left = next(each for each in answer.bouts if each.id == bout.id)
    assert minutes_of_day(left.end) == now.minute


def test_a_slot_that_has_begun_is_past_for_who_leaves_in_the_middle_of_it(camp):
    bout = next(each for each in camp.rota.bouts if each.day == 2 and each.station == "B-S1" and each.end >= "17:00")
    end = int(minutes_of_day(bout.end))
    answer = replan(camp, Now(day=2, minute=end - 3, absent=(bout.person,), stations_out=(StationOut(station="B-S1"),)))
    assert broken_rules(answer) == []
    assert bout in answer.bouts
    away = next(person for person in answer.plan.people if person.id == bout.person)
    assert [spell.start for spell in away.absences] == [bout.end]


@settings(max_examples=40, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_the_past_is_untouched_and_every_answer_is_legal(camp, house, data):
    plan = data.draw(st.sampled_from([camp, house]))
    day = data.draw(st.integers(1, plan.days))
    minute = data.draw(st.integers(0, 1439))
    people = data.draw(st.lists(st.sampled_from([p.id for p in plan.people]), max_size=3, unique=True))
    station = data.draw(st.sampled_from([None, *plan.stations]))
    now = Now(
        day=day,
        minute=minute,
        absent=tuple(people),
        stations_out=(StationOut(station=station.id),) if station else (),
        air_degc=data.draw(st.sampled_from([None, 28.0, 33.0])),
        store_fractions={plan.stores[0].id: data.draw(st.floats(0.0, 1.0))} if data.draw(st.booleans()) else {},
    )
    answer = replan(plan, now, Effort(work=300))
    before = {bout for bout in plan.rota.bouts if ended(bout, now)}
    assert before <= set(answer.bouts)
    if not people and station is None and now.air_degc is None:
        assert {bout for bout in plan.rota.bouts if begun(bout, now)} <= set(answer.bouts)
    # What is new starts later; a turn that had to be broken off keeps its start and ends now, on the grid.
    for bout in set(answer.bouts) - set(plan.rota.bouts):
        assert not begun(bout, now) or minutes_of_day(bout.end) == now.minute // 5 * 5
    assert broken_rules(answer) == []


def test_a_posted_turn_that_lacks_its_watcher_gets_one(camp):
    watched = next(bout for bout in camp.rota.bouts if bout.watcher and bout.day == 2)
    bouts = tuple(replace(bout, watcher=None) if bout is watched else bout for bout in camp.rota.bouts)
    answer = replan(replace(camp, rota=replace(camp.rota, bouts=bouts)), Now(day=1, minute=0))
    assert broken_rules(answer) == []


def test_posted_turns_beyond_what_a_station_may_do_in_a_day_fall_away(camp):
    stations = tuple(replace(station, daily_min=20) for station in camp.stations)
    answer = replan(replace(camp, stations=stations), Now(day=1, minute=0))
    assert broken_rules(answer) == []
    assert len(answer.bouts) < len(camp.rota.bouts)
