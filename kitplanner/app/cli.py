"""The command line: `kitplanner [PLAN]` opens the window, a command answers in the terminal.

Answers go to stdout, messages to stderr. Exit codes: 0 answered (also "does not fit"), 1 the plan has
problems that stop the calculation, 2 wrong call or unreadable file.
"""

from __future__ import annotations

import argparse
import math
import os
import sys
from collections.abc import Callable, Sequence
from contextlib import suppress
from pathlib import Path

from kitplanner import __version__
from kitplanner.app.cli_balance import run_balance
from kitplanner.app.cli_bench import run_bench
from kitplanner.app.cli_effort import run_effort
from kitplanner.app.cli_launcher import run_install_launcher
from kitplanner.app.cli_levers import run_levers
from kitplanner.app.cli_output import EXIT_ANSWERED, EXIT_PROBLEMS, EXIT_WRONG_CALL, CommandError
from kitplanner.app.cli_plan import run_check, run_new
from kitplanner.app.cli_print import PAPERS, SIZES, run_print
from kitplanner.app.cli_rota import run_rota
from kitplanner.app.main import open_window
from kitplanner.plan.catalogue import PLAN_KINDS
from kitplanner.planners.bench import BenchError
from kitplanner.planners.effort_rows import EffortError
from kitplanner.planners.station_error import StationError
from kitplanner.report.wording import plain

COMMANDS = ("new", "check", "effort", "balance", "rota", "levers", "bench", "print", "install-launcher")
EXIT_INTERRUPTED = 130
_LARGEST_NUMBER = 1e6
_LONGEST_COUNT = 9


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command line and return the exit code."""
    arguments = sys.argv[1:] if argv is None else list(argv)
    _keep_every_sign()
    try:
        return _run(arguments)
    except CommandError as error:
        _complain(str(error))
        return error.exit_code
    except StationError as error:
        _complain(plain(str(error)))
        return EXIT_PROBLEMS
    except (BenchError, EffortError) as error:
        _complain(plain(str(error)))
        return EXIT_WRONG_CALL
    except SystemExit as error:
        # How the parser ends after --help (0) or a wrong call (2).
        return error.code if isinstance(error.code, int) else EXIT_ANSWERED
    except KeyboardInterrupt:
        return EXIT_INTERRUPTED


def _run(arguments: list[str]) -> int:
    if not arguments or (arguments[0] not in COMMANDS and not arguments[0].startswith("-")):
        return _run_window(arguments)
    parsed = _parser().parse_args(arguments)
    if parsed.run is None:
        return _run_window([])
    command: Callable[[argparse.Namespace], int] = parsed.run
    return command(parsed)


def _run_window(arguments: list[str]) -> int:
    if not arguments:
        return open_window(None)
    name = arguments[0]
    if len(arguments) > 1:
        raise CommandError(f'"{plain(name)}" is no command; the window opens one PLAN. See `kitplanner --help`.')
    try:
        exists = os.path.lexists(name)
    except ValueError:
        exists = False
    if not exists:
        commands = ", ".join(COMMANDS)
        raise CommandError(f'"{plain(name)}" is neither a file nor a command; the commands are {commands}.')
    return open_window(Path(name))


def _keep_every_sign() -> None:
    """Let a terminal that cannot show a sign get a question mark instead of an error."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")


def _complain(text: str) -> None:
    if sys.stderr is not None:
        with suppress(OSError):
            sys.stderr.write(f"kitplanner: {text}\n")
            sys.stderr.flush()


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="kitplanner",
        usage="kitplanner [PLAN]\n       kitplanner COMMAND ...",
        description="Plan emergency kits run on human power. Without a command the window opens, on PLAN if given.",
        epilog="A planning aid: figures are estimates with the ranges shown. Example: kitplanner balance camp.kitplan",
    )
    parser.add_argument("--version", action="version", version=f"kitplanner {__version__}")
    parser.set_defaults(run=None)
    commands = parser.add_subparsers(metavar="COMMAND", title="commands")
    _add_plan_commands(commands)
    _add_effort(commands)
    _add_rota(commands)
    _add_bench(commands)
    _add_print(commands)
    _add_launcher(commands)
    return parser


Commands = argparse._SubParsersAction  # noqa: SLF001 - argparse has no public name for what add_subparsers returns


def _add(commands: Commands[argparse.ArgumentParser], name: str, about: str, example: str) -> argparse.ArgumentParser:
    return commands.add_parser(
        name,
        prog=f"kitplanner {name}",
        help=about,
        description=f"{about}.",
        epilog=f"Example: {example}",
        allow_abbrev=False,
    )


def _add_plan_commands(commands: Commands[argparse.ArgumentParser]) -> None:
    new = _add(commands, "new", "Write a first plan to a new file", "kitplanner new household home.kitplan")
    new.add_argument("kind", choices=PLAN_KINDS, help="which first plan")
    new.add_argument("file", metavar="FILE", help="file to write; an existing one is refused")
    new.set_defaults(run=run_new)
    check = _add(commands, "check", "List every problem of a plan with its place", "kitplanner check home.kitplan")
    balance = _add(
        commands, "balance", "Does it fit, by how much, and what limits", "kitplanner balance home.kitplan --json"
    )
    levers = _add(
        commands, "levers", "What would make it fit: each lever alone, then together", "kitplanner levers home.kitplan"
    )
    for parser, run in ((check, run_check), (balance, run_balance), (levers, run_levers)):
        _add_plan_argument(parser)
        _add_json(parser)
        parser.set_defaults(run=run)


def _add_effort(commands: Commands[argparse.ArgumentParser]) -> None:
    parser = _add(
        commands,
        "effort",
        "Minutes of turning for each charge",
        "kitplanner effort camp.kitplan --device B-D2, or without a plan: kitplanner effort --wh 15.4 --station-w 6",
    )
    parser.add_argument("plan", nargs="?", type=Path, metavar="PLAN", help="plan file (.kitplan)")
    for name in ("station", "device", "person"):
        parser.add_argument(f"--{name}", metavar="ID", help=f"only this {name}")
    parser.add_argument("--wh", type=_positive, metavar="WH", help="capacity of one phone's battery [Wh]")
    parser.add_argument("--station-w", type=_positive, metavar="W", help="watts at the station's output [W]")
    _add_json(parser)
    parser.set_defaults(run=run_effort)


def _add_rota(commands: Commands[argparse.ArgumentParser]) -> None:
    parser = _add(
        commands,
        "rota",
        "Who turns which station when, and what is on charge when",
        "kitplanner rota camp.kitplan --seconds 20 --adopt",
    )
    _add_plan_argument(parser)
    parser.add_argument("--work", type=_whole, metavar="N", help="steps of the search; 0 gives the first legal rota")
    parser.add_argument("--seconds", type=_positive, metavar="S", help="ceiling on time; a rota cut off by it says so")
    shape = parser.add_mutually_exclusive_group()
    _add_json(shape)
    shape.add_argument("--csv", type=Path, metavar="FILE", help="write bouts to FILE, charging beside it")
    shape.add_argument("--ics", type=Path, metavar="FOLDER", help="write a calendar for each person and station")
    parser.add_argument("--names", action="store_true", help="people's names in CSV and calendars, else ids or numbers")
    parser.add_argument("--adopt", action="store_true", help="write the rota into the plan file")
    parser.set_defaults(run=run_rota)


def _add_bench(commands: Commands[argparse.ArgumentParser]) -> None:
    parser = _add(
        commands,
        "bench",
        "A station from its parts at one cadence: volts, amps, losses, failure states",
        "kitplanner bench bench.kitplan A --amps 0.3",
    )
    _add_plan_argument(parser)
    parser.add_argument("station", metavar="STATION", help="id of a station described by its parts")
    parser.add_argument("--rpm", type=_positive, metavar="N", help="cadence; else the best one in the comfort band")
    parser.add_argument("--amps", type=_positive, metavar="X", help="current at the device's plug; else its own")
    _add_json(parser)
    parser.set_defaults(run=run_bench)


def _add_print(commands: Commands[argparse.ArgumentParser]) -> None:
    parser = _add(commands, "print", "A paper as PDF", "kitplanner print camp.kitplan rota -o rota.pdf --size Letter")
    _add_plan_argument(parser)
    parser.add_argument("paper", choices=tuple(PAPERS), metavar="PAPER", help=f"which paper: {', '.join(PAPERS)}")
    parser.add_argument("-o", "--output", type=Path, required=True, metavar="FILE", help="PDF to write")
    parser.add_argument("--size", choices=SIZES, default="A4", help="size of the sheet")
    parser.set_defaults(run=run_print)


def _add_launcher(commands: Commands[argparse.ArgumentParser]) -> None:
    parser = _add(
        commands,
        "install-launcher",
        "Menu entry, icon and file type for this user, on desktops that follow freedesktop.org",
        "kitplanner install-launcher --remove",
    )
    parser.add_argument("--remove", action="store_true", help="take them out again")
    parser.set_defaults(run=run_install_launcher)


def _add_plan_argument(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("plan", type=Path, metavar="PLAN", help="plan file (.kitplan)")


def _add_json(parser: argparse.ArgumentParser | argparse._MutuallyExclusiveGroup) -> None:
    parser.add_argument("--json", action="store_true", help="answer as one JSON object")


def _whole(text: str) -> int:
    """Return a whole number from zero."""
    value = int(text) if text.isascii() and text.isdigit() and len(text) <= _LONGEST_COUNT else -1
    if value < 0:
        raise argparse.ArgumentTypeError(f"{text!a} is not a whole number of at most {_LONGEST_COUNT} digits")
    return value


def _positive(text: str) -> float:
    """Return a number above zero."""
    try:
        value = float(text)
    except ValueError:
        value = math.nan
    if not 0.0 < value <= _LARGEST_NUMBER:
        raise argparse.ArgumentTypeError(f"{text!a} is not a number above 0 and up to {_LARGEST_NUMBER:.0f}")
    return value


if __name__ == "__main__":
    sys.exit(main())
