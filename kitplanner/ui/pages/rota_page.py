"""The Rota page: verdict, what to do, the board or its table, broken rules, unmet use, aims, charging."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QListWidget, QMenu, QStackedWidget, QVBoxLayout, QWidget

from kitplanner.plan.edits import Edit
from kitplanner.plan.records import Plan
from kitplanner.planners.rota.result import RotaProgress
from kitplanner.planners.rota.solver import DEFAULT_WORK
from kitplanner.report.wording import plain
from kitplanner.report.wording_rota import (
    day_words,
    unmet_sentences,
    violation_sentence,
)
from kitplanner.ui.board.board_access import announce
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.board.board_legend import BoardLegend
from kitplanner.ui.board.bouts_table import BoutsTable
from kitplanner.ui.board.rota_board import RotaBoard
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.pages.plain_table import PlainTable, TableData
from kitplanner.ui.pages.rota_choices import ChoiceRow
from kitplanner.ui.pages.rota_desk import RotaDesk
from kitplanner.ui.pages.rota_tasks import RotaTasks
from kitplanner.ui.pages.rota_words import aims_data, charging_data, head_words, progress_words
from kitplanner.ui.pages.rota_work_line import RotaWorkLine
from kitplanner.ui.pages.rota_wrapped_table import WrappedTable
from kitplanner.ui.widgets.plain import as_tool_tip
from kitplanner.ui.widgets.small_button import SmallButton

QUICK_WORK, THOROUGH_WORK = 2_000, 100_000
_MOST_LISTED = 5


class RotaPage(AnswerPage):
    """Who turns when: planned, judged, changed by hand, posted, re-planned.

    Signals
    -------
    edit_requested(edit: Edit, text: str, merge_key: str)
        A change of the plan, one step to undo; an empty key never merges.
    """

    edit_requested = Signal(object, str, str)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Rota"), parent)
        self.desk, self.hand = RotaDesk(self), BoardHand(self)
        self.tasks = RotaTasks(self.desk, self.hand, self)
        self.verdict, self.state = plain_label(bold=True), plain_label()
        self.told = plain_label()
        self.board, self.table, self.legend = RotaBoard(self.hand), BoutsTable(self.hand), BoardLegend()
        self.work_line = RotaWorkLine()
        self.broken = QListWidget()
        self.unmet = plain_label()
        self.aims = WrappedTable(self.tr("Aims of the rota"))
        self.charging = PlainTable(self.tr("What is on charge when"), most_rows=14)
        self.work, self.rows, self.day, self.view, self.shown = (QComboBox() for _ in range(5))
        self.buttons = self._make_buttons()
        self._titles: dict[QWidget, QWidget] = {}
        self._is_late = False
        self._build()
        self._connect()

    def _make_buttons(self) -> dict[str, SmallButton]:
        texts = {
            "plan": self.tr("&Plan the rota"),
            "adopt": self.tr("&Adopt"),
            "post": self.tr("P&ost…"),
            "replan": self.tr("Re-plan from &now…"),
            "levers": self.tr("What would &make it fit…"),
            "export": self.tr("E&xport"),
            "print": self.tr("P&rint rota…"),
            "charging": self.tr("Renew &charging table"),
        }
        return {key: SmallButton(text) for key, text in texts.items()}

    def _build(self) -> None:
        menu = QMenu(self.buttons["export"])
        for text, kind in (
            (self.tr("Turns and charging as &CSV…"), "csv"),
            (self.tr("CSV with &names…"), "csv names"),
            (self.tr("&Calendars with numbers…"), "ics"),
            (self.tr("Calendars &with names…"), "ics names"),
        ):
            menu.addAction(text).setData(kind)
        menu.triggered.connect(self.tasks.export)
        self.buttons["export"].setMenu(menu)
        self._fill_boxes()
        self.stack = QStackedWidget()
        self.stack.addWidget(self.board)
        self.stack.addWidget(self.table)
        self.broken.setAccessibleName(self.tr("Broken rules"))
        self.broken.setWordWrap(True)
        self.told.setAccessibleName(self.tr("Message"))
        # A room of its own that never changes: nothing moves under the hand that chooses a turn.
        self.told.setAlignment(Qt.AlignmentFlag.AlignTop | Qt.AlignmentFlag.AlignLeft)
        self.told.setText(self.hint())
        self.actions_row, self.choices_row = self._actions(), self._choices()
        for widget in (
            self.verdict,
            self.state,
            self.actions_row,
            self.work_line,
            self.choices_row,
            self.told,
        ):
            self.column.addWidget(widget)
        self.column.setSpacing(5)
        self.column.addWidget(self.stack, 1)
        self.column.addWidget(self.legend)
        for title, part in (
            (self.tr("Broken rules"), self.broken),
            (self.tr("What cannot be met"), self.unmet),
            (self.tr("Aims in their order"), self.aims),
            (self.tr("On charge"), self.charging),
        ):
            self.column.addWidget(self._titled(title, part))

    def _titled(self, title: str, widget: QWidget) -> QWidget:
        box = QWidget()
        layout = QVBoxLayout(box)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        layout.addWidget(plain_label(title, bold=True))
        layout.addWidget(widget)
        self._titles[widget] = box
        return box

    def _fill_boxes(self) -> None:
        for text, steps in (
            (self.tr("quick"), QUICK_WORK),
            (self.tr("usual"), DEFAULT_WORK),
            (self.tr("thorough"), THOROUGH_WORK),
        ):
            self.work.addItem(text, steps)
        self.work.setCurrentIndex(1)
        self.rows.addItem(self.tr("people"), "people")
        self.rows.addItem(self.tr("stations"), "stations")
        self.view.addItem(self.tr("board"), 0)
        self.view.addItem(self.tr("table"), 1)
        self.shown.addItem(self.tr("adopted rota"), False)
        self.shown.addItem(self.tr("proposal"), True)

    def _actions(self) -> ChoiceRow:
        """The buttons in the order of the work, how hard to search in front."""
        return ChoiceRow([(self.tr("Search"), self.work), *(("", button) for button in self.buttons.values())])

    def _choices(self) -> ChoiceRow:
        self.zoom_in, self.zoom_out = SmallButton("+"), SmallButton("−")
        self.zoom_in.setAccessibleName(self.tr("Wider day"))
        self.zoom_out.setAccessibleName(self.tr("Narrower day"))
        self.zoom_in.setToolTip(self.tr("Wider day (+)"))
        self.zoom_out.setToolTip(self.tr("Narrower day (−)"))
        boxes = (
            (self.tr("Day"), self.day),
            (self.tr("Rows"), self.rows),
            (self.tr("As"), self.view),
            (self.tr("Shown"), self.shown),
        )
        self.zoom = QWidget()
        pair = QHBoxLayout(self.zoom)
        pair.setContentsMargins(0, 0, 0, 0)
        pair.addWidget(self.zoom_out)
        pair.addWidget(self.zoom_in)
        return ChoiceRow([*boxes, ("", self.zoom)])

    def _connect(self) -> None:
        actions: dict[str, Callable[[], None]] = {
            "plan": self.plan_rota,
            "adopt": self.desk.adopt,
            "post": self.tasks.post,
            "replan": self.tasks.ask_replan,
            "levers": self.desk.find_levers,
            "print": self.tasks.print_rota,
            "charging": self.desk.renew_charging,
        }
        for key, act in actions.items():
            self.buttons[key].clicked.connect(act)
        self.zoom_in.clicked.connect(self._on_zoom_in)
        self.zoom_out.clicked.connect(self._on_zoom_out)
        for box in (self.day, self.rows, self.view, self.shown, self.work):
            box.currentIndexChanged.connect(self._on_choice)
        self.tasks.work = int(self.work.currentData())
        desk, hand = self.desk, self.hand
        desk.edit_requested.connect(self.edit_requested)
        hand.edit_requested.connect(self.edit_requested)
        self.tasks.edit_requested.connect(self.edit_requested)
        self.tasks.told.connect(self.tell)
        desk.changed.connect(self._show)
        desk.began.connect(self._on_began)
        desk.progressed.connect(self._on_progress)
        desk.ended.connect(self._on_ended)
        desk.told.connect(self.tell)
        hand.told.connect(self.tell)
        desk.ghost_judged.connect(self._on_ghost_judged)
        hand.chosen_changed.connect(self._on_chosen)
        self.board.tentative_changed.connect(self._on_tentative)
        self.work_line.stop_requested.connect(desk.run.stop)
        self.broken.itemActivated.connect(self._on_broken)
        self.broken.itemClicked.connect(self._on_broken)
        self._add_key = QShortcut(QKeySequence("Ins"), self)
        self._add_key.activated.connect(self.tasks.add_turn)

    def refresh(self) -> None:
        """Show the plan's rota as it is now."""
        assert self.plan is not None
        self._fill_days(self.plan)
        has_errors = self.results is not None and self.results.has_errors
        if self.plan is self.desk.plan and has_errors == self.desk.has_errors:
            return
        self.desk.set_plan(self.plan, has_errors=has_errors)

    def _fill_days(self, plan: Plan) -> None:
        texts = [day_words(plan, day) for day in range(1, plan.days + 1)]
        wanted = [*texts, self.tr("All days")] if plan.days > 1 else texts
        if wanted == [self.day.itemText(place) for place in range(self.day.count())]:
            return
        self.day.blockSignals(True)
        place = max(0, self.day.currentIndex())
        self.day.clear()
        self.day.addItems(wanted)
        self.day.setCurrentIndex(min(place, len(wanted) - 1))
        self.day.blockSignals(False)

    def days(self) -> tuple[int, ...]:
        """Return the days shown."""
        place, count = max(0, self.day.currentIndex()), self.desk.plan.days
        return (place + 1,) if place < count else tuple(range(1, count + 1))

    @Slot()
    def _show(self) -> None:
        if self.board.is_held:
            self._is_late = True
            return
        self._is_late = False
        self._hold_room()
        desk, data = self.desk, self.desk.board_data()
        self.board.show_as(self.rows.currentData(), self.days())
        self.board.show_data(data)
        self.legend.show_data(data)
        self.table.show_data(data, self.days())
        self._show_words()
        answer = desk.answer
        self._fill(self.charging, charging_data(data.plan, data.charges, self.days()))
        self._fill(self.aims, aims_data(answer) if answer is not None else TableData((), ()))
        sentences = unmet_sentences(desk.plan, answer) if answer is not None else ()
        self.unmet.setText("\n".join(sentences))
        self._titles[self.unmet].setVisible(bool(sentences))
        self._show_broken()
        self._enable()
        if self.hand.chosen or not self.told.text():
            self._on_chosen(self.hand.chosen)

    def _hold_room(self) -> None:
        """Give the message as many lines as the hint needs, two at least; that follows width and text size alone."""
        metrics, wide = self.told.fontMetrics(), max(100, self.told.width())
        hint = metrics.boundingRect(0, 0, wide, 10_000, int(Qt.TextFlag.TextWordWrap), self.hint()).height()
        self.told.setFixedHeight(max(2 * metrics.lineSpacing(), hint) + 2)

    @Slot(object)
    def _on_tentative(self, edit: Edit | None) -> None:
        self.desk.try_edit(edit)
        if edit is None and self._is_late:
            self._show()

    def _fill(self, table: PlainTable, data: TableData) -> None:
        table.set_data(data)
        self._titles[table].setVisible(bool(data.rows))

    def _show_words(self) -> None:
        verdict, state = head_words(self.desk)
        self.verdict.setText(verdict)
        self.state.setText(state)
        self.state.setVisible(bool(state))

    def _show_broken(self) -> None:
        found = self.desk.violations
        texts = [violation_sentence(one) for one in found]
        if texts != [self.broken.item(place).text() for place in range(self.broken.count())]:
            self.broken.clear()
            self.broken.addItems(texts)
        line = self.fontMetrics().height()
        self.broken.setFixedHeight(round(line * 1.9 * min(_MOST_LISTED, max(1, len(texts)))) + 8)
        self._titles[self.broken].setVisible(bool(texts))

    def _enable(self) -> None:
        desk = self.desk
        has_rota, sound = desk.plan.rota is not None, not desk.has_errors
        able = {
            "plan": (sound, self.tr("The plan has problems; put them right first.")),
            "adopt": (desk.proposal is not None and not desk.is_stale, self.tr("Plan the rota first.")),
            "post": (has_rota and not desk.is_proposal, self.tr("Adopt a rota first.")),
            "replan": (has_rota and sound, self.tr("Adopt a rota first.")),
            "levers": (sound, self.tr("The plan has problems; put them right first.")),
            "export": (has_rota or desk.proposal is not None, self.tr("Plan the rota first.")),
            "print": (has_rota or desk.proposal is not None, self.tr("Plan the rota first.")),
        }
        busy = desk.run.is_busy
        for key, (may, why) in able.items():
            waits = busy and key in ("plan", "replan", "levers", "adopt")
            self.buttons[key].setEnabled(may and not waits)
            self.buttons[key].setToolTip("" if may else why)
        self.actions_row.show_choice(self.buttons["charging"], desk.charging_is_older)
        self.shown.blockSignals(True)
        self.shown.setCurrentIndex(1 if desk.is_proposal else 0)
        self.shown.blockSignals(False)
        self.choices_row.show_choice(self.shown, desk.proposal is not None and has_rota)

    def hint(self) -> str:
        """Return what can be done by hand, where nothing else is to be said."""
        if self.desk.plan.rota is None or self.desk.is_proposal:
            return ""
        return self.tr(
            "Drag a turn, or choose one: arrows move it, Shift+arrows resize, H hands over, S swaps, L locks, "
            "Enter edits, Delete removes, Insert adds."
        )

    @Slot(str)
    def tell(self, text: str) -> None:
        """Say one sentence."""
        self.told.setText(text or self.hint())
        self.told.setToolTip(as_tool_tip(text) if text else "")
        announce(self.told, text)

    @Slot()
    def plan_rota(self) -> None:
        """Look for a rota."""
        self.tell("")
        self.desk.find(int(self.work.currentData()))

    @Slot(str)
    def _on_chosen(self, bout_id: str) -> None:
        bout, data = self.hand.bout(bout_id), self.hand.data
        broken = data.breaks.get(bout_id, ())
        if bout is None:
            self.tell("")
        elif broken:
            more = self.tr(" {count} more, see below.").format(count=len(broken) - 1) if len(broken) > 1 else ""
            self.tell(self.tr("Broken rule: {text}").format(text=plain(broken[0])) + more)
        else:
            self.tell(plain(data.sentence(bout)))

    @Slot(object)
    def _on_ghost_judged(self, sentences: tuple[str, ...]) -> None:
        self.board.show_ghost_breaks(sentences)
        if sentences:
            self.tell(plain(sentences[0]))

    @Slot(object)
    def _on_broken(self, _item: object) -> None:
        place = self.broken.currentRow()
        found = self.desk.violations[place] if 0 <= place < len(self.desk.violations) else None
        if found is None:
            return
        if self.days() != (found.day,) and self.day.currentIndex() < self.desk.plan.days:
            self.day.setCurrentIndex(found.day - 1)
        for bout in self.hand.data.bouts:
            if found.text in self.hand.data.breaks.get(bout.id, ()):
                self.hand.choose(bout.id)
                self.board.reveal()
                return

    @Slot()
    def _on_zoom_in(self) -> None:
        self.board.zoom_by(1)

    @Slot()
    def _on_zoom_out(self) -> None:
        self.board.zoom_by(-1)

    @Slot()
    def _on_choice(self) -> None:
        self.stack.setCurrentIndex(int(self.view.currentData()))
        self.legend.setVisible(self.stack.currentWidget() is self.board)
        self.choices_row.show_choice(self.zoom, self.stack.currentWidget() is self.board)
        self.tasks.work, self.tasks.day = int(self.work.currentData()), self.days()[0]
        self.desk.show_proposal(bool(self.shown.currentData()))
        self._show()

    @Slot(str)
    def _on_began(self, what: str) -> None:
        self.work_line.begin(what)
        self._enable()

    @Slot(object)
    def _on_progress(self, moment: RotaProgress) -> None:
        self.work_line.tell(progress_words(moment))

    @Slot()
    def _on_ended(self) -> None:
        self.work_line.end()
        self._enable()
