"""The balance in words: verdict, what limits, the evening, hours, days and cuts."""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import Device, Plan
from kitplanner.planners.results import BalanceLimit, BalanceResult, CutClass, EnergyFlow, Verdict
from kitplanner.report.wording import counted, energy, listed, minutes, number, percent, plain, sentence

_COVERED = 1.0 - 1e-9


def verdict_words(verdict: Verdict) -> str:
    """Return the verdict in two or three words."""
    match verdict:
        case "fits":
            return "fits"
        case "tight":
            return "fits tightly"
        case "short":
            return "does not fit"


def limit_words(limit: BalanceLimit | None) -> str:
    """Return what stands in the way of more, as part of a sentence; empty if nothing does."""
    match limit:
        case "people-minutes":
            return "people's minutes are the limit"
        case "station-minutes":
            return "station time is the limit"
        case "storage":
            return "storage is the limit: more is made than stores and devices can hold"
        case None:
            return ""


def verdict_sentence(plan: Plan, result: BalanceResult) -> str:
    """Return verdict, amount, first empty day and limit in one sentence."""
    if result.coverage_fraction is None:
        return sentence(_nothing_needed(plan, result))
    words = verdict_words(result.verdict)
    parts = [_amount(plan, result)]
    if result.first_empty_day is not None:
        parts.append(f"the stores are empty on day {result.first_empty_day}")
    elif result.verdict == "short":
        parts.append("without the margin the stores last to the end")
    limit = limit_words(result.limit)
    if limit:
        parts.append(limit)
    return sentence(f"{words}: {'; '.join(parts)}")


def _nothing_needed(plan: Plan, result: BalanceResult) -> str:
    if not plan.devices:
        return "no device is in the plan, so nothing is needed"
    if not any(device.count for device in plan.devices):
        return "the plan counts no device, so nothing is needed"
    if not any(row.use_wh for row in result.devices):
        return "the devices in the plan use nothing, so nothing is needed"
    return "the devices' own start charge covers all their use"


def _amount(plan: Plan, result: BalanceResult) -> str:
    covered = percent(result.coverage_fraction)
    if result.verdict == "short":
        missing = number(result.short_wh_per_day)
        return f"{missing} Wh a day are missing at the outlet, {covered} covered"
    spare = energy(result.have_wh - result.need_wh)
    days = counted(plan.days, "day", "days")
    return f"{covered} of the need at the outlet is covered, {spare} to spare over {days}, margin included"


def verdict_lines(plan: Plan, result: BalanceResult) -> tuple[str, ...]:
    """Return the verdict as lines: an unmet evening guarantee first, needs outside the balance last."""
    lines = [evening_sentence(plan, result), verdict_sentence(plan, result), medical_sentence(plan)]
    return tuple(line for line in lines if line)


def evening_sentence(plan: Plan, result: BalanceResult) -> str:
    """Return what the balance can say against the evening guarantee; empty if nothing.

    The balance counts whole days: a device that is fully covered here may still be low on one evening.
    """
    marked = [device for device in plan.devices if device.evening and device.count]
    if not plan.devices:
        return ""
    if not marked:
        return (
            "Evening guarantee not set: mark one phone or radio for calling help and one lamp that must be above "
            "their floor at lights-out."
        )
    unmet = [device for device in marked if _class_cover(result.cuts.strict, device) < _COVERED]
    if unmet:
        return f"Evening guarantee not met: not enough for {_names(unmet)}, even if all else is cut first."
    at_risk = [device for device in marked if _class_cover(result.cuts.shared, device) < _COVERED]
    if at_risk:
        return f"Evening guarantee met for {_names(at_risk)} only if lower priorities are cut first."
    return ""


def _class_cover(cut: Sequence[CutClass], device: Device) -> float:
    return next((row.covered_fraction for row in cut if row.priority == device.priority), 1.0)


def _names(devices: Sequence[Device]) -> str:
    return listed([plain(device.name) for device in devices])


def medical_sentence(plan: Plan) -> str:
    """Return that powered medical needs stand outside the balance; empty without any."""
    count = sum(need.count for need in plan.medical_needs)
    if not count:
        return ""
    needs = counted(count, "powered medical need stands", "powered medical needs stand")
    return f"{needs} outside this balance: arrange a separate secured supply."


def effort_of_day_sentence(result: BalanceResult) -> str:
    """Return how long a reference adult would turn each day to meet the need, against what people offer."""
    offered = sum(row.used_min for row in result.stations)
    if result.needed_min_per_day is None:
        return "No station in service could make up what is needed."
    if result.needed_min_per_day <= 0.0:
        return "Stores and start charges meet the need without any turning."
    available = sum(row.available_min for row in result.stations)
    text = (
        f"to just meet the need, reference adults would turn {minutes(result.needed_min_per_day)} a day in all; "
        f"people now turn {minutes(offered)} a day, each with their own watts"
    )
    if result.needed_min_per_day > available:
        text += f", and the stations have time for {minutes(available)}"
    return sentence(text)


def hours_sentence(result: BalanceResult) -> str:
    """Return the chart of the hours in one sentence."""
    use = max(result.hours, key=lambda row: row.use_wh)
    made = max(result.hours, key=lambda row: row.made_wh)
    if use.use_wh <= 0.0 and made.made_wh <= 0.0:
        return "Nothing is used and nothing is made on an average day."
    parts = []
    if use.use_wh > 0.0:
        parts.append(f"most is used from {_hour(use.hour)}, {energy(use.use_wh)} at the outlet")
    if made.made_wh > 0.0:
        parts.append(f"most is made from {_hour(made.hour)}, {energy(made.made_wh)} at the outlet")
    return sentence(f"on an average day {'; '.join(parts)}")


def _hour(hour: int) -> str:
    return f"{hour:02d}:00 to {hour + 1:02d}:00"


def days_sentence(result: BalanceResult) -> str:
    """Return the chart of the pooled level in one sentence."""
    last = result.days[-1]
    if result.first_empty_day is not None:
        return sentence(
            f"the pooled level falls below its floor on day {result.first_empty_day}; "
            f"{energy(-last.end_wh)} are missing at the outlet by the end of day {last.day}, without margin"
            if last.end_wh < 0.0
            else f"the pooled level falls below its floor on day {result.first_empty_day}"
        )
    return sentence(f"{energy(last.end_wh)} are left at the outlet at the end of day {last.day}, without margin")


def stores_sentence(result: BalanceResult) -> str:
    """Return what stores and devices hold at the start, at the outlet."""
    stored = sum(row.usable_wh for row in result.stores)
    own = sum(row.credit_wh for row in result.devices)
    return sentence(
        f"at the start the stores hold {energy(stored)} and the devices themselves {energy(own)}, "
        f"both counted at the outlet"
    )


def cuts_sentence(result: BalanceResult) -> str:
    """Return strict and shared cut in one sentence."""
    if not result.cuts.strict:
        return "There is nothing to cut."
    if all(row.covered_fraction >= _COVERED for row in result.cuts.strict):
        return "Every priority is covered in full; nothing has to be cut."
    strict = ", ".join(f"priority {row.priority} {percent(row.covered_fraction)}" for row in result.cuts.strict)
    shared = min(row.covered_fraction for row in result.cuts.shared)
    return sentence(
        f"cut strictly in order of priority: {strict}; shared alike, every class gets at least {percent(shared)}"
    )


def people_sentence(result: BalanceResult) -> str:
    """Return how much of the station time people fill."""
    available = sum(row.available_min for row in result.stations)
    used = sum(row.used_min for row in result.stations)
    offered = sum({row.person: row.cap_min for row in result.people}.values())
    return sentence(
        f"people offer {minutes(offered)} a day and turn {minutes(used)} of it; "
        f"the stations have room for {minutes(available)}"
    )


def flow_sentence(flow: EnergyFlow) -> str:
    """Return the energy line in one sentence."""
    people = sum(band.wh_per_day for band in flow.people_m)
    stations = sum(band.wh_per_day for band in flow.stations_s)
    devices = sum(band.wh_per_day for band in flow.devices_d)
    text = (
        f"on an average day people put in {energy(people, 'M')}, {energy(stations)} leave the stations (S), "
        f"{energy(flow.o_wh)} reach the outlet (O) and start charges add {energy(flow.start_o_wh)} there; "
        f"devices use {energy(devices, 'D')}"
    )
    if flow.missing_o_wh > 0.0:
        text += f"; {energy(flow.missing_o_wh)} are missing at the outlet, margin included"
    return sentence(text)
