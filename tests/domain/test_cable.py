"""Cables against ASTM B258, IEC 60228, IEC 60028 and the USB cable rules."""

from __future__ import annotations

import pytest

from kitplanner.domain.cable import (
    IEC_60228_CLASS_5_OHM_PER_M,
    TYPE_C_LOOP_OHM,
    Cable,
    awg_area_mm2,
    awg_diameter_mm,
    conductor_ohm_per_m,
    loop_ohm,
    wire_diameter_mm,
)
from kitplanner.domain.stage import Flow


@pytest.mark.parametrize(
    ("awg", "diameter_mm", "area_mm2", "cold_mohm", "warm_mohm"),
    [
        (18, 1.024, 0.8230, 20.95, 24.24),
        (20, 0.8118, 0.5176, 33.31, 38.54),
        (22, 0.6438, 0.3255, 52.96, 61.29),
        (24, 0.5106, 0.2047, 84.21, 97.45),
        (26, 0.4049, 0.1288, 133.9, 155.0),
        (28, 0.3211, 0.08098, 212.9, 246.4),
        (30, 0.2546, 0.05093, 338.5, 391.8),
    ],
)
def test_wire_table_of_astm_b258(
    awg: int, diameter_mm: float, area_mm2: float, cold_mohm: float, warm_mohm: float
) -> None:
    """Diameters of ASTM B258 table 1; resistances with 100 % IACS copper (IEC 60028) at 20 and 60 degC."""
    assert awg_diameter_mm(awg) == pytest.approx(diameter_mm, rel=6e-4)
    assert awg_area_mm2(awg) == pytest.approx(area_mm2, rel=6e-4)
    assert conductor_ohm_per_m(awg_area_mm2(awg)) * 1000.0 == pytest.approx(cold_mohm, rel=6e-4)
    assert conductor_ohm_per_m(awg_area_mm2(awg), 60.0) * 1000.0 == pytest.approx(warm_mohm, rel=6e-4)


def test_anchor_sizes_of_astm_b258() -> None:
    """The standard's two anchors: No. 36 is 0.0050 inch, No. 4/0 (-3) 0.4600 inch."""
    assert awg_diameter_mm(36) == pytest.approx(0.0050 * 25.4, rel=1e-12)
    assert awg_diameter_mm(-3) == pytest.approx(0.4600 * 25.4, rel=1e-12)


@pytest.mark.parametrize(("area_mm2", "most_ohm_per_m"), IEC_60228_CLASS_5_OHM_PER_M)
def test_solid_copper_lies_below_the_class_5_maxima_of_iec_60228(area_mm2: float, most_ohm_per_m: float) -> None:
    """IEC 60228 table 3: stranded wire may run up to about a seventh above solid copper of its area."""
    assert most_ohm_per_m / 1.16 < conductor_ohm_per_m(area_mm2) < most_ohm_per_m


def test_worked_drops() -> None:
    awg28 = loop_ohm(conductor_ohm_per_m(awg_area_mm2(28)), 1.0)
    assert awg28 == pytest.approx(0.5458, rel=2e-4)
    assert awg28 * 0.5 == pytest.approx(0.2729, rel=2e-4)
    awg24 = Cable(loop_ohm(conductor_ohm_per_m(awg_area_mm2(24)), 1.0))
    out_v, out_a = awg24.forward(5.0, 2.0)
    assert 5.0 - float(out_v) == pytest.approx(0.5769, rel=2e-4)
    assert float(awg24.loss_w(Flow(5.0, 2.0, out_v, out_a))) == pytest.approx(1.154, rel=5e-4)
    class_5 = dict(IEC_60228_CLASS_5_OHM_PER_M)[0.5]
    assert loop_ohm(class_5, 2.0, contacts=0) * 4.0 == pytest.approx(0.6240)


@pytest.mark.parametrize(("awg", "length_m"), [(28, 0.81), (26, 1.31), (24, 2.08), (22, 3.33), (20, 5.00)])
def test_usb_length_table_is_one_resistance_budget(awg: int, length_m: float) -> None:
    """Classic USB length table by wire size: each conductor drops 83 to 88 mV at 0.5 A."""
    assert 0.0832 < conductor_ohm_per_m(awg_area_mm2(awg)) * length_m * 0.5 < 0.0882


def test_type_c_assembly_limit() -> None:
    """USB Type-C cable assemblies: 500 mV on VBUS and 250 mV on ground at 3 A."""
    assert pytest.approx(0.250) == TYPE_C_LOOP_OHM


def test_diameter_and_area_undo_each_other() -> None:
    assert wire_diameter_mm(awg_area_mm2(24)) == pytest.approx(awg_diameter_mm(24), rel=1e-12)
