"""Heat limits against NIOSH's curves and table."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.heat import (
    HeatRule,
    heat_fraction,
    heat_rule,
    niosh_work_min,
    ramp_up_fraction,
    volunteer_rule,
    wbgt_limit_degc,
    work_class,
)


@pytest.mark.parametrize(
    ("metabolic_w", "rel", "ral"),
    [
        (180.0, 30.76, 28.10),
        (300.0, 28.21, 24.97),
        (415.0, 26.59, 22.99),
        (447.0, 26.22, 22.53),
        (520.0, 25.47, 21.60),
    ],
)
def test_niosh_curves(metabolic_w, rel, ral):
    """NIOSH 2016-106, 8.1 (the curve of ISO 7243:2017), at the classes of ISO 8996 and for 75 W pedalling."""
    assert wbgt_limit_degc(metabolic_w, acclimatised=True) == pytest.approx(rel, rel=1e-3)
    assert wbgt_limit_degc(metabolic_w) == pytest.approx(ral, rel=1e-3)


def test_share_of_an_hour():
    assert heat_fraction(447.0, 29.0) == pytest.approx(0.1217, rel=1e-3)
    assert heat_fraction(447.0, 29.0, acclimatised=True) == pytest.approx(0.4255, rel=1e-3)


@given(metabolic_w=st.floats(130.0, 600.0), acclimatised=st.booleans())
def test_at_the_limit_the_whole_hour_may_be_worked(metabolic_w, acclimatised):
    limit = float(wbgt_limit_degc(metabolic_w, acclimatised=acclimatised))
    assert float(heat_fraction(metabolic_w, limit, acclimatised=acclimatised)) == pytest.approx(1.0)
    assert float(heat_fraction(metabolic_w, limit + 1.0, acclimatised=acclimatised)) < 1.0
    assert float(heat_fraction(metabolic_w, 60.0, acclimatised=acclimatised)) == 0.0


@given(metabolic_w=st.floats(130.0, 600.0), wbgt=st.floats(10.0, 40.0), hotter=st.floats(0.0, 10.0))
def test_hotter_never_allows_more(metabolic_w, wbgt, hotter):
    assert heat_fraction(metabolic_w, wbgt + hotter) <= heat_fraction(metabolic_w, wbgt)


@pytest.mark.parametrize("per_square_metre", [65.0, 99.0])
def test_watts_per_square_metre_are_refused(per_square_metre):
    with pytest.raises(ValueError, match="per square metre"):
        wbgt_limit_degc(per_square_metre)
    with pytest.raises(ValueError, match="whole body"):
        heat_fraction(per_square_metre, 29.0)


def test_work_at_the_rate_of_rest_is_not_divided_by_zero():
    assert heat_fraction(115.0, 20.0) == 1.0


def test_classes_of_iso_8996():
    assert [work_class(w) for w in (115.0, 180.0, 300.0, 415.0, 520.0)] == [
        "light",
        "light",
        "moderate",
        "heavy",
        "heavy",
    ]


@pytest.mark.parametrize(
    ("air_degc", "light", "moderate", "heavy"),
    [
        (34.4, 60, 60, 60),
        (35.0, 60, 60, 45),
        (36.1, 60, 60, 40),
        (37.2, 60, 60, 35),
        (37.8, 60, 45, 30),
        (38.9, 60, 35, 25),
        (39.4, 60, 30, 20),
        (40.0, 60, 30, 20),
        (40.6, 60, 25, 15),
        (41.1, 45, 20, 0),
        (42.2, 35, 0, 0),
        (43.3, 15, 0, 0),
        (43.9, 0, 0, 0),
    ],
)
def test_niosh_air_temperature_table(air_degc, light, moderate, heavy):
    """NIOSH 2017-127, sample schedule, converted to Celsius."""
    assert [int(niosh_work_min(air_degc, c)) for c in ("light", "moderate", "heavy")] == [light, moderate, heavy]


def test_volunteers_are_kept_well_inside_the_table_for_workers():
    for air_degc in range(10, 50):
        rule = volunteer_rule(float(air_degc))
        assert rule.on_min <= niosh_work_min(air_degc, "heavy") or rule.on_min <= 20
        assert rule.on_min + rule.off_min == 60


def test_volunteer_steps():
    assert [volunteer_rule(t).on_min for t in (25.9, 26.0, 29.0, 31.9, 32.0)] == [20, 15, 10, 10, 0]
    assert volunteer_rule(32.0, arms=True) == HeatRule(10, 50, essential_only=True)
    assert volunteer_rule(25.0, sun_or_humid=True).on_min == 15
    assert volunteer_rule(40.0, sun_or_humid=True).on_min == 0


def test_the_stricter_of_air_and_globe_temperature():
    assert heat_rule(430.0, 25.0, 20.0) == HeatRule(20, 40)
    assert heat_rule(430.0, 25.0) == HeatRule(20, 40)
    strict = heat_rule(430.0, 25.0, 30.0)
    assert strict.on_min < 20
    assert strict.off_min == 60 - strict.on_min


def test_ramp_up():
    """NIOSH 2016-106: new workers start at 20 % and gain 20 % a day."""
    assert ramp_up_fraction([1, 2, 3, 4, 5, 6]) == pytest.approx([0.2, 0.4, 0.6, 0.8, 1.0, 1.0])
