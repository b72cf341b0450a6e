"""Length and width of what pixels cover, from planes of known size."""

import numpy as np
import pytest

from thermfix.geometry.measure import extent_m
from thermfix.geometry.rays import rays
from thermfix.geometry.views import Imaging, plane_view

FRAME, FOV, AWAY = (240, 320), (25.0, 19.0), 2.0
PIXEL = 2 * AWAY * np.tan(np.radians(12.5)) / 320


def seen(tilt_deg, inside):
    """Extent of the pixels whose surface points (right, down along a plane that recedes to the right) are inside."""
    imaging = Imaging(frame=FRAME, field_of_view_deg=FOV, distance_m=AWAY)
    y, x = (one.ravel() + 0.5 for one in np.indices(FRAME))
    sight = plane_view(imaging, x, y, tilt_deg, 0.0, (160.0, 120.0))
    places = rays(FRAME, FOV, x, y) * sight.range_m[:, None]
    tilt = np.radians(tilt_deg)
    across = (places - [0, 0, AWAY]) @ [np.cos(tilt), 0, np.sin(tilt)]
    chosen = inside(across, places[:, 1])
    return extent_m(places[chosen], sight.area_m2[chosen])


@pytest.mark.parametrize("turn", [0, 20, 45, 70])
@pytest.mark.parametrize(("length", "width"), [(0.3, 0.3), (0.32, 0.29), (0.4, 0.05)])
@pytest.mark.parametrize("tilt", [0.0, 40.0])
def test_rectangle_on_a_plane(turn, length, width, tilt):
    """Turned and tilted: within two pixels' footprints, for pixels are in or out by their centres."""
    a = np.radians(turn)

    def inside(x, y):
        along, across = x * np.cos(a) + y * np.sin(a), y * np.cos(a) - x * np.sin(a)
        return (np.abs(along) < length / 2) & (np.abs(across) < width / 2)

    step = 2 * PIXEL / np.cos(np.radians(tilt))
    assert seen(tilt, inside) == pytest.approx((length, width), abs=step)


def test_one_pixel_is_its_own_footprint():
    assert extent_m(np.array([[0.1, 0.2, 2.0]]), np.array([4e-6])) == pytest.approx((2e-3, 2e-3))


def test_a_row_of_pixels():
    row = np.stack([np.arange(10) * 3e-3, np.zeros(10), np.full(10, 2.0)], axis=1)
    assert extent_m(row, np.full(10, 9e-6)) == pytest.approx((30e-3, 3e-3))
