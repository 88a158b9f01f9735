"""Command `balance`: verdict in words, days, devices, stores, stations and cuts."""

from __future__ import annotations

import argparse
from collections.abc import Sequence

from kitplanner.app.cli_output import EXIT_ANSWERED, read_sound_plan, show, show_json
from kitplanner.plan.records import Plan
from kitplanner.planners.balance import balance
from kitplanner.planners.results import BalanceResult
from kitplanner.report.tables import Side, aligned, pairs
from kitplanner.report.wording import energy, minutes, number, percent
from kitplanner.report.wording_balance import cuts_sentence, effort_of_day_sentence, verdict_lines


def run_balance(arguments: argparse.Namespace) -> int:
    """Answer with text or JSON."""
    plan = read_sound_plan(arguments.plan)
    result = balance(plan)
    if arguments.json:
        show_json(result)
    else:
        show("\n\n".join(_blocks(plan, result)))
    return EXIT_ANSWERED


def _blocks(plan: Plan, result: BalanceResult) -> list[str]:
    blocks = ["\n".join(verdict_lines(plan, result)), _sums(plan, result)]
    blocks += [block for block in (_days(result), _devices(plan, result), _stations(plan, result)) if block]
    blocks += [_cuts(result), "\n".join((cuts_sentence(result), effort_of_day_sentence(result)))]
    return [block for block in blocks if block]


def _sums(plan: Plan, result: BalanceResult) -> str:
    stored = sum(row.usable_wh for row in result.stores)
    return pairs(
        (
            ("coverage, margin included", percent(result.coverage_fraction)),
            (f"needed in {plan.days} d, margin {percent(plan.margin_fraction)}", energy(result.need_wh, "O")),
            (f"to be had in {plan.days} d", energy(result.have_wh, "O")),
            ("  of it in stores at the start", energy(stored, "O")),
            ("short a day", energy(result.short_wh_per_day, "O")),
        )
    )


def _table(header: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    sides: list[Side] = ["left" if name in ("name", "station") else "right" for name in header]
    return aligned(header, rows, sides) if rows else ""


def _days(result: BalanceResult) -> str:
    rows = [(str(day.day), number(day.use_wh), number(day.made_wh), number(day.end_wh)) for day in result.days]
    return _table(("day", "use Wh at O", "made Wh at O", "left Wh at O"), rows)


def _devices(plan: Plan, result: BalanceResult) -> str:
    rows = [
        (
            f"{device.id} {device.name}",
            str(device.count),
            str(device.priority),
            number(row.use_wh),
            number(row.credit_wh),
            percent(row.covered_fraction),
        )
        for device, row in zip(plan.devices, result.devices, strict=True)
    ]
    return _table(("name", "count", "priority", "use Wh at O", "start charge Wh at O", "if shared"), rows)


def _stations(plan: Plan, result: BalanceResult) -> str:
    rows = [
        (
            f"{station.id} {station.name}",
            minutes(row.available_min),
            minutes(row.offered_min),
            minutes(row.used_min),
            number(row.made_wh_per_day),
        )
        for station, row in zip(plan.stations, result.stations, strict=True)
    ]
    return _table(("station", "time a day", "offered", "turned", "made Wh a day at S"), rows)


def _cuts(result: BalanceResult) -> str:
    rows = [
        (
            str(strict.priority),
            number(strict.need_wh),
            percent(strict.covered_fraction),
            percent(shared.covered_fraction),
        )
        for strict, shared in zip(result.cuts.strict, result.cuts.shared, strict=True)
    ]
    return _table(("priority", "need Wh at O", "strict cut", "shared cut"), rows)
