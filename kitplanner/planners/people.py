"""What each person may and can do: minutes, hours, stations, and watts at the crank and at the station.

Age sets bout, rest, day's cap and hours; a person's own values may only tighten them. Watts follow from effort
level and age, a share of the reference adult, a person's own sustained watts or a self-test; measured wins.
Levels: M at the handle or pedal, S at the station's output. A person without an age counts as 40.
"""

from __future__ import annotations

import math

from msgspec import Struct

from kitplanner.domain.age_limits import AgeLimits, limits_for_age
from kitplanner.domain.capacity import ADULT_AGE
from kitplanner.domain.hand_load import (
    DEFAULT_CRANK_RPM,
    DEFAULT_RADIUS_M,
    LONG_DAY_MIN,
    POCKET_CRANK_RPM,
    POCKET_RADIUS_M,
    Pace,
    handle_torque_nm,
    p_crank_cap_w,
    pace_of,
)
from kitplanner.domain.heat import REST_W, HeatRule, heat_rule, ramp_up_fraction
from kitplanner.domain.human_power import DEVICE_FACTOR, Limb
from kitplanner.domain.spread import combined_spread
from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.domain.work_cost import metabolic_w
from kitplanner.plan.records import Person, Plan, Station
from kitplanner.planners.balance_windows import WHOLE_DAY, Part, day_parts, merged
from kitplanner.planners.people_watts import (
    age_of,
    given_for,
    limb_of,
    mass_of,
    murrell_min,
    person_spread,
    person_watts,
    reference_w,
)

__all__ = [
    "Limits",
    "PersonOutput",
    "age_of",
    "allowed_stations",
    "heat_rule_at",
    "limb_of",
    "mass_of",
    "person_limits",
    "person_output",
    "person_spread",
    "person_watts",
    "reference_w",
]

# Drag of a station that was only measured, as a share of the reference adult's watts: two bearings and a belt take a
# quarter of what a pedal stand gets (own run of a 24 V machine at 60 rpm); cranks a tenth. Judgement from that run.
DRAG_FRACTION_ARMS, DRAG_FRACTION_LEGS = 0.10, 0.25


class Limits(Struct, frozen=True):
    """What one person may be asked for in a day.

    Attributes: longest bout, least rest after it, turning time of the day [min]; `hours` as (start, end) minutes of
    the day, in order, never across midnight; `cap_min` 0 means the person does not turn.
    """

    bout_min: int
    rest_min: int
    cap_min: int
    hours: tuple[Part, ...]


def age_limits_of(person: Person) -> AgeLimits:
    """Return the defaults of a person's age, halved for someone who chose light effort."""
    return limits_for_age(age_of(person), light=person.watts_by == "level" and person.level == "light")


def person_limits(
    plan: Plan, person: Person, *, day: int | None = None, limb: Limb | None = None, heat: HeatRule | None = None
) -> Limits:
    """Return the bout, rest, day's cap and hours that hold for a person.

    Own values may only tighten the age's; rest is the greatest of the age's, Murrell's and the heat's.

    Parameters
    ----------
    plan : Plan
        The plan, for its rules for minors, heat and ramp-up.
    person : Person
        The person.
    day : int, optional
        Day of the plan from 1, for the ramp-up in the heat; None leaves it out.
    limb : str, optional
        "legs" or "arms"; None takes the longer Murrell rest and the wider heat rule of the limbs the age may use.
    heat : HeatRule, optional
        Rule of a part of the day; None takes the plan's air temperature where its heat limits are on.

    Returns
    -------
    Limits
        Limits in whole minutes.

    References
    ----------
    `limits_for_age`, `murrell_rest_after_bout_min`, `heat_rule`.

    Examples
    --------
    >>> person_limits(Plan(), Person(id="p", name="Oruun", age=41, bout_min=30, cap_min=45))
    Limits(bout_min=20, rest_min=40, cap_min=45, hours=((0, 1440),))
    """
    by_age = age_limits_of(person)
    cap_min = _tightened(by_age.cap_min, person.cap_min)
    if day is not None and plan.conditions.ramp_up:
        cap_min = int(cap_min * float(ramp_up_fraction(day)))
    bout_min = min(_tightened(by_age.bout_min, person.bout_min), cap_min)
    rest_min = max(by_age.rest_min, person.rest_min or 0)
    hours = _hours(plan, person, by_age)
    if bout_min <= 0:
        return Limits(0, rest_min, 0, hours)
    limbs = (limb,) if limb is not None else _open_limbs(by_age)
    rule = heat if heat is not None else _heat_of(plan, person, limbs, (bout_min, cap_min))
    if rule is not None:
        bout_min, rest_min = min(bout_min, rule.on_min), max(rest_min, rule.off_min)
    rest_min = max(rest_min, *(murrell_min(person, each, bout_min, cap_min) for each in limbs))
    return Limits(bout_min, rest_min, cap_min if bout_min > 0 else 0, hours)


def _tightened(limit: int, own: int | None) -> int:
    """Return the lesser of a limit and a person's own value, never below 0."""
    return limit if own is None else max(0, min(limit, own))


def _open_limbs(by_age: AgeLimits) -> tuple[Limb, ...]:
    """Return the limbs an age may turn with, legs first."""
    legs: tuple[Limb, ...] = ("legs",) if by_age.may_pedal else ()
    arms: tuple[Limb, ...] = ("arms",) if by_age.may_crank else ()
    return legs + arms


def _hours(plan: Plan, person: Person, by_age: AgeLimits) -> tuple[Part, ...]:
    """Return own hours within those of the age and, for minors, of the plan."""
    first_h, last_h = by_age.hours
    parts = _common(_own_parts(person), (_part(first_h, last_h),))
    if age_of(person) < ADULT_AGE and plan.conditions.minors_hours:
        parts = _common(parts, merged(day_parts(plan.conditions.minors_hours)))
    return parts


def _part(first_h: float, last_h: float) -> Part:
    """Return hours of the day as minutes."""
    return round(first_h * MINUTES_PER_HOUR), round(last_h * MINUTES_PER_HOUR)


def _own_parts(person: Person) -> tuple[Part, ...]:
    """Return a person's own hours, the whole day where none are given."""
    return merged(day_parts(person.hours)) if person.hours else WHOLE_DAY


def _common(first: tuple[Part, ...], second: tuple[Part, ...]) -> tuple[Part, ...]:
    """Return the parts of the day that lie in both."""
    both = [(max(a, c), min(b, d)) for a, b in first for c, d in second]
    return merged(part for part in both if part[0] < part[1])


def _heat_of(plan: Plan, person: Person, limbs: tuple[Limb, ...], minutes: tuple[int, int]) -> HeatRule | None:
    """Return the widest heat rule of some limbs at the plan's own air temperature, None where heat limits are off.

    Parts of days with their own temperature are the callers': they pass a rule for their time to `person_limits`.
    """
    if not plan.conditions.heat_limits:
        return None
    rules = (heat_rule_at(person, limb, plan.conditions.air_degc, None, minutes) for limb in limbs)
    return max(rules, key=lambda rule: rule.on_min)


def heat_rule_at(
    person: Person, limb: Limb, air_degc: float, wbgt_degc: float | None, bout_and_day_min: tuple[float, float]
) -> HeatRule:
    """Return the heat rule for a person turning with a limb at a temperature.

    Examples
    --------
    >>> heat_rule_at(Person(id="p", name="Oruun", age=41), "legs", 27.0, None, (20.0, 60.0)).on_min
    15
    """
    watts = person_watts(person, limb, *bout_and_day_min)
    rate_w = float(metabolic_w(watts, mass_of(person), limb))
    return heat_rule(max(rate_w, REST_W), air_degc, wbgt_degc, arms=limb == "arms")


def allowed_stations(plan: Plan, person: Person) -> tuple[Station, ...]:
    """Return the stations in service, with their guards on, at which a person may turn, in the plan's order.

    Parameters
    ----------
    plan : Plan
        The plan.
    person : Person
        The person; an empty list of stations means all.

    Returns
    -------
    tuple of Station
        Stations open to the person's age and choice.

    Examples
    --------
    >>> stations = (Station(id="s1", name="Stand", kind="pedal"), Station(id="s2", name="Crank"))
    >>> [s.id for s in allowed_stations(Plan(stations=stations), Person(id="p", name="Y13", age=12))]
    ['s2']
    """
    by_age = limits_for_age(age_of(person))
    open_limbs = _open_limbs(by_age)
    return tuple(
        station
        for station in plan.stations
        if station.in_service
        and station.guarded
        and limb_of(station.kind) in open_limbs
        and (not person.stations or station.id in person.stations)
    )


class PersonOutput(Struct, frozen=True, kw_only=True):
    """One person at one station.

    `station_output_w` (S) is None for a station described by its parts: its chain gives the output. `person_power_w`
    (M) is what turning costs the person at a measured or labelled station, and what the person can give at one
    described by parts at `pace`, where `torque_cap_nm` also binds (None: no limit). `capped`: the station's rating or
    label, not the person, sets the output. `force_capped`: the hand's force sets it. `spread_fraction` joins the
    person's and the station's own.
    """

    station_output_w: float | None
    person_power_w: float
    capped: bool
    spread_fraction: float
    person_spread_fraction: float
    station_spread_fraction: float
    force_capped: bool = False
    torque_cap_nm: float | None = None
    pace: Pace = Pace()


def person_output(plan: Plan, person: Person, station: Station) -> PersonOutput:
    """Return what a person gives at a station over the bouts and the day that hold for them there.

    Measured: S = rated (P - P0)/(P_ref - P0), kept between 0 and rated, P0 the station's drag; a given share replaces
    it: S = rated share. By label: S = min(label, eta P). M = S/eta at both. By parts: M only. At a hand crank the
    hand's force limits P.

    Parameters
    ----------
    plan : Plan
        The plan.
    person : Person
        The person; 0 W at a cap of 0 min.
    station : Station
        The station; a rating that is missing counts as 0 W (the plan's checks report it).

    Returns
    -------
    PersonOutput
        Watts at S and M, what limits them, and their spread.

    References
    ----------
    Drag law derived: a fixed drag takes the same watts from everybody, so a weaker person keeps a smaller share.

    Examples
    --------
    >>> crank = Station(id="s", name="Crank", output_w=6.0)
    >>> result = person_output(Plan(), Person(id="p", name="Oruun", age=40), crank)
    >>> round(result.station_output_w, 2), round(result.person_power_w, 2)
    (6.0, 12.0)
    """
    limb = limb_of(station.kind)
    limits = person_limits(plan, person, limb=limb)
    duration = (float(limits.bout_min), float(limits.cap_min))
    factor = DEVICE_FACTOR[station.kind]
    force_w, torque_nm = _force_caps(station, limits.cap_min)
    free_w = factor * person_watts(person, limb, *duration) if limits.cap_min > 0 else 0.0
    watts = min(free_w, force_w)
    given = _given_share(person, limb, limits) if station.described_by == "measured" else None
    output_w: float | None = None
    power_w, capped = watts, False
    if station.described_by == "label":
        output_w = min(watts * station.eta_fraction, station.label_w or 0.0)
        capped = output_w < watts * station.eta_fraction
    elif station.described_by == "measured":
        # The hand's force holds the reference adult too: what was measured at this crank stands.
        full_w = min(factor * reference_w(limb, *duration), force_w)
        share = _share_of_rating(station, limb, watts / full_w, given)
        output_w, capped = (station.output_w or 0.0) * min(max(share, 0.0), 1.0), share > 1.0
    if output_w is not None:
        power_w = output_w / station.eta_fraction
    own, rated = person_spread(person, limb, *duration), _station_spread(station)
    return PersonOutput(
        station_output_w=output_w,
        person_power_w=power_w,
        capped=capped,
        spread_fraction=combined_spread(own, rated),
        person_spread_fraction=own,
        station_spread_fraction=rated,
        force_capped=given is None and watts < free_w,
        torque_cap_nm=torque_nm,
        pace=_pace(person, limb),
    )


def _pace(person: Person, limb: Limb) -> Pace:
    """Return the cadence of least effort and the loss away from it; own watts hold at the person's own station."""
    if person.watts_by == "own" and given_for(person, limb) is not None:
        return Pace()
    return pace_of(limb, age_of(person))


def _given_share(person: Person, limb: Limb, limits: Limits) -> float | None:
    """Return the share a person gave for a limb, 0 without minutes, None where they gave none."""
    if person.watts_by != "share":
        return None
    return given_for(person, limb) if limits.cap_min > 0 else 0.0


def _share_of_rating(station: Station, limb: Limb, power_ratio: float, given: float | None) -> float:
    """Return which share of a measured station's rating comes out, before its limits, by the drag law or as given."""
    if given is not None:
        return given
    drag = station.drag_fraction
    if drag is None:
        drag = DRAG_FRACTION_ARMS if limb == "arms" else DRAG_FRACTION_LEGS
    return (power_ratio - drag) / (1.0 - drag) if drag < 1.0 else 0.0


def _force_caps(station: Station, cap_min: int) -> tuple[float, float | None]:
    """Return the watts and the torque at which a hand crank reaches the force for a long day; none for feet."""
    if limb_of(station.kind) != "arms" or cap_min <= LONG_DAY_MIN:
        return math.inf, None
    pocket = station.kind == "pocket_crank"
    radius_m = station.crank_radius_m or (POCKET_RADIUS_M if pocket else DEFAULT_RADIUS_M)
    rpm = station.comfort_high_rpm or (POCKET_CRANK_RPM if pocket else DEFAULT_CRANK_RPM)
    if station.described_by != "parts" and station.comfort_low_rpm and station.comfort_high_rpm:
        rpm = (station.comfort_low_rpm + station.comfort_high_rpm) / 2.0
    torque_nm = float(handle_torque_nm(radius_m)) * DEVICE_FACTOR[station.kind]
    return float(p_crank_cap_w(radius_m, rpm)) * DEVICE_FACTOR[station.kind], torque_nm


def _station_spread(station: Station) -> float:
    """Return the spread noted at a measured station's output, 0 where none is."""
    note = station.notes.get("output_w")
    return 0.0 if note is None or note.spread_fraction is None else note.spread_fraction
