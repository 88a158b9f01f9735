"""Command `levers`: JSON to the key, text that says what would make it fit."""

from __future__ import annotations

import contextlib
import io
import json

import pytest
from msgspec.structs import replace

from kitplanner.app import cli_levers
from kitplanner.app.cli import main
from kitplanner.plan.edits_levers import LeverChange, levers_edit
from kitplanner.plan.files import read_plan, write_plan
from kitplanner.plan.shipped import demo
from kitplanner.planners.balance import balance

SINGLE_KEYS = {"lever", "from", "to", "unit", "enough", "coverage_fraction", "limit_coverage_fraction"}
COMBINATION_KEYS = {"changes", "coverage_fraction", "chance_fraction", "cost", "rota_unmet_wh"}


@pytest.fixture(scope="module")
def shelter_json():
    out = io.StringIO()
    with contextlib.redirect_stdout(out):
        assert main(["levers", str(demo("shelter")), "--json"]) == 0
    return json.loads(out.getvalue())


def test_json_has_every_key_of_the_contract(shelter_json):
    assert {"singles", "combinations", "cuts"} <= set(shelter_json)
    assert shelter_json["singles"]
    assert all(set(row) >= SINGLE_KEYS for row in shelter_json["singles"])
    assert len(shelter_json["combinations"]) >= 3
    assert all(set(row) >= COMBINATION_KEYS for row in shelter_json["combinations"])
    assert all(
        set(change) >= {"lever", "from", "to", "unit"}
        for row in shelter_json["combinations"]
        for change in row["changes"]
    )


def test_json_changes_entered_as_edits_give_the_coverage_told(shelter_json):
    plan = read_plan(demo("shelter"))
    for row in shelter_json["combinations"]:
        changes = [LeverChange(lever=change["lever"], to=change["to"]) for change in row["changes"]]
        assert balance(levers_edit(changes)(plan)).coverage_fraction == pytest.approx(row["coverage_fraction"])
        assert row["chance_fraction"] is None
        assert row["rota_unmet_wh"] == pytest.approx(0.0, abs=1.0)


def test_text_names_levers_combinations_and_cuts(capsys, monkeypatch):
    monkeypatch.setattr(cli_levers, "rota_unmet_wh", lambda _: 0.0)
    assert main(["levers", str(demo("shelter"))]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert out.startswith("As given 51 % are covered; no cut alone is enough.")
    assert "C-D1 Resident phone, one top-up a day" in out
    assert "Mildest with the stations there are: with" in out
    assert "strict cut" in out
    assert "ask the people first" in out
    assert "lamps, not candles" in out


@pytest.mark.parametrize("name", ["household", "camp"])
def test_a_plan_that_fits_says_so(capsys, name):
    assert main(["levers", str(demo(name))]) == 0
    assert "nothing has to change" in capsys.readouterr().out


def test_bad_plans_and_calls_are_refused_without_traceback(capsys, tmp_path):
    broken = tmp_path / "broken.kitplan"
    write_plan(broken, replace(read_plan(demo("camp")), days=0))
    assert main(["levers", str(broken)]) == 1
    assert main(["levers", str(tmp_path / "none.kitplan")]) == 2
    assert main(["levers"]) == 2
    assert "Traceback" not in capsys.readouterr().err
