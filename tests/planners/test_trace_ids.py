"""Every number of every answer can be asked where it comes from, and the trace shows the number of the answer."""

from __future__ import annotations

import inspect
import re
import typing
from types import ModuleType

import numpy as np
import pytest
from msgspec import Struct

from kitplanner.plan.files import read_plan
from kitplanner.plan.records import OtherSource, Plan
from kitplanner.plan.shipped import demo
from kitplanner.planners import results as results_module
from kitplanner.planners.bench import bench_point
from kitplanner.planners.pipeline import Results, run_slow
from kitplanner.planners.rota import result as rota_module
from kitplanner.planners.rota.answer import rota_answer
from kitplanner.planners.rota.result import RotaAnswer
from kitplanner.planners.trace import trace
from kitplanner.planners.trace_bench import BENCH_FORMULAS, STAGE_FORMULAS, trace_bench
from kitplanner.planners.trace_fields import TraceError
from kitplanner.planners.trace_ids import FLOW_BAND_IDS, PASSING, ROW_NAMES, TRACE_IDS, formula_of
from kitplanner.planners.trace_rota import ROTA_FORMULAS, trace_rota

NOT_ANSWERS = {"Trace", "TraceStep", "FlowBand", *PASSING}


def is_number(annotation: object) -> bool:
    """True for a number, an array of numbers, or a mapping to them; flags and texts are none."""
    parts = {annotation, *typing.get_args(annotation)}
    if bool in parts:
        return False
    return bool(parts & {int, float}) or any("ndarray" in repr(part) for part in parts)


def numeric_keys(module: ModuleType) -> set[tuple[str, str]]:
    found = set()
    for name, made in inspect.getmembers(module, inspect.isclass):
        if issubclass(made, Struct) and made.__module__ == module.__name__ and name not in NOT_ANSWERS:
            hints = typing.get_type_hints(made)
            found |= {(name, key) for key, hint in hints.items() if is_number(hint) and key not in ROW_NAMES}
    return found


def test_every_number_of_every_answer_has_an_id() -> None:
    wanted = numeric_keys(results_module) | numeric_keys(rota_module)
    named = {(answer, key) for answer, keys in TRACE_IDS.items() for key in keys}
    assert len(wanted) > 70
    assert wanted == named


def test_bands_of_the_energy_line_are_those_of_the_answer() -> None:
    hints = typing.get_type_hints(results_module.EnergyFlow)
    bands = {key for key, hint in hints.items() if results_module.FlowBand in typing.get_args(hint)}
    assert bands == set(FLOW_BAND_IDS)


@pytest.fixture(scope="module", params=["household", "shelter"])
def plan(request: pytest.FixtureRequest) -> Plan:
    found = read_plan(demo(request.param))
    from msgspec import structs

    return structs.replace(found, other_sources=(OtherSource(id="W", name="Wind", wh_per_day=12.0),))


@pytest.fixture(scope="module")
def results(plan: Plan) -> Results:
    return run_slow(plan, None)


@pytest.fixture(scope="module")
def rota() -> tuple[Plan, RotaAnswer]:
    plan = read_plan(demo("household"))
    return plan, rota_answer(plan)


def first_number(text: str) -> float:
    found = re.search(r"-?\d+(\.\d+)?", text)
    assert found, text
    return float(found.group())


def complete(found: results_module.Trace) -> None:
    assert found.formula
    assert found.words.endswith(".")
    assert found.source
    assert found.value
    assert found.steps
    assert all(step.label and step.mark for step in found.steps)


def check(plan: Plan, results: Results, answer: object, key: str, ids: tuple[str, ...]) -> None:
    found = trace(plan, results, formula_of(type(answer).__name__, key), ids)
    complete(found)
    shown = getattr(answer, key)
    if shown is not None and "along the curve" not in found.value:
        assert first_number(found.value) == pytest.approx(shown, abs=0.06), (key, found.value)


def test_balance(plan: Plan, results: Results) -> None:
    answer = results.balance
    assert answer is not None
    for key in TRACE_IDS["BalanceResult"]:
        check(plan, results, answer, key, ())
    for name, rows, id_key in (
        ("BalanceDay", answer.days, "day"),
        ("BalanceHour", answer.hours, "hour"),
        ("BalanceStore", answer.stores, "store"),
        ("BalanceStation", answer.stations, "station"),
    ):
        for row in rows:
            for key in TRACE_IDS[name]:
                check(plan, results, row, key, (str(getattr(row, id_key)),))
    for person in answer.people:
        check(plan, results, person, "cap_min", (person.person,))
        check(plan, results, person, "used_min", (person.person, person.station))
        check(plan, results, person, "output_w", (person.person, person.station))
    for cut in ("strict", "shared"):
        for row in getattr(answer.cuts, cut):
            for key in TRACE_IDS["CutClass"]:
                check(plan, results, row, key, (cut, str(row.priority)))
    for device in answer.devices:
        check(plan, results, device, "credit_wh", (device.device,))
        check(plan, results, device, "covered_fraction", (device.device,))
        complete(trace(plan, results, "device_use", (device.device,)))


def test_steps_of_a_day_add_up(plan: Plan, results: Results) -> None:
    for day in ("1", "2"):
        found = trace(plan, results, "day_end", (day,))
        before, made, used = (float(step.value) for step in found.steps)
        assert first_number(found.value) == pytest.approx(before + made - used, abs=0.03)


def test_effort_rows_and_curves(plan: Plan, results: Results) -> None:
    assert results.effort is not None
    rows = results.effort.rows
    for row in rows[:: max(1, len(rows) // 8)]:
        ids = (row.device, row.station, row.person, row.route, row.charge)
        for key in TRACE_IDS["EffortRow"]:
            check(plan, results, row, key, ids)
        for key in TRACE_IDS["ChargeCurve"]:
            complete(trace(plan, results, formula_of("ChargeCurve", key), ids))


def test_energy_line(plan: Plan, results: Results) -> None:
    flow = results.flow
    assert flow is not None
    for key in TRACE_IDS["EnergyFlow"]:
        check(plan, results, flow, key, ())
    for side, formula in FLOW_BAND_IDS.items():
        for band in getattr(flow, side):
            found = trace(plan, results, formula, (band.key,))
            complete(found)
            assert first_number(found.value) == pytest.approx(band.wh_per_day, abs=0.01)
            if len(found.steps) == len(band.ids) and side != "sources_s":
                assert sum(float(step.value) for step in found.steps) == pytest.approx(band.wh_per_day, abs=0.1)
    for loss in flow.losses:
        found = trace(plan, results, "flow_loss", (loss.level_from, loss.level_to))
        before, after = (float(step.value) for step in found.steps)
        assert before - after == pytest.approx(loss.wh_per_day, abs=0.03)


@pytest.mark.parametrize("station", ["A", "A-buck", "B", "C-5V", "C-12V"])
def test_bench(station: str) -> None:
    plan = read_plan(demo("bench"))
    point = bench_point(plan, station)
    for formula in BENCH_FORMULAS:
        found = trace_bench(plan, point, formula)
        complete_or_bare(found)
        shown = getattr(point, formula.removeprefix("bench_"), None)
        if shown is not None:
            assert first_number(found.value) == pytest.approx(shown, abs=0.001)
    for place, row in enumerate(point.stages):
        for formula in STAGE_FORMULAS:
            found = trace_bench(plan, point, formula, (str(place),))
            complete(found)
            shown = getattr(row, formula.removeprefix("bench_stage_"))
            if shown is not None:
                assert first_number(found.value) == pytest.approx(shown, abs=0.001)


def complete_or_bare(found: results_module.Trace) -> None:
    assert found.formula
    assert found.words.endswith(".")
    assert found.source
    assert found.steps


def test_every_id_is_answered_by_somebody() -> None:
    from kitplanner.planners.trace import OF_PLAN, OF_RECORDS

    known = {*OF_PLAN, *OF_RECORDS, *BENCH_FORMULAS, *STAGE_FORMULAS, *ROTA_FORMULAS}
    named = {formula for keys in TRACE_IDS.values() for formula in keys.values()} | set(FLOW_BAND_IDS.values())
    assert named <= known
    assert not ({*BENCH_FORMULAS, *STAGE_FORMULAS, *ROTA_FORMULAS} & {*OF_PLAN, *OF_RECORDS})


def test_rota(rota: tuple[Plan, RotaAnswer]) -> None:
    plan, answer = rota
    solution = answer.solution
    assert solution.bouts
    for place, bout in enumerate(solution.bouts[:5]):
        found = trace_rota(plan, answer, "rota_bout_energy", (str(place),))
        complete(found)
        assert first_number(found.value) == pytest.approx(bout.output_wh, abs=0.01)
        complete(trace_rota(plan, answer, "rota_bout_time", (str(place),)))
    for place, row in enumerate(answer.charging[:5]):
        found = trace_rota(plan, answer, "rota_charge_energy", (str(place),))
        assert first_number(found.value) == pytest.approx(row.energy_wh, abs=0.01)
        for formula in ("rota_charge_time", "rota_charge_tickets"):
            complete(trace_rota(plan, answer, formula, (str(place),)))
    for aim in solution.objectives:
        for formula, value in (
            ("rota_aim_value", aim.value),
            ("rota_aim_bound", aim.bound),
            ("rota_aim_gap", aim.gap),
        ):
            found = trace_rota(plan, answer, formula, (aim.name,))
            complete(found)
            if np.isfinite(value):
                assert first_number(found.value) == pytest.approx(value, abs=0.001)
    for formula in ("rota_unmet", "rota_unmet_margin", "rota_wasted", "rota_made", "rota_made_bound", "rota_grid"):
        complete(trace_rota(plan, answer, formula))
    complete(trace_rota(plan, answer, "rota_search"))
    complete(trace_rota(plan, answer, "rota_pooled"))
    for key in (*answer.levels.stores_wh, *answer.levels.devices_wh):
        complete(trace_rota(plan, answer, "rota_level", (key,)))


def test_unmet_use_is_traced() -> None:
    from msgspec import structs

    plan = read_plan(demo("household"))
    empty = structs.replace(plan, stores=(), stations=(), people=(), days=1)
    hungry = structs.replace(
        empty, devices=tuple(structs.replace(one, start_fraction=one.floor_fraction) for one in empty.devices)
    )
    answer = rota_answer(hungry)
    assert answer.unmet
    for place in range(len(answer.unmet)):
        complete(trace_rota(hungry, answer, "rota_unmet_row", (str(place),)))
    total = trace_rota(hungry, answer, "rota_unmet")
    assert first_number(total.value) == pytest.approx(sum(float(step.value) for step in total.steps), abs=0.2)


@pytest.mark.parametrize(
    ("formula", "ids"),
    [("day_use", ("99",)), ("cut_need", ("strict",)), ("cut_have", ("fair", "1")), ("flow_people", ("x",)),
     ("flow_loss", ("S", "M")), ("person_cap", ("x",)), ("nothing", ())],
)  # fmt: skip
def test_unknown_numbers_are_refused(plan: Plan, results: Results, formula: str, ids: tuple[str, ...]) -> None:
    with pytest.raises(TraceError):
        trace(plan, results, formula, ids)


def test_unknown_rows_of_bench_and_rota_are_refused(rota: tuple[Plan, RotaAnswer]) -> None:
    bench = read_plan(demo("bench"))
    point = bench_point(bench, "A")
    for formula, ids in (("bench_nothing", ()), ("bench_stage_in_w", ("99",)), ("bench_stage_in_w", ())):
        with pytest.raises(TraceError):
            trace_bench(bench, point, formula, ids)
    for formula, ids in (
        ("rota_nothing", ()),
        ("rota_bout_time", ("999",)),
        ("rota_level", ("x",)),
        ("rota_aim_gap", ()),
    ):
        with pytest.raises(TraceError):
            trace_rota(*rota, formula, ids)
