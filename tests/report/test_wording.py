"""Numbers, units and sentences as people read them."""

from __future__ import annotations

import re
from pathlib import Path
from typing import get_args

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec.structs import replace

import kitplanner.report
from kitplanner.plan.files import read_plan
from kitplanner.plan.records import Device, MedicalNeed, Person, Plan, Station, Store
from kitplanner.plan.shipped import demo
from kitplanner.planners.balance import balance
from kitplanner.planners.bench import bench_point, bench_sweep
from kitplanner.planners.effort import charge_curve, effort, one_charge
from kitplanner.planners.flow import energy_flow
from kitplanner.planners.results import BenchState, EffortLimit, EffortRow
from kitplanner.report import wording
from kitplanner.report.tables import aligned, columns, pairs
from kitplanner.report.wording_balance import (
    cuts_sentence,
    days_sentence,
    effort_of_day_sentence,
    evening_sentence,
    flow_sentence,
    hours_sentence,
    people_sentence,
    stores_sentence,
    verdict_lines,
    verdict_sentence,
)
from kitplanner.report.wording_bench import meter_sentence, point_sentence, state_words, sweep_sentence
from kitplanner.report.wording_effort import (
    curve_sentence,
    effort_limit_words,
    effort_sentence,
    matrix_sentence,
    one_charge_sentence,
)

COLOUR_WORDS = re.compile(r"\b(red|green|amber|yellow|orange|blue|grey|gray|purple|pink)\b", re.IGNORECASE)


@pytest.fixture(scope="module")
def sites():
    return {name: read_plan(demo(name)) for name in ("household", "camp", "shelter", "bench")}


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (525.14, "525"),
        (99.96, "100"),
        (99.94, "99.9"),
        (7.51, "7.5"),
        (0.951, "1.0"),
        (0.765, "0.77"),
        (0.0, "0"),
        (-0.001, "0.00"),
        (-2390.6, "-2391"),
        (None, "–"),
        (float("nan"), "–"),
        (float("inf"), "–"),
    ],
)
def test_number(value, text):
    assert wording.number(value) == text


@pytest.mark.parametrize(
    ("minutes", "text"),
    [
        (None, "–"),
        (0.0, "0 min"),
        (4.64, "4.6 min"),
        (9.96, "10 min"),
        (59.4, "59 min"),
        (59.6, "1 h"),
        (199.9, "3 h 20 min"),
        (185.0, "3 h 05 min"),
        (240.0, "4 h"),
        (float("inf"), "–"),
    ],
)
def test_minutes(minutes, text):
    assert wording.minutes(minutes) == text


@pytest.mark.parametrize(
    ("fraction", "text"),
    [(0.509, "51 %"), (1.059, "106 %"), (0.9996, "just under 100 %"), (1.0, "100 %"), (0.0, "0 %"), (None, "–")],
)
def test_percent(fraction, text):
    assert wording.percent(fraction) == text


def test_levels_and_units():
    assert wording.energy(525.14, "O") == "525 Wh at the outlet (O)"
    assert wording.power(6.0, "S") == "6.0 W at the station (S)"
    assert wording.energy(1.5, "D") == "1.5 Wh at the device (D)"
    assert wording.power(65.0, "M") == "65.0 W at the crank or pedal (M)"
    assert wording.energy(3.0, "B") == "3.0 Wh in store (B)"
    assert wording.hours(332.8) == "5.5 h"


def test_lists_and_counts():
    assert [wording.listed(list(words)) for words in ("", "a", "ab", "abc")] == ["", "a", "a and b", "a, b and c"]
    assert (wording.counted(1, "day", "days"), wording.counted(3, "day", "days")) == ("1 day", "3 days")


def test_names_are_made_harmless():
    assert wording.plain("a\x1b[31mb\x07\nc\u202ed\u2066") == "a[31mb cd"
    assert wording.plain("  Ångström‌ 東京 \U0001f50b ") == "Ångström‌ 東京 \U0001f50b"


@given(st.text())
def test_plain_text_has_no_control_signs(text):
    assert not re.search(r"[\x00-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]", wording.plain(text))


def test_verdicts_of_the_sites(sites):
    texts = {name: verdict_sentence(plan, balance(plan)) for name, plan in sites.items() if name != "bench"}
    assert texts == {
        "household": "Fits: 106 % of the need at the outlet is covered, 7.5 Wh to spare over 5 days, margin included; "
        "people's minutes are the limit.",
        "camp": "Fits tightly: 103 % of the need at the outlet is covered, 7.8 Wh to spare over 3 days, "
        "margin included; station time is the limit.",
        "shelter": "Does not fit: 525 Wh a day are missing at the outlet, 51 % covered; "
        "the stores are empty on day 3; people's minutes are the limit.",
    }


def test_short_only_by_the_margin_is_said(sites):
    plan = replace(sites["camp"], margin_fraction=0.25)
    result = balance(plan)
    assert (result.verdict, result.first_empty_day) == ("short", None)
    assert "without the margin the stores last to the end" in verdict_sentence(plan, result)


def test_just_short_is_not_called_covered():
    phone = Device(id="d", name="d", use_wh_per_day=100.0)
    store = Store(id="b", name="b", nominal_wh=99.99, floor_fraction=0.0, eta_out=1.0)
    plan = Plan(days=1, margin_fraction=0.0, devices=(phone,), stores=(store,))
    assert "just under 100 % covered" in verdict_sentence(plan, balance(plan))


@pytest.mark.parametrize(
    ("plan", "text"),
    [
        (Plan(), "No device is in the plan"),
        (Plan(devices=(Device(id="d", name="d", count=0, use_wh_per_day=5.0),)), "counts no device"),
        (
            Plan(days=1, devices=(Device(id="d", name="d", battery_wh=15.0, use_wh_per_day=1.0),)),
            "own start charge covers all their use",
        ),
        (Plan(days=1, devices=(Device(id="d", name="d"),)), "use nothing"),
    ],
)
def test_nothing_needed(plan, text):
    assert text in verdict_sentence(plan, balance(plan))


def test_unmet_evening_guarantee_comes_first(sites):
    plan = sites["shelter"]
    late = replace(
        plan, devices=tuple(replace(d, evening=d.id in ("C-D1", "C-D2")) for d in plan.devices), medical_needs=()
    )
    lines = verdict_lines(late, balance(late))
    assert lines[0].startswith("Evening guarantee not met: not enough for Hall light and Resident phone")
    assert lines[1].startswith("Does not fit")
    met = replace(plan, devices=tuple(replace(d, evening=d.priority == 1) for d in plan.devices))
    assert "only if lower priorities are cut first" in evening_sentence(met, balance(met))
    assert evening_sentence(sites["household"], balance(sites["household"])) == ""
    none = replace(plan, devices=tuple(replace(d, evening=False) for d in plan.devices))
    assert evening_sentence(none, balance(none)).startswith("Evening guarantee not set")


def test_medical_needs_are_named_as_outside(sites):
    plan = replace(sites["household"], medical_needs=(MedicalNeed(id="m", name="private words", count=2),))
    lines = verdict_lines(plan, balance(plan))
    assert lines[-1] == ("2 powered medical needs stand outside this balance: arrange a separate secured supply.")
    assert not any("private" in line for line in lines)


def test_balance_sentences_of_the_sites(sites):
    result = balance(sites["shelter"])
    assert "priority 1 100 %, priority 2 77 %, priority 3 5 %, priority 5 8 %" in cuts_sentence(result)
    assert "at least 52 %" in cuts_sentence(result)
    assert "day 3" in days_sentence(result)
    assert "17:00 to 18:00" in hours_sentence(result) or "18:00 to 19:00" in hours_sentence(result)
    assert "833 Wh" in stores_sentence(result)
    assert "the stations have time for" in effort_of_day_sentence(result)
    assert "525 Wh are missing" in flow_sentence(energy_flow(sites["shelter"], result))
    assert "16 h 40 min" in people_sentence(result)
    household = balance(sites["household"])
    assert cuts_sentence(household) == "Every priority is covered in full; nothing has to be cut."
    assert days_sentence(household).startswith("37.0 Wh are left at the outlet at the end of day 5")
    empty = balance(Plan())
    assert cuts_sentence(empty) == "There is nothing to cut."
    assert hours_sentence(empty) == "Nothing is used and nothing is made on an average day."
    assert effort_of_day_sentence(empty) == "Stores and start charges meet the need without any turning."


def test_effort_sentences(sites):
    plan = sites["household"]
    rows = effort(plan, device="A-D1", person="M1").rows
    row = next(row for row in rows if (row.route, row.charge) == ("direct", "full"))
    text = effort_sentence(plan, row)
    assert text.startswith(
        "One full charge of Smartphone, adult, saving mode at Table crank, clamped by Oruun takes 3 h 20 min "
        "of turning (between "
    )
    assert text.endswith("; the person's watts are the limit.")
    store = next(row for row in rows if (row.route, row.charge) == ("store", "full"))
    assert " through a store by Oruun takes 3 h 57 min" in effort_sentence(plan, store)
    assert "the longest" in matrix_sentence(plan, rows)
    assert matrix_sentence(plan, ()).startswith("No charge")
    curve = charge_curve(plan, row)
    assert curve_sentence(curve).startswith("The battery goes from 0 % to 100 % in 3 h")


def test_one_charge_sentence():
    row = one_charge(15.4, 6.0).rows[0]
    text = one_charge_sentence(row, 15.4, 6.0)
    assert text.startswith("One full charge of a phone with 15.4 Wh takes 3 h 20 min of turning (between ")


def test_charge_that_cannot_be_made(sites):
    row = EffortRow(
        device="A-D1",
        station="A-S1",
        person="M1",
        route="direct",
        charge="full",
        minutes_p10=None,
        minutes_p50=None,
        minutes_p90=None,
        station_output_w=None,
        person_power_w=None,
        chain_fraction=None,
        chain_from="S",
        limit="too_little_current",
    )
    assert effort_sentence(sites["household"], row) == (
        "Smartphone, adult, saving mode cannot be charged at Table crank, clamped by Oruun: "
        "too little current arrives for the device to charge."
    )
    assert "cannot be made" in one_charge_sentence(row, 15.4, 0.2)
    assert matrix_sentence(sites["household"], (row,)).startswith("No charge")


def test_bench_sentences(sites):
    plan = sites["bench"]
    point = bench_point(plan, "A", amps=0.3)
    assert meter_sentence(point) == "Hold the meter in front of the regulator between 6.73 V and 8.16 V."
    assert "turns a minute" in point_sentence(point, "Set A")
    failed = bench_point(plan, "A", rpm=5.0, amps=0.3)
    assert failed.states
    assert point_sentence(failed, "Set A").startswith("Set A does not charge: ")
    crossed = replace(point, meter_low_v=9.0, meter_high_v=8.0)
    assert meter_sentence(crossed).startswith("No safe band")
    assert meter_sentence(replace(point, meter_low_v=None)) == ""
    sweep = bench_sweep(plan, "B")
    assert "turns a minute" in sweep_sentence(sweep)
    nothing = replace(sweep, stored_w=np.full_like(sweep.stored_w, np.nan))
    assert sweep_sentence(nothing).startswith("There is no cadence")


def test_every_state_and_limit_has_words():
    assert len({state_words(state) for state in get_args(BenchState)}) == len(get_args(BenchState))
    assert len({effort_limit_words(limit) for limit in get_args(EffortLimit)}) == len(get_args(EffortLimit))


def test_no_colour_words():
    for path in Path(kitplanner.report.__file__).parent.glob("wording*.py"):
        assert not COLOUR_WORDS.search(path.read_text(encoding="utf-8")), path.name


def test_hostile_names_stay_on_one_line():
    person = Person(id="p", name="a\n\x1b[2Jb", age=40, watts_by="share", share_arms_fraction=1.0)
    plan = Plan(
        people=(person,),
        stations=(Station(id="s", name="s\r\n", output_w=6.0),),
        devices=(Device(id="d", name="\u202ephone", battery_wh=15.4, use_wh_per_day=6.0),),
    )
    for row in effort(plan).rows:
        assert not re.search(r"[\x00-\x1f\u202e]", effort_sentence(plan, row))


def test_tables_are_aligned():
    text = aligned(("name", "Wh"), [("東京", "1.0"), ("a\tb\x1b[1m", "100")], ("left", "right"))
    lines = text.split("\n")
    assert lines[0] == "name     Wh"
    assert set(lines[1]) == {"-"}
    assert len({columns(line) for line in lines}) == 1
    assert "\x1b" not in text
    assert pairs((("long label", "1"), ("x", "2"))) == "long label  1\nx           2"
    assert pairs(()) == ""


@given(st.lists(st.tuples(st.text(), st.text()), max_size=5))
def test_table_rows_never_break(rows):
    assert len(aligned(("a", "b"), rows, ("left", "right")).split("\n")) == len(rows) + 2
