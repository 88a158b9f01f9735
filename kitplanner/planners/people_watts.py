"""A person's watts at the handle or pedal: from level and age, a share, own watts or a self-test; measured wins.

A person without an age counts as 40; without a body mass as the age class's. Level M throughout.
"""

from __future__ import annotations

import math
from functools import lru_cache

from kitplanner.domain.capacity import ADULT_AGE, OLDER_AGE, Level, default_mass_kg, v_peak_ml_kg_min
from kitplanner.domain.human_power import DEVICE_LIMB, Limb, sustainable_w, t_eff_min
from kitplanner.domain.power_range import MEASURED_SPREAD, SELF_TEST_MIN, estimate_spread, self_test_factor
from kitplanner.domain.rest import acceptable_kcal_min, murrell_rest_after_bout_min
from kitplanner.domain.work_cost import kcal_per_min, vo2_work
from kitplanner.plan.records import Person, StationKind

DEFAULT_AGE = 40
REFERENCE_MASS_KG = 75.0
_DAY_MIN = 1440.0


def limb_of(kind: StationKind) -> Limb:
    """Return whether a kind of station is turned with legs or arms.

    Examples
    --------
    >>> limb_of("crank"), limb_of("treadle")
    ('arms', 'legs')
    """
    return DEVICE_LIMB[kind]


def age_of(person: Person) -> int:
    """Return a person's age, 40 where none is given [years]."""
    return DEFAULT_AGE if person.age is None else person.age


def mass_of(person: Person) -> float:
    """Return a person's body mass, that of the age class where none is given [kg]."""
    return default_mass_kg(age_of(person)) if person.mass_kg is None else person.mass_kg


def person_watts(person: Person, limb: Limb, bout_min: float, day_min: float) -> float:
    """Return the watts M a person keeps up at a pedal or two-hand crank, before the hand's force limit.

    A person who gives shares, own watts or a test for one limb only is estimated from age and level for the other. A
    self-test counts for adults under 65 only.

    Parameters
    ----------
    person : Person
        The person.
    limb : str
        "legs" or "arms".
    bout_min, day_min : float
        Length of one bout and turning time of the day [min].

    Returns
    -------
    float
        Power at the handle or pedal [W].

    References
    ----------
    `sustainable_w`, `reference_adult_w`, `self_test_factor`.

    Examples
    --------
    >>> round(person_watts(Person(id="p", name="Oruun"), "legs", 60.0, 60.0), 1)
    53.8
    """
    given = given_for(person, limb)
    if given is not None and person.watts_by == "own":
        return given
    if given is not None and person.watts_by == "share":
        return given * reference_w(limb, bout_min, day_min)
    estimate = _estimate_w(person, limb, bout_min, day_min)
    if given is None:
        return estimate
    at_test = _estimate_w(person, limb, SELF_TEST_MIN, SELF_TEST_MIN)
    return estimate * float(self_test_factor(given, at_test))


def _estimate_w(person: Person, limb: Limb, bout_min: float, day_min: float) -> float:
    """Return the watts of a person's age and level."""
    return _level_w(person.level, age_of(person), limb, (bout_min, day_min), person.mass_kg)


def reference_w(limb: Limb, bout_min: float, day_min: float) -> float:
    """Return the reference adult's watts."""
    return _level_w("usual", DEFAULT_AGE, limb, (bout_min, day_min), REFERENCE_MASS_KG)


def given_for(person: Person, limb: Limb) -> float | None:
    """Return what a person gave for a limb in the way they chose; None where level and age decide."""
    legs = limb == "legs"
    if person.watts_by == "share":
        return person.share_legs_fraction if legs else person.share_arms_fraction
    if person.watts_by == "own":
        return person.own_legs_w if legs else person.own_arms_w
    if person.watts_by == "self_test" and ADULT_AGE <= age_of(person) < OLDER_AGE:
        return person.test_legs_w if legs else person.test_arms_w
    return None


def person_spread(person: Person, limb: Limb, bout_min: float, day_min: float) -> float:
    """Return the relative spread of one person's watts.

    0.35 to 0.60 by duration for a level or a share; 0.15 for own watts or a self-test (judgement: the test's own
    0.12, and the day's form on top).

    Examples
    --------
    >>> round(person_spread(Person(id="p", name="Oruun"), "legs", 20.0, 60.0), 3)
    0.421
    """
    if person.watts_by in ("own", "self_test") and given_for(person, limb) is not None:
        return MEASURED_SPREAD
    return float(estimate_spread(t_eff_min(bout_min, day_min), age_of(person)))


def murrell_min(person: Person, limb: Limb, bout_min: int, cap_min: int) -> int:
    """Return Murrell's rest after a bout with the personal acceptable rate, in whole minutes rounded up."""
    watts = person_watts(person, limb, bout_min, cap_min)
    return _murrell(person.level, age_of(person), person.mass_kg, limb, (watts, bout_min))


# The planners ask the same laws for the same few values at every edit; both caches hold numbers only.
@lru_cache(maxsize=4096)
def _murrell(level: Level, age: int, mass_kg: float | None, limb: Limb, work: tuple[float, int]) -> int:
    """Return Murrell's rest of someone of an age and level after (watts, minutes) of work."""
    watts, bout_min = work
    kg = default_mass_kg(age) if mass_kg is None else mass_kg
    work_rate = float(kcal_per_min(vo2_work(watts, kg, limb), kg))
    acceptable = float(acceptable_kcal_min(v_peak_ml_kg_min(age, level, mass_kg), kg))
    rest_min = float(murrell_rest_after_bout_min(bout_min, work_rate, acceptable))
    return math.ceil(min(rest_min, _DAY_MIN))


@lru_cache(maxsize=4096)
def _level_w(level: Level, age: int, limb: Limb, bout_and_day_min: tuple[float, float], mass_kg: float | None) -> float:
    """Return the watts of an age and level."""
    return float(sustainable_w(level, age, limb, *bout_and_day_min, mass_kg))
