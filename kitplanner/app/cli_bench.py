"""Command `bench`: a station from its parts at one operating point."""

from __future__ import annotations

import argparse

from kitplanner.app.cli_output import (
    EXIT_ANSWERED,
    CommandError,
    read_sound_plan,
    record_with_id,
    show,
    show_json,
)
from kitplanner.planners.bench import bench_point
from kitplanner.planners.results import BenchPoint
from kitplanner.report.tables import Side, aligned, pairs
from kitplanner.report.wording import number, percent, plain, power
from kitplanner.report.wording_bench import meter_sentence, point_sentence

HEADER = ("step", "W in", "W out", "V in", "A in", "V out", "A out", "W lost")
SIDES: tuple[Side, ...] = ("left", *("right",) * 7)


def run_bench(arguments: argparse.Namespace) -> int:
    """Answer with text or JSON."""
    plan = read_sound_plan(arguments.plan)
    station = record_with_id(plan.stations, arguments.station, "station")
    if station.described_by != "parts":
        raise CommandError(
            f"Station {plain(station.id)} is described by {station.described_by}, not by its parts; "
            "describe machine, gear and stages to bench it."
        )
    point = bench_point(plan, station.id, rpm=arguments.rpm, amps=arguments.amps)
    if arguments.json:
        show_json(point)
    else:
        show("\n\n".join(_blocks(point, station.name)))
    return EXIT_ANSWERED


def _blocks(point: BenchPoint, name: str) -> list[str]:
    steps = [
        (
            stage.name,
            number(stage.in_w, 3),
            number(stage.out_w, 3),
            number(stage.in_v, 3),
            number(stage.in_a, 3),
            number(stage.out_v, 3),
            number(stage.out_a, 3),
            number(stage.loss_w, 3),
        )
        for stage in point.stages
    ]
    sums = pairs(
        (
            ("cadence", f"{number(point.rpm, 1)} turns a minute"),
            ("at the crank", f"{power(point.human_w, 'M')}, {number(point.torque_nm, 3)} Nm"),
            ("at the device's plug", f"{number(point.plug_v, 3)} V, {number(point.plug_a, 3)} A"),
            ("into the battery", power(point.stored_w)),
            ("crank to plug", percent(point.crank_to_usb_fraction, 1)),
            ("crank to battery", percent(point.crank_to_battery_fraction, 1)),
            ("regulator junction", f"{number(point.regulator_degc, 0)} °C"),
            ("states", ", ".join(point.states) or "none"),
        )
    )
    table = aligned(HEADER, steps, SIDES) if steps else ""
    return [block for block in (point_sentence(point, name), sums, table, meter_sentence(point)) if block]
