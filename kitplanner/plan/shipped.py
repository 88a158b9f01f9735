"""Where the shipped files are: inside an installed copy, else in the checkout."""

from __future__ import annotations

from pathlib import Path

PACKAGE = Path(__file__).resolve().parent.parent
DEMOS = ("household", "camp", "shelter", "bench")


class MissingFileError(FileNotFoundError):
    """A file that belongs to the program is not there; the message is one sentence for the user."""


def _shipped(installed: str, checkout: str, name: str) -> Path:
    for root in (PACKAGE / installed, PACKAGE.parent / checkout):
        path = (root / name).resolve()
        if path.exists() and path.is_relative_to(root.resolve()):
            return path
    raise MissingFileError(
        f"The file {name} that belongs to the program is missing; install the program again to bring it back."
    )


def resource(name: str) -> Path:
    """Path of a shipped resource, such as `fonts/DejaVuSans.ttf`."""
    return _shipped("_resources", "resources", name)


def demo(name: str) -> Path:
    """Path of a demo plan: household, camp, shelter or bench."""
    return _shipped("_demo_profiles", "demo_profiles", f"{name}.kitplan")
