"""The Rota page: verdict, what to do, the board or its table, broken rules, unmet use, aims, charging."""

from __future__ import annotations

from collections.abc import Callable

from msgspec import structs
from PySide6.QtCore import Signal, Slot
from PySide6.QtGui import QAction, QKeySequence, QShortcut
from PySide6.QtWidgets import QComboBox, QInputDialog, QListWidget, QMenu, QStackedWidget, QVBoxLayout, QWidget

from kitplanner.plan import edits_rota
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Bout, Plan
from kitplanner.planners.rota.result import RotaAnswer, RotaProgress
from kitplanner.planners.rota.solver import DEFAULT_WORK
from kitplanner.report.wording import counted, plain
from kitplanner.report.wording_rota import (
    day_words,
    remark_sentence,
    unmet_sentences,
    verdict_lines,
    violation_sentence,
)
from kitplanner.session.rota_run import Levered, Replanned
from kitplanner.ui.board.board_access import announce
from kitplanner.ui.board.board_data import ShownBout
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.board.board_legend import BoardLegend
from kitplanner.ui.board.bouts_table import BoutsTable
from kitplanner.ui.board.rota_board import RotaBoard
from kitplanner.ui.pages import rota_export
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.chart_frame import plain_label
from kitplanner.ui.pages.plain_table import PlainTable, TableData
from kitplanner.ui.pages.rota_bout_form import BoutForm, HandOverDialog
from kitplanner.ui.pages.rota_choices import ChoiceRow
from kitplanner.ui.pages.rota_desk import RotaDesk
from kitplanner.ui.pages.rota_levers_dialog import LeversDialog
from kitplanner.ui.pages.rota_replan_dialog import ReplanDialog, ReplanResultDialog
from kitplanner.ui.pages.rota_words import aims_data, charging_data, progress_words, rota_state
from kitplanner.ui.pages.rota_work_line import RotaWorkLine
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
        self.verdict, self.state = plain_label(size="title", bold=True), plain_label()
        self.told = plain_label()
        self.board, self.table, self.legend = RotaBoard(self.hand), BoutsTable(self.hand), BoardLegend()
        self.work_line = RotaWorkLine()
        self.broken = QListWidget()
        self.unmet = plain_label()
        self.aims = PlainTable(self.tr("Aims of the rota"))
        self.charging = PlainTable(self.tr("What is on charge when"), most_rows=14)
        self.work, self.rows, self.day, self.view, self.shown = (QComboBox() for _ in range(5))
        self.buttons = self._make_buttons()
        self._titles: dict[QWidget, QWidget] = {}
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
        menu.triggered.connect(self._on_export)
        self.buttons["export"].setMenu(menu)
        self._fill_boxes()
        self.stack = QStackedWidget()
        self.stack.addWidget(self.board)
        self.stack.addWidget(self.table)
        self.broken.setAccessibleName(self.tr("Broken rules"))
        self.broken.setWordWrap(True)
        self.told.setAccessibleName(self.tr("Message"))
        for widget in (
            self.verdict,
            self.state,
            self._actions(),
            self.work_line,
            self._choices(),
            self.told,
            self.legend,
        ):
            self.column.addWidget(widget)
        self.column.setSpacing(8)
        self.column.addWidget(self.stack, 1)
        for title, widget in (
            (self.tr("Broken rules"), self.broken),
            (self.tr("What cannot be met"), self.unmet),
            (self.tr("Aims in their order"), self.aims),
            (self.tr("On charge"), self.charging),
        ):
            self.column.addWidget(self._titled(title, widget))

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

    def _actions(self) -> QWidget:
        """The buttons in the order of the work, how hard to search in front."""
        return ChoiceRow([(self.tr("Search"), self.work), *(("", button) for button in self.buttons.values())])

    def _choices(self) -> QWidget:
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
        return ChoiceRow([*boxes, ("", self.zoom_out), ("", self.zoom_in)])

    def _connect(self) -> None:
        actions: dict[str, Callable[[], None]] = {
            "plan": self.plan_rota,
            "adopt": self.desk.adopt,
            "post": self.post,
            "replan": self.ask_replan,
            "levers": self.desk.find_levers,
            "print": self.print_rota,
            "charging": self.desk.renew_charging,
        }
        for key, act in actions.items():
            self.buttons[key].clicked.connect(act)
        self.zoom_in.clicked.connect(self._on_zoom_in)
        self.zoom_out.clicked.connect(self._on_zoom_out)
        for box in (self.day, self.rows, self.view, self.shown):
            box.currentIndexChanged.connect(self._on_choice)
        desk, hand = self.desk, self.hand
        desk.edit_requested.connect(self.edit_requested)
        hand.edit_requested.connect(self.edit_requested)
        desk.changed.connect(self._show)
        desk.began.connect(self._on_began)
        desk.progressed.connect(self._on_progress)
        desk.ended.connect(self._on_ended)
        desk.told.connect(self.tell)
        hand.told.connect(self.tell)
        desk.replanned.connect(self._on_replanned)
        desk.levered.connect(self._on_levered)
        desk.ghost_judged.connect(self._on_ghost_judged)
        hand.form_requested.connect(self._on_form)
        hand.hand_over_requested.connect(self._on_hand_over)
        hand.chosen_changed.connect(self._on_chosen)
        self.board.tentative_changed.connect(desk.try_edit)
        self.work_line.stop_requested.connect(desk.run.stop)
        self.broken.itemActivated.connect(self._on_broken)
        self.broken.itemClicked.connect(self._on_broken)
        self._add_key = QShortcut(QKeySequence("Ins"), self)
        self._add_key.activated.connect(self.add_turn)

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

    def _fill(self, table: PlainTable, data: TableData) -> None:
        table.set_data(data)
        self._titles[table].setVisible(bool(data.rows))

    def _show_words(self) -> None:
        desk, answer = self.desk, self.desk.answer
        lines: tuple[str, ...]
        if desk.has_errors:
            lines = (self.tr("The plan has problems that stop the calculation; they are listed with the plan."),)
        elif answer is not None and (desk.is_proposal or desk.is_followed):
            lines = verdict_lines(desk.plan, answer)
        elif desk.plan.rota is not None:
            broken = len(desk.violations)
            said = counted(broken, "rule is broken", "rules are broken") if broken else self.tr("every rule is kept")
            judged = said[0].upper() + said[1:] if desk.is_judged else self.tr("The rota is being judged")
            lines = (self.tr("{judged}; needs and stores are being worked out.").format(judged=judged),)
        else:
            lines = (self.tr("No rota yet. Plan one, look at it, adopt it; nothing changes before."),)
        self.verdict.setText(lines[0])
        more = list(lines[1:])
        if desk.is_proposal:
            more.append(self.tr("A proposal: nothing holds until it is adopted."))
            if desk.is_stale:
                more.append(self.tr("The plan has changed since; plan the rota anew."))
            if desk.proposal is not None:
                more += [remark_sentence(desk.plan, remark) for remark in desk.proposal.remarks]
        if desk.plan.rota is not None:
            more.append(rota_state(desk.plan, desk.plan.rota))
        if desk.charging_is_older:
            more.append(self.tr("The charging table was made for other turns; renew it when the turns are settled."))
        self.state.setText(" ".join(more))
        self.state.setVisible(bool(more))

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
        self.buttons["charging"].parentWidget().setVisible(desk.charging_is_older)
        self.shown.blockSignals(True)
        self.shown.setCurrentIndex(1 if desk.is_proposal else 0)
        self.shown.blockSignals(False)
        self.shown.parentWidget().setVisible(desk.proposal is not None and has_rota)

    @Slot(str)
    def tell(self, text: str) -> None:
        """Say one sentence."""
        self.told.setText(text)
        self.told.setVisible(bool(text))
        announce(self.told, text)

    @Slot()
    def plan_rota(self) -> None:
        """Look for a rota."""
        self.tell("")
        self.desk.find(int(self.work.currentData()))

    @Slot()
    def post(self) -> None:
        """Ask how long the rota holds and post it; not while a rule about people or stations is broken."""
        plan = self.desk.plan
        hurting = [one for one in self.desk.violations if one.person or one.station]
        if hurting or not self.desk.is_judged:
            why = violation_sentence(hurting[0]) if hurting else self.tr("The rota is being judged still.")
            self.tell(self.tr("It is not posted: {why}").format(why=why))
            return
        days = [day_words(plan, day) for day in range(1, plan.days + 1)]
        title, question = self.tr("Post the rota"), self.tr("Valid until the end of")
        text, ok = QInputDialog.getItem(self, title, question, days, len(days) - 1, False)
        if ok:
            self.desk.post(days.index(text) + 1)

    @Slot()
    def ask_replan(self) -> None:
        """Ask for the moment and what has happened."""
        dialog = ReplanDialog(self.desk.plan, self)
        if self.desk.now is not None:
            dialog.begin_at(*self.desk.now)
        else:
            dialog.begin_at(self.days()[0], 8 * 60)
        dialog.now_given.connect(self._on_now)
        dialog.open()

    @Slot(object)
    def _on_now(self, now: Now) -> None:
        self.desk.replan(now, int(self.work.currentData()))

    @Slot(object)
    def _on_replanned(self, replanned: Replanned) -> None:
        dialog = ReplanResultDialog(replanned, self)
        self._replanned = replanned
        dialog.taken.connect(self._on_taken)
        dialog.open()

    @Slot()
    def _on_taken(self) -> None:
        self.desk.take_replan(self._replanned)

    @Slot(object)
    def _on_levered(self, levered: Levered) -> None:
        dialog = LeversDialog(levered, self)
        dialog.chosen.connect(self.desk.pull_levers)
        dialog.open()

    @Slot()
    def print_rota(self) -> None:
        """Show the wall rota as it will be printed."""
        rota_export.print_rota(self, self.desk.plan, self._proposed())

    def _proposed(self) -> RotaAnswer | None:
        return self.desk.answer if self.desk.is_proposal else None

    @Slot(QAction)
    def _on_export(self, action: QAction) -> None:
        kind = str(action.data())
        rota = rota_export.rota_of(self.desk.plan, self._proposed())
        if rota is None:
            return
        export = rota_export.export_csv if kind.startswith("csv") else rota_export.export_calendars
        self.tell(export(self, self.desk.plan, rota, names=kind.endswith("names")))

    @Slot()
    def add_turn(self) -> None:
        """Open the form of a new turn."""
        data = self.hand.data
        if not data.editable or not data.plan.people or not data.plan.stations:
            self.tell(self.tr("Turns can be added to an adopted rota with people and stations."))
            return
        station = data.plan.stations[0]
        start = self.board.hours()[0] + 60
        person = data.plan.people[0].id
        fresh = ShownBout("", self.days()[0], start, start + station.slot_min, station.id, 1, person)
        self._on_form(fresh, True)

    @Slot(object, bool)
    def _on_form(self, bout: ShownBout, is_new: bool) -> None:
        form = BoutForm(self.hand.data, bout, self, is_new=is_new)
        form.accepted_bout.connect(self._on_form_done)
        form.open()

    @Slot(object)
    def _on_form_done(self, bout: Bout) -> None:
        names = self.hand.data.person_names
        who = names.get(bout.person, bout.person)
        if bout.id:
            text = self.tr("Edit {who}'s turn at {start}").format(who=who, start=bout.start)
            self.edit_requested.emit(edits_rota.replace_bout(bout), text, "")
            return
        new = edits_rota.new_bout_id(self.desk.plan)
        text = self.tr("Add {who}'s turn at {start}").format(who=who, start=bout.start)
        self.edit_requested.emit(edits_rota.add_bout(_with_id(bout, new)), text, "")
        self.hand.choose(new)

    @Slot(str)
    def _on_hand_over(self, bout_id: str) -> None:
        bout = self.hand.bout(bout_id)
        if bout is not None:
            dialog = HandOverDialog(self.hand.data, bout, self)
            dialog.person_chosen.connect(self.hand.give_to)
            dialog.open()

    @Slot(str)
    def _on_chosen(self, bout_id: str) -> None:
        bout = self.hand.bout(bout_id)
        self.tell(plain(self.hand.data.sentence(bout)) if bout is not None else "")

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
        self.desk.show_proposal(bool(self.shown.currentData()))
        self._show()

    @Slot(str, int)
    def _on_began(self, what: str, steps: int) -> None:
        self.work_line.begin(what, steps)
        self._enable()

    @Slot(object)
    def _on_progress(self, moment: RotaProgress) -> None:
        self.work_line.tell(progress_words(moment), moment.steps)

    @Slot()
    def _on_ended(self) -> None:
        self.work_line.end()
        self._enable()


def _with_id(bout: Bout, bout_id: str) -> Bout:
    return structs.replace(bout, id=bout_id)
