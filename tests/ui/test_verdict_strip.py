"""The strip says the verdict in words and by its sign; an unmet evening guarantee comes first."""

from __future__ import annotations

import pytest
from msgspec.structs import replace

from kitplanner.plan.checks import Problem
from kitplanner.planners.balance import balance
from kitplanner.report.papers.effort import typical_row
from kitplanner.report.wording import minutes
from kitplanner.ui.verdict_strip import VerdictStrip, phone_row
from tests.ui.sample_answers import demo_answers


@pytest.fixture
def strip(qtbot):
    widget = VerdictStrip()
    qtbot.addWidget(widget)
    widget.resize(1280, 80)
    widget.show()
    return widget


@pytest.mark.parametrize(
    ("name", "verdict", "part"),
    [
        ("household", "Fits", "106 %"),
        ("camp", "Fits tightly", "station time is the limit"),
        ("shelter", "Does not fit", "525 Wh a day are missing"),
    ],
)
def test_demos(strip, name, verdict, part):
    strip.set_answers(*demo_answers(name))
    assert strip.verdict.text() == verdict
    assert part in strip.detail.text()
    assert strip.sign.accessibleDescription() == verdict.lower()
    strip.grab()


def test_first_empty_day_is_told(strip):
    strip.set_answers(*demo_answers("shelter"))
    assert "empty on day 3" in strip.detail.text()


def test_unmet_evening_guarantee_is_the_first_line(strip):
    plan, results = demo_answers("shelter")
    starved = replace(plan, stores=(), stations=())
    strip.set_answers(starved, replace(results, plan=starved, balance=balance(starved)))
    assert strip.evening.text().startswith("! Evening guarantee not met")
    assert strip.accessibleDescription().startswith("! Evening guarantee not met")
    assert strip.evening.y() < strip.detail.y()


def test_minutes_of_one_phone_charge(strip):
    plan, results = demo_answers("household")
    device, row = phone_row(plan, results)
    rows = [r for r in results.effort.rows if (r.device, r.route, r.charge) == (device.id, "direct", "full")]
    assert row == typical_row(rows)
    strip.set_answers(plan, results)
    assert minutes(row.minutes_p50) in strip.phone.text()
    assert device.name in strip.phone.text()


def test_problems_stop_the_answer_in_words(strip):
    plan, results = demo_answers("camp")
    problem = Problem(
        place=("stores", "B-B1", "nominal_wh"),
        severity="error",
        text="Nominal energy is 0.",
        remedy="Give more than 0.",
    )
    strip.set_answers(plan, replace(results, problems=(problem,), balance=None, effort=None, flow=None))
    assert strip.verdict.text() == "No answer yet"
    assert strip.detail.text() == "Nominal energy is 0. Give more than 0."
    assert strip.phone.isHidden()


def test_narrow_strip_says_all_below_each_other(strip):
    strip.set_answers(*demo_answers("camp"))
    strip.resize(500, 200)
    assert strip.verdict.isHidden()
    assert strip.detail.text().startswith("Fits tightly: 103 %")
    strip.resize(1280, 80)
    assert strip.detail.text().startswith("103 %")


def test_user_text_is_plain(strip):
    from PySide6.QtCore import Qt
    from PySide6.QtWidgets import QLabel

    assert {label.textFormat() for label in strip.findChildren(QLabel)} == {Qt.TextFormat.PlainText}
