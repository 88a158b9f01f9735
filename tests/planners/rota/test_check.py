"""The judge: a legal rota has no findings; each fault planted in it is caught by the rule's name, in one sentence."""

from __future__ import annotations

import ast
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from msgspec import structs

import kitplanner.planners.rota.check as check_module
from kitplanner.plan.records import (
    Block,
    Bout,
    ChargeSpell,
    ChargingPoint,
    Conditions,
    Device,
    Group,
    OtherSource,
    Person,
    Plan,
    Rota,
    Spell,
    Station,
    Store,
    TemperaturePart,
    Window,
)
from kitplanner.planners.rota.check import Violation, judge

Change = Callable[[Plan, Rota], tuple[Plan, Rota]]


def window(start: str, end: str) -> tuple[Window, ...]:
    return (Window(start=start, end=end),)


def legal_plan() -> Plan:
    """A small camp with one of everything that a rule needs."""
    return Plan(
        title="Test camp",
        days=2,
        groups=(Group(id="g", name="Kitchen"),),
        people=(
            Person(id="ada", name="Ada", age=30, group="g", hours=window("08:00", "18:00")),
            Person(id="bo", name="Bo", age=45),
            Person(id="cy", name="Cy", age=14),
            Person(id="di", name="Di", age=35, cap_min=0, watch_hours=window("09:00", "12:00")),
            Person(id="ed", name="Ed", age=70),
        ),
        stations=(
            Station(
                id="pedal",
                name="Stand",
                kind="pedal",
                count=2,
                output_w=40.0,
                hours=window("08:00", "20:00"),
                daily_min=60,
                changeover_min=2,
            ),
            Station(id="crank", name="Crank", output_w=6.0),
        ),
        blocks=(
            Block(id="q", name="Quiet", kind="quiet", windows=window("22:00", "07:00")),
            Block(id="m", name="Lunch", kind="meal", windows=window("12:00", "13:00"), groups=("g",), days=(1,)),
        ),
        stores=(Store(id="bank", name="Bank", nominal_wh=100.0, start_fraction=0.3, outlets=2),),
        devices=(
            Device(id="phone", name="Phone", count=4, battery_wh=10.0, start_fraction=0.5, use_wh_per_day=3.0),
            Device(id="lamp", name="Lamp", use_wh_per_day=2.0, use_windows=window("18:00", "22:00")),
        ),
        charging_points=(ChargingPoint(id="desk", name="Desk", hours=window("09:00", "12:00"), outlets=3),),
    )


def bout(number: int, person: str, start: str, end: str, **more: Any) -> Bout:
    chosen: dict[str, Any] = {"day": 1, "station": "pedal"} | more
    return Bout(id=f"b{number}", start=start, end=end, person=person, **chosen)


def legal_rota() -> Rota:
    return Rota(
        id="rota",
        bouts=(
            bout(1, "ada", "09:00", "09:20"),
            bout(2, "bo", "09:00", "09:20", unit=2),
            bout(3, "cy", "09:30", "09:45", watcher="di"),
            bout(4, "ada", "10:30", "10:50"),
            bout(5, "bo", "21:40", "22:00", station="crank", day=2),
        ),
        charging=(
            ChargeSpell(id="c1", day=1, start="09:00", end="10:00", device="phone", count=3, energy_wh=12.0),
            ChargeSpell(id="c2", day=1, start="18:00", end="22:00", device="lamp", energy_wh=2.0),
        ),
    )


def with_bout(place: int, **changes: Any) -> Change:
    def change(plan: Plan, rota: Rota) -> tuple[Plan, Rota]:
        bouts = list(rota.bouts)
        bouts[place] = structs.replace(bouts[place], **changes)
        return plan, structs.replace(rota, bouts=tuple(bouts))

    return change


def with_extra(*bouts: Bout) -> Change:
    return lambda plan, rota: (plan, structs.replace(rota, bouts=rota.bouts + bouts))


def with_charging(place: int, **changes: Any) -> Change:
    def change(plan: Plan, rota: Rota) -> tuple[Plan, Rota]:
        rows = list(rota.charging)
        rows[place] = structs.replace(rows[place], **changes)
        return plan, structs.replace(rota, charging=tuple(rows))

    return change


def with_record(section: str, place: int, **changes: Any) -> Change:
    def change(plan: Plan, rota: Rota) -> tuple[Plan, Rota]:
        records = list(getattr(plan, section))
        records[place] = structs.replace(records[place], **changes)
        return structs.replace(plan, **{section: tuple(records)}), rota

    return change


def with_plan(**changes: Any) -> Change:
    return lambda plan, rota: (structs.replace(plan, **changes), rota)


HOT_AFTERNOON = TemperaturePart(id="t", day=1, start="08:00", end="12:00", air_degc=33.0)
COOL_DAY = TemperaturePart(id="t", day=0, start="00:00", end="24:00", air_degc=24.0)

# Rule, what is changed, and what the sentence must hold: who, when, by how much.
FAULTS: tuple[tuple[str, Change, str], ...] = (
    ("unknown", with_bout(0, person="nobody"), "nobody"),
    ("unknown", with_bout(0, station="nowhere"), "nowhere"),
    ("unknown", with_bout(2, watcher="nobody"), "nobody"),
    ("unknown", with_charging(0, device="nothing"), "nothing"),
    ("day", with_bout(0, day=3), "day 3"),
    ("midnight", with_bout(4, start="21:50", end="00:10"), "21:50 to 00:10"),
    ("midnight", with_charging(0, start="11:00", end="11:00"), "11:00 to 11:00"),
    ("bout", with_bout(0, end="09:25"), "5 min too long"),
    ("bout", with_record("people", 0, bout_min=15), "5 min too long"),
    ("bout", with_record("people", 0, level="light"), "at most 10 min"),
    ("rest", with_bout(3, start="09:50", end="10:10"), "10 min too short"),
    ("rest", with_record("people", 0, rest_min=75), "5 min too short"),
    ("cap", with_record("people", 0, cap_min=30), "10 min too many"),
    ("cap", with_record("people", 0, level="light", cap_min=None), "10 min too many"),
    ("hours", with_bout(3, start="17:45", end="18:05"), "5 min outside their own hours"),
    ("minors", with_bout(2, start="19:00", end="19:15", watcher="bo"), "15 min outside the hours for minors"),
    ("minors", with_plan(conditions=Conditions(minors_hours=window("10:00", "18:00"))), "15 min outside"),
    ("blocked", with_bout(3, start="11:50", end="12:10"), "10 min inside"),
    ("quiet", with_bout(4, start="21:45", end="22:05"), "5 min in the quiet hours"),
    ("quiet", with_record("blocks", 0, groups=("g",), windows=window("09:10", "09:30")), "10 min inside"),
    ("day_off", with_record("people", 1, days_off=(2,)), "day off"),
    ("absent", with_record("people", 1, absences=(Spell(day=2, start="21:50"),)), "10 min of it while away"),
    ("day_off", with_record("people", 3, days_off=(1,)), "Di watches"),
    ("allowed", with_record("people", 0, stations=("crank",)), "not among their stations"),
    ("age", with_record("people", 2, age=12), "not at 12 years"),
    ("age", with_record("people", 0, age=82), "82 years"),
    ("service", with_record("stations", 0, in_service=False), "out of service"),
    ("guard", with_record("stations", 0, guarded=False), "guard"),
    ("station_hours", with_record("stations", 0, hours=window("09:05", "20:00")), "5 min outside"),
    ("units", with_bout(0, unit=3), "unit 3"),
    ("units", with_record("stations", 0, count=1), "there are 1"),
    ("outage", with_record("stations", 0, outages=(Spell(day=1, start="09:10", end="09:15"),)), "1 too many"),
    ("overlap", with_bout(1, unit=1), "20 min before"),
    ("daily", with_record("stations", 0, daily_min=50), "5 min too many"),
    ("watcher", with_bout(2, watcher=None), "nobody watching"),
    ("watcher", with_record("stations", 1, needs_watcher=True), "nobody watching"),
    ("watcher", with_bout(2, watcher="cy"), "own bout"),
    ("watcher", with_record("people", 3, age=17), "17 years"),
    ("watcher", with_record("people", 3, may_watch=False), "chose not to"),
    ("watcher", with_record("people", 3, watch_hours=window("09:40", "12:00")), "10 min outside"),
    ("two_places", with_extra(bout(9, "ada", "09:10", "09:20", station="crank")), "10 min in two places"),
    ("two_places", with_bout(2, start="09:00", end="09:15", watcher="bo", station="crank"), "15 min in two places"),
    ("charging_times", with_record("devices", 0, charge_windows=window("09:30", "12:00")), "30 min outside"),
    ("attended", with_charging(0, start="11:30", end="12:30"), "30 min of it unattended"),
    ("outlets", with_record("charging_points", 0, outlets=2), "1 too few"),
    ("tickets", with_charging(0, first_ticket=3), "tickets run from 1 to 4"),
    ("energy", with_record("stores", 0, start_fraction=0.1, eta_in=0.3), "Wh less"),
    ("acceptance", with_charging(0, energy_wh=30.0), "Wh too much"),
    ("full", with_record("devices", 0, start_fraction=0.99, use_wh_per_day=0.1, taper_tau_h=0.001), "more than it"),
)


def rules(found: tuple[Violation, ...]) -> set[str]:
    return {each.rule for each in found}


def test_legal_rota_has_no_findings() -> None:
    assert judge(legal_plan(), legal_rota()) == ()


def test_empty_rota_is_legal() -> None:
    assert judge(legal_plan(), Rota(id="r")) == ()


@pytest.mark.parametrize(("rule", "change", "words"), FAULTS)
def test_planted_fault_is_caught_by_name(rule: str, change: Change, words: str) -> None:
    found = judge(*change(legal_plan(), legal_rota()))
    mine = [each for each in found if each.rule == rule]
    assert mine, rules(found)
    assert any(words in each.text for each in mine), [each.text for each in mine]
    for each in mine:
        assert each.text.endswith(".")
        assert "\n" not in each.text


@pytest.mark.parametrize(
    ("rule", "change"),
    [
        ("ramp_up", with_plan(conditions=Conditions(ramp_up=True))),
        ("heat", with_plan(conditions=Conditions(heat_limits=True, temperatures=(HOT_AFTERNOON,)))),
        ("heat", with_plan(conditions=Conditions(heat_limits=True, air_degc=27.0))),
    ],
)
def test_heat_and_ramp_up_count_where_switched_on(rule: str, change: Change) -> None:
    plan, rota = change(legal_plan(), legal_rota())
    assert rule in rules(judge(plan, rota))
    off = structs.replace(plan.conditions, heat_limits=False, ramp_up=False)
    assert judge(structs.replace(plan, conditions=off), rota) == ()


def test_a_cool_part_of_the_day_overrides_hot_air() -> None:
    """Below 26 degC volunteers turn 20 min, up to 29 degC 15 min (volunteers' rule, judgement)."""
    conditions = Conditions(heat_limits=True, air_degc=27.0, temperatures=(COOL_DAY,))
    assert judge(structs.replace(legal_plan(), conditions=conditions), legal_rota()) == ()


def test_ramp_up_grows_by_a_fifth_a_day() -> None:
    """NIOSH 2016-106: 20 % of full effort on day 1, 40 % on day 2; of 60 min 12 and 24."""
    plan = structs.replace(legal_plan(), conditions=Conditions(ramp_up=True))
    found = judge(plan, legal_rota())
    first = next(each for each in found if each.rule == "ramp_up" and each.person == "ada")
    assert "at most 12 min" in first.text
    assert not [each for each in found if each.day == 2]


def test_own_values_may_only_tighten() -> None:
    generous = with_record("people", 0, bout_min=60, cap_min=300, rest_min=1)
    plan, rota = with_bout(0, end="09:30")(*generous(legal_plan(), legal_rota()))
    assert "bout" in rules(judge(plan, rota))


def test_two_outages_add_up_and_a_spare_unit_covers_one() -> None:
    one = Spell(day=1, start="09:30", end="09:40")
    plan, rota = with_record("stations", 0, outages=(one,))(legal_plan(), legal_rota())
    assert judge(plan, rota) == ()
    plan, rota = with_record("stations", 0, outages=(one, one))(legal_plan(), legal_rota())
    assert rules(judge(plan, rota)) == {"outage"}


def test_rest_holds_across_midnight() -> None:
    plan = structs.replace(legal_plan(), blocks=())
    late = bout(8, "bo", "23:40", "24:00", station="crank")
    early = bout(9, "bo", "00:10", "00:30", station="crank", day=2)
    assert rules(judge(plan, Rota(id="r", bouts=(late, early)))) == {"rest"}


def test_window_across_midnight_counts_in_its_two_parts() -> None:
    night = with_record("people", 1, hours=window("20:00", "01:00"))
    plan, _ = night(structs.replace(legal_plan(), blocks=()), legal_rota())
    early = bout(1, "bo", "00:10", "00:30", station="crank")
    late = bout(2, "bo", "21:00", "21:20", station="crank")
    assert judge(plan, Rota(id="r", bouts=(early, late))) == ()
    noon = bout(3, "bo", "12:00", "12:20", station="crank")
    assert rules(judge(plan, Rota(id="r", bouts=(noon,)))) == {"hours"}


def test_one_unit_twice_on_charge_and_the_batch_apart() -> None:
    twice = ChargeSpell(id="c9", day=1, start="09:30", end="10:30", device="phone", first_ticket=3, energy_wh=1.0)
    rota = legal_rota()
    plan = with_record("charging_points", 0, outlets=9)(legal_plan(), rota)[0]
    found = judge(plan, structs.replace(rota, charging=(*rota.charging, twice)))
    assert rules(found) == {"twice"}
    assert "Ticket 3" in found[0].text
    fourth = structs.replace(twice, first_ticket=4)
    assert judge(plan, structs.replace(rota, charging=(*rota.charging, fourth))) == ()


def test_without_charging_point_outlets_are_the_stores_and_quiet_hours_bind() -> None:
    plan = structs.replace(legal_plan(), charging_points=())
    assert rules(judge(plan, legal_rota())) == {"outlets"}
    night = ChargeSpell(id="c", day=1, start="21:30", end="22:30", device="phone", count=1, energy_wh=1.0)
    assert rules(judge(plan, Rota(id="r", charging=(night,)))) == {"attended"}


def test_energy_balance_by_hand() -> None:
    """20 min at 40 W times the share of a 30-year-old give 40/3 Wh at S at most, 0.765 of it at the outlet."""
    plan = structs.replace(
        legal_plan(),
        stores=(Store(id="bank", name="Bank", nominal_wh=100.0, start_fraction=0.10),),
        people=(Person(id="ada", name="Ada", watts_by="share", share_legs_fraction=0.9, age=30),),
    )
    turned = bout(1, "ada", "09:00", "09:20")
    made_wh = 0.9 * 40.0 / 3.0 * 0.9 * 0.85
    for energy_wh, expected in ((made_wh - 1e-7, set()), (made_wh + 0.01, {"energy"})):
        row = ChargeSpell(id="c", day=1, start="09:00", end="11:00", device="phone", count=3, energy_wh=energy_wh)
        assert rules(judge(plan, Rota(id="r", bouts=(turned,), charging=(row,)))) == expected


def test_changeover_takes_from_the_next_person() -> None:
    """A bout 0 min after another person's on the same unit loses the 2 min of the changeover."""
    people = tuple(
        Person(id=each, name=each, watts_by="share", share_legs_fraction=1.0, age=30) for each in ("ada", "bo")
    )
    plan = structs.replace(
        legal_plan(), people=people, stores=(Store(id="bank", name="Bank", nominal_wh=200.0, start_fraction=0.10),)
    )
    made_wh = 40.0 * (20.0 + 18.0) / 60.0 * 0.765
    bouts = (bout(1, "ada", "09:00", "09:20"), bout(2, "bo", "09:20", "09:40"))
    for energy_wh, expected in ((made_wh - 1e-6, set()), (made_wh + 0.1, {"energy"})):
        row = ChargeSpell(id="c", day=1, start="09:00", end="12:00", device="phone", count=3, energy_wh=energy_wh)
        half_empty = structs.replace(plan, devices=(structs.replace(plan.devices[0], start_fraction=0.0),))
        assert rules(judge(half_empty, Rota(id="r", bouts=bouts, charging=(row,)))) == expected


def test_energy_made_into_a_full_store_is_lost() -> None:
    """A 1 Wh bank holds 0.765 Wh at the outlet: what is turned at nine is gone at eleven."""
    plan = structs.replace(legal_plan(), stores=(Store(id="bank", name="Bank", nominal_wh=1.0, start_fraction=0.1),))
    turned = bout(1, "ada", "09:00", "09:20")
    row = ChargeSpell(id="c", day=1, start="11:00", end="12:00", device="phone", count=3, energy_wh=0.764)
    assert judge(plan, Rota(id="r", bouts=(turned,), charging=(row,))) == ()
    more = structs.replace(row, energy_wh=0.80)
    assert rules(judge(plan, Rota(id="r", bouts=(turned,), charging=(more,)))) == {"energy"}


def test_other_source_counts_in_its_hours() -> None:
    source = OtherSource(id="o", name="Roof", wh_per_day=10.0, windows=window("09:00", "10:00"))
    plan = structs.replace(
        legal_plan(), stores=(Store(id="bank", name="Bank", start_fraction=0.1),), other_sources=(source,)
    )
    early = ChargeSpell(id="c", day=1, start="09:00", end="09:30", device="phone", count=3, energy_wh=3.8)
    assert judge(plan, Rota(id="r", charging=(early,))) == ()
    too_early = structs.replace(early, energy_wh=4.0)
    assert rules(judge(plan, Rota(id="r", charging=(too_early,)))) == {"energy"}


def test_findings_say_where() -> None:
    found = judge(*with_bout(0, end="09:25")(legal_plan(), legal_rota()))
    first = next(each for each in found if each.rule == "bout")
    assert (first.day, first.start_min, first.person, first.station) == (1, 540, "ada", "pedal")
    assert first.text == ("Ada turns 25 min in one go on day 1 from 09:00 to 09:25; at most 20 min, 5 min too long.")


def test_judge_imports_only_plan_and_domain() -> None:
    """The judge must not share code with the planners it judges."""
    folder = Path(check_module.__file__).parent
    allowed = ("kitplanner.plan.", "kitplanner.domain.", "kitplanner.planners.rota.check")
    for path in sorted(folder.glob("check*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Import):
                names = [alias.name for alias in node.names]
            elif isinstance(node, ast.ImportFrom):
                assert not node.level, path
                names = [node.module or ""]
            else:
                continue
            for name in names:
                assert not name.startswith("kitplanner") or name.startswith(allowed), f"{path.name} imports {name}"
