"""The one undo command of the program: two references to frozen plans."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtGui import QUndoCommand

from kitplanner.plan.records import Plan

_MERGEABLE_ID = 1
_SINGLE_ID = -1


class PlanCommand(QUndoCommand):
    """One named step between two plans; plans share structure, so a step costs two references.

    Steps with the same merge key that follow each other become one (a number typed digit by digit, a
    whole drag); one that returns to its start erases itself.
    """

    def __init__(
        self,
        before: Plan,
        after: Plan,
        text: str,
        restore: Callable[[Plan], None],
        merge_key: str | None = None,
    ) -> None:
        super().__init__(text)
        self._before = before
        self._after = after
        self._restore = restore
        self._merge_key = merge_key

    @property
    def merge_key(self) -> str | None:
        """Steps with the same key become one; None never merges."""
        return self._merge_key

    @property
    def before(self) -> Plan:
        """Plan before the step."""
        return self._before

    @property
    def after(self) -> Plan:
        """Plan after the step."""
        return self._after

    def redo(self) -> None:
        """Put the later plan in place."""
        self._restore(self._after)

    def undo(self) -> None:
        """Put the earlier plan back, the identical object."""
        self._restore(self._before)

    def id(self) -> int:
        """Tell Qt which commands may be asked to merge."""
        return _SINGLE_ID if self._merge_key is None else _MERGEABLE_ID

    def mergeWith(self, other: QUndoCommand) -> bool:
        """Take over a following step of the same intention."""
        if not isinstance(other, PlanCommand) or other.merge_key != self._merge_key:
            return False
        self._after = other.after
        if self._after == self._before:
            self.setObsolete(True)
        return True
