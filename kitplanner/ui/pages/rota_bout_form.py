"""Small forms of a turn: all its values, and to whom it goes."""

from __future__ import annotations

from PySide6.QtCore import Qt, QTime, Signal, Slot
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QTimeEdit,
    QVBoxLayout,
    QWidget,
)

from kitplanner.domain.units import clock
from kitplanner.plan.records import Bout
from kitplanner.planners.people import allowed_stations
from kitplanner.planners.rota.problem import may_watch
from kitplanner.report.wording_rota import unit_words
from kitplanner.ui.board.board_data import BoardData, ShownBout, cap_of
from kitplanner.ui.pages.chart_frame import plain_label

_KEY = Qt.ItemDataRole.UserRole


class BoutForm(QDialog):
    """All values of one turn.

    Signals
    -------
    accepted_bout(bout: Bout)
        The turn as it should be.
    """

    accepted_bout = Signal(object)

    def __init__(self, data: BoardData, bout: ShownBout, parent: QWidget | None = None, *, is_new: bool) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Add a turn") if is_new else self.tr("Turn"))
        self._bout_id = bout.id
        self.day = QComboBox()
        for day in range(1, data.plan.days + 1):
            self.day.addItem(self.tr("Day {day}").format(day=day), day)
        self.day.setCurrentIndex(bout.day - 1)
        self.start, self.end = _time_box(bout.start_min), _time_box(bout.end_min)
        self.place, self.person, self.watcher = QComboBox(), QComboBox(), QComboBox()
        for station in data.plan.stations:
            for unit in range(1, station.count + 1):
                self.place.addItem(unit_words(station, unit), (station.id, unit))
        self.watcher.addItem(self.tr("nobody"), None)
        for person in data.plan.people:
            self.person.addItem(data.person_names[person.id], person.id)
            if may_watch(person) or person.id == bout.watcher:
                self.watcher.addItem(data.person_names[person.id], person.id)
        _choose(self.place, (bout.station, bout.unit))
        _choose(self.person, bout.person)
        _choose(self.watcher, bout.watcher)
        self.locked = QCheckBox(self.tr("&Locked: re-planning leaves it where it is"))
        self.locked.setChecked(bout.locked)
        self.problem = plain_label()
        self.problem.hide()
        self._build()

    def _build(self) -> None:
        form = QFormLayout()
        form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        for text, box in (
            (self.tr("&Day"), self.day),
            (self.tr("&From"), self.start),
            (self.tr("&To"), self.end),
            (self.tr("&Station"), self.place),
            (self.tr("Who t&urns"), self.person),
            (self.tr("Who &watches"), self.watcher),
        ):
            form.addRow(text, box)
            box.setAccessibleName(text.replace("&", ""))
        form.addRow(self.locked)
        standard = QDialogButtonBox.StandardButton
        self.buttons = QDialogButtonBox(standard.Ok | standard.Cancel)
        self.buttons.accepted.connect(self._on_ok)
        self.buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(self.problem)
        layout.addWidget(self.buttons)

    def bout(self) -> Bout:
        """Return the turn as the form says; an end of 00:00 means midnight."""
        start, end = _minute(self.start), _minute(self.end) or 1440
        station, unit = self.place.currentData() or ("", 1)
        return Bout(
            id=self._bout_id,
            day=int(self.day.currentData()),
            start=clock(start),
            end=clock(end),
            station=station,
            unit=unit,
            person=str(self.person.currentData() or ""),
            watcher=self.watcher.currentData(),
            locked=self.locked.isChecked(),
        )

    @Slot()
    def _on_ok(self) -> None:
        bout = self.bout()
        if bout.start >= bout.end:
            self.problem.setText(self.tr("The turn ends before it starts; choose a later end."))
            self.problem.show()
            self.end.setFocus()
            return
        if bout.watcher == bout.person:
            self.problem.setText(self.tr("Nobody watches themselves; choose somebody else to watch."))
            self.problem.show()
            self.watcher.setFocus()
            return
        self.accepted_bout.emit(bout)
        self.accept()


class HandOverDialog(QDialog):
    """To whom a turn goes: everybody who may turn at its station, those with most minutes left first.

    Signals
    -------
    person_chosen(bout_id: str, person_id: str)
        The person who gets the turn.
    """

    person_chosen = Signal(str, str)

    def __init__(self, data: BoardData, bout: ShownBout, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        who = data.person_names.get(bout.person, bout.person)
        self.setWindowTitle(self.tr("Hand over"))
        self._bout_id = bout.id
        self.filter = QLineEdit()
        self.filter.setPlaceholderText(self.tr("Part of a name"))
        self.filter.setAccessibleName(self.tr("Part of a name"))
        self.filter.textChanged.connect(self._on_filter)
        self.list = QListWidget()
        self.list.setAccessibleName(self.tr("Who takes the turn"))
        for key, text in self._lines(data, bout):
            item = QListWidgetItem(text)
            item.setData(_KEY, key)
            self.list.addItem(item)
        self.list.setCurrentRow(0)
        self.list.itemActivated.connect(self._on_ok)
        standard = QDialogButtonBox.StandardButton
        buttons = QDialogButtonBox(standard.Ok | standard.Cancel)
        buttons.accepted.connect(self._on_ok)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        text = self.tr("Who takes {who}'s turn, day {day}, {start} to {end}?")
        layout.addWidget(
            plain_label(text.format(who=who, day=bout.day, start=clock(bout.start_min), end=clock(bout.end_min)))
        )
        layout.addWidget(self.filter)
        layout.addWidget(self.list)
        layout.addWidget(buttons)
        self.list.setFocus()
        self.resize(self.fontMetrics().averageCharWidth() * 56, self.fontMetrics().height() * 22)

    def _lines(self, data: BoardData, bout: ShownBout) -> list[tuple[str, str]]:
        lines = []
        for person in data.plan.people:
            stations = {station.id for station in allowed_stations(data.plan, person)}
            cap = cap_of(data.plan, person, bout.day)
            if person.id == bout.person or bout.station not in stations or cap <= 0:
                continue
            used = sum(one.length_min for one in data.by_person.get(person.id, ()) if one.day == bout.day)
            busy = any(_meets(one, bout) for one in data.by_person.get(person.id, ())) or any(
                _meets(one, bout) for one in data.by_watcher.get(person.id, ()) if one.id != bout.id
            )
            text = self.tr("{name}: {used} of {cap} min").format(name=data.person_names[person.id], used=used, cap=cap)
            lines.append((busy, used - cap, person.id, text + (self.tr(", busy then") if busy else "")))
        return [(key, text) for _busy, _left, key, text in sorted(lines, key=lambda line: line[:2])]

    @Slot(str)
    def _on_filter(self, text: str) -> None:
        wanted = text.strip().casefold()
        for place in range(self.list.count()):
            item = self.list.item(place)
            item.setHidden(wanted not in item.text().casefold())

    @Slot()
    def _on_ok(self) -> None:
        item = self.list.currentItem()
        if item is not None and not item.isHidden():
            self.person_chosen.emit(self._bout_id, str(item.data(_KEY)))
            self.accept()


def _meets(one: ShownBout, other: ShownBout) -> bool:
    return one.day == other.day and one.start_min < other.end_min and other.start_min < one.end_min


def _time_box(minute: int) -> QTimeEdit:
    box = QTimeEdit(QTime(minute // 60 % 24, minute % 60))
    box.setDisplayFormat("HH:mm")
    return box


def _minute(box: QTimeEdit) -> int:
    return box.time().hour() * 60 + box.time().minute()


def _choose(box: QComboBox, value: object) -> None:
    """Choose an entry by its value; compared here, because Qt compares pairs by identity."""
    place = next((n for n in range(box.count()) if _same(box.itemData(n), value)), 0)
    box.setCurrentIndex(place)


def _same(one: object, other: object) -> bool:
    if isinstance(one, (list, tuple)) and isinstance(other, (list, tuple)):
        return tuple(one) == tuple(other)
    return one == other
