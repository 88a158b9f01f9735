"""The answers of the commands: JSON to the key, and readable tables."""

from __future__ import annotations

import json

import pytest
from msgspec.structs import replace

from kitplanner.app.cli import main
from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import write_plan
from kitplanner.plan.shipped import demo

BALANCE_KEYS = {
    "coverage_fraction",
    "need_wh",
    "have_wh",
    "short_wh_per_day",
    "first_empty_day",
    "limit",
    "verdict",
    "days",
    "devices",
    "stores",
    "cuts",
}
EFFORT_KEYS = {
    "device",
    "station",
    "person",
    "route",
    "charge",
    "minutes_p10",
    "minutes_p50",
    "minutes_p90",
    "station_output_w",
    "person_power_w",
    "chain_fraction",
    "limit",
}
BENCH_KEYS = {
    "rpm",
    "human_w",
    "torque_nm",
    "stages",
    "stored_w",
    "crank_to_usb_fraction",
    "crank_to_battery_fraction",
    "regulator_degc",
    "meter_low_v",
    "meter_high_v",
    "states",
}
STAGE_KEYS = {"name", "in_w", "out_w", "in_v", "in_a", "out_v", "out_a", "loss_w"}


def text(capsys, *arguments):
    assert main([str(argument) for argument in arguments]) == 0
    shown = capsys.readouterr()
    assert shown.err == ""
    return shown.out


def answer(capsys, *arguments):
    return json.loads(text(capsys, *arguments, "--json"))


def refused(capsys, *arguments):
    assert main([str(argument) for argument in arguments]) == 2
    shown = capsys.readouterr()
    assert shown.out == ""
    return shown.err


@pytest.mark.parametrize(
    ("name", "coverage", "short", "first_empty", "limit", "verdict"),
    [
        ("household", 1.06, 0, None, "people-minutes", "fits"),
        ("camp", 1.03, 0, None, "station-minutes", "tight"),
        ("shelter", 0.51, 525, 3, "people-minutes", "short"),
    ],
)
def test_balance_json(capsys, name, coverage, short, first_empty, limit, verdict):
    found = answer(capsys, "balance", demo(name))
    assert set(found) >= BALANCE_KEYS
    assert found["coverage_fraction"] == pytest.approx(coverage, abs=0.005)
    assert found["short_wh_per_day"] == pytest.approx(short, abs=0.5)
    assert (found["first_empty_day"], found["limit"], found["verdict"]) == (first_empty, limit, verdict)
    assert set(found["days"][0]) == {"day", "use_wh", "made_wh", "end_wh"}
    assert set(found["devices"][0]) >= {"device", "use_wh", "credit_wh"}
    assert set(found["stores"][0]) >= {"store", "usable_wh"}
    for cut in ("strict", "shared"):
        assert set(found["cuts"][cut][0]) == {"priority", "need_wh", "have_wh", "covered_fraction"}
    assert sum(row["use_wh"] - row["credit_wh"] for row in found["devices"]) == pytest.approx(found["need_wh"])


def test_balance_text(capsys):
    out = text(capsys, "balance", demo("shelter"))
    assert "Does not fit: 525 Wh a day are missing at the outlet, 51 % covered" in out
    assert "77 %" in out
    assert "C-D1 Resident phone" in out
    assert "1 powered medical need stands outside this balance" in out


def test_balance_of_an_empty_plan(capsys, tmp_path):
    bare = replace(new_plan("household"), people=(), stations=(), stores=(), devices=(), other_sources=())
    path = tmp_path / "bare.kitplan"
    write_plan(path, bare)
    found = answer(capsys, "balance", path)
    assert (found["coverage_fraction"], found["limit"], found["verdict"]) == (None, None, "fits")
    assert "nothing is needed" in text(capsys, "balance", path)


def test_effort_json(capsys):
    chosen = ("effort", demo("household"), "--device", "A-D1", "--person", "M1", "--station", "A-S1")
    rows = answer(capsys, *chosen)["rows"]
    assert all(set(row) >= EFFORT_KEYS for row in rows)
    minutes = {row["route"]: row["minutes_p50"] for row in rows if row["charge"] == "full"}
    assert minutes == pytest.approx({"direct": 199.9, "store": 236.8}, rel=0.01)
    for row in rows:
        assert row["minutes_p10"] <= row["minutes_p50"] <= row["minutes_p90"]
        assert row["person_power_w"] == pytest.approx(row["station_output_w"] / 0.5)


def test_effort_selects(capsys):
    every = answer(capsys, "effort", demo("camp"))["rows"]
    some = answer(capsys, "effort", demo("camp"), "--person", "L1")["rows"]
    assert [row for row in every if row["person"] == "L1"] == some
    assert {row["person"] for row in some} == {"L1"}


def test_effort_text(capsys):
    out = text(capsys, "effort", demo("household"), "--device", "A-D1", "--person", "M1")
    lines = out.splitlines()
    assert lines[0].split()[:3] == ["device", "station", "person"]
    assert any("3 h 20 min" in line and line.startswith("A-D1") for line in lines)
    assert "Turning time without rests" in lines[-1]


def test_effort_with_nothing_to_show(capsys):
    out = text(capsys, "effort", demo("household"), "--person", "M2")
    assert out.startswith("No charge to show")
    assert answer(capsys, "effort", demo("household"), "--person", "M2") == {"rows": []}


def test_one_charge_without_a_plan(capsys):
    row = answer(capsys, "effort", "--wh", "15.4", "--station-w", "6")["rows"][0]
    assert row["minutes_p50"] == pytest.approx(199.9, rel=0.01)
    assert row["minutes_p10"] < row["minutes_p50"] < row["minutes_p90"]
    assert text(capsys, "effort", "--wh", "15.4", "--station-w", "6").startswith(
        "One full charge of a phone with 15.4 Wh takes 3 h 20 min of turning"
    )


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        ([], "Give a PLAN"),
        (["--wh", "15"], "both --wh and --station-w"),
        (["--station-w", "6"], "both --wh and --station-w"),
        (["--station-w", "6", "--wh", "15", "--person", "M1"], "not both"),
        ([demo("camp"), "--wh", "15", "--station-w", "6"], "not both"),
    ],
)
def test_ways_of_effort_are_not_mixed(capsys, arguments, says):
    assert says in refused(capsys, "effort", *arguments)


@pytest.mark.parametrize(
    ("arguments", "known"),
    [
        (["effort", demo("household"), "--station", "no"], "A-S1"),
        (["effort", demo("household"), "--device", "no"], "A-D1"),
        (["effort", demo("household"), "--person", "no"], "M1"),
        (["bench", demo("bench"), "no"], "A-buck"),
        (["effort", demo("shelter"), "--person", "R\x1b[31m99"], "and 40 more"),
    ],
)
def test_unknown_ids_name_the_known_ones(capsys, arguments, known):
    err = refused(capsys, *arguments)
    assert known in err
    assert "\x1b" not in err


def test_unknown_id_where_there_are_none(capsys, tmp_path):
    path = tmp_path / "bare.kitplan"
    write_plan(path, replace(new_plan("household"), devices=()))
    assert "the plan has none" in refused(capsys, "effort", path, "--device", "A-D1")


def test_bench_json(capsys):
    found = answer(capsys, "bench", demo("bench"), "A", "--amps", "0.3")
    assert set(found) >= BENCH_KEYS
    assert (found["meter_low_v"], found["meter_high_v"]) == (
        pytest.approx(6.73, abs=0.005),
        pytest.approx(8.16, abs=0.005),
    )
    assert all(set(stage) == STAGE_KEYS for stage in found["stages"])
    losses = sum(stage["loss_w"] for stage in found["stages"])
    assert losses + found["stored_w"] == pytest.approx(found["human_w"], rel=1e-9)


def test_bench_of_a_failed_point(capsys):
    found = answer(capsys, "bench", demo("bench"), "A", "--rpm", "5", "--amps", "0.3")
    assert found["states"]
    assert found["human_w"] is None
    assert found["stored_w"] is None
    out = text(capsys, "bench", demo("bench"), "A", "--rpm", "5", "--amps", "0.3")
    assert "does not charge" in out


def test_bench_text(capsys):
    out = text(capsys, "bench", demo("bench"), "A", "--amps", "0.3")
    assert "Hold the meter in front of the regulator between 6.73 V and 8.16 V." in out
    assert "0.300 A" in out


def test_bench_needs_parts(capsys):
    assert "described by measured" in refused(capsys, "bench", demo("household"), "A-S1")
