"""Generic kinds: sound records, every figure with mark and source, figures against their sources, no products."""

import re

import pytest

from kitplanner.domain.demand import duty_power_w
from kitplanner.plan.catalogue_kinds import CATALOGUE_SECTIONS, add_kind, kind, kinds, record_of
from kitplanner.plan.checks import check
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.device_use import device_use_wh_per_day
from kitplanner.plan.edits import EditError
from kitplanner.plan.fields import SECTION_KINDS, field
from kitplanner.plan.records import Plan

ALL = [one for section in CATALOGUE_SECTIONS for one in kinds(section)]
WITHOUT_NOTE = {"kind", "use_by", "described_by", "priority", "evening", "chemistry", "connector", "floor_fraction"}


def test_the_kinds_that_are_asked_for_are_there():
    wanted = {"smartphone", "basic_phone", "radio", "two_way_radio", "lamp", "head_torch", "laptop", "tablet", "router"}
    wanted |= {"gnss_receiver", "camera", "hearing_aid_case", "power_bank_10", "power_bank_20", "battery_lfp_12v"}
    wanted |= {"battery_lead_12v", "nimh_set", "hand_crank", "pocket_crank", "pedal_stand", "treadle"}
    assert wanted <= {one.key for one in ALL}
    assert len({one.key for one in ALL}) == len(ALL)


@pytest.mark.parametrize("key", [one.key for one in ALL])
def test_every_kind_makes_a_sound_record_with_sources(key):
    what = kind(key)
    plan = add_kind(key, 3)(Plan())
    (record,) = getattr(plan, what.section)
    assert record.count == 3
    assert not [one for one in check(plan) if one.severity == "error"]
    assert decode(encode(plan)) == plan
    for name, value in what.values.items():
        spec = field(SECTION_KINDS[what.section], name)
        if isinstance(value, float):
            assert spec.low is None or value >= spec.low
            assert spec.high is None or value <= spec.high
        if name not in WITHOUT_NOTE:
            assert what.notes[name].source, (key, name)
            assert what.notes[name].mark in ("default", "guidance", "guess")
    assert set(what.notes) <= set(what.values)


@pytest.mark.parametrize(
    ("key", "low", "high"),
    [
        # 5 mAh figures times nominal volts: 3000 to 5000 mAh at 3.85 V; 800 to 1200 mAh at 3.7 V.
        ("smartphone", 11.55, 19.25),
        ("basic_phone", 2.96, 4.44),
    ],
)
def test_batteries_lie_in_the_range_of_their_labels(key, low, high):
    assert low <= record_of(key, "D1").battery_wh <= high


def test_figures_that_follow_from_others():
    assert record_of("power_bank_10", "B").nominal_wh == pytest.approx(10_000 * 3.7 / 1000)
    assert record_of("power_bank_20", "B").nominal_wh == pytest.approx(20_000 * 3.7 / 1000)
    assert record_of("battery_lfp_12v", "B").nominal_wh == pytest.approx(20 * 12.8)
    assert record_of("battery_lead_12v", "B").nominal_wh == pytest.approx(7 * 12)
    assert record_of("nimh_set", "B").nominal_wh == pytest.approx(4 * 2 * 1.2)
    lead = record_of("battery_lead_12v", "B")
    assert lead.eta_in * lead.eta_out == pytest.approx(0.70, abs=0.01)
    radio = record_of("two_way_radio", "D")
    assert radio.use_w == pytest.approx(float(duty_power_w([7.4 * 1.4, 7.4 * 0.14, 7.4 * 0.04])), abs=0.01)
    assert record_of("gnss_receiver", "D").use_w == pytest.approx(0.040 * 3.3)
    assert device_use_wh_per_day(record_of("smartphone", "D")) == 6.0


def test_words_are_generic():
    for one in ALL:
        # A product would show by a capital inside or a number of a model.
        assert not re.search(r"[a-z][A-Z]|[A-Z]{2,}\d", one.name.replace("NiMH", "")), one.name


def test_an_unknown_kind_is_refused():
    with pytest.raises(EditError, match="there is no kind 'windmill'; choose one of the catalogue"):
        add_kind("windmill")(Plan())
