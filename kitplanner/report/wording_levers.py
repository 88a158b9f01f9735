"""Levers and combinations in words: what changes from what to what, and whether that is enough."""

from __future__ import annotations

from types import MappingProxyType

from kitplanner.plan.edits_levers import LeverChange
from kitplanner.plan.records import Plan
from kitplanner.planners.levers_records import ChangeRow, Character, Combination, LeverRow, LeversResult
from kitplanner.report.wording import energy, listed, minutes, number, percent, plain, sentence

_ASK_FIRST = "Minutes, volunteers and stations are only counted here: ask the people first, and nobody at 0 is asked."


_LEVER_NAMES = MappingProxyType(
    {
        "use": "{name}, less use",
        "half": "{name}, half the use",
        "off": "{name}, left out",
        "fewer": "{name}, half of them",
        "count": "{name}, number",
        "minutes": "minutes a day of {name}",
        "minutes+units": "minutes a day of {name}",
        "volunteers": "more adults at {name}",
        "volunteers+units": "more adults at {name}",
        "units": "more of {name}",
        "source": "another source into the stores",
        "days": "days to get through",
        "start": "start charge of {name}",
        "stores": "more of {name}",
    }
)


def lever_name(plan: Plan, lever: str) -> str:
    """Return what a lever works on, as the first words of a line."""
    kind, _, target = lever.partition(":")
    words = _LEVER_NAMES.get(kind)
    return plain(lever) if words is None else words.format(name=_name_of(plan, target))


def _name_of(plan: Plan, target: str) -> str:
    for section in (plan.devices, plan.groups, plan.people, plan.stations, plan.stores):
        for record in section:
            if record.id == target:
                return plain(record.name) or plain(record.id)
    return plain(target)


def value_words(value: float, unit: str) -> str:
    """Return a lever's value with its unit; shares as percent."""
    if unit.startswith("of its"):
        return f"{percent(value)} {unit}"
    words = unit.partition(",")[0]
    return "1 day" if value == 1.0 and words == "days" else f"{short_number(value)} {words}"


def short_number(value: float) -> str:
    """Return a number with no more decimals than it has, up to two."""
    return number(value, next((places for places in (0, 1) if abs(value - round(value, places)) < 1e-9), 2))


def row_sentence(plan: Plan, row: LeverRow) -> str:
    """Return one lever alone in one sentence."""
    name = lever_name(plan, row.lever)
    step = f"from {_from_words(row)} to {value_words(row.to, row.unit)}{_with_units(plan, row)}"
    if row.enough:
        return sentence(f"{name}: {step} is enough, {percent(row.coverage_fraction)} covered")
    return sentence(f"{name}: {step} is not enough alone, {percent(row.coverage_fraction)} covered")


def _from_words(row: LeverRow | ChangeRow) -> str:
    return percent(row.from_value) if row.unit.startswith("of its") else short_number(row.from_value)


def _with_units(plan: Plan, row: LeverRow) -> str:
    added = [change for change in row.changes if change.lever.startswith("units:") and change.lever != row.lever]
    return "".join(f", with {short_number(change.to)} of {_target_name(plan, change)}" for change in added)


def _target_name(plan: Plan, change: LeverChange | ChangeRow) -> str:
    return _name_of(plan, change.lever.partition(":")[2])


def change_words(plan: Plan, row: ChangeRow) -> str:
    """Return one change of a combination as part of a sentence."""
    kind, name = row.lever.partition(":")[0], _target_name(plan, row)
    if kind == "use" and row.to == 0.0:
        return f"{name} off"
    if kind == "count":
        return f"{short_number(row.to)} of {short_number(row.from_value)} {name}"
    if kind == "units":
        return f"{short_number(row.to)} instead of {short_number(row.from_value)} of {name}"
    if kind == "minutes":
        return f"{name} up to {short_number(row.to)} instead of {short_number(row.from_value)} min a day"
    return f"{name} {value_words(row.to, row.unit)} instead of {_from_words(row)}"


def character_words(character: Character) -> str:
    """Return what sets a combination apart."""
    match character:
        case "mildest":
            return "mildest with the stations there are"
        case "cuts_only":
            return "without more minutes"
        case "alike":
            return "the same share from every device"
        case "more_turning":
            return "as much more turning as may be, one more station"
        case "spares_one":
            return "sparing what the mildest cuts most"
        case "fewest":
            return "fewest changes"


def combination_sentence(plan: Plan, row: Combination) -> str:
    """Return a combination with what it brings and costs."""
    changes = listed([change_words(plan, change) for change in row.changes])
    spare = percent(max(0.0, (row.coverage_fraction or 1.0) - 1.0))
    text = f"{character_words(row.character)}: with {changes} it fits with {spare} to spare"
    costs = [f"{energy(row.given_up_wh_per_day, 'D')} a day given up"] if row.given_up_wh_per_day > 0.0 else []
    if row.more_min_per_day >= 0.5:
        costs.append(f"{minutes(row.more_min_per_day)} more turning a day")
    if costs:
        text += f"; {listed(costs)}"
    if row.rota_unmet_wh is not None and row.rota_unmet_wh >= 0.05:
        text += f"; a rota of it still leaves {energy(row.rota_unmet_wh, 'O')} unmet"
    return sentence(text)


def verdict_sentence(result: LeversResult) -> str:
    """Return whether anything has to change and whether one lever is enough."""
    if result.coverage_fraction is None:
        return "Nothing is needed, so nothing has to change."
    if result.fits:
        return f"It fits already, {percent(result.coverage_fraction)} covered; nothing has to change."
    alone = any(row.enough for row in result.singles)
    cut = any(row.enough for row in result.singles if row.lever.partition(":")[0] in ("use", "half", "fewer", "off"))
    text = f"as given {percent(result.coverage_fraction)} are covered"
    if not alone:
        text += "; no lever alone is enough"
    elif not cut:
        text += "; no cut alone is enough"
    if not result.combinations:
        text += "; no combination is enough with every device above a third of its use"
    return sentence(text)


def ask_first_sentence(result: LeversResult) -> str:
    """Return the reminder that minutes and people are not the planner's to take; empty where none are counted."""
    kinds = {row.lever.partition(":")[0] for row in result.singles}
    return _ASK_FIRST if kinds & {"minutes", "volunteers"} else ""
