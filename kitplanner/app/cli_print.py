"""Command `print`: a paper of a plan as PDF, drawn without a window."""

from __future__ import annotations

import argparse
import os
from collections.abc import Callable, Mapping
from pathlib import Path
from types import MappingProxyType

from kitplanner import __version__
from kitplanner.app.cli_output import EXIT_ANSWERED, CommandError, read_sound_plan, show
from kitplanner.app.qt_check import before_qt, missing_library
from kitplanner.plan.records import Plan
from kitplanner.planners.effort import effort
from kitplanner.planners.rota.answer import rota_answer, rota_bouts
from kitplanner.report.content import Paper
from kitplanner.report.papers.effort import effort_paper
from kitplanner.report.papers.rota import WallRota, printed_now, rota_paper
from kitplanner.report.wording import plain

SIZES = ("A4", "A3", "Letter")
PLAN_SUFFIX = ".kitplan"


def _effort(plan: Plan) -> Paper:
    return effort_paper(plan, effort(plan), printed_now(__version__))


def _rota(plan: Plan) -> Paper:
    """Return the adopted rota; without one a proposal found now, and the paper says that it is one."""
    rota = plan.rota
    if rota is None:
        wall = WallRota(bouts=rota_answer(plan).solution.bouts)
    else:
        wall = WallRota(
            bouts=rota_bouts(plan, rota),
            edition=rota.edition,
            posted=rota.state == "posted",
            valid_until_day=rota.valid_until_day,
        )
    return rota_paper(plan, wall, printed_now(__version__))


PAPERS: Mapping[str, Callable[[Plan], Paper]] = MappingProxyType({"effort": _effort, "rota": _rota})


def run_print(arguments: argparse.Namespace) -> int:
    """Write one paper."""
    plan = read_sound_plan(arguments.plan)
    path: Path = arguments.output
    if path.suffix.casefold() == PLAN_SUFFIX:
        raise CommandError(f"{plain(path.name)} is the name of a plan file; choose another name for the PDF.")
    paper = PAPERS[arguments.paper](plan)
    # No window is wanted, so no screen is needed and none is asked for.
    os.environ["QT_QPA_PLATFORM"] = "offscreen"
    refusal = before_qt()
    if refusal is not None:
        raise CommandError(refusal)
    try:
        from kitplanner.app.paper_file import write_paper  # Qt's libraries load here, after the checks
    except ImportError as error:
        if "cannot open shared object" not in str(error):
            raise
        raise CommandError(missing_library(error)) from error
    try:
        write_paper(paper, path, arguments.size)
    except (OSError, ValueError) as error:
        cause = getattr(error, "strerror", None) or "no file name"
        raise CommandError(f"{plain(str(path))} cannot be written ({cause}); choose another place.") from error
    show(f"Wrote {plain(str(path))}.")
    return EXIT_ANSWERED
