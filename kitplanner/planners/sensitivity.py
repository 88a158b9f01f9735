"""What matters most: which few inputs move the verdict, or the minutes of one charge, most within their own spread.

One input at a time goes to the 10 % and 90 % points of its spread while all others stay at their central values. People
vary each on their own, and all together by what may be wrong in the way everybody's watts are estimated. Joint effects
of several inputs are left out; the days ahead simulate them.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np
from msgspec import structs

from kitplanner.domain.spread import lognormal_factors
from kitplanner.plan.edits import set_value
from kitplanner.plan.fields import field
from kitplanner.plan.records import Plan
from kitplanner.planners.effort_spread import CHAIN_LOSS_SPREAD, field_spread
from kitplanner.planners.people import limb_of, person_limits, person_output, person_watts
from kitplanner.planners.people_watts import given_for
from kitplanner.planners.results import FloatArray
from kitplanner.planners.sensitivity_cover import (
    Cover,
    Swings,
    cover_of,
    person_ends,
    shared_factors,
    swings,
    with_efficiency,
)
from kitplanner.planners.sensitivity_inputs import (
    OTHER_SOURCE_SPREAD,
    PLANNING_VALUE,
    at_temperature,
    device_variations,
    margin_variation,
    store_variations,
    temperature_variation,
    varied_field,
)
from kitplanner.planners.sensitivity_records import (
    P90_Z,
    Answered,
    InputName,
    Sensitivity,
    SensitivityRow,
    Variation,
    ranked,
)
from kitplanner.planners.trace_fields import field_step

# How far everybody's watts together may lie from their estimate, and which share of the offered minutes is turned at
# the low end; nobody is planned to turn more than they offered.
PEOPLE_SHARED_SPREAD = 0.20
ATTENDANCE_LOW_FRACTION = 0.80


def coverage_sensitivity(plan: Plan) -> Sensitivity:
    """Return what moves the coverage, and with it the verdict, most.

    Parameters
    ----------
    plan : Plan
        A plan without errors

    Returns
    -------
    Sensitivity
        Rows sorted by swing; coverage as a fraction, at O with margin

    References
    ----------
    One input at a time between the 10 and 90 % points of its spread; shares by root sum of squares, JCGM 100:2008
    (GUM), 5.1 (clause from memory).

    Examples
    --------
    >>> coverage_sensitivity(Plan()).rows
    ()
    """
    cover = cover_of(plan)
    central = cover.fraction()
    if central is None:
        return Sensitivity(question="coverage", answer=None, rows=())
    answered = [
        *_people(cover),
        *_stations(cover),
        *_stores(cover),
        *_sources(cover),
        *_devices(cover),
        *_plan_wide(cover),
    ]
    return Sensitivity(question="coverage", answer=central, rows=ranked(answered))


def joined_people(result: Sensitivity) -> Sensitivity:
    """Return the same answer with the rows of single persons made into one, as independent amounts add up.

    swing = sqrt(sum of swing^2), and the same for the way down and up

    A picture that everybody sees must not rank people; this one does not.

    Parameters
    ----------
    result : Sensitivity
        Answer with one row per person

    Returns
    -------
    Sensitivity
        The same with at most one row named "person", without a record
    """
    alone = [row for row in result.rows if row.variation.name == "person"]
    if len(alone) < 2 or result.answer is None:
        return result
    others = [row for row in result.rows if row.variation.name != "person"]
    joined = _joined(alone, result.answer)
    rows = sorted((*others, joined), key=lambda row: (-row.swing, row.variation.name, row.variation.record))
    return structs.replace(result, rows=tuple(rows))


def _joined(alone: Sequence[SensitivityRow], central: float) -> SensitivityRow:
    known = [(row.answer_low, row.answer_high) for row in alone]
    down = math.hypot(*(0.0 if low is None else central - low for low, _ in known))
    up = math.hypot(*(0.0 if high is None else high - central for _, high in known))
    count = float(len(alone))
    return SensitivityRow(
        variation=Variation(
            name="person",
            record="",
            kind="person",
            key="",
            central=count,
            low=count,
            high=count,
            unit="people",
            mark="computed",
            source="each person on their own, root sum of squares",
        ),
        answer_low=max(0.0, central - down),
        answer_high=central + up,
        swing=math.hypot(*(row.swing for row in alone)),
        variance_fraction=sum(row.variance_fraction for row in alone),
    )


def _people(cover: Cover) -> Iterator[Answered]:
    plan, output_w = cover.plan, cover.output_w
    if not (output_w > 0.0).any():
        return
    ends = swings(plan, output_w)
    for place, person in enumerate(plan.people):
        if not (output_w[place] > 0.0).any():
            continue
        column = int(np.argmax(output_w[place]))
        low, high = (cover.fraction(made_wh=cover.made_by(_one_row(output_w, end, place))) for end in ends.person)
        yield person_variation(plan, person.id, plan.stations[column].id), low, high
    yield from _together(cover)
    yield from _outputs(cover, ends)


def _together(cover: Cover) -> Iterator[Answered]:
    """Yield what holds for all people at once: the estimate of their watts, and how many minutes are really turned."""
    low, high = shared_factors(PEOPLE_SHARED_SPREAD)
    yield (
        _of_all("people_shared", (low, 1.0, high), ""),
        cover.fraction(made_wh=cover.made_wh * low),
        cover.fraction(made_wh=cover.made_wh * high),
    )
    fewer = cover.made_by(cover.output_w, ATTENDANCE_LOW_FRACTION)
    yield (
        _of_all("attendance", (ATTENDANCE_LOW_FRACTION, 1.0, 1.0), "%"),
        cover.fraction(made_wh=fewer),
        cover.fraction(),
    )


def _of_all(name: InputName, ends: tuple[float, float, float], unit: str) -> Variation:
    return Variation(
        name=name,
        record="",
        kind="person",
        key="",
        central=ends[1],
        low=ends[0],
        high=ends[2],
        unit=unit,
        mark="default",
        source=PLANNING_VALUE,
    )


def _one_row(output_w: FloatArray, end: FloatArray, place: int) -> FloatArray:
    changed = output_w.copy()
    changed[place] = end[place]
    return changed


def _one_column(output_w: FloatArray, end: FloatArray, column: int) -> FloatArray:
    changed = output_w.copy()
    changed[:, column] = end[:, column]
    return changed


def person_variation(plan: Plan, person_id: str, station_id: str) -> Variation:
    """Return a person's watts at M at a station with the ends of their range."""
    person = next(one for one in plan.people if one.id == person_id)
    station = next(one for one in plan.stations if one.id == station_id)
    limb = limb_of(station.kind)
    limits = person_limits(plan, person, limb=limb)
    watts = person_watts(person, limb, float(limits.bout_min), float(limits.cap_min))
    low, high = person_ends(plan, person, station, person_output(plan, person, station))
    suffix = "legs" if limb == "legs" else "arms"
    keys = {"share": f"share_{suffix}_fraction", "own": f"own_{suffix}_w", "self_test": f"test_{suffix}_w"}
    key = keys.get(person.watts_by, "level") if given_for(person, limb) is not None else "level"
    step = field_step("person", person, key)
    return Variation(
        name="person",
        record=person.id,
        kind="person",
        key=key,
        central=watts,
        low=watts * low,
        high=watts * high,
        unit="W",
        mark=step.mark,
        source=step.source,
    )


def _outputs(cover: Cover, ends: Swings) -> Iterator[Answered]:
    """Yield each station's output, or the losses of one described by its parts."""
    for column, station in enumerate(cover.plan.stations):
        by_parts = station.described_by == "parts"
        variation = chain_variation(station.id) if by_parts else output_variation(cover.plan, station.id)
        if variation is not None:
            low, high = (
                cover.fraction(made_wh=cover.made_by(_one_column(cover.output_w, end, column)))
                for end in (ends.chain if by_parts else ends.station)
            )
            yield variation, low, high


def output_variation(plan: Plan, station_id: str) -> Variation | None:
    """Return a measured or labelled station's output with the ends of its range."""
    station = next(one for one in plan.stations if one.id == station_id)
    return varied_field("station", "station", station, "label_w" if station.described_by == "label" else "output_w", 0)


def chain_variation(station_id: str) -> Variation:
    """Return how far the losses of a station by parts may be from their laws, as a factor."""
    low, high = lognormal_factors(CHAIN_LOSS_SPREAD, [-P90_Z, P90_Z])
    return Variation(
        name="station_losses",
        record=station_id,
        kind="station",
        key="stages",
        central=1.0,
        low=float(low),
        high=float(high),
        unit="",
        mark="default",
        source=PLANNING_VALUE,
    )


def _stations(cover: Cover) -> Iterator[Answered]:
    """Yield the efficiency of stations described by their label; elsewhere it does not touch the output."""
    for column, station in enumerate(cover.plan.stations):
        if station.described_by != "label":
            continue
        variation = varied_field(
            "station_losses", "station", station, "eta_fraction", field_spread(station, "station", "eta_fraction")
        )
        if variation is not None:
            low, high = (
                cover.fraction(made_wh=cover.made_by(with_efficiency(cover.plan, cover.output_w, column, eta)))
                for eta in (variation.low, variation.high)
            )
            yield variation, low, high


def _stores(cover: Cover) -> Iterator[Answered]:
    for store in cover.plan.stores:
        for variation in store_variations(store):
            yield _with_field(cover, variation, ("stores", store.id, variation.key), None)


def _sources(cover: Cover) -> Iterator[Answered]:
    for source in cover.plan.other_sources:
        variation = varied_field("other_source", "other_source", source, "wh_per_day", OTHER_SOURCE_SPREAD)
        if variation is not None:
            yield _with_field(cover, variation, ("other_sources", source.id, "wh_per_day"), None)


def _devices(cover: Cover) -> Iterator[Answered]:
    for place, device in enumerate(cover.plan.devices):
        for variation in device_variations(device):
            yield _with_field(cover, variation, ("devices", device.id, variation.key), place)


def _with_field(cover: Cover, variation: Variation, path: tuple[str, ...], device: int | None) -> Answered:
    low, high = (
        cover.fraction(plan=set_value(path, value)(cover.plan), device=device)
        for value in (variation.low, variation.high)
    )
    return variation, low, high


def _plan_wide(cover: Cover) -> Iterator[Answered]:
    margin = margin_variation(cover.plan)
    low, high = (
        cover.fraction(plan=structs.replace(cover.plan, margin_fraction=value), has_new_margin=True)
        for value in (margin.low, margin.high)
    )
    yield margin, low, high
    if cover.plan.conditions.heat_limits:
        air = temperature_variation(cover.plan)
        low, high = (cover_of(at_temperature(cover.plan, degc)).fraction() for degc in (air.low, air.high))
        yield air, low, high


def label_of(variation: Variation) -> str:
    """Return the label of the field a variation stands in; empty where it stands in none.

    Examples
    --------
    >>> label_of(margin_variation(Plan()))
    'Margin on use'
    """
    if not variation.key or variation.key == "stages":
        return ""
    return field(variation.kind, variation.key).label
