"""Text that is not yet valid: kept exactly as typed, with the reason, until it is put right or dropped."""

from __future__ import annotations

from collections.abc import Iterable

from msgspec import Struct

from kitplanner.plan.edits import Path


class Draft(Struct, frozen=True):
    """What was typed into one field and why it cannot be taken."""

    text: str
    problem: str


class Drafts:
    """Drafts by the path of their field; a table and a form that show one field share its draft."""

    def __init__(self) -> None:
        self._drafts: dict[Path, Draft] = {}

    def keep(self, path: Path, text: str, problem: str) -> None:
        """Keep a text that could not be taken."""
        self._drafts[path] = Draft(text, problem)

    def drop(self, path: Path) -> None:
        """Forget the draft of a field, if any: it was put right or given up."""
        self._drafts.pop(path, None)

    def drop_below(self, path: Path) -> None:
        """Forget all drafts of a record and of what it holds."""
        for other in [one for one in self._drafts if one[: len(path)] == path]:
            del self._drafts[other]

    def get(self, path: Path) -> Draft | None:
        """Return the draft of a field."""
        return self._drafts.get(path)

    def below(self, path: Path) -> Iterable[tuple[Path, Draft]]:
        """List the drafts of a record and of what it holds."""
        return [(other, draft) for other, draft in self._drafts.items() if other[: len(path)] == path]

    def clear(self) -> None:
        """Forget everything; another plan is open."""
        self._drafts.clear()

    def __len__(self) -> int:
        return len(self._drafts)
