"""Lets the energy line show one station's own chain at its operating point, and follow it through edits."""

from __future__ import annotations

from PySide6.QtCore import QObject, Slot

from kitplanner.plan.records import Plan
from kitplanner.planners.bench import BenchError, bench_point
from kitplanner.planners.results import BenchPoint
from kitplanner.planners.station_error import StationError
from kitplanner.ui.energy_line import EnergyLine


class StationChain(QObject):
    """Which station the energy line shows, if any."""

    def __init__(self, line: EnergyLine, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._line = line
        self._station = ""
        self._shown: object = None

    @property
    def station(self) -> str:
        """Id of the station shown, empty while the line shows the day."""
        return self._station

    def show_station(self, plan: Plan, station_id: str) -> None:
        """Show a station's chain in watts."""
        self._station = station_id
        self._shown = None
        self.refresh(plan)

    def refresh(self, plan: Plan) -> None:
        """Follow a changed plan; return to the day when the station is gone."""
        if not self._station:
            return
        station = next((one for one in plan.stations if one.id == self._station), None)
        if station is None:
            self.show_day()
            return
        if station is self._shown:
            return
        self._shown = station
        try:
            point = bench_point(plan, station.id)
        except (BenchError, StationError):
            # The form says what is missing; the line cannot draw a chain that is not described.
            self._line.set_station_point(None)
            return
        self._line.set_station_point(point, station.name or station.id)

    @Slot()
    def show_day(self) -> None:
        """Return to the day."""
        if self._station:
            self._station, self._shown = "", None
        self._line.set_station_point(None)

    @Slot(object, str)
    def show_point(self, point: BenchPoint | None, name: str) -> None:
        """Follow the operating point that the bench shows, while the line shows that station."""
        if point is not None and point.station == self._station:
            self._line.set_station_point(point, name)
