"""The judge's own reading of what one person may be asked for: age, own values, effort, rest, heat, watts.

Part of the judge (`check.py`): imports plan and domain only.
"""

from __future__ import annotations

from dataclasses import dataclass

from kitplanner.domain.age_limits import AgeLimits, limits_for_age
from kitplanner.domain.capacity import ADULT_AGE, OLDER_AGE, default_mass_kg, v_peak_ml_kg_min
from kitplanner.domain.heat import REST_W, HeatRule, heat_rule, ramp_up_fraction
from kitplanner.domain.human_power import DEVICE_LIMB, Limb, sustainable_w
from kitplanner.domain.power_range import SELF_TEST_MIN, self_test_factor
from kitplanner.domain.rest import acceptable_kcal_min, murrell_rest_after_bout_min
from kitplanner.domain.units import minutes_of_day
from kitplanner.domain.work_cost import kcal_per_min, metabolic_w, vo2_work
from kitplanner.plan.records import Person, Plan, Station, TemperaturePart
from kitplanner.planners.rota.check_finding import DAY_MIN, Part, joined, overlap_min, parts_of

AGE_IF_UNKNOWN, REFERENCE_MASS_KG = 40, 75.0


def years(person: Person) -> int:
    """Return a person's age, 40 where none is given [years]."""
    return AGE_IF_UNKNOWN if person.age is None else person.age


def is_minor(person: Person) -> bool:
    """Tell whether a person is under 18."""
    return years(person) < ADULT_AGE


def by_age(person: Person) -> AgeLimits:
    """Return the age's limits, halved for someone who chose light effort."""
    return limits_for_age(years(person), light=person.watts_by == "level" and person.level == "light")


def limb_at(station: Station) -> Limb:
    """Return the limb a station is turned with."""
    return DEVICE_LIMB[station.kind]


@dataclass(frozen=True, slots=True)
class Asked:
    """What one person may be asked for on one day at one limb [min]; own hours and those of the age as parts."""

    bout_min: int
    cap_min: int
    least_rest_min: int
    own_hours: tuple[Part, ...]
    age_hours: tuple[Part, ...]


def asked(plan: Plan, person: Person, day: int | None) -> Asked:
    """Return the limits of a person on a day by age, own values and ramp-up; heat and Murrell come on top.

    `day` None leaves the ramp-up out.
    """
    age = by_age(person)
    cap = min(age.cap_min, age.cap_min if person.cap_min is None else person.cap_min)
    if day is not None and plan.conditions.ramp_up:
        cap = int(cap * float(ramp_up_fraction(day)))
    bout = min(age.bout_min, cap, age.bout_min if person.bout_min is None else person.bout_min)
    first_h, last_h = age.hours
    age_hours: tuple[Part, ...] = ((round(first_h * 60), round(last_h * 60)),)
    if is_minor(person) and plan.conditions.minors_hours:
        age_hours = common(age_hours, parts_of(plan.conditions.minors_hours))
    return Asked(
        bout_min=max(0, bout),
        cap_min=max(0, cap),
        least_rest_min=max(age.rest_min, person.rest_min or 0),
        own_hours=parts_of(person.hours) if person.hours else ((0, DAY_MIN),),
        age_hours=age_hours,
    )


def common(first: tuple[Part, ...], second: tuple[Part, ...]) -> tuple[Part, ...]:
    """Return the parts of a day that lie in both."""
    both = [(max(a, c), min(b, d)) for a, b in first for c, d in second]
    return joined([part for part in both if part[0] < part[1]])


def mass_kg(person: Person) -> float:
    """Return a person's body mass, that of the age class where none is given [kg]."""
    return default_mass_kg(years(person)) if person.mass_kg is None else person.mass_kg


def handle_w(person: Person, limb: Limb, bout_min: float, day_min: float) -> float:
    """Return a person's watts at the handle or pedal for a bout and a day's turning, before any force limit [W]."""
    legs = limb == "legs"
    share = person.share_legs_fraction if legs else person.share_arms_fraction
    own = person.own_legs_w if legs else person.own_arms_w
    tested = person.test_legs_w if legs else person.test_arms_w
    if person.watts_by == "own" and own is not None:
        return own
    if person.watts_by == "share" and share is not None:
        return share * reference_w(limb, bout_min, day_min)
    level_w = float(sustainable_w(person.level, years(person), limb, bout_min, day_min, person.mass_kg))
    if person.watts_by == "self_test" and tested is not None and ADULT_AGE <= years(person) < OLDER_AGE:
        at_test = sustainable_w(person.level, years(person), limb, SELF_TEST_MIN, SELF_TEST_MIN, person.mass_kg)
        return level_w * float(self_test_factor(tested, float(at_test)))
    return level_w


def reference_w(limb: Limb, bout_min: float, day_min: float) -> float:
    """Return the watts of the reference adult, 40 years and 75 kg [W]."""
    return float(sustainable_w("usual", AGE_IF_UNKNOWN, limb, bout_min, day_min, REFERENCE_MASS_KG))


def working_min(plan: Plan, person: Person, limb: Limb) -> tuple[int, int]:
    """Return bout and day for which a person's watts hold: by age, own values and the plan's air where heat counts."""
    base = asked(plan, person, None)
    if base.bout_min <= 0:
        return 0, 0
    bout = base.bout_min
    if plan.conditions.heat_limits:
        bout = min(bout, heat_at(person, limb, (bout, base.cap_min), plan.conditions.air_degc, None).on_min)
    return (bout, base.cap_min) if bout > 0 else (0, 0)


def rest_after_min(plan: Plan, person: Person, limb: Limb, length_min: int) -> float:
    """Return the least rest after a bout of some length: the greater of age's, own and Murrell's [min].

    References
    ----------
    Murrell K. F. H., Ergonomics, 1965, through `murrell_rest_after_bout_min`.
    """
    base = asked(plan, person, None)
    bout, cap = working_min(plan, person, limb)
    if bout <= 0:
        return float(base.least_rest_min)
    watts = handle_w(person, limb, bout, cap)
    kg = mass_kg(person)
    rate = float(kcal_per_min(vo2_work(watts, kg, limb), kg))
    acceptable = float(acceptable_kcal_min(v_peak_ml_kg_min(years(person), person.level, person.mass_kg), kg))
    murrell = float(murrell_rest_after_bout_min(length_min, rate, acceptable))
    return max(float(base.least_rest_min), min(murrell, float(DAY_MIN)))


def heat_at(person: Person, limb: Limb, minutes: tuple[int, int], air_degc: float, wbgt_degc: float | None) -> HeatRule:
    """Return the heat rule of a person at a temperature, working for (bout, day) minutes."""
    watts = handle_w(person, limb, *minutes)
    rate_w = float(metabolic_w(watts, mass_kg(person), limb))
    return heat_rule(max(rate_w, REST_W), air_degc, wbgt_degc, arms=limb == "arms")


def hottest_rule(plan: Plan, person: Person, limb: Limb, day: int, span: Part) -> HeatRule | None:
    """Return the strictest heat rule of a time of a day; None where heat limits are off.

    Minutes that no part of the day covers have the plan's own air temperature.
    """
    base = asked(plan, person, None)
    if not plan.conditions.heat_limits or base.bout_min <= 0:
        return None
    minutes = (base.bout_min, base.cap_min)
    rules, covered = [], []
    for part in plan.conditions.temperatures:
        pieces = _pieces(part)
        if part.day not in (0, day) or not overlap_min(*span, pieces):
            continue
        covered += list(pieces)
        air = plan.conditions.air_degc if part.air_degc is None else part.air_degc
        rules.append(heat_at(person, limb, minutes, air, part.wbgt_degc))
    if overlap_min(*span, joined(covered)) < span[1] - span[0]:
        rules.append(heat_at(person, limb, minutes, plan.conditions.air_degc, None))
    on_min = min(rule.on_min for rule in rules)
    return HeatRule(on_min, max(rule.off_min for rule in rules), any(rule.essential_only for rule in rules))


def _pieces(part: TemperaturePart) -> tuple[Part, ...]:
    start, end = minutes_of_day(part.start), minutes_of_day(part.end)
    return ((start, end),) if start < end else joined([(0, end), (start, DAY_MIN)])
