"""Shift and turn between frames of one scene, from scenes resampled by another routine."""

import numpy as np
import pytest
from scipy.ndimage import gaussian_filter, map_coordinates

from thermfix.errors import InputError
from thermfix.geometry.registration import motion_between


def scene(seed, size=500):
    """An invented wall with a dozen warm boxes."""
    rng = np.random.default_rng(seed)
    values = gaussian_filter(rng.normal(size=(size, size)), 6)
    values /= values.std()
    for _ in range(12):
        x, y = rng.integers(80, size - 80, 2)
        width, height = rng.integers(20, 90, 2)
        values[y : y + height, x : x + width] += rng.uniform(2, 8)
    return gaussian_filter(values, 0.8)


def seen(values, shift_x, shift_y, turn_deg, shape=(120, 160)):
    """The frame in which the scene has moved so, by cubic splines."""
    a = np.radians(turn_deg)
    rows, columns = shape
    y, x = np.indices(shape, dtype=float)
    x, y = x - (columns - 1) / 2 - shift_x, y - (rows - 1) / 2 - shift_y
    there_x, there_y = np.cos(a) * x + np.sin(a) * y, np.cos(a) * y - np.sin(a) * x
    return map_coordinates(values, [there_y + values.shape[0] / 2, there_x + values.shape[1] / 2], order=3)


@pytest.mark.parametrize("seed", [0, 1, 2])
@pytest.mark.parametrize("motion", [
    (3.3, -7.6, 0.0), (20, 11, 0), (0.3, 0.2, 0.5), (0, 0, 4), (5.2, -3.4, -6.5), (12, 8, 15), (-6, 3, -25),
])  # fmt: skip
def test_motion_is_found(seed, motion):
    """With noise of 5 % of the wall's own pattern: within 0.03 px and 0.02°."""
    rng = np.random.default_rng(seed)
    wall = scene(seed)
    one, other = (seen(wall, *m) + rng.normal(0, 0.05, (120, 160)) for m in ((0, 0, 0), motion))
    found = motion_between(one, other)
    assert (found.shift_x_px, found.shift_y_px) == pytest.approx(motion[:2], abs=0.03)
    assert found.turn_deg == pytest.approx(motion[2], abs=0.02)
    assert found.quality > 0.95


def test_a_scene_that_warmed_evenly_has_not_moved():
    one = seen(scene(4), 0, 0, 0)
    found = motion_between(one, 30 + 1.4 * one)
    assert (found.shift_x_px, found.shift_y_px, found.turn_deg) == pytest.approx((0, 0, 0), abs=1e-6)
    assert found.quality == pytest.approx(1.0, abs=1e-6)


def test_shift_alone_and_missing_pixels():
    wall = scene(5)
    one, other = seen(wall, 0, 0, 0), seen(wall, -4.4, 6.1, 0)
    other[20:24, 30:40] = np.nan
    found = motion_between(one, other, turning=False)
    assert (found.shift_x_px, found.shift_y_px) == pytest.approx((-4.4, 6.1), abs=0.1)
    assert found.turn_deg == 0.0


@pytest.mark.parametrize("seed", range(5))
def test_unrelated_scenes_are_told(seed):
    """What they have in common by chance stays below what the docstring calls believable."""
    assert motion_between(seen(scene(seed), 0, 0, 0), seen(scene(seed + 50), 0, 0, 0)).quality < 0.8


@pytest.mark.parametrize(("one", "other", "words"), [
    (np.eye(20), np.eye(21), "differ in shape"),
    (np.eye(8), np.eye(8), "pixels or more"),
    (np.eye(20), np.ones((20, 20)), "without any detail"),
    (np.full((20, 20), np.nan), np.eye(20), "without any detail"),
])  # fmt: skip
def test_frames_that_cannot_be_laid_over_another(one, other, words):
    with pytest.raises(InputError, match=words):
        motion_between(one, other)
