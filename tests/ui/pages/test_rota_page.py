"""The Rota page: planned on a thread, adopted as one step, judged after every hand edit, posted, re-planned."""

from __future__ import annotations

import csv
import threading
from dataclasses import replace

import pytest
from msgspec import structs
from PySide6.QtCore import QCoreApplication, QEvent, QPoint, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QInputDialog, QLabel, QWidget

from kitplanner.plan.edits_replan import Now
from kitplanner.plan.edits_rota import move_bout
from kitplanner.plan.records import Store
from kitplanner.planners import pipeline
from kitplanner.planners.rota.check import judge
from kitplanner.session.document import PlanDocument
from kitplanner.session.rota_run import Ask, Levered, RefusedError, find_levers, fitting_charging
from kitplanner.ui import theme
from kitplanner.ui.pages import rota_export
from kitplanner.ui.pages.plain_table import TableData
from kitplanner.ui.pages.rota_bout_form import BoutForm, HandOverDialog
from kitplanner.ui.pages.rota_desk import same_charging
from kitplanner.ui.pages.rota_levers_dialog import LeversDialog
from kitplanner.ui.pages.rota_page import RotaPage
from kitplanner.ui.pages.rota_replan_dialog import ReplanDialog, ReplanResultDialog
from kitplanner.ui.pages.rota_wrapped_table import WrappedTable
from tests.ui.board.boards import small_plan


def needy(**changes):
    """The small plan whose radios start empty."""
    plan = small_plan(rota=None, **changes)
    radio = structs.replace(plan.devices[0], start_fraction=0.1, use_wh_per_day=6.0)
    return structs.replace(plan, devices=(radio,), stores=(Store(id="b", name="Bank", start_fraction=0.3),))


class Desk:
    """A page with a document, joined as the window joins them."""

    def __init__(self, qtbot, plan, *, owned=True) -> None:
        self.qtbot = qtbot
        self.document = PlanDocument(plan)
        self.page = RotaPage()
        self.document.setParent(self.page)
        if owned:
            qtbot.addWidget(self.page)
        self.page.edit_requested.connect(self._apply)
        self.document.plan_changed.connect(self._show)
        self.page.resize(900, 900)
        self.page.show()
        self._show(None, plan)

    def _apply(self, edit, text, key) -> None:
        self.document.apply(edit, text, key or None)

    def _show(self, _before, after) -> None:
        self.page.set_answers(after, pipeline.run_quick(after, None))
        self.page.catch_up()

    @property
    def plan(self):
        return self.document.plan

    @property
    def desk(self):
        return self.page.desk

    def settle(self) -> None:
        """Wait until all answers are there."""
        self.qtbot.waitUntil(lambda: not self.desk.run.is_busy, timeout=40_000)
        if self.plan.rota is not None and not self.desk.has_errors:
            self.qtbot.waitUntil(lambda: self.desk.is_followed and self.desk.is_judged, timeout=40_000)

    def find(self) -> None:
        """Look for a rota and wait for it."""
        self.page.plan_rota()
        self.qtbot.waitUntil(lambda: self.desk.proposal is not None, timeout=40_000)

    def steps(self) -> list[str]:
        stack = self.document.stack
        return [stack.text(place) for place in range(stack.count())]


@pytest.fixture
def legal():
    """The small plan with the charging table that fits its turns."""
    plan = small_plan()
    return structs.replace(plan, rota=structs.replace(plan.rota, charging=fitting_charging(plan)))


@pytest.fixture
def bare(qtbot):
    made = Desk(qtbot, needy())
    yield made
    made.desk.close()


@pytest.fixture
def adopted(qtbot, legal):
    made = Desk(qtbot, legal)
    made.settle()
    yield made
    made.desk.close()


def dialog(kind):
    return next(one for one in QApplication.topLevelWidgets() if isinstance(one, kind) and one.isVisible())


def test_nothing_is_solved_unasked(bare):
    assert "No rota yet" in bare.page.verdict.text()
    assert not bare.desk.run.is_busy
    assert not bare.page.buttons["adopt"].isEnabled()
    assert bare.page.buttons["adopt"].toolTip()


def test_a_found_rota_is_a_proposal_and_adopting_it_is_one_step(bare):
    before = bare.plan
    bare.find()
    assert bare.plan is before
    assert bare.document.stack.count() == 0
    assert not bare.page.hand.data.editable
    assert "A proposal" in bare.page.state.text()
    assert bare.page.aims.model().rowCount() > 0
    bare.page.buttons["adopt"].click()
    assert bare.steps() == ["Adopt the rota"]
    assert bare.plan.rota.bouts
    assert bare.desk.proposal is None
    assert bare.page.hand.data.editable
    assert bare.page.aims.model().rowCount() > 0, "the aims stay known for the rota as adopted"
    bare.document.stack.undo()
    assert bare.plan == before


def test_a_proposal_of_an_older_plan_cannot_be_adopted(bare):
    bare.find()
    bare.document.apply(lambda plan: structs.replace(plan, margin_fraction=0.3), "margin")
    assert bare.desk.is_stale
    assert not bare.page.buttons["adopt"].isEnabled()
    bare.desk.adopt()
    assert "anew" in bare.page.told.text()
    assert bare.plan.rota is None


def test_a_new_title_makes_nothing_stale(bare):
    bare.find()
    bare.document.apply(lambda plan: structs.replace(plan, title="Summer"), "title")
    assert not bare.desk.is_stale


def test_work_under_way_is_told_and_can_be_stopped(bare, monkeypatch):
    gate = threading.Event()
    monkeypatch.setattr("kitplanner.session.rota_run.find_rota", lambda *_args: gate.wait(20))
    bare.page.plan_rota()
    assert bare.page.work_line.isVisible()
    assert not bare.page.buttons["plan"].isEnabled()
    with bare.qtbot.waitSignal(bare.desk.ended, timeout=450):
        QTest.mouseClick(bare.page.work_line.stop, Qt.MouseButton.LeftButton)
    assert not bare.page.work_line.isVisible()
    assert bare.page.buttons["plan"].isEnabled()
    gate.set()


def test_a_refusal_is_shown_as_a_sentence(bare, monkeypatch):
    def refuses(*_args):
        raise RefusedError("The locked turns break a rule.")

    monkeypatch.setattr("kitplanner.session.rota_run.find_rota", refuses)
    bare.page.plan_rota()
    bare.settle()
    assert bare.page.told.text() == "The locked turns break a rule."
    assert bare.page.told.isVisible()


def test_an_adopted_rota_is_judged_and_read_without_being_solved(adopted):
    assert adopted.page.broken.count() == 0
    assert "rule is kept" in adopted.page.verdict.text()
    assert adopted.page.state.text().startswith("Version 1, draft")
    assert all(bout.output_wh is not None for bout in adopted.page.hand.data.bouts)


def test_a_hand_edit_is_one_step_and_a_broken_rule_is_named_where_it_happens(adopted):
    page = adopted.page
    page.hand.choose("b1")
    page.hand.apply(page.hand.bout(), replace(page.hand.bout(), start_min=12 * 60, end_min=12 * 60 + 20))
    assert adopted.steps() == ["Move Quorin's turn at 08:30 to 12:00"]
    adopted.settle()
    expected = [one.text for one in judge(adopted.plan, adopted.plan.rota) if one.person]
    assert list(page.hand.data.breaks["b1"]) == expected
    assert page.broken.isVisible()
    assert "Broken rule" in page.told.text()
    assert "broken" in page.verdict.text()
    adopted.document.stack.undo()
    adopted.settle()
    assert page.broken.count() == 0


def test_repeated_key_strokes_are_one_step_to_undo(adopted):
    adopted.page.hand.choose("b1")
    for _ in range(3):
        adopted.page.hand.step(1)
    assert adopted.document.stack.count() == 1
    assert adopted.plan.rota.bouts[0].start == "08:45"
    adopted.page.hand.choose("b4")
    adopted.page.hand.step(1)
    assert adopted.document.stack.count() == 2


def test_the_turn_in_the_hand_is_judged_while_it_is_held(adopted):
    with adopted.qtbot.waitSignal(adopted.desk.ghost_judged, timeout=10_000) as caught:
        adopted.desk.try_edit(move_bout("b1", 1, 12 * 60))
    assert any("Meal" in text or "meal" in text for text in caught.args[0])
    assert adopted.document.stack.count() == 0


def test_choosing_a_broken_rule_goes_to_its_turn(adopted):
    adopted.document.apply(move_bout("b4", 2, 12 * 60), "move")
    adopted.settle()
    page = adopted.page
    row = next(place for place, found in enumerate(adopted.desk.violations) if found.person)
    page.broken.setCurrentRow(row)
    page.broken.itemActivated.emit(page.broken.item(row))
    assert page.hand.chosen == "b4"
    assert page.days() == (2,)


def test_another_charging_table_can_be_put_beside_changed_turns(adopted):
    page = adopted.page
    assert not adopted.desk.charging_is_older
    adopted.document.apply(move_bout("b1", 1, 9 * 60 + 30), "move")
    adopted.settle()
    assert adopted.desk.charging_is_older
    assert not page.buttons["charging"].isHidden()
    page.buttons["charging"].click()
    adopted.settle()
    assert adopted.steps()[-1] == "Renew the charging table"
    assert not adopted.desk.charging_is_older


def test_posting_asks_until_when_and_gives_the_next_edition_to_changes(adopted, monkeypatch):
    monkeypatch.setattr(QInputDialog, "getItem", lambda *args: (args[3][0], True))
    adopted.page.buttons["post"].click()
    rota = adopted.plan.rota
    assert (rota.state, rota.edition, rota.valid_until_day) == ("posted", 1, 1)
    adopted.page.hand.choose("b1")
    adopted.page.hand.step(1)
    assert (adopted.plan.rota.state, adopted.plan.rota.edition) == ("draft", 2)


def test_a_rota_with_broken_rules_is_not_posted(adopted):
    adopted.document.apply(move_bout("b1", 1, 12 * 60), "move")
    adopted.settle()
    adopted.page.buttons["post"].click()
    assert adopted.plan.rota.state == "draft"
    assert adopted.page.told.text().startswith("It is not posted: ")


def test_replanning_shows_who_changes_before_it_holds(adopted):
    adopted.desk.replan(Now(day=1, minute=9 * 60, gone=("l3",)), 200)
    adopted.qtbot.waitUntil(
        lambda: any(isinstance(one, ReplanResultDialog) for one in QApplication.topLevelWidgets()), timeout=40_000
    )
    result = dialog(ReplanResultDialog)
    assert "Quorin: no longer turns day 2 09:00" in result.view.toPlainText()
    before = adopted.plan
    result._on_ok()
    assert adopted.steps() == ["Re-plan from day 1, 09:00"]
    assert all(bout.person != "l3" or bout.id == "b1" for bout in adopted.plan.rota.bouts)
    assert adopted.page.hand.data.now == (1, 540)
    adopted.settle()
    assert [one for one in adopted.desk.violations if one.person] == []
    adopted.document.stack.undo()
    assert adopted.plan == before


def test_the_replan_dialog_says_what_is_ticked(qtbot):
    ask = ReplanDialog(small_plan())
    qtbot.addWidget(ask)
    ask.begin_at(2, 615)
    ask.absent.item(1).setCheckState(Qt.CheckState.Checked)
    ask.out["s"].setValue(1)
    ask.hot.setChecked(True)
    ask.air.setValue(33.0)
    now = ask.now()
    assert (now.day, now.minute, now.absent, now.gone, now.air_degc) == (2, 615, ("l3",), (), 33.0)
    assert [(out.station, out.units) for out in now.stations_out] == [("s", 1)]
    ask.gone.setChecked(True)
    assert (ask.now().absent, ask.now().gone) == ((), ("l3",))


def test_the_form_gives_back_what_it_shows_and_refuses_nonsense(qtbot, adopted):
    page = adopted.page
    page.hand.choose("b2")
    page.hand.open_form()
    form = dialog(BoutForm)
    shown = form.bout()
    assert shown == next(one for one in adopted.plan.rota.bouts if one.id == "b2")
    form.end.setTime(form.start.time())
    form._on_ok()
    assert "ends before it starts" in form.problem.text()
    form.end.setTime(form.start.time().addSecs(600))
    form.watcher.setCurrentIndex(0)
    form._on_ok()
    after = next(one for one in adopted.plan.rota.bouts if one.id == "b2")
    assert (after.end, after.watcher) == ("10:10", None)
    assert adopted.steps() == ["Edit Arvik's turn at 10:00"]


def test_a_turn_is_added_by_its_form(adopted):
    adopted.page.tasks.add_turn()
    form = dialog(BoutForm)
    assert form.windowTitle() == "Add a turn"
    form._on_ok()
    assert len(adopted.plan.rota.bouts) == 5
    assert adopted.steps() == ["Add Hesmira's turn at 08:00"]
    assert adopted.page.hand.chosen == adopted.plan.rota.bouts[0].id


def test_hand_over_lists_who_may_and_those_with_most_minutes_left_first(adopted):
    page = adopted.page
    page.hand.choose("b1")
    page.hand.hand_over()
    ask = dialog(HandOverDialog)
    lines = [ask.list.item(place).text() for place in range(ask.list.count())]
    assert lines == ["Hesmira: 15 of 40 min", "Arvik: 20 of 40 min"]
    ask.filter.setText("arv")
    ask.list.setCurrentRow(1)
    ask._on_ok()
    assert adopted.plan.rota.bouts[0].person == "y1"
    assert adopted.steps() == ["Hand over Quorin's turn at 08:30 to Arvik"]


def hungry():
    plan = small_plan(rota=None)
    return structs.replace(plan, devices=(structs.replace(plan.devices[0], use_wh_per_day=60.0),))


def test_a_lever_is_chosen_as_one_edit(qtbot):
    made = Desk(qtbot, hungry())
    made.desk.find_levers()
    made.qtbot.waitUntil(
        lambda: any(isinstance(one, LeversDialog) for one in QApplication.topLevelWidgets()), timeout=60_000
    )
    shown = dialog(LeversDialog)
    view = shown.singles if shown.singles.count() else shown.combinations
    assert not shown.choose.isEnabled()
    view.setCurrentRow(0)
    assert shown.choose.isEnabled()
    shown.choose.click()
    assert len(made.steps()) == 1
    assert made.steps()[0].startswith("Make it fit")
    assert made.plan != hungry()
    made.desk.close()


def test_levers_that_are_not_enough_alone_are_read_but_not_chosen(qtbot):
    levered = find_levers(hungry(), Ask(threading.Event(), lambda _moment: None))
    rows = tuple(structs.replace(row, enough=False) for row in levered.result.singles)
    none_alone = Levered(levered.plan, structs.replace(levered.result, singles=rows, combinations=()))
    shown = LeversDialog(none_alone)
    qtbot.addWidget(shown)
    shown.singles.setCurrentRow(0)
    assert "not enough alone" in shown.singles.item(0).text()
    assert not shown.choose.isEnabled()


def test_turns_and_charging_go_out_as_csv_and_calendars(adopted, tmp_path, monkeypatch):
    monkeypatch.setattr(rota_export.QFileDialog, "getSaveFileName", lambda *_args: (str(tmp_path / "week"), ""))
    monkeypatch.setattr(rota_export.QFileDialog, "getExistingDirectory", lambda *_args: str(tmp_path / "ics"))
    (tmp_path / "ics").mkdir()
    said = rota_export.export_csv(adopted.page, adopted.plan, adopted.plan.rota, names=False)
    assert said == "Wrote 2 files, the first is week.csv."
    rows = list(csv.DictReader((tmp_path / "week.csv").read_text().splitlines()))
    assert [row["person"] for row in rows] == ["l3", "y1", "l1", "l3"]
    assert "Quorin" not in (tmp_path / "week.csv").read_text()
    assert (tmp_path / "week-charging.csv").exists()
    rota_export.export_calendars(adopted.page, adopted.plan, adopted.plan.rota, names=False)
    texts = [path.read_text() for path in (tmp_path / "ics").iterdir()]
    assert texts
    assert all("BEGIN:VCALENDAR" in text and "Quorin" not in text for text in texts)


def test_a_folder_that_cannot_be_written_is_a_sentence(adopted, tmp_path, monkeypatch):
    told = []
    monkeypatch.setattr(rota_export.ask, "tell", lambda _parent, text: told.append(text))
    monkeypatch.setattr(
        rota_export.QFileDialog, "getSaveFileName", lambda *_args: (str(tmp_path / "none" / "week.csv"), "")
    )
    assert rota_export.export_csv(adopted.page, adopted.plan, adopted.plan.rota, names=True) == ""
    assert len(told) == 1


def test_the_wall_paper_is_of_what_is_shown(bare, legal):
    assert rota_export.paper_of(bare.plan, None) is None
    assert rota_export.paper_of(legal, None).subtitle.endswith("version 1, draft")
    bare.find()
    assert "not adopted" in rota_export.paper_of(bare.plan, bare.desk.answer).subtitle


def test_a_plan_with_errors_is_not_worked_on(qtbot):
    made = Desk(qtbot, small_plan(days=0))
    assert "problems" in made.page.verdict.text()
    assert not made.page.buttons["plan"].isEnabled()
    made.desk.close()


def test_whatever_takes_the_focus_has_a_name_and_text_is_plain(adopted):
    nameless = [
        type(widget).__name__
        for widget in adopted.page.findChildren(QWidget)
        if widget.isVisible()
        and widget.focusPolicy() & Qt.FocusPolicy.TabFocus
        and not QAccessible.queryAccessibleInterface(widget).text(QAccessible.Text.Name)
    ]
    assert nameless == []
    labels = {one.textFormat() for one in adopted.page.findChildren(QLabel) if one.isVisible() and not one.buddy()}
    assert labels == {Qt.TextFormat.PlainText}


def test_targets_are_at_least_24_px(adopted):
    page = adopted.page
    for widget in (*page.buttons.values(), page.day, page.rows, page.view, page.work, page.zoom_in, page.zoom_out):
        if widget.isVisible():
            assert min(widget.width(), widget.height()) >= 24, widget.accessibleName()


@pytest.mark.parametrize(("scale", "width"), [(1.0, 600), (2.0, 640)])
def test_nothing_is_wider_than_the_page(adopted, qapp, scale, width):
    try:
        theme.apply(qapp, "light", scale)
        adopted.page.resize(width, 900)
        adopted.qtbot.wait(120)
        assert adopted.page.column.parentWidget().width() <= width
        row = adopted.page.actions_row
        inside = [one for one in row.children() if isinstance(one, QWidget) and one.isVisible()]
        assert max(one.geometry().bottom() for one in inside) <= row.height()
        assert max(one.geometry().right() for one in inside) <= row.width()
    finally:
        theme.apply(qapp, "light", 1.0)
        qapp.setStyleSheet("")


def test_the_table_is_a_second_view(adopted):
    page = adopted.page
    page.view.setCurrentIndex(1)
    assert page.table.isVisible()
    assert not page.board.isVisible()
    assert page.table.turns.rowCount() == 3
    page.day.setCurrentIndex(2)
    assert page.table.turns.rowCount() == 4


def test_the_window_closes_while_work_is_under_way(qtbot, qapp):
    made = Desk(qtbot, needy(), owned=False)
    made.page.plan_rota()
    assert made.desk.run.is_busy
    made.page.deleteLater()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)


def test_nothing_moves_under_the_hand(adopted):
    page = adopted.page
    top = page.board.mapTo(page, QPoint(0, 0)).y()
    bout = page.hand.bout("b1")
    start = page.board.rect_of(bout).center().toPoint()
    QTest.mousePress(page.board.viewport(), Qt.MouseButton.LeftButton, pos=start)
    QTest.mouseMove(page.board.viewport(), start + QPoint(40, 0))
    page.tell("A sentence that is long enough to need more than one line of the page. " * 4)
    adopted.document.apply(move_bout("b4", 2, 12 * 60), "move")
    adopted.qtbot.wait(100)
    assert page.board.mapTo(page, QPoint(0, 0)).y() == top
    assert page.hand.bout("b4").start_min == 9 * 60, "shown once the hand is empty"
    QTest.mouseRelease(page.board.viewport(), Qt.MouseButton.LeftButton, pos=start + QPoint(40, 0))
    assert page.hand.bout("b4").start_min == 12 * 60
    assert page.hand.bout("b1").start_min > bout.start_min


def test_rounding_is_no_other_charging_table(legal):
    spells = legal.rota.charging
    nearly = tuple(structs.replace(spell, id="x", energy_wh=spell.energy_wh + 1e-9) for spell in spells)
    other = tuple(structs.replace(spell, energy_wh=spell.energy_wh + 0.5) for spell in spells)
    assert spells
    assert same_charging(spells, nearly)
    assert not same_charging(spells, other)
    assert not same_charging(spells, spells[1:])


def test_sentences_in_a_table_wrap_at_any_width_without_being_laid_out_for_ever(qtbot):
    rows = tuple((f"aim {n}", "1.0", "0.5", "at most a little above the least possible " * (n + 1)) for n in range(8))
    table = WrappedTable("Aims")
    qtbot.addWidget(table)
    table.set_data(TableData(("aim", "reached", "bound", "gap"), rows))
    table.show()
    high = {}
    for width in (*range(900, 300, -37), *range(300, 900, 41)):
        table.resize(width, table.sizeHint().height())
        qtbot.wait(1)
        high[width] = table.sizeHint().height()
    assert high[min(high)] > high[max(high)]
