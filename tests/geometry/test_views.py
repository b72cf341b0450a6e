"""View angle, range and footprint, and the pose of a rectangle."""

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.errors import PhysicsError
from thermfix.geometry.pose import pose_of_rectangle
from thermfix.geometry.rays import focal_px, pixel_solid_angle_sr, rays
from thermfix.geometry.views import (
    Imaging,
    constant_view,
    cylinder_view,
    mirror_direction_deg,
    plane_normal,
    plane_view,
    sphere_view,
)

FRAME, FOV = (240, 320), (25.0, 19.0)


def centres(frame=FRAME):
    y, x = np.indices(frame) + 0.5
    return x.ravel(), y.ravel()


def test_solid_angles_sum_to_the_field_of_view():
    """4 asin(sin(a/2) sin(b/2)) for the pyramid of full angles a and b (a textbook identity)."""
    total = pixel_solid_angle_sr(FRAME, FOV, *centres()).sum()
    a, b = np.radians(FOV)
    assert total == pytest.approx(4 * np.arcsin(np.sin(a / 2) * np.sin(b / 2)), rel=1e-5)


def test_rays_reach_the_edges_at_half_the_field_of_view():
    right = rays(FRAME, FOV, 320.0, 120.0)
    assert np.degrees(np.arctan2(right[0], right[2])) == pytest.approx(12.5)


def test_facing_plane():
    """Seen squarely the axis ray has 0°, the corner its own angle from the axis; the range grows as 1/cos."""
    x, y = centres()
    sight = plane_view(Imaging(frame=FRAME, field_of_view_deg=FOV, distance_m=2.0), x, y, 0.0, 0.0, (160, 120))
    away = np.degrees(np.arccos(rays(FRAME, FOV, x, y)[:, 2]))
    np.testing.assert_allclose(sight.angle_deg, away, atol=1e-6)
    np.testing.assert_allclose(sight.range_m, 2.0 / np.cos(np.radians(away)), rtol=1e-9)
    # The footprints tile the rectangle that the frame sees at 2 m.
    width, height = 4 * np.tan(np.radians(np.array(FOV) / 2))
    assert sight.area_m2.sum() == pytest.approx(width * height, rel=1e-5)


@pytest.mark.rows("i_spot", "i_ifov_")
def test_spot_of_three_by_three_pixels(row, expected):
    """Pixel pitch over focal length, times the distance; the field of view is that of 640 × 480 such pixels."""
    pitch, focal, away = map(float, re.search(r"pitch=(\d+) um; f=(\d+) mm; d=(\d+) m", row["inputs"]).groups())
    view = tuple(float(2 * np.degrees(np.arctan(count * pitch * 1e-3 / 2 / focal))) for count in (640, 480))
    imaging = Imaging(frame=(480, 640), field_of_view_deg=view, distance_m=away)
    area = constant_view(imaging, np.array([320.0]), np.array([240.0]), 0.0).area_m2[0]
    assert 3 * 1000 * np.sqrt(area) == pytest.approx(expected, rel=1e-9)


def test_parallel_rays_see_one_tilt():
    x, y = centres((10, 10))
    sight = plane_view(Imaging(frame=(10, 10)), x, y, 40.0, 90.0, (5, 5))
    np.testing.assert_allclose(sight.angle_deg, 40.0)
    assert sight.range_m is None
    assert sight.area_m2 is None


def test_plane_recedes_toward_its_azimuth():
    """Azimuth 0 = right: the right edge is farther and seen at a larger angle."""
    imaging = Imaging(frame=FRAME, field_of_view_deg=FOV, distance_m=3.0)
    sight = plane_view(imaging, np.array([20.0, 300.0]), np.array([120.0, 120.0]), 40.0, 0.0, (160, 120))
    assert sight.range_m[1] > 3.0 > sight.range_m[0]
    assert sight.angle_deg[1] > 40.0 > sight.angle_deg[0]
    down = plane_view(imaging, np.array([160.0, 160.0]), np.array([20.0, 220.0]), 40.0, 90.0, (160, 120))
    assert down.range_m[1] > 3.0 > down.range_m[0]


@pytest.mark.rows("f_geometry", "f_proj_")
def test_footprint_factor(row):
    """Lambert: the pixel's footprint grows as 1/cos θ, so a large even target stays equally bright."""
    angle, factor = map(float, re.search(r"theta=(\d+) deg; footprint factor=([\d.]+)", row["inputs"]).groups())
    imaging = Imaging(frame=FRAME, field_of_view_deg=FOV, distance_m=1.0)
    at, straight = (constant_view(imaging, np.array([160.0]), np.array([120.0]), a).area_m2[0] for a in (angle, 0.0))
    assert at / straight == pytest.approx(factor, abs=1e-6)


def test_cylinder_and_sphere():
    imaging = Imaging(frame=FRAME)
    x = np.array([100.0, 110.0, 119.9, 121.0])
    cylinder = cylinder_view(imaging, x, np.full(4, 50.0), ((100, 0), (100, 200)), 40.0, 0.0)
    np.testing.assert_allclose(cylinder.angle_deg[:3], np.degrees(np.arcsin([0, 0.5, 0.995])), atol=1e-6)
    assert np.isnan(cylinder.angle_deg[3])
    tilted = cylinder_view(imaging, x, np.full(4, 50.0), ((100, 0), (100, 200)), 40.0, 30.0)
    assert tilted.angle_deg[0] == pytest.approx(30.0)
    sphere = sphere_view(imaging, x, np.full(4, 50.0), (100, 50), 20.0)
    np.testing.assert_allclose(sphere.angle_deg, cylinder.angle_deg)


def hit(axis_range, radius, body, x, y):
    """Range and angle at which each line of sight truly meets a body whose axis or centre is straight ahead."""
    ways = rays(FRAME, FOV, x, y)
    flat = ways * [1, 0, 1] if body == "cylinder" else ways  # an upright cylinder is not narrower further up
    a, b = (flat**2).sum(axis=1), flat[:, 2] * axis_range
    away = (b - np.sqrt(b**2 - a * (axis_range**2 - radius**2))) / a
    normal = (flat * away[:, None] - [0, 0, axis_range]) / radius
    return away, np.degrees(np.arccos(-(normal * ways).sum(axis=1)))


@pytest.mark.parametrize("body", ["cylinder", "sphere"])
def test_round_bodies_against_lines_of_sight_that_meet_them(body):
    """A body 144 px wide, 0.9 of its width seen: range within 0.5 %, area 1 %; angles by parallel rays (ruled) 1°."""
    axis_range, radius = 2.0, 0.2
    half = focal_px(FRAME, FOV)[0] * np.tan(np.arcsin(radius / axis_range))
    x, y = centres()
    across = np.hypot(x - 160, (y - 120) * (body == "sphere"))
    seen = (across < 0.9 * half) & (np.abs(y - 120) < 20 if body == "cylinder" else True)
    x, y = x[seen], y[seen]
    away, angle = hit(axis_range, radius, body, x, y)
    imaging = Imaging(frame=FRAME, field_of_view_deg=FOV, distance_m=axis_range - radius)
    if body == "cylinder":
        sight = cylinder_view(imaging, x, y, ((160, 0), (160, 240)), 2 * half, 0.0)
    else:
        sight = sphere_view(imaging, x, y, (160, 120), half)
    np.testing.assert_allclose(sight.range_m, away, rtol=5e-3)
    steep = angle > 5  # straight on, the height of a pixel over the axis counts for more than its place across
    np.testing.assert_allclose(sight.angle_deg[steep], angle[steep], atol=1.5 if body == "cylinder" else 1.0)
    exact = away**2 * pixel_solid_angle_sr(FRAME, FOV, x, y) / np.cos(np.radians(angle))
    assert sight.area_m2.sum() == pytest.approx(exact.sum(), rel=0.01)
    assert np.ptp(away) > 0.1  # a range of one number for all would miss by 5 %


def test_round_body_that_would_reach_the_camera_has_one_range():
    imaging = Imaging(frame=FRAME, field_of_view_deg=(120.0, 100.0), distance_m=2.0)
    sight = sphere_view(imaging, np.array([160.0, 200.0]), np.array([120.0, 120.0]), (160, 120), 5000.0)
    np.testing.assert_allclose(sight.range_m, 2.0)


def turn(axis, degrees):
    x, y, z = np.array(axis) / np.linalg.norm(axis)
    cross = np.array([[0, -z, y], [z, 0, -x], [-y, x, 0]])
    a = np.radians(degrees)
    return np.eye(3) + np.sin(a) * cross + (1 - np.cos(a)) * cross @ cross


def corners_of(rotation, centre, size):
    w, h = size[0] / 2, size[1] / 2
    points = np.array([[-w, -h, 0], [w, -h, 0], [w, h, 0], [-w, h, 0]]) @ rotation.T + centre
    return points[:, :2] / points[:, 2:] * focal_px(FRAME, FOV) + [FRAME[1] / 2, FRAME[0] / 2]


@given(st.floats(10, 60), st.floats(-180, 180), st.floats(-25, 25), st.floats(2.5, 6))
@settings(max_examples=60)
def test_known_pose_is_recovered(tilt, azimuth, roll, away):
    """Exact corners: tilt and azimuth to 0.01°, range to 1e-4; far within the 1° asked for."""
    a = np.radians(azimuth)
    rotation = turn([np.sin(a), -np.cos(a), 0], tilt) @ turn([0, 0, 1], roll)
    centre = np.array([0.1, -0.05, away])
    pose = pose_of_rectangle(FRAME, FOV, tuple(map(tuple, corners_of(rotation, centre, (0.8, 0.6)))), (0.8, 0.6))
    assert np.degrees(np.arccos(np.clip(-rotation[:, 2] @ pose.normal, -1, 1))) < 0.01
    assert pose.tilt_deg == pytest.approx(tilt, abs=0.01)
    assert pose.range_m == pytest.approx(float(np.linalg.norm(centre)), rel=1e-4)
    assert pose.rms_px < 1e-6


def test_noisy_corners_give_the_tilt_within_their_uncertainty():
    """200 random poses, tilts 0–60°, corners off by 0.3 px: 98 in 100 within 1°, and the stated u is honest.

    u is stated for 0.5 px; scaled to 0.3 px, errors over u must have an rms near 1 (200 trials: ± 0.1).
    """
    rng = np.random.default_rng(2)
    errors, ratios = [], []
    for _ in range(200):
        tilt, a = rng.uniform(0, 60), rng.uniform(-np.pi, np.pi)
        rotation = turn([np.sin(a), -np.cos(a), 0], tilt) @ turn([0, 0, 1], rng.uniform(-25, 25))
        centre = np.array([*rng.uniform(-0.05, 0.05, 2), rng.uniform(2.1, 2.8)])
        exact = corners_of(rotation, centre, (0.8, 0.6))
        pose = pose_of_rectangle(FRAME, FOV, tuple(map(tuple, exact + rng.normal(0, 0.3, (4, 2)))), (0.8, 0.6))
        errors.append(pose.tilt_deg - tilt)
        ratios.append(errors[-1] / (0.6 * pose.u_tilt_deg))
        assert pose.range_m == pytest.approx(float(np.linalg.norm(centre)), rel=0.01)
    assert np.mean(np.abs(errors) < 1.0) >= 0.98
    assert np.sqrt(np.mean(np.square(ratios))) == pytest.approx(1.0, abs=0.2)


SQUARE = ((100.0, 80.0), (200.0, 80.0), (200.0, 160.0), (100.0, 160.0))


@pytest.mark.parametrize("corners", [
    SQUARE[::-1],
    (SQUARE[0], SQUARE[2], SQUARE[1], SQUARE[3]),
    (SQUARE[0], SQUARE[0], SQUARE[2], SQUARE[3]),
    ((100, 80), (200, 80), (150, 81), (100, 160)),
])  # fmt: skip
def test_corners_that_are_no_rectangle_are_refused(corners):
    with pytest.raises(PhysicsError, match="rectangle"):
        pose_of_rectangle(FRAME, FOV, corners, (0.8, 0.6))


def test_wrong_proportion_is_refused():
    """A square image of a 3:1 rectangle from the front would need a tilt that its own lines deny."""
    with pytest.raises(PhysicsError, match=r"miss a rectangle|no pose"):
        pose_of_rectangle(FRAME, FOV, ((60, 40), (260, 40), (260, 220), (60, 220)), (3.0, 0.5))


def test_mirror_direction():
    """A plane turned by 30° to the right mirrors from 60° to that side; one squarely seen mirrors the camera."""
    straight = np.array([0.0, 0.0, 1.0])
    assert mirror_direction_deg(straight, plane_normal(0.0, 0.0)) == pytest.approx((0.0, 0.0))
    across, up = mirror_direction_deg(straight, plane_normal(30.0, 0.0))
    assert (across, up) == pytest.approx((60.0, 0.0))
    across, up = mirror_direction_deg(straight, plane_normal(20.0, 90.0))
    assert (across, up) == pytest.approx((0.0, -40.0))
