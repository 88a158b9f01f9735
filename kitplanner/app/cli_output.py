"""What the commands share: reading a plan, finding records, writing answers to stdout."""

from __future__ import annotations

import json
import os
import sys
from collections.abc import Sequence
from contextlib import suppress
from pathlib import Path
from typing import Protocol, TypeVar

import msgspec
import numpy as np

from kitplanner.plan.checks import Problem, check, has_errors
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Plan
from kitplanner.report.wording import counted, plain

EXIT_ANSWERED = 0
EXIT_PROBLEMS = 1
EXIT_WRONG_CALL = 2
_MOST_IDS_NAMED = 20


class HasId(Protocol):
    """Any record of a plan's sections."""

    @property
    def id(self) -> str:
        """The record's id."""
        ...


RecordT = TypeVar("RecordT", bound=HasId)


class CommandError(Exception):
    """A call that cannot be answered: one sentence for stderr and the exit code."""

    def __init__(self, text: str, exit_code: int = EXIT_WRONG_CALL) -> None:
        super().__init__(text)
        self.exit_code = exit_code


def read_any_plan(path: Path) -> Plan:
    """Return the plan in a file, with errors in it or not."""
    try:
        return read_plan(path)
    except PlanFileError as error:
        raise CommandError(str(error)) from error


def read_sound_plan(path: Path) -> Plan:
    """Return a plan that can be calculated; else stop with every error and its place."""
    plan = read_any_plan(path)
    problems = check(plan)
    if has_errors(problems):
        errors = [problem for problem in problems if problem.severity == "error"]
        found = counted(len(errors), "problem that stops", "problems that stop")
        head = f"{plain(path.name)} has {found} the calculation:"
        raise CommandError("\n".join([head, *(f"  {problem_line(error)}" for error in errors)]), EXIT_PROBLEMS)
    return plan


def problem_line(problem: Problem) -> str:
    """Return one problem with its place, reason and remedy on one line."""
    return plain(problem.sentence)


def record_with_id(records: Sequence[RecordT], key: str, what: str) -> RecordT:
    """Return the record with an id; else say which ids there are."""
    for record in records:
        if record.id == key:
            return record
    known = [plain(record.id) for record in records]
    if not known:
        raise CommandError(f'There is no {what} "{plain(key)}": the plan has none.')
    more = len(known) - _MOST_IDS_NAMED
    names = ", ".join(known[:_MOST_IDS_NAMED]) + (f" and {more} more" if more > 0 else "")
    raise CommandError(f'There is no {what} "{plain(key)}" in the plan; it has {names}.')


def show(text: str) -> None:
    """Write an answer to stdout, all of it or say why not."""
    try:
        if sys.stdout is None:
            raise CommandError("The answer cannot be written: the standard output is closed.")
        sys.stdout.write(text + "\n")
        sys.stdout.flush()
    except BrokenPipeError:
        # Whoever reads the answer has seen enough, as with `| head`.
        _drop_output()
    except (OSError, ValueError) as error:
        _drop_output()
        cause = getattr(error, "strerror", None) or str(error)
        raise CommandError(f"The answer cannot be written ({cause}).") from error


def _drop_output() -> None:
    """Send what is still buffered nowhere, so that the interpreter's last flush cannot fail."""
    with suppress(OSError, ValueError):
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, sys.stdout.fileno())
        os.close(nowhere)


def show_json(answer: msgspec.Struct | dict[str, object]) -> None:
    """Write an answer as one JSON object; what is not a number becomes null."""
    data = msgspec.json.decode(msgspec.json.encode(answer, enc_hook=_plain_value))
    # ASCII with escapes: valid whatever encoding the terminal or pipe has.
    show(json.dumps(data, indent=2, allow_nan=False))


def _plain_value(value: object) -> object:
    if isinstance(value, np.generic):
        return value.item()
    if isinstance(value, np.ndarray):
        return value.tolist()
    raise TypeError(f"no JSON for {type(value).__name__}")
