"""Checks of people: how watts are given, age limits, hours of minors, who can watch."""

from __future__ import annotations

from collections.abc import Iterator

from kitplanner.domain.age_limits import AgeLimits, limits_for_age
from kitplanner.plan.problem import Place, Problem, error, note, warning
from kitplanner.plan.records import Person, Plan, Station, Window

DEFAULT_AGE = 40
ADULT_AGE = 18
SELF_TEST_BELOW_AGE = 65
_LEG_KINDS = frozenset({"pedal", "treadle", "rocker"})


def check_people(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of single people and of the group that shares the work."""
    single = (problem for person in plan.people for problem in _check_person(plan, person))
    return (*single, *_check_watching(plan), *_check_somebody(plan))


def is_counted(person: Person) -> bool:
    """Tell whether a person gives any minutes, by the own cap and the age limit."""
    limits = _limits(person)
    return person.cap_min != 0 and limits.cap_min > 0


def _limits(person: Person) -> AgeLimits:
    age = DEFAULT_AGE if person.age is None else person.age
    return limits_for_age(age, light=person.level == "light" and person.watts_by == "level")


def _check_person(plan: Plan, person: Person) -> Iterator[Problem]:
    place = ("people", person.id)
    if person.cap_min == 0:
        return
    if person.age is None:
        yield note((*place, "age"), f"the age is not given and counts as {DEFAULT_AGE}", "enter the age")
    yield from _check_limits(place, person)
    yield from _check_watts(place, person)
    if person.age is not None and person.age < ADULT_AGE:
        yield from _check_minor(plan, place, person)
    for key in ("hours", "watch_hours"):
        if any(window.end < window.start for window in getattr(person, key)):
            yield note((*place, key), "the hours run through midnight", "swap start and end if this is not meant")


def _check_limits(place: Place, person: Person) -> Iterator[Problem]:
    limits = _limits(person)
    if limits.cap_min == 0:
        yield note(place, f"at the age of {person.age} nobody is counted in the plan", "set the minutes a day to 0")
        return
    pairs = (("bout_min", limits.bout_min, "longest turn"), ("cap_min", limits.cap_min, "minutes a day"))
    for key, most, word in pairs:
        own = getattr(person, key)
        if own is not None and own > most:
            yield note(
                (*place, key),
                f"the {word} of {own} min is above the age limit of {most} min, and the lower holds",
                f"enter {most} or less",
            )
    if person.rest_min is not None and person.rest_min < limits.rest_min:
        yield note(
            (*place, "rest_min"),
            f"the rest of {person.rest_min} min is below the age limit of {limits.rest_min} min, and the longer holds",
            f"enter {limits.rest_min} or more",
        )
    if person.bout_min is not None and person.cap_min is not None and person.bout_min > person.cap_min:
        yield note(
            (*place, "bout_min"),
            f"the longest turn of {person.bout_min} min is more than the {person.cap_min} min a day",
            "make the turn shorter",
        )


def _check_watts(place: Place, person: Person) -> Iterator[Problem]:
    if person.watts_by == "self_test" and person.age is not None and not ADULT_AGE <= person.age < SELF_TEST_BELOW_AGE:
        yield error(
            (*place, "watts_by"),
            f"the self-test is for adults under {SELF_TEST_BELOW_AGE} only and this person is {person.age}",
            "choose age and effort level or a share",
        )
    keys = {
        "share": ("share_legs_fraction", "share_arms_fraction"),
        "own": ("own_legs_w", "own_arms_w"),
        "self_test": ("test_legs_w", "test_arms_w"),
    }.get(person.watts_by, ())
    if keys and all(getattr(person, key) is None for key in keys):
        yield warning(
            (*place, keys[0]),
            "no figure is given for legs or arms, so age and effort level are used",
            "enter a figure or choose age and effort level",
        )


def _check_minor(plan: Plan, place: Place, person: Person) -> Iterator[Problem]:
    limits = _limits(person)
    if limits.cap_min == 0:
        return
    allowed = _allowed_stations(plan, person)
    if not limits.may_pedal and allowed and all(station.kind in _LEG_KINDS for station in allowed):
        yield note(
            (*place, "stations"),
            f"at the age of {person.age} nobody pedals in the plan",
            "allow a crank or set 0 minutes",
        )
    late = [window for window in person.hours if _is_outside(window, limits.hours)]
    if late:
        first, last = (f"{int(hour):02d}:00" for hour in limits.hours)
        yield note(
            (*place, "hours"),
            f"{late[0].start}-{late[0].end} goes beyond the hours of young people, {first}-{last}, which hold",
            "shorten these hours",
        )


def _is_outside(window: Window, hours: tuple[float, float]) -> bool:
    start, end = (int(text[:2]) + int(text[3:]) / 60 for text in (window.start, window.end))
    return end < start or start < hours[0] or end > hours[1]


def _allowed_stations(plan: Plan, person: Person) -> tuple[Station, ...]:
    return tuple(one for one in plan.stations if not person.stations or one.id in person.stations)


def _may_watch(person: Person) -> bool:
    is_adult = person.age is None or person.age >= ADULT_AGE
    return is_adult and person.may_watch is not False


def _check_watching(plan: Plan) -> Iterator[Problem]:
    minors = [one for one in plan.people if one.age is not None and one.age < ADULT_AGE and is_counted(one)]
    watchers = [one for one in plan.people if _may_watch(one)]
    if minors and not watchers:
        yield warning(
            ("people",),
            f"{minors[0].id} is under {ADULT_AGE} and turns only with an adult watching, but no adult may watch",
            "add an adult who may watch or set the minutes to 0",
        )
    for person in plan.people:
        if person.may_watch and person.age is not None and person.age < ADULT_AGE:
            yield warning(
                ("people", person.id, "may_watch"),
                f"only adults watch and this person is {person.age}",
                "choose an adult to watch",
            )
    for station in plan.stations:
        if station.needs_watcher and station.in_service and len(watchers) < 1:
            yield warning(
                ("stations", station.id, "needs_watcher"), "no adult may watch here", "add an adult who may watch"
            )


def _check_somebody(plan: Plan) -> Iterator[Problem]:
    usable = [one for one in plan.stations if one.in_service and one.guarded]
    if usable and not any(is_counted(person) for person in plan.people):
        yield warning(
            ("people",), "nobody gives any minutes, so no energy is made", "add people or let them set their minutes"
        )
        return
    for station in usable:
        if not any(is_counted(one) and station in _allowed_stations(plan, one) for one in plan.people):
            yield warning(
                ("stations", station.id), "nobody who gives minutes may turn here", "allow somebody at this station"
            )
    if not usable and any(is_counted(person) for person in plan.people):
        yield warning(
            ("stations",), "no station is in service and guarded, so no energy is made", "add or mend a station"
        )
