"""A person's watts by every way of giving them."""

from __future__ import annotations

import pytest

from kitplanner.domain.human_power import sustainable_w
from kitplanner.plan.records import Person
from kitplanner.planners.people_watts import age_of, mass_of, murrell_min, person_spread, person_watts, reference_w


def person(**values) -> Person:
    return Person(**{"id": "p", "name": "Oruun", "age": 40, **values})


def test_defaults():
    assert age_of(person(age=None)) == 40
    assert mass_of(person()) == 75.0
    assert mass_of(person(age=70)) == 72.0
    assert mass_of(person(age=14)) == 48.0
    assert mass_of(person(mass_kg=60.0)) == 60.0


@pytest.mark.parametrize("level", ["light", "usual", "strong"])
@pytest.mark.parametrize("limb", ["legs", "arms"])
def test_level(level, limb):
    expected = float(sustainable_w(level, 40, limb, 20.0, 60.0, 75.0))
    assert person_watts(person(level=level), limb, 20.0, 60.0) == pytest.approx(expected)


def test_share_of_the_reference_adult_per_limb():
    both = person(age=14, watts_by="share", share_legs_fraction=0.65, share_arms_fraction=0.7)
    assert person_watts(both, "legs", 15.0, 30.0) == pytest.approx(0.65 * reference_w("legs", 15.0, 30.0))
    assert person_watts(both, "arms", 15.0, 30.0) == pytest.approx(0.7 * reference_w("arms", 15.0, 30.0))


@pytest.mark.parametrize("watts_by", ["share", "own", "self_test"])
def test_a_limb_without_a_value_is_estimated(watts_by):
    assert person_watts(person(watts_by=watts_by), "legs", 20.0, 60.0) == person_watts(person(), "legs", 20.0, 60.0)
    assert person_spread(person(watts_by=watts_by), "legs", 20.0, 60.0) == person_spread(person(), "legs", 20.0, 60.0)


def test_own_watts_hold_at_every_duration():
    own = person(watts_by="own", own_legs_w=70.0, own_arms_w=0.0)
    assert person_watts(own, "legs", 20.0, 60.0) == person_watts(own, "legs", 60.0, 60.0) == 70.0
    assert person_watts(own, "arms", 20.0, 60.0) == 0.0


def test_self_test_moves_the_estimate_toward_the_test():
    """Test 20 W with the arms against 28.9 W: factor 20.71/28.9, the same at every duration."""
    tested = person(watts_by="self_test", test_arms_w=20.0)
    assert person_watts(tested, "arms", 15.0, 15.0) == pytest.approx(20.71, rel=2e-3)
    factor = person_watts(tested, "arms", 15.0, 15.0) / person_watts(person(), "arms", 15.0, 15.0)
    assert person_watts(tested, "arms", 20.0, 60.0) == pytest.approx(
        factor * person_watts(person(), "arms", 20.0, 60.0)
    )


@pytest.mark.parametrize("age", [17, 65, 72])
def test_self_test_counts_for_adults_under_65_only(age):
    tested = person(age=age, watts_by="self_test", test_legs_w=200.0)
    assert person_watts(tested, "legs", 10.0, 20.0) == person_watts(person(age=age), "legs", 10.0, 20.0)
    assert person_spread(tested, "legs", 10.0, 20.0) == person_spread(person(age=age), "legs", 10.0, 20.0)


def test_measured_people_are_better_known():
    estimated = person_spread(person(), "legs", 20.0, 60.0)
    assert 0.35 <= estimated <= 0.45
    assert person_spread(person(watts_by="share", share_legs_fraction=0.8), "legs", 20.0, 60.0) == estimated
    for values in ({"watts_by": "own", "own_legs_w": 60.0}, {"watts_by": "self_test", "test_legs_w": 60.0}):
        assert person_spread(person(**values), "legs", 20.0, 60.0) == 0.15


def test_murrell_rest_stays_below_the_ages_rest_at_usual_effort():
    assert 0 < murrell_min(person(), "legs", 20, 60) <= 40
    assert murrell_min(person(), "arms", 20, 60) == 0
    assert murrell_min(person(), "legs", 0, 0) == 0
