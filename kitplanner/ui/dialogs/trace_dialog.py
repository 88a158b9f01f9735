"""Where does this come from: formula in words, inputs with values, marks and sources, each leading to its field."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.results import Trace
from kitplanner.report.wording import plain, sentence
from kitplanner.ui.dialogs.jump_dialog import JumpDialog
from kitplanner.ui.dialogs.reading_table import Line
from kitplanner.ui.trace_refs import place_of


class TraceDialog(JumpDialog):
    """One number and its inputs."""

    def __init__(self, plan: Plan, name: str, traced: Trace, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Where does this come from?"), self.tr("Inputs of this number"), parent)
        sentences = [traced.words]
        if traced.formula:
            sentences.append(self.tr("Rule: {formula}").format(formula=traced.formula))
        if traced.source:
            sentences.append(self.tr("Source: {source}").format(source=traced.source))
        headers = (self.tr("Input"), self.tr("Value"), self.tr("Mark"), self.tr("From"))
        lines = [
            Line(
                (
                    sentence(plain(step.label)).rstrip("."),
                    plain(f"{step.value} {step.unit}".strip()),
                    step.mark,
                    plain(step.source),
                ),
                place_of(plan, step),
            )
            for step in traced.steps
        ]
        self.show_content(f"{name}: {plain(traced.value)}", [plain(text) for text in sentences], headers, lines)
