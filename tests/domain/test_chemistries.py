"""Worked values of other chemistries, labels, cold and storage."""

from __future__ import annotations

import numpy as np
import pytest

from kitplanner.domain.chemistries import (
    NIMH_ENERGY_ETA,
    NIMH_STANDARD_HOURS,
    NIMH_STANDARD_RATE_PER_H,
    charge_left_fraction,
    energy_to_store_wh,
    lead_acid_size_ah,
    minutes_of_supply,
    outlet_mah,
    peukert_hours,
    shelf_fraction,
    sizing_temperature_factor,
    supercapacitor_wh,
    tau_factor,
)
from kitplanner.domain.units import wh_from_mah


def test_power_bank_label_is_at_cell_volts():
    """10 000 mAh at 3.7 V behind 0.88 leave 6512 mAh at 5 V, 32.56 Wh; at best 7400 mAh before losses."""
    assert outlet_mah(10000.0) == pytest.approx(6512.0, rel=1e-3)
    assert wh_from_mah(float(outlet_mah(10000.0)), 5.0) == pytest.approx(32.56, rel=1e-3)
    assert outlet_mah(10000.0, eta_out=1.0) == pytest.approx(7400.0)


def test_nimh_of_iec_61951_2():
    """Standard charge 0.1 C for 16 h: 1/1.6 of the charge comes out; four AA of 2 Ah need 14.55 Wh."""
    charge_in = NIMH_STANDARD_RATE_PER_H * NIMH_STANDARD_HOURS
    assert charge_in == pytest.approx(1.0 / 0.625)
    assert energy_to_store_wh(4 * 2.0 * 1.2, NIMH_ENERGY_ETA) == pytest.approx(14.55, rel=1e-3)


def test_peukert_7_ah_at_2_a():
    """Peukert 1897, exponent 1.2: 2.470 h and 4.940 Ah instead of 3.5 h."""
    hours = float(peukert_hours(2.0, 7.0))
    assert hours == pytest.approx(2.470, rel=1e-3)
    assert 2.0 * hours == pytest.approx(4.940, rel=1e-3)
    assert peukert_hours(7.0 / 20.0, 7.0) == pytest.approx(20.0)


def test_lead_acid_sizing():
    """Practice of IEEE 485 and 1013: 20 Wh a day, 2 days, half usable, 10 degC: 10.91 Ah."""
    assert lead_acid_size_ah(20.0, 2.0, degc=10.0) == pytest.approx(10.91, rel=1e-3)
    assert [float(sizing_temperature_factor(t)) for t in (30.0, 25.0, 15.6, 4.4, -10.0)] == [1.0, 1.0, 1.11, 1.30, 1.30]


def test_supercapacitor():
    """100 F from 2.7 to 1.35 V: 273.4 J, 154.9 s of 1.5 W at 0.85."""
    energy = supercapacitor_wh(100.0, 2.7, 1.35)
    assert energy == pytest.approx(0.07594, rel=1e-3)
    assert energy * 3600.0 == pytest.approx(273.4, rel=1e-3)
    assert 60.0 * minutes_of_supply(energy, 1.5, 0.85) == pytest.approx(154.9, rel=1e-3)


def test_alkaline_shelf_life():
    """85 % after four years is 3.982 % a year and 0.6661 after ten."""
    assert 1.0 - shelf_fraction(1.0) == pytest.approx(0.03982, rel=1e-3)
    assert shelf_fraction(10.0) == pytest.approx(0.6661, rel=1e-3)


def test_self_discharge_doubles_with_ten_degrees():
    assert 1.0 - charge_left_fraction(1.0, 0.02, 35.0) == pytest.approx(2.0 * (1.0 - charge_left_fraction(1.0, 0.02)))
    assert 1.0 - charge_left_fraction(1.0, 0.02, 15.0) == pytest.approx(0.01)
    assert charge_left_fraction(12.0) == pytest.approx(0.98**12)
    assert charge_left_fraction(1.0, 0.5, 60.0) == 0.0


def test_cold_and_old_cells_taper_longer():
    """0.30 h new at 25 degC, 0.39 h old, 0.51 h at 4 degC (fits to NASA PCoE cells)."""
    assert 0.30 * tau_factor(25.0, aged=True) == pytest.approx(0.39)
    assert 0.30 * tau_factor(4.0) == pytest.approx(0.51)
    assert tau_factor(40.0) == 1.0
    assert np.all(np.diff(tau_factor(np.linspace(-10.0, 25.0, 50))) < 0.0)
