"""The uncertain inputs of a plan's records with the ends of their ranges.

A value's spread is its note's, else its FieldSpec's, else the planning value below. Amounts vary by lognormal factors,
efficiencies by their losses; both stay inside what the field allows.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from types import MappingProxyType

import numpy as np
from msgspec import structs

from kitplanner.domain.spread import lognormal_factors
from kitplanner.plan.fields import field
from kitplanner.plan.records import Device, Plan, Record, Store, TemperaturePart
from kitplanner.planners.effort_spread import CAPACITY_SPREAD, STORE_SPREAD, field_spread, lossy_fraction
from kitplanner.planners.sensitivity_records import P90_Z, InputName, Variation
from kitplanner.planners.trace_fields import field_step

PLANNING_VALUE = "spread: planning value of this program, no published source"
# A store's start and health together carry 7 %, its ways in and out together `STORE_SPREAD`: root sum of squares.
STORE_START_SPREAD = STORE_HEALTH_SPREAD = 0.07 / math.sqrt(2.0)
STORE_WAY_SPREAD = STORE_SPREAD / math.sqrt(2.0)
DEVICE_START_SPREAD = 0.10
USE_SPREAD = 0.15
OTHER_SOURCE_SPREAD = 0.20
DEVICE_LOSS_SPREAD = 0.05
# Standard deviation of an air temperature stated for days to come, and of a margin's choice.
AIR_SPREAD_DEGC = 3.0
MARGIN_STEP = 0.05

USE_KEYS: Mapping[str, str] = MappingProxyType(
    {
        "power_hours": "use_w",
        "wh_per_day": "use_wh_per_day",
        "percent": "use_battery_fraction_per_day",
        "times": "use_w",
    }
)


def varied_field(name: InputName, kind: str, record: Record, key: str, spread_fraction: float) -> Variation | None:
    """Return a field's range, None where it is empty, zero or without spread.

    Parameters
    ----------
    name : str
        Which input it is
    kind, record, key : str, Record, str
        The field
    spread_fraction : float
        Spread where neither note nor FieldSpec gives one [-]

    Returns
    -------
    Variation or None
        Central, low and high value in the field's unit

    Examples
    --------
    >>> phone = Device(id="p", name="phone", use_wh_per_day=6.0)
    >>> made = varied_field("device_use", "device", phone, "use_wh_per_day", 0.0)
    >>> round(made.low, 2), round(made.high, 2)
    (4.96, 7.26)
    """
    value = getattr(record, key)
    spread = field_spread(record, kind, key, spread_fraction)
    if value is None or value == 0.0 or spread <= 0.0:
        return None
    spec = field(kind, key)
    if key.startswith("eta"):
        low, high = lossy_fraction(np.array(float(value)), np.array(spread), np.array([-P90_Z, P90_Z]))
    else:
        low, high = float(value) * lognormal_factors(spread, [-P90_Z, P90_Z])
    top = math.inf if spec.high is None else float(spec.high)
    step = field_step(kind, record, key)
    return Variation(
        name=name,
        record=getattr(record, "id", ""),
        kind=kind,
        key=key,
        central=float(value),
        low=float(low),
        high=max(float(value), min(float(high), top)),
        unit=spec.unit,
        mark=step.mark,
        source=step.source,
    )


def device_variations(device: Device) -> Iterator[Variation]:
    """Yield use, and for a device with its own battery its start, capacity and losses."""
    yield from _known(varied_field("device_use", "device", device, USE_KEYS[device.use_by], USE_SPREAD))
    if device.battery_wh:
        yield from _known(varied_field("device_start", "device", device, "start_fraction", DEVICE_START_SPREAD))
        yield from _known(varied_field("device_capacity", "device", device, "battery_wh", CAPACITY_SPREAD))
        yield from _known(varied_field("device_losses", "device", device, "eta", DEVICE_LOSS_SPREAD))


def store_variations(store: Store) -> Iterator[Variation]:
    """Yield a store's start, health and both ways."""
    yield from _known(varied_field("store_start", "store", store, "start_fraction", STORE_START_SPREAD))
    yield from _known(varied_field("store_health", "store", store, "health_fraction", STORE_HEALTH_SPREAD))
    yield from _known(varied_field("store_in", "store", store, "eta_in", STORE_WAY_SPREAD))
    yield from _known(varied_field("store_out", "store", store, "eta_out", STORE_WAY_SPREAD))


def _known(variation: Variation | None) -> tuple[Variation, ...]:
    return () if variation is None else (variation,)


def margin_variation(plan: Plan) -> Variation:
    """Return the margin five points of percent lower and higher: a choice, not an uncertainty."""
    step = field_step("plan", plan, "margin_fraction")
    return Variation(
        name="margin",
        record="",
        kind="plan",
        key="margin_fraction",
        central=plan.margin_fraction,
        low=max(0.0, plan.margin_fraction - MARGIN_STEP),
        high=plan.margin_fraction + MARGIN_STEP,
        unit=field("plan", "margin_fraction").unit,
        mark=step.mark,
        source=step.source,
        is_choice=True,
    )


def temperature_variation(plan: Plan) -> Variation:
    """Return the air's temperature at both ends; parts of days with their own move with it."""
    step = field_step("conditions", plan.conditions, "air_degc")
    degc = plan.conditions.air_degc
    return Variation(
        name="temperature",
        record="",
        kind="conditions",
        key="air_degc",
        central=degc,
        low=degc - P90_Z * AIR_SPREAD_DEGC,
        high=degc + P90_Z * AIR_SPREAD_DEGC,
        unit=field("conditions", "air_degc").unit,
        mark=step.mark,
        source=step.source,
    )


def at_temperature(plan: Plan, air_degc: float) -> Plan:
    """Return the plan with all its air temperatures moved as the plan's own moves."""
    shift = air_degc - plan.conditions.air_degc
    parts = tuple(_moved(part, shift) for part in plan.conditions.temperatures)
    return structs.replace(plan, conditions=structs.replace(plan.conditions, air_degc=air_degc, temperatures=parts))


def _moved(part: TemperaturePart, shift: float) -> TemperaturePart:
    return part if part.air_degc is None else structs.replace(part, air_degc=part.air_degc + shift)
