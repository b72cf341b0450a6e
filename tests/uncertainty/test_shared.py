"""Means of regions: shared errors are not averaged down, common errors cancel in differences."""

import pickle

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.shared import difference, mean_uncertainty

PARTS = st.dictionaries(st.sampled_from(["reflected", "air", "camera", "emissivity"]), st.floats(-5, 5), min_size=1)


@settings(max_examples=80)
@given(parts=PARTS, noise=st.floats(0, 2), count=st.integers(1, 100_000))
def test_no_number_of_pixels_averages_the_shared_part_down(parts, noise, count):
    found = mean_uncertainty(parts, noise_u=noise, count=count)
    shared = np.sqrt(sum(part**2 for part in parts.values()))
    assert found.shared_u == pytest.approx(shared, rel=1e-12)
    assert found.u >= found.shared_u
    assert found.noise_u == pytest.approx(noise / np.sqrt(count), rel=1e-9)


def test_four_hundred_pixels_with_a_shared_emissivity():
    """ε = 0.90 ± 0.03 at 10 µm, 350 K before 295 K: 1.51 K for 1 pixel and for 400; taken as independent, 0.075 K.

    The sensitivity is recomputed here by moving ε for all pixels at once (monochromatic Planck).
    """
    c2 = 14387.768775
    planck = lambda t: 1 / np.expm1(c2 / (10 * t))  # noqa: E731
    received = 0.90 * planck(350.0) + 0.10 * planck(295.0)
    surface = lambda e: c2 / 10 / np.log1p(1 / ((received - (1 - e) * planck(295.0)) / e))  # noqa: E731
    c = (surface(0.9 + 1e-5) - surface(0.9 - 1e-5)) / 2e-5
    found = mean_uncertainty({"emissivity": c * 0.03}, noise_u=0.05, count=400)
    assert found.u == pytest.approx(1.51, abs=0.005)  # three printed digits
    assert found.u / np.sqrt(400) == pytest.approx(0.075, abs=0.0005)  # what it must not be


def test_contributions_that_differ_over_the_region_are_averaged_with_their_sign():
    found = mean_uncertainty({"angle": [1.0, -1.0, 0.5, 0.5]}, noise_u=[0.2, 0.2, 0.2, 0.2], count=4)
    assert found.shared_u == pytest.approx(0.25)
    assert found.noise_u == pytest.approx(0.1)


def test_simulated_region():
    """20,000 regions of 50 pixels with one shared and one independent error: 1 % is two standard errors of an sd."""
    rng = np.random.default_rng(7)
    shared = rng.standard_normal((20_000, 1)) * 0.4
    means = (shared + rng.standard_normal((20_000, 50)) * 1.5).mean(axis=1)
    found = mean_uncertainty({"emissivity": 0.4}, noise_u=1.5, count=50)
    assert found.u == pytest.approx(means.std(ddof=1), rel=0.01)


@settings(max_examples=80)
@given(
    first=st.floats(0.01, 5),
    second=st.floats(0.01, 5),
    own=st.floats(0, 3),
    noise=st.floats(0, 1),
    count=st.integers(1, 900),
)
def test_a_common_error_cancels_in_part(first, second, own, noise, count):
    """Same sign in both regions: the difference is known better than two independent means would tell."""
    one = mean_uncertainty({"reflected": -first, "emissivity pipe": own}, noise_u=noise, count=count)
    two = mean_uncertainty({"reflected": -second, "emissivity wall": own}, noise_u=noise, count=count)
    found = difference(one, two)
    assert found.u < np.hypot(one.u, two.u)
    expected = np.sqrt((first - second) ** 2 + 2 * own**2 + 2 * noise**2 / count)
    assert found.u == pytest.approx(expected, rel=1e-9, abs=1e-12)


def test_opposite_signs_add_up():
    """A reflector warmer than one region and colder than the other: the common error counts twice."""
    one = mean_uncertainty({"emissivity": 0.3}, noise_u=0.0, count=1)
    two = mean_uncertainty({"emissivity": -0.3}, noise_u=0.0, count=1)
    assert difference(one, two).u == pytest.approx(0.6)


def test_regions_with_nothing_in_common_add_in_quadrature():
    one = mean_uncertainty({"a": 0.3}, noise_u=0.4, count=1)
    two = mean_uncertainty({"b": 1.2}, noise_u=0.0, count=9)
    assert difference(one, two).u == pytest.approx(1.3)


def test_correlated_inputs():
    pairs = {("a", "b"): 0.5}
    one = mean_uncertainty({"a": 1.0, "b": 1.0}, noise_u=0.0, count=3, correlations=pairs)
    assert one.u == pytest.approx(np.sqrt(3.0))
    two = mean_uncertainty({"b": 1.0, "a": 1.0}, noise_u=0.0, count=3, correlations={("b", "a"): 0.5})
    assert difference(one, two).u == pytest.approx(0.0, abs=1e-12)
    other = mean_uncertainty({"a": 1.0, "b": 1.0}, noise_u=0.0, count=3, correlations={("b", "a"): 0.2})
    with pytest.raises(InputError, match="two different numbers"):
        difference(one, other)


def test_noise_alone_and_survives_a_worker_process():
    found = mean_uncertainty({}, noise_u=0.3, count=9)
    assert found.u == pytest.approx(0.1)
    assert pickle.loads(pickle.dumps(found)).u == found.u


@pytest.mark.parametrize(
    ("parts", "noise", "count", "error"),
    [
        ({"a": [1.0, 2.0]}, 0.1, 3, InputError),
        ({"a": np.nan}, 0.1, 3, InputError),
        ({"a": 1.0}, [0.1, 0.1], 3, InputError),
        ({"a": 1.0}, -0.1, 3, OutOfRange),
        ({"a": 1.0}, 0.1, 0, OutOfRange),
    ],
)
def test_refuses(parts, noise, count, error):
    with pytest.raises(error):
        mean_uncertainty(parts, noise_u=noise, count=count)
