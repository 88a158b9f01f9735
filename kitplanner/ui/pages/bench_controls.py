"""What the bench is asked: station, cadence, current at the device plug."""

from __future__ import annotations

from PySide6.QtCore import QSignalBlocker, Qt, Signal, Slot
from PySide6.QtWidgets import QCheckBox, QComboBox, QGridLayout, QHBoxLayout, QLabel, QPushButton, QSlider, QWidget

from kitplanner.plan.records import Plan
from kitplanner.report.wording import plain
from kitplanner.ui.pages.one_charge_box import QuietSpinBox
from kitplanner.ui.widgets.editors import LEAST_TARGET_PX


class BenchControls(QWidget):
    """The choices of the Bench page.

    Signals
    -------
    station_chosen(station: str)
        Another station.
    asked()
        Another cadence or current.
    """

    station_chosen = Signal(str)
    asked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.station = QComboBox()
        self.station.setAccessibleName(self.tr("Station on the bench"))
        self.station.setMinimumContentsLength(10)
        self.station.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.slider = QSlider(Qt.Orientation.Horizontal)
        self.slider.setRange(10, 120)
        self.slider.setPageStep(5)
        self.slider.setMinimumHeight(24)
        self.slider.setAccessibleName(self.tr("Cadence, turns a minute"))
        self.rpm = QuietSpinBox()
        self.rpm.setDecimals(1)
        self.rpm.setRange(10, 120)
        self.rpm.setSuffix(self.tr(" a minute"))
        self.rpm.setAccessibleName(self.tr("Cadence, turns a minute"))
        self.best = QPushButton(self.tr("&Best cadence"))
        self.best.setCheckable(True)
        self.best.setChecked(True)
        self.best.setToolTip(
            self.tr("The cadence in the comfort band that brings most of the turning into the battery")
        )
        self.fixed = QCheckBox(self.tr("&Fixed current at the plug"))
        self.fixed.setToolTip(self.tr("Without it the device takes what keeps its input voltage up"))
        self.amps = QuietSpinBox()
        self.amps.setDecimals(3)
        self.amps.setRange(0.01, 5.0)
        self.amps.setSingleStep(0.05)
        self.amps.setValue(0.3)
        self.amps.setSuffix(" A")
        self.amps.setEnabled(False)
        self.amps.setAccessibleName(self.tr("Current at the device plug"))
        for control in (self.station, self.best, self.fixed):
            control.setMinimumHeight(LEAST_TARGET_PX)
        self._lay_out()
        self.station.currentIndexChanged.connect(self._on_station)
        self.slider.valueChanged.connect(self._on_slider)
        self.rpm.valueChanged.connect(self._on_rpm)
        self.best.toggled.connect(self.asked)
        self.fixed.toggled.connect(self._on_fixed)
        self.amps.valueChanged.connect(self.asked)

    def _lay_out(self) -> None:
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(10)
        for row, (words, buddy) in enumerate(((self.tr("&Station"), self.station), (self.tr("&Cadence"), self.slider))):
            label = QLabel(words)
            label.setBuddy(buddy)
            grid.addWidget(label, row, 0)
            grid.addWidget(buddy, row, 1, 1, 2)
        # What belongs together stands together; the slider alone takes the width.
        for row, pair in enumerate(((self.rpm, self.best), (self.fixed, self.amps)), start=2):
            line = QHBoxLayout()
            line.setSpacing(10)
            for control in pair:
                line.addWidget(control)
            line.addStretch(1)
            grid.addLayout(line, row, 1, 1, 2)
        grid.setColumnStretch(1, 1)

    def asked_rpm(self) -> float | None:
        """Return the cadence asked for, None for the best one."""
        return None if self.best.isChecked() else self.rpm.value()

    def asked_amps(self) -> float | None:
        """Return the current asked for, None if the device holds its input voltage."""
        return self.amps.value() if self.fixed.isChecked() else None

    def set_plan(self, plan: Plan) -> str:
        """Offer the stations described by their parts; return the chosen one's id, or nothing."""
        wanted = [(plain(one.name) or one.id, one.id) for one in plan.stations if one.described_by == "parts"]
        now = [(self.station.itemText(n), self.station.itemData(n)) for n in range(self.station.count())]
        if wanted != now:
            kept = self.station.currentData()
            with QSignalBlocker(self.station):
                self.station.clear()
                for text, key in wanted:
                    self.station.addItem(text, key)
                self.station.setCurrentIndex(max(0, self.station.findData(kept)) if wanted else -1)
        return str(self.station.currentData() or "")

    def set_range(self, low: float, high: float) -> None:
        """Set which cadences can be asked for."""
        with QSignalBlocker(self.slider), QSignalBlocker(self.rpm):
            self.slider.setRange(round(low), round(high))
            self.rpm.setRange(low, high)

    def show_rpm(self, rpm: float | None) -> None:
        """Move slider and box to a cadence without asking for it."""
        if rpm is None:
            return
        with QSignalBlocker(self.slider), QSignalBlocker(self.rpm):
            self.slider.setValue(round(rpm))
            self.rpm.setValue(rpm)

    def choose(self, station: str) -> None:
        """Put a station on the bench if it is offered."""
        place = self.station.findData(station)
        if place >= 0:
            self.station.setCurrentIndex(place)

    @Slot()
    def _on_station(self) -> None:
        self.station_chosen.emit(str(self.station.currentData() or ""))

    @Slot(int)
    def _on_slider(self, value: int) -> None:
        with QSignalBlocker(self.rpm), QSignalBlocker(self.best):
            self.rpm.setValue(float(value))
            self.best.setChecked(False)
        self.asked.emit()

    @Slot(float)
    def _on_rpm(self, value: float) -> None:
        with QSignalBlocker(self.slider), QSignalBlocker(self.best):
            self.slider.setValue(round(value))
            self.best.setChecked(False)
        self.asked.emit()

    @Slot(bool)
    def _on_fixed(self, fixed: bool) -> None:
        self.amps.setEnabled(fixed)
        self.asked.emit()
