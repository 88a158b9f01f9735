"""Factors between typed units: exact, and None where they do not fit."""

from fractions import Fraction

import pytest

from kitplanner.plan.unit_factors import exact_factor, is_known_unit, units_for


@pytest.mark.parametrize(
    ("typed", "wanted", "factor"),
    [
        # BIPM, SI brochure, 9th edition, 2019; NIST Special Publication 811, appendix B for pound, foot and inch.
        ("MJ", "Wh", Fraction(10**6, 3600)),
        ("kWh", "J", Fraction(3_600_000)),
        ("d", "h", Fraction(24)),
        ("g", "kg", Fraction(1, 1000)),
        ("lb", "kg", Fraction(45359237, 10**8)),
        ("ft", "m", Fraction(3048, 10**4)),
        ("in", "m", Fraction(254, 10**4)),
        ("mohm", "Ω", Fraction(1, 1000)),
        ("kwh", "Wh", Fraction(1000)),
        ("kWh a day", "Wh/day", Fraction(1000)),
        ("rpm", "turns/min", Fraction(1)),
    ],
)
def test_factors(typed, wanted, factor):
    assert exact_factor(typed, wanted) == factor


@pytest.mark.parametrize(
    ("typed", "wanted"),
    [
        ("V", "Wh"),
        ("Ah", "Wh"),
        ("Wh/day", "Wh"),
        ("Wh/month", "Wh/day"),
        ("Mw", "W"),
        ("", "W"),
        ("%", "W"),
        ("x", ""),
    ],
)
def test_units_that_do_not_fit(typed, wanted):
    assert exact_factor(typed, wanted) is None


def test_units_offered_start_with_the_field_s_own():
    assert units_for("Wh/day")[:2] == ("Wh/day", "kWh/day")
    assert units_for("years") == ("years",)
    assert not is_known_unit("O")
