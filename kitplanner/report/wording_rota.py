"""The rota in words: verdict, what cannot be met and why, aims with their gaps, broken rules, remarks."""

from __future__ import annotations

import datetime as dt
from collections import Counter
from collections.abc import Sequence

from kitplanner.domain.units import clock
from kitplanner.plan.cautions import ADULT_AGE
from kitplanner.plan.records import Person, Plan, Station
from kitplanner.planners.rota.remarks import RotaRemark
from kitplanner.planners.rota.result import (
    ObjectiveName,
    RotaAnswer,
    RotaObjective,
    RotaSolution,
    UnmetUse,
    Violation,
)
from kitplanner.report.wording import counted, energy, listed, number, percent, plain, sentence

LEAST_WH = 0.005
_MOST_NAMED = 5
WEEKDAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")


def day_date(plan: Plan, day: int) -> dt.date:
    """Return the calendar date of a day of the plan."""
    return plan.start + dt.timedelta(days=day - 1)


def day_words(plan: Plan, day: int) -> str:
    """Return a day of the plan with weekday and date."""
    date = day_date(plan, day)
    return f"Day {day}, {WEEKDAYS[date.weekday()]} {date.isoformat()}"


def person_numbers(plan: Plan) -> dict[str, str]:
    """Return people as their numbers in the plan's list, for places where no name should stand."""
    return {one.id: f"no. {place}" for place, one in enumerate(plan.people, start=1)}


def display_names(plan: Plan) -> dict[str, str]:
    """Return people as a wall may show them: the name chosen, of people under 18 its first word only.

    Two people who would read alike get their numbers; a person without a name is a number.
    """
    numbers = person_numbers(plan)
    shown = {one.id: _short_name(one) for one in plan.people}
    alike = Counter(name.casefold() for name in shown.values())
    return {
        key: numbers[key] if not name else name if alike[name.casefold()] == 1 else f"{name} ({numbers[key]})"
        for key, name in shown.items()
    }


def _short_name(person: Person) -> str:
    name = plain(person.name)
    young = person.age is not None and person.age < ADULT_AGE
    return name.split(" ")[0] if young and name else name


def unit_words(station: Station, unit: int) -> str:
    """Return a station, with the unit where it has several."""
    name = plain(station.name) or plain(station.id)
    return f"{name}, unit {unit}" if station.count > 1 else name


def verdict_lines(plan: Plan, answer: RotaAnswer) -> tuple[str, ...]:
    """Return the verdict of a rota: an unmet evening guarantee first, what is met, whether every rule is kept."""
    lines = [_evening_sentence(answer)] if answer.evening else []
    lines.append(_met_sentence(plan, answer))
    if answer.violations:
        broken = counted(len(answer.violations), "rule is broken", "rules are broken")
        lines.append(sentence(f"{broken}, see below"))
    if answer.solution.cut_off:
        seconds = number(answer.solution.seconds, 1)
        lines.append(f"The search was cut off after {seconds} s; with more time the rota may get better.")
    if not answer.has_charging:
        lines.append("The charging table was not made any more; adopt the rota and renew the table, or plan again.")
    return tuple(lines)


def _evening_sentence(answer: RotaAnswer) -> str:
    first = plain(answer.evening[0].text).rstrip(".")
    more = len(answer.evening) - 1
    return sentence(f"evening guarantee not met: {first}{f', and {more} times more' if more else ''}")


def _met_sentence(plan: Plan, answer: RotaAnswer) -> str:
    kept = "" if answer.violations else "every rule is kept"
    load = _load_words(answer)
    if answer.unmet_wh > LEAST_WH:
        met = f"{energy(answer.unmet_wh, 'O')} of use cannot be met{_proof(answer, 'unmet')}"
        return sentence("; ".join(part for part in (met, kept, load) if part))
    met = "every need is met"
    if answer.unmet_margin_wh > LEAST_WH:
        share = percent(plan.margin_fraction)
        met += f", but {energy(answer.unmet_margin_wh, 'O')} of the margin of {share} are missing"
        return sentence("; ".join(part for part in (met, kept, load) if part))
    return sentence("; ".join(part for part in (f"{met} and {kept}" if kept else met, load) if part))


def _proof(answer: RotaAnswer, name: ObjectiveName) -> str:
    """Return what is proven about an aim, in brackets; empty without a bound."""
    row = aim(answer, name)
    if row is None:
        return ""
    if row.proved:
        return " (proven least)"
    return f" (no rota can get below {_value(row, row.bound)})"


def aim(answer: RotaAnswer, name: ObjectiveName) -> RotaObjective | None:
    """Return one aim of an answer, None where it was not looked for."""
    return next((row for row in answer.solution.objectives if row.name == name), None)


def _load_words(answer: RotaAnswer) -> str:
    row = aim(answer, "greatest_load")
    if row is None or not answer.solution.bouts:
        return "" if answer.solution.bouts else "nobody turns"
    most = f"nobody turns more than {percent(row.value)} of their own minutes"
    if row.value >= 1.0 - 1e-9:
        most = "somebody turns all of their own minutes"
    return f"{most}: proven least" if row.proved else f"{most}, {gap_words(row)}"


def aim_words(name: ObjectiveName) -> str:
    """Return what an aim counts, as the head of a line."""
    match name:
        case "unmet":
            return "use that cannot be met"
        case "margin":
            return "margin that is missing"
        case "excess":
            return "made beyond use and margin"
        case "greatest_load":
            return "greatest share of own minutes"
        case "spread":
            return "difference of shares"
        case "unpopular":
            return "most early, late or hot slots of one person"
        case "handovers":
            return "bouts"
        case "change":
            return "bouts changed against the posted rota"


def value_words(row: RotaObjective) -> str:
    """Return what an aim came to, with its unit."""
    return _value(row, row.value)


def bound_words(row: RotaObjective) -> str:
    """Return below what no rota can get, with its unit."""
    return _value(row, row.bound)


def _value(row: RotaObjective, value: float) -> str:
    match row.unit:
        case "fraction":
            return percent(value, 1)
        case "Wh":
            return energy(value if value > LEAST_WH else 0.0)
        case _:
            return f"{round(value)} {row.unit}"


def gap_words(row: RotaObjective) -> str:
    """Return how far an aim is from what is proven, in units people understand."""
    if row.proved:
        return "proven least"
    if row.bound <= 0.0 and row.unit != "Wh":
        return "no bound is known"
    if row.name == "greatest_load":
        return plain(row.words)
    left_out = "; the bound leaves out watchers and changeover" if row.relaxed else ""
    return f"at most {_value(row, row.gap)} above the least possible{left_out}"


def gap_fraction(solution: RotaSolution) -> float | None:
    """Return how far the made energy is from its proven value, over that value; None without a bound."""
    bound = solution.made_bound_wh
    if bound != bound:  # noqa: PLR0124 - not a number where no bound is kept
        return None
    if bound <= 0.0:
        return 0.0 if solution.made_wh <= LEAST_WH else None
    return abs(solution.made_wh - bound) / bound


def is_proved(solution: RotaSolution) -> bool:
    """Return whether the made energy is proven: use, margin and energy beyond them all at their bounds."""
    rows = [row for row in solution.objectives if row.name in ("unmet", "margin", "excess")]
    return bool(rows) and all(row.proved for row in rows)


def unmet_sentences(plan: Plan, answer: RotaAnswer) -> tuple[str, ...]:
    """Return what cannot be met: one sentence for each device, with when it first falls short and why."""
    order = {device.id: place for place, device in enumerate(plan.devices)}
    by_device: dict[str, list[UnmetUse]] = {}
    for row in answer.unmet:
        by_device.setdefault(row.device, []).append(row)
    rows = sorted(by_device.items(), key=lambda item: (item[1][0].priority, order.get(item[0], len(order))))
    return tuple(_unmet_sentence(plan, device, found) for device, found in rows)


def _unmet_sentence(plan: Plan, device_id: str, rows: Sequence[UnmetUse]) -> str:
    name = next((plain(device.name) for device in plan.devices if device.id == device_id), "")
    first = min(rows, key=lambda row: (row.day, row.start_min))
    days = sorted({row.day for row in rows})
    when = f"from day {first.day} {clock(first.start_min)}"
    if len(days) == 1:
        when = f"on day {first.day} from {clock(first.start_min)}"
    elif len(days) < days[-1] - days[0] + 1:
        when += f", on {counted(len(days), 'day', 'days')}"
    reasons = listed(list(dict.fromkeys(plain(row.why).rstrip(".") for row in rows if row.why))[:_MOST_NAMED])
    missed = energy(sum(row.wh for row in rows), "O")
    who = " ".join(part for part in (plain(device_id), name) if part)
    return sentence(f"{who} (priority {first.priority}) goes without {missed} {when}{': ' if reasons else ''}{reasons}")


def violation_sentence(found: Violation) -> str:
    """Return a broken rule in one sentence; the judge's words name day, time and person."""
    return sentence(plain(found.text))


def remark_sentence(plan: Plan, remark: RotaRemark) -> str:
    """Return what a rota cannot help, with what would change it."""
    named = _people_named(plan, remark.people)
    match remark.kind:
        case "no_people":
            return "Nobody is in the plan, so nobody can turn; add people."
        case "no_stations":
            return "No station is in the plan, so nothing can be made; add a station."
        case "nobody_turns":
            return (
                "Nobody gives watts to any station: all are at 0 minutes, away, or not allowed at a station that "
                "delivers; change minutes, days or stations."
            )
        case "stations_shut":
            return (
                "No station can be used at any time: out of service, without a guard, or shut by its own or the quiet "
                "hours; open one."
            )
        case "blocked":
            return (
                "Nobody may turn at a time when a station of theirs is open: hours, blocks and days off leave no time; "
                "free some."
            )
        case "no_watcher":
            return sentence(
                f"{named} may only turn while an adult watches, and no other adult ever can at that time; add an adult "
                "who may watch, who needs no minutes of their own"
            )
        case "one_person":
            return sentence(f"only {named} turns, so nobody shares the load or steps in; ask a second person")
        case "small_store":
            return sentence(
                f"all stores together hold {energy(remark.room_wh, 'O')} and one bout can bring "
                f"{energy(remark.bout_wh, 'O')}: what finds no device on charge then is lost; add a store"
            )


def _people_named(plan: Plan, people: Sequence[str]) -> str:
    shown = display_names(plan)
    names = [shown.get(person, plain(person)) for person in people[:_MOST_NAMED]]
    more = len(people) - len(names)
    return listed([*names, f"{more} more"]) if more > 0 else listed(names)
