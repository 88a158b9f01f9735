"""Horizon presets: the days that guidance names, and how well it is known."""

from kitplanner.plan.fields import field
from kitplanner.plan.horizons import HORIZONS, guidance_sentence


def test_presets_rise_fit_the_field_and_name_their_guidance():
    days = [one.days for one in HORIZONS]
    assert days == [3, 7, 10, 14]
    assert days[-1] <= field("plan", "days").high
    for one in HORIZONS:
        assert one.guidance
        for body, sentence in zip(one.guidance, one.sentences, strict=True):
            assert sentence == guidance_sentence(body)
            assert sentence.startswith(body.body)
            assert body.evidence in sentence


def test_what_was_not_read_says_so():
    memory = [one for horizon in HORIZONS for one in horizon.guidance if one.evidence == "from memory"]
    assert [one.body for one in memory] == ["Swedish MSB"]
    assert guidance_sentence(memory[0]) == "Swedish MSB: one week (from memory, 2024)"
