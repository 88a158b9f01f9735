"""A whole rota: solved, tabled, judged; adopted as it is, and read back without being solved."""

from __future__ import annotations

import math

import pytest
from msgspec.structs import replace

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.checks import check
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.records import Bout, Plan, Rota
from kitplanner.planners.rota import answer as module
from kitplanner.planners.rota.answer import (
    adopt,
    answer_of_adopted,
    edition_of,
    locked_violations,
    rota_answer,
    rota_bouts,
)
from kitplanner.planners.rota.result import RotaAnswer
from kitplanner.planners.rota.solver import Effort, WalkAndImprove
from kitplanner.report.wording_rota import verdict_lines

DEMOS = ("household", "camp", "shelter")


@pytest.fixture(scope="module")
def answers() -> dict[str, tuple[Plan, RotaAnswer]]:
    plans = {name: new_plan(name) for name in DEMOS}
    return {name: (plan, rota_answer(plan)) for name, plan in plans.items()}


@pytest.mark.parametrize("name", DEMOS)
def test_the_judge_finds_nothing_on_the_demos(answers, name: str) -> None:
    assert answers[name][1].violations == ()


def test_household_and_camp_are_met(answers) -> None:
    for name in ("household", "camp"):
        assert answers[name][1].unmet_wh == pytest.approx(0.0, abs=1e-6)
    # Sum of the scenario: about 33 Wh at the station in 5 days.
    assert answers["household"][1].solution.made_wh == pytest.approx(33.0, abs=1.0)


def test_shelter_says_what_cannot_be_met(answers) -> None:
    plan, found = answers["shelter"]
    assert found.unmet_wh > 100.0
    assert sum(row.wh for row in found.unmet) == pytest.approx(found.unmet_wh, rel=1e-6)
    known = {device.id for device in plan.devices}
    assert {row.device for row in found.unmet} <= known
    assert all(row.why for row in found.unmet)


@pytest.mark.parametrize("name", DEMOS)
def test_the_aims_carry_what_the_charging_table_leaves(answers, name: str) -> None:
    found = answers[name][1]
    rows = {row.name: row for row in found.solution.objectives}
    assert rows["unmet"].value == found.unmet_wh
    assert rows["margin"].value == found.unmet_margin_wh
    for row in (rows["unmet"], rows["margin"]):
        assert row.gap == pytest.approx(max(0.0, row.value - row.bound))
        assert row.proved == (row.gap <= 0.0015)


def test_twice_the_same(answers) -> None:
    for name in ("household", "camp"):
        plan, first = answers[name]
        second = rota_answer(plan)
        assert second.solution.bouts == first.solution.bouts
        assert second.charging == first.charging


def test_no_work_gives_the_first_legal_rota() -> None:
    plan = new_plan("camp")
    first = rota_answer(plan, Effort(work=0))
    assert first.solution.steps == 0
    assert first.solution.bouts
    assert first.violations == ()


def test_another_solver_is_asked(answers) -> None:
    class Recorded(WalkAndImprove):
        asked = 0

        def solve(self, plan, effort):
            Recorded.asked += 1
            return super().solve(plan, effort)

    rota_answer(new_plan("household"), Effort(work=0), solver=Recorded())
    assert Recorded.asked == 1


@pytest.mark.parametrize("name", DEMOS)
def test_adopting_is_an_edit_that_keeps_all_else(answers, name: str) -> None:
    plan, found = answers[name]
    adopted = adopt(found, plan, work=77)(plan)
    rota = adopted.rota
    assert replace(adopted, rota=None) == plan
    assert (rota.edition, rota.state, rota.work, rota.slot_min) == (1, "draft", 77, found.solution.slot_min)
    assert "highspy" in rota.solver
    assert len(rota.bouts) == len(found.solution.bouts)
    assert len({bout.id for bout in rota.bouts}) == len(rota.bouts)
    assert decode(encode(adopted)) == adopted
    assert not [problem for problem in check(adopted) if problem.severity == "error"]


@pytest.mark.parametrize("name", DEMOS)
def test_an_adopted_rota_is_read_and_never_solved(answers, name: str, monkeypatch) -> None:
    plan, found = answers[name]
    adopted = adopt(found, plan)(plan)

    def refuse(*_):
        raise AssertionError("solved again")

    monkeypatch.setattr(module.WalkAndImprove, "solve", refuse)
    read = answer_of_adopted(adopted)
    assert [replace(bout, output_wh=0.0) for bout in read.solution.bouts] == [
        replace(bout, output_wh=0.0) for bout in found.solution.bouts
    ]
    # Energies are worked out here from clock times and there from slots.
    assert [bout.output_wh for bout in read.solution.bouts] == pytest.approx(
        [bout.output_wh for bout in found.solution.bouts], abs=1e-6
    )
    assert read.solution.made_wh == pytest.approx(found.solution.made_wh)
    assert math.isnan(read.solution.made_bound_wh)
    assert [(row.day, row.start_min, row.device, row.energy_wh) for row in read.charging] == [
        (row.day, row.start_min, row.device, row.energy_wh) for row in found.charging
    ]
    assert read.unmet_wh == pytest.approx(found.unmet_wh, abs=1e-6)
    assert read.violations == ()


def test_a_plan_without_rota_has_no_adopted_answer() -> None:
    assert answer_of_adopted(new_plan("household")) is None


def test_the_same_rota_again_is_no_new_edition(answers) -> None:
    plan, found = answers["household"]
    adopted = adopt(found, plan)(plan)
    assert edition_of(adopted, found) == 1
    assert adopt(found, adopted)(adopted) is adopted


def test_another_rota_is_the_next_edition_and_what_stays_keeps_its_id(answers) -> None:
    plan, found = answers["household"]
    adopted = adopt(found, plan)(plan)
    fewer = replace(found, solution=replace(found.solution, bouts=found.solution.bouts[3:]))
    second = adopt(fewer, adopted)(adopted).rota
    assert second.edition == 2
    assert {bout.id for bout in second.bouts} < {bout.id for bout in adopted.rota.bouts}
    moved = replace(found.solution.bouts[0], start_min=1000, end_min=1010)
    third = replace(found, solution=replace(found.solution, bouts=(moved, *found.solution.bouts[1:])))
    new = {bout.id for bout in adopt(third, adopted)(adopted).rota.bouts} - {bout.id for bout in adopted.rota.bouts}
    assert len(new) == 1


def two_adults() -> Plan:
    """The household with its second adult turning like the first."""
    plan = new_plan("household")
    return replace(plan, people=(plan.people[0], replace(plan.people[0], id="M2", name="Sefwe"), *plan.people[2:]))


def test_changeover_is_taken_from_the_next_ones_bout() -> None:
    plan = two_adults()
    station = replace(plan.stations[0], changeover_min=4)
    plan = replace(plan, stations=(station,))

    def bout(name: str, person: str, start: str, end: str) -> Bout:
        return Bout(id=name, day=1, start=start, end=end, station=station.id, person=person)

    rota = Rota(
        id="rota",
        bouts=(
            bout("b1", "M1", "09:00", "09:20"),
            bout("b2", "M2", "09:20", "09:40"),
            bout("b3", "M2", "09:40", "09:50"),
            bout("b4", "M1", "09:53", "10:03"),
            bout("b5", "M2", "10:10", "10:20"),
            bout("b6", "nobody", "11:00", "11:20"),
        ),
    )
    # 6 W for an adult: 2 Wh in 20 min; 4 min lost, then none to oneself, then the 1 min that is missing, then none.
    watts = 6.0
    minutes = (20, 16, 10, 9, 10, 0)
    assert [row.output_wh for row in rota_bouts(plan, rota)] == pytest.approx([watts * m / 60 for m in minutes])


def test_locks_that_contradict_each_other_are_named() -> None:
    plan = two_adults()
    fields = {"day": 1, "station": "A-S1", "locked": True}
    first = Bout(id="b1", person="M1", start="09:00", end="09:20", **fields)
    second = Bout(id="b2", person="M2", start="09:10", end="09:30", **fields)
    apart = replace(second, start="09:20", end="09:40")
    assert locked_violations(plan) == ()
    assert locked_violations(replace(plan, rota=Rota(id="rota", bouts=(first, apart)))) == ()
    found = locked_violations(replace(plan, rota=Rota(id="rota", bouts=(first, second))))
    assert "overlap" in {row.rule for row in found}
    loose = replace(second, locked=False)
    assert locked_violations(replace(plan, rota=Rota(id="rota", bouts=(first, loose)))) == ()


def test_a_stopped_search_still_answers_and_says_that_the_table_is_missing(monkeypatch):
    plan = new_plan("shelter")
    monkeypatch.setattr("kitplanner.planners.rota.answer.GRACE_S", 0.0)
    answer = rota_answer(plan, Effort(cancelled=lambda: True))
    assert not answer.has_charging
    assert answer.solution.cut_off
    assert answer.charging == ()
    assert answer.violations == ()
    unmet = next(row for row in answer.solution.objectives if row.name == "unmet")
    assert answer.unmet_wh == unmet.value > 0.0
    assert any("charging table was not made" in line for line in verdict_lines(plan, answer))
    assert adopt(answer, plan, work=1)(plan).rota.charging == ()


def test_a_table_made_within_the_grace_comes_although_the_search_was_stopped(monkeypatch):
    monkeypatch.setattr("kitplanner.planners.rota.answer.GRACE_S", 60.0)
    answer = rota_answer(new_plan("household"), Effort(cancelled=lambda: True))
    assert answer.has_charging
    assert answer.charging


def test_every_stage_tells_how_far_it_is():
    told = []
    rota_answer(new_plan("camp"), Effort(progress=told.append))
    stages = list(dict.fromkeys(moment.stage for moment in told))
    assert stages == ["bounds", "first_rota", "unmet", "excess", "greatest_load", "spread", "unpopular", "handovers"]
    load = next(moment for moment in told if moment.stage == "greatest_load")
    assert load.value >= load.bound > 0.0
    assert max(moment.steps for moment in told) > 0
