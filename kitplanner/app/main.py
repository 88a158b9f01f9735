"""The way into the window: check first, import Qt after, so that a machine without a screen gets a sentence."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from kitplanner import __version__
from kitplanner.app.qt_check import before_qt, missing_library

EXIT_CANNOT_START = 2


def open_window(path: Path | None) -> int:
    """Open the window on a plan (or on a new one) and stay until it is closed; return the exit code."""
    refusal = before_qt()
    if refusal is not None:
        return _refuse(refusal)
    try:
        from kitplanner.app import window  # Qt's libraries load here, after the checks
    except ImportError as error:
        if "cannot open shared object" not in str(error):
            raise
        return _refuse(missing_library(error))
    return window.run(path)


def main_window(argv: list[str] | None = None) -> int:
    """Command `kitplanner-window [PLAN]`."""
    parser = argparse.ArgumentParser(prog="kitplanner-window", description="Open the planning window.")
    parser.add_argument("plan", nargs="?", type=Path, metavar="PLAN", help="plan file (.kitplan)")
    parser.add_argument("--version", action="version", version=f"kitplanner {__version__}")
    return open_window(parser.parse_args(argv).plan)


def _refuse(sentence: str) -> int:
    print(f"kitplanner: {sentence}", file=sys.stderr)
    return EXIT_CANNOT_START
