"""Regions grown from a pixel, and outlines that hold exactly what they were drawn around."""

import numpy as np
import pytest
from scipy.ndimage import binary_fill_holes, label

from thermfix.errors import InputError
from thermfix.geometry.grow import grow, outline
from thermfix.geometry.masks import polygon_pixels


def test_grown_region_hangs_together():
    values = np.full((20, 30), 20.0)
    values[4:9, 5:12] = 60.0
    values[4:9, 20:25] = 60.0  # as warm, but apart
    values[9, 12] = 60.0  # touches by a corner alone
    values[6, 8] = np.nan
    mask = grow(values, 6, 5, 1.0)
    expected = np.zeros(values.shape, dtype=bool)
    expected[4:9, 5:12] = True
    expected[6, 8] = False
    assert (mask == expected).all()


def test_tolerance_is_from_the_seed_and_inclusive():
    values = np.arange(20.0, 30.0)[None, :]
    assert np.flatnonzero(grow(values, 4, 0, 2.0)[0]).tolist() == [2, 3, 4, 5, 6]
    assert grow(values, 4, 0, 0.0).sum() == 1


@pytest.mark.parametrize(("x", "y", "tolerance", "words"), [
    (30, 0, 1.0, "outside the frame"),
    (0, -1, 1.0, "outside the frame"),
    (2, 2, 1.0, "holds no number"),
    (0, 0, -1.0, "tolerance is -1"),
    (0, 0, float("nan"), "tolerance is nan"),
    (0, 0, float("inf"), "tolerance is inf"),
])  # fmt: skip
def test_bad_seed_or_tolerance(x, y, tolerance, words):
    values = np.full((20, 30), 20.0)
    values[2, 2] = np.nan
    with pytest.raises(InputError, match=words):
        grow(values, x, y, tolerance)


def test_outline_turns_only_at_corners():
    mask = np.zeros((6, 7), dtype=bool)
    mask[1:3, 2:5] = True
    mask[3, 4] = True
    assert outline(mask) == [(2, 1), (5, 1), (5, 4), (4, 4), (4, 3), (2, 3)]
    with pytest.raises(InputError, match="no pixel"):
        outline(np.zeros((3, 3), dtype=bool))


@pytest.mark.parametrize("seed", range(40))
def test_outline_holds_exactly_the_grown_pixels(seed):
    """Random pieces with holes, pinches and frame edges: the polygon gives back the piece, holes filled.

    Neighbours by a corner alone are apart for the piece, hence together for what surrounds it.
    """
    rng = np.random.default_rng(seed)
    parts, count = label(rng.random((14, 17)) < 0.62)
    piece = parts == rng.integers(1, count + 1)
    x, y, total = polygon_pixels(piece.shape, outline(piece))
    drawn = np.zeros(piece.shape, dtype=bool)
    drawn[y, x] = True
    assert (drawn == binary_fill_holes(piece, structure=np.ones((3, 3)))).all()
    assert total == drawn.sum()
