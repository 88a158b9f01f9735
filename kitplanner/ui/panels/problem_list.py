"""The problems of a section, each leading to its field."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import QListWidget, QListWidgetItem, QWidget

from kitplanner.plan.edits import Path
from kitplanner.plan.problem import Problem
from kitplanner.ui.widgets.plain import as_tool_tip

_PATH_ROLE = Qt.ItemDataRole.UserRole
_ROWS_SHOWN = 3
_MOST = 50


class ProblemList(QListWidget):
    """A short list of problems, hidden when there are none.

    Signals
    -------
    field_requested(path: Path)
        The user wants to go to the field with the problem.
    """

    field_requested = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._shown: tuple[Problem, ...] = ()
        self.setAccessibleName(self.tr("Problems of this section"))
        self.setWordWrap(True)
        self.setTextElideMode(Qt.TextElideMode.ElideNone)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.itemActivated.connect(self._on_chosen)
        self.itemClicked.connect(self._on_chosen)
        self.hide()

    def show_problems(self, problems: Sequence[Problem], prefix_names: dict[str, str]) -> None:
        """Show problems, errors first; a record is named by its name."""
        order = {"error": 0, "warning": 1, "note": 2}
        wanted = tuple(sorted(problems, key=lambda problem: order.get(problem.severity, 3)))
        if wanted == self._shown:
            return
        self._shown = wanted
        self.clear()
        for problem in wanted[:_MOST]:
            sign = "⚠" if problem.severity != "note" else "•"
            record = prefix_names.get(problem.place[1], problem.place[1]) if len(problem.place) > 1 else ""
            text = f"{sign} {record}: {sentence_of(problem)}" if record else f"{sign} {sentence_of(problem)}"
            item = QListWidgetItem(text)
            item.setToolTip(as_tool_tip(sentence_of(problem)))
            item.setData(_PATH_ROLE, problem.place)
            self.addItem(item)
        if len(wanted) > _MOST:
            self.addItem(self.tr("… and {count} more").format(count=len(wanted) - _MOST))
        self.setVisible(bool(wanted))
        self.setFixedHeight(min(len(wanted), _ROWS_SHOWN) * (self.fontMetrics().height() * 2 + 6) + 6)

    @Slot(QListWidgetItem)
    def _on_chosen(self, item: QListWidgetItem) -> None:
        path: Path | None = item.data(_PATH_ROLE)
        if path:
            self.field_requested.emit(tuple(path))


def sentence_of(problem: Problem) -> str:
    """Write a problem with its remedy, without its place, which the reader sees."""
    return f"{problem.text[:1].upper()}{problem.text[1:]}; {problem.remedy}."
