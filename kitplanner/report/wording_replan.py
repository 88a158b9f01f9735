"""What a re-plan changes, person by person: only these people need a new slip."""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import Bout, Plan
from kitplanner.planners.rota.replan import ReplanAnswer
from kitplanner.planners.rota.replan_records import PersonChange
from kitplanner.report.wording import counted, energy, plain, sentence

_LEAST_WH = 0.05


def difference_lines(answer: ReplanAnswer) -> tuple[str, ...]:
    """Return the whole difference: a head, one line for each person, locks that could not stay, what stays unmet."""
    plan = answer.plan
    lines = [difference_head(answer)]
    if len(answer.changes) > 1 or not _single_move(answer.changes):
        lines += [person_sentence(plan, change) for change in answer.changes]
    lines += [_lost_lock(plan, bout) for bout in answer.lost_locks]
    if answer.remade:
        lines.append(
            "Holding on to the posted turns would have left more use unserved, so all turns that are neither begun nor "
            "locked were found afresh."
        )
    lines.append(_missing(answer))
    return tuple(line for line in lines if line)


def difference_head(answer: ReplanAnswer) -> str:
    """Return the difference in one sentence.

    The shortest case names the turn itself: "Only Grenoo's 15:20 moves to 16:00."
    """
    if not answer.changes:
        return "Nobody's turns change."
    move = _single_move(answer.changes)
    if move is not None:
        return sentence(f"only {_turn_words(answer.plan, *move)}")
    people = counted(len(answer.changes), "person has", "people have")
    return f"{people} other turns than posted; everybody else's slip stays as it is."


def _single_move(changes: Sequence[PersonChange]) -> tuple[Bout | None, Bout | None] | None:
    """Return the one turn that changed, if that is all."""
    if len(changes) != 1:
        return None
    only = changes[0]
    if only.watched_before or only.watched_after or len(only.before) > 1 or len(only.after) > 1:
        return None
    return (only.before[0] if only.before else None, only.after[0] if only.after else None)


def person_sentence(plan: Plan, change: PersonChange) -> str:
    """Return what changes for one person: turns that move, end otherwise, fall away or are new, and whom they watch."""
    parts = [_turn_words(plan, old, new) for old, new in _paired(change.before, change.after)]
    parts += [f"{_name(plan, change.person)} no longer {_watch_words(plan, bout)}" for bout in change.watched_before]
    parts += [f"{_name(plan, change.person)} {_watch_words(plan, bout)}" for bout in change.watched_after]
    return sentence("; ".join(parts))


def _paired(before: Sequence[Bout], after: Sequence[Bout]) -> list[tuple[Bout | None, Bout | None]]:
    """Return old and new turns of the same day as moves, the same start first; the rest alone."""
    left = list(after)
    pairs: list[tuple[Bout | None, Bout | None]] = []
    for old in before:
        same_day = [new for new in left if new.day == old.day]
        new = next((each for each in same_day if each.start == old.start), same_day[0] if same_day else None)
        if new is not None:
            left.remove(new)
        pairs.append((old, new))
    return [*pairs, *((None, new) for new in left)]


def _turn_words(plan: Plan, old: Bout | None, new: Bout | None) -> str:
    if old is None and new is not None:
        place = _station(plan, new.station)
        return f"{_name(plan, new.person)} turns on day {new.day} from {new.start} to {new.end} at {place}"
    if old is None:
        return ""
    turn = f"{_name(plan, old.person)}'s {old.start} on day {old.day}"
    if new is None:
        return f"{turn} falls away"
    if new.start != old.start:
        moved = f"{turn} moves to {new.start}"
        return moved if new.station == old.station else f"{moved} at {_station(plan, new.station)}"
    if new.station != old.station or new.unit != old.unit:
        return f"{turn} is now at {_station(plan, new.station)}, unit {new.unit}"
    return f"{turn} ends at {new.end} instead of {old.end}"


def _watch_words(plan: Plan, bout: Bout) -> str:
    return f"watches {_name(plan, bout.person)} on day {bout.day} from {bout.start}"


def _lost_lock(plan: Plan, bout: Bout) -> str:
    name = _name(plan, bout.person)
    return f"The locked turn of {name} on day {bout.day} at {bout.start} cannot stay: what has happened forbids it."


def _missing(answer: ReplanAnswer) -> str:
    if answer.unmet_wh >= _LEAST_WH:
        return f"{energy(answer.unmet_wh, 'O')} of use cannot be served."
    if answer.unmet_margin_wh >= _LEAST_WH:
        return f"All use is served; {energy(answer.unmet_margin_wh, 'O')} of the margin are missing."
    return "All use is served, margin included."


def _name(plan: Plan, person_id: str) -> str:
    found = next((person for person in plan.people if person.id == person_id), None)
    return plain(found.name or found.id) if found else plain(person_id)


def _station(plan: Plan, station_id: str) -> str:
    found = next((station for station in plan.stations if station.id == station_id), None)
    return plain(found.name or found.id) if found else plain(station_id)
