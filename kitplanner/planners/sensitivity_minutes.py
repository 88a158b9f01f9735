"""What matters most for the minutes of one charge: each of its inputs at the ends of its range, one at a time.

The fixed sample of the effort table is replaced by points that lie in the middle in all directions but one, so the
same laws give the answer at both ends of every input in one run.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np

from kitplanner.plan.edits import set_value
from kitplanner.plan.records import Device, Plan
from kitplanner.planners.effort import connectors_fit
from kitplanner.planners.effort_chain import chain_sources
from kitplanner.planners.effort_rows import Case, Chosen, EffortError, cases
from kitplanner.planners.effort_source import Source, find_sources
from kitplanner.planners.effort_spread import CAPACITY_SPREAD, RATE_SPREAD, STORE_SPREAD, Draws, lossy_fraction
from kitplanner.planners.effort_timing import Timed, timed_charges
from kitplanner.planners.results import EffortRow
from kitplanner.planners.sensitivity import chain_variation, output_variation, person_variation
from kitplanner.planners.sensitivity_inputs import (
    DEVICE_LOSS_SPREAD,
    DEVICE_START_SPREAD,
    PLANNING_VALUE,
    USE_KEYS,
    USE_SPREAD,
    at_temperature,
    temperature_variation,
    varied_field,
)
from kitplanner.planners.sensitivity_records import P90_Z, Answered, Sensitivity, Variation, ranked
from kitplanner.planners.supply import fed_stores, station_to_outlet_fraction

_DIRECTIONS = ("person", "station", "chain", "capacity", "rate", "device", "store")


def minutes_sensitivity(plan: Plan, row: EffortRow) -> Sensitivity:
    """Return what moves the minutes of one effort row most.

    Parameters
    ----------
    plan : Plan
        The plan the row belongs to
    row : EffortRow
        A row of `effort`

    Returns
    -------
    Sensitivity
        Rows sorted by swing [min]; none where the connectors do not fit

    Raises
    ------
    EffortError
        When the plan has no such row any more

    References
    ----------
    One input at a time between the 10 and 90 % points of its spread; shares by root sum of squares, JCGM 100:2008
    (GUM), 5.1 (clause from memory).
    """
    case = _case(plan, row)
    if case is None:
        raise EffortError(f"The plan has no charge '{row.charge}' of '{row.device}' at '{row.station}' any more.")
    stores = fed_stores(plan, case.station) if case.route == "store" else ()
    if not connectors_fit(case, stores):
        return Sensitivity(question="minutes", answer=None, rows=(), row=row)
    sample = one_at_a_time()
    sources = find_sources(plan, [case], sample, chain_sources, None)
    timed, _ = timed_charges(plan, [case], sources, sample)
    answered = [*_sampled(plan, case, timed), *_edited(plan, case, sources, sample)]
    return Sensitivity(question="minutes", answer=_minutes_at(timed, 0), rows=ranked(answered), row=row)


def one_at_a_time() -> Draws:
    """Return the middle, then each direction at its 10 % and 90 % point.

    Examples
    --------
    >>> one_at_a_time().person.shape, [round(float(z), 2) for z in one_at_a_time().person[:4]]
    ((15,), [0.0, -1.28, 1.28, 0.0])
    """
    points = np.zeros((len(_DIRECTIONS), 1 + 2 * len(_DIRECTIONS)))
    for place in range(len(_DIRECTIONS)):
        points[place, 1 + 2 * place], points[place, 2 + 2 * place] = -P90_Z, P90_Z
    return Draws(**dict(zip(_DIRECTIONS, points, strict=True)))


def _case(plan: Plan, row: EffortRow) -> Case | None:
    """Return the row before its numbers, None where the charge has nothing to fill."""
    chosen = Chosen(station=row.station, device=row.device, person=row.person)
    same = [case for case in cases(plan, chosen) if (case.route, case.charge) == (row.route, row.charge)]
    return same[0] if same else None


def _minutes_at(timed: Timed, point: int) -> float | None:
    """Return the minutes at a point of the sample, None where no charge can be made there [min]."""
    fill, source = timed.fills[0], timed.sources[0]
    minutes = float(timed.central_min[0] if point == 0 else timed.sample_min[0, point])
    watts = float(source.output_w if point == 0 else source.sample_w[point])
    least_w = 0.0 if fill.store_fraction is not None else fill.device.input_least_a * source.volts_v
    if not math.isfinite(minutes) or watts <= 0.0 or watts < least_w * (1.0 - 1e-9):
        return None
    return minutes


def _sampled(plan: Plan, case: Case, timed: Timed) -> Iterator[Answered]:
    for place, variation in enumerate(_variations(plan, case)):
        if variation is not None:
            yield variation, _minutes_at(timed, 1 + 2 * place), _minutes_at(timed, 2 + 2 * place)


def _variations(plan: Plan, case: Case) -> tuple[Variation | None, ...]:
    """Return what each direction of the sample stands for, None where it does not act on this charge."""
    by_parts = case.station.described_by == "parts"
    device = case.device
    rate_key = "charge_rate_per_h" if device.charge_w is None else "charge_w"
    return (
        person_variation(plan, case.person.id, case.station.id),
        None if by_parts else output_variation(plan, case.station.id),
        chain_variation(case.station.id) if by_parts else None,
        varied_field("device_capacity", "device", device, "battery_wh", CAPACITY_SPREAD),
        _rate(device, rate_key),
        varied_field("device_losses", "device", device, "eta", DEVICE_LOSS_SPREAD),
        _round_trip(plan, case) if case.route == "store" else None,
    )


def _rate(device: Device, key: str) -> Variation | None:
    """Return the charge rate's range; its spread is noted at the rate even where watts are given."""
    note = device.notes.get("charge_rate_per_h")
    spread = RATE_SPREAD if note is None or note.spread_fraction is None else note.spread_fraction
    return varied_field("device_rate", "device", device, key, spread)


def _round_trip(plan: Plan, case: Case) -> Variation:
    fraction = float(station_to_outlet_fraction(fed_stores(plan, case.station)))
    low, high = lossy_fraction(np.array(fraction), np.array(STORE_SPREAD), np.array([-P90_Z, P90_Z]))
    return Variation(
        name="store_round_trip",
        record="",
        kind="store",
        key="",
        central=fraction,
        low=float(low),
        high=float(high),
        unit="%",
        mark="computed",
        source=PLANNING_VALUE,
    )


def _edited(plan: Plan, case: Case, sources: Sequence[Source], sample: Draws) -> Iterator[Answered]:
    """Yield the inputs that change the charge itself: its start, a day's use, the air."""
    device = case.device
    if case.charge == "plan":
        start = varied_field("device_start", "device", device, "start_fraction", DEVICE_START_SPREAD)
        if start is not None:
            yield _with_device(plan, case, start, sources, sample)
    if case.charge == "day":
        use = varied_field("device_use", "device", device, USE_KEYS[device.use_by], USE_SPREAD)
        if use is not None:
            yield _with_device(plan, case, use, sources, sample)
    air = temperature_variation(plan)
    low, high = (
        _again(at_temperature(plan, degc), case, None if plan.conditions.heat_limits else sources, sample)
        for degc in (air.low, air.high)
    )
    yield air, low, high


def _with_device(
    plan: Plan, case: Case, variation: Variation, sources: Sequence[Source], sample: Draws
) -> tuple[Variation, float | None, float | None]:
    low, high = (
        _again(set_value(("devices", case.device.id, variation.key), value)(plan), case, sources, sample)
        for value in (variation.low, variation.high)
    )
    return variation, low, high


def _again(plan: Plan, case: Case, sources: Sequence[Source] | None, sample: Draws) -> float | None:
    """Return the minutes in a changed plan; 0 where nothing is left to fill, None where nobody may turn."""
    same = [
        one
        for one in cases(plan, Chosen(station=case.station.id, device=case.device.id, person=case.person.id))
        if one.route == case.route
    ]
    if not same:
        return None
    here = [one for one in same if one.charge == case.charge]
    if not here:
        return 0.0
    if sources is None:
        # The watts depend on the air only through the limits of heat; the centre of the sample is enough.
        sources = find_sources(plan, here, _centre(sample), chain_sources, None)
        sample = _centre(sample)
    timed, _ = timed_charges(plan, here, sources, sample)
    return _minutes_at(timed, 0)


def _centre(sample: Draws) -> Draws:
    return Draws(**{name: getattr(sample, name)[:1] for name in _DIRECTIONS})
