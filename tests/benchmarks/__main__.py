"""Command line of the benchmarks; each `bench_NAME.py` beside this file offers `run() -> list[Figure]`."""

from __future__ import annotations

import argparse
import dataclasses
import importlib
import json
import os
import pkgutil
import sys

import tests.benchmarks
from tests.benchmarks.figure import Figure

PREFIX = "bench_"


def names() -> list[str]:
    """Names of all benchmarks in this folder."""
    found = pkgutil.iter_modules(tests.benchmarks.__path__)
    return sorted(module.name.removeprefix(PREFIX) for module in found if module.name.startswith(PREFIX))


def measure(chosen: list[str]) -> dict[str, list[Figure]]:
    """Run the chosen benchmarks one after the other."""
    return {name: importlib.import_module(f"tests.benchmarks.{PREFIX}{name}").run() for name in chosen}


def as_json(figures: dict[str, list[Figure]]) -> str:
    """All figures as one JSON object."""
    rows = [
        {"benchmark": name, **dataclasses.asdict(figure), "holds": figure.holds, "reaches_aim": figure.reaches_aim}
        for name, group in figures.items()
        for figure in group
    ]
    return json.dumps({"figures": rows}, indent=2)


def line(name: str, figure: Figure) -> str:
    """One aligned line of text."""
    words = {None: "-", True: "holds", False: "MISSED"}
    aim = {None: "", True: ", aim reached", False: ", aim not reached"}[figure.reaches_aim]

    def number(value: float | None) -> str:
        return "-" if value is None else f"{value:.4g}"

    left = f"{name}: {figure.name}"
    return (
        f"{left:58} {number(figure.value):>9} {figure.unit:5} floor {number(figure.floor):>6}  "
        f"aim {number(figure.aim):>6}  {words[figure.holds]}{aim}" + (f"  ({figure.text})" if figure.text else "")
    )


def main(argv: list[str] | None = None) -> int:
    """Measure, print, and return 1 if a floor was missed."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks", description=__doc__)
    parser.add_argument("name", nargs="*", metavar="NAME", help=f"one of: {', '.join(names())} (default: all)")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    arguments = parser.parse_args(argv)
    unknown = sorted(set(arguments.name) - set(names()))
    if unknown:
        parser.error(f"no benchmark named {', '.join(unknown)}; there are: {', '.join(names())}")
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    figures = measure(arguments.name or names())
    if arguments.json:
        print(as_json(figures))
    else:
        for name, group in figures.items():
            for figure in group:
                print(line(name, figure))
    return 1 if any(figure.holds is False for group in figures.values() for figure in group) else 0


if __name__ == "__main__":
    sys.exit(main())
