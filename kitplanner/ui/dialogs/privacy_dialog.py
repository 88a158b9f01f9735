"""What is stored about a person, which papers show it, and deleting persons while totals stay."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from msgspec import Struct
from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import QComboBox, QDialogButtonBox, QHBoxLayout, QPushButton, QWidget

from kitplanner.plan.fields import spec_of
from kitplanner.plan.privacy import StoredItem, stored_about
from kitplanner.plan.records import Bout, Note, Plan, Spell
from kitplanner.report.wording import counted, minutes, percent, plain
from kitplanner.report.wording_readiness import paper_words
from kitplanner.session.field_text import translate, unit_of, value_text
from kitplanner.session.forget import Forecast
from kitplanner.ui.dialogs.jump_dialog import JumpDialog
from kitplanner.ui.dialogs.reading_table import Line
from kitplanner.ui.widgets.plain import plain_label

# Papers that this version prints; a person stands on no other.
PAPERS = ("effort", "rota")
_LEAST_TARGET_PX = 26


def item_words(plan: Plan, item: StoredItem) -> str:
    """Return one stored value as text."""
    value = item.value
    if isinstance(value, Note):
        spread = "" if value.spread_fraction is None else f", {percent(value.spread_fraction)}"
        return plain(f"{value.mark}: {value.source}{spread}" if value.source else f"{value.mark}{spread}")
    if isinstance(value, tuple) and value and isinstance(value[0], Bout):
        return "; ".join(f"day {bout.day} {bout.start}-{bout.end}" for bout in value)
    if isinstance(value, tuple) and value and isinstance(value[0], Spell):
        return "; ".join(f"day {spell.day} {spell.start}-{spell.end}" for spell in value)
    if item.role == "value":
        return _field_words(plan, item)
    return plain(str(value))


def _field_words(plan: Plan, item: StoredItem) -> str:
    person = next(one for one in plan.people if one.id == item.path[1])
    spec = spec_of(person, item.path[-1])
    if spec is None:
        return plain(str(item.value))
    names = {one.id: plain(one.name) or one.id for one in getattr(plan, spec.refs_to)} if spec.refs_to else {}
    value: Any = item.value
    unit = unit_of(spec) if spec.kind in ("number", "integer") else ""
    return plain(f"{value_text(spec, value, names)} {unit}".strip())


class PrivacyDialog(JumpDialog):
    """One person at a time.

    Signals
    -------
    delete_requested()
        The user wants to delete all persons and keep totals; nothing is deleted yet.
    """

    delete_requested = Signal()

    def __init__(self, plan: Plan, chosen: str = "", parent: QWidget | None = None) -> None:
        super().__init__(self.tr("What is stored about people"), self.tr("Stored about this person"), parent)
        self._plan = plan
        self.person = QComboBox(self)
        self.person.setAccessibleName(self.tr("Person"))
        self.person.setMinimumHeight(_LEAST_TARGET_PX)
        self.person.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.person.setMinimumContentsLength(12)
        label = plain_label(self.tr("&Person"))
        label.setTextFormat(Qt.TextFormat.PlainText)
        label.setBuddy(self.person)
        for person in plan.people:
            self.person.addItem(plain(person.name) or person.id, person.id)
        self.person.setCurrentIndex(max(0, self.person.findData(chosen)))
        line = QHBoxLayout()
        line.addWidget(label)
        line.addWidget(self.person, 1)
        self.column.insertLayout(1, line)
        self.delete = QPushButton(self.tr("&Delete persons, keep totals…"), self)
        self.delete.setAutoDefault(False)
        self.delete.setMinimumHeight(_LEAST_TARGET_PX)
        self.delete.setEnabled(bool(plan.people))
        self.delete.setToolTip(self.tr("Says first what goes and what stays"))
        self.delete.clicked.connect(self._on_delete)
        self.buttons.addButton(self.delete, QDialogButtonBox.ButtonRole.DestructiveRole)
        self.person.currentIndexChanged.connect(self._on_person)
        self._on_person()

    @Slot()
    def _on_person(self) -> None:
        key = self.person.currentData()
        items = stored_about(self._plan, key, PAPERS) if key is not None else ()
        headers = (self.tr("What"), self.tr("Value"), self.tr("Where"), self.tr("Papers that show it"))
        lines = [self._line(item) for item in items]
        self.show_content("", self._sentences_for(items), headers, lines)
        self.person.setFocus(Qt.FocusReason.OtherFocusReason)

    def _sentences_for(self, items: Sequence[StoredItem]) -> list[str]:
        if not items:
            return [self.tr("The plan holds nobody.")]
        papers = sorted({paper for item in items for paper in item.papers})
        shown = ", ".join(paper_words(paper) for paper in papers) or self.tr("none")
        return [
            self.tr("{count} about this person; papers that show any of it: {papers}.").format(
                count=counted(len(items), "thing is stored", "things are stored"), papers=shown
            ),
            self.tr("Limits carry no reasons. Health questions are shown and never stored."),
        ]

    def _line(self, item: StoredItem) -> Line:
        own = item.path[:2] == ("people", self.person.currentData())
        where = self.tr("own record") if own else " ".join(plain(part.replace("_", " ")) for part in item.path)
        papers = ", ".join(paper_words(paper) for paper in item.papers) or "–"
        place = item.path if item.role != "note" and item.path[0] != "rota" and "absences" not in item.path else ()
        return Line((translate("Fields", item.label), item_words(self._plan, item), where, papers), place)

    @Slot()
    def _on_delete(self) -> None:
        self.delete_requested.emit()
        self.close()


class Part(Struct, frozen=True):
    """One line of what goes."""

    what: str
    becomes: str


def parts_of(dialog: QWidget, found: Forecast) -> list[Part]:
    """Return line by line what deleting everybody takes away and what stays."""
    totals = found.totals
    parts = [Part(counted(totals.people, "person", "people"), dialog.tr("deleted with all their values and limits"))]
    if found.turns:
        turned = dialog.tr("deleted; {minutes} turned by {people} stay as a total").format(
            minutes=minutes(totals.turned_min), people=counted(totals.turned, "person", "people")
        )
        parts.append(Part(counted(found.turns, "turn of the rota", "turns of the rota"), turned))
    parts.append(Part(dialog.tr("Names in any text of the plan"), dialog.tr("blotted out")))
    steps = counted(found.undo_steps, "undo step", "undo steps")
    parts.append(Part(steps, dialog.tr("deleted: this cannot be undone")))
    becomes = {
        "rewrite": dialog.tr("written anew without people"),
        "blot": dialog.tr("names blotted out"),
        "remove": dialog.tr("removed"),
    }
    parts += [Part(plain(step.path.name), becomes[step.action]) for step in found.files]
    return parts


class DeletePeopleDialog(JumpDialog):
    """Names what goes, then asks.

    Signals
    -------
    confirmed()
        The user wants it.
    """

    confirmed = Signal()

    def __init__(self, found: Forecast, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Delete persons, keep totals"), self.tr("What goes and what stays"), parent)
        self.delete = QPushButton(self.tr("&Delete persons"), self)
        self.delete.setAutoDefault(False)
        self.delete.setMinimumHeight(_LEAST_TARGET_PX)
        self.delete.clicked.connect(self._on_delete)
        self.buttons.addButton(self.delete, QDialogButtonBox.ButtonRole.DestructiveRole)
        close = self.buttons.button(QDialogButtonBox.StandardButton.Close)
        close.setText(self.tr("&Keep everything"))
        close.setDefault(True)
        lines = [Line((part.what, part.becomes)) for part in parts_of(self, found)]
        more = self.tr("Copies you made yourself, and papers that are printed, are yours to destroy.")
        saved = self.tr("The plan is saved in its file on the way.")
        self.show_content(
            self.tr("Delete all persons of this plan?"),
            [saved, more],
            (self.tr("What"), self.tr("What becomes of it")),
            lines,
        )
        close.setFocus(Qt.FocusReason.OtherFocusReason)

    @Slot()
    def _on_delete(self) -> None:
        self.confirmed.emit()
        self.close()
