"""What the rota page asks in dialogs: how long it is posted, what has happened, which lever, a turn's values."""

from __future__ import annotations

from msgspec import structs
from PySide6.QtCore import QObject, Signal, Slot
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QInputDialog, QWidget

from kitplanner.plan import edits_rota
from kitplanner.plan.edits_replan import Now
from kitplanner.plan.records import Bout
from kitplanner.planners.rota.result import RotaAnswer
from kitplanner.report.wording_rota import day_words, violation_sentence
from kitplanner.session.rota_run import Levered, Replanned
from kitplanner.ui.board.board_data import ShownBout
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.pages import rota_export
from kitplanner.ui.pages.rota_bout_form import BoutForm, HandOverDialog
from kitplanner.ui.pages.rota_desk import RotaDesk
from kitplanner.ui.pages.rota_levers_dialog import LeversDialog
from kitplanner.ui.pages.rota_replan_dialog import ReplanDialog, ReplanResultDialog

_MORNING_MIN = 8 * 60


class RotaTasks(QObject):
    """Dialogs of the rota page.

    Signals
    -------
    edit_requested(edit: Edit, text: str, merge_key: str)
        A change of the plan.
    told(text: str)
        One sentence for the user.
    """

    edit_requested = Signal(object, str, str)
    told = Signal(str)

    def __init__(self, desk: RotaDesk, hand: BoardHand, window: QWidget) -> None:
        super().__init__(window)
        self._desk, self._hand, self._window = desk, hand, window
        self._replanned: Replanned | None = None
        self.work = 0
        self.day = 1
        desk.replanned.connect(self._on_replanned)
        desk.levered.connect(self._on_levered)
        hand.form_requested.connect(self._on_form)
        hand.hand_over_requested.connect(self._on_hand_over)

    @Slot()
    def post(self) -> None:
        """Ask how long the rota holds and post it; not while a rule about people or stations is broken."""
        plan = self._desk.plan
        hurting = [one for one in self._desk.violations if one.person or one.station]
        if hurting or not self._desk.is_judged:
            why = violation_sentence(hurting[0]) if hurting else self.tr("The rota is being judged still.")
            self.told.emit(self.tr("It is not posted: {why}").format(why=why))
            return
        days = [day_words(plan, day) for day in range(1, plan.days + 1)]
        title, question = self.tr("Post the rota"), self.tr("Valid until the end of")
        text, ok = QInputDialog.getItem(self._window, title, question, days, len(days) - 1, False)
        if ok:
            self._desk.post(days.index(text) + 1)

    @Slot()
    def ask_replan(self) -> None:
        """Ask for the moment and what has happened."""
        dialog = ReplanDialog(self._desk.plan, self._window)
        if self._desk.now is not None:
            dialog.begin_at(*self._desk.now)
        else:
            dialog.begin_at(self.day, _MORNING_MIN)
        dialog.now_given.connect(self._on_now)
        dialog.open()

    @Slot(object)
    def _on_now(self, now: Now) -> None:
        self._desk.replan(now, self.work)

    @Slot(object)
    def _on_replanned(self, replanned: Replanned) -> None:
        dialog = ReplanResultDialog(replanned, self._window)
        self._replanned = replanned
        dialog.taken.connect(self._on_taken)
        dialog.open()

    @Slot()
    def _on_taken(self) -> None:
        if self._replanned is not None:
            self._desk.take_replan(self._replanned)

    @Slot(object)
    def _on_levered(self, levered: Levered) -> None:
        dialog = LeversDialog(levered, self._window)
        dialog.chosen.connect(self._desk.pull_levers)
        dialog.open()

    @Slot()
    def print_rota(self) -> None:
        """Show the wall rota as it will be printed."""
        rota_export.print_rota(self._window, self._desk.plan, self.proposed())

    def proposed(self) -> RotaAnswer | None:
        """Return the proposal where it is shown."""
        return self._desk.answer if self._desk.is_proposal else None

    @Slot(QAction)
    def export(self, action: QAction) -> None:
        """Write what a menu line says: CSV or calendars, with names or without."""
        kind = str(action.data())
        rota = rota_export.rota_of(self._desk.plan, self.proposed())
        if rota is None:
            return
        export = rota_export.export_csv if kind.startswith("csv") else rota_export.export_calendars
        self.told.emit(export(self._window, self._desk.plan, rota, names=kind.endswith("names")))

    @Slot()
    def add_turn(self) -> None:
        """Open the form of a new turn."""
        data = self._hand.data
        if not data.editable or not data.plan.people or not data.plan.stations:
            self.told.emit(self.tr("Turns can be added to an adopted rota with people and stations."))
            return
        station = data.plan.stations[0]
        start = _MORNING_MIN
        person = data.plan.people[0].id
        fresh = ShownBout("", self.day, start, start + station.slot_min, station.id, 1, person)
        self._on_form(fresh, True)

    @Slot(object, bool)
    def _on_form(self, bout: ShownBout, is_new: bool) -> None:
        form = BoutForm(self._hand.data, bout, self._window, is_new=is_new)
        form.accepted_bout.connect(self._on_form_done)
        form.open()

    @Slot(object)
    def _on_form_done(self, bout: Bout) -> None:
        names = self._hand.data.person_names
        who = names.get(bout.person, bout.person)
        if bout.id:
            text = self.tr("Edit {who}'s turn at {start}").format(who=who, start=bout.start)
            self.edit_requested.emit(edits_rota.replace_bout(bout), text, "")
            return
        new = edits_rota.new_bout_id(self._desk.plan)
        text = self.tr("Add {who}'s turn at {start}").format(who=who, start=bout.start)
        self.edit_requested.emit(edits_rota.add_bout(_with_id(bout, new)), text, "")
        self._hand.choose(new)

    @Slot(str)
    def _on_hand_over(self, bout_id: str) -> None:
        bout = self._hand.bout(bout_id)
        if bout is not None:
            dialog = HandOverDialog(self._hand.data, bout, self._window)
            dialog.person_chosen.connect(self._hand.give_to)
            dialog.open()


def _with_id(bout: Bout, bout_id: str) -> Bout:
    return structs.replace(bout, id=bout_id)
