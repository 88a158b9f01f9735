"""The step known only by its efficiency."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.domain.stage import FixedLoss, Flow


@given(st.floats(0.01, 1.0), st.floats(0.0, 30.0), st.floats(0.0, 10.0))
def test_volts_pass_amps_shrink_and_watts_balance(eta: float, volts: float, amps: float) -> None:
    stage = FixedLoss(eta)
    out_v, out_a = stage.forward(volts, amps)
    assert out_v == volts
    assert out_a == eta * amps
    assert volts * amps == pytest.approx(out_v * out_a + stage.loss_w(Flow(volts, amps, out_v, out_a)), abs=1e-12)
