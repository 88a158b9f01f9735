"""A station by parts as a source: solved for every person of the plan at once, with the device's own sink.

Two solves per station and sink: what each person's watts deliver at the best cadence of the comfort band, and
the least human watts for every smaller load, which the falling part of a charge and the range sample read off.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from kitplanner.domain.chain import BINDINGS, Chain, OperatingPoint, PacedWatts, UsbSink, best_cadence
from kitplanner.domain.hand_load import Pace, cadence_factor
from kitplanner.domain.spread import lognormal_factors
from kitplanner.plan.records import Station
from kitplanner.planners.effort_source import Source, Work
from kitplanner.planners.effort_spread import CHAIN_LOSS_SPREAD, Draws
from kitplanner.planners.people import PersonOutput
from kitplanner.planners.results import EffortLimit, FloatArray
from kitplanner.planners.stations import chain_of

_CURVE_POINTS = 49


def chain_sources(
    station: Station,
    sink: UsbSink,
    outputs: Sequence[PersonOutput],
    factors: Sequence[FloatArray],
    sample: Draws,
) -> list[Source]:
    """Return the watts of each person at a station by parts, with one sink at its plug.

    Parameters
    ----------
    station : Station
        A station described by its parts
    sink : UsbSink
        What hangs at the plug: greatest current, held volts, least current
    outputs : sequence of PersonOutput
        Watts and torque cap of each person
    factors : sequence of array (n,)
        Each person's watts over the sample, as factors [-]
    sample : Draws
        The fixed sample, for the chain's losses

    Returns
    -------
    list of Source
        One per person
    """
    chain = chain_of(station)
    found: dict[tuple[float, float | None, Pace, bytes], Source] = {}
    keys = [
        (out.person_power_w, out.torque_cap_nm, out.pace, tries.tobytes())
        for out, tries in zip(outputs, factors, strict=True)
    ]
    for torque_nm in dict.fromkeys(out.torque_cap_nm for out in outputs):
        here = [i for i, out in enumerate(outputs) if out.torque_cap_nm == torque_nm]
        watts = np.array([outputs[i].person_power_w for i in here])
        best_rpm, loss = np.array([(outputs[i].pace.best_rpm, outputs[i].pace.loss) for i in here]).T
        paced = PacedWatts(watts, best_rpm, loss)
        point = best_cadence(chain, _band(chain), sink, human_w=paced, torque_max_nm=_torque(chain, torque_nm))
        at_pace_w = watts * cadence_factor(point.rpm, best_rpm, loss)
        work = work_curve(chain, sink, torque_nm)
        for place, i in enumerate(here):
            if keys[i] not in found:
                found[keys[i]] = _source(point, place, work, at_pace_w[place] * factors[i], sink, sample)
    return [found[key] for key in keys]


def _band(chain: Chain) -> tuple[float, float]:
    return chain.comfort.low_rpm, chain.comfort.high_rpm


def _torque(chain: Chain, torque_cap_nm: float | None) -> float:
    """Return the lesser of the station's and the hand's torque limit [N.m]."""
    return min(chain.comfort.torque_max_nm, np.inf if torque_cap_nm is None else torque_cap_nm)


def work_curve(chain: Chain, sink: UsbSink, torque_cap_nm: float | None) -> Work:
    """Return the least human watts for every load a chain can carry in its comfort band.

    Parameters
    ----------
    chain : Chain
        The station's chain
    sink : UsbSink
        What hangs at the plug; its least current does not count, because a nearly full device draws little
    torque_cap_nm : float or None
        What the hand can hold [N.m]

    Returns
    -------
    Work
        Curve from no load to the greatest
    """
    free = UsbSink(limit_a=sink.limit_a, hold_v=sink.hold_v, least_a=0.0)
    torque_nm = _torque(chain, torque_cap_nm)
    most = best_cadence(chain, _band(chain), free, human_w=np.array([np.inf]), torque_max_nm=torque_nm)
    most_w = float(np.nan_to_num(most.plug_w[0]))
    if most_w <= 0.0:
        return Work(plug_w=np.zeros(2), human_w=np.zeros(2))
    # Closer points at small loads, where a chain's own drag bends the curve.
    loads = most_w * np.linspace(0.0, 1.0, _CURVE_POINTS)[1:] ** 1.5
    point = best_cadence(chain, _band(chain), free, human_w=np.inf, torque_max_nm=torque_nm, plug_w=loads)
    known = np.isfinite(point.human_w) & np.isfinite(point.plug_w)
    plug_w, human_w = point.plug_w[known], np.maximum.accumulate(point.human_w[known])
    return Work(plug_w=plug_w, human_w=human_w)


def _source(point: OperatingPoint, place: int, work: Work, tries_w: FloatArray, sink: UsbSink, sample: Draws) -> Source:
    """Return one person's source from the solved points."""
    if not bool(point.charges[place]) or not np.isfinite(point.plug_w[place]):
        none = np.zeros_like(tries_w)
        return Source(output_w=0.0, human_w=0.0, limit="too_little_current", sample_w=none, work=work)
    plug_w, volts_v = float(point.plug_w[place]), float(point.plug_v[place])
    central_w = float(point.human_w[place])
    # The curve is read for what changes with the watts, the solved point for the value itself.
    base_w = np.interp(central_w, work.human_w, work.plug_w)
    given_w = np.minimum(tries_w, work.human_w[-1])
    carried_w = np.interp(given_w, work.human_w, work.plug_w, left=0.0) * (plug_w / base_w if base_w > 0.0 else 1.0)
    lost_w = np.maximum(given_w - carried_w, 0.0) * (lognormal_factors(CHAIN_LOSS_SPREAD, sample.chain) - 1.0)
    sample_w = np.maximum(carried_w - lost_w, 0.0)
    return Source(
        output_w=plug_w,
        human_w=central_w,
        limit=limit_of(point, place),
        sample_w=np.where(sample_w < sink.least_a * volts_v, 0.0, sample_w),
        volts_v=volts_v,
        work=work,
    )


def limit_of(point: OperatingPoint, place: int) -> EffortLimit:
    """Return which of a chain's bindings is meant, in the words of the effort table."""
    match BINDINGS[int(point.binding[place])]:
        case "human":
            return "person"
        case "hold":
            return "regulator"
        case "current" | "acceptance":
            return "acceptance"
        case _:
            return "machine"
