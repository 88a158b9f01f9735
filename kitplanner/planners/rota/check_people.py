"""The judge on people: bouts, rest, the day's minutes, hours, blocked times, absence, heat, and who may turn where.

Part of the judge (`check.py`): imports plan and domain only.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from itertools import groupby, pairwise

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.records import Block, Person, Plan
from kitplanner.planners.rota.check_finding import (
    DAY_MIN,
    Part,
    Turn,
    Violation,
    is_inside,
    named,
    overlap_min,
    parts_of,
    words,
)
from kitplanner.planners.rota.check_limits import (
    Asked,
    asked,
    by_age,
    hottest_rule,
    is_minor,
    limb_at,
    rest_after_min,
    years,
)

# Minutes are whole; anything below is rounding of the laws.
ROUNDING_MIN = 1e-6


def check_people(plan: Plan, turns: Iterable[Turn]) -> Iterator[Violation]:
    """Yield every rule about the people who turn that a rota breaks.

    Parameters
    ----------
    plan : Plan
        The plan.
    turns : iterable of Turn
        Bouts by time.
    """
    by_person: dict[str, list[Turn]] = {}
    for turn in turns:
        by_person.setdefault(turn.person.id, []).append(turn)
    for own in by_person.values():
        person = own[0].person
        for day, group in groupby(own, key=lambda turn: turn.day):
            yield from _check_day(plan, person, day, list(group))
        yield from _check_rests(plan, own)


def _check_day(plan: Plan, person: Person, day: int, turns: list[Turn]) -> Iterator[Violation]:
    limits = asked(plan, person, day)
    plain = asked(plan, person, None)
    for turn in turns:
        yield from _check_length(turn, plain)
        yield from _check_hours(turn, limits)
        yield from check_presence(plan, turn, person)
        yield from _check_place(turn)
        yield from _check_heat(plan, turn)
    total = sum(turn.length for turn in turns)
    if total > limits.cap_min:
        ramped = total <= plain.cap_min
        why = " in the first days of the heat" if ramped else ""
        text = (
            f"{named(person)} turns {total} min on day {day}; at most {limits.cap_min} min a day{why}, "
            f"{total - limits.cap_min} min too many."
        )
        yield Violation(rule="ramp_up" if ramped else "cap", text=text, day=day, person=person.id)


def _check_length(turn: Turn, limits: Asked) -> Iterator[Violation]:
    if turn.length > limits.bout_min:
        text = (
            f"{named(turn.person)} turns {turn.length} min in one go {turn.when}; at most {limits.bout_min} min, "
            f"{turn.length - limits.bout_min} min too long."
        )
        yield turn.broken("bout", text)


def _check_hours(turn: Turn, limits: Asked) -> Iterator[Violation]:
    if not is_inside(turn.start, turn.end, limits.own_hours):
        yield turn.broken("hours", _outside(turn, "their own hours", limits.own_hours))
    if not is_inside(turn.start, turn.end, limits.age_hours):
        whose = "the hours for minors" if is_minor(turn.person) else f"the hours at {years(turn.person)} years"
        yield turn.broken("minors" if is_minor(turn.person) else "hours", _outside(turn, whose, limits.age_hours))


def _outside(turn: Turn, whose: str, parts: tuple[Part, ...]) -> str:
    beyond = turn.length - overlap_min(turn.start, turn.end, parts)
    if not beyond:
        return f"{named(turn.person)} turns {turn.when}, across a gap of {whose} ({words(parts)})."
    return f"{named(turn.person)} turns {turn.when}, {beyond} min outside {whose} ({words(parts)})."


def holds_for(block: Block, person: Person, day: int) -> bool:
    """Tell whether a block holds for a person on a day."""
    return (not block.groups or person.group in block.groups) and (not block.days or day in block.days)


def check_presence(plan: Plan, turn: Turn, person: Person, doing: str = "turns") -> Iterator[Violation]:
    """Yield where a person who turns or watches is blocked, off or away."""
    for block in plan.blocks:
        if doing == "turns" and block.kind == "quiet" and not block.groups:
            continue  # The place's quiet hours close the station: said there.
        clash = overlap_min(turn.start, turn.end, parts_of(block.windows)) if holds_for(block, person, turn.day) else 0
        if clash:
            text = (
                f'{named(person)} {doing} {turn.when}, {clash} min inside the blocked time "{block.name or block.id}" '
                f"({words(parts_of(block.windows))})."
            )
            yield turn.broken("quiet" if block.kind == "quiet" else "blocked", text, person)
    if turn.day in person.days_off:
        yield turn.broken("day_off", f"{named(person)} {doing} {turn.when}, on a day off.", person)
    for spell in person.absences:
        away = (minutes_of_day(spell.start), minutes_of_day(spell.end))
        clash = overlap_min(turn.start, turn.end, (away,)) if spell.day == turn.day else 0
        if clash:
            text = f"{named(person)} {doing} {turn.when}, {clash} min of it while away ({words((away,))})."
            yield turn.broken("absent", text, person)


def _check_place(turn: Turn) -> Iterator[Violation]:
    person, station = turn.person, turn.station
    age, limb = by_age(person), limb_at(station)
    if person.stations and station.id not in person.stations:
        text = f"{named(person)} turns at {named(station)} {turn.when}, which is not among their stations."
        yield turn.broken("allowed", text)
    if age.cap_min <= 0:
        text = f"{named(person)} turns {turn.when}; at {years(person)} years nobody is counted."
        yield turn.broken("age", text)
    elif not (age.may_pedal if limb == "legs" else age.may_crank):
        text = f"{named(person)} turns at {named(station)} with the {limb} {turn.when}; not at {years(person)} years."
        yield turn.broken("age", text)


def _check_heat(plan: Plan, turn: Turn) -> Iterator[Violation]:
    rule = hottest_rule(plan, turn.person, limb_at(turn.station), turn.day, (turn.start, turn.end))
    if rule is not None and turn.length > rule.on_min:
        text = (
            f"{named(turn.person)} turns {turn.length} min {turn.when}; in this heat at most {rule.on_min} min, "
            f"{turn.length - rule.on_min} min too long."
        )
        yield turn.broken("heat", text)


def _check_rests(plan: Plan, turns: list[Turn]) -> Iterator[Violation]:
    """Yield rests that are too short; also across midnight, for a body knows no date."""
    known: dict[tuple[str, int], float] = {}
    for before, after in pairwise(turns):
        gap = after.since - before.until
        if gap < 0:
            continue  # In two places at once: said by another rule.
        limb = limb_at(before.station)
        key = (limb, before.length)
        if key not in known:
            known[key] = rest_after_min(plan, before.person, limb, before.length)
        least = known[key]
        heat = hottest_rule(plan, before.person, limb, before.day, (before.start, before.end))
        hot = heat is not None and heat.off_min > least
        if heat is not None:
            least = max(least, float(heat.off_min))
        if gap < least - ROUNDING_MIN:
            text = (
                f"{named(before.person)} rests {gap} min before turning {after.when}; at least {least:.0f} min "
                f"after the bout that ends at {clock(before.end)}, {least - gap:.0f} min too short."
            )
            yield after.broken("heat" if hot else "rest", text)


def check_watchers(plan: Plan, turns: Iterable[Turn]) -> Iterator[Violation]:
    """Yield bouts without the watcher they need, and watchers who may not watch.

    Parameters
    ----------
    plan : Plan
        The plan.
    turns : iterable of Turn
        Bouts by time.
    """
    for turn in turns:
        watcher = turn.watcher
        if watcher is None:
            if is_minor(turn.person) or turn.station.needs_watcher:
                why = f"at {years(turn.person)} years" if is_minor(turn.person) else f"at {named(turn.station)}"
                yield turn.broken(
                    "watcher", f"{named(turn.person)} turns {turn.when} with nobody watching; {why} an adult must."
                )
            continue
        if watcher.id == turn.person.id:
            yield turn.broken("watcher", f"{named(watcher)} watches over their own bout {turn.when}.")
        if is_minor(watcher):
            text = f"{named(watcher)} watches {turn.when} at {years(watcher)} years; a watcher is 18 or older."
            yield turn.broken("watcher", text, watcher)
        if watcher.may_watch is False:
            yield turn.broken("watcher", f"{named(watcher)} watches {turn.when} and chose not to.", watcher)
        windows = watcher.watch_hours or watcher.hours
        hours = parts_of(windows) if windows else ((0, DAY_MIN),)
        if not is_inside(turn.start, turn.end, hours):
            beyond = turn.length - overlap_min(turn.start, turn.end, hours)
            text = f"{named(watcher)} watches {turn.when}, {beyond} min outside their hours ({words(hours)})."
            yield turn.broken("watcher", text, watcher)
        yield from check_presence(plan, turn, watcher, "watches")


def check_one_place(turns: Iterable[Turn]) -> Iterator[Violation]:
    """Yield people who would turn or watch in two places at once.

    Parameters
    ----------
    turns : iterable of Turn
        Bouts by time.
    """
    duties: dict[str, list[tuple[Turn, Person, str]]] = {}
    for turn in turns:
        duties.setdefault(turn.person.id, []).append((turn, turn.person, "turn"))
        if turn.watcher is not None and turn.watcher.id != turn.person.id:
            duties.setdefault(turn.watcher.id, []).append((turn, turn.watcher, "watch"))
    for own in duties.values():
        last: tuple[Turn, Person, str] | None = None
        for turn, person, task in own:
            if last is not None and turn.since < last[0].until:
                text = (
                    f"{named(person)} is to {task} at {named(turn.station)} {turn.when} and still has to {last[2]} at "
                    f"{named(last[0].station)} until {clock(last[0].end)}, "
                    f"{min(turn.until, last[0].until) - turn.since} min in two places."
                )
                yield turn.broken("two_places", text, person)
            if last is None or turn.until > last[0].until:
                last = (turn, person, task)
