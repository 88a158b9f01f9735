"""Sweat against Gonzalez et al. 2009 and a plain heat balance."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.sweat import (
    body_area_m2,
    greatest_evaporation_w_m2,
    required_evaporation_w_m2,
    sweat_corrected_g_m2_h,
    sweat_g_m2_h,
    sweat_shapiro_g_m2_h,
    vapour_pressure_kpa,
)
from kitplanner.domain.work_cost import metabolic_w


def test_du_bois():
    """Du Bois 1916: 75 kg, 172 cm -> 1.879 m2; the reference man of ISO 8996 (70 kg) near 1.8 m2."""
    assert body_area_m2(75.0, 172.0) == pytest.approx(1.879, rel=1e-3)
    assert body_area_m2(70.0, 170.0) == pytest.approx(1.8, rel=0.01)


@pytest.mark.parametrize(("degc", "kpa"), [(0.0, 0.6113), (20.0, 2.339), (30.0, 4.246), (35.0, 5.628)])
def test_saturation_pressure(degc, kpa):
    """Steam tables (IAPWS), rounded."""
    assert vapour_pressure_kpa(degc) == pytest.approx(kpa, rel=3e-3)


def test_gonzalez():
    """Gonzalez et al. 2009 at E_req 172.1 and E_max 126.9 W/m2."""
    assert sweat_g_m2_h(172.1, 126.9) == pytest.approx(299.4, rel=1e-3)
    assert sweat_shapiro_g_m2_h(172.1, 126.9) == pytest.approx(530.0, rel=1e-3)
    assert sweat_corrected_g_m2_h(172.1, 126.9) == pytest.approx(277.7, rel=1e-3)


@pytest.mark.parametrize(
    ("air_degc", "humidity", "required", "greatest", "litres"),
    [(20.0, 0.5, 120.1, 183.7, 0.3205), (30.0, 0.6, 172.1, 126.9, 0.5625)],
)
def test_pedalling_in_the_shade(air_degc, humidity, required, greatest, litres):
    """75 W, 75 kg, 172 cm; the Celsius and humidity of two days, worked by hand with steam-table pressures."""
    area = float(body_area_m2(75.0, 172.0))
    need = float(required_evaporation_w_m2(metabolic_w(75.0, 75.0, "legs"), 75.0, area, air_degc))
    room = float(greatest_evaporation_w_m2(air_degc, humidity))
    assert need == pytest.approx(required, rel=1e-3)
    assert room == pytest.approx(greatest, rel=2e-3)
    assert area * float(sweat_g_m2_h(need, room)) / 1000.0 == pytest.approx(litres, rel=2e-3)


def test_sweat_is_near_what_evaporation_of_all_heat_needs():
    """372 W by evaporation at 2.426 kJ/g (latent heat at 30 degC) is 0.55 L/h; the equation gives 0.56."""
    area = float(body_area_m2(75.0, 172.0))
    litres = area * float(sweat_g_m2_h(172.1, 126.9)) / 1000.0
    assert litres == pytest.approx((447.2 - 75.0) * 3600.0 / 2426.0 / 1000.0, rel=0.05)


@given(need=st.floats(0.0, 450.0), room=st.floats(1.0, 400.0), more=st.floats(0.0, 100.0))
def test_more_heat_more_sweat(need, room, more):
    assert sweat_g_m2_h(need + more, room) >= sweat_g_m2_h(need, room) >= 0.0


def test_nothing_to_shed_in_the_cold():
    assert required_evaporation_w_m2(115.0, 0.0, 1.8, -20.0) == 0.0
    assert greatest_evaporation_w_m2(40.0, 1.0) == 0.0
