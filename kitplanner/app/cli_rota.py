"""Command `rota`: who turns which station when, what is on charge when, what cannot be met, and how good that is."""

from __future__ import annotations

import argparse
import datetime as dt
import math
import sys
import time
from collections.abc import Callable
from pathlib import Path

from kitplanner.app.cli_output import (
    EXIT_ANSWERED,
    EXIT_PROBLEMS,
    CommandError,
    read_sound_plan,
    show,
    show_json,
)
from kitplanner.domain.units import clock
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import write_bytes, write_plan
from kitplanner.plan.records import Plan
from kitplanner.planners.rota.answer import adopt, edition_of, locked_violations, rota_answer, saved_rota
from kitplanner.planners.rota.remarks import remarks
from kitplanner.planners.rota.result import (
    RotaAnswer,
    RotaBout,
    RotaCharge,
    RotaObjective,
    RotaProgress,
    UnmetUse,
    Violation,
)
from kitplanner.planners.rota.solver import DEFAULT_WORK, Effort
from kitplanner.report.calendar import CalendarOf, calendar_files
from kitplanner.report.tables import aligned, pairs
from kitplanner.report.tables_rota import Rows, aim_table, bout_table, bouts_csv, charging_csv, charging_rows
from kitplanner.report.wording import counted, energy, number, percent, plain
from kitplanner.report.wording_rota import (
    day_date,
    day_words,
    gap_fraction,
    is_proved,
    remark_sentence,
    unmet_sentences,
    verdict_lines,
    violation_sentence,
)

PLAN_SUFFIX = ".kitplan"
_PROGRESS_EVERY_S = 0.2


def run_rota(arguments: argparse.Namespace) -> int:
    """Find a rota; answer with text, JSON, CSV or calendars, and adopt it where asked."""
    plan = read_sound_plan(arguments.plan)
    _refuse_locks(plan)
    _refuse_targets(arguments)
    work = DEFAULT_WORK if arguments.work is None else arguments.work
    seconds = math.inf if arguments.seconds is None else arguments.seconds
    with_progress = _Progress()
    answer = rota_answer(plan, Effort(work=work, seconds=seconds, progress=with_progress.listener()))
    with_progress.clear()
    if arguments.json:
        show_json(rota_json(plan, answer))
    elif arguments.csv is not None:
        _write_csv(plan, answer, arguments.csv, names=arguments.names)
    elif arguments.ics is not None:
        _write_calendars(plan, answer, arguments.ics, names=arguments.names)
    else:
        show("\n\n".join(_blocks(plan, answer)))
    if arguments.adopt:
        _adopt(plan, answer, arguments.plan, work, quiet=arguments.json)
    return EXIT_ANSWERED


def _refuse_locks(plan: Plan) -> None:
    """Stop where locked bouts break rules among themselves: no rota can keep them."""
    broken = locked_violations(plan)
    if broken:
        head = f"The locked bouts break {counted(len(broken), 'rule', 'rules')}; unlock or change them:"
        lines = [f"  {violation_sentence(found)}" for found in broken]
        raise CommandError("\n".join([head, *lines]), EXIT_PROBLEMS)


def _refuse_targets(arguments: argparse.Namespace) -> None:
    """Refuse a file or folder that cannot be meant, before any time is spent."""
    if arguments.names and arguments.csv is None and arguments.ics is None:
        raise CommandError("--names belongs to --csv or --ics; the other answers show names as they are.")
    if arguments.csv is not None and arguments.csv.suffix.casefold() == PLAN_SUFFIX:
        raise CommandError(f"{plain(arguments.csv.name)} is the name of a plan file; choose another name for the CSV.")
    try:
        is_file = arguments.ics is not None and arguments.ics.exists() and not arguments.ics.is_dir()
    except (OSError, ValueError) as error:
        raise CommandError(f"{arguments.ics.name!a}: this is no folder name; choose another.") from error
    if is_file:
        raise CommandError(f"{plain(str(arguments.ics))} is a file; --ics needs a folder for one calendar each.")


class _Progress:
    """One line on a terminal that tells how far the search is; nothing where nobody watches."""

    def __init__(self) -> None:
        self._last = -math.inf
        self._width = 0

    def listener(self) -> Callable[[RotaProgress], None]:
        """Return what the solver may call."""
        return self._told if _is_terminal() else _ignore

    def _told(self, moment: RotaProgress) -> None:
        now = time.monotonic()
        if now - self._last < _PROGRESS_EVERY_S:
            return
        self._last = now
        text = f"{number(moment.seconds, 1)} s, step {moment.steps}, {plain(moment.stage).replace('_', ' ')}"
        if moment.value or moment.bound:
            text += f": {number(moment.value, 3)}, at best {number(moment.bound, 3)}"
        self._write(text)

    def clear(self) -> None:
        """Take the line away again."""
        if self._width:
            self._write("")
            sys.stderr.write("\r")
            sys.stderr.flush()

    def _write(self, text: str) -> None:
        sys.stderr.write(f"\r{text.ljust(self._width)}")
        sys.stderr.flush()
        self._width = max(self._width, len(text))


def _is_terminal() -> bool:
    return sys.stderr is not None and sys.stderr.isatty()


def _ignore(_moment: RotaProgress) -> None:
    return None


def rota_json(plan: Plan, answer: RotaAnswer) -> dict[str, object]:
    """Return the answer as plain data: ids, clock times, units in the keys."""
    solution = answer.solution
    return {
        "slot_min": solution.slot_min,
        "edition": edition_of(plan, answer),
        "days": [
            {
                "day": day,
                "date": day_date(plan, day).isoformat(),
                "bouts": [_bout_json(bout) for bout in solution.bouts if bout.day == day],
                "charging": [_charge_json(row) for row in answer.charging if row.day == day],
            }
            for day in range(1, plan.days + 1)
        ],
        "unmet_wh": answer.unmet_wh,
        "unmet_margin_wh": answer.unmet_margin_wh,
        "wasted_wh": answer.wasted_wh,
        "evening": [_finding_json(found) for found in answer.evening],
        "unmet": [_unmet_json(row) for row in answer.unmet],
        "objective": [_aim_json(row) for row in solution.objectives],
        "made_wh": solution.made_wh,
        "bound": solution.made_bound_wh,
        "gap_fraction": gap_fraction(solution),
        "proved": is_proved(solution),
        "seconds": solution.seconds,
        "steps": solution.steps,
        "cut_off": solution.cut_off,
        "violations": [_finding_json(found) for found in answer.violations],
        "remarks": [remark.kind for remark in remarks(plan)],
    }


def _unmet_json(row: UnmetUse) -> dict[str, object]:
    return {
        "device": row.device,
        "priority": row.priority,
        "day": row.day,
        "start": clock(row.start_min),
        "unmet_wh": row.wh,
        "why": row.why,
    }


def _aim_json(row: RotaObjective) -> dict[str, object]:
    return {
        "name": row.name,
        "value": row.value,
        "unit": row.unit,
        "bound": row.bound,
        "gap": row.gap,
        "proved": row.proved,
        "relaxed": row.relaxed,
    }


def _finding_json(found: Violation) -> dict[str, object]:
    return {
        "rule": found.rule,
        "text": found.text,
        "day": found.day,
        "start": None if found.start_min is None else clock(found.start_min),
        "person": found.person,
        "station": found.station,
    }


def _bout_json(bout: RotaBout) -> dict[str, object]:
    return {
        "person": bout.person,
        "watcher": bout.watcher,
        "station": bout.station,
        "unit": bout.unit,
        "start": clock(bout.start_min),
        "end": clock(bout.end_min),
        "output_wh": bout.output_wh,
        "locked": bout.locked,
    }


def _charge_json(row: RotaCharge) -> dict[str, object]:
    return {
        "device": row.device,
        "count": row.count,
        "from": row.first_ticket,
        "start": clock(row.start_min),
        "end": clock(row.end_min),
        "energy_wh": row.energy_wh,
        "at_station": row.at_station,
    }


def _blocks(plan: Plan, answer: RotaAnswer) -> list[str]:
    notes = [remark_sentence(plan, remark) for remark in remarks(plan)]
    blocks = ["\n".join((*verdict_lines(plan, answer), *notes))]
    blocks += ["\n".join(violation_sentence(found) for found in answer.violations)]
    for day in range(1, plan.days + 1):
        bouts = [bout for bout in answer.solution.bouts if bout.day == day]
        rows = [row for row in answer.charging if row.day == day]
        heading = day_words(plan, day)
        blocks.append(f"{heading}\n{'=' * len(heading)}")
        blocks.append(_table(bout_table(plan, bouts)) or "Nobody turns.")
        blocks.append(_table(charging_rows(plan, rows)) or "Nothing is on charge.")
    blocks += ["\n".join(unmet_sentences(plan, answer)), _sums(answer), _table(aim_table(answer))]
    return [block for block in blocks if block]


def _sums(answer: RotaAnswer) -> str:
    solution = answer.solution
    gap = gap_fraction(solution)
    bound = energy(solution.made_bound_wh, "S")
    proven = "proven" if is_proved(solution) else f"proven value {bound}, {percent(gap, 1)} away"
    return pairs(
        (
            ("made", f"{energy(solution.made_wh, 'S')}: {proven}"),
            ("use that cannot be met", energy(answer.unmet_wh, "O")),
            ("margin that is missing", energy(answer.unmet_margin_wh, "O")),
            ("made while every store was full", energy(answer.wasted_wh, "S")),
            ("searched", f"{counted(solution.steps, 'step', 'steps')}, {number(solution.seconds, 1)} s"),
        )
    )


def _table(table: Rows) -> str:
    return aligned(table.header, table.rows, table.sides) if table.rows else ""


def charging_path(path: Path) -> Path:
    """Return where the charging table goes beside the bouts.

    Examples
    --------
    >>> charging_path(Path("week.csv")).name
    'week-charging.csv'
    """
    return path.with_name(f"{path.stem}-charging{path.suffix}")


def _write_csv(plan: Plan, answer: RotaAnswer, path: Path, *, names: bool) -> None:
    try:
        second = charging_path(path)
    except ValueError as error:
        raise CommandError(f"{str(path)!a} is no file name; choose another.") from error
    _write(path, bouts_csv(plan, answer.solution.bouts, names=names).encode())
    _write(second, charging_csv(plan, answer.charging).encode())
    show(f"Wrote {plain(str(path))} and {plain(str(second))}.")


def _write_calendars(plan: Plan, answer: RotaAnswer, folder: Path, *, names: bool) -> None:
    rota = saved_rota(plan, answer.solution, answer.charging, edition=edition_of(plan, answer))
    stamp = dt.datetime.now(dt.UTC).replace(microsecond=0)
    files = calendar_files(plan, CalendarOf(rota=rota, before=plan.rota, stamp=stamp, names=names))
    try:
        folder.mkdir(exist_ok=True)
    except (OSError, ValueError) as error:
        cause = getattr(error, "strerror", None) or "no folder name"
        raise CommandError(f"{plain(str(folder))}: the folder cannot be made ({cause}); choose another.") from error
    for name, data in files.items():
        _write(folder / name, data)
    show(f"Wrote {counted(len(files), 'calendar', 'calendars')} to {plain(str(folder))}.")


def _write(path: Path, data: bytes) -> None:
    try:
        write_bytes(path, data)
    except PlanFileError as error:
        raise CommandError(str(error)) from error


def _adopt(plan: Plan, answer: RotaAnswer, path: Path, work: int, *, quiet: bool) -> None:
    adopted = adopt(answer, plan, work=work)(plan)
    if adopted is not plan:
        try:
            write_plan(path, adopted)
        except PlanFileError as error:
            raise CommandError(str(error)) from error
    edition = adopted.rota.edition if adopted.rota is not None else 0
    if not quiet:
        done = "Adopted as" if adopted is not plan else "Adopted already:"
        show(f"{done} version {edition} in {plain(str(path))}.")
