"""Power-duration rules against their published worked values and an independent integration."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from kitplanner.domain.capacity import v_peak_ml_kg_min
from kitplanner.domain.endurance import (
    bink_fraction,
    critical_power_w,
    endurance_morton_s,
    endurance_s,
    is_beyond_handbook,
    krendel_w,
    push_w,
    recovery_tau_s,
    w_balance_j,
    w_prime_of,
)

CP_W, W_PRIME_J = 150.0, 12000.0


def test_krendel():
    """Krendel 1958, 0.35 - 0.092 log10 t horsepower; teaching notes print 0.13 hp at 240 min."""
    assert krendel_w([60.0, 240.0]) == pytest.approx([139.0, 97.70], rel=1e-3)
    assert krendel_w([5.0, 15.0, 30.0, 300.0, 480.0]) == pytest.approx([213.0, 180.3, 159.7, 91.05, 77.05], rel=1e-3)
    assert krendel_w(15.0, 20.0) == pytest.approx(207.4, rel=1e-3)
    assert krendel_w(240.0, 60.0) == pytest.approx(78.16, rel=1e-3)
    assert krendel_w(240.0) / 745.7 == pytest.approx(0.13, abs=0.005)


def test_krendel_is_held_to_its_domain():
    assert krendel_w(1.0) == krendel_w(4.0)
    assert krendel_w(900.0, 70.0) == krendel_w(480.0, 60.0)


def test_bink():
    """Bink 1962: near-limit shares at 5 min to 8 h; a third of capacity over a working day."""
    t = [5.0, 15.0, 30.0, 60.0, 120.0, 240.0, 480.0]
    assert bink_fraction(t) == pytest.approx([0.9861, 0.8322, 0.7351, 0.6380, 0.5409, 0.4438, 0.3467], rel=1e-3)


def test_monod_scherrer():
    """Monod & Scherrer 1965: 170, 190, 230 W on 150 W and 12 kJ last 600, 300, 150 s."""
    assert endurance_s([170.0, 190.0, 230.0], CP_W, W_PRIME_J) == pytest.approx([600.0, 300.0, 150.0])
    assert np.isinf(endurance_s(150.0, CP_W, W_PRIME_J))
    assert np.isinf(endurance_s(20.0, CP_W, W_PRIME_J))


def test_bergstrom_group():
    """Bergstrom et al. 2012: CP 178 W, W' 13.412 kJ; 200.4 W for 10 min, 185.5 W for 30 min."""
    assert endurance_s(200.4, 178.0, 13412.0) / 60.0 == pytest.approx(10.0, rel=5e-3)
    assert endurance_s(185.45, 178.0, 13412.0) / 60.0 == pytest.approx(30.0, rel=5e-3)


def test_morton():
    """Morton 1996: with 450 W at most, 190 W last 260 s and 170 W 560 s; nothing at the greatest power."""
    assert endurance_morton_s([190.0, 170.0], CP_W, W_PRIME_J, 450.0) == pytest.approx([260.0, 560.0])
    assert endurance_morton_s(450.0, CP_W, W_PRIME_J, 450.0) == pytest.approx(0.0)


def test_skiba_recovery():
    """Skiba et al. 2012 and 2015, five minutes at 20 W from 4.8 kJ: 8.224 and 11.72 kJ."""
    assert recovery_tau_s(130.0, W_PRIME_J) == pytest.approx(464.8, rel=1e-3)
    assert recovery_tau_s(130.0, W_PRIME_J, "2015") == pytest.approx(92.31, rel=1e-3)
    assert w_balance_j(4800.0, 20.0, 300.0, (CP_W, W_PRIME_J)) == pytest.approx(8224.0, rel=1e-3)
    assert w_balance_j(4800.0, 20.0, 300.0, (CP_W, W_PRIME_J), "2015") == pytest.approx(11720.0, rel=1e-3)
    assert w_balance_j(W_PRIME_J, 190.0, 180.0, (CP_W, W_PRIME_J)) == pytest.approx(4800.0)


def test_arms_recover_slowly():
    """CP 35 W, W' 4 kJ, rest at 5 W: 720.5 s by the 2012 form, 133.3 s by the 2015 form."""
    assert recovery_tau_s(30.0, 4000.0) == pytest.approx(720.5, rel=1e-3)
    assert recovery_tau_s(30.0, 4000.0, "2015") == pytest.approx(133.3, rel=1e-3)
    assert np.isinf(recovery_tau_s(0.0, 4000.0))
    assert np.isinf(recovery_tau_s(0.0, 4000.0, "2015"))


@pytest.mark.parametrize("power", [20.0, 100.0, 170.0])
def test_exact_step_is_the_2015_differential_equation(power):
    """dW/dt = (1 - W/W')(CP - P) below critical power, -(P - CP) above (Skiba et al. 2015)."""

    def rate(_t, w):
        return [(1.0 - w[0] / W_PRIME_J) * (CP_W - power) if power < CP_W else CP_W - power]

    run = solve_ivp(rate, (0.0, 200.0), [6000.0], rtol=1e-10, atol=1e-8)
    step = float(w_balance_j(6000.0, power, 200.0, (CP_W, W_PRIME_J), "2015"))
    assert step == pytest.approx(run.y[0][-1], rel=1e-7)


@given(
    start=st.floats(0.0, W_PRIME_J),
    power=st.floats(0.0, 500.0),
    seconds=st.floats(0.0, 5000.0),
    form=st.sampled_from(["2012", "2015"]),
)
def test_balance_stays_within_its_store(start, power, seconds, form):
    left = float(w_balance_j(start, power, seconds, (CP_W, W_PRIME_J), form))
    assert 0.0 <= left <= W_PRIME_J
    assert (left - start) * (CP_W - power) >= -1e-9


@pytest.mark.parametrize(
    ("level", "age", "legs_w", "arms_w", "w_prime_j"),
    [
        ("light", 40, 66, 23, 8000.0),
        ("usual", 40, 95, 33, 10000.0),
        ("strong", 40, 130, 44, 13000.0),
        ("usual", 70, 45, 18, 6000.0),
    ],
)
def test_classes(level, age, legs_w, arms_w, w_prime_j):
    """Regression of the class table, printed to 1 W."""
    v, mass = v_peak_ml_kg_min(age, level), 72.0 if age >= 65 else 75.0
    assert critical_power_w(v, age, mass, "legs") == pytest.approx(legs_w, abs=0.6)
    assert critical_power_w(v, age, mass, "arms") == pytest.approx(arms_w, abs=0.6)
    assert w_prime_of(level, age, "legs") == w_prime_j
    assert w_prime_of(level, age, "arms") == pytest.approx(0.4 * w_prime_j)


def test_handbook_man_pushing():
    """A fit man of 35, 75 kg, 175 cm against Krendel's labourer: 0.80 to 1.13 of the rule from 5 min to 8 h."""
    v = v_peak_ml_kg_min(35, "strong", 75.0, 175.0, 1)
    t = np.array([5.0, 15.0, 30.0, 60.0, 240.0, 480.0])
    watts = push_w(v, 35, 75.0, "legs", t, 13000.0)
    assert watts[[1, 3]] == pytest.approx([188.3, 154.2], rel=1e-3)
    assert watts == pytest.approx([217.0, 188.0, 181.0, 154.0, 92.0, 62.0], abs=0.6)
    ratio = watts / krendel_w(t)
    assert ratio == pytest.approx([1.020, 1.044, 1.134, 1.109, 0.946, 0.799], rel=2e-3)
    assert np.all((ratio > 0.15) & (ratio < 1.25))
    assert not np.any(is_beyond_handbook(watts, t))
    # Mengin 1976 gives 75 W for arms over 10-15 min.
    assert push_w(v, 35, 75.0, "arms", 15.0, 5200.0) == pytest.approx(64.4, rel=2e-3)


def test_beyond_the_handbook():
    assert is_beyond_handbook(226.0, 15.0)
    assert not is_beyond_handbook(225.0, 15.0)
