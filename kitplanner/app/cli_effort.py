"""Command `effort`: minutes of turning for each charge, with a plan or for one charge without."""

from __future__ import annotations

import argparse

from kitplanner.app.cli_output import EXIT_ANSWERED, CommandError, read_sound_plan, record_with_id, show, show_json
from kitplanner.plan.records import Plan
from kitplanner.planners.effort import effort, one_charge
from kitplanner.planners.results import EffortRow
from kitplanner.report.tables import Side, aligned
from kitplanner.report.wording import minutes, number
from kitplanner.report.wording_effort import effort_limit_words, effort_sentence, matrix_sentence, one_charge_sentence

HEADER = ("device", "station", "person", "way", "charge", "minutes", "quick", "slow", "W at S", "W at M", "why")
SIDES: tuple[Side, ...] = ("left", "left", "left", "left", "left", "right", "right", "right", "right", "right", "left")


def run_effort(arguments: argparse.Namespace) -> int:
    """Answer with a table or JSON; two ways to call, never mixed."""
    alone = arguments.wh is not None or arguments.station_w is not None
    chosen = (arguments.station, arguments.device, arguments.person)
    if alone and (arguments.plan is not None or any(key is not None for key in chosen)):
        raise CommandError("Give either PLAN or --wh with --station-w, not both.")
    if alone:
        return _run_one_charge(arguments)
    if arguments.plan is None:
        raise CommandError("Give a PLAN, or --wh and --station-w for one charge without a plan.")
    return _run_plan(arguments)


def _run_one_charge(arguments: argparse.Namespace) -> int:
    if arguments.wh is None or arguments.station_w is None:
        raise CommandError("One charge without a plan needs both --wh and --station-w.")
    result = one_charge(arguments.wh, arguments.station_w)
    if arguments.json:
        show_json(result)
    else:
        show("\n".join(one_charge_sentence(row, arguments.wh, arguments.station_w) for row in result.rows))
    return EXIT_ANSWERED


def _run_plan(arguments: argparse.Namespace) -> int:
    plan = read_sound_plan(arguments.plan)
    for key, records, what in (
        (arguments.station, plan.stations, "station"),
        (arguments.device, plan.devices, "device"),
        (arguments.person, plan.people, "person"),
    ):
        if key is not None:
            record_with_id(records, key, what)
    result = effort(plan, station=arguments.station, device=arguments.device, person=arguments.person)
    if arguments.json:
        show_json(result)
    elif not result.rows:
        show("No charge to show: no device with its own battery, no station, or nobody with minutes to give.")
    else:
        show(_table(plan, result.rows))
    return EXIT_ANSWERED


def _table(plan: Plan, rows: tuple[EffortRow, ...]) -> str:
    lines = [
        (
            row.device,
            row.station,
            row.person,
            row.route,
            row.charge,
            minutes(row.minutes_p50),
            minutes(row.minutes_p10),
            minutes(row.minutes_p90),
            number(row.station_output_w),
            number(row.person_power_w),
            effort_limit_words(row.limit),
        )
        for row in rows
    ]
    words = effort_sentence(plan, rows[0]) if len(rows) == 1 else matrix_sentence(plan, rows)
    note = "Turning time without rests; quick and slow are the ends of the 10-90 % range."
    return "\n".join((aligned(HEADER, lines, SIDES), "", words, note))
