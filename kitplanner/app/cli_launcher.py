"""Command `install-launcher`: menu entry, icon and file type for this user, in or out."""

from __future__ import annotations

import argparse
import os

from kitplanner.app import launcher
from kitplanner.app.cli_output import EXIT_ANSWERED, CommandError, show
from kitplanner.report.wording import plain


def run_install_launcher(arguments: argparse.Namespace) -> int:
    """Install or remove, and say what was done."""
    try:
        done = launcher.remove(os.environ) if arguments.remove else launcher.install(os.environ)
    except launcher.LauncherError as error:
        raise CommandError(str(error)) from error
    verb = "Removed" if arguments.remove else "Wrote"
    lines = [f"{verb} {plain(str(path))}" for path in done.files] or ["No launcher is installed; nothing was removed."]
    lines += [f"Ran {name}" for name in done.refreshed]
    show("\n".join((*lines, *done.remarks)))
    return EXIT_ANSWERED
