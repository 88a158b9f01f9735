"""Process start to first painted frame, as a ratio to a bare window of the same toolkit on the same machine."""

from __future__ import annotations

import contextlib
import os
import shutil
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

from kitplanner.plan.shipped import demo
from tests.benchmarks.figure import Figure

ROOT = Path(__file__).resolve().parents[2]
RUNS = 7
KINDS = ("bare", "window", "plot", "charts")


def run() -> list[Figure]:
    """The ratios offscreen and, where Xvfb is there, on an X11 screen."""
    figures = _figures("offscreen", {"QT_QPA_PLATFORM": "offscreen"})
    if shutil.which("Xvfb"):
        with _screen() as display:
            figures += _figures("xcb", {"QT_QPA_PLATFORM": "xcb", "DISPLAY": display})
    return figures


def _figures(platform: str, environment: dict[str, str]) -> list[Figure]:
    median = _medians(environment)
    return [
        Figure(
            name=f"first frame with verdict / bare window ({platform})",
            value=median["window"] / median["bare"],
            floor=2.5,
            aim=1.8,
            text=f"{median['window']:.0f} / {median['bare']:.0f} ms",
        ),
        Figure(
            name=f"charts drawn / bare window with a plot ({platform})",
            value=median["charts"] / median["plot"],
            floor=1.4,
            aim=1.1,
            text=f"{median['charts']:.0f} / {median['plot']:.0f} ms",
        ),
    ]


def _medians(environment: dict[str, str]) -> dict[str, float]:
    """Median milliseconds of each kind; the kinds take turns, so a drift of the machine meets all of them."""
    times: dict[str, list[float]] = {kind: [] for kind in KINDS}
    with tempfile.TemporaryDirectory() as home:
        quiet = os.environ | environment | {"HOME": home, "XDG_RUNTIME_DIR": home, "QT_SCALE_FACTOR": "1"}
        plan = Path(home) / "camp.kitplan"
        shutil.copy(demo("camp"), plan)
        for turn in range(RUNS + 1):
            for kind in KINDS:
                value = _first_frame_ms(kind, plan, quiet)
                if turn > 0:  # the first turn only warms the disk cache
                    times[kind].append(value)
    return {kind: statistics.median(values) for kind, values in times.items()}


def _first_frame_ms(kind: str, plan: Path, environment: dict[str, str]) -> float:
    command = [sys.executable, "-m", "tests.benchmarks.frame_child", kind, str(plan), f"{time.monotonic():.6f}"]
    answer = subprocess.run(command, cwd=ROOT, env=environment, capture_output=True, text=True, timeout=60, check=False)
    if answer.returncode != 0:
        raise RuntimeError(f"the {kind} window did not show its frame (exit {answer.returncode}):\n{answer.stderr}")
    return float(answer.stdout.splitlines()[-1])


@contextlib.contextmanager
def _screen() -> Iterator[str]:
    """An X11 screen of our own, ended afterwards."""
    read, write = os.pipe()
    server = subprocess.Popen(
        ["Xvfb", "-displayfd", str(write), "-screen", "0", "1600x1200x24", "-nolisten", "tcp"],
        pass_fds=(write,),
        stderr=subprocess.DEVNULL,
    )
    os.close(write)
    try:
        with os.fdopen(read) as pipe:
            number = pipe.readline().strip()
        if not number:
            raise RuntimeError("Xvfb did not start")
        yield f":{number}"
    finally:
        server.terminate()
        server.wait(timeout=10)
