"""The sample behind the ranges: fixed, centred, and true to the published percentiles of people's watts.

Percentiles of one person known by age and level only: a Monte Carlo run over capacity (FRIEND registry, SEE 6.6),
kept-up share, slope and intercept; at 30 min 0.56 and 1.59 of the typical watts.
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.records import Device, Note, Person, Plan, Station
from kitplanner.planners.effort_source import measured_source, person_factors
from kitplanner.planners.effort_spread import draws, field_spread, lossy_fraction, ordered_range
from kitplanner.planners.people import person_output

CRANK = Station(id="S", name="crank", output_w=6.0)


def test_draws_are_fixed_centred_and_unrelated() -> None:
    first, second = draws(), draws()
    arrays = [getattr(first, name) for name in first.__slots__]
    for name, array in zip(first.__slots__, arrays, strict=True):
        assert np.array_equal(array, getattr(second, name))
        # Better than the standard error of as many random points.
        assert abs(float(array.mean())) < 1.0 / np.sqrt(array.size)
        assert float(array.std()) == pytest.approx(1.0, abs=0.04)
    related = np.corrcoef(np.array(arrays)) - np.eye(len(arrays))
    assert float(np.abs(related).max()) < 0.12


def test_spread_comes_from_the_note_then_the_field_then_the_default() -> None:
    noted = Device(id="d", name="d", notes={"battery_wh": Note(spread_fraction=0.3)})
    plain = Device(id="d", name="d")
    assert field_spread(noted, "device", "battery_wh", 0.07) == 0.3
    assert field_spread(plain, "device", "battery_wh", 0.07) == 0.07
    assert field_spread(plain, "device", "eta", 0.5) == 0.05
    assert field_spread(CRANK, "station", "output_w") == 0.20
    assert field_spread(CRANK, "station", "label_w") == 0.40


@given(st.floats(0.01, 1.0), st.floats(0.0, 0.5))
def test_efficiencies_stay_efficiencies(eta: float, spread: float) -> None:
    sample = lossy_fraction(np.array([[eta]]), np.array([[spread]]), draws().device)
    assert np.all((sample >= 0.0) & (sample <= 1.0))
    assert float(np.median(sample)) == pytest.approx(eta, abs=0.02)


def test_a_lossless_step_has_no_spread() -> None:
    assert np.all(lossy_fraction(np.array([1.0]), np.array([0.05]), draws().device) == 1.0)


def test_range_never_crosses_the_central_run() -> None:
    low, high = ordered_range(np.array([[5.0, 6.0, 7.0]] * 3), np.array([4.0, 6.0, 9.0]))
    assert low.tolist() == [4.0, 5.0, 5.0]
    assert high.tolist() == [7.0, 7.0, 9.0]


def test_watts_by_level_meet_the_published_percentiles() -> None:
    """Adult of 40 at 20 min bouts of 60 min a day: effective 40 min, between the 30 and 60 min columns."""
    person = Person(id="p", name="p", age=40)
    output = person_output(Plan(), person, CRANK)
    factors = person_factors(Plan(), person, CRANK, output, draws())
    low, middle, high = np.quantile(factors, (0.1, 0.5, 0.9))
    assert 0.52 < low < 0.57
    assert middle == pytest.approx(1.0, abs=0.02)
    assert 1.58 < high < 1.66


def test_children_spread_wider_than_adults() -> None:
    def width(age: int) -> float:
        person = Person(id="p", name="p", age=age, bout_min=5, cap_min=10)
        output = person_output(Plan(), person, CRANK)
        low, high = np.quantile(person_factors(Plan(), person, CRANK, output, draws()), (0.1, 0.9))
        return float(high / low)

    assert width(13) > width(30)


@pytest.mark.parametrize("how", ["level", "share", "own", "label"])
def test_sample_of_a_measured_station_lies_around_its_central_output(how: str) -> None:
    person = Person(
        id="p",
        name="p",
        age=55,
        watts_by="level" if how == "label" else how,
        share_arms_fraction=0.6,
        own_arms_w=16.0,
    )
    station = Station(id="S", name="s", described_by="label", label_w=30.0) if how == "label" else CRANK
    source = measured_source(Plan(), person, station, draws())
    assert 0.0 < source.output_w < (30.0 if how == "label" else 6.0)
    assert float(np.median(source.sample_w)) == pytest.approx(source.output_w, rel=0.08)
    assert source.limit == "person"


def test_drag_makes_a_weaker_day_cost_more_than_its_share() -> None:
    """S = rated (x - d)/(1 - d): with a quarter of drag, a tenth fewer watts take more than a tenth."""
    person = Person(id="p", name="p", age=40, watts_by="own", own_legs_w=40.0)
    stand = Station(id="S", name="s", kind="pedal", output_w=40.0)
    source = measured_source(Plan(), person, stand, draws())
    output = person_output(Plan(), person, stand)
    factors = person_factors(Plan(), person, stand, output, draws())
    relative = float(np.std(np.log(np.maximum(source.sample_w, 1e-6))))
    assert relative > float(np.std(np.log(factors)))


def test_luck_with_losses_points_the_same_way_as_luck_with_watts() -> None:
    """A draw above the middle is the good end everywhere: watts up, losses down."""
    eta = lossy_fraction(np.array(0.85), np.array(0.05), np.array([-1.0, 0.0, 1.0]))
    assert eta[0] < eta[1] < eta[2]
