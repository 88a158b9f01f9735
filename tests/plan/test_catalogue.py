"""Plans to begin with."""

from __future__ import annotations

import pytest

from kitplanner.plan.catalogue import PLAN_KINDS, new_plan
from kitplanner.plan.codec import PlanFileError, decode
from kitplanner.plan.shipped import DEMOS, demo


def test_there_is_one_for_every_demo():
    assert PLAN_KINDS == DEMOS


@pytest.mark.parametrize("kind", PLAN_KINDS)
def test_a_new_plan_is_the_demo_of_its_kind(kind):
    assert new_plan(kind) == decode(demo(kind).read_bytes())


@pytest.mark.parametrize("kind", ["", "Camp", "../camp", "x" * 500])
def test_other_kinds_are_refused_in_one_sentence(kind):
    with pytest.raises(
        PlanFileError, match="there is no such kind of plan; use one of household, camp, shelter, bench"
    ):
        new_plan(kind)
