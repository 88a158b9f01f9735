"""Checks of sizes, ids and references between records."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from kitplanner.plan.checks_rota import rota_collections
from kitplanner.plan.fields import SECTION_KINDS
from kitplanner.plan.places import ordinal, short
from kitplanner.plan.problem import Place, Problem, error
from kitplanner.plan.records import Plan
from kitplanner.plan.references import references

# A planning aid for one household, camp or shelter; beyond this the answers would take minutes and mean little.
MOST_RECORDS = 1000
MOST_STAGES = 50


def check_sizes(plan: Plan) -> tuple[Problem, ...]:
    """Return a problem for every collection with more records than a plan can have."""
    return tuple(
        error(
            (section,),
            f"{len(getattr(plan, section))} records are more than a plan can have ({MOST_RECORDS})",
            "split the plan by building or group, or enter alike ones once with their number",
        )
        for section in SECTION_KINDS
        if len(getattr(plan, section)) > MOST_RECORDS
    )


def check_ids(plan: Plan) -> tuple[Problem, ...]:
    """Return a problem for every id that is empty or stands twice."""
    found: list[Problem] = []
    taken: dict[str, str] = {}
    for section in SECTION_KINDS:
        records = getattr(plan, section)
        found.extend(_check_collection((section,), records))
        for own_id in dict.fromkeys(record.id for record in records):
            if own_id in taken and own_id:
                other = taken[own_id]
                found.append(
                    error((section, own_id), f"the id {short(own_id)} also stands in {other}", "use another id")
                )
            taken.setdefault(own_id, section)
    found.extend(_check_collection(("conditions", "temperatures"), plan.conditions.temperatures))
    for place, records in rota_collections(plan):
        found.extend(_check_collection(place, records))
    for station in plan.stations:
        place = ("stations", station.id, "stages")
        found.extend(_check_collection(place, station.stages))
        if len(station.stages) > MOST_STAGES:
            found.append(error(place, f"{len(station.stages)} stages are too many", f"keep at most {MOST_STAGES}"))
    return tuple(found)


def _check_collection(place: Place, records: tuple[Any, ...]) -> Iterator[Problem]:
    first: dict[str, int] = {}
    for index, record in enumerate(records):
        if not record.id:
            yield error(place, f"the {ordinal(index)} record has an empty id", "give it an id of its own")
        elif record.id in first:
            where = (
                f"the {ordinal(first[record.id])} and the {ordinal(index)} record have the same id {short(record.id)}"
            )
            yield error((*place, record.id), where, "give one of them another id")
        first.setdefault(record.id, index)


def check_references(plan: Plan) -> tuple[Problem, ...]:
    """Return a problem for every key that names a record which is not there."""
    known = {section: {record.id for record in getattr(plan, section)} for section in SECTION_KINDS}
    return tuple(
        error(place, f"there is no {short(named)} among the {section}", "choose one that is there or leave it out")
        for place, section, named in references(plan)
        if named not in known[section]
    )
