"""Blackbody tables: an independent monotone cubic, exact band radiance, and refusals."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from thermfix.errors import InputError
from thermfix.radiometry.blackbody_table import radiance_from_counts

STEPS = st.lists(st.tuples(st.floats(0.01, 100), st.floats(0.001, 1000)), min_size=2, max_size=12)


def table_of(steps):
    counts, radiance = np.cumsum(np.array(steps), axis=0).T
    return counts, radiance


@given(STEPS)
def test_scipys_pchip_agrees(steps):
    """The same published construction, written by others: rounding only."""
    counts, radiance = table_of(steps)
    at = np.linspace(counts[0], counts[-1], 40)
    ours = radiance_from_counts(at, counts, radiance)
    assert np.abs(ours - PchipInterpolator(counts, radiance)(at)).max() <= 1e-11 * radiance[-1]


@given(STEPS)
def test_rises_and_passes_through_the_shots(steps):
    counts, radiance = table_of(steps)
    between = radiance_from_counts(np.linspace(counts[0], counts[-1], 200), counts, radiance)
    assert np.all(np.diff(between) >= -1e-12 * radiance[-1])
    assert radiance_from_counts(counts, counts, radiance) == pytest.approx(radiance, rel=1e-12)


@given(STEPS, st.randoms(use_true_random=False))
def test_order_of_the_shots_does_not_matter(steps, random):
    counts, radiance = table_of(steps)
    order = list(range(len(counts)))
    random.shuffle(order)
    at = np.linspace(counts[0], counts[-1], 7)
    assert np.array_equal(
        radiance_from_counts(at, counts[order], radiance[order]), radiance_from_counts(at, counts, radiance)
    )


def test_nothing_outside_the_table():
    got = radiance_from_counts([[999, 1000, 4000], [4001, np.nan, np.inf]], [1000, 2000, 4000], [10.0, 20.0, 50.0])
    assert np.isnan(got).tolist() == [[True, False, False], [True, True, True]]


def test_two_shots_give_a_straight_line():
    assert radiance_from_counts([1.0, 1.25, 3.0], [1, 3], [10, 30]) == pytest.approx([10, 12.5, 30])


def test_a_camera_of_known_gain_is_recovered():
    """Counts linear in the exact 8–14 µm radiance, shots every 20 K: a monotone cubic through a line is that line."""
    wavelength = np.linspace(8, 14, 4001)
    kelvin = np.arange(263.15, 430, 20)
    planck = 1.191042972e8 / (wavelength**5 * np.expm1(14387.768775 / (wavelength * kelvin[:, None])))
    radiance = np.trapezoid(planck, wavelength, axis=-1)
    counts = 500 + 120 * radiance
    at = np.linspace(counts[0], counts[-1], 50)
    assert radiance_from_counts(at, counts, radiance) == pytest.approx((at - 500) / 120, rel=1e-12)


@pytest.mark.parametrize(
    ("counts", "radiance", "words"),
    [
        ([1], [1], "at least 2"),
        ([1, 2], [1, 2, 3], "as many of both"),
        ([], [], "at least 2"),
        ([[1, 2]], [[1, 2]], "at least 2"),
        ([1, 2, 2], [1, 2, 3], "does not rise between 2 and 2 counts"),
        ([1, 2, 3], [1, 3, 2], "does not rise between 2 and 3 counts"),
        ([1, 2, 3], [1, 1, 2], "does not rise between 1 and 2 counts"),
        ([1, np.nan, 3], [1, 2, 3], "finite"),
        ([1, 2, 3], [1, 2, np.inf], "finite"),
    ],
)
def test_tables_that_are_refused(counts, radiance, words):
    with pytest.raises(InputError, match=words) as caught:
        radiance_from_counts([1.5], counts, radiance)
    assert caught.value.hint
