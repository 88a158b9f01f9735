"""Answers made by hand, so painted parts are tested without the planners; figures follow the demo camps."""

from __future__ import annotations

import functools

import numpy as np

from kitplanner.plan.files import read_plan
from kitplanner.plan.shipped import demo
from kitplanner.planners import pipeline
from kitplanner.planners.results import BenchPoint, BenchStage, EnergyFlow, FlowBand, FlowLoss


def band(key, label, code, wh, ids=()):
    return FlowBand(key=key, label=label, code=code, ids=ids, wh_per_day=wh)


def loss(label, level_from, level_to, wh):
    return FlowLoss(label=label, level_from=level_from, level_to=level_to, wh_per_day=wh)


def camp_flow() -> EnergyFlow:
    """A camp with two kinds of station and start charge."""
    return EnergyFlow(
        people_m=(band("pedal", "Pedal stand", "PE", 152.7), band("crank", "Hand crank", "CR", 4.0)),
        stations_s=(
            band("pedal", "Pedal stand", "PE", 91.6, ("B-S1",)),
            band("crank", "Hand crank", "CR", 2.0, ("B-S2",)),
        ),
        sources_s=(),
        b_wh=84.2,
        o_wh=71.6,
        start_o_wh=31.9,
        devices_d=(
            band("radio", "Two-way radios", "RA", 26.0),
            band("light", "Lights", "LI", 27.0),
            band("phone", "Phones", "PH", 26.8),
            band("torch", "Head torches", "TO", 6.0),
            band("other", "Other", "OT", 3.5),
        ),
        losses=(
            loss("Pedal stand and crank", "M", "S", 63.1),
            loss("into stores", "S", "B", 9.4),
            loss("out of stores", "B", "O", 12.6),
            loss("charging", "O", "D", 11.2),
        ),
        missing_o_wh=0.0,
        margin_o_wh=2.0,
        spare_o_wh=1.0,
    )


def short_flow() -> EnergyFlow:
    """A shelter with a large gap and another source."""
    return EnergyFlow(
        people_m=(band("pedal", "Pedal stand", "PE", 1200.0), band("crank", "Hand crank", "CR", 90.0)),
        stations_s=(
            band("pedal", "Pedal stand", "PE", 720.0, ("C-S1",)),
            band("crank", "Hand crank", "CR", 45.0, ("C-S2",)),
        ),
        sources_s=(band("sun", "Panel", "PN", 120.0),),
        b_wh=796.0,
        o_wh=677.0,
        start_o_wh=90.0,
        devices_d=tuple(
            band(f"d{n}", name, code, wh)
            for n, (name, code, wh) in enumerate(
                (
                    ("Phones", "PH", 520.0),
                    ("Hall and corridor lights", "LI", 240.0),
                    ("Radios", "RA", 120.0),
                    ("Head torches", "TO", 80.0),
                    ("Laptop", "LA", 60.0),
                    ("Hearing-aid cases", "HE", 40.0),
                    ("Weather radio", "WE", 9.0),
                )
            )
        ),
        losses=(
            loss("Pedal stand and crank", "M", "S", 525.0),
            loss("into stores", "S", "B", 89.0),
            loss("out of stores", "B", "O", 119.0),
            loss("charging", "O", "D", 123.0),
        ),
        missing_o_wh=525.0,
        margin_o_wh=100.0,
    )


def chain_point() -> BenchPoint:
    """Set A at 0.3 A, near the comfortable cadence; losses and stored watts sum to the human watts."""
    watts = [4.20, 3.57, 3.40, 3.05, 2.70, 1.545, 1.50, 1.35, 1.31]
    names = ["Gear", "Friction", "Copper", "Bridge", "Regulator", "Cable", "Charger", "Cell"]
    stages = tuple(
        BenchStage(
            name=name,
            in_w=before,
            out_w=after,
            in_v=8.0 if n > 2 else None,
            in_a=0.31 if n > 2 else None,
            out_v=5.0 if n > 2 else None,
            out_a=0.3 if n > 2 else None,
            loss_w=before - after,
        )
        for n, (name, before, after) in enumerate(zip(names, watts, watts[1:], strict=False))
    )
    return BenchPoint(
        station="A",
        rpm=62.0,
        human_w=watts[0],
        torque_nm=0.647,
        stages=stages,
        stored_w=watts[-1],
        crank_to_usb_fraction=watts[6] / watts[0],
        crank_to_battery_fraction=watts[-1] / watts[0],
        regulator_degc=78.0,
        meter_low_v=6.73,
        meter_high_v=8.16,
        plug_v=5.0,
        plug_a=0.3,
        states=(),
    )


def ramp(n: int = 50) -> np.ndarray:
    """A rising line from 0 to 1."""
    return np.linspace(0.0, 1.0, n)


@functools.cache
def demo_answers(name: str):
    """A demo plan with all its answers, computed once for all tests."""
    plan = read_plan(demo(name))
    return plan, pipeline.run_slow(plan, None)


def show_page(qtbot, page, size=(900, 1000)):
    """Show a page until its charts are built."""
    qtbot.addWidget(page)
    page.resize(*size)
    page.show()
    page.grab()
    qtbot.waitUntil(lambda: page.is_loaded, timeout=10_000)
    return page
