"""Energy of an average day from people to devices, level by level, for the energy line.

M - station loss = S;  S + other sources - loss in = B;  B - loss out = O
O + start charges + missing = devices at O + margin + spare;  devices at O - loss = D
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from kitplanner.plan.records import Device, Plan, StationKind
from kitplanner.planners.demand import device_needs
from kitplanner.planners.results import BalanceResult, EnergyFlow, FlowBand, FlowLoss
from kitplanner.planners.supply import fed_stores, station_to_outlet_fraction, station_to_store_fraction

# Kinds in the order they stand in the energy line, each with its label and two-letter code.
STATION_KINDS: tuple[tuple[StationKind, str, str], ...] = (
    ("pedal", "Pedal stands", "PS"),
    ("treadle", "Treadles", "TR"),
    ("rocker", "Rockers", "RO"),
    ("crank", "Hand cranks", "HC"),
    ("pocket_crank", "Pocket cranks", "PC"),
)
# The palette has six fills that stay apart in grey and for every kind of colour vision.
MOST_CATEGORIES = 6
REST_KEY = "*"


def energy_flow(plan: Plan, result: BalanceResult) -> EnergyFlow:
    """Return the energy line of an average day.

    Parameters
    ----------
    plan : Plan
        The plan the balance was computed for
    result : BalanceResult
        Its balance

    Returns
    -------
    EnergyFlow
        Bands, losses and what is missing, Wh a day, each at its own level
    """
    stations_s = _station_bands(plan, [row.made_wh_per_day for row in result.stations])
    people_m = _station_bands(plan, [row.human_wh_per_day for row in result.stations])
    sources_s = tuple(
        FlowBand(key=source.id, label=source.name, code="OS", ids=(source.id,), wh_per_day=source.wh_per_day)
        for source in plan.other_sources
    )
    needs = device_needs(plan)
    made_s, came_s = _total(stations_s), _total(stations_s) + _total(sources_s)
    stored_b, out_o = _through_stores(plan, result)
    use_o = sum(need.day_o_wh for need in needs)
    start_o = (sum(row.usable_wh for row in result.stores) + sum(row.credit_wh for row in result.devices)) / plan.days
    use_d = sum(need.day_d_wh for need in needs)
    losses = (
        FlowLoss(label="Turning and generating", level_from="M", level_to="S", wh_per_day=_total(people_m) - made_s),
        FlowLoss(label="Into the stores", level_from="S", level_to="B", wh_per_day=came_s - stored_b),
        FlowLoss(label="Out of the stores", level_from="B", level_to="O", wh_per_day=stored_b - out_o),
        FlowLoss(label="Charging the devices", level_from="O", level_to="D", wh_per_day=use_o - use_d),
    )
    return EnergyFlow(
        people_m=people_m,
        stations_s=stations_s,
        sources_s=sources_s,
        b_wh=stored_b,
        o_wh=out_o,
        start_o_wh=start_o,
        devices_d=_device_bands(plan.devices, [need.day_d_wh for need in needs]),
        losses=losses,
        missing_o_wh=result.short_wh_per_day,
        margin_o_wh=use_o * plan.margin_fraction,
        spare_o_wh=max(0.0, result.have_wh - result.need_wh) / plan.days,
    )


def _total(bands: Iterable[FlowBand]) -> float:
    return sum(band.wh_per_day for band in bands)


def _through_stores(plan: Plan, result: BalanceResult) -> tuple[float, float]:
    """Return what arrives in the stores (B) and what comes out of them (O) of the energy made in a day."""
    stored = sum(source.wh_per_day for source in plan.other_sources) * station_to_store_fraction(plan.stores)
    out = sum(source.wh_per_day for source in plan.other_sources) * station_to_outlet_fraction(plan.stores)
    for station, row in zip(plan.stations, result.stations, strict=True):
        stores = fed_stores(plan, station)
        stored += row.made_wh_per_day * station_to_store_fraction(stores)
        out += row.made_wh_per_day * station_to_outlet_fraction(stores)
    return stored, out


def _station_bands(plan: Plan, wh: Sequence[float]) -> tuple[FlowBand, ...]:
    """Return one band for each kind of station in the plan."""
    bands = []
    for kind, label, code in STATION_KINDS:
        places = [place for place, station in enumerate(plan.stations) if station.kind == kind]
        if places:
            ids = tuple(plan.stations[place].id for place in places)
            energy = sum(wh[place] for place in places)
            bands.append(FlowBand(key=kind, label=label, code=code, ids=ids, wh_per_day=energy))
    return tuple(bands)


def device_category(device: Device) -> str:
    """Return the key of a device's band: its kind, or its priority if it has none.

    Examples
    --------
    >>> device_category(Device(id="p", name="phone", kind="phone")), device_category(Device(id="x", name="x"))
    ('phone', 'priority 3')
    """
    return device.kind.strip() or f"priority {device.priority}"


def _device_bands(devices: Sequence[Device], wh: Sequence[float]) -> tuple[FlowBand, ...]:
    """Return one band for each category, the smallest ones together if there are more than can be told apart."""
    found: dict[str, list[int]] = {}
    for place, device in enumerate(devices):
        found.setdefault(device_category(device), []).append(place)
    energy = {key: sum(wh[place] for place in places) for key, places in found.items()}
    ranked = sorted(found, key=lambda key: (-energy[key], key))
    if len(ranked) > MOST_CATEGORIES:
        rest = ranked[MOST_CATEGORIES - 1 :]
        ranked = ranked[: MOST_CATEGORIES - 1]
        found[REST_KEY] = [place for key in rest for place in found[key]]
        energy[REST_KEY] = sum(energy[key] for key in rest)
        ranked.append(REST_KEY)
    codes = two_letter_codes([_label(key) for key in ranked])
    return tuple(
        FlowBand(
            key=key,
            label=_label(key),
            code=code,
            ids=tuple(devices[place].id for place in found[key]),
            wh_per_day=energy[key],
        )
        for key, code in zip(ranked, codes, strict=True)
    )


def _label(key: str) -> str:
    if key == REST_KEY:
        return "All other devices"
    words = key.replace("_", " ")
    return words[:1].upper() + words[1:]


def two_letter_codes(labels: Iterable[str]) -> tuple[str, ...]:
    """Return a code of two signs for each label, all different.

    Examples
    --------
    >>> two_letter_codes(["Phone", "Lamp", "Laptop", "Priority 3", "Priority 4"])
    ('PH', 'LA', 'LP', 'P3', 'P4')
    """
    taken: list[str] = []
    for label in labels:
        signs = [sign for sign in label.upper() if sign.isalnum()] or ["X"]
        digits = [sign for sign in signs if sign.isdigit()]
        seconds = [*digits, *signs[1:], *"ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789"]
        taken.append(next(code for second in seconds if (code := signs[0] + second) not in taken))
    return tuple(taken)
