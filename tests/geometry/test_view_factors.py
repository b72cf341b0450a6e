"""View factors and irradiance: catalogued values, reciprocity, closure, and the numerical integral against them."""

import re

import numpy as np
import pytest

from thermfix.errors import InputError
from thermfix.geometry import irradiance as sent
from thermfix.geometry import polygon_factors as polygons
from thermfix.geometry import view_factors as vf
from thermfix.geometry.rays import focal_px, pixel_solid_angle_sr
from thermfix.radiometry import Band
from thermfix.radiometry.planck import fraction_below, spectral_radiance


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
    assert sent.disc_irradiance(radiance, v["R"], v["H"]) == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("f_geometry", "f_inc121_A")
def test_textbook_example_of_four_surfaces(row, expected):
    """Incropera and DeWitt, example 12.1 (digits from memory): solid angles and intercepted power."""
    if row["id"].endswith("_omega"):
        receiver = float(re.search(r"theta_receiver=(\d+)", row["inputs"]).group(1))
        found = 1e-3 * np.cos(np.radians(receiver)) / 0.5**2
    else:
        source = float(re.search(r"theta1=(\d+)", row["inputs"]).group(1))
        receiver = 30.0 if row["id"] == "f_inc121_A2_q" else 0.0
        found = 1e-3 * sent.irradiance(7000.0, 1e-3, 0.5, source, receiver)
    assert found == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("f_geometry", "f_inc123_")
def test_textbook_example_of_a_furnace_at_2000_k(row, expected):
    """Incropera and DeWitt, example 12.3 (data from memory): exitance π L, in the whole, at the peak, and its tenth."""
    if row["id"] == "f_inc123_Eb":
        edges = np.geomspace(0.2, 2000, 4001)
        middle, width = np.sqrt(edges[1:] * edges[:-1]), np.diff(edges)
        found = sent.exitance(float((spectral_radiance(middle, 2000.0) * width).sum()))
        assert found == pytest.approx(expected, rel=1e-4)  # midpoints; 4e-7 of it lies beyond 2000 µm
    elif row["id"] == "f_inc123_pk":
        found = sent.exitance(float(spectral_radiance(2897.77 / 2000, 2000.0)))
        assert found == pytest.approx(expected, rel=1e-6)
    else:
        assert float(fraction_below(expected * 2000.0)) == pytest.approx(0.1, abs=1e-6)


def rectangle(corner, first, second):
    corner, first, second = (np.array(one, dtype=float) for one in (corner, first, second))
    return np.array([corner, corner + first, corner + first + second, corner + second])


@pytest.mark.parametrize(("a", "b", "c"), [(2, 1, 1), (1, 1, 1), (1, 1, 0.25)])
def test_numerical_integral_of_parallel_rectangles(a, b, c):
    """Face to face; from behind nothing. Closer than half their size the integrand is steeper."""
    lower = rectangle((0, 0, 0), (a, 0, 0), (0, b, 0))
    upper = rectangle((0, 0, c), (0, b, 0), (a, 0, 0))
    exact = vf.parallel_rectangles(a, b, c)
    assert polygons.between_polygons(lower, upper) == pytest.approx(exact, abs=1e-6 if c >= 0.5 else 1e-4)
    assert polygons.between_polygons(lower, upper[::-1]) == 0.0
    assert polygons.between_polygons(lower[::-1], upper) == 0.0


@pytest.mark.parametrize("height", [0.5, 1, 2])
def test_numerical_integral_of_perpendicular_rectangles(height):
    """On a common edge: 1e-6."""
    floor = rectangle((0, 0, 0), (1, 0, 0), (0, 1, 0))
    wall = rectangle((0, 0, 0), (0, 1, 0), (0, 0, height))
    assert polygons.between_polygons(floor, wall) == pytest.approx(vf.perpendicular_rectangles(height, 1), abs=1e-6)


def test_polygons_see_no_more_than_what_stands_before_both():
    """A wall through the middle of a floor sees the half before it, which is half the factor of that half alone."""
    floor = rectangle((-1, 0, 0), (2, 0, 0), (0, 1, 0))
    wall = rectangle((0, 0, -1), (0, 1, 0), (0, 0, 2))
    alone = vf.perpendicular_rectangles(1, 1)
    assert polygons.between_polygons(floor, wall) == pytest.approx(alone / 2, abs=1e-6)
    assert polygons.between_polygons(wall, floor) == pytest.approx(alone / 2, abs=1e-6)


@pytest.mark.parametrize("seed", range(4))
def test_reciprocity_of_skew_polygons(seed):
    """A₁ F₁₂ = A₂ F₂₁ for random triangles and a dented pentagon, partly behind each other's face."""
    rng = np.random.default_rng(seed)
    dented = np.array([[0, 0, 0], [2, 0, 0], [2, 2, 0], [1, 0.6, 0], [0, 2, 0]], dtype=float)
    other = rng.uniform(-1, 1, (3, 3)) + np.array([1, 1, 1.5])
    area = 4 - 1.4
    size = np.linalg.norm(np.cross(other[1] - other[0], other[2] - other[0])) / 2
    for one in (other, other[::-1]):
        there = area * polygons.between_polygons(dented, one, 24)
        assert there == pytest.approx(size * polygons.between_polygons(one, dented, 24), abs=1e-9)


@pytest.mark.parametrize(("corners", "words"), [
    ([[0, 0, 0], [1, 0, 0]], "3 or more"),
    ([[0, 0, 0], [1, 0, 0], [2, 0, 0]], "one line"),
    ([[0, 0, 0], [1, 0, 0], [1, 1, 0.1], [0, 1, 0]], "one plane"),
    ([[0, 0, 0], [1, 0, 0], [1, 1, float("nan")]], "3 or more"),
])  # fmt: skip
def test_polygons_that_are_none(corners, words):
    with pytest.raises(InputError, match=words):
        polygons.between_polygons(corners, rectangle((0, 0, 1), (0, 1, 0), (1, 0, 0)))


def test_patch_to_polygon_is_the_disc_in_the_limit():
    turn = np.linspace(0, 2 * np.pi, 361)[:-1]
    circle = np.stack([0.5 * np.cos(turn), 0.5 * np.sin(turn), np.full(360, 1.0)], axis=1)
    found = polygons.patch_to_polygon((0, 0, 0), (0, 0, 1), circle)
    assert found == pytest.approx(vf.patch_to_disc(0.5, 1.0), rel=2e-4)


def test_below_the_horizon_nothing_arrives():
    below = rectangle((-1, -1, -1), (2, 0, 0), (0, 2, 0))
    assert polygons.patch_to_polygon((0, 0, 0), (0, 0, 1), below) == 0.0
    across = rectangle((1, -1, -1), (0, 2, 0), (0, 0, 2))
    above = rectangle((1, -1, 0), (0, 2, 0), (0, 0, 1))
    assert polygons.patch_to_polygon((0, 0, 0), (0, 0, 1), across) == pytest.approx(
        polygons.patch_to_polygon((0, 0, 0), (0, 0, 1), above)
    )


def test_reciprocity_and_closure():
    """A₁ F₁₂ = A₂ F₂₁, and the six faces of a cube see each other completely."""
    assert np.pi * vf.coaxial_discs(1, 2, 1.5) == pytest.approx(4 * np.pi * vf.coaxial_discs(2, 1, 1.5))
    cube = vf.parallel_rectangles(1, 1, 1) + 4 * vf.perpendicular_rectangles(1, 1)
    assert cube == pytest.approx(1.0, abs=1e-9)


@pytest.mark.parametrize("angle", [0, 35, 59, 61, 75, 90, 105, 119, 121, 180])
@pytest.mark.parametrize("distance", [1.2, 2.0, 6.0])
def test_sphere_by_its_silhouette(angle, distance):
    """A sphere fills the cone of its silhouette: the polygon formula cut at the horizon must agree (3600 corners)."""
    turn = np.linspace(0, 2 * np.pi, 3601)[:-1]
    up = np.array([0, np.sin(np.radians(angle)), np.cos(np.radians(angle))])
    size = 1 / np.sqrt(distance**2 - 1)
    circle = np.stack([size * np.cos(turn), size * np.sin(turn), np.ones(3600)], axis=1)
    assert vf.patch_to_sphere(1, distance, angle) == pytest.approx(
        polygons.patch_to_polygon((0, 0, 0), up, circle), abs=2e-6
    )


def test_sphere_to_disc_and_patch():
    """Half of what leaves a sphere meets an endless plane; small discs by the inverse square; reciprocity."""
    assert vf.sphere_to_disc(1e9, 1.0) == pytest.approx(0.5)
    assert vf.sphere_to_disc(1e-3, 2.0) == pytest.approx(np.pi * 1e-6 / (4 * np.pi * 4), rel=1e-6)
    assert vf.sphere_to_patch(0.1, 2.0, 0.0, 1e-6) == pytest.approx(
        vf.sphere_to_disc(np.sqrt(1e-6 / np.pi), 2.0), rel=1e-6
    )
    with pytest.raises(InputError, match="larger than the radius"):
        vf.patch_to_sphere(2.0, 1.0)


def test_facing_rectangle_by_drawn_points():
    """The average of cos θ₁ cos θ₂ / π d² over 200 000 points of the rectangle, partly below the horizon."""
    rng = np.random.default_rng(1)
    for width, height, distance, surface, source in ((1, 2, 1, 30, 40), (2, 2, 0.8, 80, 20), (0.5, 0.3, 1, 0, 70)):
        s, t = np.radians([surface, source])
        x, y = rng.uniform(-width / 2, width / 2, 200_000), rng.uniform(-height / 2, height / 2, 200_000)
        place = np.stack([x * np.cos(t), y, distance + x * np.sin(t)], axis=1)
        away = np.linalg.norm(place, axis=1)
        here = np.clip(place @ [0, np.sin(s), np.cos(s)], 0, None) / away
        there = np.abs(place @ [-np.sin(t), 0, np.cos(t)]) / away
        drawn = width * height * float(np.mean(here * there / (np.pi * away**2)))
        assert vf.facing_rectangle(width, height, distance, surface, source) == pytest.approx(drawn, rel=0.01)


@pytest.mark.rows("f_geometry", "f_cam_")
def test_irradiance_behind_a_lens(row, expected):
    """The camera equation πL/(4F² + 1) is the disc of the lens at F times its diameter; ten printed digits."""
    number = float(re.search(r"F/#=([\d.]+)", row["inputs"]).group(1))
    radiance = float(Band.rectangular(8, 14).radiance(300.0))
    assert sent.disc_irradiance(radiance, 0.5, number) == pytest.approx(expected, rel=1e-9)


@pytest.mark.rows("f_geometry", "f_cos4_")
def test_natural_vignetting(row, expected):
    """cos⁴: a pixel's solid angle falls as cos³, and the lens is seen aslant."""
    angle = np.radians(values(row)["theta"])
    frame, view = (480, 640), (100.0, 80.0)
    x = 320 + focal_px(frame, view)[0] * np.tan(angle)
    ratio = pixel_solid_angle_sr(frame, view, x, 240.0) / pixel_solid_angle_sr(frame, view, 320.0, 240.0)
    assert float(ratio) * np.cos(angle) == pytest.approx(expected, rel=1e-12)


def test_rectangle_near_and_far():
    """Far away the inverse square holds; close by an endless wall sends π L and no more."""
    assert sent.rectangle_irradiance(50.0, 0.1, 0.1, 3.0, 30.0, 40.0) == pytest.approx(
        sent.irradiance(50.0, 0.01, 3.0, 30.0, 40.0), rel=2e-3
    )
    assert sent.rectangle_irradiance(50.0, 1e5, 1e5, 1.0) == pytest.approx(sent.exitance(50.0), rel=1e-6)


def test_small_source_far_away_is_the_polygon():
    source = rectangle((-0.05, -0.05, 2.0), (0.1, 0, 0), (0, 0.1, 0))
    exact = polygons.patch_to_polygon((0, 0, 0), (0, 0, 1), source)
    assert vf.small_source(0.01, 2.0, 0.0, 0.0) == pytest.approx(exact, rel=0.01)
    assert vf.small_source(0.01, 2.0, 95.0, 0.0) == 0.0
