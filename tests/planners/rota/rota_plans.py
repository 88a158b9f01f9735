"""Random plans in which somebody often turns: those of `tests/strategies.py`, people and stations tamed."""

from __future__ import annotations

from typing import Any

from hypothesis import strategies as st
from msgspec import structs

from kitplanner.domain.units import clock
from kitplanner.plan.records import Bout, ChargeSpell, Device, Person, Plan, Rota, Station, Store
from kitplanner.planners.rota.result import RotaBout, RotaCharge
from tests.strategies import plans, records

GRIDS_MIN = (None, 5, 10, 15, 20, 30)


@st.composite
def rota_plans(draw: st.DrawFn, days: int = 3) -> Plan:
    """A plan without errors, of a few days, with people who may turn and devices that need it."""
    plan: Plan = draw(plans(most=2))
    groups = [group.id for group in plan.groups]
    people = tuple(draw(a_person(f"people-{place}", groups)) for place in range(draw(st.integers(1, 4))))
    stations = tuple(draw(a_station(f"stations-{place}")) for place in range(draw(st.integers(1, 2))))
    devices = tuple(draw(a_device(f"devices-{place}")) for place in range(draw(st.integers(1, 3))))
    stores = tuple(draw(a_store(f"stores-{place}")) for place in range(draw(st.integers(0, 2))))
    sources = tuple(structs.replace(one, wh_per_day=min(one.wh_per_day, 30.0)) for one in plan.other_sources)
    points = tuple(structs.replace(one, attendant=None) for one in plan.charging_points)
    return structs.replace(
        plan,
        days=min(plan.days, days),
        grid_min=draw(st.sampled_from(GRIDS_MIN)),
        margin_fraction=min(plan.margin_fraction, 0.5),
        blocks=plan.blocks if draw(st.booleans()) else (),
        people=people,
        stations=stations,
        devices=devices,
        stores=stores,
        other_sources=sources,
        charging_points=points,
        rota=None,
    )


@st.composite
def a_person(draw: st.DrawFn, own_id: str, groups: list[str]) -> Person:
    person: Person = draw(records("person", own_id))
    changes: dict[str, Any] = {
        "group": draw(st.sampled_from([None, *groups])),
        "stations": (),
        "mass_kg": draw(st.sampled_from((None, 45.0, 95.0))),
        "age": 40 if person.watts_by == "self_test" else draw(st.sampled_from((12, 14, 17, 25, 55, 62, 70, None))),
        "hours": person.hours if draw(st.booleans()) else (),
        "cap_min": draw(st.sampled_from((None, None, 20, 45))),
        "bout_min": draw(st.sampled_from((None, None, 10, 15))),
        "rest_min": draw(st.sampled_from((None, None, 50))),
        "days_off": draw(st.sampled_from(((), (), (2,)))),
    }
    return structs.replace(person, **changes)


@st.composite
def a_station(draw: st.DrawFn, own_id: str) -> Station:
    station: Station = draw(records("station", own_id))
    changes: dict[str, Any] = {
        "in_service": True,
        "guarded": True,
        "count": draw(st.integers(1, 3)),
        "described_by": draw(st.sampled_from(("measured", "label"))),
        "output_w": draw(st.floats(2.0, 60.0)),
        "label_w": draw(st.floats(2.0, 60.0)),
        "changeover_min": draw(st.sampled_from((0, 2, 7))),
        "daily_min": draw(st.sampled_from((None, None, 40))),
        "hours": station.hours if draw(st.booleans()) else (),
        "feeds": (),
    }
    return structs.replace(station, **changes)


@st.composite
def a_device(draw: st.DrawFn, own_id: str) -> Device:
    device: Device = draw(records("device", own_id))
    changes: dict[str, Any] = {
        "count": draw(st.integers(1, 5)),
        "battery_wh": draw(st.sampled_from((None, 2.0, 11.0, 50.0))),
        "use_by": "wh_per_day",
        "use_wh_per_day": draw(st.floats(1.0, 20.0)),
        "charge_w": draw(st.sampled_from((None, 2.0, 15.0))),
        "charge_rate_per_h": draw(st.floats(0.2, 2.0)),
        "taper_end_per_h": 0.05,
        "taper_tau_h": draw(st.floats(0.05, 0.5)),
        "input_limit_a": draw(st.sampled_from((None, 0.5, 2.0))),
        "eta": draw(st.floats(0.5, 1.0)),
        "floor_fraction": draw(st.floats(0.0, 0.3)),
        "target_fraction": draw(st.floats(0.5, 1.0)),
        "start_fraction": draw(st.sampled_from((0.0, 0.1, 0.5, 1.0))),
        "charge_windows": device.charge_windows if draw(st.booleans()) else (),
    }
    return structs.replace(device, **changes)


@st.composite
def a_store(draw: st.DrawFn, own_id: str) -> Store:
    return Store(
        id=own_id,
        name=own_id,
        count=draw(st.integers(1, 3)),
        nominal_wh=draw(st.floats(1.0, 300.0)),
        health_fraction=draw(st.floats(0.5, 1.0)),
        start_fraction=draw(st.sampled_from((0.0, 0.1, 0.3, 0.9))),
        floor_fraction=draw(st.floats(0.0, 0.4)),
        eta_in=draw(st.floats(0.5, 1.0)),
        eta_out=draw(st.floats(0.5, 1.0)),
        outlets=draw(st.integers(0, 3)),
        charge_limit_w=draw(st.none() | st.floats(1.0, 50.0)),
    )


def as_rota(bouts: tuple[RotaBout, ...], charging: tuple[RotaCharge, ...] = (), slot_min: int = 5) -> Rota:
    """Return a solver's bouts and a charging table as the record that the judge reads."""
    return Rota(
        id="rota",
        slot_min=slot_min,
        bouts=tuple(
            Bout(
                id=f"b{place}",
                day=row.day,
                start=clock(row.start_min),
                end=clock(row.end_min),
                station=row.station,
                person=row.person,
                unit=row.unit,
                watcher=row.watcher,
            )
            for place, row in enumerate(bouts)
        ),
        charging=tuple(
            ChargeSpell(
                id=f"c{place}",
                day=row.day,
                start=clock(row.start_min),
                end=clock(row.end_min),
                device=row.device,
                count=row.count,
                first_ticket=row.first_ticket,
                energy_wh=row.energy_wh,
            )
            for place, row in enumerate(charging)
        ),
    )
