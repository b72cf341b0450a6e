"""Small targets: slit responses, shares of signal, unmixing, and the blur from a slanted edge."""

import re
from time import perf_counter

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import PhysicsError
from thermfix.geometry import point_spread as spread
from thermfix.geometry.blurred_edge import bowl
from thermfix.geometry.slanted_edge import blur_of_edge
from thermfix.radiometry import Band


def of(row):
    return tuple(map(float, re.search(r"sigma=([\d.]+); [wd]=([\d.]+)", row["inputs"]).groups()))


@pytest.mark.rows("i_spot", "i_slit_", "i_sq_")
def test_slit_and_square_response_of_the_optics(row, expected):
    """Closed forms."""
    sigma, width = of(row)
    one = spread.slit_response(width, sigma, pixel=False)
    assert (one if row["id"].startswith("i_slit_") else one**2) == pytest.approx(expected, abs=1e-9)


@pytest.mark.rows("i_spot", "i_slitbox_")
def test_slit_response_of_a_pixel(row, expected):
    """Box convolved with a Gaussian: closed form against quadrature."""
    sigma, width = of(row)
    assert spread.slit_response(width, sigma) == pytest.approx(expected, abs=1e-9)


@pytest.mark.rows("i_spot", "i_disc_")
def test_disc_response_by_a_fine_polygon(row, expected):
    """Hole response of the optics, 1 − exp(−d²/8σ²): disc and blur twelve times as large make the pixel a point."""
    sigma, width = of(row)
    grow = 12
    corners = spread.ellipse_corners(20.5, 20.5, grow * width / 2, grow * width / 2)
    share = spread.polygon_share((20, 20, 1, 1), corners, grow * sigma)[0, 0]
    assert share == pytest.approx(expected, abs=2e-3)  # the pixel is 1/12 of a unit, not a point


@pytest.mark.rows("i_spot", "i_fill_", "i_fillcorr_")
def test_unmixing_is_done_on_radiance(row, expected):
    """An 80 °C target at response S before 20 °C: what is seen, and what comes back."""
    share = float(re.search(r"S=([\d.]+)", row["inputs"]).group(1))
    band = Band.rectangular(8, 14)
    around = float(band.radiance(293.15))
    mixed = share * float(band.radiance(353.15)) + (1 - share) * around
    if row["id"].startswith("i_fill_"):
        assert float(band.temperature(mixed)) - 273.15 == pytest.approx(expected, abs=1e-6)
    else:
        own = spread.unmix(np.array([mixed]), np.array([share]), around)
        assert float(band.temperature(own[0])) - 273.15 == pytest.approx(expected, abs=1e-6)


@given(st.floats(2, 8), st.floats(2, 8), st.floats(0.3, 9), st.floats(0.3, 9), st.sampled_from([0, 1e-3, 0.05, 0.2, 1]))
@settings(max_examples=40)
def test_polygon_share_against_the_closed_form(x0, y0, width, height, sigma):
    """Whole, and as two triangles whose slanted edges must cancel: 1e-9."""
    x, y = np.meshgrid(np.arange(25.0), np.arange(25.0))
    exact = spread.rectangle_share(x, y, (x0, y0, x0 + width, y0 + height), sigma)
    a, b, c, d = (x0, y0), (x0 + width, y0), (x0 + width, y0 + height), (x0, y0 + height)
    box = (0, 0, 25, 25)
    np.testing.assert_allclose(spread.polygon_share(box, [a, b, c, d], sigma), exact, atol=1e-9)
    halves = spread.polygon_share(box, [a, b, c], sigma) + spread.polygon_share(box, [c, a, d], sigma)
    np.testing.assert_allclose(halves, exact, atol=1e-9)


@pytest.mark.parametrize("angle", [0.3, 20.0, 45.0, 89.5])
@pytest.mark.parametrize("sigma", [0.05, 0.4, 1.2])
def test_slanted_half_plane_by_the_inclusion_of_its_square(angle, sigma):
    """Another closed form: the square's projection across the edge is a trapezium, whose blurred integral is `bowl`."""
    c, s = np.cos(np.radians(angle)), np.sin(np.radians(angle))
    along, across, origin = np.array([c, s]), np.array([-s, c]), np.array([10.3, 9.8])
    far = [origin - 90 * along, origin + 90 * along, origin + 90 * (along + across), origin - 90 * (along - across)]
    found = spread.polygon_share((0, 0, 20, 20), [tuple(one) for one in far], sigma)
    y, x = np.indices(found.shape) + 0.5
    depth = (x - origin[0]) * across[0] + (y - origin[1]) * across[1]
    exact = bowl(depth + (c + s) / 2, sigma) + bowl(depth - (c + s) / 2, sigma)
    exact -= bowl(depth + (c - s) / 2, sigma) + bowl(depth - (c - s) / 2, sigma)
    np.testing.assert_allclose(found, exact / (c * s), atol=1e-8)  # 2e-12 / (c s) of cancellation at 0.3°


@given(st.lists(st.tuples(st.integers(1, 18), st.integers(1, 18)), min_size=3, max_size=7))
@settings(max_examples=40)
def test_crossed_polygons_by_even_odd(corners):
    """Areas summed over pixels against fine scan lines: level edges, edges on each other, corners on edges."""
    heights = (np.arange(20000) + 0.5) / 1000
    cuts = []
    for (x0, y0), (x1, y1) in zip(corners, corners[1:] + corners[:1], strict=True):
        if y0 != y1:
            crosses = (y0 <= heights) != (y1 <= heights)
            cuts.append(np.where(crosses, x0 + (heights - y0) / (y1 - y0) * (x1 - x0), 1e9))
    found = spread.polygon_share((0, 0, 20, 20), corners, 0.0)
    ordered = np.sort(cuts, axis=0)[: len(cuts) // 2 * 2] if cuts else np.zeros((2, 1))
    assert found.sum() == pytest.approx((ordered[1::2] - ordered[::2]).sum() / 1000, abs=1e-3)


def test_a_polygon_far_larger_than_its_box_costs_little():
    began = perf_counter()
    share = spread.polygon_share((0, 0, 60, 60), [(-1e6, 3.3), (1e6, 5.7), (26.4, 1e6)], 0.05)
    assert perf_counter() - began < 1.0
    assert share[-1, -1] == pytest.approx(1.0, abs=1e-9)
    assert share[0, 0] == pytest.approx(0.0, abs=1e-9)


def test_ellipse_keeps_its_area():
    share = spread.polygon_share((0, 0, 30, 30), spread.ellipse_corners(15, 15, 6, 4), 0.0)
    assert share.sum() == pytest.approx(np.pi * 24, rel=1e-4)


def test_too_little_of_the_region_gives_no_reading():
    own = spread.unmix(np.array([50.0, 50.0]), np.array([0.19, 0.21]), 40.0)
    assert np.isnan(own[0])
    assert own[1] == pytest.approx(40 + 10 / 0.21)


def test_a_target_below_one_pixel():
    """20 mm² seen squarely at 3 m by a pixel of 1.36 mrad: the fill, and the radiance back from the sum."""
    pixel = (1.36e-3) ** 2
    fill = spread.fill_of(20e-6, 3.0, 0.0, pixel)
    assert fill == pytest.approx(20e-6 / (9 * pixel))
    assert spread.subpixel_radiance(fill * (90 - 40), fill, 40.0) == pytest.approx(90.0)


def test_ring_lies_where_it_should():
    mask = np.zeros((41, 41), dtype=bool)
    mask[20, 20] = True
    rows, columns = np.nonzero(spread.ring(mask, 0.5))
    away = np.hypot(rows - 20, columns - 20)
    assert away.min() >= 2.5
    assert away.max() <= 5.5


@pytest.mark.parametrize("sigma", [0.4, 0.7, 1.2])
@pytest.mark.parametrize("angle", [4, 20, 45, 77])
def test_blur_from_a_slanted_edge(sigma, angle):
    """A 40 K step with 0.05 K noise: within 0.01 px, and the edge's angle within 0.5°."""
    rng = np.random.default_rng(angle)
    a = np.radians(angle)
    along, across = np.array([np.cos(a), np.sin(a)]), np.array([np.sin(a), -np.cos(a)])
    centre = np.array([15.2, 14.7])
    far = [centre - 60 * along, centre + 60 * along, centre + 60 * (along + across), centre - 60 * (along - across)]
    share = spread.polygon_share((0, 0, 30, 30), [tuple(p) for p in far], sigma)
    edge = blur_of_edge(20 + 40 * share + rng.normal(0, 0.05, share.shape))
    assert edge.blur_px == pytest.approx(sigma, abs=0.01)
    assert edge.angle_deg == pytest.approx(angle, abs=0.5)
    assert edge.u_blur_px < 0.01


@pytest.mark.parametrize("patch", [
    np.full((20, 20), 21.0),
    np.random.default_rng(1).normal(20, 0.1, (20, 20)),
    np.full((5, 5), 1.0),
    np.where(np.indices((20, 20)).sum(axis=0) % 7 < 3, 20.0, 60.0),
])  # fmt: skip
def test_no_edge_no_blur(patch):
    with pytest.raises(PhysicsError):
        blur_of_edge(patch)
