"""Watts of several people at a station described by its parts, with a store's charger on its socket."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from kitplanner.domain.chain import PacedWatts, UsbSink, best_cadence
from kitplanner.plan.records import Station
from kitplanner.planners.effort_source import STORE_HOLD_FRACTION, nominal_v
from kitplanner.planners.people import PersonOutput
from kitplanner.planners.results import FloatArray
from kitplanner.planners.stations import chain_of


def solved_outputs(station: Station, outputs: Sequence[PersonOutput]) -> tuple[FloatArray, FloatArray]:
    """Return plug watts and human watts at the best cadence; 0 where nothing arrives."""
    chain = chain_of(station)
    sink = UsbSink(hold_v=STORE_HOLD_FRACTION * nominal_v(station))
    limits = np.array(
        [
            (
                output.person_power_w,
                math.inf if output.torque_cap_nm is None else output.torque_cap_nm,
                output.pace.best_rpm,
                output.pace.loss,
            )
            for output in outputs
        ]
    )
    # Many people share the same watts and pace: each is solved once.
    alike, place = np.unique(limits, axis=0, return_inverse=True)
    point = best_cadence(
        chain,
        (chain.comfort.low_rpm, chain.comfort.high_rpm),
        sink,
        human_w=PacedWatts(alike[:, 0], alike[:, 2], alike[:, 3]),
        torque_max_nm=np.minimum(alike[:, 1], chain.comfort.torque_max_nm),
    )
    works = point.charges & np.isfinite(point.plug_w)
    place = place.reshape(-1)
    return np.where(works, point.plug_w, 0.0)[place], np.where(works, point.human_w, 0.0)[place]
