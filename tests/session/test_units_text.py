"""Units typed behind a number."""

import pytest

from kitplanner.session.units_text import factor_of_unit


@pytest.mark.parametrize(
    ("typed", "wanted", "factor"),
    [
        # Prefixes and the joule: BIPM, SI brochure, 9th edition, 2019; 1 Wh = 3600 J.
        ("kWh", "Wh", 1000.0),
        ("J", "Wh", 1 / 3600),
        ("kJ", "Wh", 1000 / 3600),
        ("MJ", "Wh", 1e6 / 3600),
        ("mW", "W", 1e-3),
        ("mA", "A", 1e-3),
        ("µA", "A", 1e-6),
        ("uA", "A", 1e-6),
        ("mΩ", "Ω", 1e-3),
        ("kohm", "Ω", 1e3),
        ("mNm", "N m", 1e-3),
        ("h", "min", 60.0),
        ("s", "min", 1 / 60),
        ("min", "h", 1 / 60),
        ("cm", "m", 0.01),
        ("mm", "m", 0.001),
        # NIST Special Publication 811, appendix B: the pound and the foot.
        ("lb", "kg", 0.45359237),
        ("ft", "m", 0.3048),
        ("kWh", "Wh/day", 1000.0),
        ("kWh/day", "Wh/day", 1000.0),
        # Charge at a nominal voltage: 4000 mAh at 3.85 V hold 15.4 Wh.
        ("mAh at 3.85 V", "Wh", 3.85e-3),
        ("mAh @ 3.7", "Wh", 3.7e-3),
        ("Ah at 12,8 V", "Wh", 12.8),
    ],
)
def test_known_units(typed, wanted, factor):
    assert factor_of_unit(typed, wanted) == pytest.approx(factor, rel=1e-12)


@pytest.mark.parametrize(
    ("typed", "wanted"), [("V", "Wh"), ("mAh", "Wh"), ("kWh", "W"), ("%", "Wh"), ("Mm", "A"), ("x", "")]
)
def test_units_that_do_not_fit(typed, wanted):
    assert factor_of_unit(typed, wanted) is None
