"""The difference of two rotas in words, person by person."""

from __future__ import annotations

from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Bout, Person, Plan, Station
from kitplanner.planners.rota.replan import ReplanAnswer
from kitplanner.planners.rota.replan_records import changes_of
from kitplanner.planners.rota.result import RotaSolution
from kitplanner.report.wording_replan import difference_head, difference_lines, person_sentence

PLAN = Plan(
    people=(Person(id="M1", name="Oruun"), Person(id="M4", name="Grenoo")),
    stations=(Station(id="s", name="Hand crank"), Station(id="p", name="Stand", kind="pedal")),
)


def bout(key, start, end, person="M4", **more):
    return Bout(id=key, **{"day": 1, "start": start, "end": end, "station": "s", "person": person, **more})


def answer(before, after, **more):
    solution = RotaSolution(
        slot_min=5, bouts=(), objectives=(), made_wh=0, made_bound_wh=0, steps=0, seconds=0, cut_off=False
    )
    told = {"lost_locks": (), "unmet_wh": 0.0, "unmet_margin_wh": 0.0, **more}
    return ReplanAnswer(
        plan=PLAN,
        now=Now(day=1, minute=0),
        bouts=tuple(after),
        changes=changes_of(before, after),
        solution=solution,
        **told,
    )


def test_one_move_is_one_sentence():
    one = answer([bout("b1", "15:20", "15:25")], [bout("b2", "16:00", "16:05")])
    assert difference_head(one) == "Only Grenoo's 15:20 on day 1 moves to 16:00."
    assert difference_lines(one) == (difference_head(one), "All use is served, margin included.")


def test_no_change_is_said():
    same = answer([bout("b1", "15:20", "15:25")], [bout("b1", "15:20", "15:25")])
    assert difference_lines(same)[0] == "Nobody's turns change."


def test_each_kind_of_change():
    before = [
        bout("b1", "09:00", "09:20"),
        bout("b2", "10:30", "10:50"),
        bout("b3", "09:00", "09:20", day=2),
        bout("b4", "15:00", "15:20", day=3, person="M1", watcher="M4"),
    ]
    after = [
        bout("b1", "09:00", "09:15"),
        bout("b2", "10:30", "10:50", station="p"),
        bout("b4", "15:00", "15:20", day=3, person="M1"),
        bout("b5", "12:00", "12:20", day=3, person="M1"),
    ]
    told = {row.person: person_sentence(PLAN, row) for row in changes_of(before, after)}
    assert told["M4"] == (
        "Grenoo's 09:00 on day 1 ends at 09:15 instead of 09:20; Grenoo's 10:30 on day 1 is now at Stand, unit 1; "
        "Grenoo's 09:00 on day 2 falls away; Grenoo no longer watches Oruun on day 3 from 15:00."
    )
    assert told["M1"] == "Oruun turns on day 3 from 12:00 to 12:20 at Hand crank."
    assert difference_head(answer(before, after)) == (
        "2 people have other turns than posted; everybody else's slip stays as it is."
    )


def test_lost_locks_unmet_use_and_a_remade_rota_are_told():
    lock = bout("b1", "15:20", "15:25", locked=True)
    lines = difference_lines(answer([lock], [], lost_locks=(lock,), unmet_wh=3.0, remade=True))
    assert "The locked turn of Grenoo on day 1 at 15:20 cannot stay: what has happened forbids it." in lines
    assert any("found afresh" in line for line in lines)
    assert lines[-1] == "3.0 Wh at the outlet (O) of use cannot be served."
    margin = difference_lines(answer([], [], unmet_margin_wh=2.0))
    assert margin[-1] == "All use is served; 2.0 Wh at the outlet (O) of the margin are missing."
