"""View factors and irradiance: catalogued values, reciprocity, closure, and the numerical integral against them."""

import re

import numpy as np
import pytest

from thermfix.errors import InputError
from thermfix.geometry import view_factors as vf
from thermfix.radiometry import Band


def values(row):
    return {name: float(value) for name, value in re.findall(r"(\w+)=([\d.e-]+)", row["inputs"])}


@pytest.mark.rows("f_geometry", "f_disk_")
def test_coaxial_discs(row, expected):
    v = values(row)
    assert vf.coaxial_discs(v["r1"], v["r2"], v["H"]) == pytest.approx(expected, abs=1e-9)


@pytest.mark.rows("f_geometry", "f_rect_")
def test_parallel_rectangles(row, expected):
    v = values(row)
    assert vf.parallel_rectangles(v["a"], v["b"], v["c"]) == pytest.approx(expected, abs=1e-9)


@pytest.mark.rows("f_geometry", "f_perp_")
def test_perpendicular_rectangles(row, expected):
    v = values(row)
    assert vf.perpendicular_rectangles(v["H"], v["W"]) == pytest.approx(expected, abs=1e-9)


@pytest.mark.rows("f_geometry", "f_dA_disc_")
def test_patch_to_disc(row, expected):
    v = values(row)
    assert vf.patch_to_disc(v["R"], v["H"]) == pytest.approx(expected, abs=1e-12)


@pytest.mark.rows("f_geometry", "f_E_disc_")
def test_irradiance_of_a_disc(row, expected):
    """8–14 µm, 100 °C; ten printed digits."""
    v = values(row)
    radiance = float(Band.rectangular(8, 14).radiance(373.15))
    assert vf.disc_irradiance(radiance, v["R"], v["H"]) == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("f_geometry", "f_inc121_A")
def test_textbook_example_of_four_surfaces(row, expected):
    """Incropera and DeWitt, example 12.1 (digits from memory): solid angles and intercepted power."""
    if row["id"].endswith("_omega"):
        receiver = float(re.search(r"theta_receiver=(\d+)", row["inputs"]).group(1))
        found = 1e-3 * np.cos(np.radians(receiver)) / 0.5**2
    else:
        source = float(re.search(r"theta1=(\d+)", row["inputs"]).group(1))
        receiver = 30.0 if row["id"] == "f_inc121_A2_q" else 0.0
        found = 1e-3 * vf.irradiance(7000.0, 1e-3, 0.5, source, receiver)
    assert found == pytest.approx(expected, rel=1e-9)


def rectangle(corner, first, second):
    corner, first, second = (np.array(one, dtype=float) for one in (corner, first, second))
    return np.array([corner, corner + first, corner + first + second, corner + second])


@pytest.mark.parametrize(("a", "b", "c"), [(1, 1, 1), (2, 1, 1), (1, 1, 0.25)])
def test_numerical_integral_of_parallel_rectangles(a, b, c):
    lower = rectangle((0, 0, 0), (a, 0, 0), (0, b, 0))
    upper = rectangle((0, 0, c), (a, 0, 0), (0, b, 0))
    assert vf.between_polygons(lower, upper) == pytest.approx(vf.parallel_rectangles(a, b, c), rel=1e-4)


def test_numerical_integral_of_perpendicular_rectangles():
    """A common edge makes the integrand steep: 1e-3."""
    floor = rectangle((0, 0, 0), (1, 0, 0), (0, 1, 0))
    wall = rectangle((0, 0, 0), (0, 1, 0), (0, 0, 2))
    assert vf.between_polygons(floor, wall, 20) == pytest.approx(vf.perpendicular_rectangles(2, 1), abs=1e-3)


def test_patch_to_polygon_is_the_disc_in_the_limit():
    turn = np.linspace(0, 2 * np.pi, 361)[:-1]
    circle = np.stack([0.5 * np.cos(turn), 0.5 * np.sin(turn), np.full(360, 1.0)], axis=1)
    found = vf.patch_to_polygon((0, 0, 0), (0, 0, 1), circle)
    assert found == pytest.approx(vf.patch_to_disc(0.5, 1.0), rel=2e-4)


def test_below_the_horizon_nothing_arrives():
    below = rectangle((-1, -1, -1), (2, 0, 0), (0, 2, 0))
    assert vf.patch_to_polygon((0, 0, 0), (0, 0, 1), below) == 0.0
    across = rectangle((1, -1, -1), (0, 2, 0), (0, 0, 2))
    above = rectangle((1, -1, 0), (0, 2, 0), (0, 0, 1))
    assert vf.patch_to_polygon((0, 0, 0), (0, 0, 1), across) == pytest.approx(
        vf.patch_to_polygon((0, 0, 0), (0, 0, 1), above)
    )


def test_reciprocity_and_closure():
    """A₁ F₁₂ = A₂ F₂₁, and the six faces of a cube see each other completely."""
    assert np.pi * vf.coaxial_discs(1, 2, 1.5) == pytest.approx(4 * np.pi * vf.coaxial_discs(2, 1, 1.5))
    cube = vf.parallel_rectangles(1, 1, 1) + 4 * vf.perpendicular_rectangles(1, 1)
    assert cube == pytest.approx(1.0, abs=1e-9)


def test_sphere():
    """Seen small and straight it is the disc of its own silhouette: (R/d)²; hidden parts are refused."""
    assert vf.patch_to_sphere(0.1, 2.0) == pytest.approx(0.0025)
    with pytest.raises(InputError, match="horizon"):
        vf.patch_to_sphere(1.0, 2.0, 80.0)


def test_small_source_far_away_is_the_polygon():
    source = rectangle((-0.05, -0.05, 2.0), (0.1, 0, 0), (0, 0.1, 0))
    exact = vf.patch_to_polygon((0, 0, 0), (0, 0, 1), source)
    assert vf.small_source(0.01, 2.0, 0.0, 0.0) == pytest.approx(exact, rel=0.01)
    assert vf.small_source(0.01, 2.0, 95.0, 0.0) == 0.0
