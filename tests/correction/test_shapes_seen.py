"""Round, tilted and small surfaces: the truth comes back where the plain reading is off."""

import numpy as np
import pytest

from thermfix.correction import Instrument, make_plan, run
from thermfix.errors import InputError
from thermfix.geometry.point_spread import rectangle_share
from thermfix.model import (
    Angular,
    Camera,
    CornersView,
    CylinderView,
    Ellipse,
    Estimate,
    Frame,
    Material,
    Point,
    Polygon,
    Rectangle,
    Region,
    SphereView,
)
from thermfix.radiometry import Band
from thermfix.radiometry.fresnel import directional_emissivity

BAND = Band.rectangular(8, 14)
KELVIN = 273.15
GLAZE = Material(name="glaze", emissivity=Estimate(value=0.9, u=0.02), angular=Angular.DIELECTRIC)


def camera(**given):
    return Camera(band_um=(8.0, 14.0), noise_k=0.05, accuracy_k=1.0, **given)


def corrected(scene, region, stored, cam, materials=None, **asked):
    plan = make_plan(Instrument(cam), Frame(file="x", scene=scene, regions=(region,)), stored.shape, materials)
    return run(plan, stored, pixels=True, **asked)


def seen_from(angle_deg, surface_k, reflected_k):
    """Apparent temperature of a dielectric surface at each view angle. [°C]."""
    emissivity = directional_emissivity(0.9, angle_deg, "dielectric")
    signal = emissivity * BAND.radiance(surface_k) + (1 - emissivity) * BAND.radiance(reflected_k)
    return BAND.temperature(signal) - KELVIN


@pytest.mark.parametrize("body", ["sphere", "cylinder"])
def test_round_body_from_rim_to_centre(body, scene_of):
    """A 70 °C body before a −20 °C sky: even within 0.05 K out to 75°, where the plain reading falls by over 9 K."""
    y, x = np.indices((120, 160)) + 0.5
    t = np.hypot(x - 80, y - 60) / 45 if body == "sphere" else np.abs(x - 80) / 45
    angle = np.degrees(np.arcsin(np.clip(t, 0, 0.99999)))
    stored = seen_from(angle, 343.15, 253.15)
    view = (
        SphereView(centre=(80.0, 60.0), radius_px=45.0)
        if body == "sphere"
        else CylinderView(axis=((80.0, 0.0), (80.0, 120.0)), width_px=90.0, tilt_deg=Estimate(value=0.0))
    )
    reach = 45 * np.sin(np.radians(75))
    shape = Ellipse(80, 60, reach, reach) if body == "sphere" else Rectangle(80 - reach, 20, 80 + reach, 100)
    region = Region(name="body", shape=shape, material="glaze", view=view)
    found = corrected(scene_of(reflected=-20.0), region, stored, camera(), {"glaze": GLAZE})
    surface = found.pixels[0].surface_k - KELVIN
    np.testing.assert_allclose(surface, 70.0, atol=0.05)
    assert np.ptp(stored[found.pixels[0].y, found.pixels[0].x]) > 9
    # The rim is less certain than the centre, and said so.
    angles = angle[found.pixels[0].y, found.pixels[0].x]
    u = found.pixels[0].u_k
    assert u[angles > 70].mean() > 1.5 * u[angles < 20].mean()


def test_no_reading_beyond_80_degrees(scene_of):
    stored = np.full((60, 60), 40.0)
    region = Region(
        name="ball",
        shape=Ellipse(30, 30, 25, 25),
        material="glaze",
        view=SphereView(centre=(30.0, 30.0), radius_px=25.0),
    )
    found = corrected(scene_of(), region, stored, camera(), {"glaze": GLAZE})
    away = np.hypot(found.pixels[0].x + 0.5 - 30, found.pixels[0].y + 0.5 - 30) / 25
    steep = away > np.sin(np.radians(80.01))
    assert np.isnan(found.pixels[0].surface_k[steep]).all()
    assert np.isfinite(found.pixels[0].surface_k[~steep & (away < np.sin(np.radians(79.9)))]).all()
    assert "missing-pixels" in {one.code for one in found.readings[0].cautions}


def test_plane_by_corners_knows_range_and_area(scene_of):
    """A 0.8 × 0.6 m door seen squarely at 3 m fills the frame as the field of view says; its area comes back."""
    cam = camera(field_of_view_deg=(25.0, 19.0))
    fx, fy = 160 / np.tan(np.radians(12.5)), 120 / np.tan(np.radians(9.5))
    w, h = 0.4 / 3 * fx, 0.3 / 3 * fy
    corners = ((160 - w, 120 - h), (160 + w, 120 - h), (160 + w, 120 + h), (160 - w, 120 + h))
    view = CornersView(corners=corners, size_m=(0.8, 0.6))
    region = Region(
        name="door",
        shape=Rectangle(160 - w, 120 - h, 160 + w, 120 + h),
        emissivity=Estimate(value=0.9, u=0.02),
        view=view,
    )
    reading = corrected(scene_of(), region, np.full((240, 320), 40.0), cam).readings[0]
    assert reading.distance_m == pytest.approx(3.0, rel=0.01)
    assert reading.area_m2 == pytest.approx(0.48, rel=0.02)
    exitance = np.pi * 0.9 * float(BAND.radiance(reading.surface_mean_k))
    assert reading.radiant_exitance_w_m2 == pytest.approx(exitance, rel=1e-3)
    assert reading.radiant_power_w == pytest.approx(exitance * reading.area_m2, rel=1e-3)


def test_corners_need_a_field_of_view(scene_of):
    view = CornersView(corners=((1, 1), (9, 1), (9, 9), (1, 9)), size_m=(1.0, 1.0))
    region = Region(name="door", shape=Rectangle(1, 1, 9, 9), view=view)
    with pytest.raises(InputError, match="field_of_view_deg"):
        corrected(scene_of(), region, np.full((20, 20), 40.0), camera())


def mixed(strip, hot_c, wall_c, sigma=0.7, shape=(60, 80), noise=0.0):
    x, y = np.meshgrid(np.arange(float(shape[1])), np.arange(float(shape[0])))
    share = rectangle_share(x, y, strip, sigma)
    signal = share * float(BAND.radiance(hot_c + KELVIN)) + (1 - share) * float(BAND.radiance(wall_c + KELVIN))
    stored = BAND.temperature(signal) - KELVIN
    return stored + noise * np.random.default_rng(4).standard_normal(stored.shape)


@pytest.mark.parametrize("shape", [Rectangle(40.3, 10, 42.8, 50), "polygon"])
def test_narrow_strip_60_k_above_its_wall(scene_of, shape):
    """2.5 pixels wide, ε = 1: within 1 K of the truth where the plain mean is off by more than 10 K."""
    if shape == "polygon":
        shape = Polygon(((40.3, 10), (42.8, 10), (42.8, 50), (40.3, 50)))
    stored = mixed((40.3, 10, 42.8, 50), 80.0, 20.0, noise=0.05)
    sure = Estimate(value=1.0, u=0.0)
    cam = camera(blur_px=Estimate(value=0.7, u=0.05))
    plain = corrected(scene_of(), Region(name="strip", shape=shape, emissivity=sure), stored, cam).readings[0]
    unmixed = corrected(
        scene_of(), Region(name="strip", shape=shape, emissivity=sure, small_target=True), stored, cam
    ).readings[0]
    assert plain.surface_mean_k - KELVIN < 70
    assert unmixed.surface_mean_k - KELVIN == pytest.approx(80.0, abs=1.0)
    assert {"under-resolved"} <= {one.code for one in unmixed.cautions}
    assert "under-resolved" in {one.code for one in plain.cautions}
    assert "camera: blur_px" in {row.name for row in unmixed.budget.rows}


def test_target_below_one_pixel_by_its_area(scene_of):
    """A 3 mm² joint 40 K above its board, at 2 m: found by how much it fills, not by its pixel."""
    cam = camera(blur_px=Estimate(value=0.7, u=0.05), field_of_view_deg=(25.0, 19.0))
    pitch = np.sqrt((np.tan(np.radians(12.5)) / 40) * (np.tan(np.radians(9.5)) / 30))  # 80 × 60 pixels
    side = np.sqrt(3e-6) / (2.0 * pitch)
    stored = mixed((40.5 - side / 2, 30.5 - side / 2, 40.5 + side / 2, 30.5 + side / 2), 65.0, 25.0)
    region = Region(
        name="joint",
        shape=Point(40.5, 30.5),
        emissivity=Estimate(value=1.0, u=0.0),
        small_target=True,
        true_area_mm2=Estimate(value=3.0, u=0.1),
    )
    reading = corrected(
        scene_of(distance_m=2.0, air=25.0, humidity_pct=1.0, co2_ppm=1.0), region, stored, cam
    ).readings[0]
    assert reading.apparent_mean_k - KELVIN < 40
    assert reading.surface_mean_k - KELVIN == pytest.approx(65.0, abs=1.0)
    assert "region joint: true_area_mm2" in {row.name for row in reading.budget.rows}


def test_small_targets_need_the_blur(scene_of):
    region = Region(name="strip", shape=Rectangle(10, 10, 12, 20), small_target=True)
    with pytest.raises(InputError, match="blur_px"):
        corrected(scene_of(), region, np.full((40, 40), 20.0), camera())
