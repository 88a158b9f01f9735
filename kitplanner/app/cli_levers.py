"""Command `levers`: what would make the plan fit, every lever alone and the mildest combinations."""

from __future__ import annotations

import argparse

from kitplanner.app.cli_output import EXIT_ANSWERED, read_sound_plan, show, show_json
from kitplanner.plan.cautions import CAUTIONS
from kitplanner.plan.records import Plan
from kitplanner.planners.levers import levers
from kitplanner.planners.levers_records import LeverRow, LeversResult
from kitplanner.planners.levers_rota import rota_unmet_wh
from kitplanner.report.tables import aligned
from kitplanner.report.wording import percent
from kitplanner.report.wording_levers import (
    ask_first_sentence,
    combination_sentence,
    lever_name,
    short_number,
    value_words,
    verdict_sentence,
)


def run_levers(arguments: argparse.Namespace) -> int:
    """Answer with text or JSON."""
    plan = read_sound_plan(arguments.plan)
    result = levers(plan, rota_unmet_wh)
    if arguments.json:
        show_json(result)
    else:
        show("\n\n".join(block for block in _blocks(plan, result) if block))
    return EXIT_ANSWERED


def _blocks(plan: Plan, result: LeversResult) -> list[str]:
    head = verdict_sentence(result)
    if result.fits:
        return [head]
    combined = "\n".join(
        f"{number}. {combination_sentence(plan, row)}" for number, row in enumerate(result.combinations, start=1)
    )
    last = "\n".join(line for line in (ask_first_sentence(result), _lamps_caution(plan, result)) if line)
    return [head, _singles(plan, result), combined, _cuts(result), last]


def _lamps_caution(plan: Plan, result: LeversResult) -> str:
    """Return the caution that belongs beside cut light; empty where no lever touches a lamp."""
    lamps = {device.id for device in plan.devices if device.kind == "light"}
    touched = {row.lever.partition(":")[2] for row in result.singles}
    return CAUTIONS["C10"].text if lamps & touched else ""


def _singles(plan: Plan, result: LeversResult) -> str:
    rows = [(_what(plan, row), *_span(row), percent(row.coverage_fraction), _enough(row)) for row in result.singles]
    header = ("lever alone", "from", "to", "covered", "enough alone")
    return aligned(header, rows, ["left", "right", "left", "right", "left"]) if rows else ""


def _what(plan: Plan, row: LeverRow) -> str:
    kind, _, target = row.lever.partition(":")
    more = " and stations" if kind.endswith("+units") else ""
    return f"{target} {lever_name(plan, row.lever)}{more}".strip()


def _span(row: LeverRow) -> tuple[str, str]:
    before = percent(row.from_value) if row.unit.startswith("of its") else short_number(row.from_value)
    return before, value_words(row.to, row.unit)


def _enough(row: LeverRow) -> str:
    return "yes" if row.enough else "no"


def _cuts(result: LeversResult) -> str:
    rows = [
        (str(strict.priority), percent(strict.covered_fraction), percent(shared.covered_fraction))
        for strict, shared in zip(result.cuts.strict, result.cuts.shared, strict=True)
    ]
    return aligned(("priority", "strict cut", "shared cut"), rows, ["right", "right", "right"]) if rows else ""
