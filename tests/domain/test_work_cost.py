"""Oxygen, food and water against ACSM, Hansen, Mifflin and published examples."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.work_cost import (
    child_vo2_ml_min,
    gross_efficiency,
    kcal_extra,
    kcal_per_min,
    metabolic_w,
    resting_kcal_per_day,
    vo2_arms,
    vo2_legs,
    water_l,
)


def test_acsm_published_example():
    """Bushman 2020: 450 kgm/min and 62 kg; the source prints 20 mL/kg/min (20.06 in kgm; 10.8 per watt is rounded)."""
    watts = 450.0 / 6.118
    assert watts == pytest.approx(73.55, rel=1e-3)
    assert round(float(vo2_legs(watts, 62.0))) == 20
    assert vo2_legs(watts, 62.0) == pytest.approx(7.0 + 1.8 * 450.0 / 62.0, rel=0.013)


def test_acsm_worked_values():
    assert vo2_legs(75.0, 75.0) == pytest.approx(17.80, rel=1e-3)
    assert kcal_per_min(vo2_legs(75.0, 75.0), 75.0) == pytest.approx(6.675, rel=1e-3)
    assert vo2_arms(25.0, 75.0) == pytest.approx(9.620, rel=1e-3)
    assert kcal_per_min(vo2_arms(25.0, 75.0), 75.0) == pytest.approx(3.608, rel=1e-3)
    assert vo2_arms(50.0, 70.0) == pytest.approx(16.61, rel=1e-3)


def test_hansen_children():
    """Hansen et al. 1989: 48 kg, 80 W -> 1200 mL/min = 25 mL/kg/min."""
    assert child_vo2_ml_min(80.0, 48.0) == pytest.approx(1200.0)


@pytest.mark.parametrize(
    ("power", "limb", "percent"),
    [
        (50.0, "legs", 14.01),
        (75.0, "legs", 16.77),
        (150.0, "legs", 20.87),
        (25.0, "arms", 10.34),
        (35.0, "arms", 11.54),
    ],
)
def test_gross_efficiency(power, limb, percent):
    """Worked from ACSM at 75 kg and 20.1 kJ/L; 19.8 % near 165 W (Moseley & Jeukendrup 2001) lies in between."""
    assert 100.0 * gross_efficiency(power, 75.0, limb) == pytest.approx(percent, rel=1e-3)


def test_recreational_riders():
    """Nickleberry & Brooks 1996: 13-22 % up to 250 W at 50 rpm."""
    for power in (45.0, 100.0, 180.0):
        assert 0.13 <= float(gross_efficiency(power, 75.0, "legs")) <= 0.22


def test_metabolic_watts_of_turning():
    assert metabolic_w(75.0, 75.0, "legs") == pytest.approx(447.2, rel=1e-3)
    assert metabolic_w(25.0, 75.0, "arms") == pytest.approx(241.7, rel=1e-3)


def test_extra_food():
    """Legs 75 W, 75 kg: 321.8 kcal an hour; arms 25 W: 137.7; a phone's 30 Wh at the crank: 165.2 and 144.4."""
    assert kcal_extra(75.0, 60.0, 75.0, "legs") == pytest.approx(321.8, rel=1e-3)
    assert kcal_extra(25.0, 60.0, 75.0, "arms") == pytest.approx(137.7, rel=1e-3)
    assert kcal_extra(25.0, 72.0, 75.0, "arms") == pytest.approx(165.2, rel=1e-3)
    assert kcal_extra(50.0, 36.0, 75.0, "legs") == pytest.approx(144.4, rel=2e-3)
    assert kcal_extra(0.0, 60.0, 75.0, "legs") == pytest.approx(78.75, rel=1e-3)


@given(power=st.floats(0.0, 200.0), mass=st.floats(40.0, 110.0), other=st.floats(40.0, 110.0))
def test_arms_cost_the_same_at_every_mass(power, mass, other):
    assert float(kcal_extra(power, 30.0, mass, "arms")) == pytest.approx(float(kcal_extra(power, 30.0, other, "arms")))


@given(power=st.floats(0.0, 200.0), minutes=st.floats(0.0, 240.0), scale=st.floats(0.1, 4.0))
def test_food_scales_with_time(power, minutes, scale):
    once = float(kcal_extra(power, minutes, 75.0, "legs"))
    assert float(kcal_extra(power, scale * minutes, 75.0, "legs")) == pytest.approx(scale * once)


def test_mifflin():
    """Mifflin et al. 1990: man 75 kg, 175 cm, 40 y; woman 65 kg, 165 cm, 40 y."""
    assert resting_kcal_per_day(75.0, 175.0, 40, 1) == pytest.approx(1649, abs=0.5)
    assert resting_kcal_per_day(65.0, 165.0, 40, 2) == pytest.approx(1320, abs=0.5)
    both = (resting_kcal_per_day(70.0, 170.0, 40, 1) + resting_kcal_per_day(70.0, 170.0, 40, 2)) / 2.0
    assert resting_kcal_per_day(70.0, 170.0, 40) == pytest.approx(both)


def test_water():
    assert [float(water_l(60.0, t, "legs")) for t in (10.0, 20.0, 27.0, 32.0)] == [0.3, 0.5, 0.75, 1.0]
    assert water_l(60.0, 35.0, "arms") == pytest.approx(0.7)
    # NIOSH 2017-126: never above 48 oz (1.4 L) in an hour.
    assert water_l(60.0, 60.0, "legs") <= 1.4
