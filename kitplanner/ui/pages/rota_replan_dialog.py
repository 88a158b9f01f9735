"""Re-plan from a moment: what has happened by then is asked for, and what changes for whom is shown before it holds."""

from __future__ import annotations

from PySide6.QtCore import Qt, QTime, Signal, Slot
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QDoubleSpinBox,
    QFormLayout,
    QFrame,
    QGroupBox,
    QHBoxLayout,
    QLabel,
    QListWidget,
    QListWidgetItem,
    QPlainTextEdit,
    QScrollArea,
    QSpinBox,
    QTimeEdit,
    QVBoxLayout,
    QWidget,
)

from kitplanner.domain.units import clock
from kitplanner.plan.edits_replan import Now, StationOut
from kitplanner.plan.records import Plan
from kitplanner.report.wording import plain
from kitplanner.session.rota_run import Replanned
from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.pages.rota_words import replan_lines

_KEY = Qt.ItemDataRole.UserRole


class ReplanDialog(QDialog):
    """Asks for the moment and what has happened.

    Signals
    -------
    now_given(now: Now)
        The moment with everything that has changed by then.
    """

    now_given = Signal(object)

    def __init__(self, plan: Plan, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Re-plan from now"))
        self._plan = plan
        self.day = QComboBox()
        for day in range(1, plan.days + 1):
            self.day.addItem(self.tr("Day {day}").format(day=day), day)
        self.time = QTimeEdit(QTime(8, 0))
        self.time.setDisplayFormat("HH:mm")
        self.absent = QListWidget()
        self.absent.setAccessibleName(self.tr("Absent people"))
        for person in plan.people:
            item = QListWidgetItem(plain(person.name) or person.id)
            item.setData(_KEY, person.id)
            item.setFlags(item.flags() | Qt.ItemFlag.ItemIsUserCheckable)
            item.setCheckState(Qt.CheckState.Unchecked)
            self.absent.addItem(item)
        self.gone = QCheckBox(self.tr("They do not come &back on the days that follow"))
        self.out: dict[str, QSpinBox] = {}
        self.stores: dict[str, tuple[QCheckBox, QSpinBox]] = {}
        self.hot = QCheckBox(self.tr("&Heat for the rest of the day"))
        self.air = QDoubleSpinBox()
        self._build()

    def _build(self) -> None:
        content = QWidget()
        column = QVBoxLayout(content)
        when = QFormLayout()
        for text, box in ((self.tr("&Day"), self.day), (self.tr("&Time"), self.time)):
            when.addRow(text, box)
            box.setAccessibleName(text.replace("&", ""))
        column.addLayout(when)
        people = QGroupBox(self.tr("Absent from then on"))
        inside = QVBoxLayout(people)
        self.absent.setMinimumHeight(self.fontMetrics().height() * 7)
        inside.addWidget(self.absent)
        inside.addWidget(self.gone)
        column.addWidget(people)
        column.addWidget(self._stations_box())
        if self._plan.stores:
            column.addWidget(self._stores_box())
        column.addLayout(self._heat_row())
        column.addStretch(1)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        area.setWidget(content)
        standard = QDialogButtonBox.StandardButton
        buttons = QDialogButtonBox(standard.Cancel)
        self.go = buttons.addButton(self.tr("&Re-plan"), QDialogButtonBox.ButtonRole.AcceptRole)
        self.go.setDefault(True)
        buttons.accepted.connect(self._on_ok)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(
            plain_label(self.tr("What has been stays. Locked and posted turns stay where the rules still allow them."))
        )
        layout.addWidget(area, 1)
        layout.addWidget(buttons)
        self.resize(self.fontMetrics().averageCharWidth() * 62, self.fontMetrics().height() * 36)

    def _stations_box(self) -> QWidget:
        box = QGroupBox(self.tr("Units out of service for the rest of the day"))
        form = QFormLayout(box)
        form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        for station in self._plan.stations:
            spin = QSpinBox()
            spin.setRange(0, station.count)
            spin.setSuffix(self.tr(" of {count}").format(count=station.count))
            name = plain(station.name) or station.id
            spin.setAccessibleName(self.tr("{name}, units out").format(name=name))
            form.addRow(_label(name, spin), spin)
            self.out[station.id] = spin
        return box

    def _stores_box(self) -> QWidget:
        box = QGroupBox(self.tr("Charge read at the stores now"))
        form = QFormLayout(box)
        form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        for store in self._plan.stores:
            name = plain(store.name) or store.id
            tick, spin = QCheckBox(name), QSpinBox()
            spin.setRange(0, 100)
            spin.setValue(round(store.start_fraction * 100))
            spin.setSuffix(" %")
            spin.setEnabled(False)
            spin.setAccessibleName(self.tr("{name}, charge read").format(name=name))
            tick.toggled.connect(spin.setEnabled)
            form.addRow(tick, spin)
            self.stores[store.id] = (tick, spin)
        return box

    def _heat_row(self) -> QHBoxLayout:
        self.air.setRange(-20.0, 55.0)
        self.air.setDecimals(1)
        self.air.setSuffix(" °C")
        self.air.setValue(self._plan.conditions.air_degc)
        self.air.setEnabled(False)
        self.air.setAccessibleName(self.tr("Air temperature for the rest of the day"))
        self.hot.toggled.connect(self.air.setEnabled)
        row = QHBoxLayout()
        row.addWidget(self.hot)
        row.addWidget(self.air)
        row.addStretch(1)
        return row

    def begin_at(self, day: int, minute: int) -> None:
        """Offer a moment."""
        self.day.setCurrentIndex(min(day, self._plan.days) - 1)
        self.time.setTime(QTime(minute // 60 % 24, minute % 60))

    def now(self) -> Now:
        """Return what the dialog says."""
        items = [self.absent.item(place) for place in range(self.absent.count())]
        away = tuple(str(one.data(_KEY)) for one in items if one.checkState() == Qt.CheckState.Checked)
        return Now(
            day=int(self.day.currentData()),
            minute=self.time.time().hour() * 60 + self.time.time().minute(),
            absent=() if self.gone.isChecked() else away,
            gone=away if self.gone.isChecked() else (),
            stations_out=tuple(
                StationOut(station=key, units=spin.value()) for key, spin in self.out.items() if spin.value()
            ),
            store_fractions={key: spin.value() / 100 for key, (tick, spin) in self.stores.items() if tick.isChecked()},
            air_degc=self.air.value() if self.hot.isChecked() else None,
        )

    @Slot()
    def _on_ok(self) -> None:
        self.now_given.emit(self.now())
        self.accept()


class ReplanResultDialog(QDialog):
    """What changes for whom; taking it over is one step.

    Signals
    -------
    taken()
        The new rota is to hold.
    """

    taken = Signal()

    def __init__(self, replanned: Replanned, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        now = replanned.answer.now
        title = self.tr("Re-planned from day {day}, {time}").format(day=now.day, time=clock(now.minute))
        self.setWindowTitle(title)
        head, lines = replan_lines(replanned)
        self.view = QPlainTextEdit("\n".join(lines))
        self.view.setReadOnly(True)
        self.view.setTabChangesFocus(True)
        self.view.setAccessibleName(self.tr("What changes for whom"))
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel)
        take = buttons.addButton(self.tr("&Take it over"), QDialogButtonBox.ButtonRole.AcceptRole)
        take.setDefault(True)
        buttons.accepted.connect(self._on_ok)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(plain_label(head, bold=True))
        layout.addWidget(self.view)
        layout.addWidget(buttons)
        self.resize(self.fontMetrics().averageCharWidth() * 78, self.fontMetrics().height() * 24)

    @Slot()
    def _on_ok(self) -> None:
        self.taken.emit()
        self.accept()


def _label(text: str, buddy: QWidget) -> QLabel:
    label = plain_label(text)
    label.setBuddy(buddy)
    return label
