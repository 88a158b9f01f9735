"""The dispatch of charging in plain scalar steps: one store, strict cut, no evening guarantee, no connectors.

Written from the policy in words, with every later time looked at and the battery law of the domain; slow on purpose.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from kitplanner.domain.battery import Acceptance, soc_after
from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.records import Device, Plan, Window
from kitplanner.planners.rota.result import RotaBout

NOTHING = 1e-9


@dataclass
class Line:
    """One device line."""

    device: Device
    level: float
    units_on: int = 0
    given: list[float] = field(default_factory=list)
    unmet: list[float] = field(default_factory=list)

    @property
    def whole(self) -> float:
        return self.device.count * (self.device.battery_wh or 0.0)

    @property
    def floor(self) -> float:
        return self.whole * min(self.device.floor_fraction, self.device.start_fraction)

    @property
    def eta(self) -> float:
        return self.device.eta if self.device.battery_wh else 1.0


def covered_min(windows: tuple[Window, ...], start: int, end: int) -> int:
    """Minutes of a stretch of the day inside windows; no window is the whole day."""
    if not windows:
        return end - start
    parts = [(minutes_of_day(w.start), minutes_of_day(w.end)) for w in windows]
    return sum(1 for minute in range(start, end) if any(a <= minute < b for a, b in parts))


def simulate(plan: Plan, bouts: tuple[RotaBout, ...], slot: int) -> list[Line]:
    """Run the horizon; each line then holds what it was given and missed in every slot, at O."""
    per_day = 1440 // slot
    slots = plan.days * per_day
    (store,) = plan.stores
    (point,) = plan.charging_points
    whole = store.count * store.nominal_wh * store.health_fraction
    stored = whole * max(0.0, store.start_fraction - store.floor_fraction)
    full = whole * (1.0 - store.floor_fraction)
    factor = store.eta_in * store.eta_out
    made = [0.0] * slots
    for bout in bouts:
        first, last = (((bout.day - 1) * 1440 + minute) // slot for minute in (bout.start_min, bout.end_min))
        for t in range(first, last):
            made[t] += bout.output_wh / (last - first)
    lines = [Line(device, device.start_fraction * device.count * (device.battery_wh or 0.0)) for device in plan.devices]
    use = [[use_in(line.device, t % per_day, slot) for t in range(slots)] for line in lines]
    open_ = [
        [
            not line.device.battery_wh
            or covered_min(point.hours, t % per_day * slot, t % per_day * slot + slot) == slot
            for t in range(slots)
        ]
        for line in lines
    ]
    coming = [factor * sum(made[:t]) for t in range(slots + 1)]
    binding = [t for t in range(slots) if made[t] > 0.0] + [slots]
    for t in range(slots):
        stored += made[t] * store.eta_in
        over = max(0.0, stored - full)
        stored -= over
        times = [tau for tau in binding if tau > t]
        wanted = [[need(line, use[i], open_[i], t, tau) for tau in times] for i, line in enumerate(lines)]
        gifts = share(
            lines,
            wanted,
            [use[i][t] for i in range(len(lines))],
            [open_[i][t] for i in range(len(lines))],
            (
                t,
                times,
                coming,
                stored * store.eta_out,
                point.outlets if attended(point.hours, t, per_day, slot) else 0,
                slot,
                over > 0.0,
            ),
        )
        stored = min(full, stored - sum(gifts) / store.eta_out + over)
        for i, line in enumerate(lines):
            line.given.append(gifts[i])
            if line.device.battery_wh:
                line.level += gifts[i] * line.eta
                served = min(use[i][t], max(0.0, line.level - line.floor))
                line.level -= served
                line.unmet.append((use[i][t] - served) / line.eta)
            else:
                line.unmet.append(use[i][t] - gifts[i])
    return lines


def attended(hours: tuple[Window, ...], t: int, per_day: int, slot: int) -> bool:
    return covered_min(hours, t % per_day * slot, t % per_day * slot + slot) == slot


def use_in(device: Device, place: int, slot: int) -> float:
    """Use of a line in one slot of the day, at D."""
    day = covered_min(device.use_windows, 0, 1440)
    return (
        device.count
        * (device.use_wh_per_day or 0.0)
        * covered_min(device.use_windows, place * slot, place * slot + slot)
        / day
    )


def need(line: Line, use: list[float], open_: list[bool], t: int, tau: int) -> float:
    """What a line must draw by a later time, at O: use up to the next slot in which it may be charged."""
    slots = len(use)
    first = next((s for s in range(t, slots) if open_[s]), slots)
    until = next((s for s in range(tau, slots) if open_[s]), slots)
    kept = max(0.0, max(0.0, line.level - line.floor) - sum(use[t:first]))
    return max(0.0, sum(use[first:until]) - kept) / line.eta


def share(
    lines: list[Line],
    wanted: list[list[float]],
    use: list[float],
    open_: list[bool],
    now: tuple[int, list[int], list[float], float, int, int, bool],
) -> list[float]:
    """Who gets what in one slot, at O."""
    t, times, coming, stored, outlets, slot, is_over = now
    wish, gains = [0.0] * len(lines), [0.0] * len(lines)
    for i, line in enumerate(lines):
        if not open_[i]:
            continue
        if not line.device.battery_wh:
            wish[i] = use[i]
            continue
        gains[i] = gain(line, slot)
        room = max(0.0, line.whole * line.device.target_fraction - line.level + use[i])
        if goes_on(line, room, wanted[i], times, t + 1440 // slot) or (is_over and room >= 0.05 * line.whole):
            wish[i] = min(room, gains[i] * line.device.count) / line.eta
    ranks = sorted({line.device.priority for line in lines})
    slack = [
        [
            stored
            + coming[tau]
            - coming[t + 1]
            - sum(wanted[i][k] for i, line in enumerate(lines) if line.device.priority <= rank)
            for k, tau in enumerate(times)
        ]
        for rank in ranks
    ]
    wait = [
        next(((times[k] - t) for k, wh in enumerate(wanted[i]) if wh > NOTHING), times[-1] - t) * slot // 120
        for i in range(len(lines))
    ]
    order = sorted(
        range(len(lines)),
        key=lambda i: (
            not lines[i].level < lines[i].floor - NOTHING,
            wait[i],
            lines[i].device.priority,
            lines[i].units_on == 0,
            i,
        ),
    )
    gifts = list(wish)
    if sum(wish) > stored or sum(wish) > min(min(row) for row in slack):
        gifts = in_turn(lines, wanted, wish, order, (stored, slack))
    return plug_in(lines, gifts, gains, order, outlets)


def in_turn(
    lines: list[Line],
    wanted: list[list[float]],
    wish: list[float],
    order: list[int],
    scarce: tuple[float, list[list[float]]],
) -> list[float]:
    """Needs class by class, then filling up; no gift adds to what any class must lose."""
    stored, slack = scarce
    ranks = sorted({line.device.priority for line in lines})
    gifts = [0.0] * len(lines)
    spare = [[each + max(0.0, -min(row)) for each in row] for row in slack]
    for is_beyond in (False, True):
        for i in sorted(order, key=lambda i: 0 if is_beyond else ranks.index(lines[i].device.priority)):
            row = ranks.index(lines[i].device.priority)
            left = [max(0.0, wh - gifts[i]) for wh in wanted[i]]
            if is_beyond:
                part = min(wish[i] - gifts[i], *(min(each) for each in spare))
            else:
                part = min(wish[i] - gifts[i], left[-1])
                for r in range(len(ranks)):
                    part = min(part, *(s + (left[k] if r >= row else 0.0) for k, s in enumerate(spare[r])))
            part = min(part, stored - sum(gifts))
            if part > 0.0:
                for r in range(len(ranks)):
                    spare[r] = [s - part + (min(part, left[k]) if r >= row else 0.0) for k, s in enumerate(spare[r])]
                gifts[i] += part
    return gifts


def plug_in(lines: list[Line], gifts: list[float], gains: list[float], order: list[int], outlets: int) -> list[float]:
    """Let as many units charge as there are outlets, the neediest line first."""
    final = list(gifts)
    asked = {}
    for i, line in enumerate(lines):
        gift = gifts[i] * line.eta
        takes = bool(line.device.battery_wh) and gift > NOTHING and gains[i] > 0.0
        asked[i] = min(max(math.ceil(gift / gains[i] - 1e-9), line.units_on), line.device.count) if takes else 0
    for i in order:
        line = lines[i]
        if line.device.battery_wh:
            units = min(asked[i], max(0, outlets))
            outlets -= asked[i]
            final[i] = min(gifts[i], units * gains[i] / line.eta)
            line.units_on = units if final[i] > NOTHING else 0
        if final[i] <= NOTHING:
            final[i] = 0.0
    return final


def goes_on(line: Line, room: float, wanted: list[float], times: list[int], tomorrow: int) -> bool:
    """Whether a charge begins or goes on: a fifth missing, the coming day needs it, or it is not yet full."""
    column = next((k for k, tau in enumerate(times) if tau >= tomorrow), len(times) - 1)
    begins = room >= 0.2 * line.whole or wanted[column] > NOTHING
    stays = line.units_on > 0 and room > 0.005 * line.whole
    return (begins or stays) and room > NOTHING


def gain(line: Line, slot: int) -> float:
    """What one unit takes in a slot, at D, by the domain's closed form."""
    device = line.device
    battery = device.battery_wh or 0.0
    rate = device.charge_rate_per_h if device.charge_w is None else device.charge_w / battery
    soc = min(1.0, line.level / line.whole)
    after = float(soc_after(slot, soc, rate, Acceptance(rate, device.taper_end_per_h, device.taper_tau_h)))
    return (after - soc) * battery
