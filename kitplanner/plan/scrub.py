"""Taking names out of the files that stay behind a plan: the plan itself, its backup, recovery files, crash notes.

First a plan of steps is made, so that the window can show it; then the steps are carried out, each file put in its
place whole; then every file is searched again. A file that cannot be freed of the names otherwise is removed.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from pathlib import Path
from typing import Literal

from msgspec import Struct, structs

from kitplanner.plan.codec import PlanFileError, decode, encode
from kitplanner.plan.edits_privacy import blotted_plan, delete_all_people, delete_people
from kitplanner.plan.files import discard_recovery, read_bytes, read_recovery, recovery_bytes, write_bytes
from kitplanner.plan.name_search import NameSearch
from kitplanner.plan.records import Plan

Action = Literal["nothing", "rewrite", "blot", "remove"]


class ScrubStep(Struct, frozen=True, kw_only=True):
    """What becomes of one file, and why in words; `data` is what it will hold.

    "rewrite": a plan or recovery file without these people; "blot": the names in its text replaced; "remove": the file
    goes, because it cannot be freed of the names otherwise.
    """

    path: Path
    action: Action
    reason: str
    data: bytes = b""


class ScrubError(OSError):
    """Names are still in a file after all; the message names the file and what helps."""


def scrub_steps(paths: Iterable[Path], names: Sequence[str], *, everybody: bool = False) -> tuple[ScrubStep, ...]:
    """Return what has to be done to each file; nothing is written.

    Parameters
    ----------
    paths : iterable of Path
        Plan file, its backup, recovery files, crash notes; those that are not there need nothing
    names : sequence of str
        Display names that must be gone
    everybody : bool
        True where all people go: also those that only an older copy still knows, under whatever name

    Returns
    -------
    tuple of ScrubStep
        One per file, in the order given
    """
    files = tuple(Path(path) for path in paths)
    known = [*names]
    if everybody:
        known += [person.name for path in files for plan in _plans_in(path) for person in plan.people]
    search = NameSearch(known)
    without = delete_all_people() if everybody else None
    return tuple(_step(path, search, without) for path in files)


def scrub(paths: Iterable[Path], names: Sequence[str], *, everybody: bool = False) -> tuple[ScrubStep, ...]:
    """Carry the steps out and search every file again.

    Parameters
    ----------
    paths, names, everybody
        As in `scrub_steps`

    Returns
    -------
    tuple of ScrubStep
        What was done

    Raises
    ------
    ScrubError
        When a file could not be written, or still holds a name
    """
    steps = scrub_steps(paths, names, everybody=everybody)
    for step in steps:
        _carry_out(step)
    left = [step.path.name for step in scrub_steps([one.path for one in steps], names) if step.action != "nothing"]
    if left:
        raise ScrubError(f"Names are still in {', '.join(left)}; delete that file yourself.")
    return steps


def files_with_names(paths: Iterable[Path], names: Sequence[str]) -> tuple[Path, ...]:
    """Return the files in which a name still stands."""
    return tuple(step.path for step in scrub_steps(paths, names) if step.action != "nothing")


def _plans_in(path: Path) -> tuple[Plan, ...]:
    """Return the plan in a plan or recovery file, none where it is neither."""
    for read in _READERS:
        try:
            return (read(path),)
        except (PlanFileError, OSError):
            continue
    return ()


def _read_plan(path: Path) -> Plan:
    return decode(read_bytes(path))


def _read_recovered(path: Path) -> Plan:
    return read_recovery(path).plan


_READERS: tuple[Callable[[Path], Plan], ...] = (_read_plan, _read_recovered)


def _step(path: Path, search: NameSearch, everybody: Callable[[Plan], Plan] | None) -> ScrubStep:
    if not path.exists():
        return ScrubStep(path=path, action="nothing", reason="it is not there")
    try:
        data = read_bytes(path)
    except PlanFileError as error:
        return ScrubStep(path=path, action="remove", reason=f"it cannot be searched ({error.reason})")
    rewritten = _rewritten(path, data, search, everybody)
    if rewritten is not None:
        if rewritten == data:
            return ScrubStep(path=path, action="nothing", reason="nobody is in it")
        return ScrubStep(path=path, action="rewrite", reason="a plan with these people", data=rewritten)
    if not search.in_bytes(data):
        return ScrubStep(path=path, action="nothing", reason="no name is in it")
    blotted = search.blotted_bytes(data)
    if search.in_bytes(blotted):
        return ScrubStep(path=path, action="remove", reason="a name is in it and cannot be taken out alone")
    return ScrubStep(path=path, action="blot", reason="names in its text", data=blotted)


def _rewritten(path: Path, data: bytes, search: NameSearch, everybody: Callable[[Plan], Plan] | None) -> bytes | None:
    """Return a plan or recovery file without the people, the same bytes if nobody is in it; None for others."""
    try:
        plan = decode(data)
    except PlanFileError:
        return _rewritten_recovery(path, data, search, everybody)
    without = _without(plan, search, everybody)
    return data if without == plan else encode(without)


def _rewritten_recovery(
    path: Path, data: bytes, search: NameSearch, everybody: Callable[[Plan], Plan] | None
) -> bytes | None:
    try:
        recovery = read_recovery(path)
    except PlanFileError:
        return None
    without = _without(recovery.plan, search, everybody)
    # A path that holds a name tells it as well as a record does; the recovered plan then stands on its own.
    names_path = recovery.original is not None and search.in_text(recovery.original)
    if without == recovery.plan and not names_path:
        return data
    changes = {"original": None, "original_sha256": None} if names_path else {}
    return recovery_bytes(structs.replace(recovery, plan=without, **changes))


def _without(plan: Plan, search: NameSearch, everybody: Callable[[Plan], Plan] | None) -> Plan:
    """Return the plan without the people of these names, or without anybody, and without the names elsewhere."""
    if everybody is not None:
        return blotted_plan(everybody(plan), search)
    gone = [person.id for person in plan.people if search.in_text(person.name)]
    if gone and len(gone) == len(plan.people):
        return blotted_plan(delete_all_people()(plan), search)
    return blotted_plan(delete_people(gone)(plan), search)


def _carry_out(step: ScrubStep) -> None:
    try:
        if step.action == "remove":
            discard_recovery(step.path)
        elif step.action != "nothing":
            write_bytes(step.path, step.data)
    except (PlanFileError, OSError) as error:
        raise ScrubError(f"{step.path.name} could not be freed of names: {error}") from error
