"""The demo plans hold the figures of their scenarios, added up here by plain arithmetic.

The scenarios are invented; their sums were worked out apart from the program: use at the device (D) and at the outlet
(O = D / 0.85 with a battery of one's own, else D), stores at the outlet, minutes and energy people offer.
"""

from __future__ import annotations

import math

import pytest

from kitplanner.plan.catalogue import PLAN_KINDS, new_plan
from kitplanner.plan.records import CableStage, ConverterStage, DiodeStage, LinearStage, Plan

HOUSEHOLD, CAMP, SHELTER, BENCH = (new_plan(kind) for kind in PLAN_KINDS)


def use_each(device) -> float:
    return {
        "wh_per_day": lambda: device.use_wh_per_day,
        "power_hours": lambda: device.use_w * device.use_h_per_day,
        "times": lambda: device.use_w * device.use_times_per_day * device.use_min_each / 60,
    }[device.use_by]()


def use_d(plan: Plan) -> dict[str, float]:
    return {device.id: device.count * use_each(device) for device in plan.devices}


def use_o(plan: Plan) -> dict[str, float]:
    return {
        device.id: device.count * use_each(device) / (device.eta if device.battery_wh else 1) for device in plan.devices
    }


def stored_o(plan: Plan) -> dict[str, float]:
    return {
        store.id: store.count
        * store.nominal_wh
        * store.health_fraction
        * (store.start_fraction - store.floor_fraction)
        * store.eta_out
        for store in plan.stores
    }


def minutes(text: str) -> int:
    return int(text[:2]) * 60 + int(text[3:])


def slot_minutes(station) -> int:
    if station.daily_min is not None:
        return station.count * station.daily_min
    whole = 0
    for window in station.hours:
        length = minutes(window.end) - minutes(window.start)
        whole += (length + station.changeover_min) // (station.slot_min + station.changeover_min) * station.slot_min
    return station.count * whole


def offered(plan: Plan, station_id: str) -> tuple[int, float]:
    """Minutes a day and minutes weighted with the share, of the people allowed at a station."""
    pedals = next(one for one in plan.stations if one.id == station_id).kind == "pedal"
    caps = shares = 0.0
    for person in plan.people:
        if person.cap_min and station_id in person.stations:
            caps += person.cap_min
            shares += person.cap_min * (person.share_legs_fraction if pedals else person.share_arms_fraction)
    return int(caps), shares


@pytest.mark.parametrize(
    ("plan", "title", "people", "days", "margin", "d_wh", "o_wh"),
    [
        (HOUSEHOLD, "Quillaby Row 7", 4, 5, 0.20, 26.05, 30.65),
        (CAMP, "Fennigarth Meadow", 24, 3, 0.15, 89.3, 103.47),
        (SHELTER, "Ostrel Point School", 60, 7, 0.20, 832.0, 918.12),
    ],
)
def test_size_and_use(plan, title, people, days, margin, d_wh, o_wh):
    assert (plan.title, len(plan.people), plan.days, plan.margin_fraction) == (title, people, days, margin)
    assert sum(use_d(plan).values()) == pytest.approx(d_wh, abs=0.005)
    assert sum(use_o(plan).values()) == pytest.approx(o_wh, abs=0.011)


def test_use_of_single_devices():
    assert use_o(HOUSEHOLD) == pytest.approx(
        {"A-D3": 1.18, "A-D4": 0.88, "A-D7": 0.35, "A-D1": 14.12, "A-D5": 9.41, "A-D6": 1.18, "A-D2": 3.53}, abs=0.005
    )
    assert use_o(SHELTER)["C-D1"] == pytest.approx(338.82, abs=0.005)
    assert use_o(SHELTER)["C-D2"] == 200.0
    assert use_d(CAMP)["B-D1"] == 26.0


@pytest.mark.parametrize(
    ("plan", "by_priority"),
    [(HOUSEHOLD, {1: 2.4, 2: 23.5, 3: 1.2, 4: 3.5}), (SHELTER, {1: 173.2, 2: 377.9, 3: 338.8, 5: 28.2})],
)
def test_use_by_priority(plan, by_priority):
    sums: dict[int, float] = {}
    for device in plan.devices:
        sums[device.priority] = sums.get(device.priority, 0.0) + use_o(plan)[device.id]
    assert sums == pytest.approx(by_priority, abs=0.06)


def test_stores_at_the_outlet():
    assert stored_o(HOUSEHOLD) == pytest.approx({"A-B1": 101.9}, abs=0.05)
    assert stored_o(CAMP) == pytest.approx({"B-B1": 51.7, "B-B2": 25.5, "B-B3": 0.0}, abs=0.05)
    assert stored_o(SHELTER) == pytest.approx({"C-B1": 685.4, "C-B2": 147.2}, abs=0.05)
    assert all(store.chemistry == "lfp" for store in (CAMP.stores[0], SHELTER.stores[0]))


def test_minutes_stations_have():
    assert [slot_minutes(one) for one in HOUSEHOLD.stations] == [240]
    assert [slot_minutes(one) for one in CAMP.stations] == [180, 2 * 60]
    assert [slot_minutes(one) for one in SHELTER.stations] == [2 * 540, 2 * 240]


def test_minutes_and_energy_people_offer():
    caps, shares = offered(HOUSEHOLD, "A-S1")
    assert caps == 100
    assert 6 * shares / 60 == pytest.approx(8.6)
    caps, shares = offered(CAMP, "B-S1")
    assert caps == 540
    pedalled = 40 * shares / 60 * 180 / caps
    caps, shares = offered(CAMP, "B-S2")
    assert caps == 40
    assert pedalled + 6 * shares / 60 == pytest.approx(93.6, abs=0.05)
    caps, shares = offered(SHELTER, "C-S1")
    assert caps == 880
    assert 40 * shares / 60 == pytest.approx(549.3, abs=0.05)
    caps, shares = offered(SHELTER, "C-S2")
    assert caps == 120
    assert 6 * shares / 60 == pytest.approx(7.8)


def test_people_are_allowed_exactly_at_the_stations_of_their_column():
    for plan in (HOUSEHOLD, CAMP, SHELTER):
        for person in plan.people:
            assert person.cap_min is not None
            assert len(person.stations) == 1 or person.cap_min == 0
    assert {one.stations for one in CAMP.people if one.age == 12} == {("B-S2",)}


def test_shelter_groups():
    counts = [sum(one.group == group.id for one in SHELTER.people) for group in SHELTER.groups]
    assert counts == [5, 9, 4, 4, 17, 4, 3, 4, 7, 3]
    assert sum(one.cap_min > 0 and one.group == "C-G3" for one in SHELTER.people) == 3
    assert sorted(one.age for one in SHELTER.people if one.group == "C-G9" and one.cap_min) == [61, 64, 66]


@pytest.mark.parametrize("plan", [HOUSEHOLD, CAMP, SHELTER, BENCH], ids=PLAN_KINDS)
def test_what_all_demos_share(plan):
    assert not plan.conditions.heat_limits
    assert not plan.conditions.ramp_up
    assert plan.rota is None
    assert not plan.log
    assert not plan.pack_items
    assert not plan.other_sources
    for station in plan.stations:
        if station.kind == "pedal":
            assert station.eta_fraction == 0.60
    for device in plan.devices:
        assert device.target_fraction == 1.0
        assert device.eta == 0.85


@pytest.mark.parametrize("plan", [HOUSEHOLD, CAMP, SHELTER], ids=PLAN_KINDS[:3])
def test_evening_guarantee_and_spread(plan):
    kinds = {device.kind for device in plan.devices if device.evening}
    assert "light" in kinds
    assert kinds & {"phone", "radio"}
    for station in plan.stations:
        spread = station.notes["output_w"].spread_fraction
        assert spread == pytest.approx({"pedal": 8 / 40, "crank": 1 / 6}[station.kind], abs=1e-4)


def test_surroundings():
    assert [part.air_degc for part in CAMP.conditions.temperatures] == [22, 24, 24]
    assert (HOUSEHOLD.conditions.air_degc, SHELTER.conditions.air_degc) == (16, 24)
    assert not HOUSEHOLD.charging_points
    (camp_point,), (shelter_point,) = CAMP.charging_points, SHELTER.charging_points
    assert (camp_point.outlets, camp_point.hours[0].start, camp_point.hours[0].end) == (6, "08:00", "20:00")
    assert (shelter_point.outlets, shelter_point.hours[0].start, shelter_point.hours[0].end) == (12, "07:00", "21:30")
    meals = next(block for block in HOUSEHOLD.blocks if block.kind == "meal")
    assert [minutes(one.end) - minutes(one.start) for one in meals.windows] == [30, 30, 30]
    (need,) = SHELTER.medical_needs
    assert need.power_w * need.hours_per_day == 320


def test_the_bench_in_short():
    assert [one.id for one in BENCH.stations] == ["A", "A-buck", "B", "C-5V", "C-12V"]
    assert (BENCH.days, BENCH.margin_fraction, BENCH.stores) == (1, 0.0, ())
    (adult,), (phone,) = BENCH.people, BENCH.devices
    assert (adult.age, adult.watts_by, adult.level) == (40, "level", "usual")
    assert (phone.battery_wh, use_each(phone), phone.start_fraction, phone.floor_fraction) == (15.4, 6.0, 0.0, 0.0)
    sockets = {one.id: one.connector for one in BENCH.stations}
    assert phone.connector == "5 V USB"
    assert sockets.pop("C-12V") == "12 V socket"
    assert set(sockets.values()) == {"5 V USB"}


def copper_loop_ohm(gauge: int, length_m: float) -> float:
    """ASTM B258 diameter, IACS copper at 20 degrees, two conductors and four contacts of 30 milliohm."""
    diameter_m = 0.127e-3 * 92 ** ((36 - gauge) / 39)
    return 2 * length_m * 1.7241e-8 / (math.pi * diameter_m**2 / 4) + 4 * 0.030


def test_the_bench_chains():
    stations = {one.id: one for one in BENCH.stations}
    machines = {
        key: (one.machine.ke_v_s, one.machine.ra_ohm, one.gear.ratio, one.gear.eta) for key, one in stations.items()
    }
    assert machines == {
        "A": (0.0215, 4.0, 30, 0.75),
        "A-buck": (0.0215, 4.0, 30, 0.75),
        "B": (0.045, 1.5, 40, 0.80),
        "C-5V": (0.072, 0.35, 42, 0.85),
        "C-12V": (0.072, 0.35, 42, 0.85),
    }
    kinds = {key: [type(stage) for stage in one.stages] for key, one in stations.items()}
    assert kinds.pop("A") == [DiodeStage, LinearStage, CableStage]
    assert all(found == [DiodeStage, ConverterStage, CableStage] for found in kinds.values())
    loops = {key: one.stages[2].loop_ohm for key, one in stations.items()}
    assert loops == pytest.approx(
        {
            "A": copper_loop_ohm(28, 0.5),
            "A-buck": copper_loop_ohm(28, 0.5),
            "B": copper_loop_ohm(24, 1.0),
            "C-5V": copper_loop_ohm(20, 1.0),
            "C-12V": 0.06,
        },
        rel=1e-12,
    )
    assert loops["C-5V"] == pytest.approx(0.18662, abs=5e-6)
    outputs = {key: (one.stages[1].output_v, one.stages[1].headroom_v, one.stages[1].lockout_v)
               for key, one in stations.items() if key != "A"}  # fmt: skip
    assert outputs == {
        "A-buck": (5.10, 0.5, 6.0),
        "B": (5.10, 0.5, 6.0),
        "C-5V": (5.15, 0.5, 7.0),
        "C-12V": (13.8, 1.0, 10.0),
    }
    loads = {key: (one.test_load.charger_eta, one.test_load.cell_eta) for key, one in stations.items()}
    assert loads["A"] == (0.88, 0.97)
    assert loads["C-12V"] == (1.0, 0.80)
