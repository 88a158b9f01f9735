"""The judge on the charging table: attended times, outlets, tickets, and what a battery accepts.

Part of the judge (`check.py`): imports plan and domain only.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from kitplanner.domain.battery import Acceptance, acceptance_rate_per_h, charge_ceiling_rate_per_h
from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.records import Device, Plan
from kitplanner.planners.rota.check_finding import (
    DAY_MIN,
    Charging,
    Part,
    Violation,
    is_inside,
    joined,
    named,
    overlap_min,
    parts_of,
    quiet_parts,
    steps_of,
    words,
)

ROUNDING_WH = 1e-6
ROUNDING_FRACTION = 1e-6
BUS_V = 5.0
# Below this cell temperature the steps of the charging rule apply; above it the device's own rate.
COLD_BELOW_DEGC = 15.0


def check_charging(plan: Plan, rows: Iterable[Charging]) -> Iterator[Violation]:
    """Yield every rule about charging that a rota breaks, but for the energy in the stores.

    Devices without a battery are fed, not charged: they need no outlet and no attendant.

    Parameters
    ----------
    plan : Plan
        The plan.
    rows : iterable of Charging
        Rows by time.
    """
    rows = list(rows)
    own = [row for row in rows if row.device.battery_wh]
    for row in own:
        yield from _check_hours(plan, row)
    for row in rows:
        yield from _check_tickets(row)
    yield from _check_twice(rows)
    yield from _check_outlets(plan, own)
    for device in plan.devices:
        if device.battery_wh:
            yield from _check_battery(plan, device, [row for row in own if row.device.id == device.id])


def _check_hours(plan: Plan, row: Charging) -> Iterator[Violation]:
    windows = parts_of(row.device.charge_windows)
    if windows and not is_inside(row.start, row.end, windows):
        beyond = row.end - row.start - overlap_min(row.start, row.end, windows)
        text = f"{named(row.device)} charges {row.when}, {beyond} min outside its charging times ({words(windows)})."
        yield row.broken("charging_times", text)
    attended = attended_parts(plan, row.day)
    if not is_inside(row.start, row.end, attended):
        beyond = row.end - row.start - overlap_min(row.start, row.end, attended)
        text = f"{named(row.device)} charges {row.when}, {beyond} min of it unattended ({words(attended)} is attended)."
        yield row.broken("attended", text)


def waking(plan: Plan, day: int) -> tuple[Part, ...]:
    """Return the part of a day outside the quiet hours."""
    rest, last = [], 0
    for start, end in (*quiet_parts(plan, day), (DAY_MIN, DAY_MIN)):
        if start > last:
            rest.append((last, start))
        last = end
    return tuple(rest)


def attended_parts(plan: Plan, day: int) -> tuple[Part, ...]:
    """Return when charging is attended: at any charging point, without one the day outside quiet hours."""
    if not plan.charging_points:
        return waking(plan, day)
    return joined([part for point in plan.charging_points for part in parts_of(point.hours) or waking(plan, day)])


def outlets_at(plan: Plan, day: int, span: Part) -> int:
    """Return the outlets of a stretch of a day: of the charging points then attended, else of stores or stations."""
    if not plan.charging_points:
        if not plan.stores:
            return sum(station.count for station in plan.stations)
        return sum(store.count * store.outlets for store in plan.stores)
    return sum(
        point.outlets for point in plan.charging_points if is_inside(*span, parts_of(point.hours) or waking(plan, day))
    )


def _check_tickets(row: Charging) -> Iterator[Violation]:
    last = row.first_ticket + row.count - 1
    if row.count < 1 or row.first_ticket < 1 or last > row.device.count:
        text = (
            f"{named(row.device)} {row.when} names {row.count} from ticket {row.first_ticket}; tickets run from 1 to "
            f"{row.device.count}."
        )
        yield row.broken("tickets", text)
    if not row.energy_wh >= 0.0:
        yield row.broken("energy", f"{named(row.device)} {row.when} is given {row.energy_wh:g} Wh.")


def _check_twice(rows: Iterable[Charging]) -> Iterator[Violation]:
    """Yield units that are on charge twice at once."""
    by_device: dict[str, list[Charging]] = {}
    for row in rows:
        by_device.setdefault(row.device.id, []).append(row)
    for own in by_device.values():
        running: list[Charging] = []
        for row in own:
            running = [before for before in running if before.until > row.since]
            for before in running:
                first = max(before.first_ticket, row.first_ticket)
                last = min(before.first_ticket + before.count, row.first_ticket + row.count) - 1
                if first <= last:
                    text = (
                        f"Ticket {first} of {named(row.device)} charges twice {row.when}, "
                        f"{min(before.until, row.until) - row.since} min at once."
                    )
                    yield row.broken("twice", text)
                    break
            running.append(row)


def _check_outlets(plan: Plan, rows: list[Charging]) -> Iterator[Violation]:
    """Yield moments with more devices on charge than outlets, once a day."""
    for day in sorted({row.day for row in rows}):
        here = [row for row in rows if row.day == day]
        points = [edge for point in plan.charging_points for part in parts_of(point.hours) for edge in part]
        edges = {row.start for row in here} | {row.end for row in here} | set(points)
        for start, end in steps_of(edges):
            busy = [row for row in here if row.start <= start and end <= row.end]
            used = sum(row.count for row in busy)
            free = outlets_at(plan, day, (start, end)) if busy else 0
            if used > free:
                text = f"{used} devices are on charge on day {day} at {clock(start)}; there are {free} outlets, "
                yield busy[-1].broken("outlets", text + f"{used - free} too few.")
                break


def accepted_w(plan: Plan, device: Device, soc: float) -> float:
    """Return the watts at O one unit takes at a state of charge: own limit, taper, input limit, cold."""
    battery_wh = device.battery_wh or 0.0
    rate = device.charge_rate_per_h if device.charge_w is None else device.charge_w / battery_wh
    degc = mean_air_degc(plan)
    if degc < COLD_BELOW_DEGC:
        rate = min(rate, float(charge_ceiling_rate_per_h(degc, "li_ion")))
    law = Acceptance(rate, device.taper_end_per_h, device.taper_tau_h)
    power_w = float(acceptance_rate_per_h(soc, law)) * battery_wh / device.eta
    return power_w if device.input_limit_a is None else min(power_w, device.input_limit_a * BUS_V)


def mean_air_degc(plan: Plan) -> float:
    """Return the temperature at which devices charge: the mean of the day parts given, else the plan's air."""
    total, weighted = 0.0, 0.0
    for part in plan.conditions.temperatures:
        if part.air_degc is not None:
            start, end = minutes_of_day(part.start), minutes_of_day(part.end)
            length = end - start if end > start else end - start + DAY_MIN
            total, weighted = total + length, weighted + length * part.air_degc
    return weighted / total if total > 0.0 else plan.conditions.air_degc


def use_wh_per_day(device: Device) -> float:
    """Return the energy one unit uses in a day, at D [Wh]."""
    if device.use_by == "percent":
        return (device.battery_wh or 0.0) * (device.use_battery_fraction_per_day or 0.0)
    if device.use_by == "times":
        return (device.use_w or 0.0) * (device.use_times_per_day or 0.0) * (device.use_min_each or 0.0) / 60.0
    if device.use_by == "power_hours":
        window_h = sum(end - start for start, end in parts_of(device.use_windows)) / 60.0
        return (device.use_w or 0.0) * (window_h if device.use_h_per_day is None else device.use_h_per_day)
    return device.use_wh_per_day or 0.0


class _Use:
    """What a device line uses between two moments, spread evenly over its windows; at D [Wh]."""

    def __init__(self, device: Device) -> None:
        self._parts = parts_of(device.use_windows) or ((0, DAY_MIN),)
        self._minutes = sum(end - start for start, end in self._parts)
        self._day_wh = device.count * use_wh_per_day(device)

    def until(self, moment: int) -> float:
        day, minute = divmod(moment, DAY_MIN)
        return self._day_wh * (day + overlap_min(0, minute, self._parts) / self._minutes)


def _check_battery(plan: Plan, device: Device, rows: list[Charging]) -> Iterator[Violation]:
    """Yield rows that put in more than the battery accepts or holds, by replaying the line's charge.

    The line counts as one battery. Within a row its state of charge is taken at its lowest, where it accepts most.
    """
    whole = device.count * (device.battery_wh or 0.0)
    floor = min(device.start_fraction, device.floor_fraction) * whole
    full = max(1.0, device.start_fraction) * whole
    level, use = device.start_fraction * whole, _Use(device)
    low_of: dict[int, float] = {}
    for since, until in steps_of({0} | {edge for row in rows for edge in (row.since, row.until)}):
        active = [row for row in rows if row.since <= since and until <= row.until]
        for row in active:
            if row.since == since:
                low_of[id(row)] = max(floor, level - (use.until(row.until) - use.until(row.since)))
        arrived = sum(row.energy_wh * device.eta * (until - since) / (row.until - row.since) for row in active)
        level = max(floor, level + arrived - (use.until(until) - use.until(since)))
        if level > full * (1.0 + ROUNDING_FRACTION) + ROUNDING_WH and active:
            text = f"{named(device)} {active[-1].when} gets {(level - full) / device.eta:.3g} Wh more than it can hold."
            yield active[-1].broken("full", text)
            level = full
    for row in rows:
        soc = low_of[id(row)] / whole
        most = row.count * accepted_w(plan, device, soc) * (row.until - row.since) / 60.0
        if row.energy_wh > most * (1.0 + ROUNDING_FRACTION) + ROUNDING_WH:
            text = (
                f"{row.count} of {named(device)} take {row.energy_wh:.2f} Wh {row.when}; they accept at most "
                f"{most:.2f} Wh, {row.energy_wh - most:.2g} Wh too much."
            )
            yield row.broken("acceptance", text)
