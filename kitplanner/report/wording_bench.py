"""A station on the bench in words: operating point, failure states, the volts to hold on the meter."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

import numpy as np

from kitplanner.planners.results import BenchPoint, BenchState, BenchSweep
from kitplanner.report.wording import number, percent, plain, power, sentence

STATE_WORDS: Mapping[BenchState, str] = MappingProxyType(
    {
        "no_output": "the generator gives no output",
        "dropout": "the regulator has too little input to hold its output",
        "vin_low": "the converter has too little input to work",
        "collapse": "the load asks for more power than the generator can give",
        "vbus_low": "the volts at the device are too low",
        "not_charging": "the current is too small or the cell too hot for the device to charge",
        "overtemp": "the regulator gets too hot",
        "overvolt": "a part gets more volts than it is rated for",
        "cadence_high": "the turning is faster than is comfortable",
        "torque_high": "the crank is harder to turn than is comfortable",
        "cold": "the cell is too cold to be charged",
    }
)


def state_words(state: BenchState) -> str:
    """Return a failure state as part of a sentence."""
    return STATE_WORDS[state]


def point_sentence(point: BenchPoint, name: str) -> str:
    """Return one operating point in one sentence."""
    station = plain(name)
    states = "; ".join(state_words(state) for state in point.states)
    if point.human_w is None or point.stored_w is None:
        return sentence(f"{station} does not charge: {states or 'no operating point was found'}")
    text = (
        f"at {number(point.rpm, 0)} turns a minute {station} takes {power(point.human_w, 'M')} and puts "
        f"{power(point.stored_w)} into the battery, {percent(point.crank_to_battery_fraction)} of it"
    )
    return sentence(f"{text}; {states}" if states else text)


def meter_sentence(point: BenchPoint) -> str:
    """Return the band of volts to hold on a panel meter in front of the regulator; empty if there is none."""
    if point.meter_low_v is None or point.meter_high_v is None:
        return ""
    low, high = number(point.meter_low_v, 2), number(point.meter_high_v, 2)
    if point.meter_low_v >= point.meter_high_v:
        return f"No safe band on the meter: at least {low} V are needed, and {high} V are already too many."
    return f"Hold the meter in front of the regulator between {low} V and {high} V."


def sweep_sentence(sweep: BenchSweep) -> str:
    """Return the bench over cadence in one sentence."""
    good = np.flatnonzero(np.isfinite(sweep.stored_w) & np.array([not states for states in sweep.states], dtype=bool))
    if not len(good):
        return "There is no cadence at which this station charges without a failure state."
    best = good[int(np.argmax(sweep.stored_w[good]))]
    return sentence(
        f"it charges without a failure state between {number(float(sweep.rpm[good[0]]), 0)} and "
        f"{number(float(sweep.rpm[good[-1]]), 0)} turns a minute; most at {number(float(sweep.rpm[best]), 0)}, "
        f"{power(float(sweep.stored_w[best]))} into the battery for {power(float(sweep.human_w[best]), 'M')}"
    )
