"""Copper against IEC 60028."""

from __future__ import annotations

import pytest

from kitplanner.domain.copper import COPPER_OHM_M, copper_ohm


def test_warm_copper_after_iec_60028() -> None:
    """Temperature coefficient 0.00393 per kelvin at 20 degC (IEC 60028)."""
    assert copper_ohm(1.5, 80.0) == pytest.approx(1.854, rel=1e-3)
    assert copper_ohm(1.5, 20.0) == 1.5


def test_resistivity_is_100_percent_iacs() -> None:
    """IEC 60028: a wire of 1 m and 1 mm2 has 1/58 ohm at 20 degC."""
    assert pytest.approx(1e-6 / 58.0, rel=1e-4) == COPPER_OHM_M
