"""Watts a person gets out of a station's socket while a device takes all that comes.

A measured or labelled station gives one figure per person. A station described by its parts is solved with the
device's own sink by `effort_chain`, for all people of a station at once.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import CancelledError
from dataclasses import dataclass
from typing import Literal

import numpy as np

from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.human_power import DEVICE_FACTOR, t_eff_min
from kitplanner.domain.power_range import estimate_spread, p10_fraction, p90_fraction
from kitplanner.domain.regulator import LinearRegulator
from kitplanner.domain.spread import lognormal_factors
from kitplanner.domain.usb_sink import UsbSink
from kitplanner.plan.records import Person, Plan, Station
from kitplanner.planners.effort_rows import Case
from kitplanner.planners.effort_spread import Draws, field_spread
from kitplanner.planners.people import (
    DRAG_FRACTION_ARMS,
    DRAG_FRACTION_LEGS,
    PersonOutput,
    limb_of,
    person_limits,
    person_output,
    person_watts,
)
from kitplanner.planners.people_watts import given_for, reference_w
from kitplanner.planners.results import EffortLimit, FloatArray
from kitplanner.planners.stations import chain_of, sink_of_device

# Volts at which a measured station's watts are turned into amps: the nominal bus voltage of USB 2.0.
BUS_V = 5.0
# A store's charger cuts its current where the socket sags by as much as a phone allows on USB: 4.40 of 5 V.
STORE_HOLD_FRACTION = 4.40 / BUS_V
_P90_Z = 1.2815515655446004  # 90th percentile of the standard normal curve


@dataclass(frozen=True, slots=True)
class Work:
    """What the person works at a station by parts when the device takes less than it could: a solved curve.

    `plug_w` rises from 0; `human_w` is the least at each, in the comfort band.
    """

    plug_w: FloatArray
    human_w: FloatArray

    def human_at(self, plug_w: FloatArray) -> FloatArray:
        """Human watts for plug watts [W]."""
        return np.interp(plug_w, self.plug_w, self.human_w)


@dataclass(frozen=True, slots=True)
class Source:
    """One person at one station.

    Attributes
    ----------
    output_w : float
        Watts at the socket (S) when all is taken; 0 when nothing charges [W].
    human_w : float
        Watts at the crank or pedal (M) for it [W].
    limit : str
        What keeps it from being more.
    sample_w : ndarray
        `output_w` over the sample, shape (n,) [W].
    volts_v : float
        Voltage at the plug, to turn watts into amps [V].
    work : Work or None
        By parts: human watts for less than full output.
    """

    output_w: float
    human_w: float
    limit: EffortLimit
    sample_w: FloatArray
    volts_v: float = BUS_V
    work: Work | None = None

    @property
    def chain_from(self) -> Literal["M", "S"]:
        """Level from which the chain's efficiency is counted."""
        return "S" if self.work is None else "M"


def person_factors(plan: Plan, person: Person, station: Station, output: PersonOutput, sample: Draws) -> FloatArray:
    """Factors on one person's watts over the sample, median 1 [-].

    For watts known by effort level and age the lower half reaches further down than a lognormal would: the
    percentiles of `power_range` are met, stretched for children and from 65 years by their greater spread.

    Parameters
    ----------
    plan, person, station : Plan, Person, Station
        Who turns where
    output : PersonOutput
        The person's output there
    sample : Draws
        The fixed sample

    Returns
    -------
    array, shape (n,)
        Factors [-]
    """
    if person.watts_by != "level":
        return lognormal_factors(output.person_spread_fraction, sample.person)
    limits = person_limits(plan, person, limb=limb_of(station.kind))
    minutes = float(t_eff_min(limits.bout_min, limits.cap_min))
    known = float(estimate_spread(minutes, 40))
    stretch = output.person_spread_fraction / known * sample.person / _P90_Z
    low, high = float(p10_fraction(minutes)), float(p90_fraction(minutes))
    return np.asarray(np.where(stretch < 0.0, low**-stretch, high**stretch))


def measured_source(plan: Plan, person: Person, station: Station, sample: Draws) -> Source:
    """Return the watts of a person at a measured or labelled station.

    Over the sample the person's own spread never lifts the output above the station's rating; the rating itself
    carries the spread of its measurement.

    Parameters
    ----------
    plan, person, station : Plan, Person, Station
        Who turns where
    sample : Draws
        The fixed sample

    Returns
    -------
    Source
        Output, human watts and sample
    """
    output = person_output(plan, person, station)
    key = "label_w" if station.described_by == "label" else "output_w"
    rated_w = float(getattr(station, key) or 0.0)
    could_w = _could_w(plan, person, station, output, person_factors(plan, person, station, output, sample))
    rating = lognormal_factors(field_spread(station, "station", key), sample.station)
    return Source(
        output_w=output.station_output_w or 0.0,
        human_w=output.person_power_w,
        limit="machine" if output.capped else "person",
        sample_w=np.clip(could_w, 0.0, rated_w) * rating,
    )


def _could_w(plan: Plan, person: Person, station: Station, output: PersonOutput, factors: FloatArray) -> FloatArray:
    """Return what a person's watts, times the factors, would give at the socket if the station had no rating [W].

    The laws are those of `person_output`: label watts in proportion, a given share in proportion, else the drag law
    S = rated (x k - d)/(1 - d) with x the person's watts over the reference adult's and d the station's drag.
    """
    limb = limb_of(station.kind)
    limits = person_limits(plan, person, limb=limb)
    duration = (float(limits.bout_min), float(limits.cap_min))
    socket_w = output.station_output_w or 0.0
    if station.described_by == "label":
        own_w = person_watts(person, limb, *duration) * DEVICE_FACTOR[station.kind] * station.eta_fraction
        return (own_w if output.capped else socket_w) * factors
    rated_w = station.output_w or 0.0
    if person.watts_by == "share" and (share := given_for(person, limb)) is not None:
        return rated_w * share * factors
    drag = station.drag_fraction
    if drag is None:
        drag = DRAG_FRACTION_ARMS if limb == "arms" else DRAG_FRACTION_LEGS
    if drag >= 1.0 or rated_w <= 0.0:
        return np.zeros_like(factors)
    relative = person_watts(person, limb, *duration) / reference_w(limb, *duration)
    if not output.capped and socket_w > 0.0:
        relative = socket_w / rated_w * (1.0 - drag) + drag
    return rated_w * np.maximum(relative * factors - drag, 0.0) / (1.0 - drag)


ChainSolver = Callable[[Station, UsbSink, Sequence[PersonOutput], Sequence[FloatArray], Draws], list[Source]]


def find_sources(
    plan: Plan, rows: Sequence[Case], sample: Draws, solve: ChainSolver, cancelled: Callable[[], bool] | None
) -> list[Source]:
    """Return the source of every row; rows with the same watts share one object.

    Parameters
    ----------
    plan : Plan
        The plan
    rows : sequence of Case
        Rows before their numbers
    sample : Draws
        The fixed sample
    solve : callable
        Solver of stations by parts
    cancelled : callable or None
        Asked between stations; True ends the work

    Returns
    -------
    list of Source
        One per row

    Raises
    ------
    CancelledError
        When `cancelled` says so
    """
    groups: dict[tuple[str, UsbSink | None], dict[str, Case]] = {}
    for row in rows:
        groups.setdefault((row.station.id, sink_of(row)), {}).setdefault(row.person.id, row)
    found: dict[tuple[str, UsbSink | None, str], Source] = {}
    for (station_id, sink), by_person in groups.items():
        if cancelled is not None and cancelled():
            raise CancelledError
        station = next(iter(by_person.values())).station
        people = [row.person for row in by_person.values()]
        if sink is None:
            sources = _distinct([measured_source(plan, person, station, sample) for person in people])
        else:
            outputs = [person_output(plan, person, station) for person in people]
            pairs = zip(people, outputs, strict=True)
            factors = [person_factors(plan, person, station, output, sample) for person, output in pairs]
            sources = solve(station, sink, outputs, factors, sample)
        for person, source in zip(people, sources, strict=True):
            found[station_id, sink, person.id] = source
    return [found[row.station.id, sink_of(row), row.person.id] for row in rows]


def _distinct(sources: Sequence[Source]) -> list[Source]:
    """Return the sources with equal ones replaced by the first of their kind."""
    first: dict[tuple[float, float, EffortLimit, bytes], Source] = {}
    keys = [(source.output_w, source.human_w, source.limit, source.sample_w.tobytes()) for source in sources]
    for key, source in zip(keys, sources, strict=True):
        first.setdefault(key, source)
    return [first[key] for key in keys]


def sink_of(row: Case) -> UsbSink | None:
    """Return what hangs on a station by parts: the device itself or a store's charger; None at other stations."""
    if row.station.described_by != "parts":
        return None
    if row.route == "store":
        return UsbSink(hold_v=STORE_HOLD_FRACTION * nominal_v(row.station))
    return sink_of_device(row.device)


def nominal_v(station: Station) -> float:
    """Return the voltage the last regulating step of a station by parts is set to, 5 V without one [V]."""
    set_v = [
        stage.output_v for stage in chain_of(station).stages if isinstance(stage, LinearRegulator | SwitchingConverter)
    ]
    return float(set_v[-1]) if set_v else BUS_V
