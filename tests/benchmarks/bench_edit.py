"""From an edit in the shelter demo to energy line and verdict strip painted anew."""

from __future__ import annotations

import os
import shutil
import statistics
import tempfile
import time
from pathlib import Path

from PySide6.QtCore import QEvent, QObject
from PySide6.QtWidgets import QWidget

from kitplanner.app.window import Desk, prepare
from kitplanner.plan.edits import set_value
from kitplanner.plan.shipped import demo
from tests.benchmarks.figure import Figure

EDITS = 25
WARM_UP = 5
PATIENCE_S = 5.0
WATCHED = ("EnergyLine", "VerdictStrip")


class Painted(QObject):
    """Notes which of the watched widgets have been painted."""

    def __init__(self) -> None:
        super().__init__()
        self.names: set[str] = set()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Paint:
            # The strip's words stand in labels of their own.
            above = watched.parent()
            self.names |= {type(thing).__name__ for thing in (watched, above) if type(thing).__name__ in WATCHED}
        return False


def run() -> list[Figure]:
    """Median time of one edit, other edits of the same kind in between so that nothing can be kept."""
    with tempfile.TemporaryDirectory() as home:
        os.environ |= {"HOME": home, "XDG_CONFIG_HOME": home, "XDG_DATA_HOME": home, "XDG_STATE_HOME": home}
        plan = Path(home) / "shelter.kitplan"
        shutil.copy(demo("shelter"), plan)
        desk = prepare(plan)
        desk.window.resize(1400, 900)
        desk.window.show()
        times = _times_ms(desk)
        desk.document.stack.clear()
        desk.window.close()
        desk.app.processEvents()
        desk.collector.stop()
    ordered = sorted(times)
    return [
        Figure(
            name="edit reaches energy line and verdict (shelter)",
            value=statistics.median(times),
            unit="ms",
            floor=50.0,
            aim=16.0,
            text=f"90 % under {ordered[int(0.9 * len(ordered))]:.1f} ms",
        )
    ]


def _times_ms(desk: Desk) -> list[float]:
    painted = Painted()
    seen = [widget for widget in desk.window.findChildren(QWidget) if type(widget).__name__ in WATCHED]
    if {type(widget).__name__ for widget in seen} != set(WATCHED):
        raise RuntimeError("the window has no energy line or no verdict strip")
    for widget in seen:
        for part in (widget, *widget.findChildren(QWidget)):
            part.installEventFilter(painted)
    device = desk.document.plan.devices[0]
    times = []
    for turn in range(WARM_UP + EDITS):
        _settle(desk)
        painted.names.clear()
        start = time.perf_counter()
        refused = desk.document.apply(
            set_value(("devices", device.id, "count"), device.count + 1 + turn), "Change count"
        )
        if refused is not None:
            raise RuntimeError(refused)
        while painted.names != set(WATCHED):
            desk.app.processEvents()
            if time.perf_counter() - start > PATIENCE_S:
                raise RuntimeError(f"only {sorted(painted.names)} was painted after the edit")
        if turn >= WARM_UP:
            times.append((time.perf_counter() - start) * 1000.0)
    return times


def _settle(desk: Desk) -> None:
    """Let slow answers and late paints of the last edit end first."""
    end = time.perf_counter() + 0.4
    while time.perf_counter() < end:
        desk.app.processEvents()
        time.sleep(0.002)
