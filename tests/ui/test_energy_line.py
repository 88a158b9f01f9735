"""The energy line: to scale, without overlap, by pointer, keyboard and screen reader."""

from __future__ import annotations

import itertools

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from PySide6.QtCore import QCoreApplication, QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QAccessible, QFontMetricsF, QHelpEvent
from PySide6.QtWidgets import QApplication

from kitplanner.planners.results import EnergyFlow
from kitplanner.ui import energy_line_access, spotted_widget, theme
from kitplanner.ui.energy_line import EnergyLine, measure
from kitplanner.ui.energy_line_layout import day_picture
from kitplanner.ui.energy_line_picture import Frame, ink_box
from kitplanner.ui.energy_line_text import figure, total, watts
from tests.ui.sample_answers import band, camp_flow, chain_point, demo_answers, loss, short_flow


@pytest.fixture
def look(qapp):
    yield lambda scheme="light", scale=1.0: theme.apply(qapp, scheme, scale)
    theme.apply(qapp, "light", 1.0)
    qapp.setStyleSheet("")


@pytest.fixture
def line(qtbot, look):
    look()
    widget = EnergyLine()
    qtbot.addWidget(widget)
    widget.resize(1280, widget.sizeHint().height())
    widget.set_flow(camp_flow())
    widget.show()
    widget.setFocus()
    return widget


def frame(width=1000.0, height=None):
    text, small = QFontMetricsF(theme.type_font("text")), QFontMetricsF(theme.type_font("small"))
    tall = height or text.height() + 3.2 * small.height() + 112
    return Frame(width, tall, text.height(), small.height(), measure())


def overlaps(picture, sizes):
    boxes = [(word.text, ink_box(word, sizes)) for word in picture.words if word.text]
    boxes += [(chip.code, chip.box) for chip in picture.chips]
    return [
        (one[0], other[0])
        for one, other in itertools.combinations(boxes, 2)
        if one[1].adjusted(1, 1, -1, -1).intersects(other[1].adjusted(1, 1, -1, -1))
    ]


def thick(picture, key, end="start"):
    ribbon = next(ribbon for ribbon in picture.ribbons if ribbon.key == key)
    low, high = getattr(ribbon, end)
    return high - low


def test_widths_are_to_scale(look):
    look()
    flow, picture = camp_flow(), day_picture(camp_flow(), frame())
    per_wh = thick(picture, "pedal") / flow.people_m[0].wh_per_day
    assert thick(picture, "pedal", "end") == pytest.approx(flow.stations_s[0].wh_per_day * per_wh)
    assert thick(picture, "B") == pytest.approx(flow.b_wh * per_wh)
    assert thick(picture, "B", "end") == pytest.approx(flow.o_wh * per_wh)
    for device in flow.devices_d:
        assert thick(picture, device.key) == pytest.approx(device.wh_per_day * per_wh)


def test_each_loss_peels_off_with_its_figure(look):
    look()
    flow, picture = camp_flow(), day_picture(camp_flow(), frame(1280))
    per_wh = thick(picture, "pedal") / flow.people_m[0].wh_per_day
    lost = {hook.key: (hook.bottom - hook.top) / per_wh for hook in picture.hooks if not hook.joins}
    for one in flow.losses:
        assert lost[one.level_from] == pytest.approx(one.wh_per_day, abs=0.2)
    said = {word.text for word in picture.words}
    assert {"−63 Wh", "−9.4 Wh", "−13 Wh", "−11 Wh"} <= said


def test_missing_energy_is_a_gap_of_its_own_size(look):
    look()
    flow, picture = short_flow(), day_picture(short_flow(), frame())
    per_wh = thick(picture, "pedal") / flow.people_m[0].wh_per_day
    gaps = [ribbon for ribbon in picture.ribbons if ribbon.fill == "gap"]
    assert sum(gap.start[1] - gap.start[0] for gap in gaps) == pytest.approx(flow.missing_o_wh * per_wh)
    assert not [ribbon for ribbon in day_picture(camp_flow(), frame()).ribbons if ribbon.fill == "gap"]


@pytest.mark.parametrize("scale", [1.0, 1.5, 2.0])
@pytest.mark.parametrize("width", [1000, 1280, 1920])
@pytest.mark.parametrize("flow", [camp_flow(), short_flow()], ids=["camp", "short"])
def test_words_never_overlap_and_stay_inside(qtbot, look, scale, width, flow):
    look("light", scale)
    widget = EnergyLine()
    qtbot.addWidget(widget)
    widget.resize(width, widget.sizeHint().height())
    widget.set_flow(flow)
    sizes = frame(float(width), float(widget.height()))
    assert overlaps(widget.picture, sizes) == []
    for word in widget.picture.words:
        ink = ink_box(word, sizes)
        assert ink.right() <= width
        assert ink.bottom() <= widget.height() + 1


@pytest.mark.parametrize("name", ["household", "camp", "shelter", "bench"])
@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_demos_fit_at_1000_px(qtbot, look, name, scale):
    look("light", scale)
    widget = EnergyLine()
    qtbot.addWidget(widget)
    widget.resize(1000, widget.sizeHint().height())
    widget.set_flow(demo_answers(name)[1].flow)
    assert overlaps(widget.picture, frame(1000.0, float(widget.height()))) == []


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_station_chain_shows_each_loss_and_fits(qtbot, look, scale):
    look("light", scale)
    widget = EnergyLine()
    qtbot.addWidget(widget)
    widget.resize(1000, widget.sizeHint().height())
    widget.set_station_point(chain_point(), "Set A")
    point = chain_point()
    assert overlaps(widget.picture, frame(1000.0, float(widget.height()))) == []
    assert len(widget.sentences()) == len(point.stages) + 1
    assert watts(point.stages[4].loss_w) in widget.sentences()[4]
    assert "(M)" in widget.sentences()[0]


def test_hidden_labels_are_kept_in_sentences(qtbot, look):
    look("light", 2.0)
    widget = EnergyLine()
    qtbot.addWidget(widget)
    widget.resize(1000, widget.sizeHint().height())
    widget.set_flow(short_flow())
    told = widget.accessibleDescription()
    for device in short_flow().devices_d:
        assert device.label in told
        assert figure(device.wh_per_day) in told
    assert "525 Wh a day are missing" in told


flows = st.lists(st.floats(0.0, 5000.0), min_size=4, max_size=4).flatmap(
    lambda parts: st.tuples(
        st.just(parts), st.floats(0.2, 1.0), st.floats(0.5, 1.0), st.floats(0.0, 3000.0), st.integers(1, 9)
    )
)


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(flows, st.sampled_from([1000.0, 1300.0, 2500.0]))
def test_any_flow_is_laid_out_without_overlap(qapp, case, width):
    """Bands have no negative thickness, words never touch, whatever the plan."""
    (pedal, crank, start, need), eta, store, missing, kinds = case
    people = (band("pedal", "Pedal stands", "PS", pedal), band("crank", "Hand cranks", "HC", crank))
    stations = tuple(band(one.key, one.label, one.code, one.wh_per_day * eta) for one in people)
    made = total(stations)
    use_o = need / 0.85
    out = made * store * store
    short = max(0.0, use_o - out - start)
    spare = max(0.0, out + start - use_o)
    flow = EnergyFlow(
        people_m=people,
        stations_s=stations,
        sources_s=(band("sun", "Panel", "OS", missing),) if missing > 1 else (),
        b_wh=(made + (missing if missing > 1 else 0.0)) * store,
        o_wh=out,
        start_o_wh=start,
        devices_d=tuple(band(f"d{n}", f"Devices of kind {n}", f"D{n}", need / kinds) for n in range(kinds)),
        losses=(loss("a", "M", "S", total(people) - made), loss("b", "O", "D", use_o - need)),
        missing_o_wh=short,
        spare_o_wh=spare,
    )
    sizes = frame(width)
    picture = day_picture(flow, sizes)
    assert overlaps(picture, sizes) == []
    for ribbon in picture.ribbons:
        assert ribbon.start[1] >= ribbon.start[0] - 1e-6
        assert ribbon.end[1] >= ribbon.end[0] - 1e-6
        assert ribbon.x[1] >= ribbon.x[0]


def test_arrow_keys_move_between_stages(qtbot, line):
    assert line.current_spot().key == "M"
    for key in ("S", "B", "O", "D", "D"):
        qtbot.keyClick(line, Qt.Key.Key_Right)
        assert line.current_spot().key == key
    assert line.accessibleDescription().startswith("Devices need")
    qtbot.keyClick(line, Qt.Key.Key_Left)
    assert line.current_spot().key == "O"


def test_return_opens_the_section(qtbot, line):
    qtbot.keyClick(line, Qt.Key.Key_Right)
    qtbot.keyClick(line, Qt.Key.Key_Right)
    with qtbot.waitSignal(line.section_requested) as asked:
        qtbot.keyClick(line, Qt.Key.Key_Return)
    assert asked.args == ["stores"]


def test_down_reaches_a_station_band(qtbot, line):
    qtbot.keyClick(line, Qt.Key.Key_Right)
    qtbot.keyClick(line, Qt.Key.Key_Down)
    qtbot.keyClick(line, Qt.Key.Key_Down)
    with qtbot.waitSignal(line.station_requested) as asked:
        qtbot.keyClick(line, Qt.Key.Key_Space)
    assert asked.args == ["B-S2"]


@pytest.mark.parametrize(
    ("key", "section"), [("M", "people"), ("S", "stations"), ("B", "stores"), ("O", "stores"), ("D", "devices")]
)
def test_click_asks_for_the_section(qtbot, line, key, section):
    stage = next(spot for spot in line.picture.stages if spot.key == key)
    place = QPointF(stage.box.left() + 12, 14).toPoint()
    with qtbot.waitSignal(line.section_requested) as asked:
        qtbot.mouseClick(line, Qt.MouseButton.LeftButton, pos=place)
    assert asked.args == [section]


def test_click_on_a_station_band_asks_for_the_station(qtbot, line):
    spot = next(spot for spot in line.picture.spots if spot.key == "pedal")
    with qtbot.waitSignal(line.station_requested) as asked:
        qtbot.mouseClick(line, Qt.MouseButton.LeftButton, pos=spot.box.center().toPoint())
    assert asked.args == ["B-S1"]


def test_escape_returns_to_the_day(qtbot, line):
    line.set_station_point(chain_point(), "Set A")
    assert line.current_spot().key == "c0"
    with qtbot.waitSignal(line.day_requested):
        qtbot.keyClick(line, Qt.Key.Key_Escape)
    assert line.current_spot().key == "M"


def test_right_to_left_is_mirrored(qtbot, line):
    line.setLayoutDirection(Qt.LayoutDirection.RightToLeft)
    assert line.spot_at(QPointF(line.width() - 30, 14)).key == "M"
    assert line.stage_rect(0).right() > line.width() - 40
    qtbot.keyClick(line, Qt.Key.Key_Left)
    assert line.current_spot().key == "S"
    line.grab()


@pytest.mark.parametrize("scheme", ["light", "dark", "contrast"])
def test_paints_flow_colour_in_every_scheme(qtbot, look, line, scheme):
    look(scheme)
    image = line.grab().toImage()
    top = next(ribbon for ribbon in line.picture.ribbons if ribbon.key == "B")
    place = QPointF((top.x[0] + top.x[1]) / 2 + 40, (top.start[0] + top.end[1]) / 2).toPoint()
    assert image.pixelColor(place) == theme.colours().color("flow")
    assert image.pixelColor(2, line.height() - 20) == theme.colours().color("paper")


def test_without_an_answer_it_says_how_to_begin(qtbot, line):
    line.set_flow(None)
    assert "Add people" in line.accessibleDescription()
    assert line.current_spot() is None
    qtbot.keyClick(line, Qt.Key.Key_Right)
    qtbot.keyClick(line, Qt.Key.Key_Return)
    line.grab()


def test_screen_reader_finds_every_stage(qtbot, line):
    tree = QAccessible.queryAccessibleInterface(line)
    assert tree.role() == QAccessible.Role.List
    assert tree.childCount() == 5
    names = [tree.child(index).text(QAccessible.Text.Name) for index in range(5)]
    assert names == list(line.sentences())
    assert tree.child(2).rect().width() > 50
    assert tree.child(2).role() == QAccessible.Role.ListItem


def test_interfaces_are_let_go_with_their_line(qtbot, look):
    look()
    kept = energy_line_access.install()
    before = len(kept._kept)
    widget = EnergyLine()
    QAccessible.queryAccessibleInterface(widget)
    assert len(kept._kept) == before + 1
    widget.deleteLater()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    assert len(kept._kept) == before


def test_user_text_in_a_tool_tip_is_not_markup(qtbot, line, monkeypatch):
    shown = []
    monkeypatch.setattr(spotted_widget.QToolTip, "showText", lambda _place, text, _widget: shown.append(text))
    line.set_station_point(chain_point(), "<img src='file:///x'>")
    place = QPoint(60, 40)
    QApplication.sendEvent(line, QHelpEvent(QEvent.Type.ToolTip, place, line.mapToGlobal(place)))
    assert len(shown) == 1
    assert "<img" not in shown[0]
    assert "&lt;img" in shown[0]
