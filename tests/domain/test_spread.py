"""The fixed sample against exact integrals and scipy's distributions."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.special import ndtri
from scipy.stats.qmc import Halton

from kitplanner.domain.spread import (
    combined_spread,
    group_spread,
    lognormal_factors,
    percentiles,
    quasi_normal,
    quasi_uniform,
)


@pytest.mark.parametrize("dims", [1, 3, 8])
def test_points_are_scipys_halton_sequence(dims):
    assert quasi_uniform(300, dims) == pytest.approx(Halton(dims, scramble=False).random(301)[1:], abs=1e-12)


@pytest.mark.parametrize("dims", [0, 9])
def test_too_many_dimensions_are_refused(dims):
    with pytest.raises(ValueError, match="dimensions"):
        quasi_uniform(4, dims)


@pytest.mark.parametrize("dims", [1, 2, 3, 5])
def test_points_fill_the_cube_better_than_chance(dims):
    """Mean of a product of the coordinates: error at most half a random sample's in 5 dimensions."""
    points = quasi_uniform(1024, dims)
    assert points.shape == (1024, dims)
    assert np.all((points > 0.0) & (points < 1.0))
    assert abs(np.mean(np.prod(2.0 * points, axis=1)) - 1.0) < 0.03


def test_inverse_normal_is_scipys():
    assert quasi_normal(512, 3) == pytest.approx(ndtri(quasi_uniform(512, 3)), abs=1e-9)


def test_sample_never_changes_and_cannot_be_changed():
    first = quasi_normal(64, 2)
    assert np.array_equal(first, quasi_normal(64, 2))
    with pytest.raises(ValueError, match="read-only"):
        first[0, 0] = 1.0


def test_normal_points_are_uncorrelated():
    points = quasi_normal(1024, 4)
    assert np.abs(np.corrcoef(points.T) - np.eye(4)).max() < 0.02


def test_lognormal_factors_have_their_spread_and_median_one():
    factors = lognormal_factors(0.4, quasi_normal(4096, 1)[:, 0])
    assert np.median(factors) == pytest.approx(1.0, rel=1e-3)
    assert factors.std() / factors.mean() == pytest.approx(0.4, rel=0.02)
    assert np.all(factors > 0.0)
    assert np.all(lognormal_factors(0.0, quasi_normal(16, 1)) == 1.0)


def test_percentiles_of_a_normal_sample():
    low, middle, high = percentiles(quasi_normal(4096, 1)[:, 0])
    assert (low, middle, high) == pytest.approx((-1.2816, 0.0, 1.2816), abs=0.003)


def test_percentiles_beside_samples_that_never_arrive():
    samples = np.array([[1.0, 2.0, np.inf, np.inf], [1.0, 2.0, 3.0, 4.0]])
    low, middle, high = percentiles(samples, axis=1)
    assert low.tolist() == [1.0, 1.0]
    assert middle.tolist() == [2.0, 2.0]
    assert np.isinf(high[0])
    assert high[1] == 4.0


def test_root_sum_of_squares():
    assert combined_spread(0.3, 0.4) == pytest.approx(0.5)
    assert combined_spread(0.2) == pytest.approx(0.2)
    assert combined_spread() == 0.0


def test_people_average_out_and_nobody_has_no_spread():
    assert group_spread([0.4, 0.4, 0.4, 0.4], [5.0, 5.0, 5.0, 5.0]) == pytest.approx(0.2)
    assert group_spread([0.4, 0.9], [5.0, 0.0]) == pytest.approx(0.4)
    assert group_spread([0.4], [0.0]) == 0.0
