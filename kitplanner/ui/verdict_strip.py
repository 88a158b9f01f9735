"""The verdict strip: does it fit, by how much, what limits, when the stores are empty, minutes of one phone charge.

An unmet evening guarantee is its first line.
"""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt, Signal, Slot
from PySide6.QtGui import QColor, QPainter, QPainterPath, QPaintEvent, QPalette, QPen, QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QFrame, QHBoxLayout, QSizePolicy, QVBoxLayout, QWidget

from kitplanner.plan.records import Device, Plan
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import BalanceResult, EffortRow, Verdict
from kitplanner.report.wording import counted, plain, sentence
from kitplanner.report.wording import minutes as minutes_words
from kitplanner.report.wording_balance import evening_sentence, medical_sentence, verdict_sentence, verdict_words
from kitplanner.report.wording_effort import range_words
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import TypeSize, colours, text_scale, type_font
from kitplanner.ui.widgets.plain import plain_label, restyle_labels
from kitplanner.ui.widgets.small_button import SmallButton


def phone_row(plan: Plan, results: Results) -> tuple[Device, EffortRow] | None:
    """Return the plan's largest phone and the typical row of its full charge, directly or else through a store."""
    if results.effort is None:
        return None
    # Minutes come after the first picture, and so does the module of the paper that knows the typical one.
    from kitplanner.report.papers.effort import typical_row

    known = results.effort_plan or plan  # minutes arrive a moment after an edit
    phones = [device for device in known.devices if device.kind == "phone" and device.battery_wh]
    for device in sorted(phones, key=lambda one: -(one.battery_wh or 0.0)):
        for route in ("direct", "store"):
            rows = [
                row
                for row in results.effort.rows
                if row.device == device.id and row.route == route and row.charge == "full"
            ]
            row = typical_row(rows)
            if row is not None and row.minutes_p50 is not None:
                return device, row
    return None


_WIDE_PX = 820.0


class VerdictSign(QWidget):
    """A sign that says the verdict by its shape: full ring, half ring, broken ring."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._verdict: Verdict | None = None
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.setAccessibleName(self.tr("Verdict"))

    def set_verdict(self, verdict: Verdict | None) -> None:
        """Show another verdict."""
        self._verdict = verdict
        self.setAccessibleDescription(verdict_words(verdict) if verdict else "")
        self.update()

    @guarded(QSize(34, 34))
    def sizeHint(self) -> QSize:
        """Return a square that follows the text size."""
        side = round(34 * text_scale())
        return QSize(side, side)

    @guarded()
    def paintEvent(self, _event: QPaintEvent) -> None:
        """Paint a vessel that is full, just full, or not full."""
        scheme = colours()
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            side = min(self.width(), self.height())
            box = QRectF(side * 0.18, side * 0.14, side * 0.64, side * 0.72)
            level = {"fits": 1.0, "tight": 0.86, "short": 0.42}.get(self._verdict or "", 0.0)
            fill = QRectF(box.left(), box.bottom() - box.height() * level, box.width(), box.height() * level)
            vessel = QPainterPath()
            vessel.addRoundedRect(box, side * 0.1, side * 0.1)
            painter.save()
            painter.setClipPath(vessel)
            painter.fillRect(fill, scheme.color("flow"))
            painter.restore()
            pen = QPen(scheme.color("strip_text"), max(1.5, side * 0.05))
            painter.setPen(pen)
            painter.drawPath(vessel)
            painter.fillRect(QRectF(box.center().x() - side * 0.12, 0, side * 0.24, side * 0.13), pen.color())
            self._mark(painter, box, side)
        finally:
            painter.end()

    def _mark(self, painter: QPainter, box: QRectF, side: float) -> None:
        """Add a tick, a line or a cross, so that the sign reads without its colour."""
        dark = QPen(QColor("#10161d"), side * 0.085, c=Qt.PenCapStyle.RoundCap, j=Qt.PenJoinStyle.RoundJoin)
        light = QPen(colours().color("strip_text"), side * 0.085, c=Qt.PenCapStyle.RoundCap)
        middle, unit = box.center(), side * 0.13
        if self._verdict == "fits":
            painter.setPen(dark)
            tick = [QPointF(-1, 0), QPointF(-0.25, 0.8), QPointF(1.1, -0.9)]
            painter.drawPolyline([middle + point * unit for point in tick])
        elif self._verdict == "tight":
            painter.setPen(dark)
            painter.drawLine(middle - QPointF(unit, 0), middle + QPointF(unit, 0))
        elif self._verdict == "short":
            painter.setPen(light)
            high = QPointF(middle.x(), box.top() + side * 0.2)
            painter.drawLine(high - QPointF(unit, unit) * 0.7, high + QPointF(unit, unit) * 0.7)
            painter.drawLine(high - QPointF(unit, -unit) * 0.7, high + QPointF(unit, -unit) * 0.7)


class VerdictStrip(QFrame):
    """The strip at the bottom of the window.

    Signals
    -------
    where_requested(button: QWidget)
        The user asks where the strip's numbers come from.
    ready_requested()
        The user wants the lists for before, in and after an outage.
    problems_requested()
        The user wants the plan's problems.
    fit_requested()
        The user wants to know what would make the plan fit.
    """

    where_requested = Signal(QWidget)
    ready_requested = Signal()
    problems_requested = Signal()
    fit_requested = Signal()
    ready = False

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("verdict_strip")
        self.setAccessibleName(self.tr("Verdict"))
        self.setAutoFillBackground(True)
        self.sign = VerdictSign()
        self.evening = plain_label(wrap=True, bold=True)
        self.verdict = plain_label(size="title", bold=True)
        self.detail = plain_label(wrap=True)
        self.phone = plain_label(wrap=True)
        self.medical = plain_label(wrap=True, size="small")
        self.where = SmallButton(self.tr("Why…"))
        self.be_ready = SmallButton(self.tr("Be ready…"))
        self.problems = SmallButton("")
        self.fit = SmallButton(self.tr("What would make it fit…"))
        self._said = ("", "")
        self._row = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._row.setSpacing(14)
        self._row.addWidget(self.sign, 0, Qt.AlignmentFlag.AlignVCenter)
        self._row.addWidget(self.verdict)
        self._row.addWidget(self.detail, 11)
        self._row.addWidget(self.phone, 10)
        self._buttons = self._make_buttons()
        self._foot = QHBoxLayout()
        self._row.addWidget(self._buttons)
        self._foot.addWidget(self.medical, 1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(14, 7, 14, 7)
        layout.setSpacing(3)
        layout.addWidget(self.evening)
        layout.addLayout(self._row)
        layout.addLayout(self._foot)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Maximum)
        self.ready = True
        self._colour()
        self.set_answers(Plan(), None)

    def _make_buttons(self) -> QWidget:
        box = QWidget(self)
        line = QHBoxLayout(box)
        line.setContentsMargins(0, 0, 0, 0)
        line.setSpacing(5)
        for button, help_, slot in (
            (self.problems, self.tr("List the problems of the plan, each with a way to its field"), self._on_problems),
            (self.fit, self.tr("Every change alone, then the mildest together"), self._on_fit),
            (self.where, self.tr("Where do these numbers come from?"), self._on_where),
            (self.be_ready, self.tr("Warning received, dark hours, power is back, closing down"), self._on_ready),
        ):
            button.setToolTip(help_)
            button.setAccessibleDescription(help_)
            button.clicked.connect(slot)
            line.addWidget(button, 0, Qt.AlignmentFlag.AlignVCenter)
        return box

    @Slot()
    def _on_problems(self) -> None:
        self.problems_requested.emit()

    @Slot()
    def _on_fit(self) -> None:
        self.fit_requested.emit()

    @Slot()
    def _on_where(self) -> None:
        self.where_requested.emit(self.where)

    @Slot()
    def _on_ready(self) -> None:
        self.ready_requested.emit()

    def _show_problems(self, results: Results | None) -> None:
        wrong = [one for one in results.problems if one.severity != "note"] if results is not None else []
        self.problems.setText(f"⚠ {counted(len(wrong), self.tr('problem'), self.tr('problems'))}…")
        self.problems.setVisible(bool(wrong))
        has_answer = results is not None and results.balance is not None and not results.has_errors
        self.where.setVisible(has_answer)
        self.be_ready.setVisible(has_answer)
        balance = results.balance if results is not None else None
        self.fit.setVisible(has_answer and balance is not None and balance.verdict == "short")

    def set_answers(self, plan: Plan, results: Results | None) -> None:
        """Show the verdict of a plan."""
        balance = results.balance if results is not None else None
        if results is not None and results.has_errors:
            errors = [problem for problem in results.problems if problem.severity == "error"]
            self._show(None, self.tr("No answer yet"), f"{errors[0].text} {errors[0].remedy}".strip())
        elif balance is None:
            self._show(None, self.tr("No answer yet"), self.tr("The plan is being worked out."))
        else:
            self._show_balance(plan, balance)
        self._show_problems(results)
        evening = evening_sentence(plan, balance) if balance is not None else ""
        self._line(self.evening, f"! {evening}" if evening else "")
        self._line(self.medical, medical_sentence(plan))
        self._line(self.phone, self._phone_words(plan, results))
        said = (self.evening.text(), *self._said, self.phone.text(), self.medical.text())
        self.setAccessibleDescription(" ".join(text for text in said if text))

    @staticmethod
    def _line(label: QWidget, text: str) -> None:
        label.setText(text)  # type: ignore[attr-defined]
        label.setVisible(bool(text))

    def _show(self, verdict: Verdict | None, title: str, detail: str) -> None:
        self.sign.set_verdict(verdict)
        self.verdict.setText(title)
        self._said = (title, detail)
        self._share_room()

    def _show_balance(self, plan: Plan, balance: BalanceResult) -> None:
        words = verdict_words(balance.verdict)
        said = verdict_sentence(plan, balance)
        if balance.coverage_fraction is None:
            self._show(None, self.tr("Nothing to cover"), said)
            return
        detail = said.removeprefix(sentence(words).rstrip(".")).lstrip(": ")
        self._show(balance.verdict, sentence(words).rstrip("."), sentence(detail))

    def _share_room(self) -> None:
        """Stand the parts below each other where they would be squeezed, the verdict in line with its reason."""
        wide = self.width() >= _WIDE_PX * text_scale()
        direction = QBoxLayout.Direction.LeftToRight if wide else QBoxLayout.Direction.TopToBottom
        if self._row.direction() != direction:
            self._row.setDirection(direction)
            # In a narrow window the buttons share the last line with the medical sentence.
            (self._row if wide else self._foot).addWidget(self._buttons)
        self._row.setSpacing(14 if wide else 2)
        self.sign.setVisible(wide)
        self.verdict.setVisible(wide)
        detail = self._said[1] if wide else f"{self._said[0]}: {self._said[1]}"
        if self.detail.text() != detail:
            self.detail.setText(detail)
        size: TypeSize = "text" if wide else "small"
        for label in (self.evening, self.detail, self.phone):
            label.setProperty("type_size", size)
            label.setFont(type_font(size, bold=label is self.evening or (not wide and label is self.detail)))

    def _phone_words(self, plan: Plan, results: Results | None) -> str:
        found = phone_row(plan, results) if results is not None else None
        if found is None:
            return ""
        device, row = found
        people = results.effort_plan.people if results is not None and results.effort_plan is not None else plan.people
        person = next((plain(one.name) for one in people if one.id == row.person), "")
        text = self.tr("One full charge, {device}: {time} of turning {range}")
        text = text.format(
            device=plain(device.name), time=minutes_words(row.minutes_p50), range=range_words(row)
        ).strip()
        return f"{text}, {person}." if person else f"{text}."

    def _colour(self) -> None:
        scheme, palette = colours(), self.palette()
        palette.setColor(QPalette.ColorRole.Window, scheme.color("strip"))
        palette.setColor(QPalette.ColorRole.WindowText, scheme.color("strip_text"))
        if palette != self.palette():
            self.setPalette(palette)
        for label in (self.evening, self.verdict, self.detail, self.phone, self.medical):
            if label.palette().color(QPalette.ColorRole.WindowText) != scheme.color("strip_text"):
                label.setPalette(palette)
        quiet = QPalette(palette)
        quiet.setColor(QPalette.ColorRole.WindowText, scheme.color("strip_muted"))
        for label in (self.phone, self.medical):
            if label.palette().color(QPalette.ColorRole.WindowText) != scheme.color("strip_muted"):
                label.setPalette(quiet)

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Follow text size and scheme."""
        super().changeEvent(event)
        if not self.ready:
            return
        if event.type() == QEvent.Type.FontChange:
            restyle_labels(self)
            self._share_room()
        elif event.type() in (QEvent.Type.PaletteChange, QEvent.Type.StyleChange):
            self._colour()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Share the new width."""
        super().resizeEvent(event)
        self._share_room()
