"""Who may turn where, for how long, and what comes out: the rules of age, choice, heat and the drag law."""

from __future__ import annotations

import math

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.hand_load import pace_of
from kitplanner.domain.heat import HeatRule
from kitplanner.plan.records import Conditions, Note, Person, Plan, Station, Window
from kitplanner.planners.people import (
    Limits,
    allowed_stations,
    heat_rule_at,
    limb_of,
    person_limits,
    person_output,
    person_watts,
    reference_w,
)

WHOLE_DAY = ((0, 1440),)
CRANK = Station(id="crank", name="Table crank", kind="crank", output_w=6.0)
STAND = Station(id="stand", name="Stand", kind="pedal", output_w=40.0, eta_fraction=0.60)
PLAN = Plan(stations=(CRANK, STAND))


def person(**values) -> Person:
    return Person(**{"id": "p", "name": "Oruun", "age": 41, **values})


class TestLimits:
    def test_ages_rows(self):
        assert person_limits(PLAN, person()) == Limits(20, 40, 60, WHOLE_DAY)
        assert person_limits(PLAN, person(age=58)) == Limits(20, 40, 40, WHOLE_DAY)
        assert person_limits(PLAN, person(age=72)) == Limits(10, 60, 20, WHOLE_DAY)
        assert person_limits(PLAN, person(age=14)) == Limits(15, 45, 30, ((480, 1140),))
        assert person_limits(PLAN, person(age=12)) == Limits(5, 60, 10, ((480, 1140),))

    @pytest.mark.parametrize("age", [3, 11, 80, 99])
    def test_nobody_under_twelve_or_from_eighty_is_counted(self, age):
        limits = person_limits(PLAN, person(age=age, bout_min=20, cap_min=60))
        assert (limits.bout_min, limits.cap_min) == (0, 0)

    def test_without_an_age_forty_counts(self):
        assert person_limits(PLAN, person(age=None)) == person_limits(PLAN, person(age=40))

    def test_own_values_only_tighten(self):
        loose = person_limits(PLAN, person(bout_min=90, cap_min=300, rest_min=5))
        assert loose == Limits(20, 40, 60, WHOLE_DAY)
        tight = person_limits(PLAN, person(bout_min=10, cap_min=30, rest_min=70))
        assert tight == Limits(10, 70, 30, WHOLE_DAY)

    def test_a_cap_below_the_bout_shortens_the_bout(self):
        assert person_limits(PLAN, person(cap_min=7)).bout_min == 7

    def test_anybody_may_choose_no_minutes(self):
        assert person_limits(PLAN, person(cap_min=0)).cap_min == 0
        assert person_limits(PLAN, person(bout_min=0)).cap_min == 0

    def test_light_effort_halves_bout_and_cap(self):
        limits = person_limits(PLAN, person(level="light"))
        assert (limits.bout_min, limits.rest_min, limits.cap_min) == (10, 40, 30)
        # The level counts only where watts are given by it.
        assert person_limits(PLAN, person(level="light", watts_by="share")).cap_min == 60

    def test_minors_hours_are_the_stricter_of_age_and_plan(self):
        plan = Plan(conditions=Conditions(minors_hours=(Window(start="08:00", end="20:00"),)))
        assert person_limits(plan, person(age=14)).hours == ((480, 1140),)
        assert person_limits(plan, person(age=17)).hours == ((480, 1200),)
        assert person_limits(plan, person(age=18)).hours == WHOLE_DAY

    def test_own_hours_across_midnight_and_within_the_ages(self):
        night = (Window(start="18:00", end="09:00"),)
        assert person_limits(PLAN, person(hours=night)).hours == ((0, 540), (1080, 1440))
        assert person_limits(PLAN, person(age=15, hours=night)).hours == ((480, 540), (1080, 1140))

    def test_hours_that_never_meet_leave_none(self):
        assert person_limits(PLAN, person(age=13, hours=(Window(start="20:00", end="22:00"),))).hours == ()

    def test_hard_work_rests_longer_by_murrell(self):
        """150 W of an average adult: K 10.7, S 3.64 kcal/min; 20 (10.73 - 3.643)/(3.643 - 1.5) = 66 min."""
        worker = person(age=40, watts_by="own", own_legs_w=150.0)
        assert person_limits(PLAN, worker, limb="legs").rest_min == pytest.approx(66, abs=1)
        assert person_limits(PLAN, worker, limb="arms").rest_min == 40
        assert person_limits(PLAN, worker).rest_min == person_limits(PLAN, worker, limb="legs").rest_min

    def test_heat_shortens_bouts_where_switched_on(self):
        warm = Plan(conditions=Conditions(air_degc=30.0, heat_limits=True))
        assert person_limits(warm, person()) == Limits(10, 50, 60, WHOLE_DAY)
        off = Plan(conditions=Conditions(air_degc=30.0))
        assert person_limits(off, person()).bout_min == 20

    def test_above_32_degrees_nobody_pedals(self):
        hot = Plan(conditions=Conditions(air_degc=33.0, heat_limits=True), stations=(CRANK, STAND))
        assert person_limits(hot, person(), limb="legs").cap_min == 0
        assert person_limits(hot, person(), limb="arms").bout_min == 10
        assert person_limits(hot, person()).bout_min == 10
        assert person_output(hot, person(), STAND).station_output_w == 0.0

    def test_a_rule_of_a_part_of_the_day_may_be_passed(self):
        assert person_limits(PLAN, person(), heat=HeatRule(10, 50)) == Limits(10, 50, 60, WHOLE_DAY)

    def test_heat_rule_takes_the_stricter_globe_temperature(self):
        plain = heat_rule_at(person(), "legs", 25.0, None, (20.0, 60.0))
        strict = heat_rule_at(person(), "legs", 25.0, 29.0, (20.0, 60.0))
        assert plain == HeatRule(20, 40)
        assert strict.on_min < 10

    def test_ramp_up_on_the_first_days(self):
        plan = Plan(conditions=Conditions(ramp_up=True))
        assert [person_limits(plan, person(), day=d).cap_min for d in (1, 2, 5, 9)] == [12, 24, 60, 60]
        assert person_limits(plan, person(), day=1).bout_min == 12
        assert person_limits(plan, person()).cap_min == 60
        assert person_limits(PLAN, person(), day=1).cap_min == 60

    @given(
        age=st.integers(0, 110),
        bout=st.none() | st.integers(0, 300),
        cap=st.none() | st.integers(0, 900),
        rest=st.none() | st.integers(0, 300),
        level=st.sampled_from(["light", "usual", "strong"]),
    )
    def test_no_own_value_loosens_a_limit(self, age, bout, cap, rest, level):
        default = person_limits(PLAN, person(age=age, level=level))
        own = person_limits(PLAN, person(age=age, level=level, bout_min=bout, cap_min=cap, rest_min=rest))
        assert own.bout_min <= default.bout_min
        assert own.cap_min <= default.cap_min
        assert own.bout_min <= own.cap_min
        assert own.rest_min >= default.rest_min or own.bout_min < default.bout_min


class TestAllowedStations:
    def test_children_of_twelve_crank_only(self):
        assert [s.id for s in allowed_stations(PLAN, person(age=12))] == ["crank"]
        assert [s.id for s in allowed_stations(PLAN, person(age=13))] == ["crank", "stand"]
        assert allowed_stations(PLAN, person(age=11)) == ()
        assert allowed_stations(PLAN, person(age=85)) == ()

    def test_own_choice(self):
        assert [s.id for s in allowed_stations(PLAN, person(stations=("stand",)))] == ["stand"]
        assert allowed_stations(PLAN, person(age=12, stations=("stand",))) == ()

    @pytest.mark.parametrize("values", [{"in_service": False}, {"guarded": False}])
    def test_stations_out_of_service_or_without_a_guard_take_nobody(self, values):
        plan = Plan(stations=(CRANK, msgspec.structs.replace(STAND, **values)))
        assert [s.id for s in allowed_stations(plan, person())] == ["crank"]

    def test_limbs(self):
        assert [limb_of(kind) for kind in ("crank", "pocket_crank", "pedal", "treadle", "rocker")] == [
            "arms",
            "arms",
            "legs",
            "legs",
            "legs",
        ]


class TestOutput:
    def test_reference_adult_gives_the_rating(self):
        for station in (CRANK, STAND):
            result = person_output(PLAN, person(age=40), station)
            assert result.station_output_w == pytest.approx(station.output_w)
            assert result.person_power_w == pytest.approx(station.output_w / station.eta_fraction)
            assert not result.capped

    def test_a_given_share_replaces_the_drag_law(self):
        teen = person(age=14, watts_by="share", share_arms_fraction=0.7, share_legs_fraction=0.65)
        assert person_output(PLAN, teen, CRANK).station_output_w == pytest.approx(4.2)
        assert person_output(PLAN, teen, STAND).station_output_w == pytest.approx(26.0)

    def test_drag_law(self):
        """Drag of a quarter of the reference: 0.6 of its watts leave (0.6 - 0.25)/0.75 of the output."""
        reference = reference_w("legs", 20.0, 60.0)
        weaker = person(watts_by="own", own_legs_w=0.6 * reference)
        assert person_output(PLAN, weaker, STAND).station_output_w == pytest.approx(40.0 * 0.35 / 0.75)
        own_drag = msgspec.structs.replace(STAND, drag_fraction=0.0)
        assert person_output(PLAN, weaker, own_drag).station_output_w == pytest.approx(24.0)
        arms = person(watts_by="own", own_arms_w=0.6 * reference_w("arms", 20.0, 60.0))
        assert person_output(PLAN, arms, CRANK).station_output_w == pytest.approx(6.0 * 0.5 / 0.9)

    def test_weak_share_agrees_with_the_chain_of_a_pedal_stand(self):
        """A 24 V machine at 60 rpm with 16.7 W of friction: 39 W at the pedal give 0.41 of what 65 W give."""
        stand = msgspec.structs.replace(STAND, drag_fraction=0.31)
        reference = reference_w("legs", 20.0, 60.0)
        weaker = person(watts_by="own", own_legs_w=reference * 39.0 / 65.0)
        share = person_output(PLAN, weaker, stand).station_output_w / 40.0
        assert share == pytest.approx(0.41, abs=0.015)

    def test_below_the_drag_nothing_comes_out(self):
        assert person_output(PLAN, person(watts_by="own", own_legs_w=5.0), STAND).station_output_w == 0.0

    def test_nobody_exceeds_the_rating(self):
        strong = person_output(PLAN, person(age=20, level="strong"), STAND)
        assert strong.station_output_w == 40.0
        assert strong.capped
        keen = person(watts_by="share", share_legs_fraction=1.3)
        assert person_output(PLAN, keen, STAND).station_output_w == 40.0
        assert person_output(PLAN, keen, STAND).capped

    def test_no_minutes_no_output(self):
        result = person_output(PLAN, person(cap_min=0), STAND)
        assert (result.station_output_w, result.person_power_w) == (0.0, 0.0)

    def test_a_rating_that_is_missing_is_nothing(self):
        assert person_output(PLAN, person(), Station(id="s", name="s")).station_output_w == 0.0
        assert person_output(PLAN, person(), Station(id="s", name="s", described_by="label")).station_output_w == 0.0

    def test_label(self):
        big = Station(id="s", name="s", kind="pedal", described_by="label", label_w=100.0)
        small = msgspec.structs.replace(big, label_w=10.0)
        adult = person(age=40)
        watts = person_watts(adult, "legs", 20.0, 60.0)
        by_person = person_output(PLAN, adult, big)
        assert by_person.station_output_w == pytest.approx(0.5 * watts)
        assert by_person.person_power_w == pytest.approx(watts)
        assert not by_person.capped
        by_label = person_output(PLAN, adult, small)
        assert (by_label.station_output_w, by_label.person_power_w, by_label.capped) == (10.0, 20.0, True)
        half = person(age=40, watts_by="share", share_legs_fraction=0.5)
        assert person_output(PLAN, half, big).station_output_w == pytest.approx(0.25 * watts)

    def test_parts_leave_the_output_to_the_chain(self):
        parts = Station(id="s", name="s", kind="pedal", described_by="parts")
        result = person_output(PLAN, person(age=40), parts)
        assert result.station_output_w is None
        assert result.person_power_w == pytest.approx(person_watts(person(age=40), "legs", 20.0, 60.0))
        assert result.torque_cap_nm is None

    def test_devices_take_their_share_of_the_power(self):
        parts = Station(id="s", name="s", kind="treadle", described_by="parts")
        whole = person_watts(person(), "legs", 20.0, 60.0)
        assert person_output(PLAN, person(), parts).person_power_w == pytest.approx(0.80 * whole)
        rocker = msgspec.structs.replace(parts, kind="rocker")
        assert person_output(PLAN, person(), rocker).person_power_w == pytest.approx(0.50 * whole)

    def test_hand_force_holds_strong_arms_down(self):
        """30 N at 0.15 m and 60 rpm are 28.3 W; a day of 30 min or less, and feet, are free of it."""
        crank = Station(id="s", name="s", kind="crank", described_by="label", label_w=100.0, eta_fraction=1.0)
        strong = person(age=40, watts_by="own", own_arms_w=60.0)
        held = person_output(PLAN, strong, crank)
        assert held.station_output_w == pytest.approx(28.27, rel=1e-3)
        assert held.force_capped
        short_day = person_output(PLAN, msgspec.structs.replace(strong, cap_min=30), crank)
        assert short_day.station_output_w == pytest.approx(60.0)
        assert not short_day.force_capped
        small = msgspec.structs.replace(crank, crank_radius_m=0.10)
        assert person_output(PLAN, strong, small).station_output_w == pytest.approx(18.85, rel=1e-3)

    def test_a_measured_output_stands_whatever_the_hand_would_feel(self):
        """Scaling a station's rating scales its output, also where the default efficiency puts 40 W at the handle."""
        crank = msgspec.structs.replace(CRANK, output_w=20.0)
        for adult in (person(age=40), person(watts_by="share", share_arms_fraction=1.0)):
            assert person_output(PLAN, adult, crank).station_output_w == pytest.approx(20.0)
            assert not person_output(PLAN, adult, crank).force_capped

    def test_hand_force_is_taken_at_the_middle_of_a_measured_cranks_band(self):
        """30 N at 0.15 m is 4.5 N m: 28.3 W at 60 turns a minute, the middle of 40 to 80."""
        strong = Person(id="p", name="Oruun", age=40, watts_by="own", own_arms_w=80.0)
        crank = Station(id="s", name="Crank", described_by="label", label_w=90.0, eta_fraction=1.0)
        banded = msgspec.structs.replace(crank, comfort_low_rpm=40.0, comfort_high_rpm=80.0)
        for station in (crank, banded):
            assert person_output(PLAN, strong, station).station_output_w == pytest.approx(28.27, rel=1e-3)

    def test_pace_holds_for_estimates_and_not_for_own_watts(self):
        parts = Station(id="s", name="Crank", described_by="parts")
        known = Person(id="p", name="Oruun", age=40, watts_by="own", own_arms_w=20.0)
        assert person_output(PLAN, known, parts).pace.loss == 0.0
        assert person_output(PLAN, Person(id="q", name="Ilve", age=40), parts).pace == pace_of("arms", 40)
        # Nothing stated for the legs: they are estimated.
        stand = msgspec.structs.replace(parts, kind="pedal")
        assert person_output(PLAN, known, stand).pace == pace_of("legs", 40)

    def test_hand_force_counts_for_both_sides_of_the_drag_law(self):
        """At 0.05 m 30 N are 9.42 W: strong and reference adult alike; 6 W give (6/9.42 - 0.1)/0.9 of the rating."""
        short = msgspec.structs.replace(CRANK, crank_radius_m=0.05)
        strong = person_output(PLAN, person(watts_by="own", own_arms_w=60.0), short)
        assert (strong.station_output_w, strong.force_capped, strong.capped) == (6.0, True, False)
        weak = person_output(PLAN, person(watts_by="own", own_arms_w=6.0), short)
        assert weak.station_output_w == pytest.approx(6.0 * (6.0 / 9.4248 - 0.1) / 0.9, rel=1e-4)
        assert not weak.force_capped

    def test_hand_torque_of_a_crank_by_parts(self):
        parts = Station(
            id="s", name="s", kind="crank", described_by="parts", comfort_low_rpm=40.0, comfort_high_rpm=80.0
        )
        strong = person(watts_by="own", own_arms_w=100.0)
        result = person_output(PLAN, strong, parts)
        assert result.torque_cap_nm == pytest.approx(4.5)
        assert result.person_power_w == pytest.approx(4.5 * 80.0 * 2.0 * math.pi / 60.0)

    def test_pocket_crank_is_short_and_one_handed(self):
        """0.06 m at 90 rpm: 16.96 W of two hands, 0.55 of it with one."""
        pocket = Station(id="s", name="s", kind="pocket_crank", described_by="label", label_w=50.0, eta_fraction=1.0)
        result = person_output(PLAN, person(watts_by="own", own_arms_w=60.0), pocket)
        assert result.station_output_w == pytest.approx(0.55 * 16.96, rel=1e-3)

    def test_spreads_of_person_and_station_join(self):
        noted = msgspec.structs.replace(CRANK, notes={"output_w": Note(mark="measured", spread_fraction=0.3)})
        known = person_output(PLAN, person(watts_by="own", own_arms_w=20.0), noted)
        assert known.person_spread_fraction == 0.15
        assert known.station_spread_fraction == 0.3
        assert known.spread_fraction == pytest.approx(math.hypot(0.15, 0.3))
        unknown = person_output(PLAN, person(), CRANK)
        assert 0.40 < unknown.spread_fraction < 0.45
        assert unknown.station_spread_fraction == 0.0

    @given(
        watts=st.floats(0.0, 300.0),
        more=st.floats(0.0, 100.0),
        described=st.sampled_from(["measured", "label", "parts"]),
    )
    def test_more_watts_never_give_less(self, watts, more, described):
        station = Station(id="s", name="s", kind="pedal", described_by=described, output_w=40.0, label_w=30.0)
        weak, strong = (
            person_output(PLAN, person(watts_by="own", own_legs_w=w), station) for w in (watts, watts + more)
        )
        assert strong.person_power_w >= weak.person_power_w
        if described != "parts":
            assert 0.0 <= weak.station_output_w <= strong.station_output_w <= 40.0
