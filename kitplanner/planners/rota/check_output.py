"""The judge's own reading of energy: watts at S of a person at a station, and what each bout makes.

Part of the judge (`check.py`): imports plan and domain only.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

from kitplanner.domain.hand_load import (
    DEFAULT_CRANK_RPM,
    DEFAULT_RADIUS_M,
    LONG_DAY_MIN,
    POCKET_CRANK_RPM,
    POCKET_RADIUS_M,
    p_crank_cap_w,
)
from kitplanner.domain.human_power import DEVICE_FACTOR
from kitplanner.plan.records import Person, Plan, Station
from kitplanner.planners.rota.check_finding import Turn
from kitplanner.planners.rota.check_limits import handle_w, limb_at, reference_w, working_min

# Drag of a station known by one measurement, as a share of the reference adult's watts: judgement.
DRAG_ARMS_FRACTION, DRAG_LEGS_FRACTION = 0.10, 0.25


@dataclass(frozen=True, slots=True)
class Made:
    """Power at S of one bout over the minutes in which it gives any, counted from the start of day 1."""

    station: Station
    since: int
    until: int
    power_w: float


def made_by(plan: Plan, turns: Iterable[Turn]) -> list[Made]:
    """Return what the bouts make; one that follows another person too soon loses what is left of the changeover.

    Parameters
    ----------
    plan : Plan
        The plan.
    turns : iterable of Turn
        Bouts by time.

    Returns
    -------
    list of Made
        Power of each bout that gives any, at S [W].
    """
    watts: dict[tuple[str, str], float] = {}
    last: dict[tuple[str, int], Turn] = {}
    made = []
    for turn in turns:
        key = (turn.person.id, turn.station.id)
        if key not in watts:
            watts[key] = socket_w(plan, turn.person, turn.station)
        before = last.get((turn.station.id, turn.unit))
        last[turn.station.id, turn.unit] = turn
        begin = turn.since
        if before is not None and before.person.id != turn.person.id:
            begin = max(begin, before.until + turn.station.changeover_min)
        if begin < turn.until:
            made.append(Made(turn.station, begin, turn.until, watts[key]))
    return made


def socket_w(plan: Plan, person: Person, station: Station) -> float:
    """Return a person's watts at a station's socket; for one known by its parts the most that its gear lets through.

    Measured: rated times a given share or (P - P0)/(P_ref - P0); by label: min(label, eta P).

    Parameters
    ----------
    plan : Plan
        The plan.
    person, station : Person, Station
        Who turns where.

    Returns
    -------
    float
        Power at S [W].

    References
    ----------
    A fixed drag takes the same watts from everybody: derived.
    """
    limb = limb_at(station)
    bout, cap = working_min(plan, person, limb)
    if cap <= 0:
        return 0.0
    factor, force_w = DEVICE_FACTOR[station.kind], _force_w(station, cap)
    watts = min(factor * handle_w(person, limb, bout, cap), force_w)
    if station.described_by == "label":
        return min(watts * station.eta_fraction, station.label_w or 0.0)
    if station.described_by == "parts":
        return watts * (station.gear.eta if station.gear else 1.0)
    share = person.share_legs_fraction if limb == "legs" else person.share_arms_fraction
    if person.watts_by != "share" or share is None:
        full_w = min(factor * reference_w(limb, bout, cap), force_w)
        usual = DRAG_ARMS_FRACTION if limb == "arms" else DRAG_LEGS_FRACTION
        drag = usual if station.drag_fraction is None else station.drag_fraction
        share = (watts / full_w - drag) / (1.0 - drag) if drag < 1.0 else 0.0
    return (station.output_w or 0.0) * min(max(share, 0.0), 1.0)


def _force_w(station: Station, cap_min: int) -> float:
    """Return the watts at which a hand reaches its force for a long day; none for feet and short days."""
    if limb_at(station) != "arms" or cap_min <= LONG_DAY_MIN:
        return math.inf
    pocket = station.kind == "pocket_crank"
    radius_m = station.crank_radius_m or (POCKET_RADIUS_M if pocket else DEFAULT_RADIUS_M)
    rpm = station.comfort_high_rpm or (POCKET_CRANK_RPM if pocket else DEFAULT_CRANK_RPM)
    if station.described_by != "parts" and station.comfort_low_rpm and station.comfort_high_rpm:
        rpm = (station.comfort_low_rpm + station.comfort_high_rpm) / 2.0
    return float(p_crank_cap_w(radius_m, rpm)) * DEVICE_FACTOR[station.kind]
