"""Deleting people for good: from the plan and its undo steps, its file, backup, recovery files and crash notes.

This is the one change that cannot be undone, which is its purpose.
"""

from __future__ import annotations

from pathlib import Path

from msgspec import Struct

from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.edits_privacy import Totals, delete_all_people, names_of, totals_of
from kitplanner.plan.files import backup_path, read_recovery
from kitplanner.plan.records import Plan
from kitplanner.plan.scrub import ScrubStep, scrub, scrub_steps
from kitplanner.session.autosave import Autosave
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing


class Places(Struct, frozen=True):
    """Where traces of people may lie beside the plan: the folder of recovery files and the crash notes."""

    recovery: Path
    notes: Path


class Forecast(Struct, frozen=True):
    """What deleting everybody would take away and what stays."""

    totals: Totals
    turns: int
    undo_steps: int
    files: tuple[ScrubStep, ...]


def known_names(document: PlanDocument) -> tuple[str, ...]:
    """Return every display name the plan or one of its undo steps knows."""
    found: dict[str, None] = dict.fromkeys(names_of(document.plan))
    for place in range(document.stack.count()):
        command = document.stack.command(place)
        for plan in (getattr(command, "before", None), getattr(command, "after", None)):
            if isinstance(plan, Plan):
                found.update(dict.fromkeys(names_of(plan)))
    return tuple(found)


def forecast(document: PlanDocument, places: Places) -> Forecast:
    """Return what would go; nothing is changed."""
    plan = document.plan
    files = scrub_steps(files_of(document, places), known_names(document), everybody=True)
    return Forecast(
        totals=totals_of(plan),
        turns=0 if plan.rota is None else len(plan.rota.bouts),
        undo_steps=document.stack.count(),
        files=tuple(step for step in files if step.action != "nothing"),
    )


def files_of(document: PlanDocument, places: Places) -> tuple[Path, ...]:
    """Return the files that may name people of this plan: its own, its backup, its recovery files, crash notes.

    A recovery file of another plan is left alone: its people are not meant.
    """
    own = () if document.path is None else (document.path, backup_path(document.path))
    recovered = tuple(file for file in sorted(places.recovery.glob("*.json")) if _is_of(file, document))
    return (*own, *recovered, places.notes)


def _is_of(file: Path, document: PlanDocument) -> bool:
    try:
        found = read_recovery(file)
    except (PlanFileError, OSError):
        return False
    if found.original is not None:
        return document.path is not None and Path(found.original) == document.path
    mine, theirs = {person.id for person in document.plan.people}, {person.id for person in found.plan.people}
    return found.plan.title == document.plan.title and bool(mine & theirs)


def forget_everybody(document: PlanDocument, editing: Editing, autosave: Autosave, places: Places) -> None:
    """Delete every person, keep totals, and clean everything that stays behind.

    Raises
    ------
    DocumentError
        When the plan's file cannot be written, or was changed by another program; nothing is deleted then.
    ScrubError
        When a name is still in a file after all; the message names it.
    """
    names, path = known_names(document), document.path
    files = files_of(document, places)
    if path is not None:
        # Saved first: a file that cannot be written stops everything while nothing has gone yet.
        document.save()
    document.restore(delete_all_people()(document.plan), path)
    editing.drafts.clear()
    if path is not None:
        document.save()
    autosave.close()
    scrub(files, names, everybody=True)
    if path is not None:
        # An older copy may have known more names, and the file then changed once more.
        document.open_file(path)
