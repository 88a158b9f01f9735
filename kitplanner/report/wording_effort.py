"""Minutes of turning in words: one row, its range, and why it is not faster."""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import Plan
from kitplanner.planners.results import Charge, ChargeCurve, EffortLimit, EffortRow
from kitplanner.report.wording import between, energy, minutes, percent, plain, power, sentence


def effort_limit_words(limit: EffortLimit) -> str:
    """Return why a charge is not faster, as part of a sentence."""
    match limit:
        case "person":
            return "the person's watts are the limit"
        case "machine":
            return "the station's generator is the limit"
        case "regulator":
            return "the station's regulator is the limit"
        case "acceptance":
            return "the device takes no more"
        case "too_little_current":
            return "too little current arrives for the device to charge"
        case "connector":
            return "the connectors do not fit"


def charge_words(charge: Charge) -> str:
    """Return which charge is meant, as the start of a sentence."""
    match charge:
        case "full":
            return "one full charge"
        case "plan":
            return "charging from start to target"
        case "day":
            return "one day's use"


def range_words(row: EffortRow) -> str:
    """Return the 10-90 % range in brackets; empty without one."""
    if row.minutes_p10 is None or row.minutes_p90 is None:
        return ""
    return f"({between(minutes(row.minutes_p10), minutes(row.minutes_p90))})"


def effort_sentence(plan: Plan, row: EffortRow) -> str:
    """Return one effort row in one sentence, with names."""
    device = _name(plan.devices, row.device, "the device")
    station = _name(plan.stations, row.station, "the station")
    person = _name(plan.people, row.person, "a reference adult")
    way = " through a store" if row.route == "store" else ""
    what = f"{charge_words(row.charge)} of {device}"
    if row.minutes_p50 is None:
        return sentence(f"{device} cannot be charged at {station}{way} by {person}: {effort_limit_words(row.limit)}")
    return sentence(
        f"{what} at {station}{way} by {person} takes {minutes(row.minutes_p50)} of turning {range_words(row)}; "
        f"{effort_limit_words(row.limit)}"
    )


def one_charge_sentence(row: EffortRow, wh: float, station_w: float) -> str:
    """Return the answer to one charge without a plan."""
    what = f"one full charge of a phone with {energy(wh)}"
    if row.minutes_p50 is None:
        return sentence(f"{what} cannot be made with {power(station_w, 'S')}: {effort_limit_words(row.limit)}")
    return sentence(
        f"{what} takes {minutes(row.minutes_p50)} of turning {range_words(row)} "
        f"with {power(station_w, 'S')}; {effort_limit_words(row.limit)}"
    )


def curve_sentence(curve: ChargeCurve) -> str:
    """Return a charge curve in one sentence."""
    if not len(curve.minutes):
        return sentence(f"no charge: {effort_limit_words(curve.row.limit)}")
    start, end = float(curve.soc_p50_fraction[0]), float(curve.soc_p50_fraction[-1])
    last = float(curve.minutes[-1])
    low, high = percent(float(curve.soc_p10_fraction[-1])), percent(float(curve.soc_p90_fraction[-1]))
    return sentence(
        f"the battery goes from {percent(start)} to {percent(end)} in {minutes(last)} of turning; "
        f"after that time it stands {between(low, high)} in eight of ten cases"
    )


def matrix_sentence(plan: Plan, rows: Sequence[EffortRow]) -> str:
    """Return a table of minutes in one sentence: the shortest and the longest."""
    known = [row for row in rows if row.minutes_p50 is not None]
    if not known:
        return "No charge can be made with these devices, stations and people."
    least = min(known, key=lambda row: row.minutes_p50 or 0.0)
    most = max(known, key=lambda row: row.minutes_p50 or 0.0)
    return sentence(
        f"the shortest turning is {minutes(least.minutes_p50)} ({_pair(plan, least)}), "
        f"the longest {minutes(most.minutes_p50)} ({_pair(plan, most)})"
    )


def _pair(plan: Plan, row: EffortRow) -> str:
    return f"{_name(plan.devices, row.device, 'device')} at {_name(plan.stations, row.station, 'station')}"


def _name(records: Sequence[object], key: str, otherwise: str) -> str:
    """Return the name of the record with an id, without signs that could steer a screen or terminal."""
    found = next((getattr(record, "name", "") for record in records if getattr(record, "id", None) == key), "")
    return plain(str(found)) or (plain(key) if key else otherwise)
