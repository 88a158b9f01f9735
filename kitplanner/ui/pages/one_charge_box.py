"""One charge without a plan: a battery's watt-hours and a station's watts give the minutes."""

from __future__ import annotations

from PySide6.QtCore import QTimer, Slot
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QDoubleSpinBox, QFormLayout, QFrame, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.planners.effort import one_charge
from kitplanner.report.wording import minutes
from kitplanner.report.wording_effort import one_charge_sentence
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.widgets.editors import LEAST_TARGET_PX


class QuietSpinBox(QDoubleSpinBox):
    """A spin box that changes under the wheel only while it has the focus, and is never too low to be hit."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setMinimumHeight(LEAST_TARGET_PX)
        self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Fixed)

    @guarded()
    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the page unless the box has the focus."""
        if self.hasFocus():
            super().wheelEvent(event)
        else:
            event.ignore()


class OneChargeBox(QFrame):
    """Two figures in, one sentence out."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName(self.tr("One charge"))
        self.wh = self._spin(self.tr("Wh"), 15.4, 0.1, 10_000.0)
        self.watts = self._spin(self.tr("W"), 6.0, 0.1, 2_000.0)
        self.answer = plain_label(size="title", bold=True)
        self.sentence = plain_label()
        self.wh.setAccessibleName(self.tr("Battery of the phone, watt-hours"))
        self.watts.setAccessibleName(self.tr("Station's output, watts"))
        form = QFormLayout()
        form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        form.addRow(self.tr("&Battery of the phone"), self.wh)
        form.addRow(self.tr("&Station's output (S)"), self.watts)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(plain_label(self.tr("One charge, without the plan"), bold=True))
        layout.addLayout(form)
        layout.addWidget(self.answer)
        layout.addWidget(self.sentence)
        layout.addStretch(1)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(30)
        self._timer.timeout.connect(self.compute)
        self.wh.valueChanged.connect(self._timer.start)
        self.watts.valueChanged.connect(self._timer.start)
        self._timer.start()

    @staticmethod
    def _spin(unit: str, value: float, low: float, high: float) -> QuietSpinBox:
        box = QuietSpinBox()
        box.setDecimals(1)
        box.setRange(low, high)
        box.setValue(value)
        box.setSuffix(f" {unit}")
        box.setKeyboardTracking(False)
        return box

    @Slot()
    def compute(self) -> None:
        """Work the answer out for the figures in the boxes."""
        wh, station_w = self.wh.value(), self.watts.value()
        row = one_charge(wh, station_w).rows[0]
        self.answer.setText(minutes(row.minutes_p50))
        self.sentence.setText(one_charge_sentence(row, wh, station_w))
