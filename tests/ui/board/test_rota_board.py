"""The board by mouse, keys and screen reader; what it paints and what it asks for."""

from __future__ import annotations

import pytest
from msgspec import structs
from PySide6.QtCore import QPoint, QPointF, QRect, QRectF, Qt
from PySide6.QtGui import QAccessible, QColor, QImage, QPainter
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QMenu

from kitplanner.plan.edits_rota import move_bout
from kitplanner.ui import theme
from kitplanner.ui.board.board_menu import menu_of
from kitplanner.ui.board.bouts_table import BoutsModel, BoutsTable
from tests.ui.board.boards import Edits, board_of, data_of, small_plan

KEY, MOD = Qt.Key, Qt.KeyboardModifier


@pytest.fixture
def board(qtbot):
    return board_of(qtbot, small_plan())


@pytest.fixture
def edits(board):
    return Edits(board, small_plan())


def shown(board, key):
    return next(bout for bout in board.hand.data.bouts if bout.id == key)


def middle(board, key) -> QPoint:
    return board.rect_of(shown(board, key)).center().toPoint()


def drag(board, start: QPoint, end: QPoint, steps=8) -> None:
    view = board.viewport()
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=start)
    for step in range(1, steps + 1):
        QTest.mouseMove(view, start + (end - start) * step / steps)
        QApplication.processEvents()
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=end)


def minutes_px(board, minutes) -> int:
    return round(minutes * board._scene.layout.px_per_min)


def press(board, key, modifier=MOD.NoModifier) -> None:
    QTest.keyClick(board, key, modifier)


def test_a_drag_moves_a_turn_on_the_grid_as_one_named_edit(board, edits):
    drag(board, middle(board, "b1"), middle(board, "b1") + QPoint(minutes_px(board, 41), 0))
    assert (edits.bout("b1").start, edits.bout("b1").end) == ("09:10", "09:30")
    assert edits.texts == ["Move Quorin's turn at 08:30 to 09:10"]


def test_a_drag_to_another_row_hands_over(board, edits):
    row = round(board._scene.layout.sizes.row_px)
    drag(board, middle(board, "b1"), middle(board, "b1") + QPoint(0, row))
    assert (edits.bout("b1").person, edits.bout("b1").start) == ("y1", "08:30")
    assert edits.texts == ["Hand over Quorin's turn at 08:30 to Arvik"]


def test_a_drag_into_the_charging_rows_keeps_the_person(board, edits):
    start = middle(board, "b1")
    drag(board, start, QPoint(start.x() + minutes_px(board, 30), round(board._scene.layout.row_top(5)) + 5))
    assert (edits.bout("b1").person, edits.bout("b1").start) == ("l3", "09:00")


def test_a_drag_at_the_end_resizes(qtbot):
    wide = board_of(qtbot, small_plan(), size=(1600, 500))
    edits = Edits(wide, small_plan())
    box = wide.rect_of(shown(wide, "b1"))
    edge = QPoint(round(box.right()) - 1, round(box.center().y()))
    drag(wide, edge, edge + QPoint(minutes_px(wide, 15), 0))
    assert (edits.bout("b1").start, edits.bout("b1").end) == ("08:30", "09:05")
    assert edits.texts == ["Make Quorin's turn at 08:30 35 min long"]


def test_a_drag_at_a_station_row_changes_the_unit(board, edits):
    board.show_as("stations", (1,))
    row = round(board._scene.layout.sizes.row_px)
    drag(board, middle(board, "b1"), middle(board, "b1") + QPoint(0, row))
    assert (edits.bout("b1").station, edits.bout("b1").unit) == ("s", 2)


def test_a_drag_that_returns_and_one_left_by_escape_change_nothing(board, edits):
    start = middle(board, "b1")
    view = board.viewport()
    drag(board, start, start + QPoint(1, 1))
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=start)
    QTest.mouseMove(view, start + QPoint(80, 0))
    assert board._state.ghost is not None
    press(board, KEY.Key_Escape)
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=start + QPoint(80, 0))
    assert board._state.ghost is None
    assert edits.texts == []


def test_what_the_hand_holds_is_told_and_can_be_marked(qtbot, board, edits):
    told = []
    board.tentative_changed.connect(told.append)
    start = middle(board, "b1")
    QTest.mousePress(board.viewport(), Qt.MouseButton.LeftButton, pos=start)
    QTest.mouseMove(board.viewport(), start + QPoint(minutes_px(board, 240), 0))
    tried = told[-1](edits.plan)
    assert [one.rule for one in _judged(tried)] == ["blocked"]
    board.show_ghost_breaks(("not at meals",))
    assert board._state.ghost.broken == ("not at meals",)
    QTest.mouseRelease(board.viewport(), Qt.MouseButton.LeftButton, pos=start + QPoint(minutes_px(board, 240), 0))
    assert told[-1] is None


def _judged(plan):
    from kitplanner.planners.rota.check import judge

    return [one for one in judge(plan, plan.rota) if one.person]


def test_locked_turns_and_proposals_stay_where_they_are(qtbot, board, edits):
    said = []
    board.hand.told.connect(said.append)
    drag(board, middle(board, "b3"), middle(board, "b3") + QPoint(60, 0))
    assert "locked" in said[-1]
    board.show_data(data_of(small_plan(), editable=False))
    drag(board, middle(board, "b1"), middle(board, "b1") + QPoint(60, 0))
    assert "proposal" in said[-1]
    assert edits.texts == []


def test_small_blocks_can_be_hit_within_24_px(board):
    box = board.rect_of(shown(board, "b3"))
    assert box.width() < 24
    bout, _grip = board.bout_at(QPointF(box.center().x() + 11, box.center().y()))
    assert bout.id == "b3"
    assert board._scene.layout.sizes.row_px >= 24


def test_keys_choose_move_resize_and_hand_over(qtbot, board, edits):
    board.activateWindow()
    qtbot.waitUntil(board.isActiveWindow)
    board.clearFocus()
    board.setFocus(Qt.FocusReason.TabFocusReason)
    assert board.hand.chosen == "b3"
    press(board, KEY.Key_Right, MOD.ControlModifier)
    assert board.hand.chosen == "b1"
    press(board, KEY.Key_Right)
    press(board, KEY.Key_Right)
    assert edits.bout("b1").start == "08:40"
    assert edits.keys[0] == edits.keys[1] != ""
    press(board, KEY.Key_Right, MOD.ShiftModifier)
    assert edits.bout("b1").end == "09:05"
    press(board, KEY.Key_Down)
    assert edits.bout("b1").person == "y1"
    press(board, KEY.Key_Up)
    assert edits.bout("b1").person == "l3"
    press(board, KEY.Key_End)
    assert board.hand.chosen == "b2"


def test_steps_go_over_midnight_into_the_next_day(qtbot):
    plan = move_bout("b1", 1, 1415)(small_plan())
    board = board_of(qtbot, plan)
    edits = Edits(board, plan)
    board.hand.choose("b1")
    board.hand.step(2)
    assert (edits.bout("b1").day, edits.bout("b1").start) == (2, "00:00")
    board.hand.step(-1)
    assert (edits.bout("b1").day, edits.bout("b1").end) == (1, "24:00")


def test_lock_swap_remove_by_keys(board, edits):
    board.hand.choose("b1")
    press(board, KEY.Key_L)
    assert edits.bout("b1").locked
    press(board, KEY.Key_L)
    press(board, KEY.Key_S)
    assert board.hand.swap == "b1"
    board.hand.choose("b2")
    press(board, KEY.Key_S)
    assert (edits.bout("b1").person, edits.bout("b2").person) == ("y1", "l3")
    assert edits.texts[-1] == "Swap Quorin and Arvik"
    assert board.hand.swap == ""
    press(board, KEY.Key_Delete)
    assert {one.id for one in edits.plan.rota.bouts} == {"b1", "b3", "b4"}
    assert board.hand.chosen == ""


def test_a_swap_can_be_left(board, edits):
    board.hand.choose("b1")
    press(board, KEY.Key_S)
    press(board, KEY.Key_Escape)
    assert board.hand.swap == ""
    press(board, KEY.Key_S)
    press(board, KEY.Key_S)
    assert board.hand.swap == ""
    assert edits.texts == []


def test_forms_are_asked_for(qtbot, board):
    asked = []
    board.hand.form_requested.connect(lambda bout, is_new: asked.append((bout.id, is_new, bout.person)))
    board.hand.hand_over_requested.connect(lambda key: asked.append(("over", key)))
    board.hand.choose("b1")
    press(board, KEY.Key_Return)
    press(board, KEY.Key_H)
    layout = board._scene.layout
    empty = QPoint(round(layout.x_of(1, 1100)), round(layout.row_top(2) + 10))
    QTest.mouseDClick(board.viewport(), Qt.MouseButton.LeftButton, pos=empty)
    assert asked == [("b1", False, "l3"), ("over", "b1"), ("", True, "y1")]


def test_the_menu_has_the_same_actions_and_names_their_keys(board, edits):
    board.hand.choose("b1")
    menu = menu_of(board, board.hand)
    lines = {action.text().replace("&", ""): action.shortcut().toString() for action in menu.actions()}
    assert lines == {"Edit…": "Return", "Hand over…": "H", "Swap people…": "S", "Lock": "L", "Remove": "Del"}
    next(action for action in menu.actions() if "Lock" in action.text().replace("&", "")).trigger()
    assert edits.bout("b1").locked
    assert isinstance(menu, QMenu)
    menu.deleteLater()


def test_the_zoom_widens_the_day_and_keeps_its_middle(board):
    layout = board._scene.layout
    before = layout.time_at(layout.body.center().x())
    press(board, KEY.Key_Plus)
    layout = board._scene.layout
    assert layout.content_px > layout.body.width()
    assert layout.time_at(layout.body.center().x())[1] == pytest.approx(before[1], abs=5)
    press(board, KEY.Key_Minus)
    assert board._scene.layout.content_px == pytest.approx(board._scene.layout.body.width())


def test_all_days_stand_side_by_side_on_one_axis(board):
    board.show_as("people", (1, 2))
    layout = board._scene.layout
    assert layout.day_left(2) > layout.x_of(1, layout.high_min)
    for day, minute in ((1, 600), (2, 545), (2, 1190)):
        assert layout.time_at(layout.x_of(day, minute)) == pytest.approx((day, minute), abs=0.01)


def test_turns_are_items_of_a_list_for_screen_readers(board):
    board.hand.choose("b2")
    interface = QAccessible.queryAccessibleInterface(board)
    assert interface.role() == QAccessible.Role.List
    assert interface.text(QAccessible.Text.Name) == "Rota board"
    names = [interface.child(n).text(QAccessible.Text.Name) for n in range(interface.childCount())]
    assert names == [
        "Hesmira, Table crank, day 1, 15:00 to 15:15, locked",
        "Quorin, Pedal stand, unit 1, day 1, 08:30 to 08:50",
        "Arvik, Pedal stand, unit 1, day 1, 10:00 to 10:20, watched by Hesmira",
    ]
    item = interface.child(2)
    assert item.role() == QAccessible.Role.ListItem
    assert item.state().selected
    assert interface.indexOfChild(item) == 2
    assert item.rect().intersects(QRect(board.mapToGlobal(QPoint(0, 0)), board.size()))


def test_broken_rules_are_in_the_name_of_their_item(qtbot):
    board = board_of(qtbot, move_bout("b1", 1, 750)(small_plan()))
    interface = QAccessible.queryAccessibleInterface(board)
    names = [interface.child(n).text(QAccessible.Text.Name) for n in range(interface.childCount())]
    assert sum("Broken rule" in name for name in names) == 1


def picture(board, area=None) -> QImage:
    image = QImage(board.viewport().size(), QImage.Format.Format_RGB32)
    image.fill(QColor("#ff00ff"))
    painter = QPainter(image)
    try:
        board._painter.paint(painter, QRectF(area or image.rect()), board._scene)
    finally:
        painter.end()
    return image


def test_only_the_rows_that_are_asked_for_are_painted(board):
    layout = board._scene.layout
    image = picture(board, layout.row_rect(1).adjusted(0, 1, 0, -1).toRect())
    assert image.pixelColor(300, round(layout.row_top(0) + 8)) == QColor("#ff00ff")
    assert image.pixelColor(300, round(layout.row_top(1) + 8)) != QColor("#ff00ff")


@pytest.mark.parametrize("scheme", ["light", "dark", "contrast"])
def test_a_broken_turn_has_an_outline_and_a_sign_not_only_colour(qtbot, qapp, scheme):
    try:
        theme.apply(qapp, scheme, 1.0)
        sound = board_of(qtbot, small_plan())
        broken = board_of(qtbot, small_plan(), breaks={"b1": ("a rule",)})
        box = sound.rect_of(shown(sound, "b1")).adjusted(-8, -4, 8, 4).toRect()
        one, other = picture(sound).copy(box), picture(broken).copy(box)
        warning = theme.colours().color("warning")
        marks = [
            (x, y)
            for x in range(other.width())
            for y in range(other.height())
            if other.pixelColor(x, y) == warning and one.pixelColor(x, y) != warning
        ]
        left_of_block = [x for x, _y in marks if x < 8]
        assert len(marks) > 40
        assert left_of_block, "the sign stands out of the block"
    finally:
        theme.apply(qapp, "light", 1.0)
        qapp.setStyleSheet("")


def test_the_now_line_is_drawn_only_where_a_moment_is_set(qtbot):
    plain, timed = board_of(qtbot, small_plan()), board_of(qtbot, small_plan(), now=(1, 700))
    layout = timed._scene.layout
    at = (round(layout.x_of(1, 700)), round(layout.row_top(3) + 12))
    accent = theme.colours().color("accent")
    assert picture(timed).pixelColor(*at) == accent
    assert picture(plain).pixelColor(*at) != accent


def test_it_stands_empty_without_people(qtbot):
    plan = structs.replace(small_plan(), people=(), stations=(), devices=())
    plan = structs.replace(plan, rota=structs.replace(plan.rota, bouts=(), charging=()))
    board = board_of(qtbot, plan)
    board.grab()
    press(board, KEY.Key_Right)
    QTest.mouseClick(board.viewport(), Qt.MouseButton.LeftButton, pos=QPoint(200, 200))
    assert board.shown_turns() == []


def test_double_text_size_fits_a_narrow_window(qtbot, qapp):
    try:
        theme.apply(qapp, "light", 2.0)
        board = board_of(qtbot, small_plan(), size=(600, 500))
        assert board.minimumSizeHint().width() <= 600
        assert board._scene.layout.body.width() > 200
        assert board._scene.layout.sizes.row_px > 40
        board.grab()
    finally:
        theme.apply(qapp, "light", 1.0)
        qapp.setStyleSheet("")


def test_the_model_of_the_table_keeps_the_rules_of_models(qapp, qtmodeltester):
    model = BoutsModel()
    model.show_data(data_of(small_plan()), (1, 2))
    qtmodeltester.check(model, force_py=True)


def test_the_table_shows_the_same_turns_and_follows_the_choice(qtbot, board):
    table = BoutsTable(board.hand)
    qtbot.addWidget(table)
    table.show_data(board.hand.data, (1, 2))
    texts = [[table.turns.index(row, n).data() for n in range(10)] for row in range(table.turns.rowCount())]
    assert texts[1] == ["1", "10:00", "10:20", "Pedal stand", "1", "Arvik", "Hesmira", "20", "", ""]
    assert len(texts) == 4
    board.hand.choose("b3")
    assert table.currentIndex().row() == 2
    table.selectRow(0)
    assert board.hand.chosen == "b1"


def test_the_table_does_by_keys_what_the_board_does(qtbot, board, edits):
    table = BoutsTable(board.hand)
    qtbot.addWidget(table)
    table.show_data(board.hand.data, (1,))
    table.selectRow(0)
    QTest.keyClick(table, KEY.Key_L)
    assert edits.bout("b1").locked
    table.selectAll()
    QTest.keyClick(table, KEY.Key_C, MOD.ControlModifier)
    assert QApplication.clipboard().text().splitlines()[0].split("\t")[:3] == ["1", "08:30", "08:50"]
