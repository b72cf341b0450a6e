"""Pixels of shapes: centres decide, clipping is counted, absurd coordinates cost nothing."""

from fractions import Fraction
from itertools import pairwise
from math import floor
from time import perf_counter

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import InputError
from thermfix.geometry import masks

FRAME = (30, 40)


def cells(found):
    x, y, _ = found
    return set(zip(x.tolist(), y.tolist(), strict=True))


def test_a_pixel_belongs_if_its_centre_does():
    assert cells(masks.rectangle_pixels(FRAME, 0.4, 0.6, 2.4, 1.6)) == {(0, 1), (1, 1)}
    assert cells(masks.rectangle_pixels(FRAME, 0, 0, 3, 2)) == {(x, y) for x in range(3) for y in range(2)}


def test_clipped_and_lost_shapes_can_be_told():
    x, _, total = masks.rectangle_pixels(FRAME, -5, -5, 5, 5)
    assert (x.size, total) == (25, 100)
    x, _, total = masks.ellipse_pixels(FRAME, 100, 100, 4, 4)
    assert x.size == 0
    assert total > 0


@given(st.floats(-5, 45), st.floats(-5, 35), st.floats(0.5, 15), st.floats(0.5, 15))
@settings(max_examples=60)
def test_ellipse_against_every_pixel(cx, cy, rx, ry):
    x, y = np.meshgrid(np.arange(-40, 90), np.arange(-40, 80))
    inside = ((x + 0.5 - cx) / rx) ** 2 + ((y + 0.5 - cy) / ry) ** 2 <= 1
    expected = {
        (i, j) for i, j in zip(x[inside].tolist(), y[inside].tolist(), strict=True) if 0 <= i < 40 and 0 <= j < 30
    }
    found = masks.ellipse_pixels(FRAME, cx, cy, rx, ry)
    assert cells(found) == expected
    assert abs(found[2] - inside.sum()) <= 2  # centres exactly on the rim may be counted either way


@given(st.lists(st.tuples(st.floats(-10, 50), st.floats(-10, 40)), min_size=3, max_size=7))
@settings(max_examples=60)
def test_polygon_against_crossings_of_every_pixel(corners):
    """Even-odd by counting crossings of a ray to the left, pixel by pixel."""

    def inside(px, py):
        odd = False
        for (x0, y0), (x1, y1) in zip(corners, corners[1:] + corners[:1], strict=True):
            if (y0 <= py) != (y1 <= py) and px >= x0 + (py - y0) / (y1 - y0) * (x1 - x0):
                odd = not odd
        return odd

    found = cells(masks.polygon_pixels(FRAME, corners))
    expected = {(i, j) for i in range(40) for j in range(30) if inside(i + 0.5, j + 0.5)}
    # A centre within rounding of an edge may fall to either side.
    assert len(found ^ expected) <= 2


def test_line_and_point():
    x, y, total = masks.line_pixels(FRAME, [(0.5, 0.5), (5.2, 2.9), (5.2, 6.0)])
    assert list(zip(x.tolist(), y.tolist(), strict=True))[:3] == [(0, 0), (1, 0), (2, 1)]
    assert total == len({*zip(x.tolist(), y.tolist(), strict=True)})
    assert np.abs(np.diff(x)).max() <= 1
    assert cells(masks.point_pixels(FRAME, 39.99, 29.99)) == {(39, 29)}
    assert masks.point_pixels(FRAME, 40.0, 5.0)[0].size == 0


@given(st.lists(st.tuples(st.integers(-9, 50), st.integers(-9, 40)), min_size=2, max_size=6))
@settings(max_examples=80)
def test_line_against_exact_fractions(points):
    """One pixel per step along the longer axis, none missed and none met twice by rounding."""
    steps = []
    for (x0, y0), (x1, y1) in pairwise(points):
        count = max(abs(x1 - x0), abs(y1 - y0))
        shares = [Fraction(k, max(count, 1)) for k in range(count + 1)]
        steps += [(floor(x0 + share * (x1 - x0)), floor(y0 + share * (y1 - y0))) for share in shares]
    expected = [(x, y) for x, y in dict.fromkeys(steps) if 0 <= x < 40 and 0 <= y < 30]
    x, y, total = masks.line_pixels(FRAME, points)
    assert list(zip(x.tolist(), y.tolist(), strict=True)) == expected
    assert (total == x.size) == (len(dict.fromkeys(steps)) == len(expected))


def test_a_polygon_far_beyond_the_frame_is_counted_by_sampled_rows():
    """A triangle of 4e9 px²: the total within 1e-3 of its area, the frame's own pixels exactly."""
    x, y, total = masks.polygon_pixels(FRAME, [(-2e4, -2e4), (2e5, -2e4), (-2e4, 2e4)])
    assert total == pytest.approx(2.2e5 * 4e4 / 2, rel=1e-3)
    assert x.size == 30 * 40
    assert (np.diff(y * 40 + x) == 1).all()


def test_effort_is_bounded_for_shapes_as_large_as_allowed():
    """A million pixels each way: well under a second where counting every row took minutes."""
    began = perf_counter()
    masks.polygon_pixels(FRAME, [(-1e6, -1e6), (1e6, -1e6), (1e6, 1e6), (-1e6, 1e6)])
    x, _, total = masks.line_pixels(FRAME, [(-1e6, 3.2), (1e6, 3.9)])
    assert perf_counter() - began < 1.0
    assert x.tolist() == list(range(40))
    assert total == 2_000_001


@pytest.mark.parametrize("bad", [float("nan"), 1e9, float("inf")])
def test_absurd_coordinates_are_refused(bad):
    with pytest.raises(InputError, match="beyond"):
        masks.rectangle_pixels(FRAME, 0, 0, bad, 5)
