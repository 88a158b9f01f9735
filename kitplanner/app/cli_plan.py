"""Commands `new` and `check`: write a first plan, name every problem of one."""

from __future__ import annotations

import argparse
import os
from pathlib import Path

from kitplanner.app.cli_output import (
    EXIT_ANSWERED,
    EXIT_PROBLEMS,
    CommandError,
    problem_line,
    read_any_plan,
    show,
    show_json,
)
from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.checks import check, has_errors
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import write_plan
from kitplanner.plan.shipped import MissingFileError
from kitplanner.report.wording import counted, plain


def run_new(arguments: argparse.Namespace) -> int:
    """Write a first plan of one kind to a file that does not exist yet."""
    path = Path(arguments.file)
    try:
        exists = os.path.lexists(path)
    except ValueError as error:
        raise CommandError(f"{path.name!a}: this is not a file name; choose another.") from error
    if exists:
        raise CommandError(f"{plain(str(path))} exists already and is left as it is; choose another name.")
    try:
        write_plan(path, new_plan(arguments.kind))
    except (PlanFileError, MissingFileError) as error:
        raise CommandError(str(error)) from error
    show(f"Wrote {plain(str(path))}.")
    return EXIT_ANSWERED


def run_check(arguments: argparse.Namespace) -> int:
    """List every problem of a plan with its place."""
    problems = check(read_any_plan(arguments.plan))
    if arguments.json:
        show_json({"problems": problems})
    elif problems:
        show("\n".join(f"{problem.severity}: {problem_line(problem)}" for problem in problems))
    errors = sum(problem.severity == "error" for problem in problems)
    if not arguments.json:
        show(
            f"{counted(errors, 'problem stops', 'problems stop')} the calculation, {len(problems) - errors} to look at."
        )
    return EXIT_PROBLEMS if has_errors(problems) else EXIT_ANSWERED
