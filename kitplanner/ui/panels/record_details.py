"""Everything about one record: its form, and for a station its machine, gear, stages and test load."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from PySide6.QtWidgets import QVBoxLayout, QWidget

from kitplanner.plan.cautions import ShownCaution
from kitplanner.plan.edits import Path
from kitplanner.plan.fields import FIELDS
from kitplanner.session.editing import Editing
from kitplanner.session.new_records import STAGE_WORDS
from kitplanner.session.use_text import same_use_text
from kitplanner.ui.panels.nested_list import NestedList
from kitplanner.ui.widgets.plain import plain_label
from kitplanner.ui.widgets.record_form import RecordForm


class RecordDetails(QWidget):
    """The form of one record."""

    def __init__(self, kind: str, editing: Editing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._editing = editing
        self.form = RecordForm(FIELDS[kind], editing, self)
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(0)
        self._layout.addWidget(self.form)
        self._build_more()
        self._layout.addStretch(1)

    def show_record(self, path: Path, record: Any, problems: Mapping[Path, str]) -> None:
        """Show a record and what it holds."""
        self.form.show_record(path, record, problems)

    def show_cautions(self, cautions: tuple[ShownCaution, ...]) -> None:
        """Show the inline cautions of the section at their fields."""
        self.form.show_cautions(cautions)

    def focus_field(self, path: Path) -> bool:
        """Put the keyboard into a field of the record or of a part of it."""
        return len(path) == 1 and self.form.focus_field(path[0])

    def _build_more(self) -> None:
        """Build what a record holds beyond its own fields."""


class StationDetails(RecordDetails):
    """A station: its form and, when it is described by its parts, the forms of those."""

    def _build_more(self) -> None:
        titles = {
            "machine": self.tr("Machine"),
            "gear": self.tr("Gear"),
            "test_load": self.tr("Test load, for the bench only"),
        }
        self._parts: dict[str, RecordForm] = {}
        self._boxes: dict[str, QWidget] = {}
        for key in ("machine", "gear"):
            self._add_single(key, titles[key])
        self.stages = NestedList(
            "stages", tuple(STAGE_WORDS), self.tr("Stages, from machine to socket"), self._editing, self
        )
        self._layout.addWidget(self.stages)
        self._add_single("test_load", titles["test_load"])

    def show_record(self, path: Path, record: Any, problems: Mapping[Path, str]) -> None:
        """Show a station; its parts only when it is described by them."""
        super().show_record(path, record, problems)
        by_parts = record.described_by == "parts"
        self.stages.setVisible(by_parts)
        if by_parts:
            self.stages.show_parts(path, record.stages, problems)
        for key, form in self._parts.items():
            part = getattr(record, key)
            self._boxes[key].setVisible(by_parts and part is not None)
            if by_parts and part is not None:
                form.show_record((*path, key), part, problems)

    def focus_field(self, path: Path) -> bool:
        """Put the keyboard into a field of the station, of its machine, gear or test load, or of a stage."""
        if len(path) == 2 and path[0] in self._parts:
            return self._parts[path[0]].focus_field(path[1])
        if len(path) == 3 and path[0] == "stages" and self.stages.choose(path[1]):
            form = self.stages.form()
            return form is not None and form.focus_field(path[2])
        return super().focus_field(path)

    def part_form(self, key: str) -> RecordForm:
        """Form of the machine, the gear or the test load."""
        return self._parts[key]

    def _add_single(self, key: str, title: str) -> None:
        box = QWidget(self)
        layout = QVBoxLayout(box)
        layout.setContentsMargins(0, 8, 0, 0)
        layout.setSpacing(0)
        label = plain_label(title, bold=True)
        label.setContentsMargins(10, 0, 10, 0)
        form = RecordForm(FIELDS[key], self._editing, box)
        layout.addWidget(label)
        layout.addWidget(form)
        self._parts[key], self._boxes[key] = form, box
        self._layout.addWidget(box)


class DeviceDetails(RecordDetails):
    """A device: its form, and the same use said in the other ways."""

    def _build_more(self) -> None:
        self.same_use = plain_label(wrap=True)
        self.same_use.setContentsMargins(10, 0, 10, 8)
        self._layout.addWidget(self.same_use)

    def show_record(self, path: Path, record: Any, problems: Mapping[Path, str]) -> None:
        """Show a device and what its use comes to in every way."""
        super().show_record(path, record, problems)
        text = same_use_text(record)
        self.same_use.setText(text)
        self.same_use.setVisible(bool(text))


class ConditionsDetails(RecordDetails):
    """The plan's own fields, its conditions and the temperatures of single days."""

    def _build_more(self) -> None:
        title = plain_label(self.tr("Conditions"), bold=True)
        title.setContentsMargins(10, 10, 10, 0)
        self.conditions = RecordForm(FIELDS["conditions"], self._editing, self)
        self.temperatures = NestedList(
            "temperatures",
            ("temperature",),
            self.tr("Temperatures of single days"),
            self._editing,
            self,
        )
        for widget in (title, self.conditions, self.temperatures):
            self._layout.addWidget(widget)

    def show_record(self, path: Path, record: Any, problems: Mapping[Path, str]) -> None:
        """Show the plan's own fields and its conditions."""
        super().show_record(path, record, problems)
        self.conditions.show_record(("conditions",), record.conditions, problems)
        self.temperatures.show_parts(("conditions",), record.conditions.temperatures, problems)

    def show_cautions(self, cautions: tuple[ShownCaution, ...]) -> None:
        """Show heat and cold at the temperature."""
        self.conditions.show_cautions(cautions)

    def focus_field(self, path: Path) -> bool:
        """Put the keyboard into a field of the plan, of its conditions or of a temperature."""
        if len(path) == 2 and path[0] == "conditions":
            return self.conditions.focus_field(path[1])
        if len(path) == 4 and path[1] == "temperatures" and self.temperatures.choose(path[2]):
            form = self.temperatures.form()
            return form is not None and form.focus_field(path[3])
        return super().focus_field(path)


def make_details(kind: str, editing: Editing, parent: QWidget | None = None) -> RecordDetails:
    """Make the details that fit a record kind."""
    classes = {"station": StationDetails, "device": DeviceDetails, "plan": ConditionsDetails}
    return classes.get(kind, RecordDetails)(kind, editing, parent)
