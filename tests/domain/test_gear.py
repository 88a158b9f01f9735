"""Gears: worked values and what is refused."""

from __future__ import annotations

import pytest

from kitplanner.domain.gear import GearBox, crank_torque_nm, gear_train_eta


def test_gear_trains_and_drag() -> None:
    assert gear_train_eta((0.92, 0.92, 0.92)) == pytest.approx(0.7787, rel=1e-4)
    assert crank_torque_nm(GearBox(40.0, 0.80), 0.0297) == pytest.approx(1.485, rel=1e-3)
    with_drag = crank_torque_nm(GearBox(40.0, 0.80, 0.08), 0.0297)
    assert with_drag == pytest.approx(1.565, rel=1e-3)
    assert 40.0 * 0.0297 / with_drag == pytest.approx(0.7591, rel=1e-3)


@pytest.mark.parametrize("constants", [(0.0, 1.0), (30.0, 0.0), (30.0, 1.1), (30.0, 0.9, -0.1)])
def test_gears_without_meaning_are_refused(constants: tuple[float, ...]) -> None:
    with pytest.raises(ValueError, match="A gear needs"):
        GearBox(*constants)
