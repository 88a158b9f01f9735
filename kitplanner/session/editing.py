"""Every change the window offers, as named undo steps: typed values, and records added, copied, moved, removed."""

from __future__ import annotations

from collections import Counter
from typing import Any

from msgspec import Struct
from msgspec.structs import replace
from PySide6.QtCore import QObject, Signal

from kitplanner.plan.edits import (
    Edit,
    EditError,
    Path,
    add_record,
    chain,
    get_value,
    move_record,
    new_id,
    remove_record,
    set_value,
)
from kitplanner.plan.edits_use import WAY_KEYS, change_use_way, set_use
from kitplanner.plan.fields import FieldSpec
from kitplanner.plan.records import Plan
from kitplanner.session.document import PlanDocument
from kitplanner.session.drafts import Drafts
from kitplanner.session.field_parsing import FieldTextError, parse_value
from kitplanner.session.field_text import Names, label_of, translate
from kitplanner.session.new_records import (
    edit_described_by,
    new_part,
    new_record,
    singular,
    stage_word,
)

MOST_AT_ONCE = 200
_USE_KEYS = frozenset(key for keys in WAY_KEYS.values() for key in keys)


class Editing(QObject):
    """The editing side of a document: drafts, and one method per thing a user can do.

    Signals
    -------
    draft_changed(path: Path)
        The text kept for a field was kept, changed or dropped.
    explain_requested(path: Path, what: str)
        The user asks about a field: "trace", where its value comes from, or "meaning", what it is.
    """

    draft_changed = Signal(object)
    explain_requested = Signal(object, str)

    def __init__(self, document: PlanDocument, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.drafts = Drafts()
        document.plan_replaced.connect(self._on_plan_replaced)

    @property
    def plan(self) -> Plan:
        """The current plan."""
        return self._document.plan

    def names(self, section: str) -> Names:
        """Names of a section's records by id, told apart where two share a name."""
        records = getattr(self.plan, section)
        count = Counter(record.name for record in records)

        def shown(record: Any) -> str:
            if not record.name:
                return str(record.id)
            return record.name if count[record.name] == 1 else f"{record.name} ({record.id})"

        return {record.id: shown(record) for record in records}

    def origin_of(self, spec: FieldSpec, record: Any) -> str:
        """Say in a word where a value comes from; nothing for the user's own."""
        note = record.notes.get(spec.key)
        mark = spec.mark if note is None else note.mark
        words = {
            "measured": self.tr("measured"),
            "default": self.tr("default"),
            "guidance": self.tr("guidance"),
            "guess": self.tr("guess"),
            "demo": self.tr("demo"),
        }
        return words.get(mark, "") if note is not None or mark == "default" else ""

    def enter(self, path: Path, spec: FieldSpec, text: str) -> str | None:
        """Take a typed text; return the problem when it cannot be taken (it is then kept as a draft)."""
        try:
            value = parse_value(spec, text, self.names(spec.refs_to) if spec.refs_to else {})
        except FieldTextError as error:
            return self._keep_draft(path, text, str(error))
        try:
            old = get_value(self.plan, path)
        except EditError as error:
            # The record went, by undo or in a table, while its form still held the text.
            return self._keep_draft(path, text, str(error))
        if value == old and _same_kind(value, old):
            self._drop_draft(path)
            return None
        edit = edit_of_entry(path, value)
        step = self.tr("Change {field} of {record}").format(
            field=_in_sentence(label_of(spec)), record=self.name_of(path[:-1])
        )
        problem = self._document.apply(edit, step)
        if problem is not None:
            return self._keep_draft(path, text, problem)
        self._drop_draft(path)
        return None

    def carry_out(self, edit: Edit, text: str) -> str | None:
        """Carry out an edit that a dialog made, as one named step; return why not, or None when done."""
        return self._document.apply(edit, text)

    def add(self, section: str, count: int = 1) -> tuple[str, ...]:
        """Add records at the end of a section as one step; return their ids."""
        count = max(1, min(MOST_AT_ONCE, count))
        return self._add_copies(section, None, count)

    def duplicate(self, section: str, record_id: str, count: int = 1) -> tuple[str, ...]:
        """Add copies of a record behind it as one step; return their ids."""
        return self._add_copies(section, record_id, max(1, min(MOST_AT_ONCE, count)))

    def remove(self, section: str, record_ids: tuple[str, ...]) -> str | None:
        """Remove records, and every reference to them, as one step."""
        if not record_ids:
            return None
        names = ", ".join(self.name_of((section, one)) for one in record_ids[:3])
        step = self.tr("Remove {record}").format(record=names if len(record_ids) <= 3 else f"{names} …")
        edits = [remove_record((section, one)) for one in record_ids]
        problem = self._document.apply(chain(*edits), step)
        if problem is None:
            for one in record_ids:
                self.drafts.drop_below((section, one))
        return problem

    def remove_part(self, path: Path) -> str | None:
        """Remove a stage or another part of a record."""
        step = self.tr("Remove {record}").format(record=self.name_of(path))
        problem = self._document.apply(remove_record(path), step)
        if problem is None:
            self.drafts.drop_below(path)
        return problem

    def move(self, path: Path, steps: int) -> str | None:
        """Move a record up (negative) or down among its neighbours."""
        records = get_value(self.plan, path[:-1])
        index = next((i for i, record in enumerate(records) if record.id == path[-1]), -1)
        wanted = index + steps
        if index < 0 or not 0 <= wanted < len(records):
            return None
        step = self.tr("Move {record}").format(record=self.name_of(path))
        return self._document.apply(move_record(path, wanted), step)

    def add_part(self, path: Path, kind: str, index: int | None = None) -> str | None:
        """Add a stage (by kind) or a temperature to the collection at a path; return its id."""
        part = new_part(kind, new_id(self.plan, path))
        word = stage_word(kind)
        step = self.tr("Add {part} to {record}").format(part=word, record=self.name_of(path[:-1]))
        refused = self._document.apply(add_record(path, part, index), step)
        return part.id if refused is None else None

    def name_of(self, path: Path) -> str:
        """Name the record at a path for people: "M3", "Cable of Station A", "the plan"."""
        names: list[str] = []
        here: Any = self.plan
        for part in path:
            if isinstance(here, tuple):
                here = next((record for record in here if record.id == part), None)
                names.append((here.name or here.id) if here is not None else part)
            else:
                here = getattr(here, part, None)
                if isinstance(here, Struct):
                    names.append(translate("Fields", singular(part)))
        if not names:
            return self.tr("the plan")
        whole = names[0]
        for name in names[1:]:
            whole = self.tr("{part} of {whole}").format(part=name, whole=whole)
        return whole

    def _add_copies(self, section: str, model_id: str | None, count: int) -> tuple[str, ...]:
        plan = self.plan
        records = getattr(plan, section)
        index = len(records)
        model = None
        if model_id is not None:
            index = next(i for i, record in enumerate(records) if record.id == model_id)
            model = records[index]
            index += 1
        ids: list[str] = []
        edits: list[Edit] = []
        for offset in range(count):
            record_id = new_id(plan, section)
            record = new_record(section, record_id) if model is None else _copy_of(model, record_id)
            edit = add_record((section,), record, index + offset)
            plan = edit(plan)
            ids.append(record_id)
            edits.append(edit)
        step = self.tr("Add {record}").format(record=self._added_words(section, model, count))
        refused = self._document.apply(chain(*edits), step)
        return tuple(ids) if refused is None else ()

    def _added_words(self, section: str, model: Any, count: int) -> str:
        what = (
            translate("Fields", singular(section))
            if model is None
            else self.tr("copy of {name}").format(name=model.name)
        )
        return what if count == 1 else f"{count} × {what}"

    def _keep_draft(self, path: Path, text: str, problem: str) -> str:
        self.drafts.keep(path, text, problem)
        self.draft_changed.emit(path)
        return problem

    def _drop_draft(self, path: Path) -> None:
        self.drafts.drop(path)
        self.draft_changed.emit(path)

    def _on_plan_replaced(self) -> None:
        self.drafts.clear()


def edit_of_entry(path: Path, value: Any) -> Edit:
    """Return the edit of one entered value: a device's use stays in step, a station gets what its way needs."""
    if len(path) == 3 and path[0] == "devices" and path[2] == "use_by":
        return change_use_way(path[1], value)
    if len(path) == 3 and path[0] == "devices" and path[2] in _USE_KEYS and value is not None:
        return set_use(path[1], path[2], value)
    edit = set_value(path, value)
    if len(path) == 3 and path[0] == "stations" and path[2] == "described_by":
        return chain(edit, edit_described_by(path[:-1], value))
    return edit


def _copy_of(model: Any, record_id: str) -> Any:
    """Copy a record under another id; a group check of names is the user's, so the name says what it is."""
    return replace(model, id=record_id, name=record_id if model.name == model.id else f"{model.name} {record_id}")


def _same_kind(one: object, other: object) -> bool:
    """Tell apart values that compare equal and are not the same to a reader, such as 1 and True."""
    return (one is None) == (other is None) and isinstance(one, bool) == isinstance(other, bool)


def _in_sentence(label: str) -> str:
    """Write a label as it stands inside a sentence: small, unless it begins with an abbreviation."""
    return label if len(label) > 1 and label[1].isupper() else label[:1].lower() + label[1:]
